package display

import (
	"fmt"
	"strings"
	"testing"
)

// A number that multiplies the one before it must not be read as its
// continuation.
func TestDerivationKeepsFactorsApart(t *testing.T) {
	for _, test := range []struct{ formula, want string }{
		{`[[y]] = [[n]] [[f]]`, `{3} {\left(0.5\right)}`},
		{`[[y]] = [[n]]\,[[f]]`, `{3}\,{\left(0.5\right)}`},
		{`[[y]] = [[n]]^{2} [[f]]`, `{3}^{2} {\left(0.5\right)}`},
		{`[[y]] = [[n]] \times [[f]]`, `{3} \times {0.5}`},
		{`[[y]] = \frac{[[n]]}{[[f]]}`, `\frac{{3}}{{0.5}}`},
		{`[[y]] = [[n]] \ln [[f]]`, `{3} \ln {0.5}`},
		{`[[y]] = 2[[n]] + [[f]]`, `2{\left(3\right)} + {0.5}`},
	} {
		v := Derivation{Title: "x", Steps: []Step{{Formula: test.formula, Result: "y", Symbols: []Symbol{
			{Name: "y", Meaning: "product", Value: 1.5, Unit: "1"},
			{Name: "n", Meaning: "first factor", Value: 3},
			{Name: "f", Meaning: "second factor", Value: 0.5, Unit: "1"},
		}}}}.View()
		if s, _ := v.Data["text/markdown"].(string); !strings.Contains(s, test.want) {
			t.Errorf("%s: no %s in\n%s", test.formula, test.want, s)
		}
	}
}

// A symbol that stands for one number in one step and for another in the next
// is stored with both.
func TestDerivationStoresAllNumbers(t *testing.T) {
	step := func(c float64) Step {
		return Step{Formula: `[[C]] = [[n]]`, Symbols: []Symbol{{Name: "C", Meaning: "m", Value: c, Unit: "J/K"}, {Name: "n", Meaning: "m", Value: 3}}}
	}
	v := Derivation{Steps: []Step{step(1.5), step(2.5), step(1.5)}}.View()
	var got []string
	for _, n := range v.Data[NumbersMediaType].([]map[string]any) {
		got = append(got, fmt.Sprint(n["name"], n["value"]))
	}
	if s := strings.Join(got, " "); s != "C1.5 n3 C2.5" {
		t.Errorf("stored %s", s)
	}
}
