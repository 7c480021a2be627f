package data

import (
	"fmt"
	"strconv"

	"levelsum/display"
)

// View shows what was understood: the columns with their units, meanings,
// rows, ranges and conversions to SI, then what was taken as meant, the
// warnings, the notes of the file and its SHA-256.
func (t *Table) View() display.View {
	rows := [][]string{{"column", "unit", "meaning", "rows", "from", "to", "to SI"}}
	for k := range t.Columns {
		c := &t.Columns[k]
		lo, hi := "", ""
		if a, b, ok := c.limits(); ok {
			lo, hi = strconv.FormatFloat(a, 'g', 6, 64), strconv.FormatFloat(b, 'g', 6, 64)
		}
		n := c.len()
		if c.Missing != nil {
			n -= countTrue(c.Missing)
		}
		rows = append(rows, []string{c.Symbol, c.Unit.Symbol, c.meaning(), strconv.Itoa(n), lo, hi, c.conversion()})
	}
	var lines []string
	for _, r := range t.Readings {
		lines = append(lines, "read as: "+r)
	}
	for _, w := range t.Warnings {
		lines = append(lines, "warning: "+w)
	}
	for _, n := range t.Notes {
		if n.Key == "" {
			lines = append(lines, n.Value)
			continue
		}
		lines = append(lines, n.Key+": "+n.Value)
	}
	if t.SHA256 != "" {
		lines = append(lines, fmt.Sprintf("%d rows, SHA-256 %s", t.Len(), t.SHA256))
	}
	return view(t.Name, rows, lines)
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
