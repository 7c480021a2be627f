package assist

import (
	"go/ast"
	"go/parser"
	"go/token"
	"go/types"
	"maps"
	"slices"
	"strings"
	"sync"
	"testing"

	"levelsum/kernel/compile"
	"levelsum/kernel/symbols/export"
)

// A session whose declarations are one file.
type session struct {
	pkg   *types.Package
	names map[string]string
	imp   types.Importer
}

func (s session) Names() []string                 { return s.pkg.Scope().Names() }
func (s session) Lookup(name string) types.Object { return s.pkg.Scope().Lookup(name) }
func (s session) ImportNames() []string           { return slices.Sorted(maps.Keys(s.names)) }
func (s session) ImportPath(name string) string   { return s.names[name] }
func (s session) ImportPaths() []string           { return importable }
func (s session) Dots() []string                  { return []string{"math/bits"} }
func (s session) Texts(path, function string) []string {
	if path+"."+function == "levelsum/statmech/data.Read" {
		return []string{"copper.csv", "Δrun.csv", "notes.csv"}
	}
	return nil
}
func (s session) Import(path string) (*types.Package, error) { return s.imp.Import(path) }

var importable = []string{"levelsum/statmech/unit", "math", "math/bits", "math/cmplx", "math/rand", "time"}

const declared = `package cell

import (
	"time"

	"levelsum/display"
	"levelsum/statmech"
	"levelsum/statmech/data"
	"levelsum/statmech/fit"
	"levelsum/statmech/gas"
	"levelsum/statmech/solid"
	"levelsum/statmech/uncertain"
	"levelsum/statmech/unit"
)

type Sample struct {
	Mass, Temp float64
	label      string
	Wait       time.Duration
	Inner
}

type Inner struct{ Depth int }

func (i Inner) Below() int         { return i.Depth }
func (s *Sample) SetMass(m float64) { s.Mass = m }
func (s Sample) Label() string     { return s.label }

type Shape interface{ Area() float64 }

var run Sample
var pointer *Sample
var list []Sample
var byName map[string]Sample
var θ = 343.0
var shape Shape

func heat(d time.Duration, more ...Sample) float64 { return 0 }
func pair() (int, error)                            { return 0, nil }

const steps = 12

type option func(*Sample)

var room, cold unit.Temperature
var gap unit.Energy
var temperatures []unit.Temperature

func cv(T unit.Temperature, label string) unit.MolarEntropy { return 0 }
type disc struct{}

func (disc) Area() float64 { return 0 }

var round disc
var known uncertain.Quantity

func area(s Shape) float64 { return 0 }
func audit(o statmech.AuditOptions)                          {}

var copper solid.Debye
var water *gas.Molecule
var table *data.Table
var result *fit.Result
var figure display.Figure
`

// oneSession is made once.
var oneSession = sync.OnceValues(func() (session, error) {
	fset := token.NewFileSet()
	f, err := parser.ParseFile(fset, "", declared, 0)
	if err != nil {
		return session{}, err
	}
	imp := export.New(compile.List("../.."))
	pkg, err := (&types.Config{Importer: imp}).Check("cell", fset, []*ast.File{f}, nil)
	return session{pkg, map[string]string{"time": "time", "math": "math", "strings": "strings",
		"unit": "levelsum/statmech/unit", "statmech": "levelsum/statmech", "uncertain": "levelsum/statmech/uncertain", "solid": "levelsum/statmech/solid",
		"gas": "levelsum/statmech/gas", "data": "levelsum/statmech/data", "fit": "levelsum/statmech/fit", "display": "levelsum/display"}, imp}, err
})

func newSession(t testing.TB) session {
	t.Helper()
	s, err := oneSession()
	if err != nil {
		t.Fatal(err)
	}
	return s
}

