package statmech

import (
	"errors"
	"math"
	"math/rand/v2"
	"strings"
	"testing"

	"levelsum/statmech/unit"
)

// E. T. Jaynes, Brandeis lectures 1963: a die whose mean is 4.5.
func TestMaximumEntropyDie(t *testing.T) {
	die := MeanConstraint{Name: "spots", Values: []float64{1, 2, 3, 4, 5, 6}, Mean: 4.5}
	r, err := MaximumEntropy(nil, die)
	if err != nil || math.Abs(r.P[5]-0.347494) > 5e-7 || math.Abs(r.Entropy.Nats()-1.6135811) > 5e-8 {
		t.Errorf("p6 = %v, S = %v, %v; want 0.347494, 1.6135811", r.P, r.Entropy, err)
	}
	// Legendre: S = ln Z + Σ λ ⟨f⟩.
	if d := r.LogZ + r.Multipliers[0]*4.5 - r.Entropy.Nats(); math.Abs(d) > 1e-12 {
		t.Errorf("ln Z + λ⟨f⟩ - S = %g", d)
	}
	for mean, bound := range map[float64]string{6.5: "6", 0.5: "1"} {
		die.Mean = mean
		if _, err := MaximumEntropy(nil, die); !errors.Is(err, ErrUnreachable) || !strings.Contains(err.Error(), bound) || !strings.Contains(err.Error(), "spots") {
			t.Errorf("mean %g: %v", mean, err)
		}
	}
	// The boundary has a limit, with a warning.
	die.Mean = 6
	if r, err := MaximumEntropy(nil, die); err != nil || r.P[5] != 1 || r.Entropy != 0 || len(r.Warnings) != 1 || !math.IsInf(r.Multipliers[0], -1) {
		t.Errorf("mean 6: %+v, %v", r, err)
	}
}

// Random problems in several dimensions: the means are met, and no other
// distribution with the same means has a larger entropy.
func TestMaximumEntropyConstraints(t *testing.T) {
	rnd := rand.New(rand.NewPCG(7, 8))
	for range 50 {
		n, m := 8+rnd.IntN(20), 1+rnd.IntN(3)
		g, p0 := make([]float64, n), make([]float64, n)
		for i := range g {
			g[i], p0[i] = float64(1+rnd.IntN(4)), rnd.ExpFloat64()+0.01
		}
		p0, err := Normalise(p0)
		if err != nil {
			t.Fatal(err)
		}
		cs := make([]MeanConstraint, m)
		for k := range cs {
			cs[k].Values = make([]float64, n)
			for i := range n {
				cs[k].Values[i] = rnd.NormFloat64() * math.Pow(10, float64(k*3))
				cs[k].Mean += p0[i] * cs[k].Values[i]
			}
		}
		r, err := MaximumEntropy(g, cs...)
		if err != nil {
			t.Fatal(err)
		}
		for _, c := range cs {
			lo, hi := bounds(c.Values)
			if d := dot(r.P, c.Values) - c.Mean; math.Abs(d) > 1e-12*(hi-lo) {
				t.Errorf("mean %g, want %g", dot(r.P, c.Values), c.Mean)
			}
		}
		other, err := GibbsEntropyOfLevels(p0, g)
		if err != nil || other > r.Entropy {
			t.Errorf("a distribution with the same means has S = %v > %v, %v", other, r.Entropy, err)
		}
	}
}

// With energies as the only constraint it is the canonical distribution, λ = β.
func TestMaximumEntropyCanonical(t *testing.T) {
	e := []float64{0, 1, 2.5, 7, 7.5}
	g := []float64{1, 3, 2, 5, 1}
	var us []unit.Energy
	for _, x := range e {
		us = append(us, unit.Energy(x))
	}
	l := mustLevels(t, us, g)
	s, err := l.AtBeta(0.4)
	if err != nil {
		t.Fatal(err)
	}
	r, err := MaximumEntropy(g, MeanConstraint{Name: "energy", Values: e, Mean: float64(s.Energy)})
	if err != nil || relDiff(r.Multipliers[0], 0.4) > 1e-12 || relDiff(float64(r.Entropy), float64(s.Entropy)) > 1e-12 || relDiff(r.Covariance[0][0], math.Pow(float64(s.Spread), 2)) > 1e-11 {
		t.Errorf("%+v, %v; want beta 0.4 and %+v", r, err, s)
	}
}

func TestMaximumEntropyRefuses(t *testing.T) {
	x := MeanConstraint{Name: "x", Values: []float64{0, 1, 0, 1}, Mean: 0.5}
	y := MeanConstraint{Name: "y", Values: []float64{0, 0, 1, 1}, Mean: 0.5}
	if _, err := MaximumEntropy(nil, x, y, MeanConstraint{Name: "sum", Values: []float64{0, 1, 1, 2}, Mean: 1}); !errors.Is(err, ErrRedundant) || !strings.Contains(err.Error(), "sum") {
		t.Errorf("redundant: %v", err)
	}
	// Inside each one's bounds, outside together: ⟨xy⟩ <= min(⟨x⟩, ⟨y⟩).
	xy := MeanConstraint{Name: "xy", Values: []float64{0, 0, 0, 1}, Mean: 0.6}
	if _, err := MaximumEntropy(nil, x, y, xy); !errors.Is(err, ErrUnreachable) || !strings.Contains(err.Error(), "xy = 0.6") || !strings.Contains(err.Error(), "0.5") {
		t.Errorf("outside the hull: %v", err)
	}
	// On the boundary of the hull: ⟨xy⟩ = ⟨x⟩ = ⟨y⟩ leaves states 00 and 11.
	xy.Mean = 0.5
	if r, err := MaximumEntropy(nil, x, y, xy); err != nil || len(r.Warnings) == 0 || math.Abs(r.P[0]-0.5) > 1e-9 || r.P[1] > 1e-9 || math.Abs(r.P[3]-0.5) > 1e-9 {
		t.Errorf("on the boundary: %+v, %v", r, err)
	}
	if _, err := MaximumEntropy([]float64{1, 2}, x); !errors.Is(err, ErrDomain) {
		t.Errorf("lengths: %v", err)
	}
	if r, err := MaximumEntropy([]float64{1, 3}); err != nil || math.Abs(r.P[1]-0.75) > 1e-15 || relDiff(r.Entropy.Nats(), math.Log(4)) > 1e-15 {
		t.Errorf("no constraint: %+v, %v", r, err)
	}
}
