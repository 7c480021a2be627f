package statmech

import (
	"errors"
	"math"
	"testing"

	"levelsum/statmech/unit"
)

func TestGibbsEntropyValues(t *testing.T) {
	// S = k ln W for W equal states, zero for a certain one.
	for _, W := range []int{1, 2, 6, 1000} {
		p := make([]float64, W)
		for i := range p {
			p[i] = 1 / float64(W)
		}
		if s, err := GibbsEntropy(p); err != nil || math.Abs(s.Nats()-math.Log(float64(W))) > 1e-15*float64(W)+1e-15 { // W roundings
			t.Errorf("W = %d: %v, %v; want ln W = %g", W, s, err, math.Log(float64(W)))
		}
	}
	if s, err := GibbsEntropy([]float64{0, 1, 0}); err != nil || s != 0 || math.Signbit(float64(s)) {
		t.Errorf("a certain state: %v, %v", s, err)
	}
	// One bit is a fair coin; R ln 2 = 5.763 J/(mol K).
	s, err := GibbsEntropy([]float64{0.5, 0.5})
	if err != nil || s.Bits() != 1 || math.Abs(s.Molar().In(unit.JPerMolK)-5.763146) > 5e-7 {
		t.Errorf("a fair coin: %v bits, %v, %v", s.Bits(), s.Molar(), err)
	}
	// Jaynes 1963: the die of mean 4.5.
	die := []float64{0.05435, 0.07877, 0.11416, 0.16545, 0.23977, 0.34750}
	if s, err := GibbsEntropy(die); err != nil || math.Abs(s.Nats()-1.61358) > 1e-5 {
		t.Errorf("Jaynes' die: %v, %v; want 1.61358", s, err)
	}
	// A level of g equally occupied states is as uncertain as its states.
	if s, err := GibbsEntropyOfLevels([]float64{1}, []float64{5}); err != nil || s.Nats() != math.Log(5) {
		t.Errorf("one level of five states: %v, %v", s, err)
	}
}

func TestGibbsEntropyRefuses(t *testing.T) {
	for _, p := range [][]float64{nil, {0.5, 0.6}, {-0.1, 1.1}, {math.NaN(), 1}, {0.5, 0.5 + 2e-9}, {math.Inf(1)}} {
		if s, err := GibbsEntropy(p); !errors.Is(err, ErrDomain) {
			t.Errorf("GibbsEntropy(%v) = %v, %v", p, s, err)
		}
	}
	if _, err := GibbsEntropyOfLevels([]float64{0.5, 0.5}, []float64{1}); !errors.Is(err, ErrDomain) {
		t.Errorf("missing degeneracy: %v", err)
	}
	if _, err := GibbsEntropyOfLevels([]float64{1}, []float64{0}); !errors.Is(err, ErrDomain) {
		t.Errorf("zero degeneracy: %v", err)
	}
	p, err := Normalise([]float64{1, 1, 2})
	if err != nil || p[2] != 0.5 {
		t.Errorf("Normalise = %v, %v", p, err)
	}
	if _, err := Normalise([]float64{0, 0}); !errors.Is(err, ErrDomain) {
		t.Errorf("Normalise of zeros: %v", err)
	}
}

func TestRelativeEntropy(t *testing.T) {
	if d, err := RelativeEntropy([]float64{0.5, 0.5}, []float64{0.25, 0.75}); err != nil || relDiff(d.Nats(), 0.5*math.Log(2)+0.5*math.Log(2.0/3)) > 1e-14 {
		t.Errorf("D = %v, %v", d, err)
	}
	if d, err := RelativeEntropy([]float64{1, 0}, []float64{0, 1}); err != nil || !math.IsInf(float64(d), 1) {
		t.Errorf("excluded state: %v, %v", d, err)
	}
	if d, err := RelativeEntropy([]float64{0, 1}, []float64{0.5, 0.5}); err != nil || relDiff(d.Nats(), math.Ln2) > 1e-15 {
		t.Errorf("certain against fair: %v, %v", d, err)
	}
	// Nearly equal: D = Σ δ²/2p to leading order, far below rounding of p ln p.
	if d, err := RelativeEntropy([]float64{0.5 + 1e-9, 0.5 - 1e-9}, []float64{0.5, 0.5}); err != nil || relDiff(d.Nats(), 2e-18) > 1e-6 {
		t.Errorf("nearly equal: %v, %v", d, err)
	}
	// F - F_eq by its definition F = Σ p E - T S.
	l := mustLevels(t, []unit.Energy{0, 50 * unit.PerCm, 200 * unit.PerCm}, []float64{1, 3, 2})
	p := []float64{0.2, 0.5, 0.3}
	T := 150 * unit.K
	s, err := GibbsEntropyOfLevels(p, []float64{1, 3, 2})
	if err != nil {
		t.Fatal(err)
	}
	kt := T.AsEnergy()
	F := unit.Energy(0.5)*50*unit.PerCm + unit.Energy(0.3)*200*unit.PerCm - unit.Energy(s)*kt
	want := F + unit.Energy(l.Reduced(T).LogQ)*kt
	if got, err := FreeEnergyExcess(p, l, T); err != nil || relDiff(float64(got), float64(want)) > 1e-13 {
		t.Errorf("FreeEnergyExcess = %v, %v; want %v", got, err, want)
	}
}
