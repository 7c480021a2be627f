package special

import (
	"math"

	"levelsum/statmech/internal/lanes"
)

// This file holds the thermal functions of one mode of a Debye spectrum in d
// dimensions: g(ω) = d ωᵈ⁻¹/ω_Dᵈ up to ω_D, x = ħω_D/kT = θ/T.

// DebyeC returns the heat capacity C_V/k of one mode of a Debye spectrum in d
// dimensions (d = 1, 2, 3) at x = θ/T,
//
//	C/k = (d/xᵈ) ∫₀ˣ tᵈ⁺¹ eᵗ/(eᵗ-1)² dt = (d+1) D_d(x) - d x/(eˣ-1).
//
// A mole of atoms of a solid with d = 3 has 3 N_A such modes, so its heat
// capacity is 3R times this.
//
// Special cases are:
//
//	DebyeC(d, 0) = 1
//	DebyeC(d, +Inf) = 0
//	DebyeC(d, x) = NaN for x < 0 and for NaN
//	DebyeC(d, x) = NaN for d outside 1, 2, 3
//
// Accuracy: 3 eps relative (TestDebyeThermalAccuracy, x from 1e-6 to 1e6).
//
// Reference: P. Debye, Annalen der Physik 344, 789 (1912),
// doi:10.1002/andp.19123441404, equation 8.
func DebyeC(d int, x float64) float64 {
	if d < 1 || d > 3 || x == 0 {
		return edge(d >= 1 && d <= 3)
	}
	return debyeHeats[d-1].at(x)
}

// DebyeCs is [DebyeC] for every element of x.
func DebyeCs(dst []float64, d int, x []float64) []float64 {
	dst = destination("DebyeCs", dst, x)
	if d < 1 || d > 3 {
		return fillNaN(dst)
	}
	debyeHeats[d-1].fill(dst, x)
	return dst
}

// DebyeU returns the thermal energy (⟨E⟩-E₀)/kT of one mode of a Debye
// spectrum in d dimensions at x = θ/T, which is [Debye](d, x). Special cases
// and accuracy are those of Debye, with NaN for d outside 1, 2, 3.
func DebyeU(d int, x float64) float64 {
	if d > 3 {
		return math.NaN()
	}
	return Debye(d, x)
}

// DebyeUs is [DebyeU] for every element of x.
func DebyeUs(dst []float64, d int, x []float64) []float64 {
	if d > 3 {
		return fillNaN(destination("DebyeUs", dst, x))
	}
	return Debyes(dst, d, x)
}

// DebyeLogQ returns ln q of one mode of a Debye spectrum in d dimensions at
// x = θ/T, energies counted from the ground level,
//
//	ln q = D_d(x)/d - ln(1-e⁻ˣ).
//
// Special cases are:
//
//	DebyeLogQ(d, 0) = +Inf
//	DebyeLogQ(d, +Inf) = 0
//	DebyeLogQ(d, x) = NaN for x < 0, for NaN and for d outside 1, 2, 3
//
// Accuracy: 4 eps relative (TestDebyeThermalAccuracy).
//
// Reference: as [DebyeC]; L. D. Landau and E. M. Lifshitz, Statistical
// Physics, Part 1, section 66.
func DebyeLogQ(d int, x float64) float64 {
	return DebyeU(d, x)/float64(d) + EinsteinLogQ(x)
}

// DebyeLogQs is [DebyeLogQ] for every element of x.
func DebyeLogQs(dst []float64, d int, x []float64) []float64 {
	dst = destination("DebyeLogQs", dst, x)
	for i, v := range x {
		dst[i] = DebyeLogQ(d, v)
	}
	return dst
}

// DebyeS returns the entropy S/k of one mode of a Debye spectrum in d
// dimensions at x = θ/T,
//
//	S/k = (1+1/d) D_d(x) - ln(1-e⁻ˣ).
//
// Special cases and accuracy are those of [DebyeLogQ].
func DebyeS(d int, x float64) float64 {
	u := DebyeU(d, x)
	return u + u/float64(d) + EinsteinLogQ(x)
}

// DebyeSs is [DebyeS] for every element of x.
func DebyeSs(dst []float64, d int, x []float64) []float64 {
	dst = destination("DebyeSs", dst, x)
	for i, v := range x {
		dst[i] = DebyeS(d, v)
	}
	return dst
}

// DebyeThermal returns ln q, U = (⟨E⟩-E₀)/kT and C = C_V/k of one mode at once;
// see [DebyeLogQ], [DebyeU] and [DebyeC].
func DebyeThermal(d int, x float64) (lnq, u, c float64) {
	u = DebyeU(d, x)
	return u/float64(d) + EinsteinLogQ(x), u, DebyeC(d, x)
}

// DebyeCSlope returns dC/dx of [DebyeC], from which
//
//	∂C/∂θ = C′(x)/T,  T ∂C/∂T = -x C′(x).
//
// The derivatives of the other functions need no table: with lnq, U, S, C at x
//
//	dlnq/dx = -U/x,  dU/dx = (U-C)/x,  dS/dx = -C/x.
//
// Special cases are:
//
//	DebyeCSlope(d, 0) = 0
//	DebyeCSlope(d, +Inf) = 0
//	DebyeCSlope(d, x) = NaN for x < 0, for NaN and for d outside 1, 2, 3
//
// Accuracy: 300 eps (7e-14) of max(|C′|, 0.05); it is the derivative of the
// polynomial that gives C (TestDebyeThermalAccuracy).
func DebyeCSlope(d int, x float64) float64 {
	switch {
	case d < 1 || d > 3:
		return math.NaN()
	case x == 0 || math.IsInf(x, 1):
		return 0
	}
	return debyeHeats[d-1].slope(x)
}

// DebyeCSlopes writes [DebyeC] into c and [DebyeCSlope] into slope for every
// element of x, in one pass. Both may be nil.
func DebyeCSlopes(c, slope []float64, d int, x []float64) (cs, slopes []float64) {
	c, slope = destination("DebyeCSlopes", c, x), destination("DebyeCSlopes", slope, x)
	if d < 1 || d > 3 {
		return fillNaN(c), fillNaN(slope)
	}
	s := &debyeHeats[d-1]
	for k, v := range x {
		if v >= 0 && v < s.End {
			y := 4 * v
			i := int(y)
			t := y - (float64(i) + 0.5)
			row := &s.Rows[i]
			c[k], slope[k] = lanes.Poly8(row, t), 4*slope8(row, t)
			continue
		}
		c[k], slope[k] = s.outside(v), DebyeCSlope(d, v)
	}
	return c, slope
}

// DebyeUSlope returns dU/dx of [DebyeU], also where (U-C)/x would lose its
// digits. Special cases are as [DebyeCSlope], except that DebyeUSlope(d, 0) =
// -d/(2(d+1)). Accuracy: 300 eps relative (TestDebyeThermalAccuracy).
func DebyeUSlope(d int, x float64) float64 {
	switch {
	case d < 1 || d > 3:
		return math.NaN()
	case math.IsInf(x, 1):
		return 0
	}
	return debyeFunctions[d-1].slope(x)
}
