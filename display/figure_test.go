package display

import (
	"encoding/csv"
	"errors"
	"math"
	"path/filepath"
	"strconv"
	"strings"
	"testing"

	"levelsum/display/internal/scene"
)

func line(T kelvin) molar { return molar(2 * float64(T)) }

// elsewhere is a curve that was fitted to other data.
type elsewhere struct{}

func (elsewhere) Curve() func(kelvin) molar    { return line }
func (elsewhere) FittedTo(x, y []float64) bool { return false }

type here struct{}

func (here) Curve() func([]kelvin) []molar {
	return func(ts []kelvin) []molar {
		out := make([]molar, len(ts))
		for i := range ts {
			out[i] = line(ts[i])
		}
		return out
	}
}
func (here) FittedTo(x, y []float64) bool { return len(x) == 3 && x[2] == 3 && y[2] == 6.5 }

// model has a method that could be drawn.
type model struct{}

func (model) HeatCapacity(T kelvin) molar { return line(T) }
func (model) Modes() int                  { return 3 }

var (
	someT = []kelvin{1, 2, 3}
	someC = []molar{2, 4, 6.5}
	someU = []molar{0.1, 0.1, 0.2}
	tAxis = Axis{Quantity: "T"}
	cAxis = Axis{Quantity: "C_p"}
)

