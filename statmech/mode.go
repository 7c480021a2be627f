package statmech

import "levelsum/statmech/unit"

// Reduced holds the dimensionless functions of one mode at one temperature,
// with energies counted from the mode's ground level E₀:
//
//	LogQ = ln q,  q = Σ gᵢ exp(-(Eᵢ-E₀)/kT)
//	U    = (⟨E⟩-E₀)/kT = T ∂ln q/∂T
//	C    = C_V/k       = ∂(T·U)/∂T
//
// The entropy is S/k = LogQ + U. Zero-point energy is not in it: a mode that
// has one also implements [ZeroPointer].
type Reduced struct {
	LogQ, U, C float64
}

// Entropy returns S/k = ln q + U, the Gibbs entropy of the canonical
// distribution in units of k.
func (r Reduced) Entropy() float64 { return r.LogQ + r.U }

// Add returns the functions of two independent modes together.
func (r Reduced) Add(s Reduced) Reduced {
	return Reduced{LogQ: r.LogQ + s.LogQ, U: r.U + s.U, C: r.C + s.C}
}

// Scale returns the functions of n independent equal modes.
func (r Reduced) Scale(n float64) Reduced {
	return Reduced{LogQ: n * r.LogQ, U: n * r.U, C: n * r.C}
}

// A Mode is anything with a canonical partition function. Reduced panics with
// a [*DomainError] if T is not positive and finite; it never returns NaN.
// A type declared in a notebook cell is a Mode like any other.
type Mode interface {
	Reduced(T unit.Temperature) Reduced
}

// A ZeroPointer is a Mode that knows the energy of its ground level above the
// minimum of its potential, per particle.
type ZeroPointer interface {
	ZeroPointEnergy() unit.Energy
}
