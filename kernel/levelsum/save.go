package main

import (
	"bytes"
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
	"strings"
	"syscall"

	"levelsum/kernel/notebook"
)

// A misuseError is one that the user can put right in the call or the file.
type misuseError struct{ text string }

func (e *misuseError) Error() string { return e.text }

func misused(format string, a ...any) error { return &misuseError{fmt.Sprintf(format, a...)} }

// readNotebook reads a notebook and says in words what else the name may be.
func readNotebook(file string) (*notebook.Document, error) {
	info, err := os.Stat(file)
	switch {
	case err != nil:
		if link, lerr := os.Readlink(file); lerr == nil && errors.Is(err, fs.ErrNotExist) {
			return nil, fmt.Errorf("%s: a symbolic link to %s, which is not there: %w", file, link, fs.ErrNotExist)
		}
		return notebook.Read(file) // which says the same of opening it
	case info.IsDir():
		return nil, misused("%s: a folder; name the notebooks in it, %s", file, filepath.Join(file, "*.ipynb"))
	case info.Mode().IsRegular() && info.Size() == 0:
		return nil, misused("%s: the file is empty, no notebook; take it back from a copy or make a new one in a front end", file)
	}
	return notebook.Read(file)
}

// A target is the file that a run writes.
type target struct {
	path   string
	before []byte // what it held before the run, nil if it was not there
}

// openTarget says before a run, which may be long, why its notebook could not
// be written. Own says that the target is the notebook itself.
func openTarget(path string, own bool) (target, error) {
	t := target{path: path}
	info, err := os.Stat(path)
	switch {
	case err == nil && info.Mode().Perm()&0o222 == 0:
		return t, misused("%s is read-only; make it writable first", path)
	case err == nil:
		if t.before, err = os.ReadFile(path); err != nil {
			return t, err
		}
		if _, err := notebook.Parse(path, t.before); err != nil && !own && len(t.before) > 0 {
			return t, misused("%s is there and is no notebook, so it is not written over", path)
		}
	case !errors.Is(err, fs.ErrNotExist):
		return t, err
	}
	return t, writable(path)
}

// writable says why no file could be put beside path.
func writable(path string) error {
	if real, err := filepath.EvalSymlinks(path); err == nil {
		path = real
	}
	dir := filepath.Dir(path)
	f, err := os.CreateTemp(dir, ".levelsum-*.part")
	switch {
	case errors.Is(err, fs.ErrNotExist):
		return misused("there is no folder %s", dir)
	case errors.Is(err, fs.ErrPermission), errors.Is(err, syscall.EROFS):
		return misused("the folder %s cannot be written in; choose another with -o", dir)
	case err != nil:
		return err
	}
	return errors.Join(f.Close(), os.Remove(f.Name()))
}

// save writes a document to its target. If it cannot, or if the file was
// changed since the run began, what the run gave goes to another file, and the
// error says which.
func (t target) save(d *notebook.Document) error {
	now, err := os.ReadFile(t.path)
	why := ""
	switch {
	case err == nil && bytes.Equal(now, d.Bytes()):
		return nil
	case err == nil && !bytes.Equal(now, t.before), err != nil && t.before != nil:
		why = t.path + " was changed by another program while the notebook ran, and is left as it is"
	default:
		if err := d.Write(t.path); err == nil {
			return nil
		} else {
			why = reason(t.path, err)
		}
	}
	base := strings.TrimSuffix(filepath.Base(t.path), ".ipynb")
	var last error
	for _, dir := range []string{filepath.Dir(t.path), os.TempDir()} {
		for n := 1; n < 1000; n++ {
			path := filepath.Join(dir, base+".unsaved.ipynb")
			if n > 1 {
				path = filepath.Join(dir, fmt.Sprintf("%s.unsaved-%d.ipynb", base, n))
			}
			old, err := os.ReadFile(path)
			if err == nil && !bytes.Equal(old, d.Bytes()) {
				continue
			}
			if last = d.Write(path); last == nil {
				return fmt.Errorf("%s; what the run gave is in %s", why, path)
			}
			break
		}
	}
	return fmt.Errorf("%s; what the run gave is lost, since it could not be written elsewhere either: %w", why, last)
}

// reason says why a file could not be written.
func reason(path string, err error) string {
	if errors.Is(err, syscall.ENOSPC) {
		return path + ": the disk is full; the old file is whole"
	}
	return fmt.Sprintf("%s could not be written, the old file is whole: %v", path, err)
}
