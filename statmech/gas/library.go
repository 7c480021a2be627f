package gas

import (
	"embed"
	"fmt"
	"sort"
	"strings"

	"levelsum/statmech/data"
)

//go:embed library/*.csv
var libraryFiles embed.FS

// Library returns the names of the molecules and atoms that ship with the
// package, in alphabetical order. Their files, in the form that [ReadMolecule]
// reads, say where every number is from; [Molecule.Notes] repeats it.
func Library() []string {
	entries, err := libraryFiles.ReadDir("library")
	if err != nil {
		panic("gas: embedded library: " + err.Error())
	}
	var names []string
	for _, e := range entries {
		names = append(names, strings.TrimSuffix(e.Name(), ".csv"))
	}
	sort.Strings(names)
	return names
}

// FromLibrary returns a molecule or atom of the library at 1 bar. It returns an
// error that lists the names if there is none of that name.
func FromLibrary(name string) (*Molecule, error) {
	d, err := Find(name)
	if err != nil {
		return nil, err
	}
	return New(d)
}

// Open returns the molecule that a table file describes, see [ReadMolecule].
func Open(path string) (*Molecule, error) {
	d, err := ReadMolecule(path)
	if err != nil {
		return nil, err
	}
	return New(d)
}

// Find returns the description of a molecule or atom of the library, to be
// changed or given to [New]. It returns an error that lists the names if there
// is none of that name.
func Find(name string) (Description, error) {
	raw, err := libraryFiles.ReadFile("library/" + name + ".csv")
	if err != nil {
		return Description{}, fmt.Errorf("gas: no molecule %q in the library; there are %s", name, strings.Join(Library(), ", "))
	}
	t, err := data.Parse(name+".csv", raw)
	if err != nil {
		return Description{}, err
	}
	d, err := describe(t, "")
	if err == nil && d.Name == "" {
		d.Name = name
	}
	return d, err
}
