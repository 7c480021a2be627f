package lattice

import (
	"math"
	"math/rand/v2"
	"strings"
	"testing"

	"levelsum/statmech/unit"
)

// TestWithheld: no standard uncertainty from a short series, from one that
// never changes, and a word about one that began far from equilibrium.
func TestWithheld(t *testing.T) {
	estimates := func(m Torus, T unit.Temperature, before, n int) *Estimates {
		t.Helper()
		s, err := NewSimulation(m, T, 1)
		if err != nil {
			t.Fatal(err)
		}
		s.Sweep(before)
		est, err := s.Sample(n).Estimates()
		if err != nil {
			t.Fatal(err)
		}
		return est
	}
	if e := estimates(Torus{kelvin, 64, 64}, 2.27*unit.K, 100, 300); e.Magnetisation.Withheld() == "" {
		t.Errorf("300 sweeps at Tc: %v", e.Magnetisation)
	}
	if e := estimates(Torus{kelvin, 8, 8}, 0.1*unit.K, 0, 300); e.Energy.Withheld() == "" || e.Energy.Value() != -2 {
		t.Errorf("at 0.1 J/k: %v", e.Energy)
	}
	warned := func(e *Estimates) bool { return strings.Contains(strings.Join(e.Warnings, " "), "not in equilibrium") }
	if e := estimates(Torus{kelvin, 128, 128}, 3*unit.K, 0, 200); !warned(e) {
		t.Errorf("from the ground state at once: %v", e.Warnings)
	}
	if e := estimates(Torus{kelvin, 128, 128}, 3*unit.K, 500, 1000); warned(e) {
		t.Errorf("in equilibrium: %v", e.Warnings)
	}
}

// TestMeanCoverage: for autoregressive series x ← ρx + ξ, whose τ is
// ½(1+ρ)/(1-ρ), u is what the means of 300 series scatter by.
func TestMeanCoverage(t *testing.T) {
	r := rand.New(rand.NewPCG(5, 6))
	for _, test := range []struct {
		rho float64
		n   int
	}{{0, 200}, {0.9, 2000}, {0.98, 10000}} {
		const series = 300
		within, taus, flat := 0, 0.0, 0
		for range series {
			x := make([]float64, test.n)
			v := r.NormFloat64() / math.Sqrt(1-test.rho*test.rho)
			for i := range x {
				x[i] = 3 + v
				v = test.rho*v + r.NormFloat64()
			}
			m, err := MeanOf(x)
			if err != nil {
				t.Fatal(err)
			}
			if math.Abs(m.Value-3) < m.U {
				within++
			}
			taus += m.Tau / series
			blocks, err := Blocks(x)
			if err != nil {
				t.Fatal(err)
			}
			// Blocks of about 12 τ: within four of their standard uncertainties.
			for _, b := range blocks {
				if l := float64(b.Length); l >= 12*m.Tau && l < 24*m.Tau && math.Abs(b.U-m.U) < 4*b.UU {
					flat++
				}
			}
		}
		want := (1 + test.rho) / (1 - test.rho) / 2
		t.Logf("ρ = %g: %d of 300 within u, τ = %.3g, want %.3g, %d of 300 agree with blocks", test.rho, within, taus, want, flat)
		if f := 100 * float64(within) / series; f < 63 || f > 73 {
			t.Errorf("ρ = %g: %.1f of 100 within u, want 68 ± 5", test.rho, f)
		}
		// From 200 τ the correction of the bias makes τ 5 % too large on the
		// average, u half as much; a mean of 300 scatters by 2 %.
		closeTo(t, "τ", taus, want, 0.12, 0)
		if flat < 285 {
			t.Errorf("ρ = %g: %d of 300 series have blocks that agree", test.rho, flat)
		}
	}
	for _, x := range [][]float64{nil, {1}, {1, math.NaN()}, {math.Inf(1), 1}} {
		if _, err := MeanOf(x); err == nil {
			t.Errorf("%v: no error", x)
		}
		if _, err := Blocks(x); err == nil {
			t.Errorf("%v: no error", x)
		}
	}
}
