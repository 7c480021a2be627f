package special

import "math"

// This file holds the thermal functions of one harmonic mode (Einstein's
// solid), x = hν/kT = θ/T, energies counted from the ground level.

// expm1Above is where eˣ-1 and eˣ are equal to the last bit, with room, and
// where eˣ is still far from overflow.
const expm1Above = 45

// EinsteinC returns the heat capacity C_V/k of one harmonic mode at
// x = hν/kT = θ/T,
//
//	C/k = x² eˣ/(eˣ-1)².
//
// Special cases are:
//
//	EinsteinC(0) = 1
//	EinsteinC(+Inf) = 0
//	EinsteinC(x) = NaN for x < 0 and for NaN
//
// Accuracy: 4 eps relative while the result is a normal number
// (TestEinsteinAccuracy, x from 1e-6 to 700).
//
// Reference: A. Einstein, Annalen der Physik 327, 180 (1907),
// doi:10.1002/andp.19063270110.
func EinsteinC(x float64) float64 {
	_, c := einsteinUC(x)
	return c
}

// EinsteinU returns the thermal energy (⟨E⟩-E₀)/kT = x/(eˣ-1) of one harmonic
// mode. Special cases are those of [EinsteinC]. Accuracy: 3 eps relative
// (TestEinsteinAccuracy).
func EinsteinU(x float64) float64 {
	u, _ := einsteinUC(x)
	return u
}

// EinsteinLogQ returns ln q = -ln(1-e⁻ˣ) of one harmonic mode.
//
// Special cases are:
//
//	EinsteinLogQ(0) = +Inf
//	EinsteinLogQ(+Inf) = 0
//	EinsteinLogQ(x) = NaN for x < 0 and for NaN
//
// Accuracy: 3 eps relative (TestEinsteinAccuracy).
func EinsteinLogQ(x float64) float64 {
	switch {
	case !(x >= 0):
		return math.NaN()
	case x >= expm1Above:
		return math.Exp(-x) // + e⁻²ˣ/2, below eps
	case x < math.Ln2:
		// The logarithm's argument is below 1/2, so it is not near its zero.
		return -math.Log(-math.Expm1(-x))
	}
	return -math.Log1p(-math.Exp(-x))
}

// EinsteinS returns the entropy S/k = x/(eˣ-1) - ln(1-e⁻ˣ) of one harmonic
// mode. Special cases and accuracy are those of [EinsteinLogQ].
func EinsteinS(x float64) float64 {
	lnq, u, _ := EinsteinThermal(x)
	return lnq + u
}

// EinsteinThermal returns ln q, U = (⟨E⟩-E₀)/kT and C = C_V/k of one harmonic
// mode at once; see [EinsteinLogQ], [EinsteinU] and [EinsteinC].
func EinsteinThermal(x float64) (lnq, u, c float64) {
	u, c = einsteinUC(x)
	return EinsteinLogQ(x), u, c
}

func einsteinUC(x float64) (u, c float64) {
	switch {
	case !(x >= 0):
		return math.NaN(), math.NaN()
	case x == 0:
		return 1, 1
	case math.IsInf(x, 1):
		return 0, 0
	case x >= expm1Above:
		e := math.Exp(-x)
		return x * e, x * (x * e)
	}
	d := math.Expm1(x)
	u = x / d
	return u, float64(u*u) * (1 + d)
}

// EinsteinCSlope returns dC/dx of [EinsteinC],
//
//	C′ = C (2/x - coth(x/2)) = (C/x) (2 - x - 2U),
//
// from which ∂C/∂θ = C′/T. With lnq, U, S, C at x the other derivatives are
// dlnq/dx = -U/x, dU/dx = (U-C)/x, dS/dx = -C/x.
//
// Special cases are:
//
//	EinsteinCSlope(0) = 0
//	EinsteinCSlope(+Inf) = 0
//	EinsteinCSlope(x) = NaN for x < 0 and for NaN
//
// Accuracy: 10 eps relative (TestEinsteinAccuracy).
func EinsteinCSlope(x float64) float64 {
	_, slope := einsteinCSlope(x)
	return slope
}

func einsteinCSlope(x float64) (c, slope float64) {
	u, c := einsteinUC(x)
	switch {
	case math.IsInf(x, 1):
		return 0, 0
	case x < 1:
		// x coth(x/2) - 2 = Σ_{k>=1} 2 B₂ₖ x²ᵏ/(2k)!, where the difference
		// above would lose digits.
		x2 := float64(x * x)
		p := cothSeries[len(cothSeries)-1]
		for k := len(cothSeries) - 2; k >= 0; k-- {
			p = float64(p*x2) + cothSeries[k]
		}
		return c, -float64(c*x) * p
	}
	return c, c / x * (2 - x - 2*u)
}

// cothSeries holds 2 B₂ₖ/(2k)!, k = 1 … 10, exact fractions with B₂ₖ = 1/6,
// -1/30, 1/42, -1/30, 5/66, -691/2730, 7/6, -3617/510, 43867/798, -174611/330.
var cothSeries = [...]float64{
	2.0 / 6 / 2,
	-2.0 / 30 / 24,
	2.0 / 42 / 720,
	-2.0 / 30 / 40320,
	2 * 5.0 / 66 / 3628800,
	-2 * 691.0 / 2730 / 479001600,
	2 * 7.0 / 6 / 87178291200,
	-2 * 3617.0 / 510 / 20922789888000,
	2 * 43867.0 / 798 / 6402373705728000,
	-2 * 174611.0 / 330 / 2432902008176640000,
}

// EinsteinCs is [EinsteinC] for every element of x.
func EinsteinCs(dst, x []float64) []float64 {
	dst = destination("EinsteinCs", dst, x)
	for i, v := range x {
		_, dst[i] = einsteinUC(v)
	}
	return dst
}

// EinsteinUs is [EinsteinU] for every element of x.
func EinsteinUs(dst, x []float64) []float64 {
	dst = destination("EinsteinUs", dst, x)
	for i, v := range x {
		dst[i], _ = einsteinUC(v)
	}
	return dst
}

// EinsteinLogQs is [EinsteinLogQ] for every element of x.
func EinsteinLogQs(dst, x []float64) []float64 {
	dst = destination("EinsteinLogQs", dst, x)
	for i, v := range x {
		dst[i] = EinsteinLogQ(v)
	}
	return dst
}

// EinsteinSs is [EinsteinS] for every element of x.
func EinsteinSs(dst, x []float64) []float64 {
	dst = destination("EinsteinSs", dst, x)
	for i, v := range x {
		dst[i] = EinsteinS(v)
	}
	return dst
}

// EinsteinCSlopes writes [EinsteinC] into c and [EinsteinCSlope] into slope for
// every element of x, in one pass. Both may be nil.
func EinsteinCSlopes(c, slope, x []float64) (cs, slopes []float64) {
	c, slope = destination("EinsteinCSlopes", c, x), destination("EinsteinCSlopes", slope, x)
	for i, v := range x {
		c[i], slope[i] = einsteinCSlope(v)
	}
	return c, slope
}
