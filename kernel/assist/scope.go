package assist

import "go/types"

// A Scope is what the session has declared and what a cell may import.
type Scope interface {
	// Names lists what the session has declared; Lookup returns one of them.
	Names() []string
	Lookup(name string) types.Object
	// ImportNames lists the names of packages that a cell can use without an
	// import; ImportPath says which package such a name means, "" if none.
	ImportNames() []string
	ImportPath(name string) string
	// Import returns a package that a cell can import.
	Import(path string) (*types.Package, error)
	// ImportPaths lists what cells can import, sorted.
	ImportPaths() []string
}
