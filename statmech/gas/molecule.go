package gas

import (
	"errors"
	"fmt"
	"math"
	"strings"

	"levelsum/statmech"
	"levelsum/statmech/unit"
)

// ErrModes is returned if the vibrations do not match the number of atoms.
var ErrModes = errors.New("the number of vibrations does not fit the molecule")

// ErrDouble is returned if a description counts something twice.
var ErrDouble = errors.New("counted twice")

// A Part is one contribution to a molecule's functions.
type Part struct {
	Name   string
	Method string // how it is computed
	Mode   statmech.Mode
}

// A Molecule is an ideal gas of molecules at pressure p°, made by [New]. It is
// a [statmech.Mode] with the translation at fixed pressure, so its energy is
// the enthalpy and its heat capacity is Cp.
type Molecule struct {
	d         Description
	formula   Formula
	mass      unit.Mass
	pressure  unit.Pressure
	reference unit.Temperature
	parts     []Part
	warnings  []string
	notes     []string
}

// New checks a description and returns the molecule. Nothing is mended in
// silence: what it did is in [Molecule.Notes], what is doubtful in
// [Molecule.Warnings].
//
// Errors: [ErrModes] if the vibrations, with degeneracies, are not 3N-5 (linear)
// or 3N-6 in number, or a torsion replaces none; [ErrDouble] if a symmetry
// number and spin weights are both given, or electronic states both in Diatomic
// and in Electronic; a [*statmech.DomainError] for a number out of its range.
func New(d Description) (*Molecule, error) {
	m := &Molecule{d: d, pressure: d.Pressure, reference: d.Reference}
	if m.pressure == 0 {
		m.pressure = unit.Bar
	}
	if m.reference == 0 {
		m.reference = 298.15 * unit.K
	}
	for _, step := range []func() error{m.checkBasis, m.addTranslation, m.addDiatomic, m.addRotation, m.addVibrations, m.addElectronic} {
		if err := step(); err != nil {
			return nil, m.wrap(err)
		}
	}
	if d.MirrorForms {
		m.add("mirror forms", "two forms of equal energy", constant(math.Ln2))
	}
	m.note(fmt.Sprintf("p° = %s, T_ref = %s", pressureText(m.pressure), m.reference))
	if m.pressure == unit.Atm {
		m.note("at 1 atm the entropy is 0.10944 J/(mol K) less than at 1 bar")
	}
	return m, nil
}

func (m *Molecule) wrap(err error) error {
	name := m.d.Name
	if name == "" {
		name = m.d.Formula
	}
	if name == "" {
		return fmt.Errorf("gas.New: %w", err)
	}
	return fmt.Errorf("gas.New: %s: %w", name, err)
}

func (m *Molecule) add(name, method string, mode statmech.Mode) {
	m.parts = append(m.parts, Part{name, method, mode})
}

func (m *Molecule) note(s string) { m.notes = append(m.notes, s) }

func (m *Molecule) warn(s string) { m.warnings = append(m.warnings, s) }

func positive(arg string, x unit.Quantity) error {
	if v := x.SI(); !(v > 0) || math.IsInf(v, 1) {
		return &statmech.DomainError{Func: "gas.New", Arg: arg, Value: x.String(), Want: "positive and finite"}
	}
	return nil
}

// pressureText returns a pressure in bar or atm where that is a round number.
func pressureText(p unit.Pressure) string {
	if p == unit.Atm {
		return "1 atm (101325 Pa)"
	}
	return fmt.Sprintf("%.6g bar", p.In(unit.Bar))
}

// stretching is the factor 1 + ρT of centrifugal stretching to first order (E.
// B. Wilson, J. Chem. Phys. 4, 526, 1936).
type stretching float64

func (s stretching) Reduced(T unit.Temperature) statmech.Reduced {
	statmech.CheckTemperature("gas.stretching.Reduced", T)
	x := float64(s) * float64(T)
	u := x / (1 + x)
	// U = T ∂ln(1+ρT)/∂T, C = ∂(TU)/∂T.
	return statmech.Reduced{LogQ: math.Log1p(x), U: u, C: u * (2 - u)}
}

// constant is a mode that adds a fixed number of states.
type constant float64

func (c constant) Reduced(unit.Temperature) statmech.Reduced {
	return statmech.Reduced{LogQ: float64(c)}
}

// Name returns the name of the description, or its formula.
func (m *Molecule) Name() string {
	if m.d.Name != "" {
		return m.d.Name
	}
	return m.d.Formula
}

// Description returns what the molecule was made from, with constants that
// followed from a geometry filled in.
func (m *Molecule) Description() Description { return m.d }

// Formula returns what the molecule is made of.
func (m *Molecule) Formula() Formula { return m.formula }

// Mass returns the mass of one molecule.
func (m *Molecule) Mass() unit.Mass { return m.mass }

// Pressure returns p°.
func (m *Molecule) Pressure() unit.Pressure { return m.pressure }

// Parts returns the contributions.
func (m *Molecule) Parts() []Part { return append([]Part(nil), m.parts...) }

// Part returns the contribution whose name begins with name, nil for none.
func (m *Molecule) Part(name string) statmech.Mode {
	for _, p := range m.parts {
		if strings.HasPrefix(p.Name, name) {
			return p.Mode
		}
	}
	return nil
}

// Notes says how the molecule was understood: conventions, methods, sources.
func (m *Molecule) Notes() []string {
	n := append([]string(nil), m.notes...)
	for _, s := range m.d.Sources {
		n = append(n, "source: "+s)
	}
	return n
}

// Warnings returns what a reader of results at T must know, nil if nothing.
func (m *Molecule) Warnings(T unit.Temperature) []string {
	w := append([]string(nil), m.warnings...)
	for _, p := range m.parts {
		w = append(w, modeWarnings(p.Mode, T)...)
	}
	if m.Reduced(T).Entropy() < 0 {
		w = append(w, "at "+T.String()+" the entropy is negative: the ideal gas does not hold there")
	}
	return w
}

func modeWarnings(mode statmech.Mode, T unit.Temperature) []string {
	switch x := mode.(type) {
	case interface {
		Warnings(unit.Temperature) []string
	}:
		return x.Warnings(T)
	case statmech.Sum:
		var w []string
		for _, y := range x {
			w = append(w, modeWarnings(y, T)...)
		}
		return w
	case statmech.Times:
		return modeWarnings(x.Mode, T)
	}
	return nil
}

// At returns the same molecule at another pressure.
func (m *Molecule) At(p unit.Pressure) (*Molecule, error) {
	d := m.d
	d.Pressure = p
	return New(d)
}
