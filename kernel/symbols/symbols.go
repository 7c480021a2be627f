// Package symbols holds what the interpreter needs to know of the compiled
// packages that cells may import: a table of their functions, variables, types
// and constants. The tables of gonum, gonum/plot and levelsum's own packages
// are generated here, one file a package; those of the standard library come
// with the interpreter and stop at the names of Go 1.22. A name that is in no
// table (newer, or generic, which cannot be in one) is for compiled cells.
package symbols

import (
	"maps"
	"path"
	"reflect"
	"slices"
	"sync"

	"github.com/traefik/yaegi/stdlib"
)

//go:generate go run generate.go

// Symbols are the generated tables, by import path and package name
// ("gonum.org/v1/gonum/mat/mat"). The generated files fill it when the program
// starts; nothing changes it after that.
var Symbols = map[string]map[string]reflect.Value{}

var merged = sync.OnceValue(func() map[string]map[string]reflect.Value {
	all := maps.Clone(stdlib.Symbols)
	maps.Copy(all, Symbols)
	return all
})

// byPath has the tables by import path alone.
var byPath = sync.OnceValue(func() map[string]map[string]reflect.Value {
	all := map[string]map[string]reflect.Value{}
	for key, table := range merged() {
		all[path.Dir(key)] = table
	}
	return all
})

// Table returns all tables in the form in which the interpreter takes them:
// keys are import path and package name. Do not change them.
func Table() map[string]map[string]reflect.Value { return merged() }

// Has says whether interpreted code can use a name of a package.
func Has(path, name string) bool {
	_, ok := byPath()[path][name]
	return ok
}

// Paths lists the packages that have a table, sorted.
func Paths() []string { return slices.Sorted(maps.Keys(byPath())) }
