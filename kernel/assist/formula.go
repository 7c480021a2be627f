package assist

import (
	"regexp"
	"strings"
	"unicode"
)

// formulas writes the blocks of Markdown that are formulas in LaTeX, which front
// ends set. Plain text keeps them as they stand in the source.
func formulas(markdown string) string {
	lines := strings.Split(markdown, "\n")
	var out []string
	for i := 0; i < len(lines); {
		if !strings.HasPrefix(lines[i], "\t") {
			out = append(out, lines[i])
			i++
			continue
		}
		j := i
		for j < len(lines) && (strings.HasPrefix(lines[j], "\t") || lines[j] == "" && j+1 < len(lines) && strings.HasPrefix(lines[j+1], "\t")) {
			j++
		}
		if set, ok := latexBlock(lines[i:j]); ok {
			out = append(out, set...)
		} else {
			out = append(out, lines[i:j]...)
		}
		i = j
	}
	return strings.Join(out, "\n")
}

// latexBlock sets every line of a block, or none.
func latexBlock(block []string) (out []string, ok bool) {
	for _, l := range block {
		l = strings.TrimSpace(l)
		if l == "" {
			continue
		}
		if !isFormula(l) {
			return nil, false
		}
		tex, ok := latex(l)
		if !ok {
			return nil, false
		}
		out = append(out, "$$"+tex+"$$")
	}
	return out, len(out) > 0
}

var (
	goCall  = regexp.MustCompile(`\b[a-z]\w*\.[A-Z]\w*|:=|//|"|\bfunc\b|\b[A-Z]\w+\{|[;$\\]|\b(?:NaN|Inf)\b`)
	words   = regexp.MustCompile(`[A-Za-z]{3,}`)
	related = regexp.MustCompile(`[=≥≤→≈<>∝]|^[-+∫Σ]`)
)

// mostWords is how many words a formula has; more are a sentence.
const mostWords = 5

// isFormula tells a formula from code, tables and sentences.
func isFormula(line string) bool {
	n := 0
	for _, w := range words.FindAllString(line, -1) {
		if !functions[w] {
			n++
		}
	}
	return related.MatchString(line) && !goCall.MatchString(line) && n <= mostWords
}

var (
	raised  = map[rune]string{'⁰': "0", '¹': "1", '²': "2", '³': "3", '⁴': "4", '⁵': "5", '⁶': "6", '⁷': "7", '⁸': "8", '⁹': "9", '⁺': "+", '⁻': "-", '⁼': "=", '⁽': "(", '⁾': ")", 'ⁿ': "n", 'ⁱ': "i", 'ᵃ': "a", 'ᵇ': "b", 'ᶜ': "c", 'ᵈ': "d", 'ᵉ': "e", 'ᵏ': "k", 'ᵐ': "m", 'ᵖ': "p", 'ᵗ': "t", 'ᵘ': "u", 'ᵛ': "v", 'ʷ': "w", 'ˣ': "x", 'ʸ': "y", 'ᶻ': "z", 'ʲ': "j", 'ʰ': "h", 'ˢ': "s", 'ʳ': "r", 'ᵀ': "T", 'ᴶ': "J", 'ᵅ': `\alpha `, 'ᵝ': `\beta `, 'ᵞ': `\gamma `, 'ᐟ': "/", '⸍': "/", '°': `\circ `, '′': `\prime `}
	lowered = map[rune]string{'₀': "0", '₁': "1", '₂': "2", '₃': "3", '₄': "4", '₅': "5", '₆': "6", '₇': "7", '₈': "8", '₉': "9", '₊': "+", '₋': "-", '₌': "=", '₍': "(", '₎': ")", 'ₐ': "a", 'ₑ': "e", 'ₕ': "h", 'ᵢ': "i", 'ⱼ': "j", 'ₖ': "k", 'ₗ': "l", 'ₘ': "m", 'ₙ': "n", 'ₒ': "o", 'ₚ': "p", 'ᵣ': "r", 'ₛ': "s", 'ₜ': "t", 'ᵤ': "u", 'ᵥ': "v", 'ₓ': "x", 'ᵦ': `\beta `}
	named   = map[rune]string{
		'α': `\alpha`, 'β': `\beta`, 'γ': `\gamma`, 'δ': `\delta`, 'ε': `\varepsilon`, 'ζ': `\zeta`, 'η': `\eta`, 'θ': `\theta`, 'κ': `\kappa`, 'λ': `\lambda`, 'μ': `\mu`, 'ν': `\nu`, 'ξ': `\xi`, 'π': `\pi`, 'ρ': `\rho`, 'σ': `\sigma`, 'τ': `\tau`, 'φ': `\varphi`, 'χ': `\chi`, 'ψ': `\psi`, 'ω': `\omega`,
		'Γ': `\Gamma`, 'Δ': `\Delta`, '∆': `\Delta`, 'Θ': `\Theta`, 'Λ': `\Lambda`, 'Π': `\prod`, '∏': `\prod`, 'Σ': `\sum`, '∑': `\sum`, 'Φ': `\Phi`, 'Ψ': `\Psi`, 'Ω': `\Omega`, 'Ξ': `\Xi`,
		'·': `\cdot`, '×': `\times`, '∫': `\int`, '∂': `\partial`, '→': `\to`, '≥': `\ge`, '≤': `\le`, '≠': `\ne`, '≈': `\approx`, '≪': `\ll`, '≫': `\gg`, '±': `\pm`, '∞': `\infty`, '⟨': `\langle`, '⟩': `\rangle`, '…': `\dots`, '≡': `\equiv`, '∝': `\propto`, 'ħ': `\hbar`, 'ℏ': `\hbar`, '‖': `\Vert`, '∈': `\in`, '½': `\tfrac{1}{2}`, '¼': `\tfrac{1}{4}`, '∓': `\mp`, '″': `''`, '−': "-", '%': `\%`, '#': `\#`, '&': `\&`, '–': "-",
	}
	functions = map[string]bool{"ln": true, "exp": true, "sin": true, "cos": true, "tan": true, "sinh": true, "cosh": true, "tanh": true, "coth": true, "log": true, "max": true, "min": true, "lim": true}
)

