package mark

import "testing"

func TestOver(t *testing.T) {
	for _, test := range []struct{ quantity, unit, plain, html, latex string }{
		{"T", "K", "T / K", "<i>T</i> / K", "$T$ / K"},
		{"C_{p,m}", "J/(mol K)", "C_{p,m} / (J mol⁻¹ K⁻¹)",
			"<i>C</i><sub><i>p</i>,m</sub> / (J\u00a0mol<sup>−1</sup>\u00a0K<sup>−1</sup>)",
			`$C_{p\mathrm{,m}}$ / (J~mol$^{-1}$~K$^{-1}$)`},
		{`\theta_D`, "K", "θ_D / K", "<i>θ</i><sub>D</sub> / K", `$\theta_{\mathrm{D}}$ / K`},
		{"E", "cm-1", "E / cm⁻¹", "<i>E</i> / cm<sup>−1</sup>", "$E$ / cm$^{-1}$"},
		{"signal", "1", "signal", "signal", "signal"},
		{"ΔS", "J mol^-1 K^-1", "ΔS / (J mol⁻¹ K⁻¹)", "Δ<i>S</i> / (J\u00a0mol<sup>−1</sup>\u00a0K<sup>−1</sup>)", `$\Delta S$ / (J~mol$^{-1}$~K$^{-1}$)`},
		{"T^2", "K2", "T² / K²", "<i>T</i><sup>2</sup> / K<sup>2</sup>", "$T^{2}$ / K$^{2}$"},
		{"x_1^2", "", "x_1²", "<i>x</i><sub>1</sub><sup>2</sup>", "$x_{1}^{2}$"},
		{"<img onerror=x>", "<b>", "<img onerror=x> / <b>", "&lt;img onerror=<i>x</i>&gt; / &lt;b&gt;", `\textless{}img onerror=$x$\textgreater{} / \textless{}b\textgreater{}`},
		{"_x", "", "_x", "_<i>x</i>", `\_$x$`},
		{"p", "", "p", "<i>p</i>", "$p$"},
	} {
		rs := Over(test.quantity, test.unit)
		if got := Plain(rs); got != test.plain {
			t.Errorf("%s, %s: text %q, want %q", test.quantity, test.unit, got, test.plain)
		}
		if got := HTML(rs); got != test.html {
			t.Errorf("%s, %s: HTML %q, want %q", test.quantity, test.unit, got, test.html)
		}
		if got := LaTeX(rs); got != test.latex {
			t.Errorf("%s, %s: LaTeX %q, want %q", test.quantity, test.unit, got, test.latex)
		}
	}
}

func TestLabel(t *testing.T) {
	for _, test := range []struct{ in, label, upright string }{
		{"from C_p", "from <i>C</i><sub><i>p</i></sub>", "from C<sub>p</sub>"},
		{"T_{trs}, a phase", "<i>T</i><sub>trs</sub>, a phase", "T<sub>trs</sub>, a phase"},
		{"x² and C_p^2", "x<sup>2</sup> and <i>C</i><sub><i>p</i></sub><sup>2</sup>", "x<sup>2</sup> and C<sub>p</sub><sup>2</sup>"},
		{"^3P_2", "<sup>3</sup><i>P</i><sub>2</sub>", "<sup>3</sup>P<sub>2</sub>"},
		{"10^{-3} kg, A1_x", "10<sup>−3</sup> kg, A1_x", "10<sup>−3</sup> kg, A1<sub>x</sub>"},
		{"alloy_run_7.csv", "alloy_run_7.csv", "alloy<sub>r</sub>un<sub>7</sub>.csv"},
	} {
		if got := HTML(Label(test.in)); got != test.label {
			t.Errorf("Label(%q): %s, want %s", test.in, got, test.label)
		}
		if got := HTML(Upright(test.in)); got != test.upright {
			t.Errorf("Upright(%q): %s, want %s", test.in, got, test.upright)
		}
	}
}

