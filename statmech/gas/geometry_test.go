package gas

import (
	"math"
	"strings"
	"testing"

	"levelsum/statmech/unit"
)

func geometryAtoms(t *testing.T) map[string][]Atom {
	m := map[string][]Atom{}
	for _, row := range table(t, "computed/geometries.csv") {
		m[row["molecule"]] = append(m[row["molecule"]], Atom{Isotope: row["atom"], Mass: unit.Mass(num(t, row["isotopic_mass_u"])) * unit.U,
			X: unit.Length(num(t, row["x_angstrom"])) * unit.Angstrom, Y: unit.Length(num(t, row["y"])) * unit.Angstrom, Z: unit.Length(num(t, row["z"])) * unit.Angstrom})
	}
	return m
}

func TestGeometryPublished(t *testing.T) {
	atoms := geometryAtoms(t)
	for _, row := range table(t, "computed/geometries_moments.csv") {
		name := row["molecule"]
		g, err := NewGeometry(atoms[name])
		if err != nil {
			t.Fatal(err)
		}
		for i, col := range []string{"I1_u_A2", "I2_u_A2", "I3_u_A2"} {
			if got, want := g.Moments[i].In(unit.UAngstrom2), num(t, row[col]); math.Abs(got-want) > 1.1e-8*math.Max(1, want) {
				t.Errorf("%s: %s = %.9f, want %.8f", name, col, got, want)
			}
		}
		cs := g.Constants()
		want := []string{row["A_cm-1"], row["B_cm-1"], row["C_cm-1"]}
		if row["A_cm-1"] == "" {
			want = want[2:]
			if !g.Linear {
				t.Errorf("%s is not found linear", name)
			}
		}
		for i, w := range want {
			if math.Abs(cs[i].In(unit.PerCm)-num(t, w)) > 6e-9+2e-9*num(t, w) { // printed to 1e-8
				t.Errorf("%s: constant %d = %.9f, want %s cm-1", name, i, cs[i].In(unit.PerCm), w)
			}
		}
		if got := g.SymmetryNumber(SymmetryTolerance); got != int(num(t, row["symmetry_number"])) {
			t.Errorf("%s: symmetry number %d, want %s", name, got, row["symmetry_number"])
		}
	}
}

// More rotation groups, built from their definition: D6 of a hexagon, D3 of
// ethane staggered, O of a cube, C1 of four different atoms.
func TestSymmetryNumbers(t *testing.T) {
	ring := func(n int, r, z, shift float64, symbol string) (as []Atom) {
		for i := range n {
			s, c := math.Sincos(2*math.Pi*float64(i)/float64(n) + shift)
			as = append(as, Atom{Isotope: symbol, X: unit.Length(r*c) * unit.Angstrom, Y: unit.Length(r*s) * unit.Angstrom, Z: unit.Length(z) * unit.Angstrom})
		}
		return as
	}
	var cube []Atom
	for i := range 8 {
		cube = append(cube, Atom{Isotope: "C", X: unit.Length(i&1) * unit.Angstrom, Y: unit.Length(i>>1&1) * unit.Angstrom, Z: unit.Length(i>>2) * unit.Angstrom})
	}
	carbon := func(z float64) Atom { return Atom{Isotope: "C", Z: unit.Length(z) * unit.Angstrom} }
	for name, c := range map[string]struct {
		atoms []Atom
		want  int
	}{
		"benzene":          {append(ring(6, 1.397, 0, 0, "C"), ring(6, 2.4777, 0, 0, "H")...), 12},
		"ethane staggered": {append(append(ring(3, 1.02, 1.16, 0, "H"), ring(3, 1.02, -1.16, math.Pi/3, "H")...), carbon(0.76), carbon(-0.76)), 6},
		"ethane eclipsed":  {append(append(ring(3, 1.02, 1.16, 0, "H"), ring(3, 1.02, -1.16, 0, "H")...), carbon(0.76), carbon(-0.76)), 6},
		"ethane twisted":   {append(append(ring(3, 1.02, 1.16, 0, "H"), ring(3, 1.02, -1.16, 0.3, "H")...), carbon(0.76), carbon(-0.76)), 6},
		"one D in ethane":  {append(append(append([]Atom{{Isotope: "D", X: 1.02 * unit.Angstrom, Z: 1.16 * unit.Angstrom}}, ring(3, 1.02, 1.16, 0, "H")[1:]...), ring(3, 1.02, -1.16, math.Pi/3, "H")...), carbon(0.76), carbon(-0.76)), 1},
		"cube":             {cube, 24},
	} {
		g, err := NewGeometry(c.atoms)
		if err != nil {
			t.Fatal(err)
		}
		if got := g.SymmetryNumber(SymmetryTolerance); got != c.want {
			t.Errorf("%s: %d, want %d", name, got, c.want)
		}
	}
}

// A methane moved off its symmetry by 0.05 Å: σ = 1 or less than 12, and the
// warning names both.
func TestNearSymmetric(t *testing.T) {
	atoms := geometryAtoms(t)["CH4"]
	atoms[1].X += 0.03 * unit.Angstrom
	atoms[2].Y += 0.02 * unit.Angstrom
	m := molecule(t, Description{Formula: "CH4", Atoms: atoms, Vibrations: []Vibration{{Quantum: 2917 * unit.PerCm}, {Quantum: 1534 * unit.PerCm, Degeneracy: 2}, {Quantum: 3019 * unit.PerCm, Degeneracy: 3}, {Quantum: 1306 * unit.PerCm, Degeneracy: 3}}})
	if w := strings.Join(m.Warnings(T0), ";"); !contains(w, "near-symmetric") || !contains(w, "12 if idealised") || m.Description().Symmetry != 1 {
		t.Errorf("σ = %d, warnings %q", m.Description().Symmetry, w)
	}
	g := molecule(t, Description{Formula: "CH4", Atoms: geometryAtoms(t)["CH4"], Vibrations: m.Description().Vibrations})
	if g.Description().Symmetry != 12 || g.Warnings(T0) != nil {
		t.Errorf("CH4: σ = %d, warnings %q", g.Description().Symmetry, g.Warnings(T0))
	}
	if _, err := New(Description{Formula: "CO2", Atoms: atoms, Vibrations: m.Description().Vibrations}); err == nil {
		t.Error("a geometry of five atoms for CO2 is taken")
	}
	for i := range atoms {
		atoms[i].X, atoms[i].Y, atoms[i].Z = atoms[i].X*0.1, atoms[i].Y*0.1, atoms[i].Z*0.1
	}
	if _, err := NewGeometry(atoms); err == nil || !contains(err.Error(), "unit") {
		t.Errorf("coordinates in nm taken for Å: %v", err)
	}
}
