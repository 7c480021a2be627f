package data

import (
	"fmt"
	"html"
	"strconv"
	"strings"

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

// view writes rows, the first being the head, as plain text and HTML.
func view(title string, rows [][]string, lines []string) display.View {
	width := make([]int, len(rows[0]))
	for _, r := range rows {
		for i, c := range r {
			width[i] = max(width[i], len([]rune(c)))
		}
	}
	var text, page strings.Builder
	fmt.Fprintf(&text, "%s\n", title)
	fmt.Fprintf(&page, "<table>\n<caption>%s</caption>\n", html.EscapeString(title))
	for k, r := range rows {
		tag := "td"
		if k == 0 {
			tag = "th"
		}
		page.WriteString("<tr>")
		var row strings.Builder
		for i, c := range r {
			pad := strings.Repeat(" ", width[i]-len([]rune(c)))
			if i > 0 {
				row.WriteString("  ")
			}
			if i >= 3 && i <= 5 { // numbers to the right
				row.WriteString(pad + c)
			} else {
				row.WriteString(c + pad)
			}
			fmt.Fprintf(&page, "<%s>%s</%s>", tag, html.EscapeString(c), tag)
		}
		text.WriteString(strings.TrimRight(row.String(), " ") + "\n")
		page.WriteString("</tr>\n")
	}
	page.WriteString("</table>\n<ul>\n")
	for _, l := range lines {
		text.WriteString(l + "\n")
		page.WriteString("<li>" + html.EscapeString(l) + "</li>\n")
	}
	page.WriteString("</ul>\n")
	return display.View{Data: map[string]any{"text/plain": strings.TrimRight(text.String(), "\n"), "text/html": page.String()}}
}
