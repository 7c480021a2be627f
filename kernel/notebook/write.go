package notebook

import (
	"bytes"
	"errors"
	"io/fs"
	"os"
	"path/filepath"
)

// Write writes the document to a file: whole into a new file beside it, which
// then takes its name, so that at every moment the name holds the old document
// or the new one. A file that holds the same bytes already is left alone, a
// symbolic link stays one, and permissions are kept.
func (d *Document) Write(path string) error {
	data := d.Bytes()
	if target, err := filepath.EvalSymlinks(path); err == nil {
		path = target
	}
	mode := fs.FileMode(0o644)
	old, err := os.ReadFile(path)
	switch {
	case err == nil && bytes.Equal(old, data):
		return nil
	case err == nil:
		info, err := os.Stat(path)
		if err != nil {
			return err
		}
		mode = info.Mode().Perm()
	case !errors.Is(err, fs.ErrNotExist):
		return err
	}
	f, err := os.CreateTemp(filepath.Dir(path), "."+filepath.Base(path)+".*.part")
	if err != nil {
		return err
	}
	_, err = f.Write(data)
	err = errors.Join(err, f.Chmod(mode), f.Sync(), f.Close())
	if err == nil {
		err = os.Rename(f.Name(), path)
	}
	if err != nil {
		return errors.Join(err, os.Remove(f.Name()))
	}
	return nil
}
