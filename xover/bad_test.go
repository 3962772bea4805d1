package xover

import (
	"errors"
	"flag"
	"os"
	"path/filepath"
	"strings"
	"testing"
)

var update = flag.Bool("update", false, "rewrite the expected messages")

// TestBadFiles reads each file of testdata/bad, which is named for its fault, and compares all that is said
// about it with the text beside it.
func TestBadFiles(t *testing.T) {
	files, err := filepath.Glob("testdata/bad/*.toml")
	if err != nil || len(files) == 0 {
		t.Fatalf("no bad files: %v", err)
	}
	for _, path := range files {
		name := filepath.Base(path)
		t.Run(strings.TrimSuffix(name, ".toml"), func(t *testing.T) {
			d, warnings, err := Parse(name, readFile(t, path))
			if d != nil || warnings != nil {
				t.Error("a bad file gave a design or warnings")
			}
			all, ok := errors.AsType[Errors](err)
			if !ok {
				t.Fatalf("error is a %T, want Errors", err)
			}
			checkErrors(t, all, readFile(t, path))
			wanted := strings.TrimSuffix(path, ".toml") + ".want"
			got := all.Error() + "\n"
			if *update {
				if err := os.WriteFile(wanted, []byte(got), 0o644); err != nil {
					t.Fatal(err)
				}
			}
			if want := string(readFile(t, wanted)); got != want {
				t.Errorf("got\n%swant\n%s", got, want)
			}
		})
	}
}

// checkErrors checks what holds for every error: it stands inside the file, they are sorted, and each is one
// line of two halves.
func checkErrors(t *testing.T, all Errors, src []byte) {
	t.Helper()
	if len(all) == 0 || len(all) > MaxErrors {
		t.Errorf("%d errors", len(all))
	}
	lines := strings.Split(strings.TrimPrefix(string(src), "\ufeff"), "\n")
	for i, e := range all {
		if i > 0 && comparePositions(all[i-1].Pos, e.Pos) > 0 {
			t.Errorf("%v comes after %v", e, all[i-1])
		}
		if e.What == "" || e.Mend == "" || strings.ContainsAny(e.Error(), "\n\r") {
			t.Errorf("%q is not one line that says what and how to mend it", e)
		}
		if e.Pos == (Position{}) {
			continue
		}
		if e.Pos.Line < 1 || e.Pos.Line > len(lines) || e.Pos.Column < 1 || e.Pos.Column > len([]rune(lines[e.Pos.Line-1]))+1 {
			t.Errorf("%v stands outside the file", e)
		}
	}
}

func readFile(t testing.TB, path string) []byte {
	t.Helper()
	src, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	return src
}
