package data

import (
	"fmt"
	"math"
	"regexp"
	"strconv"
	"strings"

	"levelsum/statmech/unit"
)

// counts are columns of whole numbers that need no unit.
var counts = map[string]bool{"g": true, "J": true, "v": true, "n": true, "N": true, "i": true, "k": true,
	"step": true, "run": true, "point": true, "series": true, "index": true, "sweep": true}

// labels are columns that stay text even if a cell looks like a number.
var labels = map[string]bool{"name": true, "kind": true, "phase": true, "label": true, "sample": true, "treat": true,
	"substance": true, "material": true, "remark": true, "note": true, "source": true, "species": true, "dataset": true, "parameter": true}

// isNumeric reports whether s is a number in the form that files use, with a
// decimal point or a decimal comma.
func isNumeric(s string) bool {
	_, ok, _ := number(s)
	return ok
}

// number reads a decimal number. mark is the decimal separator in it, 0 if
// there is none. A Unicode minus counts as minus. Names of infinities and of
// not-a-number, hexadecimal forms and thousands separators are no numbers.
func number(s string) (x float64, ok bool, mark byte) {
	s = strings.ReplaceAll(s, "−", "-")
	digits := false
	for i := range len(s) {
		switch ch := s[i]; {
		case ch >= '0' && ch <= '9':
			digits = true
		case ch == '.' || ch == ',':
			if mark != 0 {
				return 0, false, 0
			}
			mark = ch
		case ch == '+' || ch == '-' || ch == 'e' || ch == 'E':
		default:
			return 0, false, 0
		}
	}
	if !digits {
		return 0, false, 0
	}
	if mark == ',' {
		s = strings.Replace(s, ",", ".", 1)
	}
	x, err := strconv.ParseFloat(s, 64)
	if err != nil || math.IsInf(x, 0) {
		return 0, false, 0
	}
	return x, true, mark
}

// cells fills the columns from the rows as they are written.
func (t *Table) cells(rows [][]string, lines []int, p *problems) {
	var point, comma, minus bool
	for k := range t.Columns {
		c := &t.Columns[k]
		if c.bare && t.textColumn(c, k, rows, lines, p) {
			continue
		}
		c.raw = make([]float64, len(rows))
		for i, row := range rows {
			cell := row[k]
			if cell == "" {
				if needed(c) {
					p.add(lines[i], i+1, c.Symbol, "an empty cell")
					continue
				}
				if c.Missing == nil {
					c.Missing = make([]bool, len(rows))
				}
				c.Missing[i] = true
				continue
			}
			x, ok, mark := number(cell)
			switch {
			case !ok:
				p.add(lines[i], i+1, c.Symbol, "%s is not a number", quote(cell))
				continue
			case mark == '.':
				point = true
			case mark == ',':
				comma = true
			}
			if point && comma {
				p.add(lines[i], i+1, c.Symbol, "%s: decimal points and decimal commas in one file", quote(cell))
				return
			}
			minus = minus || strings.Contains(cell, "−")
			if c.bare && x != math.Trunc(x) {
				p.add(lines[i], i+1, c.Symbol, "%s is not a whole number; a column without unit is a count, else write \"%s / unit\"", quote(cell), c.Symbol)
			}
			c.raw[i] = x
		}
	}
	if comma {
		t.Readings = append(t.Readings, "decimal commas")
	}
	if minus {
		t.Warnings = append(t.Warnings, "typographic minus signs were read as minus")
	}
}

// textColumn fills a column without unit if it is text; it reports false for a
// count, whose cells are then read as numbers.
func (t *Table) textColumn(c *Column, k int, rows [][]string, lines []int, p *problems) bool {
	numeric := 0
	for _, row := range rows {
		if isNumeric(row[k]) {
			numeric++
		}
	}
	if numeric > 0 && counts[c.Symbol] {
		c.Unit = unit.MustParse("1")
		return false
	}
	if numeric > 0 && !labels[c.Symbol] {
		p.add(p.head, 0, c.Symbol, "no unit; write %s", proposal(c.Symbol))
		return true
	}
	c.Text = make([]string, len(rows))
	for i, row := range rows {
		c.Text[i] = row[k]
	}
	return true
}

