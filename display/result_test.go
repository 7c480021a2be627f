package display

import (
	"encoding/json"
	"math"
	"strings"
	"testing"
)

func TestResult(t *testing.T) {
	r := record(t)
	for _, test := range []struct {
		name  string
		value []any
		want  string
	}{
		{"S°(298.15 K)", []any{33.15123, 0.0462, "J/(mol K)"}, "S°(298.15 K) = 33.151(46) J/(mol K)"},
		{"θ_D", []any{kelvin(343.21), kelvin(0.7)}, "θ_D = 343.21(70) K"},
		{"θ_D", []any{kelvin(343.21), 0.7}, "θ_D = 343.21(70) K"},
		{"κ", []any{1.4}, "κ = 1.4"},
		{"γ", []any{estimate{v: 0.692, u: 0.005, unit: "mJ/(mol K2)"}}, "γ = 0.6920(50) mJ/(mol K²)"},
		{"θ", []any{estimate{v: 343.2, unit: "K", withheld: "chi-squared is 300 per degree of freedom"}},
			"θ = 343.2 K (no standard uncertainty: chi-squared is 300 per degree of freedom)"},
		{"n", []any{12345678}, "n = 12345678"},
		{"E", []any{joule(1.5e-21)}, "E = 1.5×10⁻²¹ J"},
		{"x", []any{Number{Name: "y", Value: 2, U: 0.1, Unit: "K"}}, "x = 2.00(10) K"},
	} {
		Result(test.name, test.value...)
		if got := r.shown[len(r.shown)-1]; got != test.want {
			t.Errorf("%s: %q, want %q", test.name, got, test.want)
		}
		wellFormed(t, r.views[len(r.views)-1].Data["text/html"].(string))
	}
}

// The stored value is the float64 itself.
func TestResultStored(t *testing.T) {
	n, err := NumberOf("x", 1.0/3, math.Nextafter(0.1, 1), "K")
	if err != nil {
		t.Fatal(err)
	}
	b, err := json.Marshal(n.View().Data[ResultMediaType])
	if err != nil {
		t.Fatal(err)
	}
	var got struct {
		Name, Unit string
		Value, U   float64
	}
	if err := json.Unmarshal(b, &got); err != nil {
		t.Fatal(err)
	}
	if got.Value != 1.0/3 || got.U != math.Nextafter(0.1, 1) || got.Name != "x" || got.Unit != "K" {
		t.Errorf("stored %s", b)
	}
	n, _ = NumberOf("x", 2.0)
	if b, _ := json.Marshal(n.View().Data[ResultMediaType]); strings.Contains(string(b), `"u"`) {
		t.Errorf("an uncertainty that is not known is stored: %s", b)
	}
}

func TestResultRefused(t *testing.T) {
	for _, test := range []struct {
		name  string
		value []any
		want  string
	}{
		{"x", nil, "got 0 arguments"},
		{"x", []any{math.NaN()}, "the value is NaN"},
		{"x", []any{1.0, -0.1, "K"}, "the standard uncertainty is -0.1"},
		{"x", []any{1.0, math.Inf(1), "K"}, "the standard uncertainty is +Inf"},
		{"x", []any{kelvin(1), "J"}, `the unit given is "J", but the value is in "K"`},
		{"x", []any{kelvin(1), joule(1)}, "the value is a display.kelvin, its standard uncertainty a display.joule"},
		{"x", []any{naked(1)}, "whose unit is not known"},
		{"x", []any{"text"}, "a number is wanted"},
		{"x", []any{1.0, 2.0, 3.0}, "the unit must be text"},
		{"", []any{1.0}, "needs a name"},
		{"x", []any{nil}, "not nil"},
	} {
		func() {
			record(t)
			defer func() {
				err, _ := recover().(*Refusal)
				if err == nil || !strings.Contains(err.Error(), test.want) {
					t.Errorf("%v: %v, want %q", test.value, err, test.want)
				}
			}()
			Result(test.name, test.value...)
		}()
	}
}

func TestParagraph(t *testing.T) {
	p := Paragraph{
		Text:   "The fit gives [[θ]] from [[file]], <b>so</b> $x < \\theta/[[θ]]$ at [[T|value]] [[T|unit]]; \\[[not a slot]].",
		Values: Values{"θ": estimate{v: 343.21, u: 0.7, unit: "K"}, "T": kelvin(85.5), "file": "<img onerror=x>_*a*.csv"},
	}
	v := p.View()
	if got, want := v.Data["text/plain"], "The fit gives 343.21(70) K from <img onerror=x>_*a*.csv, <b>so</b> x < θ/343.21(70) K at 85.5 K; [[not a slot]]."; got != want {
		t.Errorf("text %q, want %q", got, want)
	}
	if got, want := v.Data["text/markdown"], `The fit gives 343.21(70)&#160;K from &lt;img onerror=x&gt;\_\*a\*.csv, &lt;b>so&lt;/b> $x < \theta/343.21(70)\,\mathrm{K}$ at 85.5 K; [[not a slot]].`; got != want {
		t.Errorf("markdown\n%s, want\n%s", got, want)
	}
	list := v.Data[NumbersMediaType].([]map[string]any)
	if len(list) != 2 || list[0]["name"] != "θ" || list[0]["u"] != 0.7 || list[1]["value"] != 85.5 {
		t.Errorf("numbers %v", list)
	}
	for text, want := range map[string]string{
		"a [[b]]":        "the slot [[b]] names nothing; the values are T, bad, θ",
		"a [[b":          "has no end",
		"a [[]]":         "a slot without a name",
		"a [[T|digits]]": "the word after | is value or unit",
		"a [[bad]]":      "the value of [[bad]] is NaN",
	} {
		err := Paragraph{Text: text, Values: Values{"θ": 1.0, "T": kelvin(1), "bad": math.NaN()}}.Check()
		if err == nil || !strings.Contains(err.Error(), want) {
			t.Errorf("%q: %v, want %q", text, err, want)
		}
	}
}

