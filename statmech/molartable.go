package statmech

import (
	"fmt"

	"levelsum/display"
	"levelsum/statmech/unit"
)

// Table returns the molar functions on a grid, with the basis as a note: heat
// capacity, entropy, energy above the ground level, the Gibbs energy function
// from 0 K and, if Reference is set, the two from the reference temperature.
//
// It panics with a [*DomainError] if a temperature is not positive and finite.
func (m Molar) Table(ts []unit.Temperature) display.Table {
	c, e, g := "C_{V}", "U", "A"
	if m.Pressure > 0 {
		c, e, g = "C_{p}°", "H°", "G°"
	}
	n := len(ts)
	C, S, G := make([]unit.MolarEntropy, n), make([]unit.MolarEntropy, n), make([]unit.MolarEntropy, n)
	H := make([]unit.MolarEnergy, n)
	for i, T := range ts {
		CheckTemperature("statmech.Molar.Table", T)
		H[i] = 0
	}
	for i, r := range ReducedAt(m.Mode, ts) {
		C[i], S[i], G[i] = unit.MolarEntropy(r.C)*unit.R, unit.MolarEntropy(r.Entropy())*unit.R, unit.MolarEntropy(r.LogQ)*unit.R
		H[i] = (unit.MolarEntropy(r.U) * unit.R).Times(ts[i])
	}
	t := display.Table{
		Columns: []display.Column{
			{Quantity: "T", Values: ts}, {Quantity: c, Values: C}, {Quantity: "S", Values: S},
			{Quantity: fmt.Sprintf("%s-%s(0)", e, e), Unit: "kJ/mol", In: unit.MolarKJ, Values: H},
			{Quantity: fmt.Sprintf("-[%s-%s(0)]/T", g, e), Values: G},
		},
		Notes: []string{m.Basis(), "constants: " + unit.ConstantsSource},
	}
	if m.Reference > 0 {
		ref := m.Increment(m.Reference)
		HR, GR := make([]unit.MolarEnergy, n), make([]unit.MolarEntropy, n)
		for i, T := range ts {
			HR[i], GR[i] = H[i]-ref, G[i]+ref.Over(T)
		}
		at := fmt.Sprintf("%g K", float64(m.Reference))
		t.Columns = append(t.Columns,
			display.Column{Quantity: fmt.Sprintf("%s-%s(%s)", e, e, at), Unit: "kJ/mol", In: unit.MolarKJ, Values: HR},
			display.Column{Quantity: fmt.Sprintf("-[%s-%s(%s)]/T", g, e, at), Values: GR})
	}
	return t
}
