package statmech

import (
	"math"
	"strconv"

	"levelsum/statmech/unit"
)

// Sum is several independent modes as one: ln q, U and C add.
type Sum []Mode

// Reduced returns the sum of the members' functions.
func (s Sum) Reduced(T unit.Temperature) Reduced {
	CheckTemperature("statmech.Sum.Reduced", T)
	var r Reduced
	for _, m := range s {
		r = r.Add(m.Reduced(T))
	}
	return r
}

// ReducedAt returns the sum of the members' functions at each temperature.
func (s Sum) ReducedAt(ts []unit.Temperature) []Reduced {
	rs := make([]Reduced, len(ts))
	for i, T := range ts {
		CheckTemperature("statmech.Sum.ReducedAt", T)
		rs[i] = Reduced{}
	}
	for _, m := range s {
		for i, r := range ReducedAt(m, ts) {
			rs[i] = rs[i].Add(r)
		}
	}
	return rs
}

// ZeroPointEnergy returns the sum over the members that have one.
func (s Sum) ZeroPointEnergy() unit.Energy {
	var e unit.Energy
	for _, m := range s {
		if z, ok := m.(ZeroPointer); ok {
			e += z.ZeroPointEnergy()
		}
	}
	return e
}

// Times is N independent equal modes. N need not be an integer: a weight in a
// fit, the number of oscillators per formula unit.
type Times struct {
	N    float64
	Mode Mode
}

// Reduced returns N times the functions of the mode. It panics with a
// [*DomainError] if N is negative or not finite.
func (t Times) Reduced(T unit.Temperature) Reduced {
	t.check()
	return t.Mode.Reduced(T).Scale(t.N)
}

// ReducedAt is Reduced at each temperature.
func (t Times) ReducedAt(ts []unit.Temperature) []Reduced {
	t.check()
	rs := ReducedAt(t.Mode, ts)
	for i := range rs {
		rs[i] = rs[i].Scale(t.N)
	}
	return rs
}

func (t Times) check() {
	if !(t.N >= 0) || math.IsInf(t.N, 1) {
		panic(&DomainError{"statmech.Times.Reduced", "N", strconv.FormatFloat(t.N, 'g', -1, 64), "finite and not negative"})
	}
}

// ZeroPointEnergy returns N times that of the mode, 0 if it has none.
func (t Times) ZeroPointEnergy() unit.Energy {
	if z, ok := t.Mode.(ZeroPointer); ok {
		return unit.Energy(t.N) * z.ZeroPointEnergy()
	}
	return 0
}
