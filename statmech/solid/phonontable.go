package solid

import (
	"fmt"

	"levelsum/statmech/data"
	"levelsum/statmech/unit"
)

// PhononsFrom makes a crystal of two columns of a data table: the axis, a
// frequency ("nu / THz"), an angular frequency ("omega / (rad ps-1)"), a
// wavenumber ("nu / cm-1") or an energy ("E / meV"), and the density, whose
// unit must be the inverse of the same kind, per cell or not ("g / (THz-1
// cell-1)"). Errors are those of [NewPhonons], and one that names the column if
// it has another kind of unit.
func PhononsFrom(t *data.Table, axis, density string, integral Normalisation, atomsPerCell, atomsPerFormula int) (*Phonons, error) {
	x, err := t.Column(axis)
	if err != nil {
		return nil, err
	}
	g, err := t.Column(density)
	if err != nil {
		return nil, err
	}
	dim := x.Unit.Dim
	var per unit.Energy // the SI unit of the axis
	angular := unit.Dimension{Angle: 1, Time: -1}
	switch {
	case x.Unit.Kind == unit.KindFrequency:
		per = unit.HzEnergy
	case x.Unit.Kind == unit.KindWavenumber:
		per = unit.PerCm / 100
	case x.Unit.Kind == unit.KindEnergy:
		per = unit.J
	case dim == angular:
		per = unit.ReducedPlanck
	default:
		return nil, fmt.Errorf("solid: PhononsFrom: %s: column %s / %s is a %v, want a frequency, an angular frequency, a wavenumber or an energy", t.Name, axis, x.Unit.Symbol, x.Unit.Kind)
	}
	want := unit.Dimension{Length: -dim.Length, Mass: -dim.Mass, Time: -dim.Time, Angle: -dim.Angle}
	have := g.Unit.Dim
	have.Cell = 0
	if have != want {
		return nil, fmt.Errorf("solid: PhononsFrom: %s: column %s / %s, want states per %s, such as %s-1 or %s-1 cell-1", t.Name, density, g.Unit.Symbol, x.Unit.Symbol, x.Unit.Symbol, x.Unit.Symbol)
	}
	if g.Unit.Dim.Cell == -1 && integral != IntegralCellModes {
		return nil, fmt.Errorf("solid: PhononsFrom: %s: column %s / %s is per cell, want IntegralCellModes", t.Name, density, g.Unit.Symbol)
	}
	for i := range x.Values {
		if x.Missing != nil && x.Missing[i] || g.Missing != nil && g.Missing[i] {
			return nil, fmt.Errorf("solid: PhononsFrom: %s: row %d of %s or %s is empty", t.Name, i+1, axis, density)
		}
	}
	table := PhononTable{States: g.Values, Per: per, Integral: integral, AtomsPerCell: atomsPerCell, AtomsPerFormula: atomsPerFormula}
	for _, v := range x.Values {
		table.Energies = append(table.Energies, unit.Energy(v)*per)
	}
	p, err := NewPhonons(table)
	if err != nil {
		return nil, fmt.Errorf("%s: %w", t.Name, err)
	}
	return p, nil
}
