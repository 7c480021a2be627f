package rerun

import (
	"fmt"
	"testing"

	"levelsum/display"
	"levelsum/kernel/notebook"
)

// shown makes a document of one cell that shows a value.
func shown(t *testing.T, v display.Viewer) *notebook.Document {
	t.Helper()
	d := doc(t, "x")
	c := d.Cells()[0]
	c.SetExecutionCount(1)
	if err := c.SetOutputs([]notebook.Output{{Kind: notebook.DisplayData, Data: v.View().Data}}); err != nil {
		t.Fatal(err)
	}
	d, err := notebook.Parse("x.ipynb", d.Bytes())
	if err != nil {
		t.Fatal(err)
	}
	return d
}

func number(name string, v, u float64, unit string) display.Number {
	return display.Number{Name: name, Value: v, U: u, Unit: unit}
}

// A number in prose that moved is reported by its name and in its standard
// uncertainties; words and numerals that are typed are compared as they stand.
func TestCompareParagraphs(t *testing.T) {
	para := func(text string, theta, gamma float64) display.Viewer {
		return display.Paragraph{Text: text, Values: display.Values{
			"θ": number("θ_D", theta, 0.7, "K"), "γ": number("γ", gamma, 0.005, "mJ/(mol K2)"), "k": number("k", 1.380649e-23*gamma, 0, "J/K")}}
	}
	const text = "Between 1 and 10 K the fit gives [[θ]] and [[γ]]."
	for _, test := range []struct {
		name         string
		text         string
		theta, gamma float64
		want         string
	}{
		{"same", text, 343.21, 0.692, ""},
		{"jitter", text, 343.21 * (1 + 1e-13), 0.692, `number "θ_D" rounding-level 3.43e-11 4.9e-11`},
		{"inside u", text, 343.56, 0.692, `number "θ_D" inside u 0.35 0.5`},
		{"moved", text, 346.01, 0.692, `number "θ_D" moved 2.8 4`},
		{"both", text, 346.01, 0.702, `number "θ_D" moved 2.8 4; number "γ" moved 0.01 2`},
		{"a typed numeral", "Between 2 and 10 K the fit gives [[θ]] and [[γ]].", 343.21, 0.692, `text "output 1" moved 0 0`},
		{"a typed numeral and a number", "Between 2 and 10 K the fit gives [[θ]] and [[γ]].", 346.01, 0.692, `number "θ_D" moved 2.8 4; text "output 1" moved 0 0`},
		{"words and a number", "Between 1 and 10 K it gives [[θ]] and [[γ]].", 346.01, 0.692, `number "θ_D" moved 2.8 4; text "output 1" moved 0 0`},
		{"a number taken out", "Between 1 and 10 K the fit gives [[θ]].", 343.21, 0.692, `number "γ" missing 0 0; text "output 1" moved 0 0`},
	} {
		fs, err := Compare(shown(t, para(text, 343.21, 0.692)), shown(t, para(test.text, test.theta, test.gamma)))
		if err != nil || findings(fs) != test.want {
			t.Errorf("%s: %s, %v; want %s", test.name, findings(fs), err, test.want)
		}
	}
	// A power of ten that moved is part of the number too.
	const small = "The constant is [[k]]."
	fs, err := Compare(shown(t, para(small, 343.21, 1)), shown(t, para(small, 343.21, 10)))
	if want := `number "k" moved 1.24e-22 0`; err != nil || findings(fs) != want {
		t.Errorf("%s, %v; want %s", findings(fs), err, want)
	}
	if fs[0].Old != "1.380649e-23 J/K" || fs[0].Note != "output 1" {
		t.Errorf("%+v", fs[0])
	}
}

func TestCompareDerivations(t *testing.T) {
	derivation := func(w float64, title string) display.Viewer {
		return display.Derivation{Title: title, Steps: []display.Step{{
			Formula: `[[S]] = [[R]] \ln [[W]]`,
			Symbols: []display.Symbol{
				{Name: "S", Meaning: "entropy", Value: number("S", 8.314*w, 0.1, "J/(mol K)")},
				{Name: "R", Meaning: "gas constant", Value: number("R", 8.314, 0, "J/(mol K)")},
				{Name: "W", Meaning: "number of states", Value: number("W", 2*w, 0, "1")},
			}}}}
	}
	check := func(w float64, title, want string) {
		t.Helper()
		fs, err := Compare(shown(t, derivation(1, "Two states")), shown(t, derivation(w, title)))
		if err != nil || findings(fs) != want {
			t.Errorf("%v %s: %s, %v; want %s", w, title, findings(fs), err, want)
		}
	}
	check(1, "Two states", "")
	check(1.01, "Two states", fmt.Sprintf(`number "S" inside u %.3g 0.831; number "W" moved 0.02 0`, 0.08314))
	check(1, "Three states", `text "output 1" moved 0 0`)
	check(1.01, "Three states", fmt.Sprintf(`number "S" inside u %.3g 0.831; number "W" moved 0.02 0; text "output 1" moved 0 0`, 0.08314))
}
