package special

import (
	"math"

	"levelsum/statmech/internal/heats"
	"levelsum/statmech/internal/lanes"
)

// This file holds the thermal functions of one harmonic mode (Einstein's
// solid), x = hν/kT = θ/T, energies counted from the ground level.

// expm1Above is the end of the table; beyond, eˣ-1 and eˣ are equal to the last
// bit.
const expm1Above = heats.EinsteinEnd

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
// Accuracy: 3 eps relative while the result is a normal number
// (TestEinsteinAccuracy, x from 1e-6 to 700).
//
// Reference: A. Einstein, Annalen der Physik 327, 180 (1907),
// doi:10.1002/andp.19063270110.
func EinsteinC(x float64) float64 {
	if x >= 0 && x < expm1Above {
		if x == 0 {
			return 1
		}
		y := 4 * x
		i := int(y)
		return lanes.Poly8(&heats.Einstein.Rows[i], y-(float64(i)+0.5))
	}
	return einsteinTail(x)
}

// einsteinTail is EinsteinC for x >= expm1Above, NaN for what is not a number
// from 0.
func einsteinTail(x float64) float64 {
	switch {
	case !(x >= 0):
		return math.NaN()
	case math.IsInf(x, 1):
		return 0
	}
	return x * (x * math.Exp(-x))
}

// EinsteinU returns the thermal energy (⟨E⟩-E₀)/kT = x/(eˣ-1) of one harmonic
// mode. Special cases are those of [EinsteinC]. Accuracy: 3 eps relative
// (TestEinsteinAccuracy).
func EinsteinU(x float64) float64 {
	switch {
	case !(x >= 0):
		return math.NaN()
	case x == 0:
		return 1
	case math.IsInf(x, 1):
		return 0
	case x >= expm1Above:
		return x * math.Exp(-x)
	}
	return x / math.Expm1(x)
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
	return EinsteinLogQ(x) + EinsteinU(x)
}

// EinsteinThermal returns ln q, U = (⟨E⟩-E₀)/kT and C = C_V/k of one harmonic
// mode at once; see [EinsteinLogQ], [EinsteinU] and [EinsteinC].
func EinsteinThermal(x float64) (lnq, u, c float64) {
	switch {
	case x > 0 && x < math.Ln2:
		d := -math.Expm1(-x)
		lnq, u = -math.Log(d), x*(1-d)/d
	case x >= math.Ln2 && x < expm1Above:
		e := math.Exp(-x)
		lnq, u = -math.Log1p(-e), x*e/(1-e)
	default:
		return EinsteinLogQ(x), EinsteinU(x), EinsteinC(x)
	}
	return lnq, u, EinsteinC(x)
}

// EinsteinCSlope returns dC/dx of [EinsteinC],
//
//	C′ = C (2/x - coth(x/2)),
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
// Accuracy: 600 eps (1.4e-13) of max(|C′|, C/20); it is the derivative of the polynomial
// that gives C (TestEinsteinAccuracy).
func EinsteinCSlope(x float64) float64 {
	if x > 0 && x < expm1Above {
		y := 4 * x
		i := int(y)
		return 4 * slope8(&heats.Einstein.Rows[i], y-(float64(i)+0.5))
	}
	if x == 0 || math.IsInf(x, 1) {
		return 0
	}
	return einsteinTail(x) * (2/x - 1)
}

// EinsteinCs is [EinsteinC] for every element of x.
func EinsteinCs(dst, x []float64) []float64 {
	dst = destination("EinsteinCs", dst, x)
	heats.Einstein.Fill(dst, x, func(k int) float64 { return EinsteinC(x[k]) })
	return dst
}

// EinsteinUs is [EinsteinU] for every element of x.
func EinsteinUs(dst, x []float64) []float64 {
	dst = destination("EinsteinUs", dst, x)
	for i, v := range x {
		dst[i] = EinsteinU(v)
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
	for k, v := range x {
		if v > 0 && v < expm1Above {
			y := 4 * v
			i := int(y)
			t := y - (float64(i) + 0.5)
			row := &heats.Einstein.Rows[i]
			c[k], slope[k] = lanes.Poly8(row, t), 4*slope8(row, t)
			continue
		}
		c[k], slope[k] = EinsteinC(v), EinsteinCSlope(v)
	}
	return c, slope
}
