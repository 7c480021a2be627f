package assist

import (
	"path/filepath"
	"strings"
	"testing"

	"levelsum/kernel/report/mathml"
	"levelsum/kernel/symbols/export"
)

func TestLatex(t *testing.T) {
	for _, test := range []struct{ line, want string }{
		{"C_V = n R x² eˣ/(eˣ-1)²", `C_{V} = n R x^{2} e^{x}/(e^{x}-1)^{2}`},
		{"S = -k Σ pᵢ ln pᵢ", `S = -k \sum p_{i} \ln p_{i}`},
		{"x = θ/T,  θ = hν/k", `x = \theta /T,\quad \theta = h\nu /k`},
		{"C = A e^(-Δ/T)", `C = A e^{-\Delta /T}`},
		{"y = x^-2", `y = x^{-2}`},
		{"h = τ^p_k", `h = \tau ^{p_{k}}`},
		{"f = Li_5/2(z)", `f = Li_{5/2}(z)`},
		{"λ = h/√(2π m k T)", `\lambda = h/\sqrt{2\pi m k T}`},
		{"I = ∫₀^∞ t dt", `I = \int _{0}^{\infty} t dt`},
		{"τ = Σ_{t=1}^{W} ρ(t)", `\tau = \sum _{t=1}^{W} \rho (t)`},
		{"T >= 0", `T \ge 0`},
		{"x = {a}", `x = \{a\}`},
		{"Cp = C_total / n", `Cp = C_{\mathrm{total}} / n`},
		{"C = n R y³ for n = 3", `C = n R y^{3}\ \text{for}\ n = 3`},
		{"y = cosh 2K coth 2K", `y = \cosh 2K \coth 2K`},
		{"x = √(", ""},
		{"x = 日", ""},
	} {
		got, ok := latex(test.line)
		if !ok {
			got = ""
		}
		if got != test.want {
			t.Errorf("%s: %s, want %s", test.line, got, test.want)
		}
	}
}

// Code, tables, sentences and special values stay as they are.
func TestIsFormula(t *testing.T) {
	for _, line := range []string{"display.Result(\"γ\", 0.692, 0.005)", "x := 3", "T / K, Cp / (J K-1 mol-1)", "Log(0) = -Inf", "Debye{Theta: 343 * unit.K} = x",
		"the mode is what the grid of the fit says = x", "func f() = 3"} {
		if isFormula(line) {
			t.Errorf("%s is taken for a formula", line)
		}
	}
}

// The formulas of the library's documentation can be set: they are LaTeX that
// another converter, the report's, reads.
func TestFormulasOfTheLibrary(t *testing.T) {
	folders, err := filepath.Glob("../../statmech/*")
	if err != nil {
		t.Fatal(err)
	}
	n := 0
	for _, folder := range append(folders, "../../statmech") {
		for name, text := range export.ReadDocs(folder) {
			_, markdown := printed(text)
			for line := range strings.Lines(markdown) {
				tex, ok := strings.CutPrefix(strings.TrimSpace(line), "$$")
				if !ok || strings.HasPrefix(name, "=") {
					continue
				}
				n++
				if _, err := mathml.Convert(strings.TrimSuffix(tex, "$$"), mathml.Display); err != nil {
					t.Errorf("%s of %s: %s: %v", name, filepath.Base(folder), tex, err)
				}
			}
		}
	}
	if n < 60 {
		t.Errorf("%d formulas, want at least 60", n)
	}
}
