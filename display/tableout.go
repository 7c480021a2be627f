package display

import (
	"encoding/csv"
	"fmt"
	"math"
	"strconv"
	"strings"
	"unicode/utf8"

	"levelsum/display/internal/mark"
)

// parts splits a cell at the decimal point: what stands before it, and the
// point with all that follows.
func (r rounded) parts(minusSign string) (head, tail string) {
	if r.word != "" {
		w := r.word
		if r.split {
			w = strings.TrimSpace(w)
			if i := strings.IndexAny(w, ".(eE×%"); i >= 0 {
				return w[:i], w[i:]
			}
		}
		return w, ""
	}
	s := r.digits
	head, tail = s, ""
	if i := strings.IndexByte(s, '.'); i >= 0 {
		head, tail = s[:i], s[i:]
	}
	if r.unc != "" {
		tail += "(" + r.unc + ")"
	}
	return strings.Replace(head, "-", minusSign, 1), tail
}

// words reports whether the column is set as text, not as numbers.
func (c *sheetColumn) words() bool { return c.text != nil && !c.numbers }

// text writes the table in columns aligned on the decimal point, two spaces
// apart, so that a change of one number changes one line.
func (s *sheet) text() string {
	rows := s.shown()
	lines := make([]strings.Builder, len(rows)+2)
	for ci := range s.cols {
		c := &s.cols[ci]
		title := mark.Plain(mark.Over(oneLineText(c.quantity), oneLineText(c.unit)))
		left, right := 0, 0
		cells := make([][2]string, len(rows))
		for k := range rows {
			h, t := c.cells[k].parts("-")
			if c.cells[k].exp != 0 {
				p, _ := mark.Superscript(strconv.Itoa(c.cells[k].exp))
				t += "×10" + p
			}
			h = oneLineText(h)
			cells[k] = [2]string{h, t}
			left, right = max(left, utf8.RuneCountInString(h)), max(right, utf8.RuneCountInString(t))
		}
		width := max(left+right, utf8.RuneCountInString(title), 1)
		isText := c.words()
		last := ci == len(s.cols)-1
		put := func(line int, text string) {
			if ci > 0 {
				lines[line].WriteString("  ")
			}
			lines[line].WriteString(text)
			if n := width - utf8.RuneCountInString(text); n > 0 && !last {
				lines[line].WriteString(strings.Repeat(" ", n))
			}
		}
		if isText {
			put(0, title)
		} else {
			put(0, strings.Repeat(" ", max(0, width-utf8.RuneCountInString(title)))+title)
		}
		put(1, strings.Repeat("-", width))
		for k := range rows {
			h, t := cells[k][0], cells[k][1]
			switch {
			case rows[k] < 0:
				put(k+2, "...")
			case isText:
				put(k+2, h)
			default:
				pad := width - left - right + left - utf8.RuneCountInString(h)
				put(k+2, strings.Repeat(" ", pad)+h+t)
			}
		}
	}
	var b strings.Builder
	if s.caption != "" {
		b.WriteString(mark.Plain(mark.Label(oneLineText(s.caption))) + "\n")
	}
	for i := range lines {
		b.WriteString(strings.TrimRight(lines[i].String(), " ") + "\n")
		if i >= 2 && rows[i-2] < 0 {
			fmt.Fprintf(&b, "(%d rows more)\n", s.rows-len(rows)+1)
		}
		if i >= 2 && rows[i-2] >= 0 && s.rules[rows[i-2]] {
			b.WriteString(lines[1].String() + "\n")
		}
	}
	for _, n := range s.notes {
		b.WriteString(mark.Plain(mark.Label(oneLineText(n))) + "\n")
	}
	return strings.TrimSuffix(b.String(), "\n")
}

