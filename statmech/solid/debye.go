package solid

import (
	"levelsum/statmech"
	"levelsum/statmech/internal/heats"
	"levelsum/statmech/special"
	"levelsum/statmech/unit"
)

// Debye is a lattice whose density of states grows as ω² up to the frequency
// ω_D = kθ/ħ, the elastic continuum in three dimensions,
//
//	C_V = 3 n R x⁻³ ∫₀ˣ t⁴ eᵗ/(eᵗ-1)² dt,  x = θ/T,
//
// where n = Modes is the number of vibrations in the formula unit (3 for a
// mole of atoms, also if Modes is 0). At low T
//
//	C_V = n (4π⁴/5) R (T/θ)³,  1943.770 J/(mol K) (T/θ)³ for n = 3,
//
// to 6e-7 at θ/24 and 0.7 % at θ/12; real lattices leave their own T³ law much
// earlier, often above θ/50.
//
// Accuracy: 4 × 2⁻⁵² relative in the heat capacity from T/θ = 1e-6 to 1e6
// (TestDebye, special.TestDebyeThermalAccuracy); that is rounding, not how
// well a crystal follows the model.
//
// Errors: a panic with a [*statmech.DomainError] if T or Theta is not positive
// and finite or Modes is negative.
//
// Reference: P. Debye, Annalen der Physik 344, 789 (1912),
// doi:10.1002/andp.19123441404.
type Debye struct {
	Theta unit.Temperature // Debye temperature ħω_D/k
	Modes float64          // vibrations in the formula unit; 0 stands for 3
}

// Debye2D is a lattice whose density of states grows as ω up to kθ/ħ, the
// continuum in two dimensions: C_V = 2 n R x⁻² ∫₀ˣ t³ eᵗ/(eᵗ-1)² dt, at low T
// 12 ζ(3) n R (T/θ)². Everything else is as for [Debye].
//
// Reference: V. V. Tarasov, Zh. Fiz. Khim. 24, 111 (1950).
type Debye2D struct {
	Theta unit.Temperature // cut-off temperature
	Modes float64          // vibrations in the formula unit; 0 stands for 3
}

// Debye1D is a lattice whose density of states is constant up to kθ/ħ, the
// continuum in one dimension: C_V = n R x⁻¹ ∫₀ˣ t² eᵗ/(eᵗ-1)² dt, at low T
// (π²/3) n R T/θ. Everything else is as for [Debye].
//
// Reference: V. V. Tarasov, Zh. Fiz. Khim. 24, 111 (1950).
type Debye1D struct {
	Theta unit.Temperature // cut-off temperature
	Modes float64          // vibrations in the formula unit; 0 stands for 3
}

func (d Debye) bad() *statmech.DomainError   { return badLattice("Theta", d.Theta, d.Modes) }
func (d Debye2D) bad() *statmech.DomainError { return badLattice("Theta", d.Theta, d.Modes) }
func (d Debye1D) bad() *statmech.DomainError { return badLattice("Theta", d.Theta, d.Modes) }

func (d Debye) reduced(T float64) statmech.Reduced   { return debye(3, d.Theta, d.Modes, T) }
func (d Debye2D) reduced(T float64) statmech.Reduced { return debye(2, d.Theta, d.Modes, T) }
func (d Debye1D) reduced(T float64) statmech.Reduced { return debye(1, d.Theta, d.Modes, T) }

func debye(dim int, theta unit.Temperature, n, T float64) statmech.Reduced {
	lnq, u, c := special.DebyeThermal(dim, float64(theta)/T)
	return statmech.Reduced{LogQ: lnq, U: u, C: c}.Scale(modes(n))
}

func (d Debye) heat(T float64) float64   { return debyeHeat(3, d.Theta, d.Modes, T) }
func (d Debye2D) heat(T float64) float64 { return debyeHeat(2, d.Theta, d.Modes, T) }
func (d Debye1D) heat(T float64) float64 { return debyeHeat(1, d.Theta, d.Modes, T) }

func debyeHeat(dim int, theta unit.Temperature, n, T float64) float64 {
	return modes(n) * special.DebyeC(dim, float64(theta)/T)
}

func (d Debye) heats(dst, ts []float64)   { debyeHeats(dst, ts, 3, d.Theta, d.Modes) }
func (d Debye2D) heats(dst, ts []float64) { debyeHeats(dst, ts, 2, d.Theta, d.Modes) }
func (d Debye1D) heats(dst, ts []float64) { debyeHeats(dst, ts, 1, d.Theta, d.Modes) }

