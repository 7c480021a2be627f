package solid

import (
	"math"
	"testing"
	"time"

	"levelsum/statmech/unit"
)

// TestSliceFormIsFaster guards the two fast ways of this package by ratios
// within one run: the slice form against a loop over the scalar form, and the
// rule of a phonon table against the sum over its rows. Both sides run in
// turn and the best of each counts, so that other programs on the machine
// meet both alike. Usual are a half and a fortieth, with -race 0.6 and a fifth; the bounds 1
// and a half catch a fast way that was lost.
func TestSliceFormIsFaster(t *testing.T) {
	d := Debye{Theta: 343 * unit.K}
	ts := make([]unit.Temperature, 20_000)
	for i := range ts {
		ts[i] = unit.Temperature(1 + 0.05*float64(i))
	}
	scalar := make([]unit.MolarEntropy, len(ts))
	slice, loop := best(func() {
		sinkMolar = d.HeatCapacities(ts)[7]
	}, func() {
		for i, T := range ts {
			scalar[i] = d.HeatCapacity(T)
		}
	})
	t.Logf("Debye: slice form %.1f ns a point, loop over the scalar form %.1f", slice/float64(len(ts)), loop/float64(len(ts)))
	if slice > loop {
		t.Errorf("the slice form takes %.2f times the loop over the scalar form, want less than 1", slice/loop)
	}

	table := parabola(20_001, 400, unit.THzEnergy, 1)
	p, err := NewPhonons(table)
	if err != nil {
		t.Fatal(err)
	}
	p.HeatCapacities(ts[20:120]) // makes the rule
	rule, sum := best(func() {
		sinkMolar = p.HeatCapacities(ts[20:120])[7]
	}, func() {
		for i, T := range ts[20:120] {
			c := 0.0
			for k, e := range table.Energies {
				if x := e.OverKT(T); x > 0 {
					m := math.Exp(-x)
					c += table.States[k] * x * x * m / ((1 - m) * (1 - m))
				}
			}
			scalar[i] = unit.MolarEntropy(c)
		}
	})
	t.Logf("phonons: %.0f ns a temperature, sum over the rows %.0f", rule/100, sum/100)
	if rule > sum/2 {
		t.Errorf("the rule takes %.2f of the sum over the rows, want less than 0.5", rule/sum)
	}
}

// best runs a and b in turn and returns the least nanoseconds of each.
func best(a, b func()) (na, nb float64) {
	na, nb = math.Inf(1), math.Inf(1)
	for range 15 {
		start := time.Now()
		a()
		middle := time.Now()
		b()
		na = min(na, float64(middle.Sub(start)))
		nb = min(nb, float64(time.Since(middle)))
	}
	return na, nb
}
