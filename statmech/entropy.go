package statmech

import (
	"fmt"
	"math"
	"strconv"

	"levelsum/statmech/unit"
)

// EntropyOverK is an entropy in units of the Boltzmann constant, S/k, which is
// also its value in nats.
type EntropyOverK float64

// Nats returns the entropy in nats, the number S/k itself.
func (s EntropyOverK) Nats() float64 { return float64(s) }

// Bits returns the entropy in bits, S/(k ln 2).
func (s EntropyOverK) Bits() float64 { return float64(s) / math.Ln2 }

// PerParticle returns the entropy in J/K.
func (s EntropyOverK) PerParticle() unit.Entropy { return unit.Entropy(s * unit.Boltzmann) }

// Molar returns the entropy of one mole of independent copies in J/(mol K).
func (s EntropyOverK) Molar() unit.MolarEntropy { return unit.MolarEntropy(s) * unit.R }

// String returns the entropy with eight significant digits and the unit k.
func (s EntropyOverK) String() string { return strconv.FormatFloat(float64(s), 'g', 8, 64) + " k" }

// sumTolerance is how far the sum of a distribution may be from 1.
const sumTolerance = 1e-9

// checkDistribution returns a *DomainError unless p is a distribution.
func checkDistribution(fn, arg string, p []float64) error {
	if len(p) == 0 {
		return &DomainError{fn, arg, "an empty list", "at least one probability"}
	}
	sum := 0.0
	for i, x := range p {
		if !(x >= 0) || math.IsInf(x, 1) {
			return &DomainError{fn, fmt.Sprintf("%s[%d]", arg, i), fmt.Sprint(x), "a probability, not negative"}
		}
		sum += x
	}
	if math.Abs(sum-1) > sumTolerance {
		return &DomainError{fn, "the sum of " + arg, strconv.FormatFloat(sum, 'g', 12, 64),
			"1 within 1e-9; use Normalise if the values are only proportional to probabilities"}
	}
	return nil
}

// Normalise returns the weights divided by their sum. It returns a
// [*DomainError] if a weight is negative or not finite or if all are zero.
func Normalise(weights []float64) ([]float64, error) {
	const fn = "statmech.Normalise"
	sum := 0.0
	for i, x := range weights {
		if !(x >= 0) || math.IsInf(x, 1) {
			return nil, &DomainError{fn, fmt.Sprintf("weights[%d]", i), fmt.Sprint(x), "finite and not negative"}
		}
		sum += x
	}
	if !(sum > 0) || math.IsInf(sum, 1) {
		return nil, &DomainError{fn, "the sum of weights", fmt.Sprint(sum), "positive and finite"}
	}
	p := make([]float64, len(weights))
	for i, x := range weights {
		p[i] = x / sum
	}
	return p, nil
}

// GibbsEntropy returns the Gibbs entropy of a distribution over states,
//
//	S = -k Σ pᵢ ln pᵢ,
//
// where a state with pᵢ = 0 contributes nothing. For W equal probabilities it
// is k ln W; for a certain state it is 0. If the pᵢ are populations of levels
// that hold several states each, use [GibbsEntropyOfLevels].
//
// Errors: a [*DomainError] if a probability is negative or not finite, or if
// their sum is off 1 by more than 1e-9.
//
// Reference: J. W. Gibbs, Elementary Principles in Statistical Mechanics (1902).
func GibbsEntropy(p []float64) (EntropyOverK, error) {
	if err := checkDistribution("statmech.GibbsEntropy", "p", p); err != nil {
		return 0, err
	}
	return gibbs(p, nil), nil
}

// GibbsEntropyOfLevels returns the Gibbs entropy of populations pᵢ of levels
// of gᵢ states each,
//
//	S = -k Σ pᵢ ln(pᵢ/gᵢ).
//
// Errors: as [GibbsEntropy]; also if the lengths differ or a degeneracy is not
// positive and finite.
func GibbsEntropyOfLevels(p, g []float64) (EntropyOverK, error) {
	const fn = "statmech.GibbsEntropyOfLevels"
	if err := checkDistribution(fn, "p", p); err != nil {
		return 0, err
	}
	if len(g) != len(p) {
		return 0, &DomainError{fn, "g", fmt.Sprintf("%d values", len(g)), fmt.Sprintf("%d, one for each level", len(p))}
	}
	for i, x := range g {
		if !(x > 0) || math.IsInf(x, 1) {
			return 0, &DomainError{fn, fmt.Sprintf("g[%d]", i), fmt.Sprint(x), "positive and finite"}
		}
	}
	return gibbs(p, g), nil
}

func gibbs(p, g []float64) EntropyOverK {
	s := 0.0
	for i, x := range p {
		if x == 0 {
			continue
		}
		w := 1.0
		if g != nil {
			w = g[i]
		}
		if x < 1e-290 { // x/w may underflow
			s -= float64(x * (math.Log(x) - math.Log(w)))
		} else {
			s -= float64(x * math.Log(x/w))
		}
	}
	if s == 0 {
		return 0 // not -0
	}
	return EntropyOverK(s)
}

// RelativeEntropy returns D(p‖q) = Σ pᵢ ln(pᵢ/qᵢ), which is not negative, and
// +Inf if p gives weight to a state that q excludes.
//
// Errors: as [GibbsEntropy] for both; also if the lengths differ.
func RelativeEntropy(p, q []float64) (EntropyOverK, error) {
	const fn = "statmech.RelativeEntropy"
	if err := checkDistribution(fn, "p", p); err != nil {
		return 0, err
	}
	if err := checkDistribution(fn, "q", q); err != nil {
		return 0, err
	}
	if len(p) != len(q) {
		return 0, &DomainError{fn, "q", fmt.Sprintf("%d values", len(q)), fmt.Sprintf("%d, as many as p", len(p))}
	}
	d := 0.0
	for i, x := range p {
		if x == 0 {
			continue
		}
		if q[i] == 0 {
			return EntropyOverK(math.Inf(1)), nil
		}
		// x ln(x/q) - x + q, not negative term by term, so that distributions
		// that are nearly equal do not give a difference of rounding errors.
		u := (q[i] - x) / x
		d += float64(x * (u - math.Log1p(u)))
	}
	for i, x := range p {
		if x == 0 {
			d += q[i]
		}
	}
	return EntropyOverK(d), nil
}

// FreeEnergyExcess returns F - F_eq = kT D(p‖p_eq), how far the Helmholtz
// energy per particle of populations p of the levels l is above that of
// equilibrium at T; it is the work that they can give at most.
//
// Errors: as [RelativeEntropy]. It panics like every evaluation if T <= 0.
func FreeEnergyExcess(p []float64, l *Levels, T unit.Temperature) (unit.Energy, error) {
	CheckTemperature("statmech.FreeEnergyExcess", T)
	d, err := RelativeEntropy(p, l.Populations(T))
	if err != nil {
		return 0, err
	}
	return unit.Energy(d) * T.AsEnergy(), nil
}
