package lattice

import "math/bits"

// pcg is the generator of math/rand/v2's PCG, which [pcg.fill] runs two at a
// time, so that two numbers of the sequence do not wait for one another, or 16
// where the processor has AVX-512. A 128-bit linear congruential generator with
// the output function DXSM; TestPCG compares it with the standard library.
//
// Reference: M. E. O'Neill, PCG: A Family of Simple Fast Space-Efficient
// Statistically Good Algorithms for Random Number Generation, Harvey Mudd
// College report HMC-CS-2014-0905 (2014), with tests.
type pcg struct{ hi, lo uint64 }

// Multiplier and increment of one step, and of two: a², (a+1)c.
const (
	mulHi, mulLo   = 0x2360ed051fc65da4, 0x4385df649fccf645
	incHi, incLo   = 0x5851f42d4c957f2d, 0x14057b7ef767814f
	mul2Hi, mul2Lo = 0x17bce35bdf69743c, 0x529ed9eb20e0ae99
	inc2Hi, inc2Lo = 0x4871bec9994273f8, 0xac1f8a1c3883459a
)

// newPCG makes a state of a seed. The two words are output of SplitMix64 (G. L.
// Steele, D. Lea and C. H. Flood, OOPSLA 2014, doi:10.1145/2660193.2660195), so
// that seeds 1, 2, 3 do not give related sequences.
func newPCG(seed uint64) pcg {
	mix := func(z uint64) uint64 {
		z = (z ^ z>>30) * 0xbf58476d1ce4e5b9
		z = (z ^ z>>27) * 0x94d049bb133111eb
		return z ^ z>>31
	}
	const golden = 0x9e3779b97f4a7c15
	return pcg{mix(seed + golden), mix(seed + golden + golden)}
}

func (g *pcg) step() { g.hi, g.lo = advance(g.hi, g.lo, mulHi, mulLo, incHi, incLo) }

func (g *pcg) next() uint64 {
	g.step()
	return output(g.hi, g.lo)
}

// fill writes the next numbers to dst, whose length must be even.
func (g *pcg) fill(dst []uint64) {
	if n := len(dst) / 16; vector && n > 0 {
		var limbs [6][8]uint64
		for i := range 16 {
			g.step()
			l := limbs[i/8*3:]
			l[0][i%8], l[1][i%8], l[2][i%8] = g.lo&mask52, (g.lo>>52|g.hi<<12)&mask52, g.hi>>40
		}
		fill16(&dst[0], n, &limbs)
		g.lo, g.hi = limbs[3][7]|limbs[4][7]<<52, limbs[4][7]>>12|limbs[5][7]<<40
		dst = dst[16*n:]
		if len(dst) == 0 {
			return
		}
	}
	g.step()
	hi, lo := g.hi, g.lo
	g.step()
	hi1, lo1 := g.hi, g.lo
	for ; len(dst) >= 2; dst = dst[2:] {
		g.hi, g.lo = hi1, lo1
		dst[0], dst[1] = output(hi, lo), output(hi1, lo1)
		hi, lo = advance(hi, lo, mul2Hi, mul2Lo, inc2Hi, inc2Lo)
		hi1, lo1 = advance(hi1, lo1, mul2Hi, mul2Lo, inc2Hi, inc2Lo)
	}
}

const mask52 = 1<<52 - 1

func advance(hi, lo, aHi, aLo, cHi, cLo uint64) (uint64, uint64) {
	h, l := bits.Mul64(lo, aLo)
	h += hi*aLo + lo*aHi
	l, carry := bits.Add64(l, cLo, 0)
	h, _ = bits.Add64(h, cHi, carry)
	return h, l
}

func output(hi, lo uint64) uint64 {
	hi ^= hi >> 32
	hi *= 0xda942042e4dd58b5
	hi ^= hi >> 48
	return hi * (lo | 1)
}
