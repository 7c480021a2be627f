package mathml

import (
	"regexp"
	"strings"
)

func fraction(num, den *node) *node {
	n := elem("mfrac", num, den)
	n.class = inner
	return n
}

// command reads what a command needs and returns its atom.
func (p *parser) command(t token, name string, at state, inRow bool) (*node, error) {
	if s, ok := symbols[name]; ok {
		return s.node(at.font), nil
	}
	if l, ok := large[name]; ok {
		n := leaf("mo", l.text, op)
		n.limits = l.limits
		return n, nil
	}
	if limits, ok := functions[name]; ok {
		s := name
		if strings.HasPrefix(s, "lim") && len(s) > 3 {
			s = "lim\u2009" + s[3:]
		}
		n := leaf("mi", s, op)
		n.named, n.limits = true, limits
		return n, nil
	}
	if w, ok := spaces[name]; ok {
		return leaf("mspace", "", space, "width", w), nil
	}
	if d, ok := delimiters[t.text]; ok && d.text != "" {
		n := leaf("mo", d.text, d.side, "stretchy", "false")
		if d.text == "|" || d.text == "‖" {
			n.set("lspace", "0").set("rspace", "0")
		}
		return n, nil
	}
	if a, ok := accents[name]; ok {
		base, err := p.arg(t, at)
		if err != nil {
			return nil, err
		}
		o := leaf("mo", a.text, ord, "stretchy", "false")
		if a.stretch {
			o.set("stretchy", "true")
		}
		return elem("mover", base, o).set("accent", "true"), nil
	}
	if f, ok := mathFonts[name]; ok {
		return p.fontArg(t, state{at.style, f})
	}
	if f, ok := textFonts[name]; ok {
		return p.text(t, f, at)
	}
	switch name {
	case " ", "\n", "\t", "space", "nobreakspace":
		return leaf("mtext", "\u00a0", space), nil
	case "label":
		_, err := p.braced(t)
		return nil, err
	case "nonumber", "notag", "relax", "allowbreak", "nobreak":
		return nil, nil
	case "frac", "dfrac", "tfrac", "cfrac", "binom", "dbinom", "tbinom":
		return p.fractionOf(t, name, at)
	case "sqrt":
		return p.root(t, at)
	case "left":
		return p.fenced(t, at)
	case "right", "middle":
		return nil, p.fail(t, t.text+` without \left`)
	case "begin":
		return p.environment(t, at)
	case "end":
		return nil, p.fail(t, `\end without \begin`)
	case "not":
		return p.not(t, at)
	case "operatorname":
		return p.operatorName(t, at)
	case "bmod":
		return leaf("mo", "mod", bin, "lspace", "0.2222em", "rspace", "0.2222em"), nil
	case "pmod", "mod":
		return p.mod(t, name, at)
	case "textcolor":
		c, err := p.color(t)
		if err != nil {
			return nil, err
		}
		n, err := p.arg(t, at)
		if err != nil {
			return nil, err
		}
		return elem("mstyle", n).set("mathcolor", c), nil
	case "underline":
		n, err := p.arg(t, at)
		if err != nil {
			return nil, err
		}
		return ruled(n, "bottom"), nil
	case "overline":
		n, err := p.arg(t, at)
		if err != nil {
			return nil, err
		}
		return ruled(n, "top"), nil
	case "overbrace", "underbrace":
		n, err := p.arg(t, at)
		if err != nil {
			return nil, err
		}
		b := elem("mover", n, leaf("mo", "⏞", ord, "stretchy", "true"))
		if name == "underbrace" {
			b = elem("munder", n, leaf("mo", "⏟", ord, "stretchy", "true"))
		}
		b.always = true
		return b, nil
	case "overset", "underset", "stackrel":
		return p.stacked(t, name, at)
	case "xrightarrow", "xleftarrow":
		return p.longArrow(t, name, at)
	case "phantom", "hphantom", "vphantom", "smash", "boxed", "mathstrut":
		return p.box(t, name, at)
	case "mathord", "mathbin", "mathrel", "mathopen", "mathclose", "mathpunct", "mathinner", "mathop":
		return p.ofClass(t, name, at)
	case "hspace", "hskip", "kern", "mkern", "mskip", "mspace":
		return p.hspace(t)
	case "tag":
		return p.tag(t, at)
	case "substack":
		return p.substack(t, at)
	}
	if s, c, ok := bigSize(name); ok {
		return p.big(t, s, c)
	}
	return nil, p.fail(t, t.text+" is not known")
}

// fontArg reads the argument of a command for a font.
func (p *parser) fontArg(t token, at state) (*node, error) {
	open := p.next()
	if open.is("{") {
		row, err := p.braces(open, at)
		if err != nil {
			return nil, err
		}
		return group(row), nil
	}
	p.pos = open.offset
	return p.arg(t, at)
}

