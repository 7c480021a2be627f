package gas

import (
	"fmt"
	"math"

	"levelsum/statmech"
	"levelsum/statmech/unit"
)

// Oscillator is a harmonic vibration, x = Quantum/kT:
//
//	ln q = -ln(1-e⁻ˣ),  U/kT = x/(eˣ-1),  C/k = x² eˣ/(eˣ-1)²
//
// counted from v = 0; the zero-point energy ½ Quantum is in ZeroPointEnergy.
// Quantum is the energy of one quantum, 1595*unit.PerCm. Classical takes the
// limit of high temperature, kT/Quantum, U/kT = C/k = 1.
//
// Accuracy: 1e-14 max(1, x) relative for x from 1e-8 to 700: the rounding of x
// itself moves e⁻ˣ by x 2⁻⁵³ (TestOscillatorAccuracy).
type Oscillator struct {
	Quantum   unit.Energy
	Classical bool
}

// Reduced returns the functions at temperature T. It panics with a
// [*statmech.DomainError] if T or Quantum is not positive and finite.
func (o Oscillator) Reduced(T unit.Temperature) statmech.Reduced {
	const fn = "gas.Oscillator.Reduced"
	statmech.CheckTemperature(fn, T)
	statmech.CheckPositive(fn, "Quantum", o.Quantum)
	x := o.Quantum.OverKT(T)
	if o.Classical {
		return statmech.Reduced{LogQ: -math.Log(x), U: 1, C: 1}
	}
	return harmonic(x)
}

func harmonic(x float64) statmech.Reduced {
	if x > 1e6 {
		return statmech.Reduced{} // exp(-x) is zero, x may be infinite
	}
	e := math.Exp(-x)
	d := -math.Expm1(-x) // 1 - e⁻ˣ
	u := x * e / d
	r := statmech.Reduced{U: u, C: x * (u / d)}
	if x < 0.5 {
		r.LogQ = -math.Log(d)
	} else {
		r.LogQ = -math.Log1p(-e)
	}
	return r
}

// ZeroPointEnergy returns ½ Quantum.
func (o Oscillator) ZeroPointEnergy() unit.Energy { return o.Quantum / 2 }

// GroundDegeneracy returns 1.
func (o Oscillator) GroundDegeneracy() float64 { return 1 }

// HighTemperatureHeatCapacity returns the classical limit of C/k, 1.
func (o Oscillator) HighTemperatureHeatCapacity() float64 { return 1 }

// ClassicalDifference returns the quantum functions minus the classical ones.
func (o Oscillator) ClassicalDifference(T unit.Temperature) statmech.Reduced {
	q, c := o, o
	q.Classical, c.Classical = false, true
	return q.Reduced(T).Add(c.Reduced(T).Scale(-1))
}

// LowFrequency says how a soft vibration, which is no harmonic oscillator, is
// treated. The harmonic value is always at hand beside it, see
// [SoftOscillator.Harmonic].
type LowFrequency int

const (
	// Harmonic leaves the oscillator as it is.
	Harmonic LowFrequency = iota
	// RaisedCutoff raises a quantum below Cutoff to Cutoff (Ribeiro,
	// Marenich, Cramer, Truhlar, J. Phys. Chem. B 115, 14556, 2011).
	RaisedCutoff
	// EntropyInterpolation mixes the entropies of the oscillator and of a free
	// rotor of the same wavenumber with weight 1/(1 + (ν₀/ν)⁴) (S. Grimme,
	// Chem. Eur. J. 18, 9955, 2012). Only the entropy is changed, so that
	// ∂S/∂T = C/T no longer holds; see the warning.
	EntropyInterpolation
	// ConsistentInterpolation mixes ln q of the two with the same weight, hence
	// the energy and heat capacity too, after the variant of Li, Gomes, Sharada,
	// Bell, Head-Gordon, J. Phys. Chem. C 119, 1840 (2015).
	ConsistentInterpolation
)

// String returns the published name with the year.
func (l LowFrequency) String() string {
	switch l {
	case Harmonic:
		return "harmonic"
	case RaisedCutoff:
		return "raised to the cut-off (Ribeiro et al. 2011)"
	case EntropyInterpolation:
		return "entropy interpolated to a free rotor (Grimme 2012)"
	case ConsistentInterpolation:
		return "entropy and energy interpolated to a free rotor (Li et al. 2015)"
	}
	return "unknown treatment"
}

