package main

import (
	"math"
	"math/big"
)

// prec is the working precision in bits: 96 decimal digits, about twice what
// the largest cancellation below leaves over a 53-bit result.
const prec = 320

func num(x float64) *big.Float { return new(big.Float).SetPrec(prec).SetFloat64(x) }
func integer(n int) *big.Float { return new(big.Float).SetPrec(prec).SetInt64(int64(n)) }
func zero() *big.Float         { return new(big.Float).SetPrec(prec) }
func add(a, b *big.Float) *big.Float {
	return zero().Add(a, b)
}
func sub(a, b *big.Float) *big.Float { return zero().Sub(a, b) }
func mul(a, b *big.Float) *big.Float { return zero().Mul(a, b) }
func quo(a, b *big.Float) *big.Float { return zero().Quo(a, b) }
func neg(a *big.Float) *big.Float    { return zero().Neg(a) }
func sqrt(a *big.Float) *big.Float   { return zero().Sqrt(a) }

// negligible says that term no longer changes sum.
func negligible(term, sum *big.Float) bool {
	return term.Sign() == 0 || sum.Sign() != 0 && term.MantExp(nil) < sum.MantExp(nil)-prec
}

// power returns x^n for n >= 0.
func power(x *big.Float, n int) *big.Float {
	r, b := integer(1), zero().Set(x)
	for ; n > 0; n >>= 1 {
		if n&1 == 1 {
			r = mul(r, b)
		}
		b = mul(b, b)
	}
	return r
}

// exp returns e^x by halving the argument, Taylor's series and squaring.
func exp(x *big.Float) *big.Float {
	if x.Sign() == 0 {
		return integer(1)
	}
	halvings := max(0, x.MantExp(nil)+12)
	y := zero().SetMantExp(x, -halvings)
	sum, term := integer(1), integer(1)
	for n := 1; ; n++ {
		term = quo(mul(term, y), integer(n))
		if negligible(term, sum) {
			break
		}
		sum = add(sum, term)
	}
	for range halvings {
		sum = mul(sum, sum)
	}
	return sum
}

// log returns ln x for x > 0 by Newton's iteration on exp.
func log(x *big.Float) *big.Float {
	f, _ := x.Float64()
	y := num(math.Log(f))
	for range 4 { // 53, 106, 212, 424 bits
		y = add(y, sub(mul(x, exp(neg(y))), integer(1)))
	}
	return y
}

// pi is computed by Machin's formula, 4 (4 arctan 1/5 - arctan 1/239).
var pi = func() *big.Float {
	arctan := func(n int) *big.Float {
		t := quo(integer(1), integer(n))
		n2 := integer(n * n)
		sum := zero().Set(t)
		for i := 1; ; i++ {
			t = neg(quo(t, n2))
			term := quo(t, integer(2*i+1))
			if negligible(term, sum) {
				return sum
			}
			sum = add(sum, term)
		}
	}
	return mul(integer(4), sub(mul(integer(4), arctan(5)), arctan(239)))
}()

// cos returns cos x by Taylor's series, for |x| < 4.
func cos(x *big.Float) *big.Float {
	x2 := mul(x, x)
	sum, term := integer(1), integer(1)
	for n := 1; n < 400; n++ {
		term = neg(quo(mul(term, x2), integer(2*n*(2*n-1))))
		sum = add(sum, term)
	}
	return sum
}

// bernoulliOverFactorial holds B₂ₖ/(2k)! as exact fractions rounded to prec,
// from the recurrence Σⱼ₌₀ⁿ C(n+1,j) Bⱼ = 0.
var bernoulliOverFactorial = func() []*big.Float {
	const n = 320
	b := make([]*big.Rat, n+1)
	for m := range b {
		s := new(big.Rat)
		for j := range m {
			if b[j].Sign() != 0 {
				c := new(big.Int).Binomial(int64(m+1), int64(j))
				s.Add(s, new(big.Rat).Mul(new(big.Rat).SetInt(c), b[j]))
			}
		}
		if m == 0 {
			b[m] = big.NewRat(1, 1)
		} else {
			b[m] = s.Neg(s).Quo(s, big.NewRat(int64(m+1), 1))
		}
	}
	var r []*big.Float
	f := big.NewInt(1)
	for k := 0; 2*k <= n; k++ {
		if k > 0 {
			f.Mul(f, big.NewInt(int64(2*k*(2*k-1))))
		}
		q := new(big.Rat).Quo(b[2*k], new(big.Rat).SetInt(f))
		r = append(r, zero().SetRat(q))
	}
	return r
}()

// factorial returns n!.
func factorial(n int) *big.Float {
	return zero().SetInt(new(big.Int).MulRange(1, int64(max(n, 1))))
}

// halfPower returns k^(h/2).
func halfPower(k *big.Float, h int) *big.Float {
	if h < 0 {
		return quo(integer(1), halfPower(k, -h))
	}
	p := power(k, h/2)
	if h%2 == 1 {
		p = mul(p, sqrt(k))
	}
	return p
}

// eta returns Dirichlet's η(h/2) = Σ (-1)^(k-1) k^(-h/2) for h > 0 by the
// alternating-series acceleration of H. Cohen, F. Rodriguez Villegas and
// D. Zagier, Experimental Mathematics 9, 3 (2000), algorithm 1.
func eta(h int) *big.Float {
	const n = 140 // (3+√8)^-140 = 10^-107
	d := power(add(integer(3), sqrt(integer(8))), n)
	d = quo(add(d, quo(integer(1), d)), integer(2))
	b, c, s := integer(-1), neg(d), zero()
	for k := range n {
		c = sub(b, c)
		s = add(s, quo(c, halfPower(integer(k+1), h)))
		b = quo(mul(b, integer(2*(k+n)*(k-n))), integer((2*k+1)*(k+1)))
	}
	return quo(s, d)
}

// zeta returns Riemann's ζ(h/2) for h ≠ 2, by η for positive arguments and by
// ζ(1-s) = 2 (2π)^-s cos(πs/2) Γ(s) ζ(s) for the others.
func zeta(h int) *big.Float {
	switch {
	case h == 0:
		return num(-0.5)
	case h > 0:
		// ζ = η / (1 - 2^(1-h/2))
		return quo(eta(h), sub(integer(1), halfPower(integer(2), 2-h)))
	case h%4 == 0:
		return zero()
	}
	s := 2 - h // twice the s above
	r := mul(integer(2), halfPower(mul(integer(2), pi), -s))
	c := cos(quo(mul(integer(s%8), pi), integer(4)))
	return mul(mul(r, c), mul(gamma(s), zeta(s)))
}

// gamma returns Γ(h/2), h odd of either sign or even and positive.
func gamma(h int) *big.Float {
	if h%2 == 0 {
		return factorial(h/2 - 1)
	}
	g := sqrt(pi) // Γ(1/2)
	for i := 1; i < h; i += 2 {
		g = mul(g, quo(integer(i), integer(2)))
	}
	for i := -1; i >= h; i -= 2 {
		g = quo(g, quo(integer(i), integer(2)))
	}
	return g
}
