// Package mark is the small notation that quantities and units are written in
// everywhere in display: "C_{p,m}", "\theta_D", "J/(mol K)", "cm-1". It parses
// them into runs of text, and writes runs as plain text, HTML and LaTeX.
package mark

import (
	"strings"
	"unicode"
	"unicode/utf8"
)

// A Run is a piece of text of one kind.
type Run struct {
	Text   string
	Italic bool
	Shift  int // -1 subscript, 0 on the line, +1 superscript
}

// Symbol parses the name of a quantity. A letter that stands alone is a
// quantity's symbol and italic; words and digits are upright. In a subscript
// only the letters that name quantities or running numbers (p, V, T, x, n, i,
// j) are italic, so that C_p and C_{p,m} come out as the Green Book has them.
// Greek letters may be written \theta or θ.
func Symbol(s string) []Run { return parse(s, symbols) }

// Label parses running text with _{}, ^{} and Greek names. It stays upright,
// but for a single letter with a sub- or superscript, which is a symbol: the
// C_p of "from C_p". An underscore after a word, as in run_7.csv, is itself.
func Label(s string) []Run { return parse(s, running) }

// Name parses the name of a result: running text whose first word may be a
// symbol, as in "S°(298.15 K)" or "T, all lines".
func Name(s string) []Run {
	r, n := utf8.DecodeRuneInString(s)
	next, _ := utf8.DecodeRuneInString(s[n:])
	if !unicode.IsLetter(r) || n < len(s) && (unicode.IsLetter(next) || unicode.IsDigit(next) || next == '_' || next == '^' || next == '-') ||
		strings.ContainsRune("aAI", r) && next == ' ' {
		return Label(s)
	}
	return append(italics(s[:n], 0), Label(s[n:])...)
}

// Upright parses text with _{}, ^{} and Greek names in which nothing is
// italic, such as term symbols.
func Upright(s string) []Run { return parse(s, upright) }

type manner int

const (
	symbols manner = iota
	running
	upright
)

func parse(s string, how manner) []Run {
	var out []Run
	symbol := how == symbols
	hung := false // a symbol stands before the shift that comes
	add := func(text string, shift int) {
		if text == "" {
			return
		}
		if how == upright || how == running && (shift == 0 || !hung) {
			out = append(out, Run{Text: text, Shift: shift})
			return
		}
		out = append(out, italics(text, shift)...)
	}
	known := how != upright && substances(s) // then H_2 is a substance too
	var plain strings.Builder
	for whole := s; s != ""; {
		if at := len(whole) - len(s); how != upright && s[0] >= 'A' && s[0] <= 'Z' && wordBegins(whole, at) {
			n, sure := chemical(s)
			of := at > 0 && whole[at-1] == '(' && strings.HasPrefix(s[n:], ")") // as in p(O_2)
			if sure == surely || sure == perhaps && (known || of && how == symbols && at > 1) {
				add(plain.String(), 0)
				plain.Reset()
				out = append(out, substance(s[:n])...)
				hung = false
				s = s[n:]
				continue
			}
		}
		switch c := s[0]; {
		case c == '-' && symbol && isMinus(whole, len(whole)-len(s)):
			plain.WriteString("−")
			s = s[1:]
		case (c == '_' || c == '^') && len(s) > 1 && s[1] != ' ':
			shift := -1
			if c == '^' {
				shift = 1
			}
			body, rest := argument(s[1:])
			if c == '_' && symbol && plain.Len() == 0 && len(out) == 0 {
				plain.WriteByte(c) // nothing to hang a subscript on
				s = s[1:]
				continue
			}
			base := plain.String()
			if how == running {
				was := hung
				r, n := utf8.DecodeLastRuneInString(base)
				before, _ := utf8.DecodeLastRuneInString(base[:len(base)-n])
				hung = base == "" && was || unicode.IsLetter(r) && (n == len(base) || !unicode.IsLetter(before) && !unicode.IsDigit(before))
				if c == '_' && !hung && s[1] != '{' { // a file name, not a symbol
					plain.WriteByte(c)
					s = s[1:]
					continue
				}
			}
			plain.Reset()
			if how == running && base != "" {
				r, n := utf8.DecodeLastRuneInString(base)
				if hung {
					add(base[:len(base)-n], 0)
					out = append(out, italics(string(r), 0)...)
					base = ""
				}
			}
			add(base, 0)
			add(minus(greek(body)), shift)
			s = rest
		case strings.HasPrefix(s, `\mathrm{`) || strings.HasPrefix(s, `\text{`):
			add(plain.String(), 0)
			plain.Reset()
			body, rest := group(s[strings.IndexByte(s, '{'):])
			out = append(out, parse(body, upright)...)
			s, hung = rest, false
		case c == '\\':
			name := letters(s[1:])
			if g, ok := greekLetters[name]; ok {
				plain.WriteString(g)
				s = s[1+len(name):]
				continue
			}
			plain.WriteByte(c)
			s = s[1:]
		default:
			c, n := utf8.DecodeRuneInString(s)
			if base, shift := unshifted(c); shift != 0 {
				add(plain.String(), 0)
				plain.Reset()
				if k := len(out) - 1; k >= 0 && out[k].Shift == shift {
					out[k].Text += string(base)
				} else {
					out = append(out, Run{Text: string(base), Shift: shift})
				}
				s = s[n:]
				continue
			}
			plain.WriteString(s[:n])
			s = s[n:]
		}
	}
	add(plain.String(), 0)
	return out
}

