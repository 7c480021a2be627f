package display

import (
	"strings"
	"unicode/utf8"

	"levelsum/display/internal/mark"
)

// plainFormula writes a formula in LaTeX as text: S = k ln W. What it does not
// know leaves the formula as it is.
func plainFormula(tex string) string {
	s, ok := plainTeX(tex)
	if !ok {
		return oneLineText(tex)
	}
	return tidy(s)
}

var looseBrackets = strings.NewReplacer("( ", "(", " )", ")", "[ ", "[", " ]", "]")

func tidy(s string) string { return looseBrackets.Replace(strings.Join(strings.Fields(s), " ")) }

// plainProse writes the formulas between dollar signs in a text as text.
func plainProse(s string) string {
	parts := strings.Split(strings.ReplaceAll(s, `\$`, "\x00"), "$")
	if len(parts)%2 == 0 {
		return s // a dollar sign that is one
	}
	for i := 1; i < len(parts); i += 2 {
		if t, ok := plainTeX(parts[i]); ok {
			parts[i] = tidy(t)
		} else {
			parts[i] = "$" + parts[i] + "$"
		}
	}
	return strings.ReplaceAll(strings.Join(parts, ""), "\x00", "$")
}

// plainCommands are commands of LaTeX that a sign stands for.
var plainCommands = map[string]string{
	`\,`: " ", `\;`: " ", `\:`: " ", `\ `: " ", `\!`: "", `\quad`: " ", `\qquad`: " ", `\{`: "{", `\}`: "}", `\%`: "%", `\#`: "#", `\&`: "&", `\_`: "_", `\$`: "$", `\|`: "‖",
	`\times`: " × ", `\cdot`: "·", `\pm`: " ± ", `\mp`: " ∓ ", `\to`: " → ", `\rightarrow`: " → ", `\infty`: "∞", `\sum`: "Σ", `\prod`: "Π", `\int`: "∫", `\oint`: "∮",
	`\partial`: "∂", `\nabla`: "∇", `\hbar`: "ħ", `\ell`: "ℓ", `\langle`: "⟨", `\rangle`: "⟩", `\le`: " ≤ ", `\leq`: " ≤ ", `\ge`: " ≥ ", `\geq`: " ≥ ", `\ne`: " ≠ ", `\neq`: " ≠ ",
	`\approx`: " ≈ ", `\simeq`: " ≃ ", `\sim`: " ~ ", `\propto`: " ∝ ", `\equiv`: " ≡ ", `\ll`: " ≪ ", `\gg`: " ≫ ", `\lt`: " < ", `\gt`: " > ", `\ldots`: "…", `\dots`: "…", `\cdots`: "…",
	`\circ`: "°", `\prime`: "′", `\displaystyle`: "", `\textstyle`: "", `\limits`: "", `\vert`: "|", `\mid`: "|",
	`\left`: "", `\right`: "", `\bigl`: "", `\bigr`: "", `\Bigl`: "", `\Bigr`: "", `\big`: "", `\Big`: "",
}

// plainFunctions keep their names, apart from what follows.
const plainFunctions = " ln exp log lg sin cos tan sinh cosh tanh coth arctan max min lim det "

