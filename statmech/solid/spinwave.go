package solid

import (
	"math"

	"levelsum/statmech"
	"levelsum/statmech/special"
	"levelsum/statmech/unit"
)

// FerroSpinWave is the heat capacity of spin waves of energy Δ + Dq² with
// k·Gap = Δ, far below the ordering temperature,
//
//	C = B T^(3/2) [15/4 Li_5/2(z) + 3 δ Li_3/2(z) + δ² Li_1/2(z)] / (15/4 ζ(5/2)),
//
// δ = Gap/T, z = e^-δ. Without a gap C = B T^(3/2); B stands for the stiffness
// D and the volume v of the formula unit, B = (15/4) ζ(5/2) R v (k/4πD)^(3/2).
//
// Range: T well below the ordering temperature, where waves do not interact
// and the q² law holds. Accuracy: 1e-14 relative in the heat capacity, 1e-9 in
// its derivative by Gap, which uses a difference (TestSpinWaves, TestPartials).
//
// Errors: a panic with a [*statmech.DomainError] if T is not positive and
// finite or a field is negative or not finite.
//
// Reference: F. Bloch, Zeitschrift für Physik 61, 206 (1930),
// doi:10.1007/BF01339661; the functions of z as in [special.BoseAlpha].
type FerroSpinWave struct {
	Coefficient float64          // B in J mol⁻¹ K^(-5/2), per mole of formula units
	Gap         unit.Temperature // Δ/k
}

func badWave(b float64, gap unit.Temperature) *statmech.DomainError {
	switch {
	case !notNegative(b):
		return field("Coefficient", plainNumber(b), wantNotNegative)
	case !notNegative(float64(gap)):
		return field("Gap", gap, wantNotNegative)
	}
	return nil
}

func (w FerroSpinWave) bad() *statmech.DomainError { return badWave(w.Coefficient, w.Gap) }

// ferroNorm is 15/4 ζ(5/2), ζ(5/2) by mpmath 1.4.1.
const ferroNorm = 3.75 * 1.34148725725091717975676969335

func (w FerroSpinWave) reduced(T float64) statmech.Reduced {
	a := w.Coefficient / (ferroNorm * unit.GasConstant) * T * math.Sqrt(T)
	d := float64(w.Gap) / T
	l5, l3 := special.BoseAlpha(2.5, d), special.BoseAlpha(1.5, d)
	r := statmech.Reduced{LogQ: l5, U: 1.5*l5 + d*l3, C: 3.75*l5 + 3*d*l3}
	if d > 0 {
		r.C += d * d * special.BoseAlpha(0.5, d)
	}
	return r.Scale(a)
}

func (w FerroSpinWave) heat(T float64) float64 { return w.reduced(T).C }

func (w FerroSpinWave) heats(dst, ts []float64) {
	for i, T := range ts {
		dst[i] = w.heat(T)
	}
}

// GroundDegeneracy returns 1.
func (w FerroSpinWave) GroundDegeneracy() float64 { return 1 }

func (w *FerroSpinWave) fields() []parameter {
	return []parameter{{"Coefficient", &w.Coefficient, "J mol-1 K-2.5"}, {"Gap", (*float64)(&w.Gap), "K"}}
}

// Owns implements [Differentiable].
func (w *FerroSpinWave) Owns(p *float64) (string, bool) { return owns(w.fields(), p) }

// Accumulate implements [Differentiable] for Coefficient and Gap.
func (w *FerroSpinWave) Accumulate(ts []unit.Temperature, at []*float64, c []float64, partials [][]float64) error {
	return accumulate(w, "solid.FerroSpinWave.Accumulate", w.fields(), ts, at, c, partials,
		func(temps, c []float64, slopes [][]float64) {
			one := FerroSpinWave{Coefficient: 1, Gap: w.Gap}
			for i, T := range temps {
				slopes[0][i] = one.reduced(T).C
				c[i] = w.Coefficient * slopes[0][i]
				// ∂/∂δ of the bracket: -3/4 Li_3/2 - δ Li_1/2 - δ² Li_-1/2
				d := float64(w.Gap) / T
				g := -0.75 * special.BoseAlpha(1.5, d)
				if d > 0 {
					g -= d*special.BoseAlpha(0.5, d) + d*d*liMinusHalf(d)
				}
				slopes[1][i] = g * w.Coefficient / (ferroNorm * unit.GasConstant) * math.Sqrt(T)
			}
		})
}