func (p *parser) fractionOf(t token, name string, at state) (*node, error) {
	outer := at
	switch name[0] {
	case 'd', 'c':
		outer.style = display
	case 't':
		outer.style = text
	}
	num, err := p.arg(t, outer.fraction())
	if err != nil {
		return nil, err
	}
	den, err := p.arg(t, outer.fraction())
	if err != nil {
		return nil, err
	}
	f := fraction(num, den)
	if strings.HasSuffix(name, "binom") {
		f.set("linethickness", "0")
		f = elem("mrow", leaf("mo", "(", opening, "stretchy", "true"), f, leaf("mo", ")", closing, "stretchy", "true"))
		f.class = inner
	}
	switch name[0] {
	case 'd', 'c':
		f = styleElem("displaystyle", []*node{f})
	case 't':
		f = styleElem("textstyle", []*node{f})
	}
	f.class = inner
	return f, nil
}

func (p *parser) root(t token, at state) (*node, error) {
	index, has, err := p.bracketed()
	if err != nil {
		return nil, err
	}
	base, err := p.arg(t, at)
	if err != nil {
		return nil, err
	}
	if !has {
		return elem("msqrt", base), nil
	}
	n, err := p.inside(t, index, at.script())
	if err != nil {
		return nil, err
	}
	return elem("mroot", base, n), nil
}

// inside converts a piece of the source that was read as it is written.
func (p *parser) inside(t token, s string, at state) (*node, error) {
	q := &parser{src: s, depth: p.depth}
	row, _, err := q.row(at, -1, func(token) bool { return false })
	if err != nil {
		e := err.(*Error)
		return nil, p.fail(t, e.Reason)
	}
	return group(row), nil
}

// delimiter reads what follows \left and its kin.
func (p *parser) delimiter(of token) (string, class, error) {
	t := p.next()
	d, ok := delimiters[t.text]
	if !ok {
		return "", ord, p.fail(of, of.text+" lacks its delimiter")
	}
	return d.text, d.side, nil
}

// fenced reads from after \left to \right.
func (p *parser) fenced(t token, at state) (*node, error) {
	open, _, err := p.delimiter(t)
	if err != nil {
		return nil, err
	}
	n := elem("mrow")
	n.class = inner
	fence := func(s, form string) {
		if s != "" {
			n.kids = append(n.kids, leaf("mo", s, space, "form", form, "fence", "true", "stretchy", "true"))
		}
	}
	fence(open, "prefix")
	for {
		row, end, err := p.row(at, -1, func(t token) bool { return t.is(`\right`) || t.is(`\middle`) })
		if err != nil {
			return nil, err
		}
		if end.eof {
			return nil, p.fail(t, `\left without \right`)
		}
		n.kids = append(n.kids, row...)
		d, _, err := p.delimiter(end)
		if err != nil {
			return nil, err
		}
		if end.is(`\right`) {
			fence(d, "postfix")
			return n, nil
		}
		n.kids = append(n.kids, leaf("mo", d, space, "stretchy", "true", "lspace", "0.05em", "rspace", "0.05em"))
	}
}

var bigNames = regexp.MustCompile(`^(big|Big|bigg|Bigg)([lrm]?)$`)

// bigSize returns the size that \big and its kin ask for, and the class.
func bigSize(name string) (size string, c class, ok bool) {
	m := bigNames.FindStringSubmatch(name)
	if m == nil {
		return "", ord, false
	}
	size = map[string]string{"big": "1.2em", "Big": "1.8em", "bigg": "2.4em", "Bigg": "3em"}[m[1]]
	return size, map[string]class{"": ord, "l": opening, "r": closing, "m": rel}[m[2]], true
}

func (p *parser) big(t token, size string, c class) (*node, error) {
	d, _, err := p.delimiter(t)
	if err != nil {
		return nil, err
	}
	n := leaf("mo", d, c, "stretchy", "true", "symmetric", "true", "minsize", size, "maxsize", size)
	if c != rel {
		n.tight()
	}
	return n, nil
}

func (p *parser) not(t token, at state) (*node, error) {
	of := p.next()
	if of.eof {
		return nil, p.fail(t, `\not lacks its relation`)
	}
	n, err := p.atom(of, at, false)
	if err != nil {
		return nil, err
	}
	if n == nil || n.text == "" {
		return nil, p.fail(t, `\not stands before no relation`)
	}
	if s, ok := negated[n.text]; ok {
		n.text = s
	} else {
		n.text += "\u0338"
	}
	return n, nil
}

func (p *parser) operatorName(t token, at state) (*node, error) {
	limits := false
	if p.peek().is("*") {
		p.next()
		limits = true
	}
	s, err := p.braced(t)
	if err != nil {
		return nil, err
	}
	in, err := p.inside(t, s, state{at.style, roman})
	if err != nil {
		return nil, err
	}
	n := elem("mrow", in)
	if in.tag == "mi" {
		n = leaf("mi", in.text, op, in.attrs...)
	}
	n.class, n.named, n.limits = op, true, limits
	return n, nil
}

