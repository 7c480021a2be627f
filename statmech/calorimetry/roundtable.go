package calorimetry

import (
	"fmt"

	"levelsum/display"
	"levelsum/statmech/data"
	"levelsum/statmech/uncertain"
	"levelsum/statmech/unit"
)

// RoundTemperatures returns the round temperatures of a path: steps of 1 K to
// 10 K, of 5 K to 50 K, of 10 K to 300 K, of 50 K above, and 273.15 K and
// 298.15 K.
func (p *Path) RoundTemperatures() []unit.Temperature {
	var out []unit.Temperature
	first, last := p.pieces[0].t[0], p.last()
	T := 1.0
	for T <= last {
		if T >= first {
			out = append(out, unit.Temperature(T))
		}
		step := 50.0
		switch {
		case T < 10:
			step = 1
		case T < 50:
			step = 5
		case T < 300:
			step = 10
		}
		for _, extra := range []float64{273.15, 298.15} {
			if T < extra && extra < T+step && extra >= first && extra <= last {
				out = append(out, unit.Temperature(extra))
			}
		}
		T += step
	}
	return out
}

// A RoundTable holds the thermodynamic functions at chosen temperatures.
type RoundTable struct {
	T             []unit.Temperature
	HeatCapacity  []uncertain.Quantity // Cp, J/(mol K)
	Entropy       []uncertain.Quantity // S, J/(mol K)
	Enthalpy      []uncertain.Quantity // H(T) - H(0), J/mol
	GibbsFunction []uncertain.Quantity // -(G - H(0))/T, J/(mol K)
	notes         []string
	name          string
}

// RoundTable returns the thermodynamic functions at the temperatures, or at
// [Path.RoundTemperatures] if none are given.
func (p *Path) RoundTable(ts ...unit.Temperature) *RoundTable {
	if len(ts) == 0 {
		ts = p.RoundTemperatures()
	}
	r := &RoundTable{T: ts, name: p.Name}
	for _, T := range ts {
		s, h := p.Entropy(T), p.Enthalpy(T)
		r.HeatCapacity = append(r.HeatCapacity, p.HeatCapacity(T))
		r.Entropy = append(r.Entropy, s)
		r.Enthalpy = append(r.Enthalpy, h)
		r.GibbsFunction = append(r.GibbsFunction, s.Minus(h.Scale(1/float64(T))).WithUnit("J/(mol K)"))
	}
	r.notes = []string{zero(p)}
	for _, pc := range p.pieces {
		if pc.note != "" {
			r.notes = append(r.notes, pc.note)
		}
	}
	if len(ts) > 0 {
		for _, n := range p.Notes(ts[len(ts)-1]) {
			r.notes = append(r.notes, "warning: "+n)
		}
	}
	return r
}

// View shows the table.
func (r *RoundTable) View() display.View {
	return display.Table{
		Caption: fmt.Sprintf("thermodynamic functions, %s", r.name),
		Columns: []display.Column{
			{Quantity: "T", Values: r.T},
			{Quantity: "C_p", Values: r.HeatCapacity},
			{Quantity: "S", Values: r.Entropy},
			{Quantity: "H(T)-H(0)", Values: r.Enthalpy},
			{Quantity: "-(G-H(0))/T", Values: r.GibbsFunction},
		},
		Notes: r.notes,
		Limit: 400,
	}.View()
}

// Data returns the table as a data table at full precision, to be saved or
// read again: T, Cp, S, H = H(T) - H(0) and the Gibbs function with their
// standard uncertainties where there are any.
func (r *RoundTable) Data() (*data.Table, error) {
	ts := make([]float64, len(r.T))
	for i, T := range r.T {
		ts[i] = float64(T)
	}
	var columns []data.Column
	add := func(symbol, unitText string, values []float64) error {
		c, err := data.NewColumn(symbol, unitText, values)
		columns = append(columns, c)
		return err
	}
	if err := add("T", "K", ts); err != nil {
		return nil, err
	}
	for _, c := range []struct {
		symbol, unit string
		qs           []uncertain.Quantity
	}{{"Cp", "J K-1 mol-1", r.HeatCapacity}, {"S", "J K-1 mol-1", r.Entropy}, {"H", "J mol-1", r.Enthalpy}, {"-(G-H)/T", "J K-1 mol-1", r.GibbsFunction}} {
		values, us, known := make([]float64, len(c.qs)), make([]float64, len(c.qs)), true
		for i, q := range c.qs {
			values[i] = q.Value()
			if q.Withheld() != "" {
				known = false
				continue
			}
			us[i] = q.StandardUncertainty()
		}
		if err := add(c.symbol, c.unit, values); err != nil {
			return nil, err
		}
		if known {
			if err := add("u("+c.symbol+")", c.unit, us); err != nil {
				return nil, err
			}
		}
	}
	notes := []data.Note{{Key: "title", Value: "thermodynamic functions, " + r.name}, {Key: "coverage of u", Value: "k=1"}}
	for _, n := range r.notes {
		notes = append(notes, data.Note{Key: "note", Value: n})
	}
	return data.New(r.name, notes, columns...)
}
