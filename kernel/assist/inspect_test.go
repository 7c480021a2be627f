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
	text, ok := map[string]string{"Inner": "An Inner is below.\n", "Inner.Depth": "how deep\n", "Inner.Below": "", "cold": "kept at the pump\n"}[name]
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

// What a physicist asks about, and what is among the answer as text and as
// Markdown: formula, units, range, accuracy, errors, source.
func TestInspectPhysics(t *testing.T) {
	s := newSession(t)
	docs := NewDocs(build.Default.GOROOT, "levelsum", "../..")
	for _, test := range []struct{ source, text, markdown string }{
		{"solid.Deb|ye{}", "C_V = 3 n R x⁻³ ∫₀ˣ t⁴ eᵗ/(eᵗ-1)² dt", `C_{V} = 3 n R x^{-3} \int _{0}^{x} t^{4} e^{t}/(e^{t}-1)^{2} dt`},
		{"solid.Deb|ye{}", "Theta unit.Temperature", "Theta unit.Temperature"},
		{"solid.Deb|ye{}", "Accuracy:", "doi:10.1002/andp.19123441404"},
		{"solid.Deb|ye{}", "Errors: a panic with a *statmech.DomainError", "Annalen der Physik 344, 789 (1912)"},
		{"solid.Deb|ye{}", "HeatCapacity(T unit.Temperature) unit.MolarEntropy", "// methods\n\tHeatCapacity("},
		{"solid.Debye{The|ta: 1}", "Debye temperature ħω_D/k", "field Theta unit.Temperature"},
		{"copper|", "var copper solid.Debye", "var copper solid.Debye"},
		{"copper.Hea|tCapacity(room)", "HeatCapacity returns C_V at T.", "func (solid.Debye) HeatCapacity(T unit.Temperature) unit.MolarEntropy"},
		{"copper.Hea|tCapacity(room)", "Debye is a lattice", `\int _{0}^{x}`},
		{"copper.HeatCapacity(|)", "func (solid.Debye) HeatCapacity", "Debye is a lattice"},
		{"copper.HeatCapacity(300*unit.K|)", "const unit.K unit.Temperature = 1", "Readings on the Celsius scale"},
		{"copper.Ent|ropy(room)", "func (solid.Debye) Entropy(T unit.Temperature) unit.MolarEntropy", ""},
		{"copper.Accum|ulate", "Accumulate implements", "Differentiable"},
		{"solid.Ein|stein{}", "C_V = n R x² eˣ/(eˣ-1)²", `e^{x}/(e^{x}-1)^{2}`},
		{"solid.Schot|tky{}", "type solid.Schottky struct", `\langle E^{2}\rangle`},
		{"solid.Phon|ons{}", "density of states", `\int g(\omega )`},
		{"solid.Elec|tronic{}", "C = γT", ""},
		{"solid.Tara|sov{}", "chain", ""},
		{"solid.Super|conductor{}", "γT", ""},
		{"solid.Nernst|Lindemann{}", "Cp - C_V = A Cp² T", `Cp - C_{V} = A Cp^{2} T`},
		{"solid.S|um{}", "type solid.Sum", "term"},
		{"so|lid.Sum{}", "package solid // \"levelsum/statmech/solid\"", "Package solid holds models"},
		{"gas.FromLib|rary(\"H2O\")", "func gas.FromLibrary(name string) (*gas.Molecule, error)", "at 1 bar"},
		{"gas.FromLibrary(|)", "FromLibrary returns a molecule", ""},
		{"gas.Mole|cule{}", "A Molecule is an ideal gas", "HeatCapacity(T unit.Temperature)"},
		{"wat|er", "var water *gas.Molecule", ""},
		{"water.Ent|ropy(room)", "Entropy returns S° at T.", "A Molecule is an ideal gas"},
		{"water.Gibbs|Function(room)", "-(G°(T)-H°(T_ref))/T", ""},
		{"gas.Tor|sion{}", "H = -F d²/dφ² + V(φ)", `V(\varphi )`},
		{"gas.N|ew", "Errors: ErrModes", "3N-5"},
		{"gas.LinearRot|or{}", "E(J) = B J(J+1) - D J²(J+1)²", "J(J+1)"},
		{"gas.LinearRotor{Spi|n: nil}", "field Spin *gas.SpinWeights", ""},
		{"gas.Mona|tomic{}", "Mass is that of one atom", "0.10944 J/(mol K)"},
		{"gas.Osc|illator{}", "harmonic", `e^{-x}`},
		{"gas.T|op{}", "Top", `\sqrt{\pi}`},
		{"gas.Diagonal|ised", "const gas.Diagonalised gas.TorsionMethod", ""},
		{"fit.HeatCap|acity", "func fit.HeatCapacity(model any, run *data.Table, opts ...fit.Option)", "give pointers where fields are free"},
		{"fit.HeatCapacity(&copper, table, |)", "HeatCapacity fits a model", ""},
		{"fit.Va|ry", "Vary makes the numbers at the addresses free.", "&deb.Theta"},
		{"fit.Abs|oluteSigma", "known standard deviations", ""},
		{"fit.Win|dow", "func fit.Window(from unit.Temperature, to unit.Temperature) fit.Option", ""},
		{"res|ult", "var result *fit.Result", ""},
		{"result.Cov|ariance", "Covariance", ""},
		{"statmech.Mo|de", "A Mode is anything with a canonical partition function.", "Reduced(T unit.Temperature) statmech.Reduced"},
		{"statmech.Red|uced{}", "LogQ", `\partial \ln q/\partial T`},
		{"statmech.GibbsEnt|ropy", "S = -k Σ pᵢ ln pᵢ", `S = -k \sum p_{i} \ln p_{i}`},
		{"statmech.GibbsEnt|ropy", "Elementary Principles in Statistical Mechanics (1902)", "Errors:"},
		{"statmech.GibbsEntropyOfLev|els", "ln(pᵢ/gᵢ)", `\ln (p_{i}/g_{i})`},
		{"statmech.NewLev|els", "degeneracies; nil degeneracies are all 1", ""},
		{"statmech.Lev|els", "type statmech.Levels", `\exp (-(E_{i}-E_{0})/kT)`},
		{"statmech.Schot|tky{}", "C/k = r x² e⁻ˣ/(1 + r e⁻ˣ)²", `r x^{2} e^{-x}`},
		{"statmech.Aud|it", "checks the three functions of a mode", ""},
		{"statmech.AuditOpt|ions{}", "type statmech.AuditOptions struct", ""},
		{"statmech.TemperatureFromL|ines", "ln(I/(gA)) = const - E/kT", ""},
		{"statmech.MaximumEnt|ropy", "largest entropy", ""},
		{"data.Re|ad", "Read reads the table in a file.", ""},
		{"ta|ble", "var table *data.Table", ""},
		{"uncertain.Meas|ured", "standard uncertainty u (k = 1)", ""},
		{"uncertain.MonteC|arlo", "JCGM 101:2008, 7.9", ""},
		{"uncertain.E|xp", "func uncertain.Exp(q uncertain.Quantity) uncertain.Quantity", ""},
		{"kno|wn", "var known uncertain.Quantity", ""},
		{"display.Res|ult", "rounded by its standard uncertainty", "display.Result(\"γ\", 0.692, 0.005, \"mJ/(mol K2)\")"},
		{"display.Fig|ure{}", "A Figure plots data.", "X any\n\tY any"},
		{"display.Figure{Er|r: nil}", "field Err any", ""},
		{"unit.PerC|m", "// PerCm = Planck * SpeedOfLight * 100", "PerCm is hc/cm"},
		{"unit.KJPer|Mol", "// KJPerMol = 1e3 / Avogadro", "1e3 / Avogadro"},
		{"unit.Ba|r", "const unit.Bar unit.Pressure = 100000", ""},
		{"unit.R|", "the molar gas constant", "8.31446"},
		{"unit.Boltz|mann", "k, J/K", "1.38065e-23"},
		{"unit.Planc|k", "h, J s", ""},
		{"unit.Avog|adro", "N_A, 1/mol", ""},
		{"unit.GasCon|stant", "R = k N_A, J/(mol K)", ""},
		{"unit.Temper|ature(3)", "Temperature is a thermodynamic temperature in K.", "In(u unit.Temperature) float64"},
		{"unit.Mo|larEntropy(3)", "type unit.MolarEntropy float64", "Times(T unit.Temperature) unit.MolarEnergy"},
		{"unit.Cel|sius(25)", "T/K = t/°C + 273.15", ""},
		{"room.I|n(unit.K)", "func (unit.Temperature) In(u unit.Temperature) float64", ""},
		{"room.In(unit.K|)", "const unit.K", ""},
		{"gap.OverK|T(room)", "OverKT", ""},
		{"gap.Per|Mole()", "PerMole returns", ""},
		{"cv(room, \"\").Ti|mes(room)", "func (unit.MolarEntropy) Times(T unit.Temperature) unit.MolarEnergy", ""},
		{"// Gap is the splitting.\nGap := gap\nGa|p", "Gap is the splitting.", "var Gap unit.Energy"},
		{"Gap := gap // of the doublet\nG|ap", "of the doublet", ""},
		{"// both\na, b := pair()\nb|", "both", "var b error"},
		{"// the mass of the sample\nvar m = 3 * unit.Gram\nm|", "the mass of the sample", "var m unit.Mass"},
		{"var (\n\t// first\n\tm1 = 1\n\tm2 = 2 // second\n)\nm2|", "second", "var m2 int"},
		{"co|ld", "kept at the pump", "var cold unit.Temperature"},
		{"for _, T := range temperatures {\n\tcopper.HeatCapacity(|", "func (solid.Debye) HeatCapacity", ""},
		{"y = [1, 2\ncopper.Hea|tCapacity(room)", "func (solid.Debye) HeatCapacity", ""},
		{"x := nosuch + copper.HeatCap|acity(room).In(unit.R)", "HeatCapacity returns C_V at T.", ""},
	} {
		cursor := strings.IndexByte(test.source, '|')
		got, ok := Inspect(s, docs, test.source[:cursor]+test.source[cursor+1:], cursor, 0)
		if !ok {
			t.Errorf("%s: nothing is known", test.source)
			continue
		}
		if !strings.Contains(got.Text, test.text) {
			t.Errorf("%s: no %q in\n%s", test.source, test.text, got.Text)
		}
		if !strings.Contains(got.Markdown, test.markdown) {
			t.Errorf("%s: no %q in\n%s", test.source, test.markdown, got.Markdown)
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
	if want := "F is like Mode, \\*Mode and \\*statmech.Levels.\n\n$$S = k \\ln W$$\n\n#### More\n\n  - of Levels"; markdown != want {
		t.Errorf("markdown %q, want %q", markdown, want)
	}
}
