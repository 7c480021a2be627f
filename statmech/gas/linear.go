package gas

import (
	"math"

	"levelsum/statmech"
	"levelsum/statmech/unit"
)

// LinearRotor is the rotation of a linear molecule by exact summation over
//
//	E(J) = B J(J+1) - D J²(J+1)²,  degeneracy (2J+1) times the spin weight,
//
// up to the turnover of the distortion term, where the levels would begin to
// fall. B and D are energies (10.44*unit.PerCm, 55*unit.GHzEnergy), usually
// those of the ground vibrational level, B₀ and D₀.
//
// Either Symmetry (1, or 2 for a molecule with identical ends) or Spin is given;
// Spin.Weights are those of even and odd J, such as {1, 3} with Total 4 for H₂,
// {6, 3} with Total 9 for D₂, {0, 1} with Total 1 for the J of ¹⁶O₂. A weight of
// zero leaves a species out: para-H₂ is {1, 0}.
//
// ln q counts energies from the lowest level with a weight.
//
// Accuracy: 1e-12 max(1, B/kT) relative in q, U and C against 16-digit sums for
// B/kT from 1e-3 to 6 (TestLinearRotorAccuracy).
type LinearRotor struct {
	B, D      unit.Energy
	Symmetry  int
	Spin      *SpinWeights
	Classical bool // q = kT/(σB), wrong for light molecules at room temperature
}

// Reduced returns the functions at temperature T. It panics with a
// [*statmech.DomainError] if T or B is not positive and finite, or as Check says.
func (r LinearRotor) Reduced(T unit.Temperature) statmech.Reduced {
	const fn = "gas.LinearRotor.Reduced"
	statmech.CheckTemperature(fn, T)
	if err := r.check(fn); err != nil {
		panic(err)
	}
	if r.Classical {
		return r.classical(T)
	}
	kt := unit.Energy(unit.Boltzmann * float64(T))
	if last := r.LastLevel(); kt/r.B > 1e6 && (last < 0 || last > 20000) {
		return r.expanded(float64(r.B / kt))
	}
	var s levelSum
	r.each(func(J int, E unit.Energy, g float64) bool {
		x := float64(E / kt)
		s.add(x, g)
		return x < 745
	})
	q := s.reduced()
	q.LogQ += math.Log(r.Spin.factor(r.Symmetry))
	return q
}

// each calls f for the levels in order of J until it returns false, with the
// energy above the lowest level with a weight.
func (r LinearRotor) each(f func(J int, E unit.Energy, g float64) bool) {
	zero := r.ZeroPointEnergy()
	for J := 0; ; J++ {
		j := float64(J) * float64(J+1)
		if r.D > 0 && J > 0 && 2*float64(r.D)*float64(J)*float64(J) >= float64(r.B) {
			// E(J) - E(J-1) = 2BJ - 4DJ³ is not positive: the turnover.
			return
		}
		w := r.weight(J)
		if w == 0 {
			continue
		}
		E := unit.Energy(float64(r.B)*j) - unit.Energy(float64(r.D)*j*j)
		if !f(J, E-zero, w*float64(2*J+1)) {
			return
		}
	}
}

func (r LinearRotor) weight(J int) float64 {
	if r.Spin == nil {
		return 1
	}
	return r.Spin.Weights[J%2]
}

// LastLevel returns the largest J that is counted, -1 for no limit (D = 0).
func (r LinearRotor) LastLevel() int {
	if r.D <= 0 {
		return -1
	}
	// The largest J with 2DJ² < B.
	return int(math.Ceil(min(math.Sqrt(float64(r.B)/(2*float64(r.D))), 1e9))) - 1
}

func (r LinearRotor) check(fn string) error {
	if !(r.B > 0) || math.IsInf(float64(r.B), 1) {
		return &statmech.DomainError{Func: fn, Arg: "B", Value: r.B.String(), Want: "positive and finite"}
	}
	if !(r.D >= 0) || math.IsInf(float64(r.D), 1) {
		return &statmech.DomainError{Func: fn, Arg: "D", Value: r.D.String(), Want: "finite and not negative"}
	}
	if err := checkSymmetry(fn, r.Symmetry, r.Spin); err != nil {
		return err
	}
	if r.Spin != nil {
		return r.Spin.check(fn, 2, "two weights, of even and of odd J")
	}
	if r.Symmetry > 2 {
		return &statmech.DomainError{Func: fn, Arg: "Symmetry", Value: short(float64(r.Symmetry)), Want: "1 or 2 for a linear molecule"}
	}
	return nil
}

