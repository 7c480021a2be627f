package main

import (
	"fmt"
	"math/big"
)

// This file makes the tables of the Bose functions Li_s(z) = Σ zᵏ/kˢ. Orders
// are given doubled, h = 2s.

// boseOverZ returns Li_s(z)/z for -1 <= z <= 3/4.
func boseOverZ(h int, z *big.Float) *big.Float {
	if z.Cmp(num(-0.5)) < 0 {
		return quo(fermi(h-2, log(neg(z))), neg(z)) // Li_s(-y) = -F_(s-1)(ln y)
	}
	sum, p := integer(1), integer(1)
	for k := 2; ; k++ {
		p = mul(p, z)
		term := quo(p, inverseRoots.power(k, h))
		if negligible(term, sum) {
			return sum
		}
		sum = add(sum, term)
	}
}

// boseRegular returns the part of Li_s(e^-α) without a branch point at α = 0,
//
//	Σ ζ(s-k) (-α)ᵏ/k!
//
// where for an integer s the term k = s-1 has H_(s-1) in place of ζ(1). What is
// left is Γ(1-s) α^(s-1), or -(-α)^(s-1)/(s-1)! ln α for an integer s.
func boseRegular(h int, alpha *big.Float) *big.Float {
	sum, p := zero(), integer(1)
	for k := range 130 { // (ln 2/2π)^130 = 10^-124
		if k > 0 {
			p = neg(quo(mul(p, alpha), integer(k)))
		}
		c := zetaOf(h - 2*k)
		sum = add(sum, mul(p, c))
	}
	return sum
}

var zetaMemo = map[int]*big.Float{}

func zetaOf(h int) *big.Float {
	if zetaMemo[h] == nil {
		switch {
		case h == 2:
			panic("the pole of zeta belongs to the branch of boseRegular's caller")
		case h < 0 && h%2 == 0: // ζ(-n) = -Bₙ₊₁/(n+1)
			n := -h / 2
			z := zero()
			if n%2 == 1 {
				z = neg(mul(bernoulliOverFactorial[(n+1)/2], factorial(n)))
			}
			zetaMemo[h] = z
		default:
			zetaMemo[h] = zeta(h)
		}
	}
	return zetaMemo[h]
}

// branch returns Γ(1-s) x^(s-1) for s = 1/2, 3/2, 5/2.
func branch(h int, x *big.Float) *big.Float {
	root := sqrt(mul(pi, x))
	switch h {
	case 1:
		return quo(root, x)
	case 3:
		return mul(integer(-2), root)
	}
	return quo(mul(mul(integer(4), root), x), integer(3))
}

func boseTables() {
	for _, h := range []int{1, 3, 4, 5, 6} {
		regular := func(alpha *big.Float) *big.Float { return boseRegular(h, alpha) }
		if h%2 == 0 {
			harmonic := zero()
			for i := 1; i < h/2; i++ {
				harmonic = add(harmonic, quo(integer(1), integer(i)))
			}
			zetaMemo[2] = harmonic
		}
		name := fmt.Sprintf("bose%d", h)
		write("table_"+name+".go",
			table{
				name: name + "Mid",
				doc:  fmt.Sprintf("holds Li_s(z)/z on segments of width 1/8 from -1, in t = 8(z+1)-(i+1/2), s = %d/2", h),
				rows: segments(func(z *big.Float) *big.Float { return boseOverZ(h, z) }, -1, 0.125, 12, 12),
			},
			table{
				name: name + "One",
				doc:  fmt.Sprintf("holds the regular part of Li_s(exp(-alpha)) as a polynomial in alpha up to ln 2, s = %d/2", h),
				rows: [][]float64{onInterval(regular, log(integer(2)), 12)},
			})
		delete(zetaMemo, 2)
		if h%2 == 0 {
			continue
		}
		// The same in δ = 1-z, without a logarithm: α = -ln(1-δ).
		alpha := func(delta *big.Float) *big.Float { return neg(log(sub(integer(1), delta))) }
		write("table_"+name+"near.go",
			table{
				name: name + "Upper",
				doc:  fmt.Sprintf("holds Li_s(z)/z on segments of width 1/16 from 1/2, in t = 16(z-1/2)-(i+1/2), s = %d/2", h),
				rows: segments(func(z *big.Float) *big.Float { return boseOverZ(h, z) }, 0.5, 0.0625, 4, 12),
			},
			table{
				name: name + "NearRegular",
				doc:  fmt.Sprintf("holds the regular part of Li_s(1-delta) on segments of width 1/8 from 0, in t = 8 delta-(i+1/2), s = %d/2", h),
				rows: segments(func(delta *big.Float) *big.Float { return regular(alpha(delta)) }, 0, 0.125, 3, 12),
			},
			table{
				name: name + "NearBranch",
				doc:  fmt.Sprintf("holds Gamma(1-s) (-ln(1-delta)/delta)^(s-1) on the same segments, s = %d/2", h),
				rows: segments(func(delta *big.Float) *big.Float { return branch(h, quo(alpha(delta), delta)) }, 0, 0.125, 3, 12),
			})
	}
}
