package lattice

import "math/bits"

// spins is the state of a simulation. The sites are coloured like a
// chessboard: black holds the sites (r, c) with r+c even, white the others,
// row by row, site c at bit c/2 of its row, a set bit for spin +1. All four
// neighbours of a site have the other colour, so that the sites of one colour
// can be updated at the same time.
//
// Before the first row there is a copy of the last one, after the last a copy
// of the first: with n words a row, word i of the colour is element n+i, the
// words above and below are elements i and 2n+i.
type spins struct {
	rows, words  int  // words of a row of one colour
	top          uint // the highest bit of the last word of a row that is a site
	black, white []uint64
	sites        []uint64 // the bits that are sites, 0 beyond the last row
	side         []uint64 // see shift
	random, left []uint64 // numbers of the generator, and those not yet used
}

const (
	// A group is updated together: 8 words, 512 sites.
	group = 8
	// lead is the number of binary digits that are compared before asking
	// whether all sites of a group are decided; with 10 they mostly are.
	lead = 8
	// most is the random words that a group can need.
	most = len(digits{}) * group
	// reserve is the random words made at a time: what the fastest cache holds.
	reserve = 4096
)

// newSpins makes a lattice of spins +1. Both numbers must be even.
func newSpins(rows, columns int) *spins {
	half := columns / 2
	s := &spins{rows: rows, words: (half + 63) / 64, top: uint(half-1) % 64}
	n := rows * s.words
	padded := (n + group - 1) / group * group
	s.sites, s.side = make([]uint64, padded), make([]uint64, padded)
	s.black, s.white = make([]uint64, padded+2*s.words), make([]uint64, padded+2*s.words)
	for i := range n {
		s.sites[i] = ^uint64(0)
		if i%s.words == s.words-1 {
			s.sites[i] >>= 63 - s.top
		}
		s.black[s.words+i], s.white[s.words+i] = s.sites[i], s.sites[i]
	}
	s.close(s.black)
	s.close(s.white)
	s.random = make([]uint64, reserve)
	return s
}

// close copies the last row of a colour before the first and the first after
// the last.
func (s *spins) close(colour []uint64) {
	n := s.rows * s.words
	copy(colour[:s.words], colour[n:])
	copy(colour[s.words+n:], colour[s.words:2*s.words])
}

// shift writes to side, in the bits of the sites of a colour, their second
// neighbours in the row. The first have the same bits of the row of the other
// colour, the second one bit more or, in every other row, one less.
func (s *spins) shift(other []uint64, white bool) {
	n := s.words
	for r := range s.rows {
		row, side := other[n+r*n:][:n], s.side[r*n:][:n]
		if (r&1 == 1) != white {
			for w := range n - 1 {
				side[w] = row[w]>>1 | row[w+1]<<63
			}
			side[n-1] = row[n-1]>>1 | row[0]&1<<s.top
		} else {
			side[0] = row[0]<<1 | row[n-1]>>s.top&1
			for w := 1; w < n; w++ {
				side[w] = row[w]<<1 | row[w-1]>>63
			}
		}
	}
}

// sweep updates every site once, the black ones first. Acceptance is
// Metropolis' rule, see [digits].
func (s *spins) sweep(d *digits, g *pcg) {
	s.update(s.black, s.white, false, d, g)
	s.update(s.white, s.black, true, d, g)
}

// update updates the sites of one colour, own, whose neighbours are in other.
func (s *spins) update(own, other []uint64, white bool, d *digits, g *pcg) {
	s.shift(other, white)
	n := s.words
	for i := 0; i < len(s.side); {
		if len(s.left) < most {
			kept := copy(s.random, s.left)
			g.fill(s.random[kept:])
			s.left = s.random
		}
		if vector {
			done, rest := update8(&own[n+i], &other[i], &other[2*n+i], &other[n+i], &s.side[i], &s.sites[i], (len(s.side)-i)/group, d, &s.left[0], len(s.left))
			i += done * group
			s.left = s.left[len(s.left)-rest:]
			continue
		}
		s.left = s.left[updateGroup(own[n+i:], other[i:], other[2*n+i:], other[n+i:], s.side[i:], s.sites[i:], d, s.left):]
		i += group
	}
	s.close(own)
}

// updateGroup updates 8 words and returns how many random words it used.
func updateGroup(own, above, below, beside, side, sites []uint64, d *digits, random []uint64) int {
	var flips, ones, opens [group]uint64
	undecided := uint64(0)
	u := (*[lead * group]uint64)(random)
	for l := range group {
		x := own[l]
		a, b, c, e := x^above[l], x^below[l], x^beside[l], x^side[l]
		ab, ce := a^b, c^e
		flip := a&b | c&e | ab&ce // two and more neighbours disagree
		one := (ab ^ ce) &^ flip  // one disagrees
		open := sites[l] &^ flip
		flip &= sites[l]
		for k := range lead {
			t := one&d[k][0] | d[k][1]&^one
			flip |= open & (t & u[k*group+l])
			open &= t ^ u[k*group+l]
		}
		flips[l], ones[l], opens[l] = flip, one, open
		undecided |= open
	}
	used := lead * group
	for k := lead; undecided != 0 && k < len(d); k++ {
		u := (*[group]uint64)(random[used:])
		undecided = 0
		for l := range group {
			t := ones[l]&d[k][0] | d[k][1]&^ones[l]
			flips[l] |= opens[l] & (t & u[l])
			opens[l] &= t ^ u[l]
			undecided |= opens[l]
		}
		used += group
	}
	for l, flip := range flips {
		own[l] ^= flip
	}
	return used
}

// count returns the number of pairs of neighbours that disagree and the number
// of spins +1.
func (s *spins) count() (disagree, up int) {
	s.shift(s.white, false)
	n := s.words
	for i, m := range s.sites[:s.rows*n] {
		x, w := s.black[n+i], s.white[n+i]
		disagree += bits.OnesCount64((x^s.white[i])&m) + bits.OnesCount64((x^s.white[2*n+i])&m) +
			bits.OnesCount64((x^w)&m) + bits.OnesCount64((x^s.side[i])&m)
		up += bits.OnesCount64(x) + bits.OnesCount64(w)
	}
	return disagree, up
}

// place returns where the spin of site (r, c) is.
func (s *spins) place(r, c int) (word *uint64, bit uint) {
	colour := s.black
	if (r+c)&1 == 1 {
		colour = s.white
	}
	return &colour[s.words+r*s.words+c/128], uint(c/2) % 64
}

// at returns the spin of site (r, c), 1 or -1.
func (s *spins) at(r, c int) int {
	word, bit := s.place(r, c)
	return 2*int(*word>>bit&1) - 1
}

// digits are the binary digits of p = e^(-4K) and p², K = J/kT, most
// significant first, each in all bits of a word.
//
// The flip of a site with n disagreeing neighbours costs 4J(2-n). Metropolis'
// rule makes it always for n >= 2, with probability p for n = 1 and p² for
// n = 0. With t the p or p² of a site and u its uniform number, u < t is
// decided by the first binary digit in which they differ: if that of t is 1.
// One random word holds a digit of u (its complement, to save a step) for 64
// sites, and half of those that are undecided become decided.
type digits [64][2]uint64

func newDigits(p float64) (d digits) {
	for i, t := range [2]float64{p, p * p} {
		for k := range d {
			t *= 2
			if t >= 1 {
				d[k][i] = ^uint64(0)
				t--
			}
		}
	}
	return d
}