// expanded returns the first terms of Mulholland's expansion for x = B/kT below
// 1e-6, where they are exact to rounding: q = (1 + x/3 + x²/15)/x.
func (r LinearRotor) expanded(x float64) statmech.Reduced {
	q := (1 + x/3 + x*x/15) / x * r.Spin.mean(nil) * r.Spin.factor(r.Symmetry)
	z := float64(r.ZeroPointEnergy()/r.B) * x
	return statmech.Reduced{LogQ: math.Log(q) + z, U: 1 - x/3 - x*x/45 - z, C: 1 + x*x/45}
}

func (r LinearRotor) classical(T unit.Temperature) statmech.Reduced {
	q := float64(T.AsEnergy()/r.B) * r.Spin.mean(nil) * r.Spin.factor(r.Symmetry)
	return statmech.Reduced{LogQ: math.Log(q), U: 1, C: 1}
}

// ClassicalDifference returns the exact functions minus the classical ones.
func (r LinearRotor) ClassicalDifference(T unit.Temperature) statmech.Reduced {
	exact := r
	exact.Classical = false
	return exact.Reduced(T).Add(r.classical(T).Scale(-1))
}

// ZeroPointEnergy returns the energy of the lowest level with a weight above
// J = 0: 2B - 4D if even J are left out.
func (r LinearRotor) ZeroPointEnergy() unit.Energy {
	if r.Spin != nil && len(r.Spin.Weights) == 2 && r.Spin.Weights[0] == 0 && !r.Classical {
		return 2*r.B - 4*r.D
	}
	return 0
}

// GroundDegeneracy returns the weight of the lowest level in q.
func (r LinearRotor) GroundDegeneracy() float64 {
	J := 0
	if r.weight(0) == 0 {
		J = 1
	}
	return r.weight(J) * float64(2*J+1) * r.Spin.factor(r.Symmetry)
}

// HighTemperatureHeatCapacity returns the classical limit of C/k, 1.
func (r LinearRotor) HighTemperatureHeatCapacity() float64 { return 1 }

// Fractions returns the equilibrium fractions of the molecules with even and
// with odd J, para and ortho for H₂, from the spin weights.
func (r LinearRotor) Fractions(T unit.Temperature) (even, odd float64) {
	const fn = "gas.LinearRotor.Fractions"
	statmech.CheckTemperature(fn, T)
	if err := r.check(fn); err != nil {
		panic(err)
	}
	var sum [2]float64
	r.each(func(J int, E unit.Energy, g float64) bool {
		x := E.OverKT(T)
		sum[J%2] += g * math.Exp(-x)
		return x < 745
	})
	return sum[0] / (sum[0] + sum[1]), sum[1] / (sum[0] + sum[1])
}

// A levelSum collects levels of one temperature.
type levelSum struct{ x, g []float64 }

func (s *levelSum) add(x, g float64) { s.x, s.g = append(s.x, x), append(s.g, g) }

// reduced sums in two passes, the variance about the mean; the first level is
// the ground level.
func (s *levelSum) reduced() statmech.Reduced {
	var rest, first float64
	w := make([]float64, len(s.x))
	for i := len(s.x) - 1; i > 0; i-- { // small terms first
		if s.x[i] > 745 {
			s.x[i] = 745 // its weight is zero, and the product must not be ∞·0
			continue
		}
		w[i] = s.g[i] * math.Exp(-s.x[i])
		rest += w[i]
		first += float64(w[i] * s.x[i])
	}
	w[0] = s.g[0]
	q := w[0] + rest
	mean := first / q
	second := 0.0
	for i := len(s.x) - 1; i >= 0; i-- {
		d := s.x[i] - mean
		second += float64(w[i] * float64(d*d))
	}
	return statmech.Reduced{LogQ: math.Log(s.g[0]) + math.Log1p(rest/s.g[0]), U: mean, C: second / q}
}
