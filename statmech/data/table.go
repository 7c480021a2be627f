package data

import (
	"fmt"
	"math"
	"strconv"
	"strings"
	"sync"

	"levelsum/statmech/uncertain"
	"levelsum/statmech/unit"
)

// A Table is a file's numbers with their units, and what the file says about
// them.
type Table struct {
	Name     string   // of the file
	Notes    []Note   // the "# key: value" lines, in order
	Columns  []Column // all columns, in order
	Warnings []string
	Readings []string // what was taken as meant: conversions, coverage factor, decimal comma
	SHA256   string   // of the file as it is stored, in hexadecimal

	// The columns of a heat-capacity table, nil where there is none. U is the
	// standard uncertainty of Cp, all parts together; URandom and UCommon are
	// the two parts if they are given apart. UT is that of T.
	T       []unit.Temperature
	UT      []unit.TemperatureDifference
	Cp      []unit.MolarEntropy
	U       []unit.MolarEntropy
	URandom []unit.MolarEntropy
	UCommon []unit.MolarEntropy

	shared *shared
}

// shared is what tables made from one file have in common.
type shared struct {
	once sync.Once
	e    uncertain.Quantity
}

// CommonError returns the error that all rows share, in units of its standard
// uncertainty: 0 ± 1. Whatever is computed from the table, or from a part of
// it, uses this one input, so that a calibration error counts once in a fit
// and an integral together.
func (t *Table) CommonError() uncertain.Quantity {
	t.shared.once.Do(func() { t.shared.e = uncertain.Common("common error of "+t.Name, 1) })
	return t.shared.e
}

// AsCommon returns the table with the uncertainties of Cp read as one error
// common to all rows, as the accuracy bound of a smoothed table is.
func (t *Table) AsCommon() (*Table, error) {
	if t.U == nil || t.URandom != nil || t.UCommon != nil {
		return nil, fmt.Errorf("data: %s: AsCommon needs a column u(Cp) and no u_r(Cp) or u_c(Cp)", t.Name)
	}
	c := *t
	c.Columns = append([]Column(nil), t.Columns...)
	for k := range c.Columns {
		if heatCapacity[c.Columns[k].of] {
			c.Columns[k].part = 'c'
			c.Columns[k].Symbol = "u_c(" + c.Columns[k].of + ")"
		}
	}
	c.Readings = append(append([]string(nil), t.Readings...), "u(Cp) was declared common to all rows")
	c.assign()
	return &c, nil
}

// A Note is one "# key: value" line.
type Note struct{ Key, Value string }

// A Column is one column of a table.
type Column struct {
	Symbol  string // "Cp", "u_r(Cp)"
	Unit    unit.Unit
	Values  []float64 // in SI; for an uncertainty in per cent, in the SI unit of its quantity
	Missing []bool    // rows where the cell is empty (the value is then 0), nil if none
	Text    []string  // of a column of text; Values is then nil

	raw      []float64 // as written in the file, in Unit
	relative bool      // raw is relative to the quantity of of
	of       string    // the quantity whose uncertainty this is, or ""
	part     byte      // 'r', 'c' or 0 for u_r, u_c and u
	bare     bool      // a count or text without unit in the header
}

// Len returns the number of rows.
func (t *Table) Len() int {
	if len(t.Columns) == 0 {
		return 0
	}
	return t.Columns[0].len()
}

func (c *Column) len() int {
	if c.Text != nil {
		return len(c.Text)
	}
	return len(c.Values)
}

// Provenance returns what identifies the data in a report: the file's name, the
// number of rows and the SHA-256 of the file.
func (t *Table) Provenance() string {
	if t.SHA256 == "" {
		return fmt.Sprintf("%s, %d rows, not as read from a file", t.Name, t.Len())
	}
	return fmt.Sprintf("%s, %d rows, SHA-256 %s", t.Name, t.Len(), t.SHA256)
}

// Column returns the column of that symbol.
func (t *Table) Column(symbol string) (Column, error) {
	var have []string
	for _, c := range t.Columns {
		if c.Symbol == symbol {
			return c, nil
		}
		have = append(have, c.Symbol)
	}
	return Column{}, fmt.Errorf("data: %s: no column %q; there are %s", t.Name, symbol, strings.Join(have, ", "))
}

// Has reports whether there is a column of that symbol.
func (t *Table) Has(symbol string) bool {
	_, err := t.Column(symbol)
	return err == nil
}