// In the sources | is the cursor. Want are matches that must be there, each
// with its kind if it says so; first is the first; never are those that must
// not be there.
func TestComplete(t *testing.T) {
	s := newSession(t)
	for _, test := range []struct{ name, source, want, first, never string }{
		{"package member", "math.Sq|", "Sqrt:function Sqrt2:constant", "Sqrt", "Abs"},
		{"package member, nothing typed", "math.|", "Sqrt Pi:constant", "", "float64"},
		{"session variable", "ru|", "run:variable rune:type", "run", "list"},
		{"session function", "he|", "heat:function", "heat", ""},
		{"fields and methods", "run.|", "Mass:field Temp Inner Depth label SetMass:method Label Below", "", "heat"},
		{"methods of a pointer", "pointer.|", "Mass SetMass Below", "", ""},
		{"element of a list", "list[0].|", "Mass Label", "", ""},
		{"element of a map", "byName[\"x\"].La|", "Label label", "", "Mass"},
		{"result of a call", "time.Now().Ad|", "Add:method AddDate", "Add", "Sub"},
		{"field of a field", "run.Inner.|", "Depth Below", "", "Mass"},
		{"interface", "shape.|", "Area:method", "Area", ""},
		{"case does not count", "math.sq|", "Sqrt", "Sqrt", ""},
		{"value declared in the cell", "b := strings.Builder{}\nb.Wr|", "Write WriteString WriteByte WriteRune", "Write", "Len"},
		{"value of a cell with an error", "x := nosuch\nb := strings.Builder{}\nb.Wr|\ny := nosuch + 1", "WriteString", "", ""},
		{"variable of the cell", "alpha := 1\nbeta := alp|", "alpha:variable", "alpha", ""},
		{"not yet declared", "be| \nbeta := 1", "", "", "beta"},
		{"inside an open function", "func f(width float64) {\n\tif width > 1 {\n\t\tx := wid|", "width", "width", ""},
		{"inside an open call", "heat(time.Sec|", "Second:constant", "Second", ""},
		{"open call, more after it", "heat(ru|\nz := 1", "run", "run", ""},
		{"receiver in an open method", "func (s Sample) F() float64 {\n\treturn s.Ma|", "Mass", "Mass", ""},
		{"type declared in the cell", "type Cell struct{ Wall int }\nvar c Cell\nc.|", "Wall:field", "Wall", ""},
		{"method declared in the cell", "type Cell struct{}\nfunc (Cell) Open() {}\nCell{}.|", "Open:method", "Open", ""},
		{"fields of a literal", "Sample{Ma|}", "Mass:field", "Mass", ""},
		{"fields that are missing", "Sample{Mass: 1, |}", "Temp label Inner", "", "Mass run"},
		{"open literal", "Sample{Mass: 1, Te|", "Temp", "Temp", ""},
		{"wanted type first", "heat(|)", "time.Second:constant time.Hour run", "time.Hour", ""},
		{"wanted type by its own name", "heat(Sec|)", "time.Second", "time.Second", ""},
		{"wanted beside an operator", "heat(3*time.Second + |)", "time.Minute", "", ""},
		{"wanted by a field", "Sample{Wait: Sec|}", "time.Second", "time.Second", ""},
		{"wanted by a field of an open literal", "Sample{Wait: 3 * Sec|", "time.Second", "time.Second", ""},
		{"wanted in a literal of another package", "x := time.Time{}\nstrings.Builder{|", "", "", "time.Second"},
		{"range variable", "for i, sample := range list {\n\tsam|", "sample", "sample", ""},
		{"closure", "f := func(depth int) int { return dep| }", "depth", "depth", ""},
		{"two results are no value", "pair().|", "", "", ""},
		{"package name", "stri|", "strings:module string:type", "strings", ""},
		{"keyword and builtin", "ra|", "range:keyword", "", ""},
		{"builtin", "appe|", "append:function", "append", ""},
		{"type", "var x flo|", "float64:type float32", "", ""},
		{"after a name of several bytes", "θ + θ*math.Sq|", "Sqrt", "Sqrt", ""},
		{"name of several bytes", "θ|", "θ:variable", "θ", ""},
		{"own import", "import \"math/bits\"\nbits.Len|", "Len:function Len64", "Len", ""},
		{"import under another name", "import b \"math/bits\"\nb.Len6|", "Len64", "Len64", ""},
		{"shadowed name", "run := 3.5\nrun.|", "", "", "Mass"},
		{"statement before a declaration", "x := 1\nfunc g() { heat(run.Te| }", "Temp", "Temp", ""},
		{"unexported member of another package", "time.Now().|", "Unix", "", "wall"},
		{"in a string", "s := \"math.|\"", "", "", "Sqrt"},
		{"in a comment", "// math.|", "", "", "Sqrt"},
		{"in a number", "x := 12|", "", "", "steps"},
		{"unknown package", "nosuch.|", "", "", "run"},
		{"constant", "st|", "steps:constant", "steps", ""},
		{"empty cell", "|", "run heat math", "", ""},
		{"keyword after all else", "ty|", "type:keyword", "", ""},

		{"quantity as an argument", "cv(|", "unit.K:constant unit.MilliK room cv", "unit.K", "unit.Bar"},
		{"quantity in a closed call", "cv(|, \"copper\")", "unit.K cold", "unit.K", "unit.J"},
		{"the second argument is none", "cv(300*unit.K, |", "run", "", "unit.K"},
		{"quantity right of a factor", "cv(343 * |", "unit.K unit.MilliK", "unit.K", "unit.Bar"},
		{"quantity by its own name", "cv(343 * Mil|", "unit.MilliK", "unit.MilliK", "unit.K"},
		{"variables of the kind before others", "cv(r|", "room run range", "room", ""},
		{"any unit right of a number", "x := 343 * |", "unit.K unit.Bar unit.PerCm", "", ""},
		{"any unit right of a negative number", "x := -2 * Bar|", "unit.Bar", "unit.Bar", ""},
		{"no unit right of a variable", "x := θ * |", "run", "", "unit.K"},
		{"quantity to an assigned variable", "room = 3 * |", "unit.K", "unit.K", "unit.Bar"},
		{"quantity to a declared variable", "var e unit.Energy = 12 * |", "unit.PerCm gap unit.EV", "unit.PerCm", "unit.K"},
		{"quantity in a sum", "gap + 3*PerC|", "unit.PerCm", "unit.PerCm", "unit.K"},
		{"quantity in a comparison", "if room < 3*|", "unit.K", "unit.K", "unit.Bar"},
		{"what is compared is not the condition", "if room < 3*unit.K && |", "run", "", "unit.K"},
		{"quantity in a slice", "ts := []unit.Temperature{1 * unit.K, 2 * |", "unit.K", "unit.K", "unit.Bar"},
		{"quantity in a map", "m := map[string]unit.Pressure{\"a\": 2 * |}", "unit.Bar", "", "unit.K"},
		{"quantity to return", "func f() unit.Temperature {\n\treturn 3 * |", "unit.K", "unit.K", "unit.Bar"},
		{"second quantity to return", "func f() (a, b unit.Temperature, p unit.Pressure) {\n\treturn room, cold, 3 * |", "unit.Bar", "", "unit.K"},
		{"quantity to return from a literal", "f := func() unit.Temperature { return | }", "unit.K", "unit.K", "unit.Bar"},
		{"unit in which to read", "room.In(|", "unit.K unit.MilliK", "unit.K", "unit.Bar"},
		{"unit for many", "unit.Temperatures([]float64{1}, |", "unit.K", "unit.K", "unit.Bar"},
		{"conversion", "unit.Temperature(θ) * |", "unit.K", "unit.K", "unit.Bar"},
		{"quantity in parentheses", "cv((300 * |", "unit.K", "unit.K", "unit.Bar"},
		{"quantity on a channel", "c := make(chan unit.Temperature, 1)\nc <- 3 * |", "unit.K", "unit.K", "unit.Bar"},
		{"package under another name", "import u \"levelsum/statmech/unit\"\ncv(3 * |", "u.K", "u.K", "unit.K"},
		{"methods of a quantity", "room.|", "In:method AsEnergy:method String", "", ""},
		{"methods of a product", "(300 * unit.K).As|", "AsEnergy", "AsEnergy", ""},
		{"methods of a result", "cv(room, \"\").|", "In SI", "", ""},
		{"element of quantities", "temperatures[0].I|", "In", "In", ""},
		{"range over quantities", "for _, T := range temperatures {\n\tT.|", "In AsEnergy", "", ""},
		{"options of a struct", "audit(|", "statmech.AuditOptions:type", "statmech.AuditOptions", ""},
		{"value with the wanted methods", "area(|", "round shape", "round", ""},
		{"options that are functions", "uncertain.MonteCarlo(known, |", "uncertain.Draws:function uncertain.Seed uncertain.Coverage", "uncertain.Coverage", "uncertain.Exp"},
		{"options by their own names", "uncertain.MonteCarlo(known, uncertain.Draws(9), Se|", "uncertain.Seed", "uncertain.Seed", "uncertain.Draws"},
		{"a wanted value of another package", "uncertain.Exp(|", "known", "known", "unit.K uncertain.Quantity"},
		{"first field of a struct of quantities", "type P struct{ T unit.Temperature }\nP{|", "T:field", "T", "unit.K"},
		{"field of a struct of quantities", "type P struct{ T unit.Temperature }\nP{T: 3 * |", "unit.K", "unit.K", "unit.Bar"},
		{"quantity among the units", "cv(300*unit.|", "K Bar Temperature:type", "K", ""},
		{"quantity among the units, begun", "cv(unit.k|", "K", "K", "Bar"},
		{"option among the members", "uncertain.MonteCarlo(known, uncertain.|", "Seed Exp", "Coverage", ""},

		{"import path", "import \"math/|\"", "math/bits:module math/cmplx math/rand", "math/bits", "time math"},
		{"open import path", "import \"math/b|", "math/bits", "math/bits", "math/cmplx"},
		{"open import path, more after it", "import \"uni|\nx := 1", "levelsum/statmech/unit", "levelsum/statmech/unit", "time"},
		{"import path by its last element", "import \"rand|\"", "math/rand", "math/rand", "math"},
		{"import path in a group", "import (\n\t\"time\"\n\t\"mat|\n)", "math math/bits", "math", "time"},
		{"named import path", "import b \"mat|\"", "math math/bits", "math", "time"},
		{"import path in raw quotes", "import `ti|`", "time", "time", "math"},
		{"empty import path", "import \"|\"", "time math", "levelsum/statmech/unit", ""},
		{"string after an import", "import \"time\"\ns := \"ma|\"", "", "", ""},
		{"string in a statement that names import", "importance := \"ma|\"", "", "", ""},
		{"outside the quotes of an import", "import \"math\"\nmath.Sq|", "Sqrt", "Sqrt", "math/bits"},

		{"after letters of four bytes", "s := \"𝛉𝛉\"; 𝜃 := room; 𝜃.I|", "In", "In", ""},
		{"after a comment of several bytes", "/* ΔH°₂₉₈ */ run.Ma|", "Mass", "Mass", ""},
		{"method value", "f := run.La|", "Label", "Label", ""},
		{"result of a function of the session", "heat(3, Sample{}.|", "Mass", "", ""},
		{"pointer made in the cell", "p := &Sample{}\np.Se|", "SetMass", "SetMass", ""},
		{"value of a type assertion", "shape.(Shape).|", "Area", "Area", ""},
		{"type switch", "switch s := any(run).(type) {\ncase Sample:\n\ts.Ma|", "Mass", "Mass", ""},
		{"after an error on the line before", "x := = 3\nrun.Te|", "Temp", "Temp", ""},
		{"deferred call", "func f() {\n\tdefer run.Se|", "SetMass", "SetMass", ""},
		{"composite element", "list = append(list, Sample{Te|", "Temp", "Temp", ""},
		{"pair assigned in the cell", "n, err := pair()\nerr.|", "Error:method", "Error", ""},
		{"embedded in a cell's type", "type Wrap struct{ Sample }\nvar w Wrap\nw.|", "Mass Sample Below", "", ""},
		{"generic function of the cell", "func first[T any](xs []T) T { return xs[0] }\nfirst(list).|", "Mass Label", "", ""},
		{"dot import of a cell", "import . \"math\"\nSqr|", "Sqrt:function", "Sqrt", ""},
		{"dot import of an earlier cell", "LeadingZ|", "LeadingZeros:function LeadingZeros64", "LeadingZeros", ""},
		{"dot import behind what the session declares", "l|", "list Len", "list", ""},
		{"own name before a dot import", "Len := 3\nLe|", "Len:variable", "Len", ""},
		{"fields, then what computes, then plumbing", "copper.|", "Theta HeatCapacity Accumulate String", "Theta", ""},
		{"physics first of a molecule", "water.|", "HeatCapacity Entropy At View", "HeatCapacity", ""},
		{"physics begun", "copper.Ent|", "Entropy EnthalpyIncrement Entropies", "Entropy", "HeatCapacity"},
		{"models first", "solid.|", "Debye Einstein HeatCapacities", "Debye", ""},
		{"molecules first", "gas.|", "Molecule FromLibrary New", "Molecule", ""},
		{"units before types of quantities", "unit.|", "K Temperature Celsius", "K", ""},
		{"figures first", "display.|", "Figure Table Result Sink", "Figure", ""},
		{"fields of a literal in their order", "display.Figure{|}", "X Y Err Residuals", "X", ""},
		{"fields that are missing, in their order", "display.Figure{X: 1, Y: 2, |}", "Err Residuals", "Err", "X Y run"},
		{"field of a model's literal", "solid.Debye{|}", "Theta Modes", "Theta", ""},
		{"field begun", "solid.Debye{Mo|", "Modes", "Modes", "Theta"},
		{"quantity of a field", "solid.Debye{Theta: |}", "unit.K room cold", "unit.K", "unit.Bar"},
		{"quantity of a field right of a factor", "solid.Debye{Theta: 343 * |", "unit.K", "unit.K", "unit.Bar"},
		{"quantity of an assigned field", "copper.Theta = 343 * |", "unit.K", "unit.K", "unit.Bar"},
		{"argument of a method of a literal", "solid.Debye{Theta: 343 * unit.K}.Entropy(|", "unit.K room", "unit.K", "unit.Bar"},
		{"argument of a method of a pointer", "water.Entropy(298.15 * |", "unit.K", "unit.K", "unit.Bar"},
		{"result of a method", "water.Entropy(room).|", "In Over SI", "In", ""},
		{"unit to read a result in", "copper.HeatCapacity(room).In(|", "unit.JPerMolK unit.R", "unit.JPerMolK", "unit.K"},
		{"everyday units first", "x := 3 * |", "unit.K unit.PerCm unit.KHz", "unit.K", ""},
		{"everyday units first, begun", "x := 3 * P|", "unit.PerCm unit.Pa", "unit.PerCm", "unit.K"},
		{"kinds are no units", "x := 3 * unit.K|", "K Kg", "K", ""},
		{"units in other case", "x := 3 * unit.kj|", "KJPerMol", "KJPerMol", "K"},
		{"options of a fit", "fit.HeatCapacity(&copper, table, |", "fit.Vary:function fit.Window", "fit.Vary", "fit.Curve"},
		{"options of a fit, begun", "fit.HeatCapacity(&copper, table, fit.Vary(&copper.Theta), Win|", "fit.Window", "fit.Window", "fit.Vary"},
		{"options among the members of fit", "fit.HeatCapacity(&copper, table, fit.|", "Vary Window Curve", "Vary", ""},
		{"table wanted", "fit.HeatCapacity(&copper, |", "table", "table", "data.Table"},
		{"field behind an address", "fit.HeatCapacity(&copper, table, fit.Vary(&copper.|", "Theta Modes", "Theta", ""},
		{"address of a variable", "func show(p *solid.Debye) {}\nshow(|", "&copper:variable", "&copper", ""},
		{"address of a variable, begun", "func show(p *solid.Debye) {}\nshow(cop|", "&copper:variable", "&copper", ""},
		{"a model as a mode", "statmech.Audit(|", "copper", "copper", ""},
		{"a model in a sum", "solid.Sum{|", "copper", "copper", ""},
		{"type of a variable", "var p unit.|", "Pressure Temperature K", "Amount", ""},
		{"type of a parameter", "func f(T unit.Temp|", "Temperature:type Temperatures", "Temperature", ""},
		{"type of a result", "func f() unit.Mol|", "MolarEntropy MolarEnergy MolarKJ", "MolarEnergy", ""},
		{"type of a slice", "ts := []unit.Te|", "Temperature", "Temperature", ""},
		{"type of a map", "m := map[string]unit.Pr|", "Pressure", "Pressure", ""},
		{"type of a field", "type C struct {\n\tT unit.Te|", "Temperature", "Temperature", ""},
		{"type without a package", "var x flo|", "float64 float32", "float32", ""},
		{"text that a function takes", "data.Read(\"|\")", "copper.csv:text notes.csv", "copper.csv", "run"},
		{"text begun", "data.Read(\"cop|\")", "copper.csv", "copper.csv", "notes.csv"},
		{"open text", "t, err := data.Read(\"no|", "notes.csv", "notes.csv", "copper.csv"},
		{"text of several bytes", "data.Read(\"Δ|\")", "Δrun.csv", "Δrun.csv", "copper.csv"},
		{"text, more after it", "data.Read(\"|)\nx := 1", "copper.csv", "copper.csv", ""},
		{"text of another function", "strings.ToUpper(\"co|\")", "", "", "copper.csv"},
		{"columns of a table", "table.|", "Column", "", ""},
		{"result of a fit", "result.|", "Covariance", "", ""},
		{"first value of two", "t, err := data.Read(\"a\")\nt.|", "Column", "", "Error"},
		{"error of two", "t, err := data.Read(\"a\")\nerr.|", "Error", "Error", ""},
		{"in a loop over temperatures", "for _, T := range unit.TemperatureSteps(room, cold, 1*unit.K) {\n\tcopper.HeatCapacity(|", "T unit.K", "unit.K", ""},
		{"in a function of a cell", "func cp(T unit.Temperature) unit.MolarEntropy {\n\treturn copper.|", "HeatCapacity", "Theta", ""},
		{"own mode", "type Own struct{ Gap unit.Energy }\nfunc (o Own) Reduced(T unit.Temperature) statmech.Reduced {\n\tx := o.|", "Gap Reduced", "Gap", ""},
		{"method of an own field", "type Own struct{ Gap unit.Energy }\nfunc (o Own) Reduced(T unit.Temperature) statmech.Reduced {\n\tx := o.Gap.Over|", "OverKT", "OverKT", ""},
		{"fields to return", "func f() statmech.Reduced {\n\treturn statmech.Reduced{|", "LogQ U C", "LogQ", ""},
		{"behind a python loop", "for i in range(10):\n    copper.|", "HeatCapacity", "", ""},
		{"behind an unclosed bracket", "x := math.Exp(gap.|", "OverKT PerMole", "", ""},
		{"behind a wrong line", "y = [1, 2\ncopper.Hea|", "HeatCapacity", "HeatCapacity", ""},
		{"between good and bad", "y := nosuch.x\ncopper.Hea|\nz := (", "HeatCapacity", "HeatCapacity", ""},
		{"after an emoji", "s := \"🧪\"; copper.Hea|", "HeatCapacity", "HeatCapacity", ""},
		{"a name in Greek", "δθ := room\nδθ.I|", "In", "In", ""},
		{"a name in Greek, begun", "δθ := room\nδ|", "δθ", "δθ", ""},
	} {
		t.Run(test.name, func(t *testing.T) {
			cursor := strings.IndexByte(test.source, '|')
			source := test.source[:cursor] + test.source[cursor+1:]
			got := Complete(s, source, cursor)
			kinds := map[string]string{}
			var names []string
			for _, m := range got.Matches {
				kinds[m.Text] = m.Kind
				names = append(names, m.Text)
			}
			for w := range strings.FieldsSeq(test.want) {
				name, kind, _ := strings.Cut(w, ":")
				if k, ok := kinds[name]; !ok || kind != "" && k != kind {
					t.Errorf("%s is %q, want %q, among %q", name, k, kind, names)
				}
			}
			for n := range strings.FieldsSeq(test.never) {
				if _, ok := kinds[n]; ok {
					t.Errorf("%s is among %q", n, names)
				}
			}
			if test.first != "" && (len(names) == 0 || names[0] != test.first) {
				t.Errorf("first of %q, want %s", names, test.first)
			}
			if test.want == "" && test.never == "" && len(names) > 0 {
				t.Errorf("matches %q, want none", names)
			}
			start, _ := wordAt(source, cursor)
			if at, _, ok := importAt(source, cursor); ok {
				start = at
			}
			if got.Start > cursor || got.End < cursor || len(names) > 0 && got.Start != start {
				t.Errorf("replaces %d to %d with the cursor at %d", got.Start, got.End, cursor)
			}
		})
	}
}

