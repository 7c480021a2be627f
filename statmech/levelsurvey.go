package statmech

import (
	"math"
	"sync"

	"levelsum/statmech/internal/lanes"
	"levelsum/statmech/unit"
)

// A survey is what the one pass over a long list that checks its levels also
// makes: Taylor moments of the degeneracies in narrow energy bins over the whole
// range of the list. They serve every temperature down to surveyWidths widths
// of a bin without another look at the levels.
//
// With 2048 bins and eight moments M₀ … M₇ that is T >= 16 widths, about 1/120
// of the range: the terms that U, C and ln q lack there, of order αⁿ/n! with
// α = 1/32 half a width over T, are below 2⁻⁵².
type survey struct {
	moments *lanes.Moments
	width   float64 // of a bin, in J
}

const (
	surveyFrom   = 1 << 15 // shorter lists are not surveyed
	surveyBins   = 2048
	surveyWidths = 16
	surveyParts  = 4 // always as many, so that sums come out the same on any machine
	surveySample = 1024
	surveyBlock  = 65536
)

// survey checks the levels and makes the moments in one pass. It returns false,
// having changed nothing, if something is wrong with a level or the energies do
// not lend themselves to it.
func (l *Levels) survey() bool {
	if len(l.energies) < surveyFrom {
		return false
	}
	// The range is guessed from a sample, with a margin. If a level is outside,
	// the pass is made again with the true range.
	lo, hi, ok := energyRange(l.energies, len(l.energies)/surveySample)
	margin := (hi - lo) / 20
	if ok && l.surveyRange(lo-margin, hi+margin) {
		return true
	}
	lo, hi, ok = energyRange(l.energies, 1)
	return ok && l.surveyRange(lo, hi+(hi-lo)*0x1p-40)
}

// energyRange returns the least and largest of every step-th energy and of the
// last, and whether they are finite and not equal.
func energyRange(energies []unit.Energy, step int) (lo, hi float64, ok bool) {
	lo = float64(energies[len(energies)-1])
	hi = lo
	ok = lo-lo == 0
	for i := 0; i < len(energies); i += step {
		e := float64(energies[i])
		ok = ok && e-e == 0
		if e < lo {
			lo = e
		}
		if e > hi {
			hi = e
		}
	}
	return lo, hi, ok && hi > lo && !math.IsInf(hi-lo, 0)
}

func (l *Levels) surveyRange(lo, hi float64) bool {
	width := (hi - lo) / surveyBins
	if !(width > 0) || math.IsInf(1/width, 0) {
		return false
	}
	var parts [surveyParts]surveyPart
	var wg sync.WaitGroup
	for k := range parts {
		wg.Go(func() {
			n := l.Len()
			parts[k].run(l, k*n/surveyParts, (k+1)*n/surveyParts, lanes.NewMoments(surveyBins, lo, 1/width))
		})
	}
	wg.Wait()
	whole := parts[0]
	for _, p := range parts[1:] {
		if !whole.ok || !p.ok {
			return false
		}
		switch {
		case p.min < whole.min:
			whole.min, whole.gMin = p.min, p.gMin
		case p.min == whole.min:
			whole.gMin += p.gMin
		}
		whole.max = max(whole.max, p.max)
		whole.moments.Fractions = whole.moments.Fractions || p.moments.Fractions
		for i := range whole.moments.Rows {
			for n, v := range p.moments.Rows[i] {
				whole.moments.Rows[i][n] += v
			}
		}
	}
	l.min, l.max, l.gMin, l.gSum = whole.min, whole.max, whole.gMin, 0
	for i := range whole.moments.Rows {
		l.gSum += whole.moments.Rows[i][0]
	}
	if whole.moments.Fractions {
		fractions := 0
		for _, g := range l.g {
			if g != math.Trunc(g) {
				fractions++
			}
		}
		l.warnFractions(fractions)
	}
	l.surveyed = &survey{moments: whole.moments, width: width}
	return true
}

// A surveyPart is what was found in a part of the list.
type surveyPart struct {
	moments  *lanes.Moments
	min, max unit.Energy
	gMin     float64
	ok       bool
}

// run surveys the levels from … to-1, block by block: the levels of the lowest
// energy are counted in those blocks only where they can be.
func (p *surveyPart) run(l *Levels, from, to int, m *lanes.Moments) {
	p.moments = m
	p.min, p.max = unit.Energy(math.Inf(1)), unit.Energy(math.Inf(-1))
	for at := from; at < to; at += surveyBlock {
		end := min(at+surveyBlock, to)
		var g []float64
		if l.g != nil {
			g = l.g[at:end]
		}
		for i := range m.Min {
			m.Min[i], m.Max[i] = math.Inf(1), math.Inf(-1)
		}
		if m.Add(numbers(l.energies[at:end]), g) < end-at {
			return
		}
		low := unit.Energy(math.Inf(1))
		for i := range m.Min {
			low, p.max = min(low, unit.Energy(m.Min[i])), max(p.max, unit.Energy(m.Max[i]))
		}
		if low > p.min {
			continue
		}
		if low < p.min {
			p.min, p.gMin = low, 0
		}
		for i, e := range l.energies[at:end] {
			if e == low {
				p.gMin += l.weight(at + i)
			}
		}
	}
	p.ok = true
}

// serves says whether the moments are fine enough for temperatures from T on.
func (s *survey) serves(T unit.Temperature) bool {
	return s != nil && surveyWidths*s.width <= unit.Boltzmann*float64(T)
}

// table returns the moments gathered in bins as wide as kT at tMin.
//
// A bin of half-width h about C takes m of the narrow bins; with t of the
// narrow one and s = (c-C)/h, ρ = width/h, its own t is s+ρt, so that
//
//	Mₙ = Σ_k binomial(n, k) sⁿ⁻ᵏ ρᵏ m_k.
//
// The m_k from k = 8 on are left out, as in the narrow bins.
func (s *survey) table(l *Levels, tMin unit.Temperature) *levelTable {
	rows := s.moments.Rows
	m := len(rows)
	if most := unit.Boltzmann * float64(tMin) / s.width; most < float64(m) {
		m = int(most)
	}
	t := &levelTable{
		h:       float64(m) * s.width / 2 / unit.Boltzmann,
		origin:  (s.moments.From - float64(l.min)) / unit.Boltzmann,
		moments: make([][tableMoments]float64, (len(rows)+m-1)/m),
		gMin:    l.gMin,
	}
	for i := range rows {
		if rows[i][0] == 0 {
			continue
		}
		shift := (2*float64(i%m)+1)/float64(m) - 1
		scale := 1.0
		var p [tableMoments]float64 // powers of the shift
		p[0] = 1
		for n := 1; n < len(p); n++ {
			p[n] = p[n-1] * shift
		}
		into := &t.moments[i/m]
		for k, v := range rows[i] {
			v *= scale
			for n := k; n < tableMoments; n++ {
				into[n] += float64(float64(binomials[n][k]*p[n-k]) * v)
			}
			scale *= 2 / float64(m)
		}
	}
	return t
}

// binomials holds n over k.
var binomials = func() (b [tableMoments][lanes.Width]float64) {
	for n := range b {
		b[n][0] = 1
		for k := 1; k < len(b[n]) && k <= n; k++ {
			b[n][k] = b[n][k-1] * float64(n-k+1) / float64(k)
		}
	}
	return b
}()
