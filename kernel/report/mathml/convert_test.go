package mathml

import (
	"errors"
	"strings"
	"testing"
)

// presentation returns the formula without its frame and source.
func presentation(t *testing.T, formula string, style Style) string {
	t.Helper()
	s, err := Convert(formula, style)
	if err != nil {
		t.Fatal(err)
	}
	_, s, _ = strings.Cut(s, "<semantics>")
	s, _, _ = strings.Cut(s, "<annotation")
	return s
}

// TestSpacing has the cases of the table of spaces in chapter 18 of The
// TeXbook that browsers would get wrong by themselves.
func TestSpacing(t *testing.T) {
	for _, test := range []struct{ formula, want string }{
		{`a-b`, `<mrow><mi>a</mi><mo>−</mo><mi>b</mi></mrow>`},
		{`(-b)`, `<mrow><mo stretchy="false">(</mo><mo lspace="0" rspace="0">−</mo><mi>b</mi><mo stretchy="false">)</mo></mrow>`},
		{`a=-b`, `<mrow><mi>a</mi><mo>=</mo><mo lspace="0" rspace="0">−</mo><mi>b</mi></mrow>`},
		{`a/b`, `<mrow><mi>a</mi><mo lspace="0" rspace="0">/</mo><mi>b</mi></mrow>`},
		{`x^{a-b}`, `<mrow><msup><mi>x</mi><mrow><mi>a</mi><mo lspace="0" rspace="0">−</mo><mi>b</mi></mrow></msup></mrow>`},
		{`k\ln W`, `<mrow><mi>k</mi><mspace width="0.1667em"></mspace><mi>ln</mi><mo>` + "\u2061" + `</mo><mspace width="0.1667em"></mspace><mi>W</mi></mrow>`},
		{`\ln(W)`, `<mrow><mi>ln</mi><mo>` + "\u2061" + `</mo><mo stretchy="false">(</mo><mi>W</mi><mo stretchy="false">)</mo></mrow>`},
		{`(\ln W)`, `<mrow><mo stretchy="false">(</mo><mi>ln</mi><mo>` + "\u2061" + `</mo><mspace width="0.1667em"></mspace><mi>W</mi><mo stretchy="false">)</mo></mrow>`},
		{`1{,}5`, `<mrow><mn>1</mn><mo separator="true" lspace="0" rspace="0">,</mo><mn>5</mn></mrow>`},
	} {
		if got := presentation(t, test.formula, Display); got != test.want {
			t.Errorf("%s\n got %s\nwant %s", test.formula, got, test.want)
		}
	}
}

func TestStyles(t *testing.T) {
	for _, test := range []struct {
		formula string
		style   Style
		want    string
	}{
		{`\sum_i x`, Display, `<munder>`},
		{`\sum_i x`, Inline, `<msub>`},
		{`\frac{\sum_i x}{2}`, Display, `<msub>`},
		{`\displaystyle\sum_i x`, Inline, `<munder>`},
		{`\int_0^1 x`, Display, `<msubsup>`},
		{`\begin{aligned}\sum_i x\end{aligned}`, Inline, `<munder>`},
		// As package display breaks long formulas.
		{`\begin{aligned} {S}& = -{k} \bigl( {a} \\ &\quad {} + {b} \bigr) \end{aligned}`, Display, `<mtable`},
	} {
		if got := presentation(t, test.formula, test.style); !strings.Contains(got, test.want) {
			t.Errorf("%s: no %s in %s", test.formula, test.want, got)
		}
	}
}

// TestUnknown has formulas that must not be drawn by halves.
func TestUnknown(t *testing.T) {
	for _, test := range []struct{ formula, want string }{
		{`\unheardof{x}`, `\unheardof is not known`},
		{`a+\foo`, `at character 3`},
		{`\begin{tikzcd}a\end{tikzcd}`, `\begin{tikzcd} is not known`},
		{`\frac{a`, `{ is not closed`},
		{`\frac{a}`, `\frac lacks its argument`},
		{`a}`, `} without {`},
		{`\left( a`, `\left without \right`},
		{`a \right)`, `\right without \left`},
		{`x^2^3`, `two superscripts`},
		{`x_2_3`, `two subscripts`},
		{`x^`, `^ lacks its argument`},
		{`a & b`, `& outside a table`},
		{`\begin{pmatrix}a`, `\begin{pmatrix} is not closed`},
		{`\begin{pmatrix}a\end{bmatrix}`, `closes`},
		{`\sqrt[3{x}`, `[ is not closed`},
		{`\sqrt[\foo]{x}`, `\foo is not known`},
		{`\text{\foo}`, `\foo is not known in text`},
		{`\text{$x}`, `$ is not closed`},
		{`\color{url(x)}y`, `the colour`},
		{`a\limits_b`, `\limits stands after no operator`},
		{strings.Repeat("{", 10000), `too many groups`},
		{strings.Repeat(`\frac`, 10000), `too many groups`},
		{strings.Repeat(`\sqrt`, 10000), `too many groups`},
		{strings.Repeat(`\displaystyle `, 100000), `too many groups`},
		{strings.Repeat(`\left(`, 10000), `too many groups`},
	} {
		s, err := Convert(test.formula, Display)
		var e *Error
		if !errors.As(err, &e) {
			t.Errorf("%.40s: no error, but %.300s", test.formula, s)
			continue
		}
		if !strings.Contains(err.Error(), test.want) {
			t.Errorf("%.40s: error %q lacks %q", test.formula, err, test.want)
		}
	}
}

// TestEscaping makes sure that no part of a formula becomes markup.
func TestEscaping(t *testing.T) {
	for _, formula := range []string{
		`a<b>c`, `\text{<script>alert(1)</script>}`, `\text{a & "b"}`, `x<script>`, `\operatorname{<b>}`,
		`\text{\&amp;}`, "\x00", "\\text{\x01\x0b}", "\xff", `"`,
	} {
		s, err := Convert(formula, Inline)
		if err != nil {
			continue // shown as source by the caller
		}
		if _, err := parseShape(s); err != nil {
			t.Errorf("%q: not well-formed: %v: %s", formula, err, s)
		}
		for _, bad := range []string{"<script", "<b>"} {
			if strings.Contains(s, bad) {
				t.Errorf("%q: %s", formula, s)
			}
		}
	}
}

func FuzzConvert(f *testing.F) {
	f.Add(`\frac{a}{b}_i^2`)
	f.Add(`\begin{array}{l|r}a&b\\\hline c\end{array}`)
	f.Add(`\left(\text{a $x$}\right)'`)
	f.Add(`\not\in\hspace{1mu}\xrightarrow[a]{b}\tag{1}`)
	f.Fuzz(func(t *testing.T, formula string) {
		s, err := Convert(formula, Display)
		if err != nil {
			var e *Error
			if !errors.As(err, &e) || e.Offset < 0 || e.Offset > len(formula) {
				t.Fatalf("%#v", err)
			}
			_ = err.Error()
			return
		}
		if _, err := parseShape(s); err != nil {
			t.Fatalf("not well-formed: %v: %s", err, s)
		}
	})
}
