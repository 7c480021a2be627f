package display

import (
	"fmt"
	"regexp"
	"slices"
	"strings"
	"testing"
)

var markup = regexp.MustCompile(` \\\\ &(\\quad \{\})?|^\\begin\{aligned\} | \\end\{aligned\}$|&`)

// A long formula keeps all its parts, in lines that fit.
func TestBreakFormula(t *testing.T) {
	term := `{\left(0.07874(19)\,\mathrm{J}\mathrm{\,mol}^{-1}\mathrm{\,K}^{-1}\right)}`
	k := `{\left(1.380649\times 10^{-23}\,\mathrm{J}\mathrm{\,K}^{-1}\right)}`
	for _, test := range []struct {
		name, tex string
		lines     int
		has       string
	}{
		{"sum", `{S} = ` + strings.Join(slices.Repeat([]string{term}, 7), " + "), 4, `\\ &\quad {} + `},
		{"sum in brackets", `{S} = -` + k + ` \left( ` + strings.Join(slices.Repeat([]string{`{0.125} \ln {0.125}`}, 4), " + ") + ` \right)`, 2, `\bigl( {0.125}`},
		{"fractions in brackets", `{S} = ` + k + `\left[ ` + strings.Join(slices.Repeat([]string{`\frac{1.23456789}{1234.56}`}, 9), " - ") + `\right]`, 3, `\Bigl[ \frac`},
		{"relations", `{S} = ` + term + term + ` \approx ` + term + term + ` = ` + term, 3, `\\ & \approx `},
	} {
		got := breakFormula(test.tex)
		if n := strings.Count(got, `\\`) + 1; n != test.lines {
			t.Errorf("%s: %d lines, want %d:\n%s", test.name, n, test.lines, got)
		}
		if !strings.Contains(got, test.has) {
			t.Errorf("%s: no %s in\n%s", test.name, test.has, got)
		}
		for _, line := range strings.Split(got, `\\`) {
			if w := texWidth(markup.ReplaceAllString(line, "")); w > formulaWidth+1 {
				t.Errorf("%s: a line %.1f em wide: %s", test.name, w, line)
			}
		}
		back := markup.ReplaceAllString(got, "")
		back = regexp.MustCompile(`\\[bB]igl`).ReplaceAllString(back, `\left`)
		back = regexp.MustCompile(`\\[bB]igr`).ReplaceAllString(back, `\right`)
		if back != test.tex {
			t.Errorf("%s: without the breaks\n%s\nwant\n%s", test.name, back, test.tex)
		}
	}
}

// What fits, what its author has laid out and what has no place to break stay
// as they are.
func TestBreakFormulaNot(t *testing.T) {
	long := strings.Repeat("{a}", 80)
	for _, tex := range []string{
		`E = m c^2`,
		`-{k} - {x}`,
		`S = ` + long,
		long + ` + ` + long, // nothing to align at
		`S &= ` + long + `\\ &+ ` + long,
		`S = \left( ` + long + ` + ` + long, // does not close
		`S = \frac{` + long + ` + ` + long + `}{2}`,
		"", `\`, `{`, `x_`, `\left`, `{\`,
	} {
		if got := breakFormula(tex); got != tex {
			t.Errorf("%q became %q", tex, got)
		}
	}
}

// JupyterLab drew {S} = -k (0.5 ln 0.5 + ...) of four states 690 px wide and a
// sum of seven parts 1623 px, with an em of 17 px: measured there.
func TestTexWidth(t *testing.T) {
	gibbs := `{S} = -{\left(1.380649\times 10^{-23}\,\mathrm{J}\mathrm{\,K}^{-1}\right)} \left( {0.5} \ln {0.5} + {0.25} \ln {0.25} + {0.125} \ln {0.125} + {0.125} \ln {0.125} \right)`
	var parts []string
	for _, s := range []string{"0.07874(19)", "50.316(63)", "6.543(13)", "22.240(28)", "36.233(33)", "26.147(33)", "78.590(65)"} {
		parts = append(parts, fmt.Sprintf(`{\left(%s\,\mathrm{J}\mathrm{\,mol}^{-1}\mathrm{\,K}^{-1}\right)}`, s))
	}
	sum := `{S(214.85\,\mathrm{K})} = ` + strings.Join(parts, " + ")
	for _, test := range []struct {
		tex string
		px  float64
	}{{gibbs, 690}, {sum, 1623}} {
		if em := texWidth(test.tex); em < 0.9*test.px/17 || em > 1.1*test.px/17 {
			t.Errorf("%.1f em, want %.1f: %s", em, test.px/17, test.tex)
		}
	}
}

// LaTeX has no \lt, and text outside of formulas is text.
func TestDerivationLaTeX(t *testing.T) {
	v := Derivation{Steps: []Step{{Text: `For $x \lt y$ and $\ltimes$, 5 % of_it & "a < b":`, Formula: `[[y]] > [[x]] \gt 0`,
		Symbols: []Symbol{{Name: "y", Meaning: "m", Value: 2}, {Name: "x", Meaning: "m", Value: 1}}}}}.View()
	tex, md := v.Data["text/latex"].(string), v.Data["text/markdown"].(string)
	for _, want := range []string{`$x <y$`, `$\ltimes$`, `5 \% of\_it \& "a \textless{} b"`, `\[{y} > {x} >0\]`} {
		if !strings.Contains(tex, want) {
			t.Errorf("no %s in\n%s", want, tex)
		}
	}
	if regexp.MustCompile(`\\[lg]t\b`).MatchString(tex) {
		t.Errorf("\\lt or \\gt in\n%s", tex)
	}
	if regexp.MustCompile(`<[^ bs/]`).MatchString(md) { // <br>, <sup> are ours
		t.Errorf("what may begin a tag in\n%s", md)
	}
}
