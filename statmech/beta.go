package statmech

import (
	"errors"
	"fmt"
	"math"

	"levelsum/statmech/unit"
)

// ErrUnbounded is returned where a negative or infinite temperature is asked
// of a spectrum without a highest level.
var ErrUnbounded = errors.New("the spectrum has no highest level")

// A BetaState holds the canonical functions of a bounded spectrum at an inverse
// temperature β of either sign.
type BetaState struct {
	Beta     unit.InverseEnergy
	Energy   unit.Energy  // ⟨E⟩, from the zero of the list's energies
	Spread   unit.Energy  // standard deviation of E, √(∂²ln Z/∂β²)
	Entropy  EntropyOverK // S/k
	HeatC    float64      // C/k = β² var E
	LogZ     float64      // ln Σ g exp(-β(E-E_ref))
	RefLevel unit.Energy  // E_ref: the lowest energy for β >= 0, the highest for β < 0
}

// Temperature returns 1/kβ. It is negative for an inverted distribution, which
// is hotter than any positive temperature, and +Inf for β = 0.
func (s BetaState) Temperature() unit.Temperature {
	if s.Beta == 0 {
		return unit.Temperature(math.Inf(1))
	}
	return s.Beta.AsTemperature()
}

// AtBeta returns the canonical functions at inverse temperature β, which may
// be zero or negative for a spectrum that has a highest level (N. F. Ramsey,
// Phys. Rev. 103, 20, 1956). For β < 0 energies are counted from the top, so
// the limit T → 0⁻ is as exact as T → 0⁺.
//
// Errors: a [*DomainError] if β is not finite; [ErrUnbounded] if β <= 0 and the
// list is marked as truncated.
func (l *Levels) AtBeta(beta unit.InverseEnergy) (BetaState, error) {
	const fn = "statmech.Levels.AtBeta"
	b := float64(beta)
	if b-b != 0 {
		return BetaState{}, &DomainError{fn, "beta", beta.String(), "finite"}
	}
	if b <= 0 && l.truncated {
		return BetaState{}, fmt.Errorf("%s: beta = %s: %w", fn, beta, ErrUnbounded)
	}
	return l.atBeta(b), nil
}

func (l *Levels) atBeta(b float64) BetaState {
	ref := l.min
	if b < 0 {
		ref = l.max
	}
	// gRef is the weight of the levels at the reference energy; the rest is
	// summed apart so that ln Z near T → 0 keeps its relative accuracy.
	var gRef, rest, first float64
	for i, e := range l.energies {
		if e == ref {
			gRef += l.weight(i)
			continue
		}
		w := l.weight(i) * math.Exp(-b*float64(e-ref))
		rest += w
		first += float64(w * float64(e-ref))
	}
	z := gRef + rest
	mean := first / z
	second := float64(gRef * float64(mean*mean))
	for i, e := range l.energies {
		if e == ref {
			continue
		}
		d := float64(e-ref) - mean
		second += float64(l.weight(i) * math.Exp(-b*float64(e-ref)) * float64(d*d))
	}
	variance := second / z
	logZ := math.Log(gRef) + math.Log1p(rest/gRef)
	return BetaState{
		Beta: unit.InverseEnergy(b), Energy: ref + unit.Energy(mean), Spread: unit.Energy(math.Sqrt(variance)),
		Entropy: EntropyOverK(logZ + float64(b*mean)), HeatC: b * b * variance, LogZ: logZ, RefLevel: ref,
	}
}

// PopulationsAtBeta returns the populations at inverse temperature β. Errors
// as [Levels.AtBeta].
func (l *Levels) PopulationsAtBeta(beta unit.InverseEnergy) ([]float64, error) {
	if _, err := l.AtBeta(beta); err != nil {
		return nil, err
	}
	return l.populations(float64(beta)), nil
}

// BetaOf returns the inverse temperature at which the mean energy is U, in the
// list's own zero. It is positive for U below the mean over all states, zero
// there (T = ±∞), and negative above.
//
// Errors: a [*DomainError] if U is not strictly between the lowest and the
// highest energy, where no finite β exists; [ErrUnbounded] if U needs β <= 0
// and the list is marked as truncated.
func (l *Levels) BetaOf(U unit.Energy) (unit.InverseEnergy, error) {
	const fn = "statmech.Levels.BetaOf"
	if !(U > l.min && U < l.max) {
		return 0, &DomainError{fn, "U", U.String(), fmt.Sprintf("between the lowest energy %s and the highest %s, both excluded", l.min, l.max)}
	}
	middle := l.atBeta(0).Energy
	if U == middle {
		if l.truncated {
			return 0, fmt.Errorf("%s: U = %s: %w", fn, U, ErrUnbounded)
		}
		return 0, nil
	}
	if U > middle && l.truncated {
		return 0, fmt.Errorf("%s: U = %s needs an inverted distribution: %w", fn, U, ErrUnbounded)
	}
	// ⟨E⟩ falls with β. Bracket the root, then Newton steps kept inside.
	sign := 1.0
	if U > middle {
		sign = -1
	}
	scale := 1 / float64(l.max-l.min)
	lo, hi := 0.0, sign*scale // |β| between
	for l.past(hi, U) {
		lo, hi = hi, 2*hi
		if math.Abs(hi)*float64(l.max-l.min) > 1e300 {
			break
		}
	}
	b := (lo + hi) / 2
	for range 200 {
		s := l.atBeta(b)
		d := excess(s, U)
		if d == 0 {
			break
		}
		if (d > 0) == (sign > 0) { // energy not yet past U: go further out
			lo = b
		} else {
			hi = b
		}
		v := float64(s.Spread) * float64(s.Spread)
		next := b + d/v
		if !(math.Min(lo, hi) < next && next < math.Max(lo, hi)) {
			next = (lo + hi) / 2
		}
		if math.Abs(next-b) <= 1e-16*math.Abs(next) {
			b = next
			break
		}
		b = next
	}
	return unit.InverseEnergy(b), nil
}

// excess returns ⟨E⟩ - U counted from the state's reference level.
func excess(s BetaState, U unit.Energy) float64 { return float64(s.Energy - U) }

// past reports whether the energy at β is still on the side of β = 0 of U.
func (l *Levels) past(b float64, U unit.Energy) bool {
	d := excess(l.atBeta(b), U)
	return b > 0 && d > 0 || b < 0 && d < 0
}

// TemperatureOf returns the temperature at which the mean energy is U, from
// [Levels.BetaOf]: negative for an inverted distribution, +Inf at the mean over
// all states. Errors as BetaOf.
func (l *Levels) TemperatureOf(U unit.Energy) (unit.Temperature, error) {
	b, err := l.BetaOf(U)
	if err != nil {
		return 0, err
	}
	return BetaState{Beta: b}.Temperature(), nil
}