// liMinusHalf returns Li_-1/2(e^-δ) = -dLi_1/2/dδ, by a difference of fourth
// order of what is left of Li_1/2 when √(π/δ) is taken out.
func liMinusHalf(d float64) float64 {
	h := 1e-3 * max(d, 0.5)
	if d < 3*h {
		h = d / 3
	}
	g := func(x float64) float64 { return special.BoseAlpha(0.5, x) - math.Sqrt(math.Pi/x) }
	slope := (8*(g(d+h)-g(d-h)) - (g(d+2*h) - g(d-2*h))) / (12 * h)
	return 0.5*math.Sqrt(math.Pi/d)/d - slope
}

// AntiferroSpinWave is the heat capacity of spin waves of energy
// √(Δ² + (ħcq)²) with k·Gap = Δ, far below the ordering temperature. With
// δ = Gap/T, e = √(δ²+κ²) and E(e) = e² eᵉ/(eᵉ-1)²,
//
//	C = B T³ (15/4π⁴) ∫₀^∞ κ² E(e) dκ,
//
// which without a gap is B T³. B counts all branches.
//
// Range: T well below the ordering temperature. Without a gap the term is the
// same function of T as the lattice's T³: heat capacities alone cannot tell
// the two apart, and a fit with both free has no unique answer.
//
// Accuracy: 1e-13 relative (TestSpinWaves). Errors: as [FerroSpinWave].
//
// Reference: R. Kubo, Physical Review 87, 568 (1952),
// doi:10.1103/PhysRev.87.568.
type AntiferroSpinWave struct {
	Coefficient float64          // B in J mol⁻¹ K⁻⁴, per mole of formula units
	Gap         unit.Temperature // Δ/k
}

func (w AntiferroSpinWave) bad() *statmech.DomainError { return badWave(w.Coefficient, w.Gap) }

// antiferro returns (15/4π⁴) ∫ κ² f(e) dκ for ln q, U, C and for the
// derivative of the last by δ. In the rapidity θ, κ = δ sinh θ and
// e = δ cosh θ, the integrand is even and falls doubly exponentially, so that
// equal steps converge to rounding.
func antiferro(d float64) (r statmech.Reduced, slope float64) {
	norm := 15 / (4 * math.Pow(math.Pi, 4))
	if d < 1e-7 {
		// The gap changes the integrals by δ² relative; ∫κ²E = 4π⁴/15 and the
		// others are a quarter and a twelfth of it.
		return statmech.Reduced{LogQ: 1. / 12, U: 1. / 4, C: 1}, 0
	}
	// For a large δ the integrand is a Gaussian of width δ^-1/2.
	step := min(0.15, 0.5/math.Sqrt(d))
	for i := 0; ; i++ {
		ch, sh := math.Cosh(step*float64(i)), math.Sinh(step*float64(i))
		e := d * ch
		if e > d+60 && i > 2 || e > 740 {
			break
		}
		w := step * norm * d * d * d * sh * sh * ch // κ² dκ; 0 for i = 0
		lnq, u, c := special.EinsteinThermal(e)
		r.LogQ += w * lnq
		r.U += w * u
		r.C += w * c
		slope += w * special.EinsteinCSlope(e) / ch
	}
	return r, slope
}

func (w AntiferroSpinWave) reduced(T float64) statmech.Reduced {
	r, _ := antiferro(float64(w.Gap) / T)
	return r.Scale(w.Coefficient / unit.GasConstant * T * T * T)
}

func (w AntiferroSpinWave) heat(T float64) float64 { return w.reduced(T).C }

func (w AntiferroSpinWave) heats(dst, ts []float64) {
	for i, T := range ts {
		dst[i] = w.heat(T)
	}
}

// GroundDegeneracy returns 1.
func (w AntiferroSpinWave) GroundDegeneracy() float64 { return 1 }

func (w *AntiferroSpinWave) fields() []parameter {
	return []parameter{{"Coefficient", &w.Coefficient, "J mol-1 K-4"}, {"Gap", (*float64)(&w.Gap), "K"}}
}

// Owns implements [Differentiable].
func (w *AntiferroSpinWave) Owns(p *float64) (string, bool) { return owns(w.fields(), p) }

// Accumulate implements [Differentiable] for Coefficient and Gap.
func (w *AntiferroSpinWave) Accumulate(ts []unit.Temperature, at []*float64, c []float64, partials [][]float64) error {
	return accumulate(w, "solid.AntiferroSpinWave.Accumulate", w.fields(), ts, at, c, partials,
		func(temps, c []float64, slopes [][]float64) {
			for i, T := range temps {
				r, slope := antiferro(float64(w.Gap) / T)
				s := T * T * T / unit.GasConstant
				slopes[0][i] = s * r.C
				c[i] = w.Coefficient * slopes[0][i]
				slopes[1][i] = w.Coefficient * s * slope / T
			}
		})
}
