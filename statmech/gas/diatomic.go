package gas

import (
	"fmt"
	"math"
	"strings"

	"levelsum/statmech"
	"levelsum/statmech/unit"
)

// A DiatomicState is one electronic state of a diatomic molecule with the
// terms
//
//	G(v)   = ω_e u - ω_e x_e u² + ω_e y_e u³,          u = v + 1/2
//	F_v(J) = B_v X - D_v X²,  X = J(J+1) - Ω²,
//	B_v    = B_e - α_e u + γ_e u²,  D_v = D_e + β_e u,
//
// each times 2J+1 and Degeneracy. Omega is 0 for a state whose rotation is
// that of N or J from 0 (¹Σ; ³Σ with Degeneracy 3), or the Ω of a component
// of a state in Hund's case (a), whose J begins at Ω: each component of ²Π is a
// state of its own with Degeneracy 2 for the Λ doublet.
//
// OmegaE is the harmonic quantum ω_e, not the fundamental ω_e - 2ω_e x_e, and
// CentrifugalE is the D_e of centrifugal distortion, not a dissociation energy.
type DiatomicState struct {
	Origin                                              unit.Energy // of v = 0 above v = 0 of the first state
	Degeneracy                                          float64
	Omega                                               float64
	OmegaE, OmegaEXE, OmegaEYE                          unit.Energy
	BE, AlphaE, GammaE                                  unit.Energy
	CentrifugalE, BetaE                                 unit.Energy
	Dissociation                                        unit.Energy // D₀ of this state from its v = 0; 0 for that of the first state less Origin
	UOmegaE, UOmegaEXE, UBE, UAlphaE, UOrigin, UCentrif unit.Energy // standard uncertainties, for the budget
}

// Diatomic is a diatomic molecule by direct summation over v, J and electronic
// states. The sum stops where it must: in v at the turnover of G(v), in J at
// the turnover of F_v(J), and for both at the dissociation energy; the levels
// beyond are not levels but artefacts of the polynomial. Extent says where it
// stopped.
//
// A state without a spectrum of its own (OmegaE = 0) takes the constants of the
// first one.
type Diatomic struct {
	States   []DiatomicState
	Symmetry int          // 1, or 2 for equal nuclei
	Spin     *SpinWeights // of even and odd J, in place of Symmetry
}

// spectrum is the list of levels with what is to be said about it.
type spectrum struct {
	levels *statmech.Levels
	extent []string
	zero   unit.Energy // G(0) of the first state above its minimum
	limit  unit.Energy // D₀ used for the first state
}

// mostLevels is how many vibration-rotation levels are summed at most.
const mostLevels = 4_000_000

// Dissociation returns D₀ of the first state: as given, or ω_e²/(4 ω_e x_e) -
// G(0) of a Morse curve if it is not; estimated says which.
func (d Diatomic) Dissociation() (D0 unit.Energy, estimated bool) {
	if len(d.States) == 0 {
		return 0, false
	}
	s := d.States[0]
	if s.Dissociation > 0 {
		return s.Dissociation, false
	}
	if s.OmegaEXE > 0 {
		return s.OmegaE*(s.OmegaE/(4*s.OmegaEXE)) - s.g(0), true
	}
	return 0, false
}

func (s DiatomicState) g(v int) unit.Energy {
	u := float64(v) + 0.5
	return unit.Energy(u)*s.OmegaE - unit.Energy(u*u)*s.OmegaEXE + unit.Energy(u*u*u)*s.OmegaEYE
}

// slope returns G′(v).
func (s DiatomicState) slope(v int) unit.Energy {
	u := float64(v) + 0.5
	return s.OmegaE - unit.Energy(2*u)*s.OmegaEXE + unit.Energy(3*u*u)*s.OmegaEYE
}