// Note returns the value of a "# key: value" line, "" if there is none. A key
// with a unit, as in "mass/g: 12.3", is found by its whole text.
func (t *Table) Note(key string) string {
	for _, n := range t.Notes {
		if strings.EqualFold(n.Key, key) {
			return n.Value
		}
	}
	return ""
}

// Number returns the number in a "# quantity/unit: value" line in SI.
func (t *Table) Number(quantity string) (float64, unit.Unit, error) {
	for _, n := range t.Notes {
		name, u, err := unit.ParseHeader(n.Key)
		if name != quantity && n.Key != quantity {
			continue
		}
		if err != nil {
			return 0, u, fmt.Errorf("data: %s: # %s: %w", t.Name, n.Key, err)
		}
		x, err := strconv.ParseFloat(n.Value, 64)
		if err != nil || math.IsInf(x, 0) || math.IsNaN(x) {
			return 0, u, fmt.Errorf("data: %s: # %s: %q is not a number", t.Name, n.Key, n.Value)
		}
		return u.SI(x), u, nil
	}
	return 0, unit.Unit{}, fmt.Errorf("data: %s: no line \"# %s/unit: value\"", t.Name, quantity)
}

// Select returns a table of the rows that keep accepts, numbered from 0.
func (t *Table) Select(keep func(row int) bool) *Table {
	var rows []int
	for i := range t.Len() {
		if keep(i) {
			rows = append(rows, i)
		}
	}
	s := *t
	s.Columns = make([]Column, len(t.Columns))
	for k, c := range t.Columns {
		c.Values, c.raw, c.Missing, c.Text = pick(c.Values, rows), pick(c.raw, rows), pick(c.Missing, rows), pick(c.Text, rows)
		s.Columns[k] = c
	}
	s.Warnings = nil
	s.assign()
	s.inspect()
	return &s
}

// Within returns a table of the rows with from <= T <= to.
func (t *Table) Within(from, to unit.Temperature) *Table {
	return t.Select(func(i int) bool { return len(t.T) > 0 && t.T[i] >= from && t.T[i] <= to })
}

func pick[E any](xs []E, rows []int) []E {
	if xs == nil {
		return nil
	}
	out := make([]E, len(rows))
	for i, r := range rows {
		out[i] = xs[r]
	}
	return out
}

// NewColumn returns a column of numbers given in the unit, for [New]. A symbol
// u(X), u_r(X) or u_c(X) is an uncertainty of column X.
func NewColumn(symbol, unitText string, values []float64) (Column, error) {
	u, err := unit.Parse(unitText)
	if err != nil {
		return Column{}, fmt.Errorf("data: column %q: %w", symbol, err)
	}
	c := Column{Symbol: symbol, Unit: u, raw: append([]float64(nil), values...)}
	c.of, c.part = uncertaintyOf(symbol)
	return c, nil
}

// NewText returns a column of text for [New].
func NewText(symbol string, text []string) Column {
	return Column{Symbol: symbol, Text: append([]string{}, text...), bare: true}
}

// New returns a table made in a program, checked like one that was read.
func New(name string, notes []Note, columns ...Column) (*Table, error) {
	t := &Table{Name: name, Notes: append([]Note(nil), notes...), Columns: append([]Column(nil), columns...)}
	p := &problems{file: name}
	n := -1
	for i := range t.Columns {
		c := &t.Columns[i]
		length := max(len(c.raw), len(c.Text))
		if n < 0 {
			n = length
		}
		if length != n {
			p.add(0, 0, c.Symbol, "%d rows, the first column has %d", length, n)
		}
	}
	if n <= 0 {
		p.add(0, 0, "", "no rows")
	}
	if p.empty() {
		t.convert(p, nil)
	}
	if err := p.err(); err != nil {
		return nil, err
	}
	t.assign()
	t.inspect()
	return t, nil
}

// uncertaintyOf splits u(X), u_r(X) and u_c(X).
func uncertaintyOf(symbol string) (of string, part byte) {
	if !strings.HasSuffix(symbol, ")") {
		return "", 0
	}
	for _, f := range []struct {
		prefix string
		part   byte
	}{{"u(", 0}, {"u_r(", 'r'}, {"u_c(", 'c'}} {
		if strings.HasPrefix(symbol, f.prefix) {
			return symbol[len(f.prefix) : len(symbol)-1], f.part
		}
	}
	return "", 0
}