// The whole name is replaced when the cursor is inside it.
func TestCompleteInsideAName(t *testing.T) {
	const source = "x := math.Sqrx + 1"
	got := Complete(newSession(t), source, strings.Index(source, "rx"))
	if source[got.Start:got.End] != "Sqrx" || got.Matches[0].Text != "Sqrt" {
		t.Errorf("replaces %q by %v", source[got.Start:got.End], got.Matches)
	}
}

func TestSignatures(t *testing.T) {
	s := newSession(t)
	for _, test := range []struct{ source, name, want string }{
		{"he", "heat", "func(d time.Duration, more ...Sample) float64"},
		{"run.", "SetMass", "func(m float64)"},
		{"run.", "Mass", "float64"},
		{"run.", "Inner", "Inner"},
		{"st", "steps", "untyped int = 12"},
		{"Sa", "Sample", "struct"},
		{"math.", "Sqrt", "func(x float64) float64"},
		{"ma", "math", "math"},
		{"Sh", "Shape", "interface"},
	} {
		got := ""
		for _, m := range Complete(s, test.source, len(test.source)).Matches {
			if m.Text == test.name {
				got = m.Signature
			}
		}
		if got != test.want {
			t.Errorf("after %q: signature of %s = %q, want %q", test.source, test.name, got, test.want)
		}
	}
}

