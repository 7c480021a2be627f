package statmech

import (
	"fmt"
	"math"

	"levelsum/display"
	"levelsum/statmech/unit"
)

// Levels is a list of energy levels with degeneracies. Its functions are
//
//	q = Σ gᵢ exp(-(Eᵢ-E₀)/kT),  U/kT = ⟨x⟩,  C/k = ⟨(x-⟨x⟩)²⟩,  x = (E-E₀)/kT
//
// with E₀ the lowest energy of the list, which need not be sorted. It is a
// [Mode], a [SliceMode] and a [ZeroPointer] (E₀).
//
// Range: every T > 0; no overflow at any. For a list that is the beginning of
// an unbounded spectrum see [Levels.MarkTruncated].
//
// Accuracy: ln q, U and C within 1e-15 (1 + x) relative, x the largest (E-E₀)/kT
// that counts (direct sum, TestLevelsSchottky), and 2e-14 for long lists at many
// temperatures (TestLevelsTableClosedForm, TestLevelsSurvey; 2e-15 was seen for
// 10⁷ equally spaced levels at 100 temperatures).
type Levels struct {
	energies  []unit.Energy
	g         []float64 // nil if every degeneracy is 1
	min, max  unit.Energy
	gMin      float64 // total degeneracy of the lowest energy
	gSum      float64
	truncated bool
	warnings  []string
	surveyed  *survey // of a long list, else nil
}

// NewLevels returns the levels with the given energies, in any order and from
// any zero, and degeneracies; nil degeneracies are all 1. The slices are kept,
// not copied, and must not change afterwards.
//
// It returns a [*DomainError] if the list is empty, the lengths differ, an
// energy is not finite or a degeneracy is not positive and finite. A degeneracy
// that is no integer is kept with a warning.
func NewLevels(energies []unit.Energy, degeneracies []float64) (*Levels, error) {
	const fn = "statmech.NewLevels"
	if len(energies) == 0 {
		return nil, &DomainError{fn, "energies", "an empty list", "at least one level"}
	}
	if degeneracies != nil && len(degeneracies) != len(energies) {
		return nil, &DomainError{fn, "degeneracies", fmt.Sprintf("%d values", len(degeneracies)),
			fmt.Sprintf("%d, one for each energy", len(energies))}
	}
	l := &Levels{energies: energies, g: degeneracies, min: energies[0], max: energies[0]}
	if l.survey() {
		return l, nil
	}
	// Short lists, and those with something to complain of.
	for i, e := range energies {
		if e-e != 0 {
			return nil, &DomainError{fn, fmt.Sprintf("energies[%d]", i), e.String(), "finite"}
		}
		// Comparisons, not min and max: those also order zeros and look for NaN.
		switch {
		case e < l.min:
			l.min, l.gMin = e, l.weight(i)
		case e == l.min:
			l.gMin += l.weight(i)
		}
		if e > l.max {
			l.max = e
		}
	}
	if degeneracies == nil {
		l.gSum = float64(len(energies))
	}
	fractions := 0
	for i, g := range degeneracies {
		if !(g > 0) || math.IsInf(g, 1) {
			return nil, &DomainError{fn, fmt.Sprintf("degeneracies[%d]", i), fmt.Sprint(g), "positive and finite"}
		}
		if g != math.Trunc(g) {
			fractions++
		}
		l.gSum += g
	}
	l.warnFractions(fractions)
	return l, nil
}

func (l *Levels) warnFractions(n int) {
	if n > 0 {
		l.warnings = append(l.warnings, fmt.Sprintf("%d of %d degeneracies are not integers", n, len(l.g)))
	}
}

func (l *Levels) weight(i int) float64 {
	if l.g == nil {
		return 1
	}
	return l.g[i]
}

// String says how many levels there are and between which energies.
func (l *Levels) String() string {
	s := fmt.Sprintf("%d levels from %.6g to %.6g cm-1, %g states", l.Len(), l.min.In(unit.PerCm), l.max.In(unit.PerCm), l.gSum)
	if l.truncated {
		s += ", truncated"
	}
	return s
}

// Len returns the number of levels.
func (l *Levels) Len() int { return len(l.energies) }

// Level returns the energy and degeneracy of level i in the order given.
func (l *Levels) Level(i int) (unit.Energy, float64) { return l.energies[i], l.weight(i) }

// ZeroPointEnergy returns E₀, the lowest energy of the list.
func (l *Levels) ZeroPointEnergy() unit.Energy { return l.min }

// TopEnergy returns the highest energy of the list.
func (l *Levels) TopEnergy() unit.Energy { return l.max }

// GroundDegeneracy returns the total degeneracy of the lowest energy; the
// entropy tends to k times its logarithm as T → 0.
func (l *Levels) GroundDegeneracy() float64 { return l.gMin }

// LowTemperatureEntropy returns ln g₀, the limit of S/k for T → 0.
func (l *Levels) LowTemperatureEntropy() EntropyOverK { return EntropyOverK(math.Log(l.gMin)) }

