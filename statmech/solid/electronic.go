package solid

import (
	"levelsum/statmech"
	"levelsum/statmech/unit"
)

// Electronic is the heat capacity of conduction electrons well below their
// degeneracy temperature, C = γT, with U - U(0) = γT²/2 and S = γT.
//
// Range: the first term of Sommerfeld's expansion; the next one is smaller by
// (T/T_F)². Accuracy: 3 × 2⁻⁵² (TestElectronic).
//
// Errors: a panic with a [*statmech.DomainError] if T is not positive and
// finite or Gamma is negative or not finite.
//
// Reference: A. Sommerfeld, Zeitschrift für Physik 47, 1 (1928),
// doi:10.1007/BF01391052.
type Electronic struct {
	Gamma unit.SommerfeldCoefficient // per mole of formula units
}

func (e Electronic) bad() *statmech.DomainError {
	if !notNegative(float64(e.Gamma)) {
		return field("Gamma", e.Gamma, wantNotNegative)
	}
	return nil
}

func (e Electronic) reduced(T float64) statmech.Reduced {
	c := float64(e.Gamma) * T / unit.GasConstant
	return statmech.Reduced{LogQ: c / 2, U: c / 2, C: c}
}

func (e Electronic) heat(T float64) float64 { return float64(e.Gamma) * T / unit.GasConstant }

func (e Electronic) heats(dst, ts []float64) {
	for i, T := range ts {
		dst[i] = e.heat(T)
	}
}

func (e *Electronic) fields() []parameter {
	return []parameter{{"Gamma", (*float64)(&e.Gamma), "J/(mol K2)"}}
}

// Owns implements [Differentiable].
func (e *Electronic) Owns(p *float64) (string, bool) { return owns(e.fields(), p) }

// Accumulate implements [Differentiable] for Gamma.
func (e *Electronic) Accumulate(ts []unit.Temperature, at []*float64, c []float64, partials [][]float64) error {
	return accumulate(e, "solid.Electronic.Accumulate", e.fields(), ts, at, c, partials,
		func(t, c []float64, slopes [][]float64) {
			for i, v := range t {
				slopes[0][i] = v / unit.GasConstant
				c[i] = float64(e.Gamma) * slopes[0][i]
			}
		})
}