func plainTeX(tex string) (string, bool) {
	var b strings.Builder
	for s := tex; s != ""; {
		switch c := s[0]; {
		case c == '&', c == '}', strings.HasPrefix(s, `\\`):
			return "", false
		case c == '{':
			body, rest := braces(s)
			t, ok := plainTeX(body)
			if !ok {
				return "", false
			}
			b.WriteString(t)
			s = rest
		case c == '^' || c == '_':
			arg, rest := texArgument(s[1:])
			t, ok := plainTeX(arg)
			if !ok || t == "" {
				return "", false
			}
			b.WriteString(script(c, t))
			s = rest
		case c == '\\':
			n := 1
			for isLetter(s, n) {
				n++
			}
			if n == 1 {
				_, k := utf8.DecodeRuneInString(s[1:])
				n += k
			}
			name := s[:n]
			s = s[n:]
			if name == `\left` || name == `\right` {
				s = strings.TrimPrefix(strings.TrimLeft(s, " "), ".")
			}
			sign, known := plainCommands[name]
			switch {
			case known:
				b.WriteString(sign)
				if sign == "⟨" {
					s = strings.TrimLeft(s, " ")
				}
			case strings.Contains(plainFunctions, " "+name[1:]+" "):
				if t := b.String(); t != "" && isLetter(t, len(t)-1) {
					b.WriteByte(' ')
				}
				b.WriteString(name[1:])
				if t := strings.TrimLeft(s, " "); t != "" && !strings.ContainsAny(t[:1], "^_()[") {
					b.WriteByte(' ')
				}
			case name == `\frac` || name == `\tfrac` || name == `\dfrac`:
				over, rest := texArgument(s)
				under, rest := texArgument(rest)
				x, ok1 := plainTeX(over)
				y, ok2 := plainTeX(under)
				if !ok1 || !ok2 || x == "" || y == "" {
					return "", false
				}
				if t := b.String(); t != "" && !strings.ContainsAny(t[len(t)-1:], " ([{") {
					b.WriteByte(' ')
				}
				b.WriteString(bracketed(x) + "/" + bracketed(y))
				if s = rest; strings.TrimLeft(rest, " ") != "" && !strings.ContainsAny(rest[:1], " )]}^\\") {
					b.WriteByte(' ')
				}
			case name == `\sqrt`:
				arg, rest := texArgument(s)
				x, ok := plainTeX(arg)
				if !ok {
					return "", false
				}
				b.WriteString("√" + bracketed(x))
				s = rest
			case name == `\mathrm` || name == `\text` || name == `\mathit` || name == `\mathbf` || name == `\operatorname` || name == `\mathsf`:
				arg, rest := texArgument(s)
				x, ok := plainTeX(arg)
				if !ok {
					return "", false
				}
				b.WriteString(x)
				s = rest
			default:
				g := mark.Plain(mark.Upright(name))
				if g == name {
					return "", false
				}
				b.WriteString(g)
				if len(s) > 1 && s[0] == ' ' && isLetter(s, 1) { // the space ends the name only
					s = s[1:]
				}
			}
		default:
			_, k := utf8.DecodeRuneInString(s)
			b.WriteString(s[:k])
			s = s[k:]
		}
	}
	return b.String(), true
}

// script writes what is raised or lowered.
func script(sign byte, t string) string {
	t = strings.TrimSpace(t)
	if sign == '^' {
		if t == "°" || t == "′" {
			return t
		}
		if u, ok := mark.Superscript(t); ok {
			return u
		}
	}
	if utf8.RuneCountInString(t) == 1 {
		return string(sign) + t
	}
	for _, r := range t {
		if !(r >= 'a' && r <= 'z' || r >= 'A' && r <= 'Z' || r >= '0' && r <= '9') {
			return string(sign) + "(" + t + ")"
		}
	}
	return string(sign) + t
}

// bracketed puts brackets around what has parts.
func bracketed(t string) string {
	t = strings.TrimSpace(t)
	depth := 0
	for i, r := range t {
		switch {
		case strings.ContainsRune("([{⟨", r):
			depth++
		case strings.ContainsRune(")]}⟩", r):
			depth--
		case depth == 0 && (strings.ContainsRune(" /·+−", r) || r == '-' && i > 0):
			return "(" + strings.Join(strings.Fields(t), " ") + ")"
		}
	}
	return t
}

// texArgument takes an argument from the front: a group, a command, a rune.
func texArgument(s string) (arg, rest string) {
	s = strings.TrimLeft(s, " ")
	switch {
	case s == "":
		return "", ""
	case s[0] == '{':
		return braces(s)
	case s[0] == '\\':
		n := 1
		for isLetter(s, n) {
			n++
		}
		if n > 1 && strings.Contains(` \mathrm \text \mathit \mathbf \operatorname \mathsf \sqrt \frac \tfrac `, " "+s[:n]+" ") {
			for n < len(s) && s[n] == '{' {
				n += groupLength(s[n:])
			}
		}
		return s[:n], s[n:]
	}
	_, k := utf8.DecodeRuneInString(s)
	return s[:k], s[k:]
}

// braces takes the group at the front apart.
func braces(s string) (body, rest string) {
	n := groupLength(s)
	return strings.TrimSuffix(s[1:n], "}"), s[n:]
}
