package assist

import (
	"go/build"
	"os"
	"path/filepath"
	"strings"
	"testing"
)

func (s session) ValueOf(name string) (string, int, bool) {
	if name == "θ" {
		return "343", 7, true
	}
	return "", 0, false
}

func (s session) Documentation(name string) (string, int, bool) {
	text, ok := map[string]string{"Inner": "An Inner is below.\n", "Inner.Depth": "how deep\n", "Inner.Below": ""}[name]
	return text, 4, ok
}

// In the sources | is the cursor. Want are texts that the description has, in
// order.
func TestInspect(t *testing.T) {
	s := newSession(t)
	docs := NewDocs(build.Default.GOROOT, "levelsum", "../..")
	for _, test := range []struct {
		name, source string
		detail       int
		want         []string
	}{
		{"function of a package", "math.Sq|rt(2)", 0, []string{"func math.Sqrt(x float64) float64", "Sqrt returns the square root of x.", "Sqrt(NaN) = NaN"}},
		{"at the end of a name", "math.Sqrt|", 0, []string{"func math.Sqrt"}},
		{"among the arguments", "math.Pow(2, |)", 0, []string{"func math.Pow(x float64, y float64) float64"}},
		{"in an open call", "math.Pow(2, |", 0, []string{"func math.Pow"}},
		{"inner of two calls", "math.Pow(math.Sqrt(|), 2)", 0, []string{"func math.Sqrt"}},
		{"method", "time.Now().Ad|d(3)", 0, []string{"func (time.Time) Add(d time.Duration) time.Time", "Add returns the time t+d."}},
		{"constant", "time.Sec|ond", 0, []string{"const time.Second time.Duration = 1000000000"}},
		{"type", "var d time.Dura|tion", 0, []string{"type time.Duration int64", "A Duration represents the elapsed time", "Hours() float64"}},
		{"type of the session", "Sam|ple{}", 0, []string{"type Sample struct", "\tMass float64", "\tlabel string", "\tSetMass(m float64)"}},
		{"session variable", "θ| * 2", 0, []string{"var θ float64", "// set by In[7]", "θ = 343"}},
		{"session function", "hea|t(0)", 0, []string{"func heat(d time.Duration, more ...Sample) float64"}},
		{"field", "run.Ma|ss", 0, []string{"field Mass float64"}},
		{"package", "mat|h.Sqrt(2)", 0, []string{"package math // \"math\"", "names", "Package math provides"}},
		{"package alone", "math|", 1, []string{"package math", "\tAbs(x float64) float64", "\tPi untyped float"}},
		{"builtin", "len|(list)", 0, []string{"func len"}},
		{"variable of the cell", "alpha := 3.5\nalp|ha", 0, []string{"var alpha float64"}},
		{"in a broken cell", "x := nosuch(\nmath.Sqr|t(2", 0, []string{"func math.Sqrt"}},
		{"definition of a constant", "time.Min|ute", 0, []string{"const time.Minute time.Duration = 60000000000", "// Minute = 60 * Second"}},
		{"unit", "3 * unit.PerC|m", 0, []string{"const unit.PerCm unit.Energy = 1.98645e-23", "// PerCm = Planck * SpeedOfLight * 100", "Energies per particle."}},
		{"method of a quantity", "gap.PerM|ole()", 0, []string{"func (unit.Energy) PerMole() unit.MolarEnergy", "PerMole returns N"}},
		{"field of a library", "var c unit.Constant\nc.Exa|ct", 0, []string{"field Exact bool", "exact by the definition of the SI"}},
		{"formula", "statmech.Schot|tky{}", 0, []string{"type statmech.Schottky", "Schottky"}},
		{"function declared in the cell", "// Width is the width\n// of a line.\nfunc width() float64 { return 1 }\nwid|th()", 0, []string{"func width() float64", "Width is the width of a line."}},
		{"type declared in the cell", "x := 1\n\n// A Line is thin.\ntype Line struct {\n\tA int // first\n}\nvar l Li|ne", 0, []string{"type Line struct", "\tA int", "A Line is thin."}},
		{"field declared in the cell", "type Line struct {\n\tA int // is the first\n}\nvar l Line\nl.|A", 0, []string{"field A int", "is the first"}},
		{"method declared in the cell", "type Line struct{}\n// Len counts.\nfunc (l *Line) Len() int { return 0 }\nvar l Line\nl.L|en()", 0, []string{"func (*Line) Len() int", "Len counts."}},
		{"constant declared in the cell", "const (\n\t// Low is low.\n\tLow = 1\n\tHigh = 2 // is high\n)\nHi|gh", 0, []string{"const High untyped int = 2", "is high"}},
		{"type declared before", "Inn|er{}", 0, []string{"type Inner struct", "// declared in In[4]", "\tDepth int", "An Inner is below."}},
		{"field declared before", "run.De|pth", 0, []string{"field Depth int", "// declared in In[4]", "how deep"}},
		{"method declared before", "run.Bel|ow()", 0, []string{"func (Inner) Below() int", "// declared in In[4]"}},
		{"after letters of several bytes", "θθ := \"日本語\"; math.Sq|rt(2)", 0, []string{"func math.Sqrt"}},
		{"in a function", "func f(width float64) float64 { return wid|th }", 0, []string{"var width float64"}},
	} {
		t.Run(test.name, func(t *testing.T) {
			cursor := strings.IndexByte(test.source, '|')
			got, ok := Inspect(s, docs, test.source[:cursor]+test.source[cursor+1:], cursor, test.detail)
			if !ok {
				t.Fatal("nothing is known")
			}
			for _, text := range []string{got.Text, got.Markdown} {
				rest := text
				for _, w := range test.want {
					_, after, found := strings.Cut(rest, w)
					if !found {
						t.Errorf("no %q in order in\n%s", w, text)
						break
					}
					rest = after
				}
			}
		})
	}
	for _, source := range []string{"|", "nosuch|", "1 + |2", "\"math|\"", "// ma|th", "x := 3 + |"} {
		cursor := strings.IndexByte(source, '|')
		if got, ok := Inspect(s, docs, source[:cursor]+source[cursor+1:], cursor, 0); ok {
			t.Errorf("%q: %s, want nothing", source, got.Text)
		}
	}
}

