package lattice

import "math/bits"

// pcg is the generator of math/rand/v2's PCG, which [pcg.fill] runs two at a
// time: two numbers of the sequence do not wait for one another. A 128-bit
// linear congruential generator with the output function DXSM; TestPCG compares
// it with the standard library.
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
