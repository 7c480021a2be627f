package mathml

import (
	"strings"
	"unicode"
	"unicode/utf8"
)

// The styles of TeX.
const (
	display = iota
	text
	small // scripts and what is smaller still
)

// state is what a row of atoms inherits.
type state struct {
	style int
	font  font
}

func (s state) script() state { return state{small, s.font} }

func (s state) fraction() state {
	if s.style == display {
		return state{text, s.font}
	}
	return s.script()
}

// row reads atoms up to the end of the text or a token that end accepts, which
// is read too and returned. before is the class of what stands before the row.
func (p *parser) row(at state, before class, end func(token) bool) ([]*node, token, error) {
	p.depth++
	defer func() { p.depth-- }()
	if p.depth > maxDepth {
		return nil, token{}, p.fail(p.peek(), "too many groups in each other")
	}
	var row []*node
	for {
		t := p.next()
		if t.eof || end(t) {
			return finish(row, at.style == small, before), t, nil
		}
		name, _ := t.command()
		switch name {
		case "displaystyle", "textstyle", "scriptstyle", "scriptscriptstyle":
			rest, last, err := p.row(styled(at, name), -1, end)
			if err != nil {
				return nil, t, err
			}
			row = append(row, styleElem(name, rest))
			return finish(row, at.style == small, before), last, nil
		case "over", "atop", "choose":
			rest, last, err := p.row(at.fraction(), -1, end)
			if err != nil {
				return nil, t, err
			}
			f := fraction(group(finish(row, at.fraction().style == small, -1)), group(rest))
			if name != "over" {
				f.set("linethickness", "0")
			}
			if name == "choose" {
				f = elem("mrow", leaf("mo", "(", opening), f, leaf("mo", ")", closing))
				f.class = inner
			}
			return []*node{f}, last, nil
		case "color":
			c, err := p.color(t)
			if err != nil {
				return nil, t, err
			}
			rest, last, err := p.row(at, -1, end)
			if err != nil {
				return nil, t, err
			}
			row = append(row, elem("mstyle", rest...).set("mathcolor", c))
			return finish(row, at.style == small, before), last, nil
		}
		if f, ok := fontSwitches[name]; ok {
			rest, last, err := p.row(state{at.style, f}, -1, end)
			if err != nil {
				return nil, t, err
			}
			row = append(row, group(rest))
			return finish(row, at.style == small, before), last, nil
		}
		n, err := p.atom(t, at, true)
		if err != nil {
			return nil, t, err
		}
		if n == nil {
			continue
		}
		if n, err = p.scripts(n, at); err != nil {
			return nil, t, err
		}
		row = append(row, n)
	}
}

func styled(at state, name string) state {
	switch name {
	case "displaystyle":
		return state{display, at.font}
	case "textstyle":
		return state{text, at.font}
	}
	return state{small, at.font}
}

func styleElem(name string, row []*node) *node {
	n := elem("mstyle", row...)
	switch name {
	case "displaystyle":
		return n.set("displaystyle", "true").set("scriptlevel", "0")
	case "textstyle":
		return n.set("displaystyle", "false").set("scriptlevel", "0")
	case "scriptstyle":
		return n.set("displaystyle", "false").set("scriptlevel", "1")
	}
	return n.set("displaystyle", "false").set("scriptlevel", "2")
}

// color reads the name or the hexadecimal digits of a colour.
func (p *parser) color(of token) (string, error) {
	c, err := p.braced(of)
	if err != nil {
		return "", err
	}
	for i, r := range c {
		if !(r >= 'a' && r <= 'z' || r >= 'A' && r <= 'Z' || r >= '0' && r <= '9' || i == 0 && r == '#') {
			return "", p.fail(of, "the colour "+c+" is not known")
		}
	}
	return c, nil
}

// arg reads an argument: a group or one atom without scripts.
func (p *parser) arg(of token, at state) (*node, error) {
	t := p.next()
	if t.eof || t.is("}") || t.is("&") || t.is("^") || t.is("_") {
		return nil, p.fail(of, of.text+" lacks its argument")
	}
	n, err := p.atom(t, at, false)
	if err != nil {
		return nil, err
	}
	if n == nil {
		return nil, p.fail(t, t.text+" cannot be an argument")
	}
	if n.class == space {
		return elem("mrow", n), nil
	}
	return group([]*node{n}), nil
}

// braces reads the rest of a group after its opening brace.
func (p *parser) braces(open token, at state) ([]*node, error) {
	row, last, err := p.row(at, -1, func(t token) bool { return t.is("}") })
	if err == nil && last.eof {
		err = p.fail(open, "{ is not closed")
	}
	return row, err
}

