package statmech

import (
	"fmt"
	"math"
	"strings"

	"levelsum/statmech/unit"
)

// Molar gives the molar functions of a mode per mole of what Per names, with
// the pressure and the reference temperature they refer to.
//
// For a mode whose translation is at fixed pressure (Pressure > 0) the energy
// functions are enthalpies and the heat capacity is Cp; otherwise they are
// internal energies and C_V. Increments are counted from the ground level:
// Increment is H(T)-H(0) or U(T)-U(0).
type Molar struct {
	Mode      Mode
	Per       string           // "mol of N2", "mol of Al2O3 (5 atoms)"
	Pressure  unit.Pressure    // p° of the translation in Mode, 0 for none
	Reference unit.Temperature // T_ref of the increments, 0 for none
}

// HeatCapacity returns the molar heat capacity R C/k at T.
func (m Molar) HeatCapacity(T unit.Temperature) unit.MolarEntropy {
	return unit.MolarEntropy(m.Mode.Reduced(T).C) * unit.R
}

// HeatCapacities returns the molar heat capacity at each temperature.
func (m Molar) HeatCapacities(ts []unit.Temperature) []unit.MolarEntropy {
	return m.each(ts, func(_ unit.Temperature, r Reduced) float64 { return r.C })
}

// Entropy returns the molar entropy R (ln q + U/kT) at T.
func (m Molar) Entropy(T unit.Temperature) unit.MolarEntropy {
	return unit.MolarEntropy(m.Mode.Reduced(T).Entropy()) * unit.R
}

// Entropies returns the molar entropy at each temperature.
func (m Molar) Entropies(ts []unit.Temperature) []unit.MolarEntropy {
	return m.each(ts, func(_ unit.Temperature, r Reduced) float64 { return r.Entropy() })
}

// Increment returns the molar energy above the ground level at T, H(T)-H(0) or
// U(T)-U(0).
func (m Molar) Increment(T unit.Temperature) unit.MolarEnergy {
	return (unit.MolarEntropy(m.Mode.Reduced(T).U) * unit.R).Times(T)
}

// Increments returns Increment at each temperature.
func (m Molar) Increments(ts []unit.Temperature) []unit.MolarEnergy {
	out := make([]unit.MolarEnergy, len(ts))
	for i, r := range ReducedAt(m.Mode, ts) {
		out[i] = (unit.MolarEntropy(r.U) * unit.R).Times(ts[i])
	}
	return out
}

// IncrementFromReference returns H(T)-H(T_ref) or U(T)-U(T_ref). It panics
// with a [*DomainError] if Reference is not set.
func (m Molar) IncrementFromReference(T unit.Temperature) unit.MolarEnergy {
	m.checkReference("statmech.Molar.IncrementFromReference")
	return m.Increment(T) - m.Increment(m.Reference)
}

// IncrementsFromReference returns IncrementFromReference at each temperature.
func (m Molar) IncrementsFromReference(ts []unit.Temperature) []unit.MolarEnergy {
	m.checkReference("statmech.Molar.IncrementsFromReference")
	out := m.Increments(ts)
	ref := m.Increment(m.Reference)
	for i := range out {
		out[i] -= ref
	}
	return out
}

// GibbsFunctionFromZero returns -(G(T)-H(0))/T = R ln q for a gas at fixed
// pressure, -(A(T)-U(0))/T without one.
func (m Molar) GibbsFunctionFromZero(T unit.Temperature) unit.MolarEntropy {
	return unit.MolarEntropy(m.Mode.Reduced(T).LogQ) * unit.R
}

// GibbsFunctionsFromZero returns GibbsFunctionFromZero at each temperature.
func (m Molar) GibbsFunctionsFromZero(ts []unit.Temperature) []unit.MolarEntropy {
	return m.each(ts, func(_ unit.Temperature, r Reduced) float64 { return r.LogQ })
}

// GibbsFunctionFromReference returns -(G(T)-H(T_ref))/T, or the same with A
// and U. It panics with a [*DomainError] if Reference is not set.
func (m Molar) GibbsFunctionFromReference(T unit.Temperature) unit.MolarEntropy {
	m.checkReference("statmech.Molar.GibbsFunctionFromReference")
	return m.GibbsFunctionFromZero(T) + m.Increment(m.Reference).Over(T)
}

// GibbsFunctionsFromReference returns GibbsFunctionFromReference at each
// temperature.
func (m Molar) GibbsFunctionsFromReference(ts []unit.Temperature) []unit.MolarEntropy {
	m.checkReference("statmech.Molar.GibbsFunctionsFromReference")
	out := m.GibbsFunctionsFromZero(ts)
	ref := m.Increment(m.Reference)
	for i, T := range ts {
		out[i] += ref.Over(T)
	}
	return out
}

func (m Molar) each(ts []unit.Temperature, f func(unit.Temperature, Reduced) float64) []unit.MolarEntropy {
	out := make([]unit.MolarEntropy, len(ts))
	for i, r := range ReducedAt(m.Mode, ts) {
		out[i] = unit.MolarEntropy(f(ts[i], r)) * unit.R
	}
	return out
}

func (m Molar) checkReference(fn string) {
	if !(m.Reference > 0) || math.IsInf(float64(m.Reference), 1) {
		panic(&DomainError{fn, "Reference", m.Reference.String(), "a reference temperature, positive and finite"})
	}
}

// Basis says what the functions refer to, for the foot of a table.
func (m Molar) Basis() string {
	var b strings.Builder
	b.WriteString("per ")
	if m.Per == "" {
		b.WriteString("mol of what the mode describes")
	} else {
		b.WriteString(m.Per)
	}
	if m.Pressure > 0 {
		fmt.Fprintf(&b, "; p° = %s; Cp and H", m.Pressure)
	} else {
		b.WriteString("; C_V and U")
	}
	if m.Reference > 0 {
		fmt.Fprintf(&b, "; T_ref = %s", m.Reference)
	}
	return b.String()
}
