package calorimetry

import (
	"fmt"
	"math"

	"levelsum/display"
	"levelsum/statmech/uncertain"
	"levelsum/statmech/unit"
)

// View shows the contributions to the entropy at the end of the path.
func (p *Path) View() display.View { return p.Table(p.Last()).View() }

// A ContributionTable shows where an entropy comes from.
type ContributionTable struct {
	path *Path
	T    unit.Temperature
}

// Table returns the table of contributions to the entropy at T.
func (p *Path) Table(T unit.Temperature) ContributionTable {
	p.check("Table", T)
	return ContributionTable{p, T}
}

// View shows the table.
func (c ContributionTable) View() display.View {
	rows := [][]string{{"contribution", "from / K", "to / K", "ΔS / (J K-1 mol-1)", "share / %", "ΔH / (J mol-1)"}}
	total, h := c.path.Entropy(c.T), c.path.Enthalpy(c.T)
	for _, k := range c.path.Contributions(c.T) {
		rows = append(rows, []string{k.Name, kelvin(k.From), kelvin(k.To), short(k.Entropy), share(k.Entropy, total), short(k.Enthalpy)})
	}
	rows = append(rows, []string{"total", "", kelvin(c.T), short(total), share(total, total), short(h)})
	lines := []string{zero(c.path)}
	if total.Withheld() == "" && total.StandardUncertainty() > 0 {
		lines = append(lines, fmt.Sprintf("standard uncertainties (k = 1); u(S) random %.2g, common %.2g J/(mol K)", total.RandomPart(), total.CommonPart()))
	}
	if d := c.path.Interpolation(c.T); d != 0 {
		lines = append(lines, fmt.Sprintf("interpolating ln Cp in place of Cp changes S by %+.1g J/(mol K)", d))
	}
	if reason := total.Withheld(); reason != "" {
		lines = append(lines, "no standard uncertainties: "+reason)
	}
	for _, pc := range c.path.pieces {
		if pc.note != "" {
			lines = append(lines, pc.note)
		}
	}
	for _, n := range c.path.Notes(c.T) {
		lines = append(lines, "warning: "+n)
	}
	return view(fmt.Sprintf("entropy at %.6g K, %s", float64(c.T), c.path.Name), rows, lines)
}

func zero(p *Path) string {
	if p.low == nil {
		return fmt.Sprintf("counted from %v", p.First())
	}
	return "S(0) = 0 taken; nuclear spin and isotope mixing not included"
}

func kelvin(T unit.Temperature) string { return fmt.Sprintf("%.6g", float64(T)) }

// short writes a quantity without its unit.
func short(q uncertain.Quantity) string {
	if q.Withheld() == "" && q.StandardUncertainty() == 0 {
		return fmt.Sprintf("%.7g", q.Value())
	}
	if q.Withheld() != "" {
		return fmt.Sprintf("%.6g", q.Value())
	}
	return q.WithUnit("").String()
}

func share(part, total uncertain.Quantity) string {
	if total.Value() == 0 {
		return ""
	}
	s := 100 * part.Value() / total.Value()
	if math.Abs(s) < 0.1 {
		return fmt.Sprintf("%.2g", s)
	}
	return fmt.Sprintf("%.1f", s)
}

// view makes a table of rows, the first being the head, with lines below.
func view(title string, rows [][]string, lines []string) display.View {
	t := display.Table{Caption: title, Notes: lines, Limit: 400}
	for i, head := range rows[0] {
		cells := make([]string, 0, len(rows)-1)
		for _, r := range rows[1:] {
			cells = append(cells, r[i])
		}
		t.Columns = append(t.Columns, display.Column{Quantity: head, Values: cells})
	}
	return t.View()
}
