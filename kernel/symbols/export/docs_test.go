package export

import (
	"strings"
	"testing"
)

func TestReadDocs(t *testing.T) {
	d := ReadDocs("../../../statmech/unit")
	for name, want := range map[string]string{
		"":                 "Package unit gives quantities a type of their own",
		"Energy":           "Energy is an energy per particle in J.",
		"Energy.PerMole":   "PerMole returns N_A x,",
		"PerCm":            "Energies per particle.",
		"Boltzmann":        "k, J/K",
		"=PerCm":           "Planck * SpeedOfLight * 100",
		"Constant.Exact":   "exact by the definition of the SI",
		"ParseHeader":      "ParseHeader reads a column header",
		"=GasConstant":     "Boltzmann * Avogadro",
		"=StefanBoltzmann": "2 * math.Pi * math.Pi",
	} {
		if got := d[name]; !strings.HasPrefix(got, want) {
			t.Errorf("%q: %q, want %q", name, got, want)
		}
	}
	for _, name := range []string{"=Boltzmann", "Temperature.nosuch", "unitPath"} {
		if got, ok := d[name]; ok {
			t.Errorf("%q: %q, want nothing", name, got)
		}
	}
	if d := ReadDocs("nosuch"); len(d) != 0 {
		t.Errorf("of no folder: %v", d)
	}
}

func TestCommentAbove(t *testing.T) {
	for _, test := range []struct{ text, want string }{
		{"// F is\n// short.\n|func F() {}", "F is\nshort.\n"},
		{"x := 1\n// F is short.\n|func F() {}", "F is short.\n"},
		{"// not for F\n\n|func F() {}", ""},
		{"/* F is\nlong. */\n|func F() {}", "F is\nlong.\n"},
		{"|func F() {}", ""},
		{"x := 1 // no\n|func F() {}", ""},
		{"//levelsum:compile\n|func F() {}", ""},
		{"  // °C is θ.\n  |type T int", "°C is θ.\n"},
	} {
		at := strings.IndexByte(test.text, '|')
		if got := CommentAbove(strings.Replace(test.text, "|", "", 1), at); got != test.want {
			t.Errorf("%q: %q, want %q", test.text, got, test.want)
		}
	}
}