func (d Debye) heatTable() heatTable   { return debyeTable(3, d.Theta, d.Modes) }
func (d Debye2D) heatTable() heatTable { return debyeTable(2, d.Theta, d.Modes) }
func (d Debye1D) heatTable() heatTable { return debyeTable(1, d.Theta, d.Modes) }

func debyeTable(dim int, theta unit.Temperature, n float64) heatTable {
	return heatTable{&heats.Debye[dim-1], float64(theta), modes(n), func(x float64) float64 { return special.DebyeC(dim, x) }}
}

func debyeHeats(dst, ts []float64, dim int, theta unit.Temperature, n float64) {
	for i, t := range ts {
		dst[i] = float64(theta) / t
	}
	special.DebyeCs(dst, dim, dst)
	n = modes(n)
	for i := range dst {
		dst[i] *= n
	}
}

// ModeCount returns the number of vibrations in the formula unit.
func (d Debye) ModeCount() float64 { return modes(d.Modes) }

// ModeCount returns the number of vibrations in the formula unit.
func (d Debye2D) ModeCount() float64 { return modes(d.Modes) }

// ModeCount returns the number of vibrations in the formula unit.
func (d Debye1D) ModeCount() float64 { return modes(d.Modes) }

// ZeroPointEnergy returns (3/8) n kθ per formula unit, 9/8 kθ for 3 modes.
func (d Debye) ZeroPointEnergy() unit.Energy {
	return zeroPoint(d, "solid.Debye.ZeroPointEnergy", modes(d.Modes)*3/8, d.Theta)
}

// ZeroPointEnergy returns n kθ/3 per formula unit.
func (d Debye2D) ZeroPointEnergy() unit.Energy {
	return zeroPoint(d, "solid.Debye2D.ZeroPointEnergy", modes(d.Modes)/3, d.Theta)
}

// ZeroPointEnergy returns n kθ/4 per formula unit.
func (d Debye1D) ZeroPointEnergy() unit.Energy {
	return zeroPoint(d, "solid.Debye1D.ZeroPointEnergy", modes(d.Modes)/4, d.Theta)
}

func (d *Debye) fields() []parameter {
	return []parameter{{"Theta", (*float64)(&d.Theta), "K"}, {"Modes", &d.Modes, ""}}
}

func (d *Debye2D) fields() []parameter {
	return []parameter{{"Theta", (*float64)(&d.Theta), "K"}, {"Modes", &d.Modes, ""}}
}

func (d *Debye1D) fields() []parameter {
	return []parameter{{"Theta", (*float64)(&d.Theta), "K"}, {"Modes", &d.Modes, ""}}
}

// Owns implements [Differentiable].
func (d *Debye) Owns(p *float64) (string, bool) { return owns(d.fields(), p) }

// Owns implements [Differentiable].
func (d *Debye2D) Owns(p *float64) (string, bool) { return owns(d.fields(), p) }

// Owns implements [Differentiable].
func (d *Debye1D) Owns(p *float64) (string, bool) { return owns(d.fields(), p) }

// Accumulate implements [Differentiable] for Theta and Modes.
func (d *Debye) Accumulate(ts []unit.Temperature, at []*float64, c []float64, partials [][]float64) error {
	return accumulate(d, "solid.Debye.Accumulate", d.fields(), ts, at, c, partials, debyeBlock(3, d.Theta, d.Modes))
}

// Accumulate implements [Differentiable] for Theta and Modes.
func (d *Debye2D) Accumulate(ts []unit.Temperature, at []*float64, c []float64, partials [][]float64) error {
	return accumulate(d, "solid.Debye2D.Accumulate", d.fields(), ts, at, c, partials, debyeBlock(2, d.Theta, d.Modes))
}

// Accumulate implements [Differentiable] for Theta and Modes.
func (d *Debye1D) Accumulate(ts []unit.Temperature, at []*float64, c []float64, partials [][]float64) error {
	return accumulate(d, "solid.Debye1D.Accumulate", d.fields(), ts, at, c, partials, debyeBlock(1, d.Theta, d.Modes))
}

func debyeBlock(dim int, theta unit.Temperature, n float64) func(t, c []float64, slopes [][]float64) {
	n = modes(n)
	return func(t, c []float64, slopes [][]float64) {
		var x [chunk]float64
		for i, v := range t {
			x[i] = float64(theta) / v
		}
		perMode, slope := slopes[1], slopes[0]
		special.DebyeCSlopes(perMode, slope, dim, x[:len(t)])
		for i, v := range t {
			c[i] = n * perMode[i]
			slope[i] *= n / v
		}
	}
}