// html writes the table with rules above, below the head and at the end, in
// the colours of the page. Numbers are set in figures of one width and filled
// with spaces of a digit's width, so that they align on the point.
func (s *sheet) html() string {
	const (
		rule  = "1px solid currentColor"
		th    = `style="text-align:%s;border:0;border-bottom:` + rule + `;padding:0.25em 0.7em;font-weight:normal;white-space:nowrap"`
		td    = `style="text-align:%s;padding:0.12em 0.7em;white-space:nowrap"`
		frame = `style="border-collapse:collapse;border:0;border-top:1.5px solid currentColor;border-bottom:1.5px solid currentColor;color:inherit;background:transparent;font-variant-numeric:tabular-nums lining-nums;margin:0.4em 0"`
	)
	rows := s.shown()
	var b strings.Builder
	b.WriteString("<table " + frame + ">\n")
	if s.caption != "" {
		b.WriteString(`<caption style="caption-side:top;text-align:left;color:inherit;padding:0.2em 0">` + mark.HTML(mark.Label(s.caption)) + "</caption>\n")
	}
	b.WriteString("<thead><tr>")
	aligns := make([]string, len(s.cols))
	tails := make([]int, len(s.cols))
	powers := make([]float64, len(s.cols)) // widths of tails where some have a power of ten
	wrap := make([]bool, len(s.cols))
	for i := range s.cols {
		c := &s.cols[i]
		aligns[i] = "right"
		if c.words() {
			aligns[i] = "left"
		}
		for k := range rows {
			_, t := c.cells[k].parts(minus)
			tails[i] = max(tails[i], utf8.RuneCountInString(t))
			wrap[i] = wrap[i] || c.words() && utf8.RuneCountInString(c.cells[k].word) > longText
		}
		powers[i] = c.powerWidth()
		fmt.Fprintf(&b, "<th scope=\"col\" "+th+">%s</th>", aligns[i], mark.HTML(mark.Over(c.quantity, c.unit)))
	}
	b.WriteString("</tr></thead>\n<tbody>\n")
	cell, ruled := make([]string, len(s.cols)), make([]string, len(s.cols))
	for i := range s.cols {
		cell[i] = fmt.Sprintf("<td "+td+">", aligns[i])
		if wrap[i] {
			cell[i] = strings.Replace(cell[i], "white-space:nowrap", "min-width:16em", 1)
		}
		ruled[i] = strings.Replace(cell[i], "padding", "border-bottom:"+rule+";padding", 1)
	}
	for k, row := range rows {
		if row < 0 {
			fmt.Fprintf(&b, "<tr><td colspan=\"%d\" "+td+">… %d rows more …</td></tr>\n", len(s.cols), "center", s.rows-len(rows)+1)
			continue
		}
		b.WriteString("<tr>")
		for i := range s.cols {
			c := &s.cols[i]
			if s.rules[row] {
				b.WriteString(ruled[i])
			} else {
				b.WriteString(cell[i])
			}
			switch r := c.cells[k]; {
			case c.words():
				b.WriteString(mark.HTML(c.typeset(r.word)))
			case powers[i] > 0:
				b.WriteString(r.htmlAligned(powers[i]))
			default:
				b.WriteString(r.html())
				_, t := r.parts(minus)
				b.WriteString(filler(t, tails[i]))
			}
			b.WriteString("</td>")
		}
		b.WriteString("</tr>\n")
	}
	b.WriteString("</tbody>\n</table>\n")
	for _, n := range s.notes {
		b.WriteString(`<p style="margin:0.2em 0;font-size:0.9em;color:inherit">` + mark.HTML(mark.Label(n)) + "</p>\n")
	}
	return b.String()
}

// longText is the number of characters above which text may take several lines.
const longText = 28