// SoftOscillator is an oscillator with a treatment for low wavenumbers. Cutoff
// is the cut-off of RaisedCutoff or ν₀ of the interpolations, by default
// 100 cm⁻¹; MeanInertia is B_av of the free rotor, by default 1e-44 kg m².
type SoftOscillator struct {
	Quantum     unit.Energy
	Treatment   LowFrequency
	Cutoff      unit.Energy
	MeanInertia unit.MomentOfInertia
}

// Reduced returns the functions at temperature T with the treatment.
func (s SoftOscillator) Reduced(T unit.Temperature) statmech.Reduced {
	const fn = "gas.SoftOscillator.Reduced"
	statmech.CheckTemperature(fn, T)
	statmech.CheckPositive(fn, "Quantum", s.Quantum)
	h := s.Harmonic(T)
	cut := s.cutoff()
	switch s.Treatment {
	case RaisedCutoff:
		return Oscillator{Quantum: max(s.Quantum, cut)}.Reduced(T)
	case EntropyInterpolation:
		w := s.weight()
		S := w*h.Entropy() + (1-w)*s.freeRotor(T).Entropy()
		return statmech.Reduced{LogQ: S - h.U, U: h.U, C: h.C}
	case ConsistentInterpolation:
		w := s.weight()
		return h.Scale(w).Add(s.freeRotor(T).Scale(1 - w))
	}
	return h
}

// Harmonic returns the functions without the treatment.
func (s SoftOscillator) Harmonic(T unit.Temperature) statmech.Reduced {
	return Oscillator{Quantum: s.Quantum}.Reduced(T)
}

// Warnings says when the entropy no longer belongs to the heat capacity.
func (s SoftOscillator) Warnings(T unit.Temperature) []string {
	if s.Treatment != EntropyInterpolation || s.weight() > 0.999 {
		return nil
	}
	h := 0.01 * float64(T)
	S := func(t float64) float64 { return s.Reduced(unit.Temperature(t)).Entropy() }
	slope := float64(T) * (S(float64(T)+h) - S(float64(T)-h)) / (2 * h)
	return []string{"at " + short(s.Quantum.In(unit.PerCm)) + " cm-1 only the entropy is interpolated: T dS/dT = " + short(slope*unit.GasConstant) +
		" but C = " + short(s.Reduced(T).C*unit.GasConstant) + " J/(mol K)"}
}

// softNote says what the treatment does at T, with the harmonic value beside and
// what 10 cm⁻¹ more or less do to the Gibbs energy.
func (s SoftOscillator) softNote(T unit.Temperature) string {
	S := func(r statmech.Reduced) float64 { return r.Entropy() * unit.GasConstant }
	up, down := s, s
	up.Quantum += 10 * unit.PerCm
	down.Quantum = max(down.Quantum-10*unit.PerCm, down.Quantum/2)
	dG := -(up.Reduced(T).LogQ - down.Reduced(T).LogQ) / float64((up.Quantum-down.Quantum)/(10*unit.PerCm)) * unit.GasConstant * float64(T) / 1e3
	return fmt.Sprintf("%.6g cm-1 at %s, %s: S = %.4g, harmonic %.4g J/(mol K); G changes by %+.3g kJ/mol for +10 cm-1",
		s.Quantum.In(unit.PerCm), T, s.Treatment, S(s.Reduced(T)), S(s.Harmonic(T)), dG)
}

// ZeroPointEnergy returns ½ Quantum of the untreated oscillator.
func (s SoftOscillator) ZeroPointEnergy() unit.Energy { return s.Quantum / 2 }

func (s SoftOscillator) cutoff() unit.Energy {
	if s.Cutoff == 0 {
		return 100 * unit.PerCm
	}
	return s.Cutoff
}

// weight of the oscillator, 1/(1 + (ν₀/ν)⁴).
func (s SoftOscillator) weight() float64 {
	r := float64(s.cutoff() / s.Quantum)
	r *= r
	return 1 / (1 + float64(r*r))
}

// freeRotor returns the functions of a free rotor with moment of inertia
// μ′ = μ B_av/(μ + B_av), μ = h/(8π²ν):
// S/k = ½ + ln √(8π³μ′kT/h²), U/kT = C/k = ½.
func (s SoftOscillator) freeRotor(T unit.Temperature) statmech.Reduced {
	mean := float64(s.MeanInertia)
	if mean == 0 {
		mean = 1e-44
	}
	mu := unit.Planck / (8 * math.Pi * math.Pi) * (unit.Planck / float64(s.Quantum))
	mu = mu * mean / (mu + mean)
	q := math.Sqrt(8 * math.Pi * math.Pi * math.Pi * (mu / unit.Planck) * (unit.Boltzmann * float64(T) / unit.Planck))
	return statmech.Reduced{LogQ: math.Log(q), U: 0.5, C: 0.5}
}
