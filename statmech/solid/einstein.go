package solid

import (
	"levelsum/statmech"
	"levelsum/statmech/internal/heats"
	"levelsum/statmech/special"
	"levelsum/statmech/unit"
)

// Einstein is a set of harmonic oscillators of one frequency ν,
//
//	C_V = n R x² eˣ/(eˣ-1)²,  x = θ/T,  θ = hν/k,
//
// where n = Modes is the number of oscillators in the formula unit.
//
// Range: any T; at low T a real crystal has modes of lower frequency, and its
// heat capacity falls as T³, not exponentially. Accuracy: 8 × 2⁻⁵² relative in
// the heat capacity (TestEinstein, special.TestEinsteinAccuracy); that is
// rounding, not how well a crystal follows the model.
//
// Errors: a panic with a [*statmech.DomainError] if T or Theta is not positive
// and finite or Modes is negative.
//
// Reference: A. Einstein, Annalen der Physik 327, 180 (1907),
// doi:10.1002/andp.19063270110.
type Einstein struct {
	Theta unit.Temperature // characteristic temperature hν/k
	Modes float64          // oscillators in the formula unit; 0 stands for 3
}

func (e Einstein) bad() *statmech.DomainError { return badLattice("Theta", e.Theta, e.Modes) }

// badLattice checks one characteristic temperature and a count of modes.
func badLattice(name string, theta unit.Temperature, n float64) *statmech.DomainError {
	switch {
	case !positive(float64(theta)):
		return field(name, theta, wantPositive)
	case !notNegative(n):
		return field("Modes", plainNumber(n), wantNotNegative)
	}
	return nil
}

func (e Einstein) reduced(T float64) statmech.Reduced {
	lnq, u, c := special.EinsteinThermal(float64(e.Theta) / T)
	return statmech.Reduced{LogQ: lnq, U: u, C: c}.Scale(modes(e.Modes))
}

func (e Einstein) heat(T float64) float64 {
	return modes(e.Modes) * special.EinsteinC(float64(e.Theta)/T)
}

func (e Einstein) heatTable() heatTable {
	return heatTable{&heats.Einstein, float64(e.Theta), modes(e.Modes), special.EinsteinC}
}

func (e Einstein) heats(dst, ts []float64) {
	for i, t := range ts {
		dst[i] = e.heat(t)
	}
}

// ModeCount returns the number of vibrations in the formula unit.
func (e Einstein) ModeCount() float64 { return modes(e.Modes) }

// ZeroPointEnergy returns n hν/2 per formula unit.
func (e Einstein) ZeroPointEnergy() unit.Energy {
	return zeroPoint(e, "solid.Einstein.ZeroPointEnergy", modes(e.Modes)/2, e.Theta)
}

// zeroPoint returns factor·kθ.
func zeroPoint(m model, fn string, factor float64, theta unit.Temperature) unit.Energy {
	if err := m.bad(); err != nil {
		err.Func = fn
		panic(err)
	}
	return unit.Energy(factor) * theta.AsEnergy()
}

func (e *Einstein) fields() []parameter {
	return []parameter{{"Theta", (*float64)(&e.Theta), "K"}, {"Modes", &e.Modes, ""}}
}

// Owns implements [Differentiable].
func (e *Einstein) Owns(p *float64) (string, bool) { return owns(e.fields(), p) }

// Accumulate implements [Differentiable] for Theta and Modes.
func (e *Einstein) Accumulate(ts []unit.Temperature, at []*float64, c []float64, partials [][]float64) error {
	n := modes(e.Modes)
	return accumulate(e, "solid.Einstein.Accumulate", e.fields(), ts, at, c, partials,
		func(t, c []float64, slopes [][]float64) {
			var x [chunk]float64
			for i, v := range t {
				x[i] = float64(e.Theta) / v
			}
			perMode, slope := slopes[1], slopes[0]
			special.EinsteinCSlopes(perMode, slope, x[:len(t)])
			for i, v := range t {
				c[i] = n * perMode[i]
				slope[i] *= n / v
			}
		})
}
