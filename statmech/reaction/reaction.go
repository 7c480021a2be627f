// Package reaction computes standard reaction quantities of ideal gases and
// their equilibrium constants from molecules of package gas.
//
// A [Reaction] is made from an equation and its species; it is refused unless
// atoms and charge balance, every species has the same standard pressure and
// spin convention, and the energies are all of one named kind. Equilibrium
// composition is not here.
//
// Results are those of ideal gases at equilibrium with the listed species only.
// They are no safety case: omitted species, non-ideality, kinetics, ignition and
// materials are outside. Relief, containment and ventilation are designed by
// local codes and licensed practice.
package reaction

import (
	"errors"
	"fmt"
	"math"
	"sort"
	"strconv"
	"strings"

	"levelsum/statmech"
	"levelsum/statmech/gas"
	"levelsum/statmech/unit"
)

// ErrUnbalanced is returned if atoms or charge do not balance.
var ErrUnbalanced = errors.New("the equation does not balance")

// ErrMixed is returned if species do not share standard pressure, spin
// convention or kind of energy.
var ErrMixed = errors.New("the species do not fit together")

// A Term is a species with its stoichiometric number, negative for reactants.
type Term struct {
	Nu      float64
	Species *gas.Molecule
}

// EnergyKind says which energies of the descriptions give ΔrH(0 K).
type EnergyKind int

const (
	// AtomisationD0: the energies D0 to separate each molecule in its ground
	// level into atoms; atoms have 0. A depth D_e of the potential is another
	// thing, larger by the zero-point energy.
	AtomisationD0 EnergyKind = iota + 1
	// FormationAt0K: enthalpies of formation at 0 K.
	FormationAt0K
	// Given: the reaction enthalpy is set by [Reaction.SetEnthalpy].
	Given
)

// String returns the kind in words.
func (k EnergyKind) String() string {
	switch k {
	case AtomisationD0:
		return "atomisation energies D0"
	case FormationAt0K:
		return "enthalpies of formation at 0 K"
	case Given:
		return "reaction enthalpy as given"
	}
	return "unknown kind of energy"
}

// A Reaction has the standard quantities of one equation,
//
//	ΔrH°(T) = ΔrH(0) + Σ νᵢ [Hᵢ°(T)-Hᵢ(0)],  ΔrS°(T) = Σ νᵢ Sᵢ°(T),
//	ΔrG°(T) = ΔrH° - T ΔrS°,  ln K = -ΔrG°/RT,
//
// νᵢ the stoichiometric number (negative for reactants) and Hᵢ°, Sᵢ° the standard
// functions of species i, an ideal gas at p°; ΔrH(0), in J/mol, comes from the
// energies that [EnergyKind] names. K is for pressures relative to p°.
//
// Range: that of the species' own models, see [gas.Molecule.Warnings].
//
// Accuracy: for nine reactions with ΔrH given, ln K is within 0.01 of NASA's
// functions (TestEquilibriumConstantsPublished); an error of 1 kJ/mol in ΔrH
// moves ln K by 0.40 at 298.15 K. [Reaction.UncertaintyOfLogK] gives what the
// uncertainties of the inputs amount to.
//
// Errors: evaluations panic with a [*statmech.DomainError] if T is not positive
// and finite.
type Reaction struct {
	Equation string
	terms    []Term
	kind     EnergyKind
	h0       unit.MolarEnergy // ΔrH(0)
	u0       unit.MolarEnergy // its standard uncertainty where Given
	known    bool
	pressure unit.Pressure
}

// New reads an equation, "I2 = 2 I" or "CO + 1/2 O2 = CO2", and takes each
// species from the molecules given, by name, or else from the library of
// package gas. kind says which energies give ΔrH(0 K).
//
// Errors: [ErrUnbalanced] with what is left over; [ErrMixed] if pressures, spin
// conventions or kinds of energy differ, or a species lacks an energy of the
// kind; an error that names a species that is not known.
func New(equation string, kind EnergyKind, molecules ...*gas.Molecule) (*Reaction, error) {
	byName := map[string]*gas.Molecule{}
	for _, m := range molecules {
		byName[m.Name()] = m
	}
	left, right, ok := strings.Cut(equation, "=")
	if !ok {
		return nil, fmt.Errorf("reaction: %q: no equals sign", equation)
	}
	var terms []Term
	for side, text := range []string{left, right} {
		for _, part := range strings.Split(text, " + ") {
			nu, name, err := coefficient(strings.TrimSpace(part))
			if err != nil {
				return nil, fmt.Errorf("reaction: %q: %w", equation, err)
			}
			m := byName[name]
			if m == nil {
				d, err := gas.Find(name)
				if err != nil {
					return nil, fmt.Errorf("reaction: %q: %w", equation, err)
				}
				if m, err = gas.New(d); err != nil {
					return nil, fmt.Errorf("reaction: %q: %w", equation, err)
				}
				byName[name] = m
			}
			if side == 0 {
				nu = -nu
			}
			terms = append(terms, Term{nu, m})
		}
	}
	r, err := Of(terms, kind)
	if err != nil {
		return nil, fmt.Errorf("reaction: %q: %w", equation, err)
	}
	r.Equation = strings.TrimSpace(equation)
	return r, nil
}

