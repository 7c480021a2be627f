package statmech

import (
	"math"
	"slices"
	"sync"

	"levelsum/display"
	"levelsum/statmech/unit"
)

const (
	tableMoments = 16  // Taylor moments M₀..M₁₅ of one energy bin
	tableOrder   = 13  // highest power of α used; (1/2)¹⁴/14! < 2⁻⁵²
	tableSpan    = 8   // a table serves temperatures up to this times its lowest
	tableReach   = 746 // exp(-x) is zero beyond
	tableParts   = 4   // partial tables, always as many so that sums come out the same on any machine
)

// ReducedAt returns the functions at each temperature. For long lists and many
// temperatures one pass over the levels per range of temperatures builds
// Taylor moments of the degeneracies within narrow energy bins, from which each
// temperature follows without looking at the levels again. Of very long lists
// [NewLevels] has made such moments in the pass that checks the levels; they do
// down to temperatures of about 1/120 of the range of the energies.
func (l *Levels) ReducedAt(ts []unit.Temperature) []Reduced {
	for _, T := range ts {
		CheckTemperature("statmech.Levels.ReducedAt", T)
	}
	rs := make([]Reduced, len(ts))
	order := make([]int, len(ts))
	for i := range order {
		order[i] = i
	}
	slices.SortStableFunc(order, func(i, j int) int {
		if ts[i] < ts[j] {
			return -1
		}
		if ts[i] > ts[j] {
			return 1
		}
		return 0
	})
	for lo := 0; lo < len(order); {
		hi := lo + 1
		for hi < len(order) && ts[order[hi]] <= tableSpan*ts[order[lo]] {
			hi++
		}
		tMin, tMax := ts[order[lo]], ts[order[hi-1]]
		bins := l.tableBins(tMin, tMax)
		served := l.surveyed.serves(tMin)
		// A pass costs about as much as two direct sums, a bin as two levels.
		if served || hi-lo > 2 && bins > 0 && (hi-lo-2)*l.Len() > 2*(hi-lo)*bins {
			var t *levelTable
			if served {
				t = l.surveyed.table(l, tMin)
			} else {
				t = l.newTable(tMin, tMax, bins)
			}
			for _, i := range order[lo:hi] {
				display.Checkpoint()
				var ok bool
				if rs[i], ok = t.reduced(float64(ts[i])); !ok {
					rs[i] = l.direct(unit.Boltzmann * float64(ts[i]))
				}
			}
		} else {
			for _, i := range order[lo:hi] {
				display.Checkpoint()
				rs[i] = l.direct(unit.Boltzmann * float64(ts[i]))
			}
		}
		lo = hi
	}
	return rs
}

// tableBins returns the number of bins that a table for tMin..tMax needs, 0 if
// too many.
func (l *Levels) tableBins(tMin, tMax unit.Temperature) int {
	width := float64(tMin) // of a bin, in K
	reach := min(float64(l.max-l.min)/unit.Boltzmann, tableReach*float64(tMax))
	if n := reach / width; n < 1<<16 {
		return int(n) + 1
	}
	return 0
}

// A levelTable holds Mₙ = Σ g tⁿ, t = (E-c)/h, of each energy bin with centre
// c = origin+(2i+1)h and half-width h (in K).
type levelTable struct {
	h       float64
	origin  float64 // above the lowest level, in K
	moments [][tableMoments]float64
	gMin    float64
}

func (l *Levels) newTable(tMin, tMax unit.Temperature, bins int) *levelTable {
	h := float64(tMin) / 2
	var parts [tableParts][][tableMoments]float64
	var wg sync.WaitGroup
	for k := range parts {
		wg.Go(func() {
			n := l.Len()
			m := make([][tableMoments]float64, bins)
			l.fill(m, k*n/tableParts, (k+1)*n/tableParts, h, tableReach*float64(tMax))
			parts[k] = m
		})
	}
	wg.Wait()
	m := parts[0]
	for _, p := range parts[1:] {
		for i := range m {
			for n := range m[i] {
				m[i][n] += p[i][n]
			}
		}
	}
	return &levelTable{h: h, moments: m, gMin: l.gMin}
}

// fill adds the levels lo..hi to the moments m.
func (l *Levels) fill(m [][tableMoments]float64, lo, hi int, h, reach float64) {
	const perK = 1 / unit.Boltzmann
	half := 1 / (2 * h)
	perH := 1 / h
	for i := lo; i < hi; i++ {
		e := float64(l.energies[i]-l.min) * perK
		if e > reach {
			continue
		}
		w := 1.0
		if l.g != nil {
			w = l.g[i]
		}
		b := min(int(e*half), len(m)-1)
		t := (e - float64(float64(2*b+1)*h)) * perH
		row := &m[b]
		// Two interleaved chains of powers: t², so that the multiplications
		// do not wait for one another.
		tt := t * t
		p, q := w, float64(w*t)
		for n := 0; n < tableMoments; n += 2 {
			row[n] += p
			row[n+1] += q
			p *= tt
			q *= tt
		}
	}
}

// reduced returns the functions at T, and false if they lose digits: where next
// to nothing is excited, a small U and C are differences of larger numbers, the
// energies of the levels in the lowest bin and of its centre.
func (t *levelTable) reduced(T float64) (Reduced, bool) {
	const loss = 32 // cancellation that is put up with
	alpha := t.h / T
	var a [tableOrder + 1]float64 // (-α)ⁿ/n!
	a[0] = 1
	for n := 1; n <= tableOrder; n++ {
		a[n] = -a[n-1] * alpha / float64(n)
	}
	// First pass: q and the mean; second: the variance about the mean.
	type sums struct{ c, z, z1, z2 float64 }
	bins := make([]sums, 0, len(t.moments))
	var q, mean, size float64
	for i := range t.moments {
		row := &t.moments[i]
		if row[0] == 0 {
			continue
		}
		c := float64(float64(2*i+1)*alpha) + t.origin/T // centre in units of kT
		if c > tableReach {
			break
		}
		var s0, s1, s2 float64
		for n := tableOrder; n >= 0; n-- {
			s0 += float64(a[n] * row[n])
			s1 += float64(a[n] * row[n+1])
			s2 += float64(a[n] * row[n+2])
		}
		f := math.Exp(-c)
		s := sums{c, f * s0, f * s1, f * s2}
		bins = append(bins, s)
		q += s.z
		mean += float64(s.c*s.z) + float64(alpha*s.z1)
		size += float64(math.Abs(s.c) * s.z)
	}
	mean /= q
	ok := size <= loss*mean*q
	variance := 0.0
	size = 0
	for _, s := range bins {
		d := s.c - mean
		variance += float64(float64(d*d)*s.z) + float64(2*d*alpha*s.z1) + float64(alpha*alpha*s.z2)
		size += float64(float64(d*d) * s.z)
	}
	ok = ok && size <= loss*variance && (q > 1.1 || q < 0.9)
	return Reduced{LogQ: math.Log(q), U: mean, C: variance / q}, ok
}
