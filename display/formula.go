package display

import (
	"strings"
	"unicode/utf8"
)

// formulaWidth is how wide a line of a displayed formula may be, in ems of its
// text: a column of print, or of a notebook in a narrow window.
const formulaWidth = 34.0

// breakFormula writes a formula that is wider than a line as several, aligned
// behind its first sign of relation. It is broken before the signs of relation,
// of addition and of subtraction that stand outside of brackets, else before
// those inside of one pair of \left and \right, which then becomes a pair of a
// fixed size. A formula that cannot be broken so, or that its author has laid
// out, is returned as it is.
func breakFormula(tex string) string {
	if strings.ContainsAny(tex, "&") || strings.Contains(tex, `\\`) || strings.Contains(tex, `\begin`) {
		return tex
	}
	as := atoms(tex)
	if widthOf(as) <= formulaWidth {
		return tex
	}
	first := -1 // the relation at which the lines are aligned
	for i, a := range as {
		if a.kind == relation && a.depth == 0 {
			first = i
			break
		}
	}
	if first < 1 || first == len(as)-1 || widthOf(as[:first]) > formulaWidth/2 {
		return tex
	}
	room := formulaWidth - widthOf(as[:first])
	cuts := map[int]bool{}
	for from := first; ; {
		to := lineEnd(as, from, room)
		if to < 0 {
			break
		}
		cuts[to] = true
		from = to
		room = formulaWidth - widthOf(as[:first]) - 2 // the indent
	}
	if len(cuts) == 0 {
		return tex
	}
	// Brackets that a line ends in cannot grow with what they hold.
	size := map[int]string{}
	for cut := range cuts {
		if a := as[cut]; a.depth == 1 {
			s := "big"
			for _, b := range as[a.open:as[a.open].close] {
				if strings.Contains(b.text, `\frac`) || strings.Contains(b.text, `\sum`) || strings.Contains(b.text, `\int`) {
					s = "Big"
				}
			}
			size[a.open], size[as[a.open].close] = s, s
		}
	}
	var b strings.Builder
	b.WriteString(`\begin{aligned} `)
	for i, a := range as {
		text := a.text
		if s := size[i]; s != "" {
			text = strings.Replace(strings.Replace(text, `\left`, `\`+s+"l", 1), `\right`, `\`+s+"r", 1)
		}
		switch {
		case i == first:
			b.WriteString("&")
		case cuts[i] && a.kind == relation:
			b.WriteString(` \\ &`)
		case cuts[i]:
			b.WriteString(` \\ &\quad {}`)
		}
		b.WriteString(text)
	}
	b.WriteString(` \end{aligned}`)
	return b.String()
}

// lineEnd returns the atom before which the line that begins at from ends, -1
// if the rest fits or cannot be broken. A place outside of brackets is
// preferred if the line is at least half full there.
func lineEnd(as []atom, from int, room float64) int {
	if widthOf(as[from:]) <= room {
		return -1
	}
	outside, inside, w := -1, -1, 0.0
	for i := from; i < len(as); i++ {
		fits := w <= room
		if i > from && as[i].breaks {
			switch {
			case as[i].depth == 0 && (fits || outside < 0 && inside < 0):
				outside = i
				if w < room/2 && !fits {
					return i
				}
			case as[i].depth == 1 && (fits || outside < 0 && inside < 0):
				inside = i
			}
		}
		if !fits && (outside >= 0 || inside >= 0) {
			break
		}
		w += as[i].width
	}
	if inside > outside && (outside < 0 || widthOf(as[from:outside]) < room/2) {
		return inside
	}
	return outside
}

type atomKind byte

const (
	ordinary atomKind = iota
	relation
	sign // plus, minus
	opening
	closing
)

// An atom is a piece of a formula that stays together.
type atom struct {
	text        string
	kind        atomKind
	width       float64
	depth       int  // pairs of \left and \right around it
	open, close int  // indices of the brackets around it; of an opening one, its partner
	breaks      bool // a line may end before it
}

func widthOf(as []atom) float64 {
	w := 0.0
	for _, a := range as {
		w += a.width
	}
	return w
}

// atoms takes a formula apart. Groups in braces are whole, with the command
// that they belong to.
func atoms(tex string) []atom {
	var out []atom
	var open []int
	for rest := tex; rest != ""; {
		t, tail := atomText(rest)
		rest = tail
		a := atom{text: t, width: texWidth(t), depth: len(open)}
		if len(open) > 0 {
			a.open = open[len(open)-1]
		}
		word := strings.TrimSpace(t)
		switch {
		case strings.HasPrefix(word, `\left`) && !isLetter(word, 5):
			a.kind = opening
			open = append(open, len(out))
		case strings.HasPrefix(word, `\right`) && !isLetter(word, 6):
			a.kind = closing
			if n := len(open); n > 0 {
				out[open[n-1]].close = len(out)
				a.depth, open = n-1, open[:n-1]
			}
		case strings.Contains(` = \approx \to \equiv \simeq \sim \le \leq \ge \geq \ll \gg < > `, " "+word+" ") && word != "":
			a.kind, a.breaks = relation, true
		case word == "+" || word == "-" || word == `\pm`:
			if k := lastKind(out); k == ordinary || k == closing {
				a.kind, a.breaks = sign, true
			}
		}
		out = append(out, a)
	}
	if len(open) > 0 {
		return nil // brackets that do not close
	}
	return out
}

// lastKind is the kind of what stands before; a formula begins as after a
// relation, so that its minus is a sign of a number.
func lastKind(as []atom) atomKind {
	for i := len(as) - 1; i >= 0; i-- {
		if strings.TrimSpace(as[i].text) != "" {
			return as[i].kind
		}
	}
	return relation
}

func isLetter(s string, i int) bool {
	return i < len(s) && (s[i] >= 'a' && s[i] <= 'z' || s[i] >= 'A' && s[i] <= 'Z')
}

// atomText takes one atom from the front: spaces before it, a command with the
// groups and scripts that follow, a group, or a character.
func atomText(s string) (text, rest string) {
	n := len(s) - len(strings.TrimLeft(s, " "))
	if n == len(s) {
		return s, ""
	}
	switch s[n] {
	case '\\':
		m := n + 1
		for isLetter(s, m) {
			m++
		}
		if m == n+1 { // \, and the like
			_, k := utf8.DecodeRuneInString(s[m:])
			m += k
		}
		if name := s[n:m]; name == `\left` || name == `\right` {
			t, _ := atomText(s[m:])
			return s[:m+len(t)], s[m+len(t):]
		}
		n = m
		for n < len(s) && s[n] == '{' { // arguments
			n += groupLength(s[n:])
		}
	case '{':
		n += groupLength(s[n:])
	default:
		_, k := utf8.DecodeRuneInString(s[n:])
		n += k
	}
	for n < len(s) && (s[n] == '^' || s[n] == '_') && n+1 < len(s) {
		t, _ := atomText(s[n+1:])
		if t == "" {
			break
		}
		n += 1 + len(t)
	}
	return s[:n], s[n:]
}

// groupLength returns how long the group in braces at the front is.
func groupLength(s string) int {
	depth := 0
	for i := 0; i < len(s); i++ {
		switch s[i] {
		case '\\':
			i++
		case '{':
			depth++
		case '}':
			if depth--; depth == 0 {
				return i + 1
			}
		}
	}
	return len(s)
}

// texWidth estimates the width of LaTeX in ems, from the widths of Computer
// Modern: enough to tell where a line is full.
func texWidth(s string) float64 {
	w := 0.0
	for s != "" {
		switch c := s[0]; {
		case c == ' ':
			s = s[1:]
		case c == '^' || c == '_':
			t, _ := atomText(s[1:])
			w += 0.7 * texWidth(t)
			s = s[1+len(t):]
		case c == '{':
			n := groupLength(s)
			w += texWidth(s[1:max(n-1, 1)])
			s = s[n:]
		case c == '\\':
			m := 1
			for isLetter(s, m) {
				m++
			}
			if m == 1 && len(s) > 1 {
				_, k := utf8.DecodeRuneInString(s[1:])
				m += k
			}
			name := s[:m]
			s = s[m:]
			switch name {
			case `\frac`, `\dfrac`, `\tfrac`:
				n := groupLength(s)
				k := n + groupLength(s[n:])
				w += max(texWidth(s[:n]), texWidth(s[n:k])) + 0.25
				s = s[k:]
			case `\sqrt`:
				w += 0.9
			case `\ln`, `\exp`, `\sin`, `\cos`, `\log`, `\tanh`, `\coth`, `\sinh`, `\cosh`:
				w += 0.5*float64(m-1) + 0.17
			case `\times`, `\cdot`, `\pm`, `\to`, `\approx`, `\lt`, `\gt`, `\le`, `\ge`:
				w += 1.25
			case `\sum`, `\prod`, `\int`:
				w += 1.2
			case `\left`, `\right`, `\mathrm`, `\text`, `\mathit`, `\limits`, `\!`:
			case `\,`:
				w += 0.17
			case `\;`, `\:`, `\ `:
				w += 0.3
			case `\quad`:
				w++
			default:
				w += 0.6
			}
		case c == '=' || c == '<' || c == '>':
			w += 1.33
			s = s[1:]
		case c == '+' || c == '-':
			w += 1.22
			s = s[1:]
		case c == '(' || c == ')' || c == '[' || c == ']':
			w += 0.39
			s = s[1:]
		case c == '.' || c == ',':
			w += 0.28
			s = s[1:]
		case c >= '0' && c <= '9':
			w += 0.5
			s = s[1:]
		default:
			_, k := utf8.DecodeRuneInString(s)
			w += 0.58
			s = s[k:]
		}
	}
	return w
}
