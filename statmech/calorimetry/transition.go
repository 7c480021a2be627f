package calorimetry

import (
	"fmt"
	"math"
	"strings"

	"levelsum/statmech/data"
	"levelsum/statmech/uncertain"
	"levelsum/statmech/unit"
)

// A Transition of first order takes up heat at one temperature: a change of
// phase, melting, vaporisation. ΔS = ΔH/T.
type Transition struct {
	Name     string
	T        unit.Temperature
	UT       unit.TemperatureDifference // standard uncertainty of T
	Enthalpy unit.MolarEnergy
	U        unit.MolarEnergy // standard uncertainty of Enthalpy
}

func (t Transition) check() error {
	bad := func(what string, v any, want string) error {
		return fmt.Errorf("calorimetry: transition %q: %s = %v, want %s", t.Name, what, v, want)
	}
	switch {
	case !(t.T > 0) || math.IsInf(float64(t.T), 1):
		return bad("T", t.T, "positive and finite")
	case !(t.UT >= 0) || math.IsInf(float64(t.UT), 1):
		return bad("UT", t.UT, "not negative and finite")
	case !(t.Enthalpy > 0) || math.IsInf(float64(t.Enthalpy), 1):
		return bad("Enthalpy", t.Enthalpy, "positive and finite: heat is taken up on warming")
	case !(t.U >= 0) || math.IsInf(float64(t.U), 1):
		return bad("U", t.U, "not negative and finite")
	}
	return nil
}

func (t Transition) jump() jump {
	name := t.Name
	if name == "" {
		name = "transition"
	}
	h := uncertain.Measured(float64(t.Enthalpy), float64(t.U)).Named("ΔH of " + name).WithUnit("J/mol")
	T := uncertain.Measured(float64(t.T), float64(t.UT)).Named("T of " + name).WithUnit("K")
	return jump{name: name, t: float64(t.T), s: h.Over(T), h: h}
}

// Entropy returns ΔH/T with its standard uncertainty, in J/(mol K).
func (t Transition) Entropy() uncertain.Quantity {
	if err := t.check(); err != nil {
		panic(err)
	}
	return t.jump().s.WithUnit("J/(mol K)")
}

// Transitions reads first-order transitions from a table with the columns name,
// T, u(T), dH (or ΔH) and u(dH); a column "kind" may say first-order,
// melting, boiling or the like, and lambda or glass transitions are refused,
// since they have no heat at one temperature (see [ExcessOver]).
func Transitions(file *data.Table) ([]Transition, error) {
	bad := func(format string, args ...any) ([]Transition, error) {
		return nil, fmt.Errorf("calorimetry: Transitions: %s: %s", file.Name, fmt.Sprintf(format, args...))
	}
	if len(file.T) == 0 {
		return bad("no column T")
	}
	h, err := file.Column("dH")
	if err != nil {
		if h, err = file.Column("ΔH"); err != nil {
			return bad("no column dH")
		}
	}
	if h.Unit.Kind != unit.KindMolarEnergy {
		return bad("column %s is in %q, a unit of %s; want an enthalpy per mole", h.Symbol, h.Unit.Symbol, h.Unit.Kind)
	}
	u := columnOr(file, "u("+h.Symbol+")")
	name, nameErr := file.Column("name")
	kind, kindErr := file.Column("kind")
	out := make([]Transition, len(file.T))
	for i, T := range file.T {
		t := Transition{T: T, Enthalpy: unit.MolarEnergy(h.Values[i]), U: unit.MolarEnergy(at(u, i, 0))}
		if file.UT != nil {
			t.UT = file.UT[i]
		}
		if nameErr == nil && name.Text != nil {
			t.Name = name.Text[i]
		}
		if kindErr == nil && kind.Text != nil {
			switch k := strings.ToLower(kind.Text[i]); {
			case strings.HasPrefix(k, "lambda"), strings.HasPrefix(k, "λ"), strings.HasPrefix(k, "glass"), strings.HasPrefix(k, "second"):
				return bad("row %d: a transition of the kind %q has no heat at one temperature; integrate the anomaly over a baseline", i+1, kind.Text[i])
			}
		}
		if err := t.check(); err != nil {
			return bad("row %d: %v", i+1, err)
		}
		out[i] = t
	}
	return out, nil
}