func TestFigureRefused(t *testing.T) {
	ok := Figure{X: someT, Y: someC, XAxis: tAxis, YAxis: cAxis}
	with := func(change func(*Figure)) Figure {
		f := ok
		change(&f)
		return f
	}
	for _, test := range []struct {
		name string
		f    Figure
		want string
	}{
		{"nothing", Figure{}, "nothing to plot"},
		{"no label", Figure{X: []float64{1}, Y: []molar{1}}, "the x axis has neither quantity nor unit: give XAxis: "},
		{"no labels", Figure{X: []float64{1}, Y: []float64{1}}, "the x axis and the y axis have neither quantity nor unit: give XAxis: display.Axis{Quantity: \"...\", Unit: \"...\"}, YAxis: "},
		{"no label on the right", with(func(f *Figure) { f.Series = []Series{{X: someT, Y: []float64{1, 2, 3}, Right: true}} }), "the right axis has neither"},
		{"legend", with(func(f *Figure) { f.Legend = "topright" }), `Legend is "topright", want "" for a free place, or one of none, above, top left`},
		{"a type without unit", Figure{X: []naked{1}, Y: []naked{1}}, "whose unit is not known"},
		{"lengths", with(func(f *Figure) { f.Y = someC[:2] }), "X has 3 values, Y has 2"},
		{"bars", with(func(f *Figure) { f.Err = someU[:2] }), "3 values and 2 uncertainties"},
		{"negative bars", with(func(f *Figure) { f.Err = []molar{1, -1, 1} }), "the uncertainty at index 1 is -1"},
		{"bars of another type", with(func(f *Figure) { f.Err = someT }), "uncertainties of type display.kelvin"},
		{"log", with(func(f *Figure) { f.YAxis.Log = true; f.Y = []molar{0, -1, 6} }),
			"the y axis is logarithmic, but 2 of 3 values of Y of series 1 are not positive (the first is 0, at index 0)"},
		{"log of the curve", with(func(f *Figure) { f.YAxis.Log = true; f.Curve = func(T kelvin) molar { return molar(T) - 2 } }),
			"values of the curve are not positive"},
		{"infinity", with(func(f *Figure) { f.Y = []molar{1, molar(math.Inf(1)), 2} }), "1 of 3 values of Y of series 1 are not finite"},
		{"x not a number", with(func(f *Figure) { f.X = []kelvin{1, kelvin(math.NaN()), 2} }), "values of X of series 1 are not finite"},
		{"another unit on the axis", with(func(f *Figure) { f.Series = []Series{{X: []joule{1}, Y: someC[:1]}} }), "in J, other data on the x axis are in K"},
		{"no unit beside units", with(func(f *Figure) { f.Series = []Series{{X: []float64{1}, Y: someC[:1]}} }), "has no unit, other data on the x axis have K"},
		{"curve of another argument", with(func(f *Figure) { f.Curve = func(E joule) molar { return 1 } }), "but the x axis shows display.kelvin"},
		{"curve of another result", with(func(f *Figure) { f.Curve = func(T kelvin) joule { return 1 } }), "but the y axis shows display.molar"},
		{"curve with NaN", with(func(f *Figure) { f.Curve = func(T kelvin) molar { return molar(math.NaN()) } }), "the curve gives NaN at x = 1"},
		{"curve that panics", with(func(f *Figure) { f.Curve = func(T kelvin) molar { panic("no value here") } }), "panicked at x = 1: no value here"},
		{"curve of two arguments", with(func(f *Figure) { f.Curve = func(a, b float64) float64 { return 1 } }), "want a function of one number"},
		{"residuals of other data", with(func(f *Figure) { f.Curve = elsewhere{}; f.Residuals = true }), "the residuals would be of another data set"},
		{"residuals without a curve", with(func(f *Figure) { f.Residuals = true }), "residuals need points and a curve"},
		{"residuals beyond a curve", with(func(f *Figure) {
			f.Curve = Curve{X: []kelvin{1, 2}, Y: []molar{2, 4}}
			f.Residuals = true
		}), "the curve goes from x = 1 to 2, but there are data at 3"},
		{"right axis without unit", with(func(f *Figure) { f.RightAxis = Axis{Factor: 2} }), "the right axis has no unit"},
		{"range", with(func(f *Figure) { f.XAxis.Min = 5; f.XAxis.Max = 1 }), "want Min < Max"},
		{"half a band", with(func(f *Figure) { f.Series = []Series{{X: someT, Lower: someC}} }), "a band needs Lower and Upper"},
		{"matrix", Figure{Map: &Map{X: []float64{1, 2}, Y: []float64{1, 2}, Z: [][]float64{{1, 2}}, Unit: "1"}, XAxis: tAxis, YAxis: tAxis}, "want one row for each of 2 Y"},
		{"log colours", Figure{Map: &Map{X: []float64{1, 2}, Y: []float64{1, 2}, Z: [][]float64{{1, 2}, {0, 3}}, Unit: "1", Log: true}, XAxis: tAxis, YAxis: tAxis},
			"1 of 4 values of Z of the map are not positive"},
		{"population", Figure{Ladders: []Ladder{{Energies: []joule{1}, Populations: []float64{2}}}}, "want 0 to 1"},
		{"levels and labels", Figure{Ladders: []Ladder{{Name: "a", Energies: []joule{1, 2}, Labels: []string{"x"}}}}, "2 values, but 1 Labels"},
		{"levels among points", with(func(f *Figure) { f.Ladders = []Ladder{{Energies: []joule{1}}} }), "a level diagram has no other data in it"},
		{"factor", with(func(f *Figure) { f.RightAxis = Axis{Factor: -2, Unit: "J"} }), "Factor is -2, want a positive number"},
		{"factor and data", with(func(f *Figure) {
			f.RightAxis = Axis{Factor: 2, Unit: "J"}
			f.Series = []Series{{X: someT, Y: []joule{1, 2, 3}, Right: true}}
		}), "data of its own and a Factor"},
		{"mark at nothing", with(func(f *Figure) { f.Marks = []Mark{{Label: "here"}} }), "mark 1: want X or Y"},
		{"mark in another unit", with(func(f *Figure) { f.Marks = []Mark{{X: joule(1)}} }), "mark 1 is in J, other data on the x axis are in K"},
		{"mark on a log axis", with(func(f *Figure) { f.XAxis.Log = true; f.Marks = []Mark{{X: kelvin(-1)}} }), "1 of 1 values of mark 1 are not positive"},
		{"bins", Figure{Histogram: &Histogram{Values: someT, Bins: -1}, XAxis: tAxis}, "-1 bins, want 1 to 2000"},
		{"log histogram", Figure{Histogram: &Histogram{Values: []kelvin{0, 1}}, XAxis: Axis{Quantity: "T", Log: true}}, "1 of 2 values of the histogram are not positive"},
		{"map without a label", Figure{Map: &Map{X: someT, Y: someT, Z: [][]float64{{1, 2, 3}, {1, 2, 3}, {1, 2, 3}}}, XAxis: tAxis, YAxis: tAxis}, "colours have neither quantity nor unit"},
		{"map out of order", Figure{Map: &Map{X: []kelvin{2, 1}, Y: someT, Z: [][]float64{{1, 2}, {1, 2}, {1, 2}}, Unit: "1"}, XAxis: tAxis, YAxis: tAxis}, "in ascending order"},
		{"map that parts at zero on a log scale", Figure{Map: &Map{X: someT[:2], Y: someT[:2], Z: [][]float64{{1, 2}, {1, 2}}, Unit: "1", Log: true, Diverging: true}, XAxis: tAxis, YAxis: tAxis}, "cannot part at zero"},
		{"lines only, without lines", Figure{Map: &Map{X: someT[:2], Y: someT[:2], Z: [][]float64{{1, 2}, {1, 2}}, Unit: "1", LinesOnly: true}, XAxis: tAxis, YAxis: tAxis}, "LinesOnly but no Contours"},
		{"relative residuals where the curve is zero", with(func(f *Figure) { f.Curve = func(T kelvin) molar { return molar(T) - 2 }; f.RelativeResiduals = true }), "the curve is 0 at x = 2"},
		{"residuals on the right", with(func(f *Figure) {
			f.Series = []Series{{X: someT, Y: someC, Right: true, Curve: line}}
			f.X, f.Y, f.RightAxis, f.Residuals = nil, nil, cAxis, true
		}), "residuals are for data on the left axis"},
		{"curve out of order", with(func(f *Figure) { f.Curve = Curve{X: []kelvin{2, 1}, Y: []molar{1, 2}} }), "not in ascending order"},
		{"a point that cannot be drawn", with(func(f *Figure) { f.Y = []molar{1, 2, 1e300} }), "which cannot be drawn: give Min and Max"},
		{"text for numbers", with(func(f *Figure) { f.Y = []string{"a", "b", "c"} }), "is text, want numbers"},
		{"curve without a range", Figure{Curve: line, XAxis: tAxis, YAxis: cAxis}, "a curve without data needs the range to draw it over"},
		{"a model for a curve", with(func(f *Figure) { f.Curve = model{} }), "a curve is a display.model, want a function of x or a display.Curve; its methods HeatCapacity are such functions"},
		{"a scale with another zero", with(func(f *Figure) { f.XAxis.Unit = "°C" }), "scales with another zero are not converted"},
		{"X without Y", with(func(f *Figure) { f.Y = nil }), "X and Y belong together"},
		{"width", with(func(f *Figure) { f.Width = -3 }), "Width is -3 mm"},
	} {
		err := test.f.Check()
		var r *Refusal
		if !errors.As(err, &r) || !strings.Contains(err.Error(), test.want) {
			t.Errorf("%s: error %v, want %q", test.name, err, test.want)
		}
		if _, err := Render(test.f); err == nil {
			t.Errorf("%s: Render takes it", test.name)
		}
	}
	if err := ok.Check(); err != nil {
		t.Errorf("the sound figure is refused: %v", err)
	}
}