// typeset is how text in a cell is set: as a label, a unit in a column of units.
func (c *sheetColumn) typeset(s string) []mark.Run {
	switch {
	case c.quantity == "unit":
		return mark.AsWritten(s)
	case strings.Contains(s, `\`): // a path, not a Greek letter
		return []mark.Run{{Text: s}}
	}
	return mark.Label(s)
}

// powerWidth returns the room for what follows the integers of a column, in
// widths of a digit; 0 where no number has a power of ten.
func (c *sheetColumn) powerWidth() float64 {
	w, some := 0.0, false
	for _, r := range c.cells {
		_, t := r.parts(minus)
		n := 0.0
		for _, x := range t {
			switch x {
			case '.':
				n += 0.5
			case '(', ')':
				n += 0.7
			default:
				n++
			}
		}
		if r.exp != 0 {
			some = true
			n += 3.4 + 0.9*float64(len(strconv.Itoa(r.exp)))
		}
		w = math.Max(w, n)
	}
	if !some {
		return 0
	}
	return w
}

// htmlAligned writes a number with what follows its integers in a box, so that
// numbers with and without a power of ten align on the point.
func (r rounded) htmlAligned(width float64) string {
	s := r.html()
	at := strings.IndexAny(s, ".(×")
	if at < 0 {
		at = len(s)
	}
	if r.word != "" && !r.split {
		at = len(s)
	}
	return s[:at] + fmt.Sprintf(`<span style="display:inline-block;min-width:%.1fch;text-align:left">`, width) + s[at:] + "</span>"
}

// filler returns spaces as wide as the characters that a tail lacks: a figure
// space for a digit, a punctuation space for the point.
func filler(tail string, want int) string {
	n := want - utf8.RuneCountInString(tail)
	if n <= 0 {
		return ""
	}
	s := strings.Repeat("\u2007", n)
	if !strings.Contains(tail, ".") {
		s = "\u2008" + strings.Repeat("\u2007", n-1)
	}
	return s
}

// csv writes all rows at full precision; a column with uncertainties is
// followed by one for them.
func (s *sheet) csv() string {
	var b strings.Builder
	w := csv.NewWriter(&b)
	rec := make([]string, 0, 2*len(s.cols))
	for _, c := range s.cols {
		rec = append(rec, csvHead(c.quantity, c.unit))
		if c.u != nil {
			rec = append(rec, csvHead("u("+c.quantity+")", c.unit))
		}
	}
	write := func() {
		if err := w.Write(rec); err != nil {
			panic(err) // a strings.Builder takes all
		}
		rec = rec[:0]
	}
	write()
	for i := range s.rows {
		for _, c := range s.cols {
			if c.text != nil {
				rec = append(rec, c.text[i])
			} else {
				rec = append(rec, full(c.v[i]))
			}
			if c.u != nil {
				rec = append(rec, full(c.u[i]))
			}
		}
		write()
	}
	w.Flush()
	return b.String()
}

// csvHead writes a head as data files have it: "Cp/(J/(mol K))".
func csvHead(quantity, unit string) string {
	q := strings.NewReplacer("{", "", "}", "", "\\", "").Replace(quantity)
	if mark.Dimensionless(unit) {
		return q
	}
	if strings.ContainsAny(unit, " /*·") {
		unit = "(" + unit + ")"
	}
	return q + "/" + unit
}

// latex writes the table for the package booktabs. Numbers take two columns
// that meet at the decimal point.
func (s *sheet) latex() string {
	rows := s.shown()
	var b strings.Builder
	spec := ""
	for _, c := range s.cols {
		if c.words() {
			spec += "l"
		} else {
			spec += "r@{}l"
		}
	}
	if s.caption != "" {
		b.WriteString("\\begin{table}\n\\caption{" + mark.LaTeX(mark.Label(s.caption)) + "}\n")
	}
	b.WriteString("\\begin{tabular}{" + spec + "}\n\\toprule\n")
	span := 0
	for i, c := range s.cols {
		if i > 0 {
			b.WriteString(" & ")
		}
		head := mark.LaTeX(mark.Over(c.quantity, c.unit))
		if c.words() {
			b.WriteString(head)
			span++
		} else {
			b.WriteString("\\multicolumn{2}{c}{" + head + "}")
			span += 2
		}
	}
	b.WriteString(" \\\\\n\\midrule\n")
	for k, row := range rows {
		if row < 0 {
			fmt.Fprintf(&b, "\\multicolumn{%d}{c}{(%d rows more)} \\\\\n", span, s.rows-len(rows)+1)
			continue
		}
		for i, c := range s.cols {
			if i > 0 {
				b.WriteString(" & ")
			}
			r := c.cells[k]
			if c.words() {
				b.WriteString(mark.LaTeX(c.typeset(r.word)))
				continue
			}
			if r.split {
				h, t := r.parts("-")
				b.WriteString(mark.EscapeLaTeX(h) + " & " + mark.EscapeLaTeX(t))
				continue
			}
			if r.word != "" {
				b.WriteString("$" + r.math() + "$ & ")
				continue
			}
			h, t := r.parts("-")
			b.WriteString("$" + h + "$ & ")
			if r.exp != 0 {
				t += "$\\times 10^{" + strconv.Itoa(r.exp) + "}$"
			}
			b.WriteString(t)
		}
		b.WriteString(" \\\\\n")
		if s.rules[row] {
			b.WriteString("\\midrule\n")
		}
	}
	b.WriteString("\\bottomrule\n\\end{tabular}\n")
	for _, n := range s.notes {
		b.WriteString("\n\\noindent{\\footnotesize " + mark.LaTeX(mark.Label(n)) + "}\n")
	}
	if s.caption != "" {
		b.WriteString("\\end{table}\n")
	}
	return b.String()
}
