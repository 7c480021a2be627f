package mathml

import (
	"fmt"
	"regexp"
	"strings"
)

// A layout is how an environment sets its cells.
type layout struct {
	open, close string
	columns     string // l, c, r, used in turn; the last one again and again
	display     bool   // cells in display style
	small       bool
	aligned     bool // pairs of columns without space between
	inner       bool // stands between other atoms
}

var environments = map[string]layout{
	"matrix":      {columns: "c"},
	"pmatrix":     {open: "(", close: ")", columns: "c", inner: true},
	"bmatrix":     {open: "[", close: "]", columns: "c", inner: true},
	"Bmatrix":     {open: "{", close: "}", columns: "c", inner: true},
	"vmatrix":     {open: "|", close: "|", columns: "c", inner: true},
	"Vmatrix":     {open: "‖", close: "‖", columns: "c", inner: true},
	"smallmatrix": {columns: "c", small: true},
	"array":       {columns: "c"},
	"cases":       {open: "{", columns: "l", inner: true},
	"rcases":      {close: "}", columns: "l", inner: true},
	"dcases":      {open: "{", columns: "l", inner: true, display: true},
	"aligned":     {columns: "rl", display: true, aligned: true},
	"align":       {columns: "rl", display: true, aligned: true},
	"split":       {columns: "rl", display: true, aligned: true},
	"alignat":     {columns: "rl", display: true, aligned: true},
	"alignedat":   {columns: "rl", display: true, aligned: true},
	"eqnarray":    {columns: "rcl", display: true},
	"gathered":    {columns: "c", display: true},
	"gather":      {columns: "c", display: true},
	"multline":    {columns: "c", display: true},
	"equation":    {columns: "c", display: true},
}

// What may stand after \begin{array} and after \\: where the table stands on the
// line, and more space below the line. Both are read and not followed.
var (
	position  = regexp.MustCompile(`^\[[tbc]\]`)
	lineSpace = regexp.MustCompile(`^\*?\[\s*-?[0-9]*\.?[0-9]+\s*(em|ex|pt|mu|cm|mm|in|px)\s*\]|^\*`)
)

// environment reads from after \begin to its \end.
func (p *parser) environment(t token, at state) (*node, error) {
	full, err := p.braced(t)
	if err != nil {
		return nil, err
	}
	name := strings.TrimSuffix(full, "*")
	l, ok := environments[name]
	if !ok {
		return nil, p.fail(t, `\begin{`+full+"} is not known")
	}
	if m := position.FindString(p.src[p.pos:]); m != "" {
		p.pos += len(m)
	}
	var bars []int
	switch name {
	case "array":
		spec, err := p.braced(t)
		if err != nil {
			return nil, err
		}
		if l.columns, bars, ok = columns(spec); !ok {
			return nil, p.fail(t, "the columns "+spec+" are not known")
		}
	case "alignat", "alignedat":
		if _, err := p.braced(t); err != nil {
			return nil, err
		}
	}
	table := elem("mtable")
	if l.display {
		table.set("displaystyle", "true")
	}
	inside := state{text, plain}
	switch {
	case l.display:
		inside.style = display
	case l.small:
		inside.style = small
		table.set("scriptlevel", "1")
	}
	ruled := 0
	row := elem("mtr")
	for {
		for p.peek().is(`\hline`) {
			p.next()
			ruled++
		}
		before := class(-1)
		if l.aligned && len(row.kids)%2 == 1 {
			before = ord
		}
		in, end, err := p.row(inside, before, func(t token) bool {
			return t.is("&") || t.is(`\\`) || t.is(`\cr`) || t.is(`\end`)
		})
		if err != nil {
			return nil, err
		}
		if end.eof {
			return nil, p.fail(t, `\begin{`+full+"} is not closed")
		}
		last := len(in) == 0 && len(row.kids) == 0 && end.is(`\end`)
		if last && ruled > 0 && len(table.kids) > 0 {
			for _, c := range table.kids[len(table.kids)-1].kids {
				c.addStyle("border-bottom:1px solid")
			}
		}
		if !last {
			row.kids = append(row.kids, l.cell(elem("mrow", in...), len(row.kids), bars, ruled > 0))
		}
		if end.is("&") {
			continue
		}
		if !last {
			table.kids = append(table.kids, row)
		}
		row, ruled = elem("mtr"), 0
		if end.is(`\end`) {
			closes, err := p.braced(end)
			if err != nil {
				return nil, err
			}
			if closes != full {
				return nil, p.fail(end, `\end{`+closes+`} closes \begin{`+full+"}")
			}
			break
		}
		if m := lineSpace.FindString(p.src[p.pos:]); m != "" {
			p.pos += len(m)
		}
	}
	return l.fence(table), nil
}