// rows reads the plotted numbers of a figure.
func rows(t *testing.T, f Figure) (head []string, out [][]string) {
	t.Helper()
	c, err := f.CSV()
	if err != nil {
		t.Fatal(err)
	}
	all, err := csv.NewReader(strings.NewReader(c)).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	return all[0], all[1:]
}

func of(rows [][]string, what string) [][]string {
	var out [][]string
	for _, r := range rows {
		if r[0] == what {
			out = append(out, r)
		}
	}
	return out
}

func TestFigureResiduals(t *testing.T) {
	head, all := rows(t, Figure{X: someT, Y: someC, Err: someU, Curve: here{}, Residuals: true, XAxis: tAxis, YAxis: cAxis})
	if got := strings.Join(head, ";"); got != "data;name;T/K;C_p/(J/(mol K));u(C_p)/(J/(mol K))" {
		t.Errorf("head %q", got)
	}
	res := of(all, "residuals")
	if len(res) != 3 || res[2][3] != "0.5" || res[2][4] != "0.2" || res[0][3] != "0" {
		t.Errorf("residuals %v, want 0, 0, 0.5 with u = 0.2", res)
	}
	_, all = rows(t, Figure{X: someT, Y: someC, Curve: line, RelativeResiduals: true, XAxis: tAxis, YAxis: cAxis})
	if got, _ := strconv.ParseFloat(of(all, "residuals")[2][3], 64); math.Abs(got-100*0.5/6) > 1e-12 {
		t.Errorf("relative residual %v %%, want 0.5/6", got)
	}
}