// latex writes a formula of letters, raised and lowered signs in LaTeX; ok is
// false if it has a sign that is not known.
func latex(line string) (tex string, ok bool) {
	rs := []rune(line)
	var b strings.Builder
	// run takes the signs of a table from i on.
	run := func(i int, table map[rune]string) (string, int) {
		var s strings.Builder
		for i < len(rs) && table[rs[i]] != "" {
			s.WriteString(table[rs[i]])
			i++
		}
		return strings.TrimSpace(s.String()), i
	}
	letter := func(r rune) bool { return r < unicode.MaxASCII && unicode.IsLetter(r) }
	word := func(i int) int {
		for i < len(rs) && (letter(rs[i]) || unicode.IsDigit(rs[i]) && rs[i] < unicode.MaxASCII) {
			i++
		}
		return i
	}
	// group takes what stands in brackets from i on, or one sign.
	group := func(i int) (string, int) {
		if i < len(rs) && strings.ContainsRune("([{", rs[i]) {
			depth := 0
			for j := i; j < len(rs); j++ {
				switch rs[j] {
				case '(', '[', '{':
					depth++
				case ')', ']', '}':
					depth--
				}
				if depth == 0 {
					inner, good := latex(string(rs[i+1 : j]))
					ok = ok && good
					return inner, j + 1
				}
			}
			return "", -1
		}
		j := i
		if j < len(rs) && (rs[j] == '-' || rs[j] == '+') {
			j++
		}
		if j < len(rs) {
			if w := word(j); w > j {
				j = w
			} else {
				j++
			}
			if j+1 < len(rs) && rs[j] == '_' { // x^p_k is x to the power p_k
				j = word(j + 1)
			}
		}
		inner, good := latex(string(rs[i:j]))
		ok = ok && good
		return inner, j
	}
	ok = true
	for i := 0; i < len(rs); {
		r := rs[i]
		switch {
		case raised[r] != "":
			var s string
			s, i = run(i, raised)
			b.WriteString("^{" + s + "}")
		case lowered[r] != "":
			var s string
			s, i = run(i, lowered)
			b.WriteString("_{" + s + "}")
		case r == '√':
			inner, j := group(i + 1)
			if j < 0 {
				return "", false
			}
			b.WriteString(`\sqrt{` + inner + "}")
			i = j
		case r == '^':
			inner, j := group(i + 1)
			if j < 0 {
				return "", false
			}
			b.WriteString("^{" + inner + "}")
			i = j
		case r == '_':
			if j := word(i + 1); j > i+1 {
				half := strings.Trim(string(rs[i+1:j]), "0123456789") == "" && j+1 < len(rs) && rs[j] == '/' && unicode.IsDigit(rs[j+1])
				if half { // Li_5/2
					j += 2
				}
				s := string(rs[i+1 : j])
				if len(s) > 1 && !half {
					s = `\mathrm{` + s + "}"
				}
				b.WriteString("_{" + s + "}")
				i = j
				break
			}
			inner, j := group(i + 1)
			if j < 0 {
				return "", false
			}
			b.WriteString("_{" + inner + "}")
			i = j
		case named[r] != "":
			b.WriteString(named[r])
			if strings.HasPrefix(named[r], `\`) && unicode.IsLetter(rune(named[r][len(named[r])-1])) {
				b.WriteByte(' ')
			}
			i++
		case letter(r):
			j := i
			for j < len(rs) && letter(rs[j]) {
				j++
			}
			switch w := string(rs[i:j]); {
			case functions[w]:
				b.WriteString(`\` + w + " ")
			case len(w) >= 3:
				b.WriteString(`\text{` + w + "}")
			default:
				b.WriteString(w)
			}
			i = j
		case r == ' ':
			n := i
			for n < len(rs) && rs[n] == ' ' {
				n++
			}
			if n-i > 1 {
				b.WriteString(`\quad `)
			} else if sentence(rs, i) {
				b.WriteString(`\ `)
			} else {
				b.WriteByte(' ')
			}
			i = n
		case (r == '<' || r == '>') && i+1 < len(rs) && rs[i+1] == '=':
			b.WriteString(map[rune]string{'<': `\le `, '>': `\ge `}[r])
			i += 2
		case r == '{' || r == '}':
			b.WriteString(`\` + string(r))
			i++
		case r < unicode.MaxASCII && strings.ContainsRune("0123456789+-=/()[]|,.:<>!*'", r):
			b.WriteRune(r)
			i++
		default:
			return "", false
		}
	}
	return strings.TrimSpace(strings.ReplaceAll(b.String(), "  ", " ")), ok
}

// sentence reports whether the blank at i stands beside a word that is no
// function, where it is to be seen.
func sentence(rs []rune, i int) bool {
	letter := func(j int) bool { return j >= 0 && j < len(rs) && rs[j] < unicode.MaxASCII && unicode.IsLetter(rs[j]) }
	from, to := i, i+1
	for letter(from - 1) {
		from--
	}
	for letter(to) {
		to++
	}
	word := func(w string) bool { return len(w) >= 3 && !functions[w] }
	lower := from > 0 && rs[from-1] == '_'
	return !lower && word(string(rs[from:i])) || word(string(rs[i+1:to]))
}
