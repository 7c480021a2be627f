package calorimetry

import (
	"fmt"
	"math"

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
