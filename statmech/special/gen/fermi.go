package main

import (
	"fmt"
	"math"
	"math/big"
)

// This file makes the tables of the Fermi-Dirac integrals
// F_j(η) = 1/Γ(j+1) ∫₀^∞ tʲ/(e^(t-η)+1) dt. Orders are given doubled, h = 2j.

// etaOf holds Dirichlet's η(h/2) of the positive arguments used below.
var etaOf = map[int]*big.Float{}

func dirichlet(h int) *big.Float {
	if h <= 0 { // an even h: η(-n) = (2ⁿ⁺¹-1) Bₙ₊₁/(n+1), B₁ = +1/2
		n := -h / 2
		if n == 0 {
			return num(0.5)
		}
		if n%2 == 0 {
			return zero()
		}
		f := sub(power(integer(2), n+1), integer(1))
		return mul(mul(f, bernoulliOverFactorial[(n+1)/2]), factorial(n))
	}
	if etaOf[h] == nil {
		etaOf[h] = eta(h)
	}
	return etaOf[h]
}

// fermiOverY returns F_j/y, y = e^η, for 0 <= y <= e^-1 by the series
// Σ (-1)ᵏ yᵏ/(k+1)^(j+1).
func fermiOverY(h int, y *big.Float) *big.Float {
	sum, p := integer(1), integer(1)
	for k := 1; ; k++ {
		p = neg(mul(p, y))
		term := quo(p, inverseRoots.power(k+1, h+2))
		if negligible(term, sum) {
			return sum
		}
		sum = add(sum, term)
	}
}

// rootTable remembers square roots of integers.
type rootTable map[int]*big.Float

var inverseRoots = rootTable{}

// power returns k^(h/2).
func (r rootTable) power(k, h int) *big.Float {
	p := power(integer(k), h/2)
	if h%2 == 0 {
		return p
	}
	if r[k] == nil {
		r[k] = sqrt(integer(k))
	}
	return mul(p, r[k])
}

// fermi returns F_j(η).
func fermi(h int, x *big.Float) *big.Float {
	switch {
	case x.Cmp(integer(-1)) <= 0:
		y := exp(x)
		return mul(y, fermiOverY(h, y))
	case h%2 != 0:
		return trapezoid(h, x)
	case x.Sign() > 0:
		// F_j(η) = Σₖ c η^(j+1-2k)/(j+1-2k)! + (-1)ʲ F_j(-η), c = 2 η(2k), 1 for k = 0
		j := h / 2
		sum := zero()
		for k := 0; 2*k <= j+1; k++ {
			c := integer(1)
			if k > 0 {
				c = mul(integer(2), dirichlet(4*k))
			}
			sum = add(sum, quo(mul(c, power(x, j+1-2*k)), factorial(j+1-2*k)))
		}
		f := fermi(h, neg(x))
		if j%2 == 0 {
			return add(sum, f)
		}
		return sub(sum, f)
	}
	// Σ η(j+1-k) ηᵏ/k!, radius of convergence π
	sum, p := zero(), integer(1)
	for k := 0; k < 310; k++ {
		if k > 0 {
			p = quo(mul(p, x), integer(k))
		}
		sum = add(sum, mul(p, dirichlet(h+2-2*k)))
	}
	return sum
}

// trapezoid returns F_j for half-integer j as 1/Γ(j+1) ∫ u^(2j+1)/(e^(u²-η)+1) du
// over the whole line by equal steps 2π Im√(η+iπ)/100: the nearest pole then
// leaves an error of e^-100. The exponentials come from a recurrence.
func trapezoid(h int, x *big.Float) *big.Float {
	const digits = 100
	im := sqrt(quo(sub(sqrt(add(mul(x, x), mul(pi, pi))), x), integer(2)))
	step := quo(mul(mul(integer(2), pi), im), integer(digits))
	s2 := mul(step, step)
	factor := exp(s2)            // e^(step² (2k+1)), k = 0
	ratio := mul(factor, factor) // its ratio
	e := exp(neg(x))             // e^(u²-η), u = 0
	u2, du2 := zero(), zero().Set(s2)
	two := mul(integer(2), s2)
	sum := zero()
	limit := exp(integer(digits + 30))
	for k := 0; e.Cmp(limit) < 0; k++ {
		term := power(u2, (h+1)/2)
		term = quo(term, add(e, integer(1)))
		if k == 0 {
			term = quo(term, integer(2))
		}
		sum = add(sum, term)
		e = mul(e, factor)
		factor = mul(factor, ratio)
		u2 = add(u2, du2)
		du2 = add(du2, two)
	}
	return quo(mul(mul(integer(2), step), sum), gamma(h+2))
}

