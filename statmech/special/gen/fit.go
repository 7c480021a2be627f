package main

import (
	"math"
	"math/big"
)

// extraNodes is how many Chebyshev nodes more than coefficients are used, so
// that the coefficients kept are not aliased by the ones dropped.
const extraNodes = 4

// nodes returns the n Chebyshev nodes cos(π(i+1/2)/n).
func nodes(n int) []*big.Float {
	r := make([]*big.Float, n)
	for i := range r {
		r[i] = cos(quo(mul(integer(2*i+1), pi), integer(2*n)))
	}
	return r
}

// monomials returns the coefficients, lowest first, of the polynomial of the
// given degree in t, x = mid + half·t, that interpolates f at degree+1+extra
// Chebyshev nodes and is then truncated as a Chebyshev series.
func monomials(f func(x *big.Float) *big.Float, mid, half *big.Float, degree int) []*big.Float {
	n := degree + 1 + extraNodes
	ts := nodes(n)
	cheb := make([]*big.Float, degree+1)
	for k := range cheb {
		cheb[k] = zero()
	}
	for _, t := range ts {
		y := f(add(mid, mul(half, t)))
		// Tₖ(t) by recurrence
		p0, p1 := integer(1), zero().Set(t)
		for k := range cheb {
			cheb[k] = add(cheb[k], mul(y, p0))
			p0, p1 = p1, sub(mul(mul(integer(2), t), p1), p0)
		}
	}
	for k := range cheb {
		scale := 2
		if k == 0 {
			scale = 1
		}
		cheb[k] = quo(mul(cheb[k], integer(scale)), integer(n))
	}
	// Sum of cₖTₖ as a polynomial, T by recurrence on coefficient lists.
	sum := make([]*big.Float, degree+1)
	t0, t1 := make([]*big.Float, degree+1), make([]*big.Float, degree+1)
	for i := range sum {
		sum[i], t0[i], t1[i] = zero(), zero(), zero()
	}
	t0[0] = integer(1)
	if degree > 0 {
		t1[1] = integer(1)
	}
	for k := range cheb {
		for i := range sum {
			sum[i] = add(sum[i], mul(cheb[k], t0[i]))
		}
		t2 := make([]*big.Float, degree+1)
		for i := range t2 {
			t2[i] = neg(t0[i])
			if i > 0 {
				t2[i] = add(t2[i], mul(integer(2), t1[i-1]))
			}
		}
		t0, t1 = t1, t2
	}
	return sum
}

// onInterval returns the coefficients in x itself of such a polynomial on
// [0, end], so that the first is f(0).
func onInterval(f func(x *big.Float) *big.Float, end *big.Float, degree int) []float64 {
	half := quo(end, integer(2))
	c := monomials(f, half, half, degree)
	// p(t), t = x/half - 1: Horner's scheme on coefficient lists.
	r := make([]*big.Float, degree+1)
	for i := range r {
		r[i] = zero()
	}
	for k := degree; k >= 0; k-- {
		for i := degree; i >= 0; i-- {
			r[i] = neg(r[i])
			if i > 0 {
				r[i] = add(r[i], quo(r[i-1], half))
			}
		}
		r[0] = add(r[0], c[k])
	}
	return rounded(r)
}

func rounded(c []*big.Float) []float64 {
	r := make([]float64, len(c))
	for i := range r {
		r[i], _ = c[i].Float64()
	}
	return r
}

// segments returns one row of monomials for each of n segments of the given
// width that begin at from. Their variable is t = (x-mid)/width, |t| <= 1/2.
func segments(f func(x *big.Float) *big.Float, from, width float64, n, degree int) [][]float64 {
	r := make([][]float64, n)
	half := num(width / 2)
	for i := range r {
		mid := num(from + width*(float64(i)+0.5))
		r[i] = rounded(monomials(f, mid, half, degree))
		for k := range r[i] {
			r[i][k] = math.Ldexp(r[i][k], k)
		}
	}
	return r
}
