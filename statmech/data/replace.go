package data

import (
	"fmt"
	"math"

	"levelsum/statmech/unit"
)

// Replace returns the table with new values of a column of numbers, given in
// SI. Uncertainties of the column keep their absolute size.
func (t *Table) Replace(symbol string, si []float64) (*Table, error) {
	k := -1
	for i, c := range t.Columns {
		if c.Symbol == symbol {
			k = i
		}
	}
	if k < 0 {
		_, err := t.Column(symbol)
		return nil, err
	}
	s := *t
	s.Columns = append([]Column(nil), t.Columns...)
	c := &s.Columns[k]
	if c.Text != nil {
		return nil, fmt.Errorf("data: %s: Replace: column %q is text", t.Name, symbol)
	}
	if len(si) != c.len() {
		return nil, fmt.Errorf("data: %s: Replace: %d values for %d rows", t.Name, len(si), c.len())
	}
	for i, v := range si {
		if math.IsNaN(v) || math.IsInf(v, 0) {
			return nil, fmt.Errorf("data: %s: Replace: row %d of %q: %g is not a finite number", t.Name, i+1, symbol, v)
		}
	}
	c.Values = append([]float64(nil), si...)
	s.rewrite(c)
	for i := range s.Columns {
		if s.Columns[i].of == symbol {
			s.rewrite(&s.Columns[i])
		}
	}
	s.SHA256 = "" // no longer the file's numbers
	s.Warnings = nil
	s.assign()
	s.inspect()
	return &s, nil
}

// ReplaceHeatCapacity returns the table with new heat capacities, in J/(mol K).
func (t *Table) ReplaceHeatCapacity(si []float64) (*Table, error) {
	for _, c := range t.Columns {
		if heatCapacity[c.Symbol] {
			return t.Replace(c.Symbol, si)
		}
	}
	return nil, fmt.Errorf("data: %s: no column of heat capacities", t.Name)
}

// WithNote returns the table with the value of a note set.
func (t *Table) WithNote(key, value string) *Table {
	s := *t
	s.Notes = append([]Note(nil), t.Notes...)
	s.Readings = append([]string(nil), t.Readings...)
	found := false
	for i := range s.Notes {
		if s.Notes[i].Key == key {
			s.Notes[i].Value, found = value, true
		}
	}
	if !found {
		s.Notes = append(s.Notes, Note{key, value})
	}
	s.Warnings = nil
	s.inspect()
	return &s
}

// rewrite recomputes what a column would be in a file from its SI values: in
// its unit, an uncertainty in per cent in that.
func (t *Table) rewrite(c *Column) {
	per := 1.0
	for _, q := range t.Columns {
		if q.Symbol == c.of || c.of == "" && q.Symbol == c.Symbol {
			per = t.fileFactor(q)
		}
	}
	coverage := 1.0
	if c.of != "" {
		coverage = t.coverageFactor()
	}
	raw := make([]float64, len(c.Values))
	for i, v := range c.Values {
		switch {
		case c.Missing != nil && c.Missing[i]:
		case c.relative:
			for _, q := range t.Columns {
				if q.Symbol == c.of && q.Values[i] != 0 {
					raw[i] = coverage * v / (math.Abs(q.Values[i]) * c.Unit.Factor)
				}
			}
		case c.of != "":
			raw[i] = coverage * v / (c.Unit.Factor * per)
		default:
			raw[i] = c.Unit.From(v / per)
		}
	}
	c.raw = raw
}

// fileFactor is what the SI values of a column were multiplied by beyond its
// unit: the molar mass for a heat capacity per mass.
func (t *Table) fileFactor(c Column) float64 {
	if heatCapacity[c.Symbol] && c.Unit.Kind == unit.KindSpecificEntropy {
		if M, _, err := t.Number("M"); err == nil {
			return M
		}
	}
	return 1
}
