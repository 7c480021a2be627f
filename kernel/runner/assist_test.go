package runner_test

import (
	"slices"
	"strings"
	"testing"

	"levelsum/kernel/engine"
)

// Completion and inspection know what cells have declared, compiled or not, by
// the names that the user has given.
func TestHelpWhileTyping(t *testing.T) {
	e := start(t)
	for i, source := range []string{
		"type sample struct { mass float64; Temp float64 }\nfunc (s sample) heat() float64 { return s.mass * s.Temp }",
		"run := sample{mass: 2, Temp: 3}\nθ := 343.5",
		"import \"math/bits\"\nwidth := bits.Len(8)",
		"type slow int\nfunc (slow) String() string { for { } }\nvar z slow",
	} {
		if out := e.Run(t.Context(), engine.Cell{N: i + 1, Source: source}, &capture{}); out.Fault != nil {
			t.Fatal(out.Fault)
		}
	}
	for _, test := range []struct{ source, want string }{
		{"run.", "mass Temp heat"},
		{"run.he", "heat"},
		{"sam", "sample"},
		{"wid", "width"},
		{"bits.LeadingZeros6", "LeadingZeros64"},
		{"solid.Deb", "Debye"},
		{"solid.Debye{The", "Theta"},
		{"solid.Debye{Theta: 343 * K", "unit.K"},
		{"import \"math/b", "math/bits math/big"},
		{"x := 12 * KJ", "unit.KJPerMol"},
		{"for _, x := range []sample{run} {\n\tx.", "mass heat"},
	} {
		got, err := e.Complete(t.Context(), test.source, len(test.source))
		if err != nil {
			t.Fatal(err)
		}
		var names []string
		for _, m := range got.Matches {
			names = append(names, m.Text)
		}
		for want := range strings.FieldsSeq(test.want) {
			if !slices.Contains(names, want) {
				t.Errorf("after %q: %q, want %s", test.source, names, want)
			}
		}
	}
	for _, test := range []struct{ source, want string }{
		{"θ", "var θ float64\n// set by In[2]\nθ = 343.5"},
		{"run", "var run sample\n// set by In[2]\nrun = "},
		{"run.heat", "func (sample) heat() float64"},
		{"sample", "type sample struct\n\tmass float64\n\tTemp float64\n\theat() float64"},
		{"math.Sqrt", "Sqrt returns the square root of x."},
		{"solid.Debye", "type solid.Debye struct\n"},
		{"unit.K", "const unit.K unit.Temperature = 1"},
		{"z", "z = (takes long to show)"},
	} {
		got, ok, err := e.Inspect(t.Context(), test.source, len(test.source), 0)
		text, _ := got["text/plain"].(string)
		if err != nil || !ok || !strings.Contains(text, test.want) {
			t.Errorf("%s is described by\n%s\nwant\n%s", test.source, text, test.want)
		}
	}
	if got, ok, err := e.Inspect(t.Context(), "nosuch", 3, 0); ok || err != nil {
		t.Errorf("an unknown name is described by %v, %v", got, err)
	}
}
