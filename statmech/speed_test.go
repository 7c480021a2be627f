package statmech

import (
	"math"
	"testing"
	"time"

	"levelsum/statmech/unit"
)

// TestLevelTableIsFaster guards the moments of many levels by a ratio within
// one run: 50,000 levels at a hundred temperatures, checks included, against
// the sum over the levels at each temperature, of which a tenth is run. Both
// sides run in turn and the best of each counts. Usual is a fiftieth, with -race
// an eighth; the bound is 0.3.
func TestLevelTableIsFaster(t *testing.T) {
	const n = 50_000
	e, g := make([]unit.Energy, n), make([]float64, n)
	for i := range e {
		_, f := math.Modf(float64(i) * 0.6180339887498949)
		e[i], g[i] = unit.Energy(5000*f)*unit.KelvinEnergy, float64(1+i%7)
	}
	ts := make([]unit.Temperature, 100)
	for i := range ts {
		ts[i] = unit.Temperature(100 + 7*i)
	}
	table, loop := math.Inf(1), math.Inf(1)
	var got []Reduced
	var want float64
	for range 15 {
		start := time.Now()
		l, err := NewLevels(e, g)
		if err != nil {
			t.Fatal(err)
		}
		got = l.ReducedAt(ts)
		middle := time.Now()
		for _, T := range ts[:10] {
			z := 0.0
			for i, v := range e {
				z += g[i] * math.Exp(-v.OverKT(T))
			}
			want = math.Log(z)
		}
		table = min(table, float64(middle.Sub(start)))
		loop = min(loop, 10*float64(time.Since(middle)))
	}
	if math.Abs(got[9].LogQ/want-1) > 1e-4 { // energies count from the lowest, which is near 0
		t.Errorf("ln q = %.10g, loop %.10g", got[9].LogQ, want)
	}
	t.Logf("%.2f ns a level and temperature, loop %.2f", table/n/100, loop/n/100)
	if table > 0.3*loop {
		t.Errorf("the table takes %.3f of the loop, want less than 0.3", table/loop)
	}
}
