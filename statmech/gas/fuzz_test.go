package gas

import (
	"testing"

	"levelsum/statmech"
	"levelsum/statmech/data"
)

// A file is read, or refused with an error: never a panic, never functions that
// are not finite.
func FuzzMoleculeFile(f *testing.F) {
	for _, name := range []string{"H2O", "NO", "C2H6", "O", "SF6", "H2"} {
		raw, err := libraryFiles.ReadFile("library/" + name + ".csv")
		if err != nil {
			f.Fatal(err)
		}
		f.Add(raw)
	}
	f.Add([]byte("# formula: H2O, D_J/cm-1: 1e-300, B/cm-1: 1\nkind, wavenumber / cm-1, x / cm-1, i, k\nvibration, 1, -1, ,\nx, , 2, 1, 1\n"))
	f.Fuzz(func(t *testing.T, raw []byte) {
		table, err := data.Parse("fuzz.csv", raw)
		if err != nil {
			return
		}
		d, err := describe(table, t.TempDir())
		if err != nil {
			return
		}
		m, err := New(d)
		if err != nil {
			return
		}
		defer func() {
			if err, ok := recover().(error); ok {
				if _, ok := err.(*statmech.DomainError); !ok {
					panic(err)
				}
			}
		}()
		r := m.Reduced(300)
		if x := r.LogQ + r.U + r.C; x-x != 0 {
			t.Errorf("functions %+v of\n%s", r, raw)
		}
	})
}

func FuzzFormula(f *testing.F) {
	for _, s := range []string{"H2O", "(CH3)2CO", "[35Cl]2", "SO4-2", "D2", "((", "C1000", "H+"} {
		f.Add(s)
	}
	f.Fuzz(func(t *testing.T, s string) {
		x, err := ParseFormula(s)
		if err == nil {
			if m, _, err := x.Mass(); err != nil || !(m > 0) && x.Charge <= 0 {
				t.Errorf("%q: mass %v, %v", s, m, err)
			}
		}
	})
}