var bracketed = regexp.MustCompile(`^(.*\S)\s*[\[(](.+)[\])]$`)

// proposal says how a header without "quantity / unit" is to be written.
func proposal(symbol string) string {
	if m := bracketed.FindStringSubmatch(symbol); m != nil {
		if u, err := unit.Parse(m[2]); err == nil {
			return strconv.Quote(u.Header(m[1]))
		}
	}
	return fmt.Sprintf("\"%s / unit\" in the header, with / 1 for a pure number", symbol)
}

// needed reports whether every cell of the column must be filled.
func needed(c *Column) bool {
	name := c.Symbol
	if c.of != "" {
		name = c.of
	}
	return temperature[name] || heatCapacity[name] || name == "C"
}

// Names of the two quantities that a table has typed columns for.
var temperature = map[string]bool{"T": true, "Temperature": true, "temperature": true, "T90": true, "T_90": true}

var heatCapacity = map[string]bool{"Cp": true, "C_p": true, "Cp,m": true, "C_p,m": true}

func quote(s string) string {
	if r := []rune(s); len(r) > 40 {
		s = string(r[:40]) + "…"
	}
	return strconv.Quote(s)
}

// convert fills Values in SI and checks what can be checked cell by cell.
// lines are the line numbers of the rows, nil for a table made in a program.
func (t *Table) convert(p *problems, lines []int) {
	at := func(i int) int {
		if lines == nil {
			return 0
		}
		return lines[i]
	}
	coverage := t.coverage(p)
	byName := map[string]*Column{}
	for k := range t.Columns {
		c := &t.Columns[k]
		if prev := byName[c.Symbol]; prev != nil {
			p.add(0, 0, c.Symbol, "a column of this name is there twice")
			return
		}
		byName[c.Symbol] = c
	}
	for _, c := range t.Columns {
		if c.of != "" && c.part != 0 && byName["u("+c.of+")"] != nil {
			p.add(0, 0, "u("+c.of+")", "stands beside %s: is it the random part or the whole? write u_r(%s) and u_c(%s)", c.Symbol, c.of, c.of)
			return
		}
	}
	// Quantities first, their uncertainties after them.
	for k := range t.Columns {
		c := &t.Columns[k]
		if c.Text != nil || c.of != "" {
			continue
		}
		t.checkKind(c, p)
		c.Values = make([]float64, len(c.raw))
		for i, x := range c.raw {
			if c.Missing != nil && c.Missing[i] {
				continue
			}
			v := c.Unit.SI(x)
			switch {
			case math.IsNaN(v) || math.IsInf(v, 0):
				p.add(at(i), i+1, c.Symbol, "%g %s is not a finite number in SI", x, c.Unit.Symbol)
			case c.Unit.Kind == unit.KindTemperature && v <= 0:
				p.add(at(i), i+1, c.Symbol, "%g %s is not a positive temperature on the Kelvin scale", x, c.Unit.Symbol)
			}
			c.Values[i] = v
		}
	}
	if !p.empty() {
		return
	}
	for k := range t.Columns {
		c := &t.Columns[k]
		if c.of == "" || c.Text != nil {
			if c.of != "" {
				p.add(0, 0, c.Symbol, "an uncertainty without a unit, or without numbers")
			}
			continue
		}
		of := byName[c.of]
		if of == nil || of.Text != nil || of.of != "" {
			p.add(0, 0, c.Symbol, "an uncertainty of %q, but there is no such column of numbers", c.of)
			continue
		}
		t.convertUncertainty(c, of, coverage, at, p)
	}
	if p.empty() {
		t.perMole(p)
	}
}

// checkKind refuses a unit that cannot belong to a quantity whose symbol has
// one meaning here.
func (t *Table) checkKind(c *Column, p *problems) {
	switch {
	case temperature[c.Symbol] && c.Unit.Kind != unit.KindTemperature:
		p.add(0, 0, c.Symbol, "%q is a unit of %s, and %s is a temperature; energies become temperatures only by a call that says so", c.Unit.Symbol, c.Unit.Kind, c.Symbol)
	case heatCapacity[c.Symbol] && c.Unit.Kind != unit.KindMolarEntropy && c.Unit.Kind != unit.KindSpecificEntropy:
		p.add(0, 0, c.Symbol, "%q is a unit of %s, and %s is a molar or specific heat capacity (J K-1 mol-1, J K-1 g-1); the heat capacity of a whole sample is the column C", c.Unit.Symbol, c.Unit.Kind, c.Symbol)
	}
}