// In another unit all that belongs to an axis is converted, and functions
// still get what their type says.
func TestFigureConverts(t *testing.T) {
	e := []joule{1000, 2000, 3000}
	_, all := rows(t, Figure{X: e, Y: []kelvin{2, 4, 6}, XErr: []joule{100, 100, 100},
		Curve: Curve{F: func(E joule) kelvin { return kelvin(E) / 500 }, U: func(E joule) kelvin { return 1 }, K: 2},
		Marks: []Mark{{X: joule(1500), Label: "here"}},
		XAxis: Axis{Quantity: "E", Unit: "kJ", In: joule(1000)}, YAxis: Axis{Quantity: "T"}, Residuals: true})
	p := of(all, "points")
	if p[1][2] != "2" || p[1][3] != "0.1" {
		t.Errorf("x and its bar are %v, want 2 kJ and 0.1 kJ", p[1][2:4])
	}
	for _, r := range of(all, "residuals") {
		if r[4] != "0" {
			t.Errorf("residual %v, want 0", r)
		}
	}
	c := of(all, "curve")
	last := c[len(c)-1]
	if last[2] != "3" || last[4] != "6" || last[5] != "4" || last[6] != "8" {
		t.Errorf("the curve ends with %v, want x = 3 kJ, y = 6 K, band 4 to 8", last)
	}
}

func TestFigureText(t *testing.T) {
	f := Figure{X: someT, Y: someC, Err: someU, Name: "run 7", XAxis: tAxis, YAxis: cAxis, Caption: "Invented data."}
	golden(t, "figure.txt", text(f)+"\n")
	if err := f.Save(filepath.Join(t.TempDir(), "f.png")); err == nil || !strings.Contains(err.Error(), "draw.Register") {
		t.Errorf("without a renderer Save says %v", err)
	}
	f.Alt = "told"
	if got := text(f); !strings.Contains(got, "told") {
		t.Errorf("Alt is not in %q", got)
	}
}

// The kind that a typed quantity measures names an axis that has no name.
func TestFigureAxisFromType(t *testing.T) {
	got := text(Figure{X: someT, Y: someC})
	if !strings.Contains(got, "molar entropy or heat capacity / (J mol⁻¹ K⁻¹)") {
		t.Errorf("got %q", got)
	}
}

// Counts by hand: 0.5, 1.5, 1.6, 3.9 in four bins from 0 to 4.
func TestHistogram(t *testing.T) {
	_, all := rows(t, Figure{Histogram: &Histogram{Values: []float64{0, 0.5, 1.5, 1.6, 3.9, 4}, Bins: 4}, XAxis: Axis{Quantity: "x", Unit: "1"}})
	var counts []string
	for _, r := range of(all, "histogram") {
		counts = append(counts, r[3])
	}
	if got := strings.Join(counts, " "); got != "2 2 0 2" {
		t.Errorf("counts %s, want 2 2 0 2", got)
	}
	_, all = rows(t, Figure{Histogram: &Histogram{Values: []kelvin{1, 2, 3, 7}, Density: true}, XAxis: tAxis})
	area := 0.0
	for _, r := range of(all, "histogram") {
		h, _ := strconv.ParseFloat(r[3], 64)
		lo, _ := strconv.ParseFloat(r[4], 64)
		hi, _ := strconv.ParseFloat(r[5], 64)
		area += h * (hi - lo)
	}
	if math.Abs(area-1) > 1e-12 {
		t.Errorf("the area of a density is %v", area)
	}
}

// A deviation from a quotient has brackets, so that its two strokes are not
// taken for one another.
func TestFigureResidualLabel(t *testing.T) {
	for quantity, want := range map[string]string{"C_p": "ΔC_p/C_p", "C_p/T": "Δ(C_p/T)/(C_p/T)"} {
		y := cAxis
		y.Quantity = quantity
		out, _, err := Figure{X: someT, Y: someC, Curve: line, RelativeResiduals: true, XAxis: tAxis, YAxis: y}.read()
		if err != nil {
			t.Fatal(err)
		}
		if got := out.Panels[1].Y.Quantity; got != want {
			t.Errorf("residuals of %s are called %s, want %s", quantity, got, want)
		}
	}
	out, _, err := Figure{X: someT, Y: someC, Curve: line, Residuals: true, XAxis: tAxis}.read()
	if err != nil {
		t.Fatal(err)
	}
	if got := out.Panels[1].Y; got.Quantity != "residual" || got.Unit != "J/(mol K)" {
		t.Errorf("residuals of a quantity that its type names in words: %s in %s", got.Quantity, got.Unit)
	}
}

