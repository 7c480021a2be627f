package lanes

import "math/bits"

// A Table11 is a function on [From, To): polynomials of degree 11 on segments of
// width 1/PerUnit, in t = (x-From)·PerUnit - (i+1/2).
type Table11 struct {
	Rows              [][12]float64
	From, To, PerUnit float64
}

// poly11 evaluates a row pairwise in t² and t⁴, the last two steps plain Horner;
// see poly8.
func poly11(c *[12]float64, t float64) float64 {
	t2 := float64(t * t)
	t4 := float64(t2 * t2)
	a := float64(c[3]*t) + c[2] + float64(t2*(float64(c[5]*t)+c[4]))
	b := float64(c[7]*t) + c[6] + float64(t2*(float64(c[9]*t)+c[8]))
	b += float64(t4 * (float64(c[11]*t) + c[10]))
	return float64((float64((a+float64(t4*b))*t)+c[1])*t) + c[0]
}

// Fill writes s(x[k]) to dst[k], and rest(k) where x[k] is not in [From, To); dst
// may be x.
func (s *Table11) Fill(dst, x []float64, rest func(k int) float64) {
	dst = dst[:len(x)]
	k := 0
	for vector && len(x)-k >= Width {
		var inside [64]uint8 // as in Table8.run
		n := min((len(x)-k)/Width, len(inside))
		if fill11(&dst[k], &x[k], &inside[0], n, s.From, s.To, s.PerUnit, &s.Rows[0]) {
			for j, in := range inside[:n] {
				for ; in != 0xff; in |= in + 1 {
					i := k + j*Width + bits.TrailingZeros8(^in)
					dst[i] = rest(i)
				}
			}
		}
		k += n * Width
	}
	for ; k < len(x); k++ {
		if v := x[k]; v >= s.From && v < s.To {
			y := (v - s.From) * s.PerUnit
			i := int(y)
			dst[k] = poly11(&s.Rows[i], y-(float64(i)+0.5))
		} else {
			dst[k] = rest(k)
		}
	}
}