func (t *Table) convertUncertainty(c, of *Column, coverage float64, at func(int) int, p *problems) {
	same := c.Unit.Dim == of.Unit.Dim
	percent := c.Unit.Kind == unit.KindNumber && (c.Unit.Symbol != "1" || !same)
	switch {
	case percent:
		c.relative = true
		if of.Unit.Offset != 0 {
			p.add(0, 0, c.Symbol, "per cent of a temperature in %s has no meaning", of.Unit.Symbol)
			return
		}
	case !same:
		p.add(0, 0, c.Symbol, "%q is a unit of %s, and %s is in %s: want that unit, one of the same kind, or %%", c.Unit.Symbol, c.Unit.Kind, of.Symbol, of.Unit.Symbol)
		return
	}
	c.Values = make([]float64, len(c.raw))
	for i, x := range c.raw {
		if c.Missing != nil && c.Missing[i] {
			continue
		}
		if of.Missing != nil && of.Missing[i] {
			p.add(at(i), i+1, c.Symbol, "an uncertainty of an empty cell")
			continue
		}
		if x < 0 {
			p.add(at(i), i+1, c.Symbol, "%g: an uncertainty is not negative", x)
			continue
		}
		u := c.Unit.Factor * x / coverage // an uncertainty is a difference: no offset
		if c.relative {
			u *= math.Abs(of.Values[i])
		}
		if math.IsInf(u, 0) {
			p.add(at(i), i+1, c.Symbol, "%g %s is not a finite number in SI", x, c.Unit.Symbol)
		}
		c.Values[i] = u
	}
	if c.relative {
		t.Readings = append(t.Readings, c.Symbol+" is relative to "+of.Symbol)
	}
}

// coverageFactor is [Table.coverage] of a table that is known to be good.
func (t *Table) coverageFactor() float64 {
	c := *t
	c.Readings = nil
	return c.coverage(&problems{})
}

// coverage returns the factor by which the file's uncertainties are larger
// than standard uncertainties.
func (t *Table) coverage(p *problems) float64 {
	text := t.Note("coverage of u")
	if text == "" {
		for _, c := range t.Columns {
			if c.of != "" {
				t.Readings = append(t.Readings, "uncertainties taken as standard uncertainties, k = 1: the file does not say")
				break
			}
		}
		return 1
	}
	k := strings.ReplaceAll(text, " ", "")
	if k == "95%" || k == "95percent" {
		t.Readings = append(t.Readings, "uncertainties of 95 % coverage were divided by 2 (normal distribution taken)")
		return 2
	}
	x, ok, _ := number(strings.TrimPrefix(k, "k="))
	if !ok || !(x > 0) || x > 100 {
		p.add(0, 0, "", "# coverage of u: %s is not understood; write k=1, k=2 or 95 %%", quote(text))
		return 1
	}
	if x != 1 {
		t.Readings = append(t.Readings, "uncertainties with k = "+strconv.FormatFloat(x, 'g', -1, 64)+" were divided by it")
	}
	return x
}

// perMole turns specific heat capacities into molar ones with the molar mass
// that the file states.
func (t *Table) perMole(p *problems) {
	for k := range t.Columns {
		c := &t.Columns[k]
		if !heatCapacity[c.Symbol] || c.Unit.Kind != unit.KindSpecificEntropy {
			continue
		}
		M, u, err := t.Number("M")
		if err != nil || u.Kind != unit.KindMolarMass || !(M > 0) {
			p.add(0, 0, c.Symbol, "a heat capacity per mass needs the molar mass, as \"# M/(g mol-1): 150.23\"")
			return
		}
		t.Readings = append(t.Readings, c.Symbol+" per mass times M = "+strconv.FormatFloat(M*1e3, 'g', -1, 64)+" g/mol")
		for i := range c.Values {
			c.Values[i] *= M
		}
		for j := range t.Columns {
			if v := &t.Columns[j]; v.of == c.Symbol {
				for i := range v.Values {
					v.Values[i] *= M
				}
			}
		}
	}
}
