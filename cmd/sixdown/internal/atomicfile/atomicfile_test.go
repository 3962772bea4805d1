package atomicfile

import (
	"errors"
	"io/fs"
	"os"
	"path/filepath"
	"testing"
)

// names returns what lies in a folder.
func names(t *testing.T, dir string) []string {
	t.Helper()
	entries, err := os.ReadDir(dir)
	if err != nil {
		t.Fatal(err)
	}
	var all []string
	for _, e := range entries {
		all = append(all, e.Name())
	}
	return all
}

func check(t *testing.T, path, want string) {
	t.Helper()
	got, err := os.ReadFile(path)
	if err != nil || string(got) != want {
		t.Errorf("%s holds %q, %v; want %q", path, got, err, want)
	}
}

func create(t *testing.T, path, text string) *File {
	t.Helper()
	f, err := Create(path)
	if err != nil {
		t.Fatal(err)
	}
	if _, err := f.WriteString(text); err != nil {
		t.Fatal(err)
	}
	return f
}

func TestCommit(t *testing.T) {
	dir := t.TempDir()
	path := filepath.Join(dir, "answer*.txt") // a star in the name is no pattern
	if os.PathSeparator == '\\' {
		path = filepath.Join(dir, "answer.txt") // Windows has no stars in names
	}
	for _, text := range []string{"first", "second"} {
		f := create(t, path, text)
		if err := f.Commit(); err != nil {
			t.Fatal(err)
		}
		check(t, path, text)
		if all := names(t, dir); len(all) != 1 {
			t.Errorf("the folder holds %v", all)
		}
		if err := f.Abort(); err != nil {
			t.Errorf("Abort after Commit: %v", err)
		}
		check(t, path, text)
		if err := f.Commit(); !errors.Is(err, fs.ErrClosed) {
			t.Errorf("a second Commit: %v", err)
		}
	}
}

func TestAbort(t *testing.T) {
	dir := t.TempDir()
	path := filepath.Join(dir, "answer.txt")
	if err := create(t, path, "half").Abort(); err != nil {
		t.Fatal(err)
	}
	if all := names(t, dir); len(all) != 0 {
		t.Errorf("the folder holds %v", all)
	}
	if err := os.WriteFile(path, []byte("old"), 0o600); err != nil {
		t.Fatal(err)
	}
	f := create(t, path, "half")
	check(t, path, "old") // until Commit
	if err := f.Abort(); err != nil {
		t.Fatal(err)
	}
	check(t, path, "old")
}

// TestModeStays: who has closed a file to others does not find it open after it is written again.
func TestModeStays(t *testing.T) {
	if os.PathSeparator == '\\' {
		return // Windows has no such modes
	}
	path := filepath.Join(t.TempDir(), "answer.txt")
	if err := os.WriteFile(path, []byte("old"), 0o600); err != nil {
		t.Fatal(err)
	}
	if err := create(t, path, "new").Commit(); err != nil {
		t.Fatal(err)
	}
	info, err := os.Stat(path)
	if err != nil || info.Mode().Perm() != 0o600 {
		t.Errorf("mode is %v, %v; want 0600", info.Mode(), err)
	}
}

// TestLinkStays: a link goes on pointing to the file that is replaced.
func TestLinkStays(t *testing.T) {
	dir := t.TempDir()
	target, link := filepath.Join(dir, "target.txt"), filepath.Join(dir, "link.txt")
	if err := os.WriteFile(target, []byte("old"), 0o644); err != nil {
		t.Fatal(err)
	}
	if err := os.Symlink(target, link); err != nil {
		return // links need a privilege on Windows
	}
	if !Same(target, link) {
		t.Error("a link and its file are not the same")
	}
	if err := create(t, link, "new").Commit(); err != nil {
		t.Fatal(err)
	}
	check(t, target, "new")
	if info, err := os.Lstat(link); err != nil || info.Mode()&fs.ModeSymlink == 0 {
		t.Errorf("the link is now %v, %v", info.Mode(), err)
	}
}

func TestCreateFails(t *testing.T) {
	dir := t.TempDir()
	for _, path := range []string{dir, filepath.Join(dir, "none", "answer.txt")} {
		if f, err := Create(path); err == nil || f != nil {
			t.Errorf("%s: no error", path)
		}
	}
	if all := names(t, dir); len(all) != 0 {
		t.Errorf("the folder holds %v", all)
	}
}

func TestSame(t *testing.T) {
	dir := t.TempDir()
	a, b := filepath.Join(dir, "a"), filepath.Join(dir, "b")
	for _, path := range []string{a, b} {
		if err := os.WriteFile(path, []byte("same text"), 0o644); err != nil {
			t.Fatal(err)
		}
	}
	if !Same(a, filepath.Join(dir, ".", "a")) || Same(a, b) || Same(a, filepath.Join(dir, "none")) || Same(filepath.Join(dir, "none"), a) {
		t.Error("Same is wrong about a, b or a file that is not there")
	}
}
