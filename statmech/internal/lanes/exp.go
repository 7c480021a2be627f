package lanes

import (
	"math"
	"math/bits"
)

// Exp: n is the whole number next to x/ln 2, r = x - n ln 2, and
//
//	exp x = 2ⁿ [1 + (r + r² Σ rᵏ/(k+2)!)], k <= 11
//
// with ln 2 in two parts, of which the first has 32 bits: n times it is exact.
const (
	expEnd  = 708 // beyond, in magnitude, the result may not be a normal number
	perLn2  = 0x1.71547652b82fep+0
	ln2High = 0x1.62e42fee00000p-1
	ln2Low  = 0x1.a39ef35793c76p-33
	toInt   = 0x1.8p52 // adding it rounds to a whole number, in the low bits
)

// Exp writes exp(x[k]) to dst[k]; dst may be x. Accuracy: 1 eps relative, from
// 5e-308 to 1.5e307 (TestExpAccuracy); what is beyond or not finite is as
// [math.Exp] has it. The bits are the same on every machine.
func Exp(dst, x []float64) {
	dst = dst[:len(x)]
	k := 0
	for vector && len(x)-k >= Width {
		var inside [64]uint8
		n := min((len(x)-k)/Width, len(inside))
		// What is outside is left as it is, also where dst is x.
		if exp8(&dst[k], &x[k], &inside[0], n) {
			for j, in := range inside[:n] {
				for ; in != 0xff; in |= in + 1 {
					i := k + j*Width + bits.TrailingZeros8(^in)
					dst[i] = math.Exp(x[i])
				}
			}
		}
		k += n * Width
	}
	for ; k < len(x); k++ {
		dst[k] = exp(x[k])
	}
}

func exp(x float64) float64 {
	if !(math.Abs(x) < expEnd) {
		return math.Exp(x)
	}
	s := float64(x*perLn2) + toInt
	n := s - toInt
	r := x - float64(n*ln2High)
	r -= float64(n * ln2Low)
	r2 := float64(r * r)
	r4 := float64(r2 * r2)
	r8 := float64(r4 * r4)
	a := (float64(r*(1.0/6)) + 1.0/2) + float64(r2*(float64(r*(1.0/120))+1.0/24))
	b := (float64(r*(1.0/5040)) + 1.0/720) + float64(r2*(float64(r*(1.0/362880))+1.0/40320))
	c := (float64(r*(1.0/39916800)) + 1.0/3628800) + float64(r2*(float64(r*(1.0/6227020800))+1.0/479001600))
	p := (a + float64(r4*b)) + float64(r8*c)
	y := 1 + (r + float64(r2*p))
	return math.Float64frombits(math.Float64bits(y) + math.Float64bits(s)<<52)
}
