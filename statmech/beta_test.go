package statmech

import (
	"errors"
	"math"
	"testing"

	"levelsum/statmech/unit"
)

func TestNegativeTemperature(t *testing.T) {
	gap := 1 * unit.KelvinEnergy
	l := mustLevels(t, []unit.Energy{0, gap}, nil)
	// p_up = 0.7: kT/Δ = -1/ln(0.7/0.3) = -1.1802225.
	T, err := l.TemperatureOf(0.7 * gap)
	if err != nil || math.Abs(float64(T)+1.1802225) > 1e-7 {
		t.Errorf("p_up = 0.7: T = %v, %v; want -1.1802225 K", T, err)
	}
	if b, err := l.BetaOf(0.5 * gap); err != nil || b != 0 {
		t.Errorf("U at the middle: beta = %v, %v", b, err)
	}
	if T, err := l.TemperatureOf(0.5 * gap); err != nil || !math.IsInf(float64(T), 1) {
		t.Errorf("U at the middle: T = %v, %v", T, err)
	}
	for _, U := range []unit.Energy{0, gap, -gap, 2 * gap, unit.Energy(math.NaN())} {
		if b, err := l.BetaOf(U); !errors.Is(err, ErrDomain) {
			t.Errorf("BetaOf(%v) = %v, %v", U, b, err)
		}
	}
	// T → 0⁻ from the top level: 1 - p_up = e^{-|x|}, far below rounding of p_up.
	s, err := l.AtBeta(unit.InverseEnergy(-60 / float64(gap)))
	if err != nil || relDiff(s.LogZ, math.Exp(-60)) > 1e-13 || relDiff(float64(s.Entropy), 61*math.Exp(-60)) > 1e-13 {
		t.Errorf("near T = 0-: %+v, %v", s, err)
	}
	// β = 0: all states equal.
	if s, err := l.AtBeta(0); err != nil || s.Entropy != EntropyOverK(math.Ln2) || !math.IsInf(float64(s.Temperature()), 1) {
		t.Errorf("beta = 0: %+v, %v", s, err)
	}
}

// The symmetric spectrum has S(β) = S(-β) and E(β) = -E(-β); positive β agrees
// with Reduced.
func TestBetaIdentities(t *testing.T) {
	var e []unit.Energy
	for m := -5; m <= 5; m++ {
		e = append(e, unit.Energy(m)*unit.PerCm)
	}
	l := mustLevels(t, e, nil)
	for _, T := range []unit.Temperature{0.1, 1, 10, 1e3} {
		p, err := l.AtBeta(T.Beta())
		if err != nil {
			t.Fatal(err)
		}
		n, err := l.AtBeta(-T.Beta())
		if err != nil {
			t.Fatal(err)
		}
		r := l.Reduced(T)
		if relDiff(float64(n.Entropy), float64(p.Entropy)) > 1e-13 || relDiff(float64(n.Energy), -float64(p.Energy)) > 1e-12 {
			t.Errorf("T = ±%v: %+v, %+v", T, p, n)
		}
		if relDiff(float64(p.Entropy), r.Entropy()) > 1e-13 || relDiff(p.HeatC, r.C) > 1e-12 {
			t.Errorf("T = %v: %+v, Reduced %+v", T, p, r)
		}
	}
}

func TestBetaOfRoundTrip(t *testing.T) {
	l := mustLevels(t, []unit.Energy{3 * unit.PerCm, 20 * unit.PerCm, 110 * unit.PerCm, 400 * unit.PerCm}, []float64{1, 3, 5, 2})
	for _, x := range []float64{-9, -3, -0.01, 1e-6, 0.4, 1, 25} { // β·100 cm⁻¹
		b := unit.InverseEnergy(x / float64(100*unit.PerCm))
		s, err := l.AtBeta(b)
		if err != nil {
			t.Fatal(err)
		}
		got, err := l.BetaOf(s.Energy)
		if err != nil {
			t.Errorf("x = %g: %v", x, err)
			continue
		}
		// What the energy's rounding allows: δβ = δE/var E.
		slack := 4e-16 * math.Abs(float64(s.Energy)) / (float64(s.Spread) * float64(s.Spread))
		if d := math.Abs(float64(got - b)); d > 1e-12*math.Abs(float64(b))+slack {
			t.Errorf("x = %g: beta = %v, want %v", x, got, b)
		}
	}
}
