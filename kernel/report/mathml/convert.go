package mathml

import (
	"fmt"
	"strings"
	"unicode/utf8"
)

// A Style is how a formula stands in the text.
type Style int

const (
	Display Style = iota // on a line of its own
	Inline               // within a line
)

// An Error says why a formula was not converted.
type Error struct {
	Source string
	Offset int // of the place in Source, in bytes
	Reason string
}

func (e *Error) Error() string {
	return fmt.Sprintf("%s (at character %d of %s)", e.Reason, len([]rune(e.Source[:e.Offset]))+1, short(e.Source))
}

// short returns the beginning of a formula on one line.
func short(s string) string {
	r := []rune(strings.Join(strings.Fields(s), " "))
	if len(r) > 60 {
		return string(r[:60]) + "..."
	}
	return string(r)
}

// Convert returns a formula, without the dollar signs, as a math element that
// also carries its source. The error is an [*Error].
func Convert(source string, style Style) (string, error) {
	p := &parser{src: source}
	for i, r := range source {
		if r == utf8.RuneError || r < ' ' && r != '\n' && r != '\t' && r != '\r' || r >= 0x7f && r < 0xa0 || r == 0xfffe || r == 0xffff {
			return "", p.fail(token{offset: i}, "a character that cannot be shown")
		}
	}
	at := state{style: text}
	if style == Display {
		at.style = display
	}
	row, end, err := p.row(at, -1, func(t token) bool { return t.is(`\\`) })
	if err != nil {
		return "", err
	}
	root := elem("mrow", row...)
	if end.is(`\\`) {
		root, err = p.lines(root, at)
		if err != nil {
			return "", err
		}
	}
	var b strings.Builder
	b.WriteString("<math")
	if style == Display {
		b.WriteString(` display="block"`)
	}
	b.WriteString("><semantics>")
	root.write(&b)
	b.WriteString(`<annotation encoding="application/x-tex">`)
	b.WriteString(escaper.Replace(source))
	b.WriteString("</annotation></semantics></math>")
	return b.String(), nil
}

// lines reads the rest of a formula that is broken by \\ outside environments.
func (p *parser) lines(first *node, at state) (*node, error) {
	table := elem("mtable", elem("mtr", cell(first, "left", true)))
	for {
		row, end, err := p.row(at, -1, func(t token) bool { return t.is(`\\`) })
		if err != nil {
			return nil, err
		}
		if len(row) > 0 || !end.eof {
			table.kids = append(table.kids, elem("mtr", cell(elem("mrow", row...), "left", true)))
		}
		if end.eof {
			break
		}
	}
	return table.set("displaystyle", fmt.Sprint(at.style == display)), nil
}