// A type with many members is listed whole only with detail.
func TestInspectDetail(t *testing.T) {
	s := newSession(t)
	const source = "time.Time{}"
	few, _ := Inspect(s, nil, source, 6, 0)
	all, _ := Inspect(s, nil, source, 6, 1)
	if !strings.Contains(few.Text, "// and ") || strings.Contains(all.Text, "// and ") || !strings.Contains(all.Text, "\tYearDay() int") {
		t.Errorf("without detail\n%s\nwith detail\n%s", few.Text, all.Text)
	}
	if strings.Contains(all.Text, "wall") {
		t.Error("a field that a cell cannot use is listed")
	}
}

func TestDocsOfOurOwn(t *testing.T) {
	d := NewDocs("", "levelsum", "../..")
	if got := d.load("levelsum/display")[""]; !strings.HasPrefix(got, "Package display holds values that a reader looks at") {
		t.Errorf("documentation of display: %q", got)
	}
	if got := d.load("levelsum/display")["Text"]; !strings.HasPrefix(got, "Text returns a View") {
		t.Errorf("documentation of display.Text: %q", got)
	}
	for _, path := range []string{"levelsum/nosuch", "gonum.org/v1/gonum/mat", "fmt", "levelsumother"} {
		if got := d.load(path); len(got) != 0 {
			t.Errorf("documentation of %s: %q", path, got)
		}
	}
}

// What was stored needs no source, and goes before it.
func TestStoredDocs(t *testing.T) {
	dir := t.TempDir()
	if err := os.WriteFile(filepath.Join(dir, "math.json"), []byte(`{"": "Package math is stored.", "Sqrt": "Sqrt is stored."}`), 0o666); err != nil {
		t.Fatal(err)
	}
	if err := os.WriteFile(filepath.Join(dir, "time.json"), []byte(`{"": `), 0o666); err != nil {
		t.Fatal(err)
	}
	s := newSession(t)
	d := NewDocs(build.Default.GOROOT, "", "")
	d.Stored = dir
	for source, want := range map[string]string{"math.Sqrt": "Sqrt is stored.", "math": "Package math is stored.", "strings.ToUpper": "ToUpper returns", "time.Now": "Now returns"} {
		if got, ok := Inspect(s, d, source, len(source), 0); !ok || !strings.Contains(got.Markdown, want) {
			t.Errorf("%s: %s, want %s", source, got.Markdown, want)
		}
	}
}

// Links between names are plain text, formulas code.
func TestPrintedDocs(t *testing.T) {
	plain, markdown := printed("F is like [Mode], [*Mode] and [*statmech.Levels].\n\n\tS = k ln W\n\n# More\n\n  - of [Levels]\n")
	if want := "F is like Mode, *Mode and *statmech.Levels.\n\n\tS = k ln W\n\n# More\n\n  - of Levels"; plain != want {
		t.Errorf("plain %q, want %q", plain, want)
	}
	if want := "F is like Mode, \\*Mode and \\*statmech.Levels.\n\n\tS = k ln W\n\n#### More\n\n  - of Levels"; markdown != want {
		t.Errorf("markdown %q, want %q", markdown, want)
	}
}
