package special

import "math"

// EllipticK returns the complete elliptic integral of the first kind
//
//	K(m) = ∫₀^(π/2) (1 - m sin²φ)^(-1/2) dφ,  m = k².
//
// The argument is the parameter m, not the modulus k. m may be negative.
//
// Special cases are:
//
//	EllipticK(1) = +Inf
//	EllipticK(-Inf) = 0
//	EllipticK(m) = NaN for m > 1 and for NaN
//
// Accuracy: 4 eps relative (TestEllipticAccuracy, m from -1e12 to 1-2⁻⁵³).
//
// Reference: the arithmetic-geometric mean, K = π/(2 M(1, √(1-m))); NIST
// Digital Library of Mathematical Functions, section 19.8(i).
func EllipticK(m float64) float64 {
	k, _ := elliptic(m)
	return k
}

// EllipticE returns the complete elliptic integral of the second kind
//
//	E(m) = ∫₀^(π/2) (1 - m sin²φ)^(1/2) dφ,  m = k².
//
// The argument is the parameter m, not the modulus k. m may be negative.
//
// Special cases are:
//
//	EllipticE(1) = 1
//	EllipticE(-Inf) = +Inf
//	EllipticE(m) = NaN for m > 1 and for NaN
//
// Accuracy: 6 eps relative (TestEllipticAccuracy).
//
// Reference: as [EllipticK].
func EllipticE(m float64) float64 {
	_, e := elliptic(m)
	return e
}

// elliptic returns K and E. With aₙ, bₙ of the arithmetic-geometric mean of 1
// and √(1-m) and cₙ = (aₙ₋₁-bₙ₋₁)/2,
//
//	E/K = a₁² - Σ_{n>=2} 2^(n-1) cₙ²,
//
// which starts from a₁² rather than 1 - m/2 so that less cancels near m = 1.
func elliptic(m float64) (k, e float64) {
	switch {
	case !(m <= 1):
		return math.NaN(), math.NaN()
	case m == 1:
		return math.Inf(1), 1
	case math.IsInf(m, -1):
		return 0, math.Inf(1)
	case m < 0:
		// Imaginary modulus: m = -n, K(-n) = K(n/(1+n))/√(1+n), and the
		// complement of n/(1+n) is 1/(1+n), given exactly as such.
		root := math.Sqrt(1 - m)
		k, e = ellipticComplement(1 / (1 - m))
		return k / root, e * root
	}
	return ellipticComplement(1 - m)
}

// ellipticComplement takes 1-m, from 0 (excluded) to 1.
func ellipticComplement(c1 float64) (k, e float64) {
	a, b := 1.0, math.Sqrt(c1)
	a, b = (a+b)/2, math.Sqrt(b)
	ratio, weight := a*a, 1.0
	for {
		c := (a - b) / 2
		weight *= 2
		if c <= 1e-9*a { // c² no longer counts, nor does the next step
			a = (a + b) / 2
			ratio -= weight * c * c
			break
		}
		ratio -= weight * c * c
		a, b = (a+b)/2, math.Sqrt(a*b)
	}
	k = math.Pi / 2 / a
	return k, k * ratio
}

// EllipticKs is [EllipticK] for every element of m.
func EllipticKs(dst, m []float64) []float64 {
	dst = destination("EllipticKs", dst, m)
	for i, v := range m {
		dst[i] = EllipticK(v)
	}
	return dst
}

// EllipticEs is [EllipticE] for every element of m.
func EllipticEs(dst, m []float64) []float64 {
	dst = destination("EllipticEs", dst, m)
	for i, v := range m {
		dst[i] = EllipticE(v)
	}
	return dst
}
