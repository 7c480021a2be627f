package lattice

import "math/bits"

// spins is the state of a simulation. The sites are coloured like a
// chessboard: black holds the sites (r, c) with r+c even, white the others,
// row by row, site c at bit c/2 of its row, a set bit for spin +1. All four
// neighbours of a site have the other colour, so that the sites of one colour
// can be updated at the same time, 64 in a word.
type spins struct {
	rows, words  int    // words of a row of one colour
	last         uint64 // the bits of the last word of a row that are sites
	top          uint   // the highest of them
	black, white []uint64
	random       []uint64 // for some rows, lead words for a word of sites
}

// newSpins makes a lattice of spins +1. Both numbers must be even.
func newSpins(rows, columns int) *spins {
	half := columns / 2
	s := &spins{rows: rows, words: (half + 63) / 64, top: uint(half-1) % 64}
	s.last = ^uint64(0) >> (63 - s.top)
	s.black = make([]uint64, rows*s.words)
	for i := range s.black {
		s.black[i] = s.sites(i % s.words)
	}
	s.white = append([]uint64(nil), s.black...)
	s.random = make([]uint64, lead*s.words*min(rows, 1+64/s.words))
	return s
}

// sites returns the bits of a word that are sites.
func (s *spins) sites(word int) uint64 {
	if word == s.words-1 {
		return s.last
	}
	return ^uint64(0)
}

// along returns, in the bits of the sites of word w of a row, their second
// neighbours in the row. The first have the same bits of the row of the other
// colour, the second one bit more (forward) or one less.
func (s *spins) along(row []uint64, w int, forward bool) uint64 {
	if forward {
		if w == len(row)-1 {
			return row[w]>>1 | row[0]&1<<s.top
		}
		return row[w]>>1 | row[w+1]<<63
	}
	if w == 0 {
		return row[0]<<1 | row[len(row)-1]>>s.top&1
	}
	return row[w]<<1 | row[w-1]>>63
}

// neighbours returns the rows of the other colour beside, above and below row r.
func (s *spins) neighbours(other []uint64, r int) (beside, above, below []uint64) {
	n, up, down := s.words, r-1, r+1
	if r == 0 {
		up = s.rows - 1
	}
	if down == s.rows {
		down = 0
	}
	return other[r*n : r*n+n], other[up*n : up*n+n], other[down*n : down*n+n]
}

// lead is the number of binary digits that are compared before asking whether
// all sites of a word are decided; after 8 they are in three cases of four.
const lead = 8

// sweep updates every site once, the black ones first. Acceptance is
// Metropolis' rule, see [digits].
func (s *spins) sweep(d *digits, g *pcg) {
	s.half(s.black, s.white, false, d, g)
	s.half(s.white, s.black, true, d, g)
}

// half updates the sites of one colour, own, whose neighbours are in other.
func (s *spins) half(own, other []uint64, white bool, d *digits, g *pcg) {
	var random []uint64
	for r := range s.rows {
		if len(random) == 0 {
			random = s.random
			g.fill(random)
		}
		forward := (r&1 == 1) != white
		row := own[r*s.words:][:s.words]
		beside, above, below := s.neighbours(other, r)
		for w, x := range row {
			a, b, c, e := x^above[w], x^below[w], x^beside[w], x^s.along(beside, w, forward)
			ab, ce := a^b, c^e
			flip := a&b | c&e | ab&ce // two and more neighbours disagree
			one := (ab ^ ce) &^ flip  // one disagrees
			open := ^flip & s.sites(w)
			flip &= s.sites(w)
			// The digits of p or p², whichever belongs to a site, by the place
			// in the number: none is 1, those of p, those of p², both.
			digit := [4]uint64{0, one, ^one, ^uint64(0)}

			u := (*[lead]uint64)(random)
			random = random[lead:]
			t := digit[d[0]&3]
			flip |= open & (t & u[0])
			open &= t ^ u[0]
			t = digit[d[1]&3]
			flip |= open & (t & u[1])
			open &= t ^ u[1]
			t = digit[d[2]&3]
			flip |= open & (t & u[2])
			open &= t ^ u[2]
			t = digit[d[3]&3]
			flip |= open & (t & u[3])
			open &= t ^ u[3]
			t = digit[d[4]&3]
			flip |= open & (t & u[4])
			open &= t ^ u[4]
			t = digit[d[5]&3]
			flip |= open & (t & u[5])
			open &= t ^ u[5]
			t = digit[d[6]&3]
			flip |= open & (t & u[6])
			open &= t ^ u[6]
			t = digit[d[7]&3]
			flip |= open & (t & u[7])
			open &= t ^ u[7]
			for k := lead; open != 0 && k < len(d); k++ {
				t, u := digit[d[k]&3], g.next()
				flip |= open & (t & u)
				open &= t ^ u
			}
			row[w] = x ^ flip
		}
	}
}

// count returns the number of pairs of neighbours that disagree and the number
// of spins +1.
func (s *spins) count() (disagree, up int) {
	for r := range s.rows {
		row := s.black[r*s.words:][:s.words]
		beside, above, below := s.neighbours(s.white, r)
		for w, x := range row {
			m := s.sites(w)
			disagree += bits.OnesCount64((x^above[w])&m) + bits.OnesCount64((x^below[w])&m) +
				bits.OnesCount64((x^beside[w])&m) + bits.OnesCount64((x^s.along(beside, w, r&1 == 1))&m)
			up += bits.OnesCount64(x) + bits.OnesCount64(beside[w])
		}
	}
	return disagree, up
}

// digits are the binary digits of p = e^(-4K) and p², K = J/kT, most
// significant first: bit 0 of an element is a digit of p, bit 1 one of p².
//
// The flip of a site with n disagreeing neighbours costs 4J(2-n). Metropolis'
// rule makes it always for n >= 2, with probability p for n = 1 and p² for
// n = 0. With t the p or p² of a site and u its uniform number, u < t is
// decided by the first binary digit in which they differ: if that of t is 1.
// One random word holds a digit of u (its complement, to save a step) for 64
// sites, and half of those that are undecided become decided.
type digits [64]uint8

func newDigits(p float64) (d digits) {
	for i, t := range [2]float64{p, p * p} {
		for k := range d {
			t *= 2
			if t >= 1 {
				d[k] |= 1 << i
				t--
			}
		}
	}
	return d
}

// at returns the spin of site (r, c), 1 or -1.
func (s *spins) at(r, c int) int {
	row := s.black
	if (r+c)&1 == 1 {
		row = s.white
	}
	return 2*int(row[r*s.words+c/128]>>(c/2%64)&1) - 1
}
