package mathml

import (
	"strings"
)

// A class is what TeX calls the type of an atom; it decides the spacing.
type class int

const (
	ord class = iota
	op
	bin
	rel
	opening
	closing
	punct
	inner
	space // not an atom
)

type node struct {
	tag   string
	attrs []string // name, value, name, value
	text  string
	kids  []*node

	class  class
	limits bool  // scripts go above and below in display style
	always bool  // ... in every style
	named  bool  // a function with a name: needs space beside it
	core   *node // the operator that an element with scripts stands for
}

func leaf(tag, text string, c class, attrs ...string) *node {
	return &node{tag: tag, text: text, class: c, attrs: attrs}
}

func elem(tag string, kids ...*node) *node { return &node{tag: tag, kids: kids} }

func (n *node) set(name, value string) *node {
	for i := 0; i < len(n.attrs); i += 2 {
		if n.attrs[i] == name {
			n.attrs[i+1] = value
			return n
		}
	}
	n.attrs = append(n.attrs, name, value)
	return n
}

func (n *node) has(name string) bool {
	for i := 0; i < len(n.attrs); i += 2 {
		if n.attrs[i] == name {
			return true
		}
	}
	return false
}

func (n *node) operator() *node {
	if n.core != nil {
		return n.core
	}
	if n.tag == "mo" {
		return n
	}
	return nil
}

// tight takes the space on both sides of an operator away.
func (n *node) tight() {
	if o := n.operator(); o != nil && !o.has("lspace") {
		o.set("lspace", "0").set("rspace", "0")
	}
}

// group makes one ordinary atom of a finished row.
func group(row []*node) *node {
	if len(row) == 1 {
		n := *row[0]
		if n.class == bin || n.class == rel || n.class == punct {
			row[0].tight()
		}
		if n.class != space {
			n.class = ord
			n.limits, n.always, n.named = false, false, false
			return &n
		}
	}
	return elem("mrow", row...)
}

var escaper = strings.NewReplacer("&", "&amp;", "<", "&lt;", ">", "&gt;", `"`, "&quot;")

func (n *node) write(b *strings.Builder) {
	b.WriteByte('<')
	b.WriteString(n.tag)
	for i := 0; i < len(n.attrs); i += 2 {
		b.WriteByte(' ')
		b.WriteString(n.attrs[i])
		b.WriteString(`="`)
		b.WriteString(escaper.Replace(n.attrs[i+1]))
		b.WriteByte('"')
	}
	b.WriteByte('>')
	b.WriteString(escaper.Replace(n.text))
	for _, k := range n.kids {
		k.write(b)
	}
	b.WriteString("</")
	b.WriteString(n.tag)
	b.WriteByte('>')
}

// finish gives the atoms of a row their spacing, after the table of chapter 18
// of D. E. Knuth, The TeXbook. before is the class of what stands before the
// row, -1 if nothing does.
func finish(row []*node, small bool, before class) []*node {
	atoms := make([]*node, 0, len(row))
	for _, n := range row {
		if n.class != space {
			atoms = append(atoms, n)
		}
	}
	// A binary operator without something on both sides is a sign.
	prev := before
	for i, n := range atoms {
		if n.class == bin {
			switch prev {
			case -1, op, bin, rel, opening, punct:
				n.class = ord
			}
		}
		if i > 0 && atoms[i-1].class == bin && (n.class == rel || n.class == closing || n.class == punct) {
			atoms[i-1].class = ord
			atoms[i-1].tight()
		}
		prev = n.class
	}
	if len(atoms) > 0 && atoms[len(atoms)-1].class == bin {
		atoms[len(atoms)-1].class = ord
	}
	for _, n := range atoms {
		o := n.operator()
		if o == nil {
			continue
		}
		switch n.class {
		case bin, rel:
			if small {
				n.tight()
			} else if n == atoms[0] && before != -1 {
				o.set("form", "infix")
			}
		case ord:
			n.tight()
		case punct:
			if small {
				n.tight()
			}
		}
	}
	out := make([]*node, 0, len(row))
	var last *node
	spaced := false // a space of the author's stands since last
	for _, n := range row {
		if n.class == space {
			spaced = true
			out = append(out, n)
			continue
		}
		if last != nil && last.named {
			out = append(out, leaf("mo", "\u2061", space))
		}
		if last != nil && !spaced {
			after := last.named && (n.class == ord || n.class == op || n.class == inner)
			ahead := n.named && (last.class == ord || last.class == op || last.class == closing || last.class == inner)
			if after || ahead {
				out = append(out, thin())
			}
		}
		out = append(out, n)
		last, spaced = n, false
	}
	return out
}

func thin() *node { return leaf("mspace", "", space, "width", "0.1667em") }
