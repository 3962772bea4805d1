package cli

import (
	"bytes"
	"encoding/json"
	"os"
	"path/filepath"
	"strings"
	"testing"
)

// run runs the program and returns what it prints and its exit code.
func run(stdin string, args ...string) (stdout, stderr string, code int) {
	var out, err bytes.Buffer
	code = Main(args, strings.NewReader(stdin), &out, &err)
	return out.String(), err.String(), code
}

// runJSON runs the program with --json and reads its one document into v. It fails unless that is all there is.
func runJSON(t testing.TB, v any, args ...string) {
	t.Helper()
	stdout, stderr, code := run("", append(args, "--json")...)
	if code != exitDone || stderr != "" {
		t.Fatalf("sixdown %s: exit code %d, %s", strings.Join(args, " "), code, stderr)
	}
	if err := json.Unmarshal([]byte(stdout), v); err != nil {
		t.Fatalf("sixdown %s: %v", strings.Join(args, " "), err)
	}
}

// writeFile writes a file in a folder of the test's own and returns its path.
func writeFile(t testing.TB, name, text string) string {
	t.Helper()
	path := filepath.Join(t.TempDir(), name)
	if err := os.WriteFile(path, []byte(text), 0o644); err != nil {
		t.Fatal(err)
	}
	return path
}
