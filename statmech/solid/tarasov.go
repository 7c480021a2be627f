package solid

import (
	"math"

	"levelsum/statmech"
	"levelsum/statmech/special"
	"levelsum/statmech/unit"
)

// Tarasov is the chain-layer lattice interpolation: the density of states is
// that of a chain (constant) from θ₂ to θ₁, of a layer (linear) from θ₃ to θ₂
// and of a space lattice (quadratic) below θ₃,
//
//	C_V/nR = C₁(θ₁) - (θ₂/θ₁) [C₁(θ₂) - C₂(θ₂)] - (θ₃²/(θ₁θ₂)) [C₂(θ₃) - C₃(θ₃)]
//
// with C_d(θ) the heat capacity of one mode of the d-dimensional continuum
// ([Debye1D], [Debye2D], [Debye]) at θ/T and n = Modes. θ₃ = 0 is a stack of
// layers that do not feel each other, θ₂ = θ₃ = 0 a bundle of such chains,
// θ₁ = θ₂ = θ₃ the space lattice of [Debye].
//
// Accuracy: 3e-14 relative
// (TestTarasov): where the terms above cancel, the three ranges of the spectrum
// are summed each by itself.
//
// Errors: a panic with a [*statmech.DomainError] if T is not positive and
// finite, unless Theta1 > 0 and Theta1 >= Theta2 >= Theta3 >= 0, or if Modes is
// negative.
//
// Reference: V. V. Tarasov, Zh. Fiz. Khim. 24, 111 (1950); 27, 1430 (1953).
type Tarasov struct {
	Theta1, Theta2, Theta3 unit.Temperature // cut-off of chain, layer and space lattice
	Modes                  float64          // vibrations in the formula unit; 0 stands for 3
}

func (t Tarasov) bad() *statmech.DomainError {
	switch {
	case !positive(float64(t.Theta1)):
		return field("Theta1", t.Theta1, wantPositive)
	case !(t.Theta2 >= 0 && t.Theta2 <= t.Theta1):
		return field("Theta2", t.Theta2, "from 0 to Theta1 = "+t.Theta1.String())
	case !(t.Theta3 >= 0 && t.Theta3 <= t.Theta2):
		return field("Theta3", t.Theta3, "from 0 to Theta2 = "+t.Theta2.String())
	case !notNegative(t.Modes):
		return field("Modes", plainNumber(t.Modes), wantNotNegative)
	}
	return nil
}

// A band is a part of a spectrum of one mode: density scale·ω^(d-1) between
// two frequencies, given as temperatures.
type band struct {
	dim       int
	scale     float64 // K^-dim
	low, high float64 // K
}

// bands returns the space, layer and chain parts of one mode.
func (t Tarasov) bands() [3]band {
	t1, t2, t3 := float64(t.Theta1), float64(t.Theta2), float64(t.Theta3)
	var b [3]band
	if t3 > 0 {
		b[0] = band{3, 3 / t1 / t2 / t3, 0, t3}
	}
	if t2 > t3 {
		b[1] = band{2, 2 / t1 / t2, t3, t2}
	}
	if t1 > t2 {
		b[2] = band{1, 1 / t1, t2, t1}
	}
	return b
}

// reduced returns the functions of the modes in the band at T.
func (b band) reduced(T float64) statmech.Reduced {
	if b.dim == 0 {
		return statmech.Reduced{}
	}
	d := float64(b.dim)
	if x := b.low / T; x > tailFrom {
		// Both ends lie where D_d is its tail: the difference of the tails.
		s := math.Pow(T, d) * b.scale
		q1, u1, c1 := tail(b.dim, x)
		q2, u2, c2 := tail(b.dim, b.high/T)
		return statmech.Reduced{LogQ: s * (q1 - q2), U: s * (u1 - u2), C: s * (c1 - c2)}
	}
	part := func(theta float64) statmech.Reduced {
		if theta == 0 {
			return statmech.Reduced{}
		}
		lnq, u, c := special.DebyeThermal(b.dim, theta/T)
		return statmech.Reduced{LogQ: lnq, U: u, C: c}.Scale(b.scale * math.Pow(theta, d) / d)
	}
	return part(b.high).Add(part(b.low).Scale(-1))
}

