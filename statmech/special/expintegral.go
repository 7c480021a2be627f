package special

import "math"

// ExpIntegral returns the exponential integral of order n = 1 or 2,
//
//	E_n(x) = ∫₁^∞ e^(-xt)/tⁿ dt.
//
// Special cases are:
//
//	ExpIntegral(1, 0) = +Inf
//	ExpIntegral(2, 0) = 1
//	ExpIntegral(n, +Inf) = 0
//	ExpIntegral(n, x) = NaN for x < 0, for NaN and for any other order
//
// Accuracy: 12 eps relative (TestExpIntegralAccuracy, x from 1e-12 to 700).
//
// Reference: NIST Digital Library of Mathematical Functions, equations 6.6.2
// (x <= 1), 8.19.17 (continued fraction) and 8.19.12 (recurrence).
func ExpIntegral(n int, x float64) float64 {
	switch {
	case !(x >= 0) || n < 1 || n > 2:
		return math.NaN()
	case math.IsInf(x, 1):
		return 0
	case x == 0:
		if n == 2 {
			return 1
		}
		return math.Inf(1)
	case x > 1:
		return math.Exp(-x) * expIntegralFraction(float64(n), x)
	}
	// E₁ = -γ - ln x - Σ (-x)ᵏ/(k k!)
	const euler = 0.57721566490153286060651209008
	sum, p := 0.0, 1.0
	for k := 1.0; k < 25; k++ {
		p *= -x / k
		sum += p / k
	}
	e1 := -math.Log(x) - euler - sum
	if n == 1 {
		return e1
	}
	return math.Exp(-x) - x*e1
}

// expIntegralFraction returns eˣ E_n(x) as 1/(x+n - 1·n/(x+n+2 - 2(n+1)/(…))),
// from the far end, where rounding errors die out. The tail left out of N
// levels is about exp(-4√(Nx)).
func expIntegralFraction(n, x float64) float64 {
	tail := 0.0
	for k := math.Floor(100/x) + 8; k >= 1; k-- {
		tail = k * (n - 1 + k) / (x + n + 2*k - tail)
	}
	return 1 / (x + n - tail)
}

// ExpIntegrals is [ExpIntegral] for every element of x.
func ExpIntegrals(dst []float64, n int, x []float64) []float64 {
	dst = destination("ExpIntegrals", dst, x)
	for i, v := range x {
		dst[i] = ExpIntegral(n, v)
	}
	return dst
}
