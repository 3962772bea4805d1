package cli

import (
	"encoding/json"
	"errors"
	"io"
	"os"
	"os/exec"
	"path/filepath"
	"slices"
	"strings"
	"testing"
)

// rooms says what each library room may import beside the standard library: other rooms by their full path,
// modules by theirs. Arrows run one way, audioio to sim to xover; a new room must say here what it stands on.
func rooms() map[string][]string {
	const (
		goAudio = "github.com/go-audio"
		gonum   = "gonum.org/v1/gonum"
		toml    = "github.com/pelletier/go-toml/v2"
	)
	return map[string][]string{
		"sixdown/xover":            {"sixdown/xover/quantity", toml},
		"sixdown/xover/quantity":   {},
		"sixdown/xover/preferred":  {"sixdown/xover/quantity", toml},
		"sixdown/xover/align":      {},
		"sixdown/xover/tone":       {"embed"}, // its templates
		"sixdown/xover/ladder":     {"sixdown/xover/align"},
		"sixdown/sim/circuit":      {gonum, "golang.org/x/sys/cpu"},
		"sixdown/sim/driver":       {gonum},
		"sixdown/sim/field":        {"sixdown/sim/driver"},
		"sixdown/sim":              {"sixdown/xover", "sixdown/xover/quantity", "sixdown/xover/align", "sixdown/sim/circuit", "sixdown/sim/driver", "sixdown/sim/field", gonum},
		"sixdown/sim/tune":         {"sixdown/xover", "sixdown/xover/quantity", "sixdown/xover/preferred", "sixdown/sim", "sixdown/sim/circuit", "sixdown/sim/driver", "sixdown/sim/field", "sixdown/sim/spread"},
		"sixdown/sim/scout":        {"sixdown/xover", "sixdown/xover/align", "sixdown/xover/ladder", "sixdown/xover/quantity", "sixdown/xover/preferred", "sixdown/sim", "sixdown/sim/tune"},
		"sixdown/sim/spread":       {"sixdown/xover", "sixdown/sim", "sixdown/sim/circuit"},
		"sixdown/audioio/wavfile":  {goAudio},
		"sixdown/audioio/signal":   {},
		"sixdown/audioio/discrete": {"sixdown/sim/circuit"},
		"sixdown/audioio/measure":  {gonum},
		"sixdown/audioio": {"sixdown/sim", "sixdown/sim/circuit", "sixdown/audioio/wavfile", "sixdown/audioio/signal",
			"sixdown/audioio/discrete", "sixdown/audioio/measure", goAudio},
	}
}

// outside is what no library room imports directly: they print nothing, read no flags, files, environment or
// clock, never exit, and do no tricks with memory. Files reach them as io.Reader and io.Writer.
func outside() []string {
	return []string{"os", "flag", "log", "net", "time", "syscall", "unsafe", "plugin", "embed", "path/filepath", "runtime/debug", "testing"}
}

// A listedPackage is what the go command says of a package.
type listedPackage struct {
	ImportPath string
	Doc        string
	Standard   bool
	Imports    []string
	Deps       []string
}

// listPackages asks the go command about packages of this module.
func listPackages(t *testing.T, patterns ...string) []listedPackage {
	t.Helper()
	goTool, err := exec.LookPath("go")
	if err != nil {
		skipWithout(t, "the go command")
	}
	cmd := exec.Command(goTool, append([]string{"list", "-json=ImportPath,Doc,Standard,Imports,Deps"}, patterns...)...)
	cmd.Dir = moduleRoot(t)
	cmd.Stderr = os.Stderr
	out, err := cmd.Output()
	if err != nil {
		t.Fatal(err)
	}
	var all []listedPackage
	for d := json.NewDecoder(strings.NewReader(string(out))); ; {
		var p listedPackage
		if err := d.Decode(&p); errors.Is(err, io.EOF) {
			break
		} else if err != nil {
			t.Fatal(err)
		}
		all = append(all, p)
	}
	if len(all) == 0 {
		t.Fatal("no packages")
	}
	return all
}

// skipWithout skips a test that needs an external program, but not where everything must be there.
func skipWithout(t *testing.T, what string) {
	t.Helper()
	if os.Getenv("CI") != "" {
		t.Fatalf("%s is missing", what)
	}
	t.Skipf("%s is missing", what)
}

// moduleRoot returns the folder of go.mod.
func moduleRoot(t *testing.T) string {
	t.Helper()
	dir, err := os.Getwd()
	if err != nil {
		t.Fatal(err)
	}
	for {
		if _, err := os.Stat(filepath.Join(dir, "go.mod")); err == nil {
			return dir
		}
		if dir == filepath.Dir(dir) {
			t.Fatal("no go.mod above the test")
		}
		dir = filepath.Dir(dir)
	}
}

// under reports whether a path is one of these or lies below one.
func under(path string, roots []string) bool {
	return slices.ContainsFunc(roots, func(r string) bool { return path == r || strings.HasPrefix(path, r+"/") })
}

func TestArrowsRunOneWay(t *testing.T) {
	allowed := rooms()
	standard := map[string]bool{}
	for _, p := range listPackages(t, "std") {
		standard[p.ImportPath] = true
	}
	for _, p := range listPackages(t, "./...") {
		if p.Doc == "" {
			t.Errorf("%s has no package comment", p.ImportPath)
		}
		if under(p.ImportPath, []string{"sixdown/cmd"}) {
			continue
		}
		may, known := allowed[p.ImportPath]
		if !known {
			t.Errorf("%s is not among the rooms; say in this test what it may import", p.ImportPath)
			continue
		}
		delete(allowed, p.ImportPath)
		var modules []string
		for _, m := range may {
			if !strings.HasPrefix(m, "sixdown/") {
				modules = append(modules, m)
			}
		}
		for _, i := range p.Imports {
			switch {
			case standard[i]:
				if under(i, outside()) && !slices.Contains(may, i) {
					t.Errorf("%s imports %s, which a library room must not", p.ImportPath, i)
				}
			case !slices.Contains(may, i) && !under(i, modules):
				t.Errorf("%s imports %s, against the arrows", p.ImportPath, i)
			}
		}
	}
	for room := range allowed {
		t.Errorf("%s is among the rooms and not in the module; take it out of this test", room)
	}
}

// TestNoWayBack looks at all that a room needs, to any depth: nothing of a room above it.
func TestNoWayBack(t *testing.T) {
	above := map[string][]string{
		"sixdown/xover":   {"sixdown/sim", "sixdown/audioio", "sixdown/cmd"},
		"sixdown/sim":     {"sixdown/audioio", "sixdown/cmd"},
		"sixdown/audioio": {"sixdown/cmd"},
	}
	for _, p := range listPackages(t, "./...") {
		for room, forbidden := range above {
			if !under(p.ImportPath, []string{room}) {
				continue
			}
			for _, d := range p.Deps {
				if under(d, forbidden) {
					t.Errorf("%s needs %s", p.ImportPath, d)
				}
			}
		}
	}
}