// tailFrom is the θ/T above which a band's lower edge is treated by tails.
const tailFrom = 8

// tail returns ∫ₓ^∞ tᵈ⁻¹ f(t) dt for the three functions of a harmonic mode,
// by f = Σ e^(-kt) (1/k, t, k t²) and repeated integration by parts.
func tail(d int, x float64) (lnq, u, c float64) {
	e := math.Exp(-x)
	ek := 1.0
	for k := 1.0; k < 8; k++ { // e^-64 is left out
		ek *= e
		moment := func(p int) float64 { // ∫ₓ^∞ tᵖ e^(-kt) dt
			m := 1 / k
			xp := 1.0
			for i := 1; i <= p; i++ {
				xp *= x
				m = (xp + float64(i)*m) / k // without the factor e^(-kx)
			}
			return ek * m
		}
		lnq += moment(d-1) / k
		u += moment(d)
		c += k * moment(d+1)
	}
	return lnq, u, c
}

func (t Tarasov) reduced(T float64) statmech.Reduced {
	var r statmech.Reduced
	for _, b := range t.bands() {
		r = r.Add(b.reduced(T))
	}
	return r.Scale(modes(t.Modes))
}

func (t Tarasov) heat(T float64) float64 { return t.reduced(T).C }

func (t Tarasov) heats(dst, ts []float64) {
	for i, T := range ts {
		dst[i] = t.heat(T)
	}
}

// ModeCount returns the number of vibrations in the formula unit.
func (t Tarasov) ModeCount() float64 { return modes(t.Modes) }

// HighTemperatureHeatCapacity returns the limit of C/k.
func (t Tarasov) HighTemperatureHeatCapacity() float64 { return modes(t.Modes) }

// GroundDegeneracy returns 1.
func (t Tarasov) GroundDegeneracy() float64 { return 1 }

// ZeroPointEnergy returns n ∫ g(ω) ħω/2 dω per formula unit.
func (t Tarasov) ZeroPointEnergy() unit.Energy {
	sum := 0.0
	for _, b := range t.bands() {
		d := float64(b.dim)
		sum += b.scale * (math.Pow(b.high, d+1) - math.Pow(b.low, d+1)) / (2 * (d + 1))
	}
	return zeroPoint(t, "solid.Tarasov.ZeroPointEnergy", modes(t.Modes), unit.Temperature(sum))
}

func (t *Tarasov) fields() []parameter {
	return []parameter{{"Theta1", (*float64)(&t.Theta1), "K"}, {"Theta2", (*float64)(&t.Theta2), "K"}, {"Theta3", (*float64)(&t.Theta3), "K"}, {"Modes", &t.Modes, ""}}
}

// Owns implements [Differentiable].
func (t *Tarasov) Owns(p *float64) (string, bool) { return owns(t.fields(), p) }

// Accumulate implements [Differentiable] for the three temperatures and Modes.
func (t *Tarasov) Accumulate(ts []unit.Temperature, at []*float64, c []float64, partials [][]float64) error {
	n, bands := modes(t.Modes), t.bands()
	t1, t2, t3 := float64(t.Theta1), float64(t.Theta2), float64(t.Theta3)
	return accumulate(t, "solid.Tarasov.Accumulate", t.fields(), ts, at, c, partials,
		func(temps, c []float64, slopes [][]float64) {
			for i, T := range temps {
				space, layer, chain := bands[0].reduced(T).C, bands[1].reduced(T).C, bands[2].reduced(T).C
				total := space + layer + chain
				c[i], slopes[3][i] = n*total, total
				slopes[0][i] = n * (special.EinsteinC(t1/T) - total) / t1
				slopes[1][i], slopes[2][i] = 0, 0
				if t2 > 0 {
					slopes[1][i] = n * (special.EinsteinC(t2/T)/t1 - (space+layer)/t2)
				}
				if t3 > 0 {
					slopes[2][i] = n * (special.EinsteinC(t3/T)*t3/(t1*t2) - space/t3)
				}
			}
		})
}
