package lanes

import "math/bits"

// A Table11 is a function from From on: polynomials of degree 11 on segments of
// width 1/PerUnit, one a row, in t = y-(i+1/2), y = (x-From)·PerUnit. An x is
// inside if 0 <= y < len(Rows) as computed, with its rounding.
type Table11 struct {
	Rows          [][12]float64
	From, PerUnit float64
}

// A Table12 is the same with degree 12.
type Table12 struct {
	Rows          [][13]float64
	From, PerUnit float64
}

// Poly11 evaluates a row of degree 11 pairwise in t² and t⁴, the last two steps
// plain Horner; see [Poly8].
func Poly11(c *[12]float64, t float64) float64 {
	t2 := float64(t * t)
	t4 := float64(t2 * t2)
	a := float64(c[3]*t) + c[2] + float64(t2*(float64(c[5]*t)+c[4]))
	b := float64(c[7]*t) + c[6] + float64(t2*(float64(c[9]*t)+c[8]))
	b += float64(t4 * (float64(c[11]*t) + c[10]))
	return float64((float64((a+float64(t4*b))*t)+c[1])*t) + c[0]
}

// Poly12 is [Poly11] with degree 12.
func Poly12(c *[13]float64, t float64) float64 {
	t2 := float64(t * t)
	t4 := float64(t2 * t2)
	a := float64(c[3]*t) + c[2] + float64(t2*(float64(c[5]*t)+c[4]))
	b := float64(c[7]*t) + c[6] + float64(t2*(float64(c[9]*t)+c[8]))
	b += float64(t4 * (float64(t2*c[12]) + float64(c[11]*t) + c[10]))
	return float64((float64((a+float64(t4*b))*t)+c[1])*t) + c[0]
}

// Fill writes s(x[k]) to dst[k], and rest(k) where x[k] is not inside; dst may be
// x.
func (s *Table11) Fill(dst, x []float64, rest func(k int) float64) {
	dst = dst[:len(x)]
	for k := fillLong(dst, x, s.From, s.PerUnit, len(s.Rows), &s.Rows[0][0], false, rest); k < len(x); k++ {
		if y := float64((x[k] - s.From) * s.PerUnit); y >= 0 && y < float64(len(s.Rows)) {
			i := int(y)
			dst[k] = Poly11(&s.Rows[i], y-(float64(i)+0.5))
		} else {
			dst[k] = rest(k)
		}
	}
}

// Fill is as [Table11.Fill].
func (s *Table12) Fill(dst, x []float64, rest func(k int) float64) {
	dst = dst[:len(x)]
	for k := fillLong(dst, x, s.From, s.PerUnit, len(s.Rows), &s.Rows[0][0], true, rest); k < len(x); k++ {
		if y := float64((x[k] - s.From) * s.PerUnit); y >= 0 && y < float64(len(s.Rows)) {
			dst[k] = s.At(x[k])
		} else {
			dst[k] = rest(k)
		}
	}
}

// At returns the value at an x inside.
func (s *Table12) At(x float64) float64 {
	y := float64((x - s.From) * s.PerUnit)
	i := int(y)
	return Poly12(&s.Rows[i], y-(float64(i)+0.5))
}

// fillLong does what the vector loop can and returns how many that was.
func fillLong(dst, x []float64, from, perUnit float64, segments int, rows *float64, twelve bool, rest func(k int) float64) int {
	k := 0
	for vector && len(x)-k >= Width {
		var inside [64]uint8 // as in Table8.run
		n := min((len(x)-k)/Width, len(inside))
		if fill12(&dst[k], &x[k], &inside[0], n, from, perUnit, float64(segments), rows, twelve) {
			for j, in := range inside[:n] {
				for ; in != 0xff; in |= in + 1 {
					i := k + j*Width + bits.TrailingZeros8(^in)
					dst[i] = rest(i)
				}
			}
		}
		k += n * Width
	}
	return k
}
