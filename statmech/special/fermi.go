package special

import (
	"math"

	"levelsum/statmech/internal/lanes"
)

// fermiSeries is F_j: y·low(y), y = e^η, for η < -2; segments of width 1/2 up
// to 42; Sommerfeld's expansion beyond, whose first term left out and the
// exponentially small part are below 2⁻⁵⁵ there.
type fermiSeries struct {
	low, high *[13]float64
	mid       *[88][12]float64
	twoJ      int
}

const (
	fermiMidFrom = -2
	fermiMidTo   = 42
)

var (
	fermiOrderM1 = fermiSeries{&fermiM1Low[0], &fermiM1High[0], &fermiM1Mid, -1}
	fermiOrder1  = fermiSeries{&fermi1Low[0], &fermi1High[0], &fermi1Mid, 1}
	fermiOrder2  = fermiSeries{&fermi2Low[0], &fermi2High[0], &fermi2Mid, 2}
	fermiOrder3  = fermiSeries{&fermi3Low[0], &fermi3High[0], &fermi3Mid, 3}
	fermiOrder4  = fermiSeries{&fermi4Low[0], &fermi4High[0], &fermi4Mid, 4}
	fermiOrder6  = fermiSeries{&fermi6Low[0], &fermi6High[0], &fermi6Mid, 6}
)

func fermiOrder(j float64) *fermiSeries {
	switch j {
	case -0.5:
		return &fermiOrderM1
	case 0.5:
		return &fermiOrder1
	case 1:
		return &fermiOrder2
	case 1.5:
		return &fermiOrder3
	case 2:
		return &fermiOrder4
	case 3:
		return &fermiOrder6
	}
	return nil
}

func (s *fermiSeries) at(eta float64) float64 {
	if eta >= fermiMidFrom && eta < fermiMidTo {
		y := 2 * (eta - fermiMidFrom)
		i := int(y)
		return lanes.Poly11(&s.mid[i], y-(float64(i)+0.5))
	}
	return s.outside(eta)
}

func (s *fermiSeries) outside(eta float64) float64 {
	switch {
	case eta < fermiMidFrom:
		y := math.Exp(eta)
		return y * lanes.Poly12(s.low, y)
	case math.IsInf(eta, 1) || math.IsNaN(eta):
		return eta
	}
	inverse := 1 / eta
	return halfInteger(eta, s.twoJ+2) * lanes.Poly12(s.high, inverse*inverse)
}

// halfInteger returns x^(h/2) for h = 1 … 8.
func halfInteger(x float64, h int) float64 {
	p := 1.0
	if h&1 == 1 {
		p = math.Sqrt(x)
	}
	for range h / 2 {
		p *= x
	}
	return p
}

// FermiDirac returns the complete Fermi-Dirac integral of order j
//
//	F_j(η) = 1/Γ(j+1) ∫₀^∞ tʲ/(e^(t-η)+1) dt,  j = -1/2, 0, 1/2, 1, 3/2, 2, 3,
//
// normalised so that F_j(η) → e^η for η → -∞ and dF_j/dη = F_(j-1).
//
// Special cases are:
//
//	FermiDirac(j, -Inf) = 0
//	FermiDirac(j, +Inf) = +Inf
//	FermiDirac(j, NaN) = NaN
//	FermiDirac(j, eta) = NaN for any other order
//
// Range: every η; overflow only where F_j overflows. Accuracy: 4 eps relative
// (TestFermiDiracAccuracy, -700 to 1e6) while the result is a normal number;
// an η given with relative error δ moves the result by ηδ for negative η.
//
// Reference: J. McDougall and E. C. Stoner, Phil. Trans. R. Soc. A 237, 67
// (1938), doi:10.1098/rsta.1938.0004; NIST Digital Library of Mathematical
// Functions, section 25.12(iii). For large η: A. Sommerfeld, Zeitschrift für
// Physik 47, 1 (1928).
func FermiDirac(j, eta float64) float64 {
	if s := fermiOrder(j); s != nil {
		return s.at(eta)
	}
	if j == 0 {
		return fermiZero(eta)
	}
	return math.NaN()
}

// fermiZero returns F_0 = ln(1+e^η).
func fermiZero(eta float64) float64 {
	if eta > 0 {
		return eta + math.Log1p(math.Exp(-eta))
	}
	return math.Log1p(math.Exp(eta))
}

// FermiDiracs is [FermiDirac] for every element of eta.
func FermiDiracs(dst []float64, j float64, eta []float64) []float64 {
	dst = destination("FermiDiracs", dst, eta)
	s := fermiOrder(j)
	if s == nil {
		for i, v := range eta {
			dst[i] = FermiDirac(j, v)
		}
		return dst
	}
	table := lanes.Table11{Rows: s.mid[:], From: fermiMidFrom, PerUnit: 2}
	table.Fill(dst, eta, func(k int) float64 { return s.outside(eta[k]) })
	return dst
}

// FermiDiracHalfInverse returns η such that F_1/2(η) = F: the reduced chemical
// potential of an ideal Fermi gas from its reduced density.
//
// Special cases are:
//
//	FermiDiracHalfInverse(0) = -Inf
//	FermiDiracHalfInverse(+Inf) = +Inf
//	FermiDiracHalfInverse(F) = NaN for F < 0 and for NaN
//
// Accuracy: 5 eps of max(|η|, 1) (TestFermiDiracHalfInverseAccuracy, F from
// 1e-300 to 1e9); η goes through 0 at F = 0.76515.
//
// Reference: for large F, Sommerfeld's expansion of [FermiDirac] solved by
// Newton's iteration, F_1/2' = F_-1/2.
func FermiDiracHalfInverse(F float64) float64 {
	switch {
	case !(F > 0):
		if F == 0 {
			return math.Inf(-1)
		}
		return math.NaN()
	case F < fermiInverseLowTo:
		return math.Log(F) + float64(F*lanes.Poly12(&fermiInverseLow[0], F))
	case F >= fermiInverseHighFrom:
		return fermiInverseHigh(F)
	}
	y := 4 * (math.Log(F) + 1)
	i := min(max(int(y), 0), len(fermiInverseMid)-1)
	return lanes.Poly11(&fermiInverseMid[i], y-(float64(i)+0.5))
}

const (
	fermiInverseLowTo    = 0.36787944117144233 // 1/e
	fermiInverseHighFrom = 403                 // below e⁶ = 403.43; F_1/2(65) = 394
)

// fermiInverseHigh solves Sommerfeld's expansion.
func fermiInverseHigh(F float64) float64 {
	if math.IsInf(F, 1) {
		return F
	}
	// First approximation (3√π F/4)^(2/3), then its correction -π²/(12 η).
	c := math.Cbrt(F * 1.3293403881791370205)
	eta := c * c
	eta -= math.Pi * math.Pi / 12 / eta
	for range 2 {
		eta -= (fermiOrder1.outside(eta) - F) / fermiOrderM1.outside(eta)
	}
	return eta
}

// FermiDiracHalfInverses is [FermiDiracHalfInverse] for every element of F.
func FermiDiracHalfInverses(dst, F []float64) []float64 {
	dst = destination("FermiDiracHalfInverses", dst, F)
	for i, v := range F {
		dst[i] = FermiDiracHalfInverse(v)
	}
	return dst
}
