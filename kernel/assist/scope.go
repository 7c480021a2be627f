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

// A Dotted scope knows the packages that cells have imported with a dot.
type Dotted interface {
	Dots() []string
}

// A Texts scope knows what a text given to a function of a package may be, such
// as the name of a file; nil if it does not.
type Texts interface {
	Texts(path, function string) []string
}

// dotsOf lists the packages imported with a dot.
func dotsOf(scope Scope) []string {
	if d, ok := scope.(Dotted); ok {
		return d.Dots()
	}
	return nil
}
