package special

import (
	"math"

	"levelsum/statmech/internal/heats"
	"levelsum/statmech/internal/lanes"
)

// debyeSeries is Dₙ or the heat capacity of a Debye spectrum: polynomials of
// degree 8 on segments of width 1/4 from x = 0, and tail/xⁿ beyond the last.
// The part left out of the tail is below 2⁻⁵⁴ of it.
type debyeSeries struct {
	lanes.Table8
	power int
	tail  float64
}

// π²/6, 2·2!·ζ(3), 3·3!·ζ(4), 4·4!·ζ(5), 5·5!·ζ(6), 6·6!·ζ(7), to 30 digits by
// mpmath 1.4.1, n·n!·ζ(n+1).
const (
	tailD1 = 1.64493406684822643647241516665
	tailD2 = 4.80822761263837714159895264605
	tailD3 = 19.4818182068004874472880665377
	tailD4 = 99.5450644937635129278110866999
	tailD5 = 610.405837190669483828710757875
	tailD6 = 4356.06887828990661194792541535
)

var (
	debyeFunctions = [...]debyeSeries{
		{widthQuarter(debyeD1[:]), 1, tailD1},
		{widthQuarter(debyeD2[:]), 2, tailD2},
		{widthQuarter(debyeD3[:]), 3, tailD3},
		{widthQuarter(debyeD4[:]), 4, tailD4},
		{widthQuarter(debyeD5[:]), 5, tailD5},
		{widthQuarter(debyeD6[:]), 6, tailD6},
	}
	debyeHeats = [...]debyeSeries{
		{heats.Debye[0], 1, 2 * tailD1},
		{heats.Debye[1], 2, 3 * tailD2},
		{heats.Debye[2], 3, 4 * tailD3},
	}
)

// widthQuarter is a table from its rows.
func widthQuarter(rows [][9]float64) lanes.Table8 {
	return lanes.Table8{Rows: rows, End: float64(len(rows)) / 4}
}

// at returns the value for any x; x < 0 and NaN give NaN.
func (s *debyeSeries) at(x float64) float64 {
	if x >= 0 && x < s.End {
		return s.inside(x)
	}
	return s.outside(x)
}

// inside is at for 0 <= x < end.
func (s *debyeSeries) inside(x float64) float64 {
	y := 4 * x
	i := int(y)
	c := &s.Rows[i]
	t := y - (float64(i) + 0.5)
	return lanes.Poly8(c, t)
}

// slope8 is the derivative of [lanes.Poly8] in t.
func slope8(c *[9]float64, t float64) float64 {
	p := 8 * c[8]
	p = float64(p*t) + 7*c[7]
	p = float64(p*t) + 6*c[6]
	p = float64(p*t) + 5*c[5]
	p = float64(p*t) + 4*c[4]
	p = float64(p*t) + 3*c[3]
	p = float64(p*t) + 2*c[2]
	return float64(p*t) + c[1]
}

func (s *debyeSeries) outside(x float64) float64 {
	if !(x >= 0) {
		return math.NaN()
	}
	p := x
	for range s.power - 1 {
		p *= x
	}
	return s.tail / p
}

// slope returns the derivative in x.
func (s *debyeSeries) slope(x float64) float64 {
	if x >= 0 && x < s.End {
		y := 4 * x
		i := int(y)
		return 4 * slope8(&s.Rows[i], y-(float64(i)+0.5))
	}
	return -float64(s.power) * s.outside(x) / x
}

// fill is at for a slice.
func (s *debyeSeries) fill(dst, x []float64) {
	s.Fill(dst, x, func(k int) float64 { return s.at(x[k]) })
}

// Debye returns the Debye function
//
//	Dₙ(x) = (n/xⁿ) ∫₀ˣ tⁿ/(eᵗ-1) dt,  n = 1 … 6.
//
// Special cases are:
//
//	Debye(n, 0) = 1
//	Debye(n, +Inf) = 0
//	Debye(n, x) = NaN for x < 0 and for NaN
//	Debye(n, x) = NaN for n outside 1 … 6
//
// Range: x from 0 to the end of float64. Accuracy: 3 eps relative
// (TestDebyeFunctionAccuracy, x from 1e-6 to 1e6, for results that are normal
// numbers).
//
// Reference: P. Debye, Annalen der Physik 344, 789 (1912),
// doi:10.1002/andp.19123441404; M. Abramowitz and I. A. Stegun, Handbook of
// Mathematical Functions, section 27.1.
func Debye(n int, x float64) float64 {
	if n < 1 || n > len(debyeFunctions) || x == 0 {
		return edge(n >= 1 && n <= len(debyeFunctions))
	}
	return debyeFunctions[n-1].at(x)
}

// edge is the value at x = 0, NaN for an order that does not exist.
func edge(ok bool) float64 {
	if ok {
		return 1
	}
	return math.NaN()
}

// Debyes is [Debye] for every element of x.
func Debyes(dst []float64, n int, x []float64) []float64 {
	dst = destination("Debyes", dst, x)
	if n < 1 || n > len(debyeFunctions) {
		return fillNaN(dst)
	}
	debyeFunctions[n-1].fill(dst, x)
	return dst
}

func fillNaN(dst []float64) []float64 {
	for i := range dst {
		dst[i] = math.NaN()
	}
	return dst
}
