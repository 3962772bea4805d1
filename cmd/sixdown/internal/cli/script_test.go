package cli

import (
	"bytes"
	"errors"
	"flag"
	"os"
	"os/exec"
	"path/filepath"
	"strconv"
	"testing"

	"github.com/rogpeppe/go-internal/testscript"
	"github.com/rogpeppe/go-internal/txtar"
)

var update = flag.Bool("update", false, "rewrite the goldens in the scripts")

// TestMain lets the scripts run this test binary as the program.
func TestMain(m *testing.M) {
	testscript.Main(m, map[string]func(){
		"sixdown": func() { os.Exit(Main(os.Args[1:], os.Stdin, os.Stdout, os.Stderr)) },
	})
}

// TestScripts runs the scripts of testdata/script: what a user types, and all that he sees.
func TestScripts(t *testing.T) {
	testscript.Run(t, testscript.Params{
		Dir:                 "testdata/script",
		UpdateScripts:       *update,
		RequireExplicitExec: true,
		RequireUniqueNames:  true,
		Cmds:                map[string]func(*testscript.TestScript, bool, []string){"exits": exits, "chop": chop},
	})
}

// exits is the script command "exits CODE PROGRAM ARG...": exec, with the exit code that it must end with.
func exits(ts *testscript.TestScript, neg bool, args []string) {
	if neg || len(args) < 2 {
		ts.Fatalf("usage: exits CODE PROGRAM ARG...")
	}
	want, err := strconv.Atoi(args[0])
	ts.Check(err)
	code := 0
	err = ts.Exec(args[1], args[2:]...)
	if exit, ok := errors.AsType[*exec.ExitError](err); ok {
		code = exit.ExitCode()
	} else {
		ts.Check(err)
	}
	if code != want {
		ts.Fatalf("exit code is %d, want %d", code, want)
	}
}

// chop is the script command "chop FILE": it takes the last line end away, which a file in a script always has.
func chop(ts *testscript.TestScript, neg bool, args []string) {
	if neg || len(args) != 1 {
		ts.Fatalf("usage: chop FILE")
	}
	path := ts.MkAbs(args[0])
	src, err := os.ReadFile(path)
	ts.Check(err)
	ts.Check(os.WriteFile(path, bytes.TrimSuffix(src, []byte("\n")), 0o644))
}

// TestEveryFaultHasAScript holds the scripts to the faults that the reader of design files is tested with: each
// of them is in a script, so that its message is shown as the user sees it.
func TestEveryFaultHasAScript(t *testing.T) {
	faults, err := filepath.Glob("../../../../xover/testdata/bad/*.toml")
	if err != nil || len(faults) == 0 {
		t.Fatalf("no faults: %v", err)
	}
	scripts, err := filepath.Glob("testdata/script/design_*.txtar")
	if err != nil || len(scripts) == 0 {
		t.Fatalf("no scripts: %v", err)
	}
	files := map[string]string{}
	for _, path := range scripts {
		a, err := txtar.ParseFile(path)
		if err != nil {
			t.Fatal(err)
		}
		for _, f := range a.Files {
			files[f.Name] = string(f.Data)
		}
	}
	for _, path := range faults {
		src, err := os.ReadFile(path)
		if err != nil {
			t.Fatal(err)
		}
		name := filepath.Base(path)
		switch shown, ok := files[name]; {
		case !ok:
			t.Errorf("%s is in no script", name)
		// A file in a script ends with a line end, whatever it is made from.
		case shown != string(src) && shown != string(src)+"\n":
			t.Errorf("%s differs from what the script shows", name)
		}
	}
}
