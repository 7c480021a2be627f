package uncertain

import (
	"math"
	"math/rand/v2"
	"slices"
	"testing"
	"time"
)

// TestMonteCarloIsFaster guards the draws in blocks by a ratio within one run:
// a product of six inputs, its logarithm, an exponential and an interval,
// against the loop that one would write for this case, draw by draw, with a
// sort for the interval. Both sides run in turn and the best of each counts.
// Usual is 0.6, with -race 1.2; the bound 2 catches blocks that were lost.
func TestMonteCarloIsFaster(t *testing.T) {
	const draws = 20_000
	in := make([]Quantity, 6)
	for i := range in {
		in[i] = Measured(1+0.1*float64(i), 0.01)
	}
	q := in[0]
	for _, x := range in[1:] {
		q = q.Times(x)
	}
	q = Log(q).Scale(8.3).Plus(in[0].Over(Exp(in[0]).Shift(-1)))
	blocks, loop := math.Inf(1), math.Inf(1)
	var width, plain float64
	for range 15 {
		start := time.Now()
		s, err := MonteCarlo(q, Draws(draws))
		if err != nil {
			t.Fatal(err)
		}
		lo, hi := s.Interval(0.95)
		width = hi - lo
		middle := time.Now()
		r := rand.New(rand.NewPCG(1, 2))
		y := make([]float64, draws)
		for k := range y {
			p, x := 1.0, 0.0
			for i := range in {
				v := 1 + 0.1*float64(i) + 0.01*r.NormFloat64()
				if i == 0 {
					x = v
				}
				p *= v
			}
			y[k] = 8.3*math.Log(p) + x/math.Expm1(x)
		}
		slices.Sort(y)
		plain = y[draws*975/1000] - y[draws*25/1000]
		blocks = min(blocks, float64(middle.Sub(start)))
		loop = min(loop, float64(time.Since(middle)))
	}
	within(t, "width of the interval", width, plain, 0.05*plain)
	t.Logf("%.0f ns a draw, loop %.0f", blocks/draws, loop/draws)
	if blocks > 2*loop {
		t.Errorf("Monte Carlo takes %.2f times a plain loop, want less than 2", blocks/loop)
	}
}
