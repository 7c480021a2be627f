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
//	F_v(J) = B_v X - D_v X² + H_e X³,  X = J(J+1) - Ω²,
//	B_v    = B_e - α_e u + γ_e u²,  D_v = D_e + β_e u,
//
// each times 2J+1 and Degeneracy. Omega is 0 for a state whose rotation is
// that of N or J from 0 (¹Σ; ³Σ with Degeneracy 3), or the Ω of a component
// of a state in Hund's case (a), whose J begins at Ω: each component of ²Π is a
// state of its own with Degeneracy 2 for the Λ doublet. A ²Π state between
// cases (a) and (b) is given once, with SpinOrbit = A (negative if inverted) and
// Degeneracy 2, and has the levels of E. Hill, J. H. Van Vleck, Phys. Rev. 32,
// 250 (1928):
//
//	F(J) = B_v {(J+1/2)² - 1 ∓ ½ √[4(J+1/2)² + Y(Y-4)]},  Y = A/B_v.
//
// OmegaE is the harmonic quantum ω_e, not the fundamental ω_e - 2ω_e x_e, and
// CentrifugalE is the D_e of centrifugal distortion, not a dissociation energy.
type DiatomicState struct {
	Origin                                              unit.Energy // of v = 0 above v = 0 of the first state
	Degeneracy                                          float64
	Omega                                               float64
	SpinOrbit                                           unit.Energy // A of a ²Π state between cases (a) and (b)
	OmegaE, OmegaEXE, OmegaEYE                          unit.Energy
	BE, AlphaE, GammaE                                  unit.Energy
	CentrifugalE, BetaE                                 unit.Energy
	SexticE                                             unit.Energy // H_e
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
	if err := tripletTwice(d.States); err != nil {
		return nil, err
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
			s.Origin, s.Degeneracy, s.Omega, s.SpinOrbit = o.Origin, o.Degeneracy, o.Omega, o.SpinOrbit
		}
		if !(s.OmegaE > 0) || !(s.BE > 0) || s.OmegaE-s.OmegaE != 0 || s.BE-s.BE != 0 {
			return nil, &statmech.DomainError{Func: fn, Arg: arg, Value: fmt.Sprintf("OmegaE %s, BE %s", s.OmegaE, s.BE), Want: "positive and finite"}
		}
		if s.SpinOrbit != 0 && s.Omega != 0 {
			return nil, fmt.Errorf("%s: %s: Omega and SpinOrbit: %w", fn, arg, ErrDouble)
		}
		if !(limit > 0) {
			return nil, &statmech.DomainError{Func: fn, Arg: arg + ".Dissociation", Value: limit.String(),
				Want: "a dissociation energy D0 (or an anharmonic constant to estimate it from): the sum over v and J has no end otherwise"}
		}
		vTop, jTop, why := -1, 0.0, "dissociation"
		lowest := unit.Energy(math.Inf(1))
		for _, l := range s.ladders(0) {
			e, _ := l.level(l.first)
			lowest = min(lowest, s.g(0)+e)
		}
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
			for _, l := range s.ladders(v) {
				for J := l.first; ; J++ {
					e, X := l.level(J)
					if float64(bv)-2*float64(dv)*X+3*float64(s.SexticE)*X*X <= 0 {
						break // dF/dX is not positive: the turnover
					}
					E := s.g(v) + e - lowest
					if E > limit {
						break
					}
					if v == 0 {
						jTop = math.Max(jTop, J)
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

// tripletTwice refuses a triplet that is there with g = 3 and again as its fine
// structure.
func tripletTwice(states []DiatomicState) error {
	for i, s := range states {
		for j, o := range states {
			if d := o.Origin - s.Origin; j != i && s.Degeneracy == 3 && o.Degeneracy < 3 && d > -100*unit.PerCm && d < 100*unit.PerCm {
				return fmt.Errorf("gas.Diatomic: States[%d] has degeneracy 3 and States[%d], of degeneracy %g, is %.3g cm-1 from it: a triplet and its fine structure: %w",
					i, j, o.Degeneracy, d.In(unit.PerCm), ErrDouble)
			}
		}
	}
	return nil
}

func (s DiatomicState) constants(v int) (bv, dv unit.Energy) {
	u := float64(v) + 0.5
	return s.BE - unit.Energy(u)*s.AlphaE + unit.Energy(u*u)*s.GammaE, s.CentrifugalE + unit.Energy(u)*s.BetaE
}

// A ladder is a sequence of rotational levels J = first, first+1, ... of one
// vibrational level; level returns the energy above G(v) and the X of the
// distortion terms.
type ladder struct {
	first float64
	level func(J float64) (e unit.Energy, X float64)
}

// ladders returns one ladder, or the two of a ²Π state with spin-orbit coupling.
func (s DiatomicState) ladders(v int) []ladder {
	bv, dv := s.constants(v)
	distorted := func(X float64) unit.Energy {
		return unit.Energy(float64(s.SexticE)*X*X*X) - unit.Energy(float64(dv)*X*X)
	}
	if s.SpinOrbit == 0 {
		return []ladder{{s.Omega, func(J float64) (unit.Energy, float64) {
			X := J*(J+1) - s.Omega*s.Omega
			return unit.Energy(float64(bv)*X) + distorted(X), X
		}}}
	}
	Y := float64(s.SpinOrbit / bv)
	branch := func(sign, first float64) ladder {
		return ladder{first, func(J float64) (unit.Energy, float64) {
			m := J + 0.5
			root := math.Sqrt(4*m*m + Y*(Y-4))
			N := m - 1 // of the lower branch far from the coupling, F₁
			if sign > 0 {
				N = m
			}
			X := N * (N + 1)
			return unit.Energy(float64(bv)*(m*m-1+sign*root/2)) + distorted(X), X
		}}
	}
	// J = 1/2 exists once, with the energy (2-Y)B/2 of Ω = 1/2.
	if Y > 2 {
		return []ladder{branch(-1, 0.5), branch(1, 1.5)}
	}
	return []ladder{branch(-1, 1.5), branch(1, 0.5)}
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

// Warnings says when levels near dissociation begin to matter.
func (m diatomicMode) Warnings(T unit.Temperature) []string {
	if 30*T.AsEnergy() < m.limit {
		return nil
	}
	return []string{"at " + T.String() + " levels near dissociation and excited states that the constants do not describe begin to matter (kT above D0/30)"}
}

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
