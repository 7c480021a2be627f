package compile

import (
	"encoding/json"
	"errors"
	"fmt"
	"io"
	"io/fs"
	"os"
	"path/filepath"
	"runtime"
	"slices"
)

// Types are the archives of a kit as the type checker needs them: no compiler
// and no linker need be there. They are safe for concurrent use.
type Types struct {
	Dir      string
	Manifest Manifest

	archives map[string]*Archive
}

// A Source is what gives type information: a [Kit], its [Types], a [Listing].
type Source interface {
	Lookup(path string) (io.ReadCloser, error)
	Paths() []string
}

// OpenTypes opens the archives of the kit in dir. The error is an
// [*Unavailable] if they do not serve this program.
func OpenTypes(dir string) (*Types, error) {
	data, err := os.ReadFile(filepath.Join(dir, manifestName))
	switch {
	case errors.Is(err, fs.ErrNotExist):
		return nil, &Unavailable{Reason: "cells cannot be compiled yet: nothing has been prepared for this levelsum", Do: "run levelsum install"}
	case err != nil:
		return nil, &Unavailable{Reason: "the compiled packages in " + dir + " cannot be read", Do: "run levelsum install", Err: err}
	}
	t := &Types{Dir: dir, archives: map[string]*Archive{}}
	if err := json.Unmarshal(data, &t.Manifest); err != nil || t.Manifest.Format != format {
		return nil, &Unavailable{Reason: "the compiled packages in " + dir + " are those of another levelsum", Do: "run levelsum install", Err: err}
	}
	m := &t.Manifest
	if m.GOOS != runtime.GOOS || m.GOARCH != runtime.GOARCH {
		return nil, &Unavailable{Reason: fmt.Sprintf("the compiled packages in %s are for %s/%s, this is %s/%s", dir, m.GOOS, m.GOARCH, runtime.GOOS, runtime.GOARCH), Do: "run levelsum install"}
	}
	if m.Go != runtime.Version() {
		return nil, &Unavailable{Reason: fmt.Sprintf("this levelsum was built with %s, its compiled packages with %s", runtime.Version(), m.Go), Do: "run install.sh again"}
	}
	missing := 0
	for _, a := range m.Archives {
		t.archives[a.Path] = a
		if !exists(t.file(a.Path)) {
			missing++
		}
	}
	if missing > 0 {
		return nil, &Unavailable{Reason: fmt.Sprintf("%d of the %d compiled packages are gone from %s", missing, len(m.Archives), dir), Do: "run levelsum install"}
	}
	return t, nil
}

// TypesHere finds type information for the running program without a compiled
// tier: that of its kit, or what the go command makes of its source, or of the
// module around the working folder, where that may be the standard library
// alone.
func TypesHere() (Source, error) {
	exe, err := os.Executable()
	if err != nil {
		return nil, err
	}
	dir, err := KitDir(exe)
	if err != nil {
		return nil, err
	}
	t, err := OpenTypes(dir)
	if err == nil {
		return t, nil
	}
	l := List(SourceOf(exe))
	if _, e := l.tools(); e != nil {
		return nil, err
	}
	return l, nil
}

// file is the path of a package's archive.
func (t *Types) file(path string) string {
	return filepath.Join(t.Dir, "pkg", filepath.FromSlash(path)+".a")
}

// Lookup opens the archive of a package, for the type information in it. It is
// the lookup function that go/importer wants.
func (t *Types) Lookup(path string) (io.ReadCloser, error) {
	if t.archives[path] == nil {
		return nil, fmt.Errorf("package %s is not among those that cells can use", path)
	}
	return os.Open(t.file(path))
}

// Paths lists the packages that cells may import, sorted.
func (t *Types) Paths() []string {
	var ps []string
	for _, a := range t.Manifest.Archives {
		if a.Import {
			ps = append(ps, a.Path)
		}
	}
	slices.Sort(ps)
	return ps
}

// Name returns the name that a package of the kit gives itself.
func (t *Types) Name(path string) (string, bool) {
	a := t.archives[path]
	if a == nil {
		return "", false
	}
	return a.Name, true
}
