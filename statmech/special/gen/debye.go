package main

import (
	"fmt"
	"math/big"
)

// debye returns Debye's function Dₙ(x) = (n/xⁿ) ∫₀ˣ tⁿ/(eᵗ-1) dt. Below 2 the
// series in Bernoulli numbers is used (radius of convergence 2π), above it
//
//	Dₙ = (n/xⁿ) [ n! ζ(n+1) - Σₖ e^(-kx) Σₘ n!/(n-m)! x^(n-m)/k^(m+1) ].
func debye(n int, x *big.Float) *big.Float {
	if x.Cmp(integer(2)) < 0 {
		x2, p := mul(x, x), integer(1)
		sum := sub(integer(1), quo(mul(integer(n), x), integer(2*(n+1))))
		for k := 1; ; k++ {
			p = mul(p, x2)
			term := quo(mul(integer(n), mul(bernoulliOverFactorial[k], p)), integer(n+2*k))
			if negligible(term, sum) {
				return sum
			}
			sum = add(sum, term)
		}
	}
	total := mul(factorial(n), zetaInteger[n+1])
	e := exp(neg(x))
	ek := integer(1)
	for k := 1; ; k++ {
		ek = mul(ek, e)
		inner := zero()
		for m := 0; m <= n; m++ {
			c := quo(factorial(n), factorial(n-m))
			inner = add(inner, quo(mul(c, power(x, n-m)), power(integer(k), m+1)))
		}
		term := mul(ek, inner)
		if negligible(term, total) {
			break
		}
		total = sub(total, term)
	}
	return quo(mul(integer(n), total), power(x, n))
}

var zetaInteger = func() map[int]*big.Float {
	m := map[int]*big.Float{}
	for n := 2; n <= 7; n++ {
		m[n] = zeta(2 * n)
	}
	return m
}()

// bose1 returns x/(eˣ-1).
func bose1(x *big.Float) *big.Float {
	return quo(x, sub(exp(x), integer(1)))
}

// debyeHeatCapacity returns C/R of one mode of a Debye solid in d dimensions,
// (d+1) D_d(x) - d x/(eˣ-1).
func debyeHeatCapacity(d int, x *big.Float) *big.Float {
	return sub(mul(integer(d+1), debye(d, x)), mul(integer(d), bose1(x)))
}

// einsteinHeatCapacity returns x² eˣ/(eˣ-1)².
func einsteinHeatCapacity(x *big.Float) *big.Float {
	b := bose1(x)
	return mul(mul(b, b), exp(x))
}

func einsteinTable() {
	writeTo("heats", "../internal/heats/table_einstein.go", table{
		name: "einsteinTable",
		doc:  "holds x^2 exp(x)/(exp(x)-1)^2 on segments of width 1/4 from 0, in t = 4x-(i+1/2)",
		rows: segments(einsteinHeatCapacity, 0, 0.25, 180, 8),
	})
}

func debyeTables() {
	const degree = 8
	for n := 1; n <= 6; n++ {
		segs := 200
		if n > 3 {
			segs = 240
		}
		write(fmt.Sprintf("table_debye%d.go", n), table{
			name: fmt.Sprintf("debyeD%d", n),
			doc:  fmt.Sprintf("holds D_%d(x) on segments of width 1/4 from 0, in t = 4x-(i+1/2)", n),
			rows: segments(func(x *big.Float) *big.Float { return debye(n, x) }, 0, 0.25, segs, degree),
		})
	}
	for d := 1; d <= 3; d++ {
		writeTo("heats", fmt.Sprintf("../internal/heats/table_debyec%d.go", d), table{
			name: fmt.Sprintf("debyeC%d", d),
			doc:  fmt.Sprintf("holds C/R per mode in %d dimensions on segments of width 1/4 from 0, in t = 4x-(i+1/2)", d),
			rows: segments(func(x *big.Float) *big.Float { return debyeHeatCapacity(d, x) }, 0, 0.25, 200, degree),
		})
	}
}