// coefficient splits "2 I", "1/2 O2", "0.5 O2" or "SO2".
func coefficient(s string) (float64, string, error) {
	num, name, ok := strings.Cut(s, " ")
	if !ok {
		return 1, s, check(s)
	}
	name = strings.TrimSpace(name)
	a, b, fraction := strings.Cut(num, "/")
	x, err := strconv.ParseFloat(a, 64)
	if err == nil && fraction {
		var y float64
		y, err = strconv.ParseFloat(b, 64)
		x /= y
	}
	if err != nil || !(x > 0) || math.IsInf(x, 1) {
		return 0, "", fmt.Errorf("%q is no coefficient of %q", num, name)
	}
	return x, name, check(name)
}

func check(name string) error {
	if name == "" || strings.ContainsAny(name, " =") {
		return fmt.Errorf("%q where a species is wanted; write spaces around each +", name)
	}
	return nil
}

// Of makes a reaction of terms. A species on both sides counts once, with the
// sum of its numbers.
func Of(terms []Term, kind EnergyKind) (*Reaction, error) {
	r := &Reaction{kind: kind}
	for _, t := range terms {
		if t.Species == nil || t.Nu-t.Nu != 0 {
			return nil, &statmech.DomainError{Func: "reaction.Of", Arg: "terms", Value: fmt.Sprint(t.Nu), Want: "a finite number and a molecule"}
		}
		found := false
		for i := range r.terms {
			if r.terms[i].Species == t.Species {
				r.terms[i].Nu += t.Nu
				found = true
			}
		}
		if !found {
			r.terms = append(r.terms, t)
		}
	}
	var kept []Term
	for _, t := range r.terms {
		if t.Nu != 0 {
			kept = append(kept, t)
		}
	}
	if r.terms = kept; len(kept) == 0 {
		return nil, fmt.Errorf("no species change: %w", ErrUnbalanced)
	}
	for _, step := range []func() error{r.balance, r.sameBasis, r.energies} {
		if err := step(); err != nil {
			return nil, err
		}
	}
	var sides [2][]string
	for _, t := range r.terms {
		s, i := t.Species.Name(), 0
		if n := math.Abs(t.Nu); n != 1 {
			s = strconv.FormatFloat(n, 'g', -1, 64) + " " + s
		}
		if t.Nu > 0 {
			i = 1
		}
		sides[i] = append(sides[i], s)
	}
	r.Equation = strings.Join(sides[0], " + ") + " = " + strings.Join(sides[1], " + ")
	return r, nil
}

func (r *Reaction) balance() error {
	left := map[string]float64{}
	for _, t := range r.terms {
		f := t.Species.Formula()
		if f.Count() == 0 {
			return fmt.Errorf("%s has no formula to be balanced with: %w", t.Species.Name(), ErrUnbalanced)
		}
		for a, n := range f.Atoms {
			left[a] += t.Nu * float64(n)
		}
		left["charge"] += t.Nu * float64(f.Charge)
	}
	var out []string
	for a, n := range left {
		if math.Abs(n) > 1e-9 {
			out = append(out, fmt.Sprintf("%s %+.4g", a, n))
		}
	}
	if len(out) > 0 {
		sort.Strings(out)
		return fmt.Errorf("products less reactants: %s: %w", strings.Join(out, ", "), ErrUnbalanced)
	}
	return nil
}

func (r *Reaction) sameBasis() error {
	first := r.terms[0].Species
	r.pressure = first.Pressure()
	for _, t := range r.terms[1:] {
		if t.Species.Pressure() != r.pressure {
			return fmt.Errorf("p° of %s is %s, that of %s is %s: %w", first.Name(), r.pressure, t.Species.Name(), t.Species.Pressure(), ErrMixed)
		}
		if t.Species.SpinCounted() != first.SpinCounted() {
			return fmt.Errorf("nuclear spin is counted in one of %s and %s and not in the other: %w", first.Name(), t.Species.Name(), ErrMixed)
		}
	}
	return nil
}

// energies sums ΔrH(0) from the descriptions.
func (r *Reaction) energies() error {
	switch r.kind {
	case Given:
		return nil
	case AtomisationD0, FormationAt0K:
	default:
		return &statmech.DomainError{Func: "reaction.New", Arg: "kind", Value: fmt.Sprint(int(r.kind)), Want: "AtomisationD0, FormationAt0K or Given"}
	}
	for _, t := range r.terms {
		e, _, ok := energyOf(t.Species, r.kind)
		if !ok {
			return fmt.Errorf("%s has none of the %s that are asked for: %w", t.Species.Name(), r.kind, ErrMixed)
		}
		r.h0 += unit.MolarEnergy(t.Nu) * e
	}
	r.known = true
	return nil
}

