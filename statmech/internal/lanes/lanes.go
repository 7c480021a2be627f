// Package lanes holds the loops of statmech that a processor with vector
// registers runs eight numbers at a time: looking up tables of polynomials,
// and filling the moments of energy levels.
//
// # The same bits everywhere
//
// Each loop is written twice, in Go and in assembly for amd64 with AVX-512,
// which is chosen when the program starts if processor and system have it.
// Both do the same operations in the same order on each of eight lanes, also
// where a plain loop would do without lanes: multiplications and additions are
// rounded separately, no fused operations, no reciprocal estimates. So results
// do not depend on the machine; TestSameBits and the fuzz targets run both on
// the same input.
//
// What is out of the ordinary (an argument beyond the table, a number that is
// not finite) a loop in assembly leaves to Go: it says which lanes, or stops
// there. No assembly decides what happens to a bad number.
//
// No vector exponential is needed: what the loops evaluate are polynomials.
package lanes

import "math/bits"

// Width is the number of lanes.
const Width = 8

// A Table8 is a function on [0, End): polynomials of degree 8 on segments of
// width 1/4, in t = 4x-(i+1/2). The argument 0 is not looked up.
type Table8 struct {
	Rows [][9]float64
	End  float64 // len(Rows)/4
}

// Poly8 evaluates a row of degree 8 pairwise in t², the last two steps plain
// Horner: a short chain of dependent operations, and the last steps decide the
// rounding.
func Poly8(c *[9]float64, t float64) float64 {
	t2 := float64(t * t)
	t4 := float64(t2 * t2)
	q := float64(c[3]*t) + c[2]
	q += float64(t2 * (float64(c[5]*t) + c[4]))
	q += float64(t4 * (float64(t2*c[8]) + float64(c[7]*t) + c[6]))
	return float64((float64(q*t)+c[1])*t) + c[0]
}

// inside returns the value at x, and false if x is not in (0, End).
func (s *Table8) inside(x float64) (float64, bool) {
	if !(x > 0 && x < s.End) {
		return 0, false
	}
	y := 4 * x
	i := int(y)
	return Poly8(&s.Rows[i], y-(float64(i)+0.5)), true
}

// Fill writes s(x[k]) to dst[k], and rest(k) where x[k] is not inside (0, End);
// dst may be x.
func (s *Table8) Fill(dst, x []float64, rest func(k int) float64) {
	s.run(dst, x, 1, 1, 1, false, rest)
}

// FillQuotients writes (s(num/v[k])·f1)·f2 to dst[k], with rest(k) in place of s
// where num/v[k] is not inside (0, End); dst may be v.
func (s *Table8) FillQuotients(dst, v []float64, num, f1, f2 float64, rest func(k int) float64) {
	s.run(dst, v, num, f1, f2, true, rest)
}

func (s *Table8) run(dst, v []float64, num, f1, f2 float64, divide bool, rest func(k int) float64) {
	dst = dst[:len(v)]
	k := 0
	for vector && len(v)-k >= Width {
		// Bit l of inside[j] says whether lane l of group j is inside.
		var inside [64]uint8
		n := min((len(v)-k)/Width, len(inside))
		if fill8(&dst[k], &v[k], &inside[0], n, num, f1, f2, &s.Rows[0], s.End, divide) {
			for j, in := range inside[:n] {
				for ; in != 0xff; in |= in + 1 { // the lowest bit that is 0
					i := k + j*Width + bits.TrailingZeros8(^in)
					dst[i] = float64(float64(rest(i)*f1) * f2)
				}
			}
		}
		k += n * Width
	}
	for ; k < len(v); k++ {
		x := v[k]
		if divide {
			x = num / x
		}
		c, ok := s.inside(x)
		if !ok {
			c = rest(k)
		}
		dst[k] = float64(float64(c*f1) * f2)
	}
}

// AddProducts adds weight[k]·s(w[k]·y[l]) to sum[l], all lanes l and one k after
// the other, while w[k]·y[l] is inside (0, End) for every lane, and returns how
// many k it did.
func (s *Table8) AddProducts(sum, y *[Width]float64, w, weight []float64) int {
	weight = weight[:len(w)]
	k := 0
	if vector && len(w) > 0 {
		k = products8(sum, y, &w[0], &weight[0], len(w), &s.Rows[0], s.End)
		return k
	}
	var c [Width]float64
	for ; k < len(w); k++ {
		for l, v := range y {
			var ok bool
			if c[l], ok = s.inside(w[k] * v); !ok {
				return k
			}
		}
		for l := range c {
			sum[l] += float64(weight[k] * c[l])
		}
	}
	return k
}
