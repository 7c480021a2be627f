// Package export gives the type checker the packages that cells may import.
//
// Type information comes from a [Source] of archives: the kit of a compiled
// levelsum, or the go command where there is no kit. An [Importer] reads each
// package once and says, for what cells may not import, why.
package export

import (
	"fmt"
	"go/importer"
	"go/token"
	"go/types"
	"io"
	"path"
	"slices"
	"strings"
	"sync"
)

// A Source has the archives of packages.
type Source interface {
	// Lookup opens the archive of a package.
	Lookup(path string) (io.ReadCloser, error)
	// Paths lists what may be imported, sorted. It may be slow.
	Paths() []string
}

// hidden are packages that exist but that cells may not import, with the reason.
var hidden = map[string]string{
	"C":            "C code cannot be part of a cell; a Go package that wraps it can be imported by a program of your own",
	"unsafe":       "a wrong pointer would end the engine and all values with it",
	"syscall":      "raw system calls can end the engine; os, os/exec, os/signal, net and time offer what most uses need",
	"plugin":       "the kernel itself loads compiled cells with it",
	"runtime/cgo":  "it serves cgo, which cells cannot use",
	"runtime/race": "it serves the race detector",
}

// A Hidden error says why a package cannot be imported.
type Hidden struct {
	Path, Reason string
}

func (e *Hidden) Error() string {
	return fmt.Sprintf("package %s cannot be imported by a cell: %s", e.Path, e.Reason)
}

// A Missing error says that there is no such package. Near are importable
// packages with the same last element.
type Missing struct {
	Path string
	Near []string
	// Bare says that the source has the standard library alone.
	Bare bool
}

func (e *Missing) Error() string {
	if first, _, _ := strings.Cut(e.Path, "/"); e.Bare && (first == "levelsum" || first == "gonum.org") {
		return fmt.Sprintf("package %s is not known: the packages beside the standard library have not been prepared; run levelsum install", e.Path)
	}
	s := fmt.Sprintf("package %s is not among those that cells can import (the standard library, gonum, gonum/plot and levelsum's own)", e.Path)
	if len(e.Near) > 0 {
		s += "; did you mean " + strings.Join(e.Near, " or ") + "?"
	}
	return s
}

// An Importer is a [types.Importer] for cells. It is safe for concurrent use;
// all its packages belong to one world of types.
type Importer struct {
	// Fset holds the positions of what was imported.
	Fset   *token.FileSet
	source Source
	paths  func() []string
	done   sync.Map // path to *types.Package

	mu sync.Mutex // guards gc
	gc types.Importer
}

// New makes an importer over a source.
func New(s Source) *Importer {
	i := &Importer{Fset: token.NewFileSet(), source: s}
	i.gc = importer.ForCompiler(i.Fset, "gc", s.Lookup)
	i.paths = sync.OnceValue(func() []string {
		return slices.DeleteFunc(slices.Clone(s.Paths()), func(p string) bool { return reason(p) != "" })
	})
	return i
}

// Import returns the package that a cell imports. The error is a [*Hidden] or a
// [*Missing] if it may not.
func (i *Importer) Import(path string) (*types.Package, error) {
	if p, ok := i.done.Load(path); ok && reason(path) == "" {
		return p.(*types.Package), nil
	}
	if why := reason(path); why != "" {
		return nil, &Hidden{path, why}
	}
	if _, found := slices.BinarySearch(i.paths(), path); !found {
		if strings.HasPrefix(path, "levelsum/kernel/") {
			return nil, &Hidden{path, "it is a part of the kernel"}
		}
		bare := !slices.ContainsFunc(i.paths(), func(p string) bool { return strings.HasPrefix(p, "levelsum/") })
		return nil, &Missing{path, i.near(path), bare}
	}
	return i.Load(path)
}

// Load returns any package of the source, also those that cells may not import.
func (i *Importer) Load(path string) (*types.Package, error) {
	if path == "unsafe" {
		return types.Unsafe, nil
	}
	if p, ok := i.done.Load(path); ok {
		return p.(*types.Package), nil
	}
	i.mu.Lock()
	defer i.mu.Unlock()
	p, err := i.gc.Import(path)
	if err != nil {
		return nil, err
	}
	i.done.Store(path, p)
	return p, nil
}

// Paths lists what cells may import, sorted.
func (i *Importer) Paths() []string { return slices.Clone(i.paths()) }

// Named lists the importable packages whose last element, a version left out,
// is name: what an undefined name may stand for.
func (i *Importer) Named(name string) []string {
	var out []string
	for _, p := range i.paths() {
		if last(p) == name {
			out = append(out, p)
		}
	}
	return out
}

func (i *Importer) near(path string) []string {
	out := i.Named(last(path))
	if len(out) > 3 {
		out = out[:3]
	}
	return out
}

// last is the last element of a path that is not a version.
func last(p string) string {
	dir, base := path.Split(p)
	if len(base) > 1 && base[0] == 'v' && strings.Trim(base[1:], "0123456789") == "" && dir != "" {
		return path.Base(dir)
	}
	return base
}

// reason says why a path may not be imported, whether it exists or not; empty
// if nothing speaks against it.
func reason(path string) string {
	if r := hidden[path]; r != "" {
		return r
	}
	if slices.Contains(strings.Split(path, "/"), "internal") {
		return "internal packages serve only the module that they are part of"
	}
	return ""
}
