package lanes

import "math"

// A Moments collects, for levels with energies e and weights g in bins of equal
// width, the moments Σ g tⁿ, n = 0 … 7, with t = (e-From)·PerBin - (i+1/2) in
// bin i, so |t| <= 1/2; and what the levels have in common.
type Moments struct {
	Rows         [][Width]float64
	From, PerBin float64

	Min, Max  [Width]float64 // of the energies in each lane
	Fractions bool           // some weight is not an integer
}

// MaxBins is the largest number of bins.
const MaxBins = 1 << 20

// NewMoments returns empty bins.
func NewMoments(bins int, from, perBin float64) *Moments {
	if bins < 1 || bins > MaxBins {
		panic("lanes: NewMoments: wrong number of bins")
	}
	m := &Moments{Rows: make([][Width]float64, bins), From: from, PerBin: perBin}
	for l := range m.Min {
		m.Min[l], m.Max[l] = math.Inf(1), math.Inf(-1)
	}
	return m
}

// Add adds levels, eight at a time: those of a group that are all in one bin
// are added up before they are added to it. nil weights are all 1. It stops at
// a group (the last may be short) with an energy outside of the bins or a
// weight that is not positive and finite, adds nothing of it, and returns how
// many levels it did.
func (m *Moments) Add(e, g []float64) int {
	if g != nil {
		return m.add(e, g[:len(e)])
	}
	var one [64 * Width]float64
	for i := range one {
		one[i] = 1
	}
	k := 0
	for k < len(e) {
		n := min(len(one), len(e)-k)
		did := m.add(e[k:k+n], one[:n])
		k += did
		if did < n {
			break
		}
	}
	return k
}

func (m *Moments) add(e, g []float64) int {
	k := 0
	if vector && len(e) >= Width {
		k = Width * moments8(m, &e[0], &g[0], len(e)/Width)
	}
	for k < len(e) {
		n := min(Width, len(e)-k)
		if !m.group(e[k:k+n], g[k:k+n]) {
			return k
		}
		k += n
	}
	return k
}

// group adds at most 8 levels.
func (m *Moments) group(e, g []float64) bool {
	bins := math.Float64bits(float64(len(m.Rows)))
	var row [Width]int
	var p [Width][Width]float64 // g tⁿ of each level
	fractions, same := false, len(e) == Width
	for l, v := range e {
		w := g[l]
		y := float64((v - m.From) * m.PerBin)
		// The bits of numbers that are negative or NaN are larger than others'.
		if math.Float64bits(y) >= bins || !(w > 0 && w < math.Inf(1)) {
			return false
		}
		fractions = fractions || w != math.Trunc(w)
		// The nearest integer to y-1/2, an even one if two are as near.
		y -= 0.5
		i := math.RoundToEven(y)
		t := y - i
		row[l] = int(i)
		same = same && row[l] == row[0]
		tt := float64(t * t)
		p[l][0], p[l][1] = w, float64(w*t)
		p[l][2], p[l][3] = float64(w*tt), float64(p[l][1]*tt)
		tt = float64(tt * tt)
		for n := range 4 {
			p[l][n+4] = float64(p[l][n] * tt)
		}
	}
	m.Fractions = m.Fractions || fractions
	for l, v := range e {
		if v < m.Min[l] {
			m.Min[l] = v
		}
		if v > m.Max[l] {
			m.Max[l] = v
		}
	}
	if same {
		r := &m.Rows[row[0]]
		for n := range r {
			r[n] += ((p[0][n] + p[1][n]) + (p[2][n] + p[3][n])) + ((p[4][n] + p[5][n]) + (p[6][n] + p[7][n]))
		}
		return true
	}
	for l := range e {
		r := &m.Rows[row[l]]
		for n := range r {
			r[n] += p[l][n]
		}
	}
	return true
}
