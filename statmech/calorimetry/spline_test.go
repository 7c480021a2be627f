package calorimetry

import (
	"math"
	"testing"
)

func weighted(w, y []float64) float64 {
	var s float64
	for i := range w {
		s += w[i] * y[i]
	}
	return s
}

// TestSplineCubic: a not-a-knot spline is exact for a cubic (a parabola for
// three points, a line for two): values, slopes, integrals.
func TestSplineCubic(t *testing.T) {
	x := []float64{0, 0.4, 1, 1.1, 2, 3.7}
	for n := 2; n <= len(x); n++ {
		c := []float64{1.5, -2, 0.7, 0.25}
		if n < 4 {
			c = c[:n]
		}
		f := func(v float64) (s float64) {
			for i := len(c) - 1; i >= 0; i-- {
				s = s*v + c[i]
			}
			return s
		}
		df := func(v float64) (s float64) {
			for i := len(c) - 1; i >= 1; i-- {
				s = s*v + float64(i)*c[i]
			}
			return s
		}
		F := func(v float64) (s float64) {
			for i, ci := range c {
				s += ci * math.Pow(v, float64(i+1)) / float64(i+1)
			}
			return s
		}
		y := make([]float64, n)
		for i := range y {
			y[i] = f(x[i])
		}
		sp := newSpline(x[:n])
		for i, m := range sp.moments(y) {
			second := 0.0
			for k := 2; k < len(c); k++ {
				second += float64(k*(k-1)) * c[k] * math.Pow(x[i], float64(k-2))
			}
			if math.Abs(m-second) > 1e-11 {
				t.Errorf("%d points: second derivative at %g = %.15g, want %.15g", n, x[i], m, second)
			}
		}
		for _, v := range []float64{-0.2, 0.1, 0.4, 0.95, 1.8, 3.9} {
			if got := weighted(sp.at(v), y); math.Abs(got-f(v)) > 1e-13*40 {
				t.Errorf("%d points: value at %g = %.15g, want %.15g", n, v, got, f(v))
			}
			if got := weighted(sp.slope(v), y); math.Abs(got-df(v)) > 1e-13*40 {
				t.Errorf("%d points: slope at %g = %.15g, want %.15g", n, v, got, df(v))
			}
			got := weighted(sp.integral(-0.1, v, func(float64) float64 { return 1 }), y)
			if want := F(v) - F(-0.1); math.Abs(got-want) > 1e-13*40 {
				t.Errorf("%d points: integral to %g = %.15g, want %.15g", n, v, got, want)
			}
		}
	}
}