// scripts reads what hangs on an atom.
func (p *parser) scripts(n *node, at state) (*node, error) {
	if n.class == space {
		return n, nil
	}
	var sub, sup *node
	var primes []*node
	limits := n.always || n.limits && at.style == display
	for {
		t := p.peek()
		switch {
		case t.is("'"):
			p.next()
			if sup != nil {
				return nil, p.fail(t, "a prime after a superscript")
			}
			primes = append(primes, leaf("mo", "′", space, "lspace", "0", "rspace", "0"))
			continue
		case t.is("_"):
			p.next()
			if sub != nil {
				return nil, p.fail(t, "two subscripts")
			}
			var err error
			if sub, err = p.arg(t, at.script()); err != nil {
				return nil, err
			}
			continue
		case t.is("^"):
			p.next()
			if sup != nil {
				return nil, p.fail(t, "two superscripts")
			}
			var err error
			if sup, err = p.arg(t, at.script()); err != nil {
				return nil, err
			}
			continue
		case t.is(`\limits`) || t.is(`\nolimits`):
			p.next()
			if n.class != op {
				return nil, p.fail(t, t.text+" stands after no operator")
			}
			limits = t.is(`\limits`)
			continue
		}
		break
	}
	if len(primes) > 0 {
		if sup != nil {
			primes = append(primes, sup)
		}
		sup = primes[0]
		if len(primes) > 1 {
			sup = elem("mrow", primes...)
		}
	}
	if sub == nil && sup == nil {
		return n, nil
	}
	tags := [3]string{"msub", "msup", "msubsup"}
	if limits {
		tags = [3]string{"munder", "mover", "munderover"}
		if o := n.operator(); o != nil && n.limits {
			o.set("movablelimits", "false")
		}
	}
	var s *node
	switch {
	case sup == nil:
		s = elem(tags[0], n, sub)
	case sub == nil:
		s = elem(tags[1], n, sup)
	default:
		s = elem(tags[2], n, sub, sup)
	}
	s.class, s.named, s.core = n.class, n.named, n.operator()
	return s, nil
}

// atom reads one atom that begins with t. In a row, neighbouring digits make
// one number, and upright letters one word. A nil node is something without
// effect on the drawing.
func (p *parser) atom(t token, at state, inRow bool) (*node, error) {
	p.depth++
	defer func() { p.depth-- }()
	if p.depth > maxDepth {
		return nil, p.fail(t, "too many groups in each other")
	}
	if name, ok := t.command(); ok {
		return p.command(t, name, at, inRow)
	}
	r, _ := utf8.DecodeRuneInString(t.text)
	switch {
	case t.is("{"):
		row, err := p.braces(t, at)
		if err != nil {
			return nil, err
		}
		return group(row), nil
	case t.is("}"):
		return nil, p.fail(t, "} without {")
	case t.is("^") || t.is("_") || t.is("'"):
		p.pos = t.offset
		return elem("mrow"), nil
	case t.is("&"):
		return nil, p.fail(t, "& outside a table")
	case t.is("#") || t.is("$") || t.is(`\`):
		return nil, p.fail(t, t.text+" must be written "+`\`+t.text)
	case t.is("~"):
		return leaf("mtext", "\u00a0", space), nil
	case r >= '0' && r <= '9':
		s := t.text
		if inRow {
			s += p.digits()
		}
		return leaf("mn", restyle(s, at.font), ord), nil
	case unicode.IsLetter(r):
		if inRow && at.font == roman {
			return letters(t.text+p.letters(), at.font), nil
		}
		return letters(t.text, at.font), nil
	}
	switch t.text {
	case "+":
		return leaf("mo", "+", bin), nil
	case "-", "−":
		return leaf("mo", "−", bin), nil
	case "*":
		return leaf("mo", "∗", bin), nil
	case "=", "<", ">", ":":
		return leaf("mo", t.text, rel), nil
	case "(", "[":
		return leaf("mo", t.text, opening, "stretchy", "false"), nil
	case ")", "]":
		return leaf("mo", t.text, closing, "stretchy", "false"), nil
	case "!", "?":
		return leaf("mo", t.text, closing, "lspace", "0", "rspace", "0"), nil
	case ",", ";":
		return leaf("mo", t.text, punct, "separator", "true"), nil
	case "|":
		return leaf("mo", t.text, ord, "stretchy", "false"), nil
	case "/", ".", `"`, "@", "`":
		return leaf("mo", t.text, ord), nil
	}
	if s, ok := characters[t.text]; ok {
		return s.node(at.font), nil
	}
	return leaf("mi", t.text, ord, "mathvariant", "normal"), nil
}

// letters returns one or more letters in a font.
func letters(s string, f font) *node {
	if f == italic && utf8.RuneCountInString(s) == 1 && s < "\x80" {
		f = plain // what browsers do by themselves
	}
	n := leaf("mi", restyle(s, f), ord)
	if utf8.RuneCountInString(s) == 1 && (f == roman || f == plain && upright(s)) {
		n.set("mathvariant", "normal")
	}
	return n
}

func (s symbol) node(f font) *node {
	if s.tag == "mi" {
		return letters(s.text, f)
	}
	n := leaf("mo", s.text, s.class)
	if s.class == rel && strings.ContainsAny(s.text, "→←↔⟶⟵↑↓∣∥") || s.text == "|" || s.text == "‖" {
		n.set("stretchy", "false")
	}
	return n
}