func wEqual() Derivation {
	return Derivation{Title: "Entropy of W equal states | <b>", Steps: []Step{{
		Text:    "For equal probabilities the sum has one value, so $S>0$:",
		Formula: `[[S]] = [[k]] \ln [[W]]`,
		Symbols: []Symbol{
			{Name: "S", Meaning: "entropy", Value: 1.380649e-23 * math.Log(16), Unit: "J/K"},
			{Name: "k", Meaning: "Boltzmann constant", Value: 1.380649e-23, Unit: "J/K"},
			{Name: "W", Meaning: "number of states, p_i = 1/W", Value: 16},
		},
		Result:  "S",
		Compute: func(x map[string]float64) float64 { return x["k"] * math.Log(x["W"]) },
		Source:  "an invented example",
	}}}
}

func TestDerivation(t *testing.T) {
	v := wEqual().View()
	golden(t, "derivation.md", v.Data["text/markdown"].(string)+"\n")
	golden(t, "derivation.tex", v.Data["text/latex"].(string))
	golden(t, "derivation.txt", v.Data["text/plain"].(string)+"\n")
	for _, test := range []struct {
		change func(s *Step)
		want   string
	}{
		{func(s *Step) { s.Formula += "[[x]]" }, "the slot [[x]] names no symbol"},
		{func(s *Step) { s.Formula = `[[S]] = [[k]]` }, "the symbol W has no slot"},
		{func(s *Step) { s.Symbols[0].Meaning = "" }, "the symbol S has no meaning"},
		{func(s *Step) { s.Symbols[0].Unit = "" }, "give its Unit"},
		{func(s *Step) { s.Symbols[0].Value = kelvin(3) }, `said to be in "J/K", but its value is in "K"`},
		{func(s *Step) { s.Symbols[0].Value = nil }, "the result S is no symbol with a number"},
		{func(s *Step) { s.Symbols[0].Value = 3.83e-23 }, "but the result is 3.83e-23 J/K"},
		{func(s *Step) { s.Symbols[1].Unit = "J" }, "the units do not fit"},
		{func(s *Step) { s.Symbols[2].Unit = "mol" }, "the units do not fit"},
		{func(s *Step) { s.Symbols[2].Value = nil }, "the formula gives S = -Inf J/K"},
		{func(s *Step) { s.Compute = func(map[string]float64) float64 { panic("no") } }, "Compute panicked: no"},
		{func(s *Step) { s.Symbols[1].Name = "S" }, "declared twice"},
		{func(s *Step) { s.Formula += `\href{x}{y}` }, "no mathematics"},
	} {
		d := wEqual()
		test.change(&d.Steps[0])
		if err := d.Check(); err == nil || !strings.Contains(err.Error(), test.want) {
			t.Errorf("%v, want %q", err, test.want)
		}
	}
}

// Dimensions by the definitions of the units in the SI brochure.
func TestDimension(t *testing.T) {
	for _, test := range []struct{ a, b string }{
		{"J", "kg m2 s-2"}, {"Pa", "N/m2"}, {"W", "J/s"}, {"kJ/mol", "kg m2 s-2 mol-1"}, {"V", "J/C"}, {"T", "V s/m2"}, {"cm-1", "1/m"},
		{"%", "1"}, {"mm", "km"}, {"GPa", "mbar"}, {"L", "m3"}, {"THz", "1/s"}, {"daN", "N"},
	} {
		a, oka := dimensionOf(test.a)
		b, okb := dimensionOf(test.b)
		if !oka || !okb || a != b {
			t.Errorf("%s is %v (%v), %s is %v (%v)", test.a, a, oka, test.b, b, okb)
		}
	}
	for _, unknown := range []string{"°C", "foo", "J/mol K", "kkg"} {
		if d, ok := dimensionOf(unknown); ok {
			t.Errorf("%s has the dimension %v", unknown, d)
		}
	}
	if a, _ := dimensionOf("J"); a == (dimension{}) {
		t.Error("a joule has no dimension")
	}
}