func (p *parser) mod(t token, name string, at state) (*node, error) {
	n, err := p.arg(t, at)
	if err != nil {
		return nil, err
	}
	gap := leaf("mspace", "", space, "width", "1em")
	word := leaf("mi", "mod", space)
	between := leaf("mspace", "", space, "width", "0.3333em")
	if name == "mod" {
		return elem("mrow", gap, word, between, n), nil
	}
	return elem("mrow", gap, leaf("mo", "(", opening, "stretchy", "false"), word, between, n,
		leaf("mo", ")", closing, "stretchy", "false")), nil
}

func (p *parser) stacked(t token, name string, at state) (*node, error) {
	mark, err := p.arg(t, at.script())
	if err != nil {
		return nil, err
	}
	next := p.next()
	if next.eof {
		return nil, p.fail(t, t.text+" lacks its argument")
	}
	base, err := p.atom(next, at, false)
	if err != nil {
		return nil, err
	}
	if base == nil || base.class == space {
		return nil, p.fail(next, next.text+" cannot be an argument")
	}
	c := base.class
	if next.is("{") && len(base.kids) == 0 { // a relation in braces stays one
		if s := classOf(base); s != ord {
			c = s
		}
	}
	if name == "stackrel" {
		c = rel
	}
	tag := "mover"
	if name == "underset" {
		tag = "munder"
	}
	n := elem(tag, base, mark)
	n.class = c
	if base.tag == "mo" {
		n.core = base
		if c == rel {
			base.attrs = nil
		}
	}
	return n, nil
}

// classOf returns the class that the symbol of an operator has by itself.
func classOf(n *node) class {
	if n.tag != "mo" {
		return ord
	}
	switch n.text {
	case "=", "<", ">":
		return rel
	}
	if s, ok := characters[n.text]; ok {
		return s.class
	}
	return ord
}

func (p *parser) longArrow(t token, name string, at state) (*node, error) {
	arrow := leaf("mo", "→", rel, "stretchy", "true", "minsize", "3em")
	if name == "xleftarrow" {
		arrow.text = "←"
	}
	below, has, err := p.bracketed()
	if err != nil {
		return nil, err
	}
	above, err := p.arg(t, at.script())
	if err != nil {
		return nil, err
	}
	n := elem("mover", arrow, padded(above))
	if has {
		b, err := p.inside(t, below, at.script())
		if err != nil {
			return nil, err
		}
		n = elem("munderover", arrow, padded(b), padded(above))
	}
	n.class, n.core = rel, arrow
	return n, nil
}

// padded makes an arrow longer than what stands on it. Browsers stretch to the
// width of what is drawn, not to that of an mpadded.
func padded(n *node) *node {
	gap := func() *node { return leaf("mspace", "", space, "width", "0.8em") }
	return elem("mrow", gap(), n, gap())
}

// ruled draws a line over or under a formula. It is a border: few fonts have a
// bar that stretches.
func ruled(n *node, side string) *node {
	return elem("mrow", n).set("style", "border-"+side+":0.05em solid;padding-"+side+":0.1em")
}

func (p *parser) box(t token, name string, at state) (*node, error) {
	if name == "mathstrut" {
		return elem("mpadded", elem("mphantom", leaf("mo", "(", ord))).set("width", "0"), nil
	}
	if name == "smash" {
		if _, _, err := p.bracketed(); err != nil {
			return nil, err
		}
	}
	n, err := p.arg(t, at)
	if err != nil {
		return nil, err
	}
	switch name {
	case "boxed":
		return elem("mrow", n).set("style", "border:1px solid;padding:0.25em"), nil
	case "smash":
		return elem("mpadded", n).set("height", "0").set("depth", "0"), nil
	case "vphantom":
		return elem("mpadded", elem("mphantom", n)).set("width", "0"), nil
	case "hphantom":
		return elem("mpadded", elem("mphantom", n)).set("height", "0").set("depth", "0"), nil
	}
	return elem("mphantom", n), nil
}

func (p *parser) ofClass(t token, name string, at state) (*node, error) {
	n, err := p.arg(t, at)
	if err != nil {
		return nil, err
	}
	out := elem("mrow", n)
	if n.tag == "mo" {
		out.core = n
	}
	out.class = map[string]class{"mathord": ord, "mathbin": bin, "mathrel": rel, "mathopen": opening,
		"mathclose": closing, "mathpunct": punct, "mathinner": inner, "mathop": op}[name]
	out.limits = name == "mathop"
	return out, nil
}

var length = regexp.MustCompile(`^\s*(-?[0-9]*\.?[0-9]+)\s*(em|ex|pt|mu|cm|mm|in|px)\s*`)

// hspace reads a length, in braces or bare.
func (p *parser) hspace(t token) (*node, error) {
	if p.peek().is("*") {
		p.next()
	}
	s := ""
	if p.peek().is("{") {
		var err error
		if s, err = p.braced(t); err != nil {
			return nil, err
		}
	} else {
		s = length.FindString(p.src[p.pos:])
		p.pos += len(s)
	}
	m := length.FindStringSubmatch(s)
	if m == nil || len(m[0]) != len(s) {
		return nil, p.fail(t, t.text+" lacks a length")
	}
	return leaf("mspace", "", space, "width", emOf(m[1], m[2])), nil
}
