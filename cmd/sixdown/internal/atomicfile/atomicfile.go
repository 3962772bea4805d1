// Package atomicfile writes files that are whole or not there: what is written goes to a temporary file in the
// same folder, and takes the wanted name when it is complete.
package atomicfile

import (
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
	"strings"
)

// A File is being written. It must end with Commit or Abort.
type File struct {
	*os.File
	path string // "": ended
}

// Create begins to write the file at path, whose folder must exist. Nothing stands at path, or what stood there
// stays, until Commit. It fails where path is a folder or another thing that cannot be replaced.
func Create(path string) (*File, error) {
	info, err := os.Stat(path)
	switch {
	case err == nil && info.IsDir():
		return nil, &fs.PathError{Op: "create", Path: path, Err: errors.New("it is a folder")}
	case err == nil && !info.Mode().IsRegular():
		return nil, &fs.PathError{Op: "create", Path: path, Err: errors.New("it is not an ordinary file")}
	case err != nil && !errors.Is(err, fs.ErrNotExist):
		return nil, err
	}
	if err == nil {
		// A link is followed, so that what it points to is replaced and not the link.
		if path, err = filepath.EvalSymlinks(path); err != nil {
			return nil, err
		}
	}
	// A pattern must not have a star of the user's in it.
	f, err := os.CreateTemp(filepath.Dir(path), "."+strings.ReplaceAll(filepath.Base(path), "*", "_")+".part-*")
	if err != nil {
		return nil, err
	}
	// CreateTemp keeps others from reading; an answer is an ordinary file.
	mode := fs.FileMode(0o644)
	if info != nil {
		mode = info.Mode().Perm()
	}
	if err := f.Chmod(mode); err != nil {
		return nil, errors.Join(err, f.Close(), os.Remove(f.Name()))
	}
	return &File{File: f, path: path}, nil
}

// Commit completes the file and gives it its name, replacing what stood there. On failure nothing is left
// behind, and what stood there stays.
func (f *File) Commit() error {
	if f.path == "" {
		return fmt.Errorf("commit %s: %w", f.Name(), fs.ErrClosed)
	}
	path := f.path
	f.path = ""
	// Without Sync some file systems may, after a power cut, show the new name with nothing in it.
	err := f.Sync()
	err = errors.Join(err, f.Close())
	if err == nil {
		err = os.Rename(f.Name(), path)
	}
	if err != nil {
		return errors.Join(err, os.Remove(f.Name()))
	}
	return nil
}

// Abort takes away what was written. After Commit it does nothing, so that it can be deferred.
func (f *File) Abort() error {
	if f.path == "" {
		return nil
	}
	f.path = ""
	return errors.Join(f.Close(), os.Remove(f.Name()))
}

// Same reports whether two paths lead to the same existing file, so that an output would overwrite an input.
func Same(a, b string) bool {
	ai, err := os.Stat(a)
	if err != nil {
		return false
	}
	bi, err := os.Stat(b)
	return err == nil && os.SameFile(ai, bi)
}
