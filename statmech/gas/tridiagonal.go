package gas

import (
	"math"
	"sort"
)

// A tridiagonal is a real symmetric tridiagonal matrix on its way to its
// eigenvalues: d is the diagonal, and the squares of the elements beside it are
// in s. Rows should be ordered from small to large diagonal elements.
type tridiagonal struct {
	d, s   []float64 // s[len(d)-1] is 0
	scale  float64   // what d was divided by, a power of two
	l, m   int       // the unreduced block whose first element is sought
	sweeps int       // left
	failed bool
	sigma  float64 // shift of the sweep
}

const sweepsPerEigenvalue = 30

// newTridiagonal takes d and the off-diagonal elements e, which it squares in
// place; e has the length of d, the last element is not used.
func newTridiagonal(d, e []float64) *tridiagonal {
	t := &tridiagonal{d: d, s: e, l: 0, sweeps: sweepsPerEigenvalue * len(d), scale: 1}
	largest := 0.0
	for i := range d {
		largest = max(largest, math.Abs(d[i]), math.Abs(e[i]))
	}
	if largest > 0 {
		_, exponent := math.Frexp(largest)
		t.scale = math.Ldexp(1, exponent)
	}
	for i := range d {
		d[i] /= t.scale
		e[i] /= t.scale
		e[i] *= e[i]
	}
	if len(d) > 0 {
		e[len(d)-1] = 0
	}
	return t
}

// next finds the block and the shift of the next sweep. It returns false when
// all eigenvalues are found, or the sweeps are spent.
func (t *tridiagonal) next() bool {
	const eps2 = 0x1p-106 // 2⁻⁵³ squared
	n := len(t.d)
	for t.l < n {
		m := t.l
		for m < n-1 && t.s[m] > eps2*math.Abs(t.d[m]*t.d[m+1]) {
			m++
		}
		if m < n-1 {
			t.s[m] = 0
		}
		if m == t.l {
			t.l++
			continue
		}
		if t.sweeps == 0 {
			t.failed = true
			return false
		}
		t.sweeps--
		t.m = m
		root := math.Sqrt(t.s[t.l])
		g := (t.d[t.l+1] - t.d[t.l]) / (2 * root)
		t.sigma = t.d[t.l] - root/(g+math.Copysign(math.Sqrt(float64(g*g)+1), g))
		return true
	}
	return false
}

// A chain is where a sweep stands: the quantities that one step hands to the
// next.
type chain struct{ c, s, gamma, p float64 }

// start begins a sweep at the lower end of the block.
func (t *tridiagonal) start() chain {
	gamma := t.d[t.m] - t.sigma
	return chain{c: 1, gamma: gamma, p: gamma * gamma}
}

// step is a step of the root-free QL algorithm at row i.
func step(k chain, square, alpha, sigma float64) (next chain, above, diagonal float64) {
	r := k.p + square
	c, s := k.p/r, square/r
	gamma := float64(c*(alpha-sigma)) - float64(s*k.gamma)
	p := k.c * square
	if c != 0 {
		p = float64(gamma*gamma) / c
	}
	return chain{c, s, gamma, p}, k.s * r, k.gamma + (alpha - gamma)
}

// finish runs the sweep from row i, where it stands at k, to the upper end.
func (t *tridiagonal) finish(k chain, i int) {
	for ; i >= t.l; i-- {
		var above, diagonal float64
		k, above, diagonal = step(k, t.s[i], t.d[i], t.sigma)
		if i != t.m-1 {
			t.s[i+1] = above
		}
		t.d[i+1] = diagonal
	}
	t.s[t.l] = k.s * k.p
	t.d[t.l] = t.sigma + k.gamma
}

// eigenvaluesOf returns the eigenvalues of each matrix in ascending order, nil
// for one that did not converge, and destroys the matrices. It is the root-free
// QL algorithm with Wilkinson's shift in the form of Pal, Walker and Kahan (B.
// N. Parlett, The Symmetric Eigenvalue Problem, SIAM (1998), 8.15). Every step
// waits for two divisions of the step before, so two matrices are swept side by
// side, which takes hardly longer than one.
func eigenvaluesOf(ts []*tridiagonal) [][]float64 {
	waiting := ts
	var a, b *tridiagonal
	refill := func(t *tridiagonal) *tridiagonal {
		for {
			if t != nil && t.next() {
				return t
			}
			if len(waiting) == 0 {
				return nil
			}
			t, waiting = waiting[0], waiting[1:]
		}
	}
	for {
		a, b = refill(a), refill(b)
		switch {
		case a == nil && b == nil:
			out := make([][]float64, len(ts))
			for i, t := range ts {
				out[i] = t.values()
			}
			return out
		case a == nil:
			b.finish(b.start(), b.m-1)
		case b == nil:
			a.finish(a.start(), a.m-1)
		default:
			sweepBoth(a, b)
		}
	}
}

// sweepBoth does a sweep of each.
func sweepBoth(a, b *tridiagonal) {
	x, y := a.start(), b.start()
	i, j := a.m-1, b.m-1
	ad, as, bd, bs := a.d, a.s, b.d, b.s
	ar, br := as[i+1], bs[j+1] // not to be written by the first step
	for both := min(i-a.l, j-b.l) + 1; both > 0; both-- {
		x, as[i+1], ad[i+1] = step(x, as[i], ad[i], a.sigma)
		y, bs[j+1], bd[j+1] = step(y, bs[j], bd[j], b.sigma)
		i, j = i-1, j-1
	}
	as[a.m], bs[b.m] = ar, br
	a.finish(x, i)
	b.finish(y, j)
}

func (t *tridiagonal) values() []float64 {
	if t.failed {
		return nil
	}
	for i := range t.d {
		t.d[i] *= t.scale
	}
	sort.Float64s(t.d)
	return t.d
}
