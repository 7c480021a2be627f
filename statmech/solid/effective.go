package solid

import (
	"fmt"
	"math"

	"levelsum/statmech"
	"levelsum/statmech/special"
	"levelsum/statmech/unit"
)

// EffectiveTheta is the Debye temperature that reproduces one measured C_V.
type EffectiveTheta struct {
	T     unit.Temperature
	Theta unit.Temperature // 0 where there is none
	// U is the standard uncertainty that the one of C_V gives, to first order;
	// Low and High are where C_V plus and minus its standard uncertainty lead.
	// Low is 0 if C_V + u reaches the limit n R, High +Inf if C_V - u is not
	// positive.
	U, Low, High unit.Temperature
	// Amplification is |∂lnθ/∂lnC|: 1/3 in the T³ region, about 10 at T = θ.
	Amplification float64
	// Problem says why there is no Theta; it is empty where there is one.
	Problem string
}

// EffectiveThetas inverts C_V(T) of [Debye] point by point,
//
//	C_V(T) = n R f(θ/T),
//
// for n vibrations in the formula unit (3 for a mole of atoms, per mole of
// what C_V is per mole of) and gives every θ its error bar. Feed C_V, not Cp
// (see [Expansion] and [NernstLindemann]), and without the conduction
// electrons' part: near T = θ a per cent of C is ten per cent of θ.
//
// A point with C_V >= n R or C_V <= 0 has no Debye temperature: it is a gap in
// the curve, and its Problem says why. u holds the standard uncertainties of
// cv.
//
// Accuracy: 1e-14 relative, times the amplification where that is above 1 (TestEffectiveThetas).
//
// Errors: an error if lengths differ, a temperature is not positive and
// finite, an uncertainty is negative or not finite, a heat capacity is not
// finite, or n is not positive.
func EffectiveThetas(ts []unit.Temperature, cv, u []unit.MolarEntropy, n float64) ([]EffectiveTheta, error) {
	const fn = "solid.EffectiveThetas"
	wrong := func(arg, value, want string) ([]EffectiveTheta, error) {
		return nil, &statmech.DomainError{Func: fn, Arg: arg, Value: value, Want: want}
	}
	switch {
	case len(cv) != len(ts):
		return wrong("cv", fmt.Sprintf("%d values", len(cv)), fmt.Sprintf("one for each of %d temperatures", len(ts)))
	case len(u) != len(ts):
		return wrong("u", fmt.Sprintf("%d values", len(u)), fmt.Sprintf("a standard uncertainty for each of %d heat capacities", len(ts)))
	case !positive(n):
		return wrong("n", fmt.Sprintf("%g", n), "the number of vibrations in the formula unit, positive and finite")
	}
	out := make([]EffectiveTheta, len(ts))
	for i, T := range ts {
		switch {
		case !positive(float64(T)):
			return wrong(fmt.Sprintf("ts[%d]", i), T.String(), wantPositive)
		case math.IsNaN(float64(cv[i])) || math.IsInf(float64(cv[i]), 0):
			return wrong(fmt.Sprintf("cv[%d]", i), cv[i].String(), "finite")
		case !notNegative(float64(u[i])):
			return wrong(fmt.Sprintf("u[%d]", i), u[i].String(), wantNotNegative)
		}
		out[i] = effective(T, float64(cv[i])/(n*unit.GasConstant), float64(u[i])/(n*unit.GasConstant))
	}
	return out, nil
}

// effective works with f = C/nR.
func effective(T unit.Temperature, f, u float64) EffectiveTheta {
	e := EffectiveTheta{T: T}
	switch {
	case f >= 1:
		e.Problem = fmt.Sprintf("C_V is %.4g of n R, and a Debye lattice stays below 1: no Debye temperature", f)
		return e
	case f <= 0:
		e.Problem = "C_V is not positive: no Debye temperature"
		return e
	}
	x := inverseDebye(f)
	e.Theta = unit.Temperature(x) * T
	e.Amplification = -f / (x * special.DebyeCSlope(3, x))
	e.U = e.Theta * unit.Temperature(e.Amplification*u/f)
	if f+u < 1 {
		e.Low = unit.Temperature(inverseDebye(f+u)) * T
	}
	e.High = unit.Temperature(math.Inf(1))
	if f-u > 0 {
		e.High = unit.Temperature(inverseDebye(f-u)) * T
	}
	return e
}

// inverseDebye returns x with f = C(x), 0 < f < 1. f falls monotonically from
// 1 - x²/20 to 4π⁴/5x³.
func inverseDebye(f float64) float64 {
	tail := 0.8 * math.Pow(math.Pi, 4)
	if x := math.Cbrt(tail / f); x > 60 {
		return x // the tail is exact there
	}
	// Newton on ln f against ln x with a bracket, from the nearer limit.
	x := math.Cbrt(tail / f)
	if f > 0.3 {
		x = math.Sqrt(20 * (1 - f) / f)
	}
	lo, hi := 0.0, 61.0
	for range 60 {
		v := special.DebyeC(3, x)
		switch {
		case v > f:
			lo = x
		case v < f:
			hi = x
		default:
			return x
		}
		next := x - (v-f)/special.DebyeCSlope(3, x)
		if !(next > lo && next < hi) {
			next = (lo + hi) / 2
		}
		if math.Abs(next-x) <= 2e-16*x {
			return next
		}
		x = next
	}
	return x
}

// String returns the temperature with its interval, or the problem.
func (e EffectiveTheta) String() string {
	if e.Problem != "" {
		return fmt.Sprintf("%v: %s", e.T, e.Problem)
	}
	return fmt.Sprintf("%v: %v, standard uncertainty %v", e.T, e.Theta, e.U)
}
