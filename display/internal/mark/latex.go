package mark

import "strings"

// LaTeX writes runs as LaTeX text, with $...$ for symbols and shifts.
func LaTeX(rs []Run) string {
	var b strings.Builder
	for _, g := range groups(rs) {
		if g.shift != 0 {
			b.WriteString("$" + math(g) + "$")
			continue
		}
		for _, r := range g.runs {
			if r.Italic {
				b.WriteString("$" + greekToLaTeX(r.Text) + "$")
			} else {
				b.WriteString(EscapeLaTeX(r.Text))
			}
		}
	}
	// Join what stands side by side; a command must not run into a letter.
	parts := strings.Split(b.String(), "$$")
	for i := range parts[1:] {
		if c := parts[i+1]; c != "" && letters(c[:1]) != "" {
			parts[i+1] = " " + c
		}
	}
	return strings.Join(parts, "")
}

// Math writes runs for LaTeX's math mode.
func Math(rs []Run) string {
	var b strings.Builder
	for _, g := range groups(rs) {
		b.WriteString(math(g))
	}
	return b.String()
}

func math(g shifted) string {
	var b strings.Builder
	for _, r := range g.runs {
		if r.Italic {
			b.WriteString(greekToLaTeX(r.Text))
			continue
		}
		text := r.Text
		if strings.TrimLeft(text, "0123456789,+-−=.() ") == "" {
			b.WriteString(strings.ReplaceAll(text, "−", "-"))
			continue
		}
		text = strings.ReplaceAll(mathEscape(strings.ReplaceAll(text, "−", "-")), " ", `\ `)
		b.WriteString(`\mathrm{` + greekToLaTeX(text) + "}")
	}
	switch g.shift {
	case 1:
		return "^{" + b.String() + "}"
	case -1:
		return "_{" + b.String() + "}"
	}
	return b.String()
}

var mathEscaper = strings.NewReplacer(`\`, `\backslash `, "{", `\{`, "}", `\}`, "$", `\$`, "%", `\%`, "#", `\#`, "&", `\&`,
	"_", `\_`, "^", `\hat{}`, "~", `\sim `)

func mathEscape(s string) string { return mathEscaper.Replace(Clean(s)) }

var textEscaper = strings.NewReplacer(`\`, `\textbackslash{}`, "{", `\{`, "}", `\}`, "$", `\$`, "%", `\%`, "#", `\#`, "&", `\&`,
	"_", `\_`, "^", `\textasciicircum{}`, "~", `\textasciitilde{}`, "<", `\textless{}`, ">", `\textgreater{}`,
	"−", `$-$`, "×", `$\times$`, "±", `$\pm$`, "°", `$^\circ$`, "·", `$\cdot$`, "\u00a0", "~")

// EscapeLaTeX makes text from data safe in LaTeX.
func EscapeLaTeX(s string) string {
	s = textEscaper.Replace(strings.ReplaceAll(Clean(s), "\n", " "))
	var b strings.Builder
	for _, r := range s {
		if n, ok := latexGreek[r]; ok {
			b.WriteString("$" + n + "$")
			continue
		}
		b.WriteRune(r)
	}
	return b.String()
}

func greekToLaTeX(s string) string {
	var b strings.Builder
	for _, r := range s {
		if n, ok := latexGreek[r]; ok {
			b.WriteString(n + " ")
			continue
		}
		b.WriteRune(r)
	}
	return strings.TrimSuffix(b.String(), " ")
}

var latexGreek = map[rune]string{
	'α': `\alpha`, 'β': `\beta`, 'γ': `\gamma`, 'δ': `\delta`, 'ε': `\varepsilon`, 'ζ': `\zeta`,
	'η': `\eta`, 'θ': `\theta`, 'ι': `\iota`, 'κ': `\kappa`, 'λ': `\lambda`, 'μ': `\mu`, 'µ': `\mu`,
	'ν': `\nu`, 'ξ': `\xi`, 'π': `\pi`, 'ρ': `\rho`, 'σ': `\sigma`, 'τ': `\tau`, 'υ': `\upsilon`,
	'φ': `\varphi`, 'χ': `\chi`, 'ψ': `\psi`, 'ω': `\omega`, 'Γ': `\Gamma`, 'Δ': `\Delta`,
	'Θ': `\Theta`, 'Λ': `\Lambda`, 'Ξ': `\Xi`, 'Π': `\Pi`, 'Σ': `\Sigma`, 'Φ': `\Phi`,
	'Ψ': `\Psi`, 'Ω': `\Omega`, 'ħ': `\hbar`, '°': `^{\circ}`, '·': `\cdot`, '×': `\times`, '∞': `\infty`,
}