func (d Diatomic) spectrum() (*spectrum, error) {
	const fn = "gas.Diatomic"
	if len(d.States) == 0 {
		return nil, &statmech.DomainError{Func: fn, Arg: "States", Value: "an empty list", Want: "at least one electronic state"}
	}
	if err := checkSymmetry(fn, d.Symmetry, d.Spin); err != nil {
		return nil, err
	}
	if d.Spin != nil {
		if err := d.Spin.check(fn, 2, "two weights, of even and of odd J"); err != nil {
			return nil, err
		}
	} else if d.Symmetry > 2 {
		return nil, &statmech.DomainError{Func: fn, Arg: "Symmetry", Value: fmt.Sprint(d.Symmetry), Want: "1 or 2 for a diatomic molecule"}
	}
	D0, estimated := d.Dissociation()
	first := d.States[0]
	if first.Origin != 0 {
		return nil, &statmech.DomainError{Func: fn, Arg: "States[0].Origin", Value: first.Origin.String(), Want: "0: the first state is the lowest"}
	}
	sp := &spectrum{zero: first.g(0), limit: D0}
	if estimated {
		sp.extent = append(sp.extent, fmt.Sprintf("dissociation energy estimated as that of a Morse curve, %s cm-1", short6(D0.In(unit.PerCm))))
	}
	var es []unit.Energy
	var gs []float64
	for i, s := range d.States {
		arg := fmt.Sprintf("States[%d]", i)
		if !(s.Degeneracy > 0) || s.Origin < 0 || s.Omega < 0 || 2*s.Omega != math.Trunc(2*s.Omega) {
			return nil, &statmech.DomainError{Func: fn, Arg: arg, Value: fmt.Sprintf("Degeneracy %g, Origin %s, Omega %g", s.Degeneracy, s.Origin, s.Omega),
				Want: "a positive degeneracy, an origin above the first state and a multiple of 1/2 for Omega"}
		}
		limit := s.Dissociation
		if limit == 0 {
			limit = D0 - s.Origin
		}
		if s.OmegaE == 0 {
			o := s
			s = first
			s.Origin, s.Degeneracy, s.Omega = o.Origin, o.Degeneracy, o.Omega
		}
		if !(s.OmegaE > 0) || !(s.BE > 0) || s.OmegaE-s.OmegaE != 0 || s.BE-s.BE != 0 {
			return nil, &statmech.DomainError{Func: fn, Arg: arg, Value: fmt.Sprintf("OmegaE %s, BE %s", s.OmegaE, s.BE), Want: "positive and finite"}
		}
		if !(limit > 0) {
			return nil, &statmech.DomainError{Func: fn, Arg: arg + ".Dissociation", Value: limit.String(),
				Want: "a dissociation energy D0 (or an anharmonic constant to estimate it from): the sum over v and J has no end otherwise"}
		}
		vTop, jTop, why := -1, 0.0, "dissociation"
		lowest := s.level(0, s.Omega)
		for v := 0; ; v++ {
			if s.slope(v) <= 0 {
				why = "the turnover of G(v)"
				break
			}
			if s.g(v)-s.g(0) >= limit {
				break
			}
			bv, dv := s.constants(v)
			if bv <= 0 {
				why = "B_v = 0"
				break
			}
			vTop = v
			for J := s.Omega; ; J++ {
				X := J*(J+1) - s.Omega*s.Omega
				if dv > 0 && float64(bv) <= 2*float64(dv)*X {
					break // dF/dX is not positive: the turnover
				}
				E := s.level(v, J) - lowest
				if E > limit {
					break
				}
				if v == 0 {
					jTop = J
				}
				g := s.Degeneracy * (2*J + 1)
				if d.Spin != nil {
					g *= d.Spin.Weights[int(math.Round(J))%2]
				}
				if g > 0 {
					if len(es) == mostLevels {
						return nil, fmt.Errorf("%s: more than %d levels: give a dissociation energy", fn, mostLevels)
					}
					es, gs = append(es, s.Origin+E), append(gs, g)
				}
			}
		}
		sp.extent = append(sp.extent, fmt.Sprintf("state at %s cm-1: v = 0 to %d, stopped by %s; J to %g in v = 0", short6(s.Origin.In(unit.PerCm)), vTop, why, jTop))
	}
	l, err := statmech.NewLevels(es, gs)
	if err != nil {
		return nil, fmt.Errorf("%s: %w", fn, err)
	}
	sp.levels = l
	return sp, nil
}

func (s DiatomicState) constants(v int) (bv, dv unit.Energy) {
	u := float64(v) + 0.5
	return s.BE - unit.Energy(u)*s.AlphaE + unit.Energy(u*u)*s.GammaE, s.CentrifugalE + unit.Energy(u)*s.BetaE
}

// level returns the energy of (v, J) above the state's potential minimum.
func (s DiatomicState) level(v int, J float64) unit.Energy {
	bv, dv := s.constants(v)
	X := J*(J+1) - s.Omega*s.Omega
	return s.g(v) + unit.Energy(float64(bv)*X) - unit.Energy(float64(dv)*X*X)
}

// mode is the spectrum as a Mode, with symmetry or spin convention applied.
type diatomicMode struct {
	*spectrum
	factor float64
}

func (m diatomicMode) Reduced(T unit.Temperature) statmech.Reduced {
	r := m.levels.Reduced(T)
	r.LogQ += math.Log(m.factor)
	return r
}

func (m diatomicMode) ReducedAt(ts []unit.Temperature) []statmech.Reduced {
	rs := m.levels.ReducedAt(ts)
	for i := range rs {
		rs[i].LogQ += math.Log(m.factor)
	}
	return rs
}

// ZeroPointEnergy returns the energy of the lowest level above the minimum of
// the potential of the first state.
func (m diatomicMode) ZeroPointEnergy() unit.Energy { return m.zero + m.levels.ZeroPointEnergy() }

// Extent says in words where the sums over v and J end.
func (m diatomicMode) Extent() string { return strings.Join(m.extent, "; ") }

// Mode returns the molecule's internal motion as one mode. It returns a
// [*statmech.DomainError] if a constant is missing or the sum would not end.
func (d Diatomic) Mode() (statmech.Mode, error) {
	m, err := d.mode()
	if err != nil {
		return nil, err
	}
	return m, nil
}

func (d Diatomic) mode() (diatomicMode, error) {
	sp, err := d.spectrum()
	if err != nil {
		return diatomicMode{}, err
	}
	return diatomicMode{sp, d.Spin.factor(d.Symmetry)}, nil
}

func short6(x float64) string { return fmt.Sprintf("%.6g", x) }