// The y axes cover what a limited x axis shows; one limit leaves the other end
// to the data.
func TestFigureLimits(t *testing.T) {
	x, y := []kelvin{1, 2, 3, 100}, []molar{1, 2, 3, 1000}
	u := []molar{0.1, 0.1, 0.1, 400}
	for _, test := range []struct {
		axis           Axis
		x0, x1, y0, y1 float64 // y without the margin
	}{
		{Axis{Quantity: "T", Min: 0.5, Max: 4}, 0.5, 4, 0.9, 3.1},
		{Axis{Quantity: "T", Max: 3}, 0, 3, 0.9, 3.1},
		{Axis{Quantity: "T", Min: 2.5}, 2.5, 100 + 0.04*99, 2.9, 1400},
		{Axis{Quantity: "T", Max: 3, Log: true}, math.Pow(10, -0.04*2), 3, 0.9, 3.1},
		{Axis{Quantity: "T", Min: -1}, -1, 0, 0.9, 1400}, // to zero, where no data are
	} {
		out, _, err := Figure{X: x, Y: y, Err: u, XAxis: test.axis, YAxis: cAxis}.read()
		if err != nil {
			t.Fatal(err)
		}
		pad := 0.04 * (test.y1 - test.y0)
		got := []float64{out.X.Min, out.X.Max, out.Panels[0].Y.Min, out.Panels[0].Y.Max}
		for i, want := range []float64{test.x0, test.x1, test.y0 - pad, test.y1 + pad} {
			if math.Abs(got[i]-want) > 1e-9*math.Abs(want)+1e-12 {
				t.Errorf("%+v: axes %v, want %v at %d", test.axis, got, want, i)
			}
		}
	}
	_, _, err := Figure{X: x, Y: y, XAxis: Axis{Quantity: "T", Min: 200}, YAxis: cAxis}.read()
	if err == nil || !strings.Contains(err.Error(), "the x axis shows no data") {
		t.Errorf("an axis from 200 K on: %v", err)
	}
}

// A curve without data is drawn over the whole of a given range, though few
// models are defined at 0 K; one with data, where they are and are shown.
func TestFigureCurveRange(t *testing.T) {
	positive := func(T kelvin) molar {
		if T <= 0 {
			panic("T is not positive")
		}
		return molar(T)
	}
	ends := func(f Figure) (string, string) {
		_, all := rows(t, f)
		c := of(all, "curve")
		return c[0][2], c[len(c)-1][2]
	}
	if lo, hi := ends(Figure{Curve: positive, XAxis: Axis{Quantity: "T", Max: 400}, YAxis: cAxis}); lo != "0.001" || hi != "400" {
		t.Errorf("from %s to %s, want from just above 0 to 400", lo, hi)
	}
	f := Figure{X: someT, Y: someC, Curve: line, XAxis: Axis{Quantity: "T", Min: 1.5, Max: 10}, YAxis: cAxis}
	if lo, hi := ends(f); lo != "1.5" || hi != "3" {
		t.Errorf("from %s to %s, want 1.5 to 3", lo, hi)
	}
}

// Marks that a line joins are one entry of the legend, with both.
func TestFigureJoinedMarks(t *testing.T) {
	out, _, err := Figure{XAxis: tAxis, YAxis: cAxis, Series: []Series{{Name: "a", X: someT, Y: someC, Line: true},
		{Name: "b", X: someT, Y: someC, Line: true, Marks: true}}}.read()
	if err != nil {
		t.Fatal(err)
	}
	named := 0
	for _, l := range out.Panels[0].Layers {
		switch l := l.(type) {
		case scene.Line:
			if l.Name != "" {
				named++
			}
		case scene.Points:
			if l.Name != "b" || !l.Joined || l.Dash != 1 {
				t.Errorf("marks %q, joined %v, dashes %d", l.Name, l.Joined, l.Dash)
			}
		}
	}
	if named != 1 {
		t.Errorf("%d lines in the legend, want that of a", named)
	}
}