// energyOf returns a species' share of ΔrH(0) and its standard uncertainty.
func energyOf(m *gas.Molecule, kind EnergyKind) (e, u unit.MolarEnergy, ok bool) {
	d := m.Description()
	if kind == FormationAt0K {
		if d.Formation == nil {
			return 0, 0, false
		}
		return *d.Formation, d.UFormation, true
	}
	if m.Formula().Count() == 1 {
		return 0, 0, true // an atom
	}
	if d.AtomisationD0 == nil {
		return 0, 0, false
	}
	return -*d.AtomisationD0, d.UAtomisationD0, true
}

// SetEnthalpy gives the reaction enthalpy at a temperature, or at 0 K for T = 0,
// with its standard uncertainty. It is for kind Given and returns [ErrMixed] for
// another one.
func (r *Reaction) SetEnthalpy(T unit.Temperature, H, u unit.MolarEnergy) error {
	if r.kind != Given {
		return fmt.Errorf("reaction: %s has %s: a reaction enthalpy besides: %w", r.Equation, r.kind, ErrMixed)
	}
	if H-H != 0 || !(u >= 0) {
		return &statmech.DomainError{Func: "reaction.Reaction.SetEnthalpy", Arg: "H", Value: H.String() + " ± " + u.String(), Want: "finite, with an uncertainty that is not negative"}
	}
	if T != 0 {
		statmech.CheckTemperature("reaction.Reaction.SetEnthalpy", T)
		H -= r.increment(T)
	}
	r.h0, r.u0, r.known = H, u, true
	return nil
}

// String returns the equation.
func (r *Reaction) String() string { return r.Equation }

// Terms returns the species with their net stoichiometric numbers.
func (r *Reaction) Terms() []Term { return append([]Term(nil), r.terms...) }

// DeltaNu returns the change of the number of moles of gas.
func (r *Reaction) DeltaNu() float64 {
	n := 0.0
	for _, t := range r.terms {
		n += t.Nu
	}
	return n
}

// increment returns Σ ν [H(T)-H(0)].
func (r *Reaction) increment(T unit.Temperature) unit.MolarEnergy {
	var h unit.MolarEnergy
	for _, t := range r.terms {
		h += unit.MolarEnergy(t.Nu) * t.Species.EnthalpyIncrement(T)
	}
	return h
}

func (r *Reaction) need(fn string, T unit.Temperature) {
	statmech.CheckTemperature("reaction.Reaction."+fn, T)
	if !r.known {
		panic(&statmech.DomainError{Func: "reaction.Reaction." + fn, Arg: "enthalpy", Value: "not given", Want: "a call of SetEnthalpy before"})
	}
}

// EnthalpyAtZero returns ΔrH(0 K).
func (r *Reaction) EnthalpyAtZero() unit.MolarEnergy {
	r.need("EnthalpyAtZero", 1*unit.K)
	return r.h0
}

// Enthalpy returns ΔrH°(T).
func (r *Reaction) Enthalpy(T unit.Temperature) unit.MolarEnergy {
	r.need("Enthalpy", T)
	return r.h0 + r.increment(T)
}

// Entropy returns ΔrS°(T) at the standard pressure.
func (r *Reaction) Entropy(T unit.Temperature) unit.MolarEntropy {
	statmech.CheckTemperature("reaction.Reaction.Entropy", T)
	var s unit.MolarEntropy
	for _, t := range r.terms {
		s += unit.MolarEntropy(t.Nu) * t.Species.Entropy(T)
	}
	return s
}

// GibbsEnergy returns ΔrG°(T) = ΔrH(0) + Σ ν [G°(T)-H(0)].
func (r *Reaction) GibbsEnergy(T unit.Temperature) unit.MolarEnergy {
	r.need("GibbsEnergy", T)
	g := r.h0
	for _, t := range r.terms {
		g -= (unit.MolarEntropy(t.Nu) * t.Species.GibbsFunctionFromZero(T)).Times(T)
	}
	return g
}

// LogK returns ln K = -ΔrG°/RT, dimensionless, for pressures relative to p°.
func (r *Reaction) LogK(T unit.Temperature) float64 {
	r.need("LogK", T)
	return -r.GibbsEnergy(T).Over(T).In(unit.R)
}

// LogKs returns ln K at each temperature.
func (r *Reaction) LogKs(ts []unit.Temperature) []float64 {
	out := make([]float64, len(ts))
	for i, T := range ts {
		out[i] = r.LogK(T)
	}
	return out
}

// K returns the equilibrium constant; use LogK where it leaves the range of
// float64.
func (r *Reaction) K(T unit.Temperature) float64 { return math.Exp(r.LogK(T)) }

// LogKc returns ln K_c for concentrations relative to 1 mol/L, K_c = K
// (p°/RT c°)^Δν.
func (r *Reaction) LogKc(T unit.Temperature) float64 {
	return r.LogK(T) + r.DeltaNu()*math.Log(float64(r.pressure)/(unit.GasConstant*float64(T)*1e3))
}