// isMinus reports whether the hyphen at i is the sign of what follows, as in
// exp(-E/kT), and not part of a word.
func isMinus(s string, i int) bool {
	return i+1 < len(s) && (i == 0 && s[1] != ' ' || i > 0 && (strings.IndexByte("( =,)]}", s[i-1]) >= 0 || strings.HasSuffix(s[:i], "°")))
}

// minus sets the sign of a power or index.
func minus(s string) string {
	if rest, ok := strings.CutPrefix(s, "-"); ok && (rest == "" || strings.Trim(rest, "0123456789./") == "" || letters(rest) == rest) {
		return "−" + rest
	}
	if rest, ok := strings.CutSuffix(s, "-"); ok && rest != "" && strings.Trim(rest, "0123456789") == "" {
		return rest + "−" // the charge of an ion
	}
	return s
}

// group takes a group in braces from the front of s, braces in it included.
func group(s string) (body, rest string) {
	depth := 0
	for i := 0; i < len(s); i++ {
		switch s[i] {
		case '{':
			depth++
		case '}':
			if depth--; depth == 0 {
				return s[1:i], s[i+1:]
			}
		}
	}
	return s[1:], ""
}

// argument takes the argument of _ or ^ from the front of s: a braced group, a
// Greek name, a signed number or one rune.
func argument(s string) (arg, rest string) {
	switch {
	case s[0] == '{':
		if i := strings.IndexByte(s, '}'); i > 0 {
			return s[1:i], s[i+1:]
		}
		return s[1:], ""
	case s[0] == '\\':
		n := 1 + len(letters(s[1:]))
		return s[:n], s[n:]
	}
	n := 0
	if s[0] == '-' || s[0] == '+' {
		n = 1
	}
	for n < len(s) && s[n] >= '0' && s[n] <= '9' {
		n++
	}
	if n > 1 || n == 1 && s[0] >= '0' && s[0] <= '9' {
		return s[:n], s[n:]
	}
	_, n = utf8.DecodeRuneInString(s)
	return s[:n], s[n:]
}

func letters(s string) string {
	n := 0
	for n < len(s) && (s[n] >= 'a' && s[n] <= 'z' || s[n] >= 'A' && s[n] <= 'Z') {
		n++
	}
	return s[:n]
}

func greek(s string) string {
	var b strings.Builder
	for i := 0; i < len(s); {
		if s[i] == '\\' {
			name := letters(s[i+1:])
			if g, ok := greekLetters[name]; ok {
				b.WriteString(g)
				i += 1 + len(name)
				continue
			}
		}
		b.WriteByte(s[i])
		i++
	}
	return b.String()
}

// italics splits text into words and sets single letters italic.
func italics(text string, shift int) []Run {
	var out []Run
	push := func(s string, it bool) {
		if n := len(out); n > 0 && out[n-1].Italic == it {
			out[n-1].Text += s
			return
		}
		out = append(out, Run{Text: s, Italic: it, Shift: shift})
	}
	rs := []rune(text)
	for i := 0; i < len(rs); {
		j := i
		for j < len(rs) && unicode.IsLetter(rs[j]) && rs[j] != 'Δ' { // Δ goes with any symbol
			j++
		}
		if j == i {
			push(string(rs[i]), false)
			i++
			continue
		}
		word := rs[i:j]
		if products[string(word)] && shift == 0 {
			push(string(word), true)
			i = j
			continue
		}
		it := len(word) == 1 && !(unicode.Is(unicode.Greek, word[0]) && unicode.IsUpper(word[0]))
		if it && shift == 0 && i > 1 && unicode.IsDigit(rs[i-2]) && unicode.IsSpace(rs[i-1]) && strings.ContainsRune("KJmsgW", word[0]) {
			it = false // the unit of a number: H(298.15 K)
		}
		if it && shift < 0 {
			it = strings.ContainsRune("pVTxnij", word[0])
		}
		push(string(word), it)
		i = j
	}
	return out
}

// products of symbols that are written without a space.
var products = map[string]bool{"kT": true, "RT": true, "nRT": true, "pV": true, "hc": true, "hν": true, "ħω": true}

