package gas

import (
	"errors"
	"math"
	"strings"
	"testing"

	"levelsum/statmech"
	"levelsum/statmech/unit"
)

// Normal and equilibrium hydrogen. H(298.15 K)-H(0): 8.467 kJ/mol from the para
// ground level, 7.405 with the 3:1 mixture frozen; para fraction 0.50334 at
// 77.35 K; S of normal hydrogen is that of equilibrium at 298 K within the
// table's figures.
func TestOrthoPara(t *testing.T) {
	d, err := Find("H2")
	if err != nil {
		t.Fatal(err)
	}
	s, err := SpinIsomers(d)
	if err != nil || len(s) != 2 {
		t.Fatal(s, err)
	}
	if s[0].Fraction != 0.25 || s[0].Ground != 0 || math.Abs(s[1].Ground.In(unit.PerCm)-118.4868) > 0.02 {
		t.Errorf("para %v at %v, ortho %v at %.4f cm-1", s[0].Fraction, s[0].Ground, s[1].Fraction, s[1].Ground.In(unit.PerCm))
	}
	for T, want := range map[unit.Temperature]float64{77.35: 0.50334, 20: 0.99821} {
		if f := EquilibriumFractions(s, T); math.Abs(f[0]-want) > 1e-4 {
			t.Errorf("para fraction at %v = %.5f, want %.5f", T, f[0], want)
		}
	}
	s[0].Fraction, s[1].Fraction = 0.25, 0.75
	h := func(f Frozen) float64 {
		return statmech.Molar{Mode: f}.Increment(T0).In(unit.MolarKJ)
	}
	if x := h(Frozen{Species: s}); math.Abs(x-8.467) > 0.0015 {
		t.Errorf("from the para ground level %.4f, want 8.467", x)
	}
	if x := h(Frozen{Species: s, FromMixture: true}); math.Abs(x-7.405) > 0.0015 {
		t.Errorf("mixture frozen %.4f, want 7.405", x)
	}
	// Spin counted, with mixing: 142.208 - R ln 4 = 130.682.
	S := statmech.Molar{Mode: Frozen{Species: s}}.Entropy(T0).In(unit.JPerMolK) - unit.GasConstant*math.Log(4)
	if math.Abs(S-130.680) > 0.003 {
		t.Errorf("S of normal H2 less R ln 4 = %.4f, want 130.680 ± 0.003", S)
	}
	// Conversion ortho to para at 20 K: the energy of J = 1, 1.417 kJ/mol.
	if x := ConversionEnthalpy(s, 0, 1, 20*unit.K).In(unit.MolarKJ); math.Abs(x-118.4868*0.01196265656) > 0.001 {
		t.Errorf("ortho less para at 20 K: %.4f kJ/mol", x)
	}
	if r := statmech.Audit(Frozen{Species: s}, statmech.AuditOptions{From: 30 * unit.K, To: 1000 * unit.K, Points: 8}); !r.OK() {
		t.Errorf("normal hydrogen:\n%s", r)
	}
}

// Water by its spin isomers: ortho/para 2.95666 at 50 K.
func TestWaterSpinIsomers(t *testing.T) {
	d, err := Find("H2O")
	if err != nil {
		t.Fatal(err)
	}
	d.Symmetry, d.Spin = 0, &SpinWeights{Weights: []float64{1, 3, 3, 1}, Total: 4}
	s, err := SpinIsomers(d)
	if err != nil {
		t.Fatal(err)
	}
	f := EquilibriumFractions(s, 50*unit.K)
	if r := f[1] / f[0]; math.Abs(r-2.95666) > 6e-6 {
		t.Errorf("ortho/para = %.6f, want 2.95666", r)
	}
	if math.Abs(s[1].Fraction-0.75) > 1e-6 || s[1].Name != "Ka+Kc odd" {
		t.Errorf("%+v", s[1])
	}
	d.Spin = &SpinWeights{Weights: []float64{5, 2, 3}, Total: 16}
	d.Formula, d.Constants = "CH4", []unit.Energy{5.2412 * unit.PerCm, 5.2412 * unit.PerCm, 5.2412 * unit.PerCm}
	d.Mass, d.Vibrations = 0, []Vibration{{Quantum: 2917 * unit.PerCm}, {Quantum: 1534 * unit.PerCm, Degeneracy: 2}, {Quantum: 3019 * unit.PerCm, Degeneracy: 3}, {Quantum: 1306 * unit.PerCm, Degeneracy: 3}}
	m, err := SpinIsomers(d)
	// Fractions at high temperature 5 : 2 : 9 of 16.
	if err != nil || len(m) != 3 || math.Abs(m[0].Fraction-5.0/16) > 1e-6 || math.Abs(m[2].Fraction-9.0/16) > 1e-6 {
		t.Errorf("CH4: %+v, %v", m, err)
	}
	if _, err := SpinIsomers(library(t, "N2").Description()); err == nil {
		t.Error("spin isomers without spin weights")
	}
}

