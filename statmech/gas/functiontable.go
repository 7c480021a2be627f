package gas

import (
	"fmt"
	"slices"

	"levelsum/display"
	"levelsum/statmech"
	"levelsum/statmech/unit"
)

// Table returns the standard functions on a grid, with standard uncertainties
// if the description has any, and p°, T_ref, method, spin convention, sources
// and warnings as notes. T_ref is put into the grid if it is not there. Its CSV
// has full precision.
//
// It panics with a [*statmech.DomainError] if a temperature is not positive and
// finite.
func (m *Molecule) Table(ts []unit.Temperature) display.Table {
	ts, added := withReference(ts, m.reference)
	n := len(ts)
	C, S, G := make([]unit.MolarEntropy, n), make([]unit.MolarEntropy, n), make([]unit.MolarEntropy, n)
	H0, HR := make([]unit.MolarEnergy, n), make([]unit.MolarEnergy, n)
	for i, e := range m.effects(ts) {
		C[i], S[i], G[i], H0[i], HR[i] = e.HeatCapacity, e.Entropy, e.GibbsFunction, e.Increment, e.FromReference
	}
	ref := fmt.Sprintf("%g K", float64(m.reference))
	columns := []display.Column{
		{Quantity: "T", Values: ts},
		{Quantity: "C_{p}°", Values: C, Digits: 7},
		{Quantity: "S°", Values: S, Digits: 7},
		{Quantity: "-[G°-H°(" + ref + ")]/T", Values: G, Digits: 7},
		{Quantity: "H°-H°(0)", Unit: "kJ/mol", In: unit.MolarKJ, Values: H0, Digits: 7},
		{Quantity: "H°-H°(" + ref + ")", Unit: "kJ/mol", In: unit.MolarKJ, Values: HR, Digits: 7},
	}
	notes := append([]string{"per " + m.Molar().Per, "constants: " + unit.ConstantsSource}, m.Notes()...)
	if added {
		notes = append(notes, "T_ref was put into the grid")
	}
	for _, p := range m.parts {
		notes = append(notes, p.Name+": "+p.Method)
	}
	us, err := m.Uncertainties(ts)
	if err != nil {
		notes = append(notes, "no uncertainties: "+err.Error())
	} else if us != nil {
		U := make([][]float64, 5)
		for _, u := range us {
			t := u.Total
			for k, x := range []float64{float64(t.HeatCapacity), float64(t.Entropy), float64(t.GibbsFunction), float64(t.Increment), float64(t.FromReference)} {
				U[k] = append(U[k], x)
			}
		}
		for k, us := range U {
			switch {
			case k < 3:
				columns[k+1].U = unit.MolarEntropies(us, unit.JPerMolK)
			default:
				columns[k+1].U = unit.MolarEnergies(us, unit.JPerMol)
			}
		}
		notes = append(notes, "uncertainties are those of the molecular constants, taken as independent; the error of the model is not in them")
	}
	notes = append(notes, m.softNotes(m.reference)...)
	return display.Table{Caption: "Standard functions of " + m.Name(), Columns: columns, Notes: append(notes, m.gridWarnings(ts)...)}
}

// softNotes compares low-frequency treatments with the harmonic value at T.
func (m *Molecule) softNotes(T unit.Temperature) []string {
	modes, _ := m.Part("vibration").(statmech.Sum)
	var out []string
	for _, mode := range modes {
		if times, ok := mode.(statmech.Times); ok {
			if s, ok := times.Mode.(SoftOscillator); ok {
				out = append(out, s.softNote(T))
			}
		}
	}
	return out
}

// gridWarnings returns the warnings at the ends of the grid, each once.
func (m *Molecule) gridWarnings(ts []unit.Temperature) []string {
	var out []string
	for _, T := range []unit.Temperature{ts[0], ts[len(ts)-1]} {
		for _, w := range m.Warnings(T) {
			if !slices.Contains(out, "warning: "+w) {
				out = append(out, "warning: "+w)
			}
		}
	}
	return out
}

// withReference returns the grid with T_ref in its place.
func withReference(ts []unit.Temperature, ref unit.Temperature) ([]unit.Temperature, bool) {
	for _, T := range ts {
		statmech.CheckTemperature("gas.Molecule.Table", T)
	}
	if slices.Contains(ts, ref) {
		return ts, false
	}
	ts = append(slices.Clone(ts), ref)
	slices.Sort(ts)
	return ts, true
}

// ContributionTable returns the shares of the parts at T and their sum.
func (m *Molecule) ContributionTable(T unit.Temperature) display.Table {
	var names, methods []string
	var S, C []unit.MolarEntropy
	var H []unit.MolarEnergy
	for _, c := range m.Contributions(T) {
		names, methods = append(names, c.Name), append(methods, c.Method)
		S, C, H = append(S, c.Entropy), append(C, c.HeatCapacity), append(H, c.Enthalpy)
	}
	names, methods = append(names, "sum"), append(methods, "")
	S, C, H = append(S, m.Entropy(T)), append(C, m.HeatCapacity(T)), append(H, m.EnthalpyIncrement(T))
	return display.Table{
		Caption: fmt.Sprintf("Contributions to the standard functions of %s at %s", m.Name(), T),
		Columns: []display.Column{
			{Quantity: "part", Values: names}, {Quantity: "S°", Values: S, Digits: 7}, {Quantity: "C_{p}°", Values: C, Digits: 7},
			{Quantity: "H°-H°(0)", Unit: "kJ/mol", In: unit.MolarKJ, Values: H, Digits: 7}, {Quantity: "method", Values: methods},
		},
		Notes: append(append([]string{"per " + m.Molar().Per}, m.Notes()...), m.softNotes(T)...),
	}
}

// View shows the standard functions from 100 K to 1000 K.
func (m *Molecule) View() display.View {
	var ts []unit.Temperature
	for T := 100 * unit.K; T <= 1000*unit.K; T += 100 * unit.K {
		ts = append(ts, T)
	}
	return m.Table(ts).View()
}