var greekLetters = map[string]string{
	"alpha": "α", "beta": "β", "gamma": "γ", "delta": "δ", "epsilon": "ε",
	"varepsilon": "ε", "zeta": "ζ", "eta": "η", "theta": "θ", "iota": "ι",
	"kappa": "κ", "lambda": "λ", "mu": "μ", "nu": "ν", "xi": "ξ", "pi": "π",
	"rho": "ρ", "sigma": "σ", "tau": "τ", "upsilon": "υ", "phi": "φ",
	"varphi": "φ", "chi": "χ", "psi": "ψ", "omega": "ω", "Gamma": "Γ",
	"Delta": "Δ", "Theta": "Θ", "Lambda": "Λ", "Xi": "Ξ", "Pi": "Π",
	"Sigma": "Σ", "Phi": "Φ", "Psi": "Ψ", "Omega": "Ω", "hbar": "ħ",
	"degree": "°", "cdot": "·", "times": "×", "pm": "±", "infty": "∞",
}

var superscripts = map[rune]rune{
	'0': '⁰', '1': '¹', '2': '²', '3': '³', '4': '⁴', '5': '⁵', '6': '⁶',
	'7': '⁷', '8': '⁸', '9': '⁹', '-': '⁻', '−': '⁻', '+': '⁺',
}

// unshifted returns what a Unicode super- or subscript stands for.
func unshifted(r rune) (base rune, shift int) {
	switch {
	case r == '⁻':
		return '−', 1
	case r == '⁺':
		return '+', 1
	case r == '¹':
		return '1', 1
	case r == '²' || r == '³':
		return '2' + r - '²', 1
	case r == '⁰' || r >= '⁴' && r <= '⁹':
		return '0' + r - '⁰', 1
	case r >= '₀' && r <= '₉':
		return '0' + r - '₀', -1
	}
	return r, 0
}

// Plain writes runs as text. Superscript numbers become Unicode superscripts,
// subscripts follow an underscore unless they are short (Cp, θD stay apart as
// C_p, θ_D, so that the text can be read back).
func Plain(rs []Run) string {
	var b strings.Builder
	for _, g := range groups(rs) {
		text := g.text()
		switch g.shift {
		case 0:
			b.WriteString(text)
		case 1:
			if s, ok := Superscript(text); ok {
				b.WriteString(s)
				continue
			}
			fallthrough
		default:
			sign := "_"
			if g.shift > 0 {
				sign = "^"
			}
			b.WriteString(sign)
			if utf8.RuneCountInString(text) > 1 {
				text = "{" + text + "}"
			}
			b.WriteString(text)
		}
	}
	return strings.ReplaceAll(b.String(), "\u00a0", " ")
}

// Superscript writes s in Unicode superscripts, if there are such.
func Superscript(s string) (string, bool) {
	var b strings.Builder
	for _, r := range s {
		u, ok := superscripts[r]
		if !ok {
			return s, false
		}
		b.WriteRune(u)
	}
	return b.String(), true
}

// shifted is a stretch of runs on one height.
type shifted struct {
	shift int
	runs  []Run
}

func (g shifted) text() string {
	var b strings.Builder
	for _, r := range g.runs {
		b.WriteString(r.Text)
	}
	return b.String()
}

// groups joins neighbouring runs of the same shift.
func groups(rs []Run) []shifted {
	var out []shifted
	for _, r := range rs {
		if n := len(out); n > 0 && out[n-1].shift == r.Shift {
			out[n-1].runs = append(out[n-1].runs, r)
			continue
		}
		out = append(out, shifted{shift: r.Shift, runs: []Run{r}})
	}
	return out
}

// HTML writes runs as HTML, everything in them escaped.
func HTML(rs []Run) string {
	var b strings.Builder
	for _, g := range groups(rs) {
		tag := [...]string{"sub", "", "sup"}[g.shift+1]
		if tag != "" {
			b.WriteString("<" + tag + ">")
		}
		for _, r := range g.runs {
			if r.Italic {
				b.WriteString("<i>" + Escape(r.Text) + "</i>")
			} else {
				b.WriteString(Escape(r.Text))
			}
		}
		if tag != "" {
			b.WriteString("</" + tag + ">")
		}
	}
	return b.String()
}

var escaper = strings.NewReplacer("&", "&amp;", "<", "&lt;", ">", "&gt;", `"`, "&#34;", "'", "&#39;")

// Escape makes s safe in HTML and XML, text and attributes. Characters that
// XML cannot hold become U+FFFD.
func Escape(s string) string {
	return escaper.Replace(Clean(s))
}

// Clean replaces what XML cannot hold (most control characters, broken UTF-8)
// by U+FFFD.
func Clean(s string) string {
	return strings.Map(func(r rune) rune {
		if r < 0x20 && r != '\t' && r != '\n' && r != '\r' || r == 0xFFFE || r == 0xFFFF {
			return 0xFFFD
		}
		return r
	}, s)
}