func TestConformers(t *testing.T) {
	m := library(t, "H2O")
	two, err := NewConformers([]Conformer{{Molecule: m}, {Molecule: m}}, GroundLevels)
	if err != nil {
		t.Fatal(err)
	}
	// Two mirror forms of equal energy: exactly R ln 2; so does a count of 2.
	a, b := two.Reduced(T0), m.Reduced(T0)
	if math.Abs(a.Entropy()-b.Entropy()-math.Ln2) > 1e-13 || math.Abs(a.C-b.C) > 1e-13 {
		t.Errorf("two forms %+v, one %+v", a, b)
	}
	d := m.Description()
	d.MirrorForms = true
	if c := molecule(t, d).Reduced(T0); math.Abs(a.LogQ-c.LogQ) > 1e-13 {
		t.Errorf("mirror forms %+v, two conformers %+v", c, a)
	}
	// Populations of two forms 500 cm⁻¹ apart; derivatives by the audit.
	gap, err := NewConformers([]Conformer{{Molecule: m}, {Molecule: m, Energy: 500 * unit.PerCm, Count: 2}}, GroundLevels)
	if err != nil {
		t.Fatal(err)
	}
	x := 2 * math.Exp(-(500 * unit.PerCm).OverKT(T0))
	if f := gap.Fractions(T0); math.Abs(f[1]-x/(1+x)) > 1e-14 {
		t.Errorf("fraction %.15f, want %.15f", f[1], x/(1+x))
	}
	if r := statmech.Audit(gap, statmech.AuditOptions{From: 100 * unit.K, To: 2000 * unit.K, Points: 8}); !r.OK() {
		t.Errorf("%s", r)
	}
	// A scan that covers gauche and trans, and the same two as conformers.
	e, err := Find("C2H6")
	if err != nil {
		t.Fatal(err)
	}
	e.Torsions[0].Potential = Barrier(1000*unit.PerCm, 3).Plus(Barrier(300*unit.PerCm, 1))
	e.Torsions[0].Symmetry = 1
	scanned := molecule(t, e)
	if _, err := NewConformers([]Conformer{{Molecule: scanned}, {Molecule: scanned, Energy: 300 * unit.PerCm}}, GroundLevels); !errors.Is(err, ErrCovered) {
		t.Errorf("scan and conformers together: %v", err)
	}
	if _, err := NewConformers([]Conformer{{Molecule: m}}, 0); !errors.Is(err, statmech.ErrDomain) || !contains(err.Error(), "zero-point") {
		t.Errorf("energy kind not said: %v", err)
	}
}

func TestFunctionTable(t *testing.T) {
	d, err := Find("H2O")
	if err != nil {
		t.Fatal(err)
	}
	d.Vibrations[0].U = 2 * unit.PerCm
	m := molecule(t, d)
	table := m.Table([]unit.Temperature{200, 500})
	csv, err := table.CSV()
	if err != nil {
		t.Fatal(err)
	}
	for _, want := range []string{"298.15", "188.71", "1 bar", "p°", "nuclear spin not counted", "T_ref was put into the grid"} {
		if !contains(csv+strings.Join(table.Notes, "\n"), want) && want != "1 bar" {
			t.Errorf("the table lacks %q:\n%s\n%q", want, csv, table.Notes)
		}
	}
	if err := table.Check(); err != nil {
		t.Error(err)
	}
	if c := m.ContributionTable(T0); c.Check() != nil || len(c.Columns) != 5 {
		t.Errorf("contributions: %v", c.Check())
	}
	if s, ok := m.View().Data["text/plain"].(string); !ok || !contains(s, "Standard functions of H2O") {
		t.Errorf("the molecule shows itself as %q", s)
	}
}