func (l layout) fence(table *node) *node {
	if !l.inner {
		return table
	}
	n := elem("mrow")
	n.class = inner
	if l.open != "" {
		n.kids = append(n.kids, leaf("mo", l.open, space, "form", "prefix", "fence", "true", "stretchy", "true"))
	}
	n.kids = append(n.kids, table)
	if l.close != "" {
		n.kids = append(n.kids, leaf("mo", l.close, space, "form", "postfix", "fence", "true", "stretchy", "true"))
	}
	return n
}

// columns reads the argument of array.
func columns(spec string) (columns string, bars []int, ok bool) {
	for _, r := range spec {
		switch r {
		case 'l', 'c', 'r':
			columns += string(r)
		case '|':
			bars = append(bars, len(columns))
		case ' ':
		default:
			return "", nil, false
		}
	}
	return columns, bars, columns != ""
}

func (l layout) cell(n *node, column int, bars []int, ruled bool) *node {
	where := l.columns[min(column, len(l.columns)-1)]
	if l.aligned {
		where = l.columns[column%len(l.columns)]
	}
	c := cell(n, map[byte]string{'l': "left", 'c': "center", 'r': "right"}[where], l.aligned)
	if l.aligned && column > 0 && column%2 == 0 {
		c.addStyle("padding-left:2em")
	}
	for _, b := range bars {
		if b == column {
			c.addStyle("border-left:1px solid")
		}
		if b == column+1 && b == len(l.columns) {
			c.addStyle("border-right:1px solid")
		}
	}
	if ruled {
		c.addStyle("border-top:1px solid")
	}
	return c
}

// cell makes a cell. Browsers take its place from the style, not from the
// attributes that older versions of MathML had. What is in a cell is a block,
// which some of them place only by a value of their own; to centre it is usual.
func cell(n *node, where string, close bool) *node {
	var style string
	if where != "center" {
		style = "text-align:" + where + ";text-align:-webkit-" + where
	}
	if close {
		style = strings.TrimPrefix(style+";padding-left:0;padding-right:0", ";")
	}
	c := elem("mtd", n)
	if style != "" {
		c.set("style", style)
	}
	return c
}

// addStyle adds a declaration to the style.
func (n *node) addStyle(s string) {
	if old := styleOf(n); old != "" {
		s = old + ";" + s
	}
	n.set("style", s)
}

func styleOf(n *node) string {
	for i := 0; i < len(n.attrs); i += 2 {
		if n.attrs[i] == "style" {
			return n.attrs[i+1]
		}
	}
	return ""
}

// substack reads lines that stand below an operator.
func (p *parser) substack(t token, at state) (*node, error) {
	open := p.next()
	if !open.is("{") {
		return nil, p.fail(t, t.text+" lacks its argument")
	}
	table := elem("mtable").set("displaystyle", fmt.Sprint(false))
	for {
		row, end, err := p.row(at.script(), -1, func(t token) bool { return t.is(`\\`) || t.is("}") })
		if err != nil {
			return nil, err
		}
		if end.eof {
			return nil, p.fail(open, "{ is not closed")
		}
		table.kids = append(table.kids, elem("mtr", cell(elem("mrow", row...), "center", true)))
		if end.is("}") {
			return table, nil
		}
	}
}