// sommerfeld returns the coefficients of Sommerfeld's expansion
// F_j(η) = η^(j+1) Σ cₖ η^(-2k), cₖ = 2 η(2k)/Γ(j+2-2k), c₀ = 1/Γ(j+2).
func sommerfeld(h, terms int) []float64 {
	r := make([]float64, terms)
	for k := range r {
		c := integer(1)
		if k > 0 {
			c = mul(integer(2), dirichlet(4*k))
		}
		g := h + 4 - 4*k
		if g%2 == 0 && g <= 0 {
			break // 1/Γ of a pole
		}
		r[k], _ = quo(c, gamma(g)).Float64()
	}
	return r
}

// inverseHalf returns η with F_1/2(η) = F by Newton's iteration from start.
func inverseHalf(F *big.Float, start float64) *big.Float {
	x := num(start)
	for range 50 {
		d := quo(sub(fermi(1, x), F), fermi(-1, x))
		x = sub(x, d)
		if d.Sign() == 0 || d.MantExp(nil) < -120 { // quadratic: the next is below 2^-240
			break
		}
	}
	return x
}

func fermiTables() {
	const segs, degree, low, terms = 88, 11, 12, 13
	for _, h := range []int{-1, 1, 2, 3, 4, 6} {
		name := fmt.Sprintf("fermi%d", h)
		if h < 0 {
			name = fmt.Sprintf("fermiM%d", -h)
		}
		order := fmt.Sprintf("order %d/2", h)
		write("table_"+name+".go",
			table{
				name: name + "Low",
				doc:  "holds F/y as a polynomial in y = exp(eta) for eta < -2, " + order,
				rows: [][]float64{onInterval(func(y *big.Float) *big.Float { return fermiOverY(h, y) }, exp(integer(-2)), low)},
			},
			table{
				name: name + "Mid",
				doc:  "holds F on segments of width 1/2 from -2, in t = 2(eta+2)-(i+1/2), " + order,
				rows: segments(func(x *big.Float) *big.Float { return fermi(h, x) }, -2, 0.5, segs, degree),
			},
			table{
				name: name + "High",
				doc:  "holds Sommerfeld's coefficients in powers of 1/eta^2, " + order,
				rows: [][]float64{sommerfeld(h, terms)},
			})
	}
}

// inverseTables makes the inverse of F_1/2 as a function of F up to 1/e and of
// ln F beyond.
func inverseTables() {
	low := func(f *big.Float) *big.Float { // (η - ln F)/F
		g, _ := f.Float64()
		lnf := log(f)
		start, _ := lnf.Float64()
		return quo(sub(inverseHalf(f, start+0.3535*g), lnf), f)
	}
	mid := func(t *big.Float) *big.Float {
		f := exp(t)
		g, _ := f.Float64()
		return inverseHalf(f, max(math.Log(g), math.Pow(1.329340388*g, 2.0/3)))
	}
	write("table_fermiinverse.go",
		table{
			name: "fermiInverseLow",
			doc:  "holds (eta - ln F)/F as a polynomial in F = F_1/2 up to 1/e",
			rows: [][]float64{onInterval(low, exp(integer(-1)), 12)},
		},
		table{
			name: "fermiInverseMid",
			doc:  "holds eta on segments of ln F_1/2 of width 1/4 from -1, in t = 4(ln F+1)-(i+1/2)",
			rows: segments(mid, -1, 0.25, 28, 11),
		})
}
