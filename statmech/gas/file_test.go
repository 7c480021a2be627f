package gas

import (
	"math"
	"os"
	"path/filepath"
	"testing"

	"levelsum/statmech/unit"
)

// A molecule file of one's own, with uncertainties, in other units.
func TestReadMolecule(t *testing.T) {
	dir := t.TempDir()
	write := func(name, text string) string {
		p := filepath.Join(dir, name)
		if err := os.WriteFile(p, []byte(text), 0o666); err != nil {
			t.Fatal(err)
		}
		return p
	}
	// Water again, constants in GHz, wavenumbers partly in THz by another file.
	p := write("water.csv", `# name: water, formula: H2O, symmetry number: 2
# A/GHz: 835.83936, B/GHz: 435.34662, C/GHz: 278.14145
# u(A)/GHz: 0.3
# source: the constants of the library, converted
kind, wavenumber / cm-1, g, u(wavenumber) / cm-1
vibration, 3657, 1, 2
vibration, 1595, 1, 1
vibration, 3756, 1, 2
`)
	d, err := ReadMolecule(p)
	if err != nil {
		t.Fatal(err)
	}
	m := molecule(t, d)
	// The mass is now that of the standard atomic weights 1.0080, 15.999.
	if dS := (m.Entropy(T0) - library(t, "H2O").Entropy(T0)).In(unit.JPerMolK); math.Abs(dS) > 5e-4 {
		t.Errorf("S° differs from the library's by %.6f", dS)
	}
	us, err := m.Uncertainties([]unit.Temperature{T0, 1000})
	if err != nil || len(us) != 2 || len(us[0].Effects) != 5 {
		t.Fatalf("%+v, %v", us, err)
	}
	// u(S) from A alone: ½R u(A)/A; from 1595 ± 1 cm⁻¹ at 1000 K: C_vib R u/ν.
	for _, e := range us[1].Effects {
		if e.Input == "rotational constant 1" && math.Abs(math.Abs(e.Entropy.In(unit.R))-0.5*0.3/835.83936) > 1e-7 {
			t.Errorf("effect of A on S: %v", e.Entropy)
		}
		if contains(e.Input, "1595") {
			want := Oscillator{Quantum: 1595 * unit.PerCm}.Reduced(1000*unit.K).C / 1595
			if math.Abs(math.Abs(e.Entropy.In(unit.R))-want) > 1e-5*want {
				t.Errorf("effect of 1595 cm-1 on S: %v, want %g R", e.Entropy, want)
			}
		}
	}
	// Water by a geometry file, and with anharmonic constants (harmonic quanta and
	// x_ij of W. S. Benedict, N. Gailar, E. K. Plyler, J. Chem. Phys. 24, 1139
	// (1956), from memory): the measured fundamentals follow within 2.5 cm⁻¹,
	// the resonance between 2ν₁ and 2ν₃ left out.
	write("water-atoms.csv", "atom, x / Å, y / Å, z / Å\nO, 0, 0, 0\nH, 0.7569503273, 0, 0.5858822766\nH, -0.7569503273, 0, 0.5858822766\n")
	p = write("water-x.csv", `# name: water, formula: H2O, geometry: water-atoms.csv
kind, wavenumber / cm-1, g, x / cm-1, i, k
vibration, 3832.17, 1, -42.576, ,
vibration, 1648.47, 1, -16.813, ,
vibration, 3942.53, 1, -47.566, ,
x, , , -15.933, 1, 2
x, , , -165.824, 1, 3
x, , , -20.332, 2, 3
`)
	if d, err = ReadMolecule(p); err != nil {
		t.Fatal(err)
	}
	m = molecule(t, d)
	if d := m.Description(); d.Symmetry != 2 || math.Abs(d.Constants[0].In(unit.PerCm)-27.43506804) > 1e-5 {
		t.Errorf("water from its geometry: σ %d, A %.6f", d.Symmetry, d.Constants[0].In(unit.PerCm))
	}
	a := m.Part("vibration").(*anharmonicMode).a
	for i, want := range []float64{3656.65, 1594.59, 3755.79} {
		if got := a.Fundamental(i).In(unit.PerCm); math.Abs(got-want) > 2.5 {
			t.Errorf("fundamental %d: %.3f, want %.2f cm-1", i+1, got, want)
		}
	}
	write("scan.csv", "# source: invented, V3 = 12 kJ/mol\nphi / deg, V / (kJ mol-1)\n0, 0\n30, 6\n60, 12\n90, 6\n120, 0\n150, 6\n180, 12\n210, 6\n240, 0\n270, 6\n300, 12\n330, 6\n360, 0\n")
	p = write("methyl.csv", `# name: invented rotor, M/(g mol-1): 30
# A/cm-1: 3, B/cm-1: 0.7, C/cm-1: 0.6, symmetry number: 1
kind, wavenumber / cm-1, g, F / cm-1, sigma / 1, treat
vibration, 900, 1, , ,
torsion, 250, 1, 10, 3, scan: scan.csv
`)
	d, err = ReadMolecule(p)
	if err != nil {
		t.Fatal(err)
	}
	m = molecule(t, d)
	want, err := NewTorsion(10*unit.PerCm, Barrier(12*unit.KJPerMol, 3), 3, Diagonalised)
	if err != nil {
		t.Fatal(err)
	}
	if a, b := m.Part("torsion").Reduced(T0), want.Reduced(T0); math.Abs(a.LogQ-b.LogQ) > 1e-9 || math.Abs(a.C-b.C) > 1e-9 {
		t.Errorf("torsion from a scan %+v, from the barrier %+v", a, b)
	}
	// The same with everything about the rotor in the file of the scan.
	scan, err := os.ReadFile(filepath.Join(dir, "scan.csv"))
	if err != nil {
		t.Fatal(err)
	}
	write("rotor.csv", "# F/cm-1: 10, symmetry number: 3\n"+string(scan))
	p = write("methyl2.csv", "# name: invented rotor, M/(g mol-1): 30\n# A/cm-1: 3, B/cm-1: 0.7, C/cm-1: 0.6, symmetry number: 1\nkind, wavenumber / cm-1, g, treat\nvibration, 900, 1, harmonic\ntorsion, 250, 1, replaced-by: rotor.csv\n")
	if d, err = ReadMolecule(p); err != nil {
		t.Fatal(err)
	}
	if a, b := molecule(t, d).Reduced(T0), m.Reduced(T0); a != b {
		t.Errorf("rotor in the scan's file %+v, in the row %+v", a, b)
	}
	for name, c := range map[string]struct{ text, says string }{
		"unknown line":   {"# formula: H2O, simmetry number: 2\nkind, wavenumber / cm-1\nvibration, 1\n", "simmetry number"},
		"unknown kind":   {"# formula: H2O\nkind, wavenumber / cm-1\nvibrations, 1\n", "vibrations"},
		"unknown column": {"# formula: H2O\nkind, wavenumber / cm-1, q / 1\nvibration, 1, 2\n", `"q"`},
		"wrong unit":     {"# formula: H2O, A/kg: 3\nkind, wavenumber / cm-1\nvibration, 1\n", "kg"},
		"no unit":        {"# formula: H2O\nkind, wavenumber\nvibration, 1\n", "wavenumber"},
		"half g":         {"# formula: H2O\nkind, wavenumber / cm-1, g\nvibration, 1, 1.5\n", "1.5"},
	} {
		if _, err := ReadMolecule(write("bad.csv", c.text)); err == nil || !contains(err.Error(), c.says) {
			t.Errorf("%s: %v", name, err)
		}
	}
}
