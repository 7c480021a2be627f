package compile

import (
	"context"
	"fmt"
	"io"
	"os"
	"sync"
)

// A Listing serves the archives of packages as the go command makes them, on
// demand: what a [Kit] does, without one, for tests and for a levelsum whose
// kit is not prepared. It cannot build. It is safe for concurrent use.
type Listing struct {
	source string
	tools  func() (*toolchain, error)
	paths  func() ([]string, error)

	mu    sync.Mutex // guards files
	files map[string]string
}

// List makes a listing of the module whose source is in a folder; an empty name
// means the working folder.
func List(source string) *Listing {
	l := &Listing{source: source, files: map[string]string{}}
	l.tools = sync.OnceValues(func() (*toolchain, error) { return find(context.Background(), source) })
	l.paths = sync.OnceValues(func() ([]string, error) {
		t, err := l.tools()
		if err != nil {
			return nil, err
		}
		return t.importable(context.Background(), source)
	})
	return l
}

// Lookup compiles a package if need be and opens its archive.
func (l *Listing) Lookup(path string) (io.ReadCloser, error) {
	l.mu.Lock()
	defer l.mu.Unlock()
	if l.files[path] == "" {
		if err := l.fetch(path); err != nil {
			return nil, err
		}
	}
	return os.Open(l.files[path])
}

func (l *Listing) fetch(path string) error {
	t, err := l.tools()
	if err != nil {
		return err
	}
	// Built as a kit's packages are, so that Go's cache serves both. What it
	// imports comes with it, so that few calls serve many packages.
	pkgs, err := t.export(context.Background(), l.source, false, []string{path})
	if err != nil {
		return err
	}
	for _, p := range pkgs {
		if p.Export != "" {
			l.files[p.ImportPath] = p.Export
		}
	}
	if l.files[path] == "" {
		return fmt.Errorf("package %s has no type information", path)
	}
	return nil
}

// Paths lists the packages that cells may import, sorted; none if the go
// command does not work.
func (l *Listing) Paths() []string {
	ps, _ := l.paths()
	return ps
}
