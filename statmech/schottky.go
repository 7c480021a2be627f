package statmech

import (
	"math"

	"levelsum/statmech/unit"
)

// Schottky is a system of two levels:
//
//	q = 1 + r e⁻ˣ,  U/kT = x r e⁻ˣ/(1 + r e⁻ˣ),  C/k = r x² e⁻ˣ/(1 + r e⁻ˣ)²
//
// with x = Splitting/kT and r = Ratio = g₁/g₀, the degeneracy of the upper
// level over that of the lower one; ln q is counted for g₀ = 1. A heat capacity
// determines Splitting and Ratio only, not g₀ and g₁.
//
// Accuracy: 1e-15 (1 + x) relative, x from 1e-4 to 200: the rounding of x alone
// moves e⁻ˣ by x 2⁻⁵³ (TestLevelsSchottky).
//
// Reference: W. Schottky, Phys. Z. 23, 448 (1922).
type Schottky struct {
	Splitting unit.Energy
	Ratio     float64
}

// Reduced returns the functions at temperature T. It panics with a
// [*DomainError] if T, Splitting or Ratio is not positive and finite.
func (s Schottky) Reduced(T unit.Temperature) Reduced {
	const fn = "statmech.Schottky.Reduced"
	CheckTemperature(fn, T)
	CheckPositive(fn, "Splitting", s.Splitting)
	CheckRatio(fn, "Ratio", s.Ratio)
	x := s.Splitting.OverKT(T)
	if x > 1e6 {
		return Reduced{} // exp(-x) is zero, x may be infinite
	}
	w := s.Ratio * math.Exp(-x)
	d := 1 + w
	u := x * (w / d)
	return Reduced{LogQ: math.Log1p(w), U: u, C: x * (u / d)}
}

// GroundDegeneracy returns 1, the degeneracy that ln q counts for the ground level.
func (s Schottky) GroundDegeneracy() float64 { return 1 }

// HighTemperatureHeatCapacity returns 0, the limit of C/k.
func (s Schottky) HighTemperatureHeatCapacity() float64 { return 0 }
