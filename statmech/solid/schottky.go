package solid

import (
	"fmt"
	"math"

	"levelsum/statmech"
	"levelsum/statmech/unit"
)

// Schottky is the heat capacity of a few discrete levels at each of n sites,
//
//	C = n R (⟨E²⟩ - ⟨E⟩²)/(kT)²,  ⟨Eᵐ⟩ = Σ gᵢ Eᵢᵐ e^(-Eᵢ/kT) / Σ gᵢ e^(-Eᵢ/kT).
//
// Energies may have any common zero and any order. For m single levels S goes
// from 0 to n R ln m, for a spin ladder of S = 5/2 to R ln 6. A fit determines
// the differences of energies and the ratios of degeneracies: keep one energy
// and one degeneracy fixed.
//
// Accuracy: 1e-14 relative in the heat capacity (TestSchottky). Errors: a
// panic with a [*statmech.DomainError] if T is not positive and finite, if
// there is no level, if Degeneracies is neither empty nor as long as Energies,
// or if a number is not finite, a degeneracy not positive, Sites negative.
//
// Reference: W. Schottky, Phys. Z. 23, 448 (1922).
type Schottky struct {
	Energies     []unit.Energy
	Degeneracies []float64 // empty for all 1
	Sites        float64   // in the formula unit; 0 stands for 1
}

func (s Schottky) sites() float64 {
	if s.Sites == 0 {
		return 1
	}
	return s.Sites
}

func (s Schottky) degeneracy(i int) float64 {
	if len(s.Degeneracies) == 0 {
		return 1
	}
	return s.Degeneracies[i]
}

func (s Schottky) bad() *statmech.DomainError {
	if len(s.Energies) == 0 {
		return &statmech.DomainError{Arg: "Energies", Value: "none", Want: "at least one level"}
	}
	if n := len(s.Degeneracies); n != 0 && n != len(s.Energies) {
		return &statmech.DomainError{Arg: "Degeneracies", Value: fmt.Sprintf("%d numbers", n), Want: fmt.Sprintf("none, or one for each of %d levels", len(s.Energies))}
	}
	for i, e := range s.Energies {
		if math.IsNaN(float64(e)) || math.IsInf(float64(e), 0) {
			return field(fmt.Sprintf("Energies[%d]", i), e, "finite")
		}
		if g := s.degeneracy(i); !positive(g) {
			return field(fmt.Sprintf("Degeneracies[%d]", i), plainNumber(g), wantPositive)
		}
	}
	if !notNegative(s.Sites) {
		return field("Sites", plainNumber(s.Sites), wantNotNegative)
	}
	return nil
}

// ground returns the lowest energy.
func (s Schottky) ground() unit.Energy {
	low := s.Energies[0]
	for _, e := range s.Energies {
		low = min(low, e)
	}
	return low
}

// site holds the populations of one site and its moments, energies in kT from
// the ground level.
type site struct {
	z, mean, variance float64
}

// at fills p with populations and x with energies.
func (s Schottky) at(T float64, p, x []float64) site {
	low := s.ground()
	var r site
	for i, e := range s.Energies {
		x[i] = float64(e-low) / (unit.Boltzmann * T)
		p[i] = s.degeneracy(i) * math.Exp(-x[i])
		r.z += p[i]
	}
	for i := range p {
		p[i] /= r.z
		if p[i] > 0 {
			r.mean += p[i] * x[i]
		}
	}
	for i := range p {
		if p[i] > 0 {
			d := x[i] - r.mean
			r.variance += p[i] * d * d
		}
	}
	return r
}

func (s Schottky) reduced(T float64) statmech.Reduced {
	n := len(s.Energies)
	buffer := make([]float64, 2*n)
	r := s.at(T, buffer[:n], buffer[n:])
	// ln q: near the ground level's degeneracy, 1 as a rule, without loss.
	low, ground, rest := s.ground(), 0.0, 0.0
	for i, e := range s.Energies {
		g := s.degeneracy(i)
		if e == low {
			ground += g
		} else {
			rest += g * math.Exp(-float64(e-low)/(unit.Boltzmann*T))
		}
	}
	lnq := math.Log(ground) + math.Log1p(rest/ground)
	return statmech.Reduced{LogQ: lnq, U: r.mean, C: r.variance}.Scale(s.sites())
}

func (s Schottky) heat(T float64) float64 {
	n := len(s.Energies)
	buffer := make([]float64, 2*n)
	return s.sites() * s.at(T, buffer[:n], buffer[n:]).variance
}

func (s Schottky) heats(dst, ts []float64) {
	n := len(s.Energies)
	buffer := make([]float64, 2*n)
	for i, T := range ts {
		dst[i] = s.sites() * s.at(T, buffer[:n], buffer[n:]).variance
	}
}

// HighTemperatureHeatCapacity returns 0, the limit of C/k.
func (s Schottky) HighTemperatureHeatCapacity() float64 { return 0 }

func (s *Schottky) fields() []parameter {
	f := []parameter{{"Sites", &s.Sites, ""}}
	for i := range s.Energies {
		f = append(f, parameter{fmt.Sprintf("Energies[%d]", i), (*float64)(&s.Energies[i]), "J"})
	}
	for i := range s.Degeneracies {
		f = append(f, parameter{fmt.Sprintf("Degeneracies[%d]", i), &s.Degeneracies[i], ""})
	}
	return f
}

// Owns implements [Differentiable]; the fields are the elements of Energies
// and Degeneracies, and Sites.
func (s *Schottky) Owns(p *float64) (string, bool) { return owns(s.fields(), p) }

// Accumulate implements [Differentiable]. With d = (E-⟨E⟩)/kT and σ² = C/nk
//
//	∂C/∂Eᵢ = (p/kT) [2d - (d² - σ²)],  ∂C/∂gᵢ = (p/g) (d² - σ²).
func (s *Schottky) Accumulate(ts []unit.Temperature, at []*float64, c []float64, partials [][]float64) error {
	n, sites := len(s.Energies), s.sites()
	buffer := make([]float64, 2*n)
	p, x := buffer[:n], buffer[n:]
	return accumulate(s, "solid.Schottky.Accumulate", s.fields(), ts, at, c, partials,
		func(temps, c []float64, slopes [][]float64) {
			for k, T := range temps {
				r := s.at(T, p, x)
				c[k], slopes[0][k] = sites*r.variance, r.variance
				for i := range p {
					d := x[i] - r.mean
					over := d*d - r.variance
					slopes[1+i][k], over = 0, over*p[i]
					if p[i] > 0 {
						slopes[1+i][k] = sites * (2*d*p[i] - over) / (unit.Boltzmann * T)
					} else {
						over = 0
					}
					if len(s.Degeneracies) > 0 {
						slopes[1+n+i][k] = sites * over / s.Degeneracies[i]
					}
				}
			}
		})
}