// HighTemperatureEntropy returns ln Σg, the limit of S/k for T → ∞ of a
// complete list. For a truncated list it returns +Inf.
func (l *Levels) HighTemperatureEntropy() EntropyOverK {
	if l.truncated {
		return EntropyOverK(math.Inf(1))
	}
	return EntropyOverK(math.Log(l.gSum))
}

// MarkTruncated says that the list is the beginning of an unbounded spectrum
// (an oscillator, a rotor). [Levels.Tail] then estimates what is missing,
// [Levels.Warnings] speaks when it matters, and inverse temperatures β <= 0 are
// refused. It returns l.
func (l *Levels) MarkTruncated() *Levels { l.truncated = true; return l }

// Reduced returns the functions at temperature T by a direct sum, in two
// passes so that C does not suffer from cancellation; of very long lists as
// [Levels.ReducedAt] does.
func (l *Levels) Reduced(T unit.Temperature) Reduced {
	CheckTemperature("statmech.Levels.Reduced", T)
	if l.surveyed.serves(T) {
		if r, ok := l.surveyed.table(l, T).reduced(float64(T)); ok {
			return r
		}
	}
	return l.direct(unit.Boltzmann * float64(T))
}

// block is the number of terms summed before a partial sum is put away, so
// that rounding errors grow with the number of blocks and not of levels.
const block = 512

// direct sums at kT = kt (J).
func (l *Levels) direct(kt float64) Reduced {
	var rest, first float64 // Σ over levels above the ground of g e⁻ˣ, g x e⁻ˣ
	for lo := 0; lo < len(l.energies); lo += block {
		if lo > 0 {
			display.Checkpoint()
		}
		var z, zx float64
		for i := lo; i < min(lo+block, len(l.energies)); i++ {
			x := float64(l.energies[i]-l.min) / kt
			if l.energies[i] == l.min || x > 745 {
				continue
			}
			w := l.weight(i) * math.Exp(-x)
			z += w
			zx += float64(w * x)
		}
		rest += z
		first += zx
	}
	q := l.gMin + rest
	mean := first / q
	second := float64(l.gMin * float64(mean*mean))
	for lo := 0; lo < len(l.energies); lo += block {
		if lo > 0 {
			display.Checkpoint()
		}
		var zxx float64
		for i := lo; i < min(lo+block, len(l.energies)); i++ {
			x := float64(l.energies[i]-l.min) / kt
			if l.energies[i] == l.min || x > 745 {
				continue
			}
			d := x - mean
			zxx += l.weight(i) * math.Exp(-x) * float64(d*d)
		}
		second += zxx
	}
	return Reduced{LogQ: math.Log(l.gMin) + math.Log1p(rest/l.gMin), U: mean, C: second / q}
}

// Populations returns pᵢ = gᵢ exp(-(Eᵢ-E₀)/kT)/q for each level in the order
// given; they add up to 1.
func (l *Levels) Populations(T unit.Temperature) []float64 {
	CheckTemperature("statmech.Levels.Populations", T)
	return l.populations(float64(T.Beta()))
}

// populations returns the populations at β, of either sign.
func (l *Levels) populations(beta float64) []float64 {
	ref := l.min
	if beta < 0 {
		ref = l.max
	}
	p := make([]float64, len(l.energies))
	sum := 0.0
	for i, e := range l.energies {
		p[i] = l.weight(i) * math.Exp(-beta*float64(e-ref))
		sum += p[i]
	}
	for i := range p {
		p[i] /= sum
	}
	return p
}

// Tail estimates which fraction of q a truncated list misses at T: the mean
// density of states in the upper half of the list is carried on above its top
// without end, so the estimate is a lower bound for a density that grows. It
// returns 0 for a list that is not marked as truncated.
func (l *Levels) Tail(T unit.Temperature) float64 {
	CheckTemperature("statmech.Levels.Tail", T)
	if !l.truncated || len(l.energies) < 2 || l.max == l.min {
		return 0
	}
	kt := unit.Boltzmann * float64(T)
	middle := l.min + (l.max-l.min)/2
	g, n := 0.0, 0
	for i, e := range l.energies {
		if e > middle {
			g += l.weight(i)
			n++
		}
	}
	// ρ kT e^{-x_top}; a level stands for the spacing around it, so the next
	// one is a mean spacing above the top: half of it is counted.
	spacing := float64(l.max-middle) / float64(n)
	missing := g / float64(l.max-middle) * kt * math.Exp(-(float64(l.max-l.min)+spacing/2)/kt)
	q := math.Exp(l.direct(kt).LogQ)
	return missing / (q + missing)
}

// tailLimit is the missing fraction of q above which a truncated list warns.
const tailLimit = 1e-6

// Warnings returns what a reader of results at T must know, nil if nothing.
func (l *Levels) Warnings(T unit.Temperature) []string {
	w := append([]string(nil), l.warnings...)
	if f := l.Tail(T); f > tailLimit {
		w = append(w, fmt.Sprintf("at %s the list of %d levels ends too early: about %.1g of the partition function is missing", T, l.Len(), f))
	}
	return w
}
