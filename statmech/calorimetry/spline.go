package calorimetry

import (
	"math"
	"sort"
)

// spline is the cubic through points with the third derivative continuous at
// the second and the last but one ("not a knot"): it reproduces every cubic.
// Its value, and every integral over it, is a weighted sum of the ordinates;
// weights are what this type gives, so that uncertainties and their
// correlations follow exactly.
//
// Reference: C. de Boor, A Practical Guide to Splines, Springer (1978), ch. IV.
type spline struct {
	x, h []float64
	// The second derivatives M at the inner points solve a tridiagonal system;
	// M at the ends is linear in its neighbours.
	lower, diag, upper []float64
}

// newSpline needs at least two points in increasing order of x.
func newSpline(x []float64) *spline {
	n := len(x)
	s := &spline{x: x, h: make([]float64, n-1)}
	for i := range s.h {
		s.h[i] = x[i+1] - x[i]
	}
	if n < 4 {
		return s
	}
	k := n - 2
	s.lower, s.diag, s.upper = make([]float64, k), make([]float64, k), make([]float64, k)
	for i := range k {
		h0, h1 := s.h[i], s.h[i+1]
		s.lower[i], s.diag[i], s.upper[i] = h0, 2*(h0+h1), h1
	}
	h0, h1 := s.h[0], s.h[1]
	s.diag[0] += h0 * (1 + h0/h1)
	s.upper[0] -= h0 * h0 / h1
	g1, g0 := s.h[n-2], s.h[n-3]
	s.diag[k-1] += g1 * (1 + g1/g0)
	s.lower[k-1] -= g1 * g1 / g0
	return s
}

// spread returns the weights of the ordinates for Σ wy[i]·y[i] + Σ wm[i]·M[i].
func (s *spline) spread(wy, wm []float64) []float64 {
	n := len(s.x)
	w := append([]float64(nil), wy...)
	switch {
	case n == 2:
		return w // straight line: M = 0
	case n == 3:
		// Parabola: one second derivative everywhere.
		c := 2 / (s.h[0] + s.h[1])
		m := wm[0] + wm[1] + wm[2]
		w[0] += m * c / s.h[0]
		w[1] -= m * c * (1/s.h[0] + 1/s.h[1])
		w[2] += m * c / s.h[1]
		return w
	}
	k := n - 2
	b := append([]float64(nil), wm[1:n-1]...)
	r0 := s.h[0] / s.h[1]
	b[0] += wm[0] * (1 + r0)
	b[1] -= wm[0] * r0
	r1 := s.h[n-2] / s.h[n-3]
	b[k-1] += wm[n-1] * (1 + r1)
	b[k-2] -= wm[n-1] * r1
	v := solveTransposed(s.lower, s.diag, s.upper, b)
	// Right-hand side of row i: 6 (Δy[i+1]/h[i+1] - Δy[i]/h[i]).
	for i, vi := range v {
		w[i] += 6 * vi / s.h[i]
		w[i+1] -= 6 * vi * (1/s.h[i] + 1/s.h[i+1])
		w[i+2] += 6 * vi / s.h[i+1]
	}
	return w
}

// solveTransposed solves Aᵀv = b for the tridiagonal A with the given bands;
// row i of A is lower[i], diag[i], upper[i].
func solveTransposed(lower, diag, upper, b []float64) []float64 {
	n := len(diag)
	d, v := append([]float64(nil), diag...), append([]float64(nil), b...)
	for i := 1; i < n; i++ { // of Aᵀ: below the diagonal upper[i-1], above lower[i]
		f := upper[i-1] / d[i-1]
		d[i] -= f * lower[i]
		v[i] -= f * v[i-1]
	}
	for i := n - 1; i >= 0; i-- {
		if i < n-1 {
			v[i] -= lower[i+1] * v[i+1]
		}
		v[i] /= d[i]
	}
	return v
}