// Formulas of substances are upright, quantities with numbers below are not.
func TestSubstances(t *testing.T) {
	for _, test := range []struct{ in, symbol, label string }{
		{"n(H_{2}O)", "<i>n</i>(H<sub>2</sub>O)", "n(H<sub>2</sub>O)"},
		{"CO_2 + H₂", "CO<sub>2</sub> + H<sub>2</sub>", "CO<sub>2</sub> + H<sub>2</sub>"},
		{"K(2 H_{2}O = 2 H_2 + O_2)", "<i>K</i>(2 H<sub>2</sub>O = 2 H<sub>2</sub> + O<sub>2</sub>)", "K(2 H<sub>2</sub>O = 2 H<sub>2</sub> + O<sub>2</sub>)"},
		{"p(O_2)", "<i>p</i>(O<sub>2</sub>)", "p(<i>O</i><sub>2</sub>)"},
		{"CH_3CH_2OH", "CH<sub>3</sub>CH<sub>2</sub>OH", "CH<sub>3</sub>CH<sub>2</sub>OH"},
		{"Al_2(SO_4)_3", "Al<sub>2</sub>(SO<sub>4</sub>)<sub>3</sub>", "Al<sub>2</sub>(SO<sub>4</sub>)<sub>3</sub>"},
		{"SO_4^{2-}", "SO<sub>4</sub><sup>2−</sup>", "SO<sub>4</sub><sup>2−</sup>"},
		{"2H_2O", "2H<sub>2</sub>O", "2H<sub>2</sub>O"},
		{"H_2", "<i>H</i><sub>2</sub>", "<i>H</i><sub>2</sub>"},
		{"N_1", "<i>N</i><sub>1</sub>", "<i>N</i><sub>1</sub>"},
		{"B_2(T)", "<i>B</i><sub>2</sub>(<i>T</i>)", "<i>B</i><sub>2</sub>(T)"},
		{"C_p", "<i>C</i><sub><i>p</i></sub>", "<i>C</i><sub><i>p</i></sub>"},
		{"P_1V_1", "<i>P</i><sub>1</sub><i>V</i><sub>1</sub>", "<i>P</i><sub>1</sub><i>V</i><sub>1</sub>"},
		{"run_2", "run<sub>2</sub>", "run_2"},
		{`p(\mathrm{H})`, "<i>p</i>(H)", "p(H)"},
		{`\text{run_{2}, C_p}`, "run<sub>2</sub>, C<sub>p</sub>", "run<sub>2</sub>, C<sub>p</sub>"},
		{`g_i exp(-\epsilon_i/kT)`, "<i>g</i><sub><i>i</i></sub> exp(−<i>ε</i><sub><i>i</i></sub>/<i>kT</i>)", "<i>g</i><sub><i>i</i></sub> exp(-<i>ε</i><sub><i>i</i></sub>/kT)"},
		{"H°-H°(298.15 K)", "<i>H</i>°−<i>H</i>°(298.15 K)", "H°-H°(298.15 K)"},
		{"Cu_7.csv", "Cu<sub>7</sub>.csv", "Cu_7.csv"},
		{"of NaCl_2-b.txt", "of NaCl<sub>2</sub>-<i>b</i>.txt", "of NaCl_2-b.txt"},
		{"of CO_2.", "of CO<sub>2</sub>.", "of CO<sub>2</sub>."},
		{"third-law S", "third-law <i>S</i>", "third-law S"},
		{"E - E_0", "<i>E</i> − <i>E</i><sub>0</sub>", "E - <i>E</i><sub>0</sub>"},
	} {
		if got := HTML(Symbol(test.in)); got != test.symbol {
			t.Errorf("Symbol(%q): %s, want %s", test.in, got, test.symbol)
		}
		if got := HTML(Label(test.in)); got != test.label {
			t.Errorf("Label(%q): %s, want %s", test.in, got, test.label)
		}
	}
	if got, want := LaTeX(Symbol("n(H_{2}O)")), "$n$(H$_{2}$O)"; got != want {
		t.Errorf("LaTeX %s, want %s", got, want)
	}
	if got, want := Math(Symbol("x^{-n}")), "x^{-n}"; got != want {
		t.Errorf("Math %s, want %s", got, want)
	}
}

func TestName(t *testing.T) {
	for _, test := range []struct{ in, want string }{
		{"κ", "<i>κ</i>"},
		{"S°(298.15 K)", "<i>S</i>°(298.15 K)"},
		{"T, all lines", "<i>T</i>, all lines"},
		{"χ² per degree of freedom", "<i>χ</i><sup>2</sup> per degree of freedom"},
		{"θ_D", "<i>θ</i><sub>D</sub>"},
		{"a sum", "a sum"},
		{"residual entropy", "residual entropy"},
		{"T-window", "T-window"},
		{"", ""},
	} {
		if got := HTML(Name(test.in)); got != test.want {
			t.Errorf("Name(%q): %s, want %s", test.in, got, test.want)
		}
	}
}

func TestSameUnit(t *testing.T) {
	for _, test := range []struct {
		a, b string
		want bool
	}{
		{"J/(mol K)", "J K-1 mol-1", true},
		{"J/(mol K)", "J·mol⁻¹·K⁻¹", true},
		{"J/mol/K", "J/(mol K)", true},
		{"1/K", "K-1", true},
		{"", "1", true},
		{"m2", "m²", true},
		{"kJ/mol", "J/mol", false},
		{"cm-1", "1/m", false},
		{"K", "°C", false},
		{"J/mol K", "J/(mol K)", false}, // ambiguous, so nothing is known of it
		{"mJ/(mol K2)", "mJ mol-1 K-2", true},
	} {
		if got := SameUnit(test.a, test.b); got != test.want {
			t.Errorf("SameUnit(%q, %q) = %v", test.a, test.b, got)
		}
	}
}

func FuzzMarkup(f *testing.F) {
	for _, s := range []string{"C_{p,m}", `\theta_D^2`, "_", "^", "a_{", "x_\\", "J/(mol K)", "((", "1/", `\mathrm{`, "H_2O", "Al_2(SO_4)_", `\text{}`, "m⁻¹", "\x00<", "é_é"} {
		f.Add(s)
	}
	f.Fuzz(func(t *testing.T, s string) {
		for _, rs := range [][]Run{Symbol(s), Label(s), Over(s, s), AsWritten(s)} {
			Plain(rs)
			LaTeX(rs)
			for _, r := range HTML(rs) {
				if r < 0x20 && r != '\t' && r != '\n' && r != '\r' {
					t.Fatalf("control character in the HTML of %q", s)
				}
			}
		}
		if !SameUnit(s, s) {
			t.Fatalf("%q is not the same unit as itself", s)
		}
	})
}
