package gas

import (
	"fmt"
	"math"
	"sync"

	"levelsum/statmech"
	"levelsum/statmech/unit"
)

// Anharmonic is a set of vibrations coupled by second-order anharmonic
// constants, by direct summation over
//
//	G(v) = Σ ωᵢ(vᵢ + dᵢ/2) + Σ_{i<=j} x_ij (vᵢ + dᵢ/2)(vⱼ + dⱼ/2)
//
// with degeneracies (v+d-1)!/(v!(d-1)!) of a mode of degeneracy d. The sum over
// each mode stops where ∂G/∂v turns negative, beyond the last bound level, and where the energy passes
// Limit (a dissociation energy from the ground level), whichever comes first.
type Anharmonic struct {
	Omega      []unit.Energy   // harmonic quanta ωᵢ, not the fundamentals
	Degeneracy []int           // dᵢ; nil for all 1
	X          [][]unit.Energy // x_ij for j <= i (lower triangle) or a full symmetric matrix
	Limit      unit.Energy     // highest energy above the ground level; 0 for none
}

// Fundamental returns the transition energy ν_i from the ground level to one
// quantum of mode i.
func (a Anharmonic) Fundamental(i int) unit.Energy {
	v := make([]int, len(a.Omega))
	e0 := a.energy(v)
	v[i] = 1
	return a.energy(v) - e0
}

func (a Anharmonic) d(i int) int {
	if a.Degeneracy == nil {
		return 1
	}
	return a.Degeneracy[i]
}

// x returns x_ij for j <= i.
func (a Anharmonic) x(i, j int) unit.Energy {
	if i < len(a.X) && j < len(a.X[i]) {
		return a.X[i][j]
	}
	return 0
}

// energy returns G(v) from the minimum of the potential.
func (a Anharmonic) energy(v []int) unit.Energy {
	var e unit.Energy
	for i := range a.Omega {
		n := float64(v[i]) + float64(a.d(i))/2
		e += unit.Energy(n) * a.Omega[i]
		for j := 0; j <= i; j++ {
			e += unit.Energy(n*(float64(v[j])+float64(a.d(j))/2)) * a.x(i, j)
		}
	}
	return e
}

// slope returns ∂G/∂vᵢ.
func (a Anharmonic) slope(v []int, i int) unit.Energy {
	s := a.Omega[i]
	for j := range a.Omega {
		n := float64(v[j]) + float64(a.d(j))/2
		x := a.x(max(i, j), min(i, j))
		if i == j {
			x *= 2
		}
		s += unit.Energy(n) * x
	}
	return s
}

// mostVibrational is how many vibrational levels are summed at most.
const mostVibrational = 4_000_000

// Levels returns the levels up to an energy of reach above the ground level.
// It returns an error if lengths do not agree, a quantum is not positive, or
// there are more than four million levels.
func (a Anharmonic) Levels(reach unit.Energy) (*statmech.Levels, error) {
	const fn = "gas.Anharmonic.Levels"
	if len(a.Omega) == 0 || a.Degeneracy != nil && len(a.Degeneracy) != len(a.Omega) {
		return nil, &statmech.DomainError{Func: fn, Arg: "Omega, Degeneracy", Value: fmt.Sprintf("%d, %d values", len(a.Omega), len(a.Degeneracy)), Want: "as many of each, at least one"}
	}
	for i, w := range a.Omega {
		if !(w > 0) || math.IsInf(float64(w), 1) || a.d(i) < 1 {
			return nil, &statmech.DomainError{Func: fn, Arg: fmt.Sprintf("Omega[%d]", i), Value: w.String(), Want: "positive and finite, with a degeneracy of 1 or more"}
		}
		for j := 0; j < i; j++ {
			if i < len(a.X) && j < len(a.X) && i < len(a.X[j]) && j < len(a.X[i]) && a.X[i][j] != a.X[j][i] {
				return nil, &statmech.DomainError{Func: fn, Arg: fmt.Sprintf("X[%d][%d]", i, j), Value: a.X[i][j].String(), Want: "equal to X[j][i] = " + a.X[j][i].String()}
			}
		}
	}
	if a.Limit > 0 {
		reach = min(reach, a.Limit)
	}
	v := make([]int, len(a.Omega))
	zero := a.energy(v)
	var es []unit.Energy
	var gs []float64
	var walk func(i int, g float64) error
	walk = func(i int, g float64) error {
		if i == len(v) {
			if len(es) == mostVibrational {
				return fmt.Errorf("%s: more than %d levels below %s: give a lower Limit or treat the modes as harmonic", fn, mostVibrational, reach)
			}
			es, gs = append(es, a.energy(v)-zero), append(gs, g)
			return nil
		}
		w := g
		for v[i] = 0; ; v[i]++ {
			e := a.energy(v)
			if v[i] > 0 && (a.slope(v, i) <= 0 || e-zero > reach) {
				break
			}
			if v[i] > 0 {
				w *= float64(v[i]+a.d(i)-1) / float64(v[i])
			}
			if err := walk(i+1, math.Round(w)); err != nil {
				return err
			}
		}
		v[i] = 0
		return nil
	}
	if err := walk(0, 1); err != nil {
		return nil, err
	}
	return statmech.NewLevels(es, gs)
}

// anharmonicMode is the sum as a Mode: levels are found up to what the highest
// temperature asked for needs.
type anharmonicMode struct {
	a  Anharmonic
	mu sync.Mutex // guards levels and reach

	levels *statmech.Levels
	reach  unit.Energy
}

func newAnharmonicMode(a Anharmonic) (*anharmonicMode, error) {
	m := &anharmonicMode{a: a}
	if _, err := m.to(300 * unit.K); err != nil {
		return nil, err
	}
	return m, nil
}

func (m *anharmonicMode) to(T unit.Temperature) (*statmech.Levels, error) {
	m.mu.Lock()
	defer m.mu.Unlock()
	if need := 40 * T.AsEnergy(); m.levels == nil || need > m.reach {
		need = max(need, 1.5*m.reach)
		l, err := m.a.Levels(need)
		if err != nil {
			return nil, err
		}
		m.levels, m.reach = l, need
	}
	return m.levels, nil
}

// Reduced returns the functions at T. It panics with a [*statmech.DomainError]
// where the sum has too many levels.
func (m *anharmonicMode) Reduced(T unit.Temperature) statmech.Reduced {
	statmech.CheckTemperature("gas.Anharmonic.Reduced", T)
	l, err := m.to(T)
	if err != nil {
		panic(&statmech.DomainError{Func: "gas.Anharmonic.Reduced", Arg: "T", Value: T.String(), Want: "lower: " + err.Error()})
	}
	return l.Reduced(T)
}

// ReducedAt is Reduced at each temperature.
func (m *anharmonicMode) ReducedAt(ts []unit.Temperature) []statmech.Reduced {
	if len(ts) == 0 {
		return nil
	}
	hot := ts[0]
	for _, T := range ts {
		statmech.CheckTemperature("gas.Anharmonic.ReducedAt", T)
		hot = max(hot, T)
	}
	l, err := m.to(hot)
	if err != nil {
		panic(&statmech.DomainError{Func: "gas.Anharmonic.ReducedAt", Arg: "T", Value: hot.String(), Want: "lower: " + err.Error()})
	}
	return l.ReducedAt(ts)
}

// ZeroPointEnergy returns G(0).
func (m *anharmonicMode) ZeroPointEnergy() unit.Energy {
	return m.a.energy(make([]int, len(m.a.Omega)))
}