// moments returns the second derivatives for ordinates y.
func (s *spline) moments(y []float64) []float64 {
	n := len(s.x)
	m := make([]float64, n)
	switch n {
	case 2:
		return m
	case 3:
		v := 2 * ((y[2]-y[1])/s.h[1] - (y[1]-y[0])/s.h[0]) / (s.h[0] + s.h[1])
		return []float64{v, v, v}
	}
	k := n - 2
	d, v := append([]float64(nil), s.diag...), make([]float64, k)
	for i := range v {
		v[i] = 6 * ((y[i+2]-y[i+1])/s.h[i+1] - (y[i+1]-y[i])/s.h[i])
	}
	for i := 1; i < k; i++ {
		f := s.lower[i] / d[i-1]
		d[i] -= f * s.upper[i-1]
		v[i] -= f * v[i-1]
	}
	for i := k - 1; i >= 0; i-- {
		if i < k-1 {
			v[i] -= s.upper[i] * v[i+1]
		}
		v[i] /= d[i]
	}
	copy(m[1:], v)
	m[0] = m[1] + (m[1]-m[2])*s.h[0]/s.h[1]
	m[n-1] = m[n-2] + (m[n-2]-m[n-3])*s.h[n-2]/s.h[n-3]
	return m
}

// segment returns the interval whose cubic serves x; outside the points the
// first and the last one.
func (s *spline) segment(x float64) int {
	i := sort.SearchFloat64s(s.x, x) - 1
	return max(0, min(len(s.h)-1, i))
}

// basis adds f times the value of the cubic of segment i at x to wy and wm.
func (s *spline) basis(i int, x, f float64, wy, wm []float64) {
	h := s.h[i]
	a, b := (s.x[i+1]-x)/h, (x-s.x[i])/h
	wy[i] += f * a
	wy[i+1] += f * b
	wm[i] += f * a * (a*a - 1) * h * h / 6
	wm[i+1] += f * b * (b*b - 1) * h * h / 6
}

// at returns the weights of the value at x.
func (s *spline) at(x float64) []float64 {
	wy, wm := make([]float64, len(s.x)), make([]float64, len(s.x))
	s.basis(s.segment(x), x, 1, wy, wm)
	return s.spread(wy, wm)
}

// slope returns the weights of the derivative at x.
func (s *spline) slope(x float64) []float64 {
	n := len(s.x)
	wy, wm := make([]float64, n), make([]float64, n)
	i := s.segment(x)
	h := s.h[i]
	a, b := (s.x[i+1]-x)/h, (x-s.x[i])/h
	wy[i] -= 1 / h
	wy[i+1] += 1 / h
	wm[i] -= (3*a*a - 1) * h / 6
	wm[i+1] += (3*b*b - 1) * h / 6
	return s.spread(wy, wm)
}

// Gauss-Legendre nodes and weights of order 8 on [-1, 1] (Abramowitz & Stegun,
// table 25.4).
var (
	gaussX = [4]float64{0.1834346424956498, 0.5255324099163290, 0.7966664774136267, 0.9602898564975363}
	gaussW = [4]float64{0.3626837833783620, 0.3137066458778873, 0.2223810344533745, 0.1012285362903763}
)

// integral returns the weights of ∫ f(x)·spline(x) dx from a to b, exact for
// the spline where f is a polynomial of degree up to 12.
func (s *spline) integral(a, b float64, f func(x float64) float64) []float64 {
	n := len(s.x)
	wy, wm := make([]float64, n), make([]float64, n)
	sign := 1.0
	if b < a {
		a, b, sign = b, a, -1
	}
	for i := range s.h {
		lo, hi := s.x[i], s.x[i+1]
		if i == 0 {
			lo = math.Inf(-1)
		}
		if i == n-2 {
			hi = math.Inf(1)
		}
		lo, hi = max(lo, a), min(hi, b)
		if hi <= lo {
			continue
		}
		half, mid := (hi-lo)/2, (hi+lo)/2
		for k, g := range gaussX {
			for _, t := range [2]float64{-g, g} {
				x := mid + half*t
				s.basis(i, x, sign*gaussW[k]*half*f(x), wy, wm)
			}
		}
	}
	return s.spread(wy, wm)
}
