package cell

import (
	"go/types"
	"maps"
	"slices"
)

// ImportNames lists the names of packages that a new cell can use without an
// import: those that cells have imported and the usual ones.
func (s *Scope) ImportNames() []string {
	names := maps.Clone(s.usual)
	maps.Copy(names, s.imports)
	return slices.Sorted(maps.Keys(names))
}

// Dots lists the packages that cells have imported with a dot.
func (s *Scope) Dots() []string { return slices.Clone(s.dots) }

// ImportPath is the package that such a name means, "" if none.
func (s *Scope) ImportPath(name string) string { return s.importPath(name) }

// Import returns a package that cells can import.
func (s *Scope) Import(path string) (*types.Package, error) { return s.importer.Import(path) }

// ImportPaths lists what cells can import, sorted; none if it is not known.
func (s *Scope) ImportPaths() []string {
	if i, ok := s.importer.(interface{ Paths() []string }); ok {
		return i.Paths()
	}
	return nil
}