// Whatever is typed there is an answer, and it is about the cursor.
func FuzzComplete(f *testing.F) {
	s := newSession(f)
	f.Add("heat(run.", 9)
	f.Add("for i := range list { list[i].", 30)
	f.Add("func (s Sample) f() { s.\n}\nx := `", 24)
	f.Add("type T[P any] struct { x P }; T[int]{}.", 39)
	f.Add("import (\n\tb \"math/", 18)
	f.Add("cv((3 * -", 9)
	f.Add("x := struct{ a, bc int }{}\nf := func() { x. }", 18)
	f.Add("func f() (a, b int) { return func() int { return ", 49)
	f.Fuzz(func(t *testing.T, source string, cursor int) {
		got := Complete(s, source, cursor)
		if got.Start < 0 || got.End > len(source) || got.Start > got.End {
			t.Errorf("replaces %d to %d of %d bytes", got.Start, got.End, len(source))
		}
		for _, m := range got.Matches {
			if strings.Contains(m.Text+m.Signature, placeholder) {
				t.Errorf("the placeholder is offered: %q", m.Text)
			}
		}
		if d, ok := Inspect(s, nil, source, cursor, 0); ok && d.Text == "" {
			t.Error("a description is empty")
		}
	})
}

func BenchmarkComplete(b *testing.B) {
	s := newSession(b)
	const source = "for i := range list {\n\tx := list[i].Mass * math.Sqrt(θ)\n\theat(time.Second, list[i])\n\tlist[i]."
	for b.Loop() {
		Complete(s, source, len(source))
	}
}
