package runner_test

import (
	"fmt"
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
		"// A sample was weighed.\ntype sample struct {\n\tmass float64 // in kg\n\tTemp float64\n}\n\n// heat is mass times Temp.\nfunc (s sample) heat() float64 { return s.mass * s.Temp }",
		"run := sample{mass: 2, Temp: 3}\nθ := 343.5",
		"import \"math/bits\"\nwidth := bits.Len(8)",
		"import . \"math/bits\"\n// w is the width of the beam.\nw := Len(8)",
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
		{"solid.Debye{Theta: 343 * unit.K}.HeatCapacity(", "unit.K"},
		{"res, err := fit.HeatCapacity(&solid.Debye{}, nil, ", "fit.Vary fit.Window"},
		{"statmech.Audit(solid.Debye{}, ", "statmech.AuditOptions"},
		{"gas.FromLib", "FromLibrary"},
		{"gas.FromLibrary(\"H2", "H2 H2O"},
		{"OnesC", "OnesCount OnesCount64"},
		{"if sample := run.heat(); sample > wid", "width"},
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
		{"run.heat", "func (sample) heat() float64\n// declared in In[1]\n\nheat is mass times Temp."},
		{"sample", "type sample struct\n// declared in In[1]\n\tmass float64\n\tTemp float64\n\nA sample was weighed.\n\n// methods\n\theat() float64"},
		{"math.Sqrt", "Sqrt returns the square root of x."},
		{"solid.Debye", "type solid.Debye struct\n"},
		{"sample", "A sample was weighed."},
		{"run.mass", "in kg"},
		{"w", "w is the width of the beam."},
		{"unit.PerCm", "// PerCm = Planck * SpeedOfLight * 100"},
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

// One call lists what there is.
func TestCatalogue(t *testing.T) {
	out, _ := run(t, start(t), 1, "catalogue.All()")
	if out.Fault != nil || out.Value == nil {
		t.Fatalf("%+v", out)
	}
	text, _ := out.Value.Data["text/plain"].(string)
	html, _ := out.Value.Data["text/html"].(string)
	for _, want := range []string{"solid.Debye", "unit.Energy", "PerCm", `gas.FromLibrary("H2O")`} {
		if !strings.Contains(text, want) || !strings.Contains(html, strings.ReplaceAll(want, `"`, "&#34;")) {
			t.Errorf("%s is not listed", want)
		}
	}
}

// Completion and inspection among what 300 cells have declared.
func BenchmarkHelpWhileTyping(b *testing.B) {
	e := start(b)
	for i := range 300 {
		source := fmt.Sprintf("x%d := %d.5\nT%d := %d * unit.K\nxs%d := []float64{x%d}", i, i, i, i+1, i, i)
		if out := e.Run(b.Context(), engine.Cell{N: i + 1, Source: source}, &capture{}); out.Fault != nil {
			b.Fatal(out.Fault)
		}
	}
	const source = "for i := range xs7 {\n\ty := xs7[i] * math.Sqrt(x12)\n\tsolid.Debye{Theta: 343 * unit.K}.HeatCapacity(T"
	b.Run("complete", func(b *testing.B) {
		for b.Loop() {
			if c, err := e.Complete(b.Context(), source, len(source)); err != nil || len(c.Matches) < 300 {
				b.Fatal(len(c.Matches), err)
			}
		}
	})
	b.Run("inspect", func(b *testing.B) {
		for b.Loop() {
			if _, ok, err := e.Inspect(b.Context(), source, len(source)-3, 0); !ok || err != nil {
				b.Fatal(ok, err)
			}
		}
	})
}
