package gas

import (
	"math"
	"testing"

	"levelsum/statmech"
	"levelsum/statmech/unit"
)

// Natural chlorine from the constants of ³⁵Cl₂: CODATA 223.081 ± 0.010; with the
// ³⁵Cl₂ constants and the natural mass 222.933, and with constants scaled to the
// mean mass 223.080 (independent arithmetic).
func TestNaturalChlorine(t *testing.T) {
	d, err := Find("35Cl2")
	if err != nil {
		t.Fatal(err)
	}
	f, err := NaturalDiatomic(d)
	if err != nil || len(f.Species) != 3 {
		t.Fatal(f, err)
	}
	S := statmech.Molar{Mode: f}.Entropy(T0).In(unit.JPerMolK)
	if math.Abs(S-223.081) > 0.010 {
		t.Errorf("S° = %.4f, want 223.081 ± 0.010", S)
	}
	// Against one gas of mean mass: classically 3/2 R (⟨ln m₁m₂⟩ - ln⟨m⟩²), which
	// is -3/2 R w₃₅w₃₇ (Δm/m)² = -0.0073 J/(mol K) to second order.
	if d := S - library(t, "Cl2").Entropy(T0).In(unit.JPerMolK); math.Abs(d+0.0073) > 0.0015 {
		t.Errorf("S° less that of mean mass = %+.4f, want -0.0073", d)
	}
	d.Formula, d.Mass = "Cl2", (70.906 * unit.GPerMol).PerParticle()
	if x := molecule(t, d).Entropy(T0).In(unit.JPerMolK); math.Abs(x-222.933) > 0.006 {
		t.Errorf("35Cl2 constants with natural mass: %.4f, want 222.933", x)
	}
	if _, err := NaturalDiatomic(d); err == nil {
		t.Error("a formula without isotopes is taken")
	}
}

// D2 from H2 constants: ω_e and B_e of Huber and Herzberg, 3115.50 and 30.4436
// cm⁻¹, within the Born-Oppenheimer breakdown of 1e-3; back again exactly.
func TestWithReducedMass(t *testing.T) {
	d, err := Find("H2")
	if err != nil {
		t.Fatal(err)
	}
	x := d.Diatomic.WithReducedMass(2.01410177784 / 1.0078250319)
	s := x.States[0]
	if rel(s.OmegaE.In(unit.PerCm), 3115.50) > 1e-3 || rel(s.BE.In(unit.PerCm), 30.4436) > 1e-3 {
		t.Errorf("ω_e %.3f, B_e %.4f cm-1", s.OmegaE.In(unit.PerCm), s.BE.In(unit.PerCm))
	}
	// D0(D2) = 36748.36 cm⁻¹, from D0(H2) by the zero-point energies.
	if D := s.Dissociation.In(unit.PerCm); math.Abs(D-36748.36) > 10 {
		t.Errorf("D0 = %.2f, want 36748.36 cm-1", D)
	}
	b := x.WithReducedMass(1.0078250319 / 2.01410177784).States[0]
	if o := d.Diatomic.States[0]; rel(float64(b.BE), float64(o.BE)) > 1e-14 || rel(float64(b.Dissociation), float64(o.Dissociation)) > 1e-12 {
		t.Errorf("there and back: %+v, was %+v", b, o)
	}
}
