package display

import (
	"encoding/csv"
	"errors"
	"fmt"
	"math"
	"os"
	"path/filepath"
	"slices"
	"strconv"
	"strings"
	"testing"
)

func wideTable() Table {
	return Table{
		Caption: `Invented: heat capacity near \theta_D <img onerror=alert(1)>`,
		Columns: []Column{
			{Quantity: "T", Values: []kelvin{1, 1.5, 20, 298.15}},
			{Quantity: "C_{p,m}", Values: []molar{0.000743, 0.00143, 7.462, 24.4423}, U: []molar{7e-6, 1.4e-5, 0.022, 0.0733}},
			{Quantity: "E", Unit: "kJ", Values: []joule{-1000, 0, 2500, 123456}, In: joule(1000)},
			{Quantity: "N", Unit: "1", Values: []int{1, 10, 200, -3}},
			{Quantity: "K", Unit: "1", Values: []float64{1.2345678e-30, 3.4, math.NaN(), math.Inf(-1)}},
			{Quantity: "phase", Values: []string{"cr", "<script>x</script>", "l & g", "two\nlines"}},
		},
		Notes: Notes("p° = 100 kPa", "", "constants: CODATA 2022"),
	}
}

func TestTableGolden(t *testing.T) {
	v := wideTable().View()
	golden(t, "table.txt", v.Data["text/plain"].(string)+"\n")
	golden(t, "table.html", v.Data["text/html"].(string))
	golden(t, "table.tex", v.Data["text/latex"].(string))
	c, err := wideTable().CSV()
	if err != nil {
		t.Fatal(err)
	}
	golden(t, "table.csv", c)
	wellFormed(t, v.Data["text/html"].(string))
	if strings.Contains(v.Data["text/html"].(string), "#") && strings.Contains(v.Data["text/html"].(string), "color:#") {
		t.Error("a fixed colour: unreadable on some pages")
	}
}

// The CSV gives back the same float64.
func TestTableCSVPrecision(t *testing.T) {
	want := []float64{1.0 / 3, math.Pi * 1e-300, 6.02214076e23, -0.1}
	c, err := Table{Columns: []Column{{Quantity: "x", Unit: "K", Values: want, U: 0.5}}}.CSV()
	if err != nil {
		t.Fatal(err)
	}
	rows, err := csv.NewReader(strings.NewReader(c)).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	if got := strings.Join(rows[0], ";"); got != "x/K;u(x)/K" {
		t.Errorf("head %q", got)
	}
	for i, w := range want {
		if got, _ := strconv.ParseFloat(rows[i+1][0], 64); got != w {
			t.Errorf("row %d: %v, want %v", i, got, w)
		}
	}
}

func TestTableRefused(t *testing.T) {
	for _, test := range []struct {
		name string
		t    Table
		want string // part of the message
	}{
		{"no columns", Table{}, "no columns"},
		{"lengths", Table{Columns: []Column{{Values: []int{1}}, {Quantity: "b", Values: []int{1, 2}}}}, "column 2 (b) has 2 rows, column 1 has 1"},
		{"unit unknown", Table{Columns: []Column{{Values: []naked{1}}}}, "whose unit is not known"},
		{"wrong unit", Table{Columns: []Column{{Values: []kelvin{1}, Unit: "J"}}}, `Unit is "J", but the values are in "K"`},
		{"another zero", Table{Columns: []Column{{Values: []kelvin{1}, Unit: "°C"}}}, "scales with another zero are not converted"},
		{"unit for In", Table{Columns: []Column{{Values: []joule{1}, In: joule(2)}}}, "Unit must name that unit"},
		{"In of another type", Table{Columns: []Column{{Values: []joule{1}, In: kelvin(2), Unit: "K"}}}, "the values are of type display.joule"},
		{"uncertainty of another type", Table{Columns: []Column{{Values: []kelvin{1}, U: []molar{2}}}}, "uncertainties of type display.molar"},
		{"negative uncertainty", Table{Columns: []Column{{Values: []kelvin{1, 2}, U: []kelvin{1, -2}}}}, "row 2: the standard uncertainty is negative"},
		{"uncertainties missing", Table{Columns: []Column{{Values: []kelvin{1, 2}, U: []kelvin{1}}}}, "2 values and 1 uncertainties"},
		{"no slice", Table{Columns: []Column{{Values: 3}}}, "want a slice of numbers"},
		{"nil", Table{Columns: []Column{{Values: nil}}}, "is nil"},
		{"mixed units", Table{Columns: []Column{{Values: []estimate{{v: 1, unit: "K"}, {v: 2, unit: "J"}}}}}, `mixes the units "K" and "J"`},
	} {
		err := test.t.Check()
		var r *Refusal
		if !errors.As(err, &r) || !strings.Contains(err.Error(), test.want) {
			t.Errorf("%s: error %v, want %q", test.name, err, test.want)
		}
		if got := text(test.t); !strings.Contains(got, "not shown") {
			t.Errorf("%s: shown as %q", test.name, got)
		}
	}
}

func TestTableOfUncertainValues(t *testing.T) {
	got := text(Table{Columns: []Column{{Quantity: "S", Values: []estimate{
		{v: 33.1512, u: 0.0462, unit: "J/(mol K)"}, {v: 154.8464, u: 0.003, unit: "J K-1 mol-1"}, {v: 1.5, unit: "J/(mol K)", withheld: "the fit is bad"}}}}})
	for _, want := range []string{"S / (J mol⁻¹ K⁻¹)", " 33.151(46)", "154.8464(30)", "  1.5", "No standard uncertainty is given where the fit is bad."} {
		if !strings.Contains(got, want) {
			t.Errorf("no %q in\n%s", want, got)
		}
	}
}

// Numbers that somebody has written are aligned like numbers.
func TestTableOfWrittenNumbers(t *testing.T) {
	got := text(Table{Columns: []Column{
		{Quantity: "value", Values: []string{"343.20(70)", "-1.5", "12", "", "1.2×10⁻²¹"}},
		{Quantity: "unit", Values: []string{"K", "J", "1", "7", "kg"}},
		{Quantity: "note", Values: []string{"12", "about 13", "", "", ""}},
	}, Rules: []int{2}})
	want := "      value  unit  note\n" +
		"-----------  ----  --------\n" +
		"343.20(70)   K     12\n" +
		" -1.5        J     about 13\n" +
		"-----------  ----  --------\n" +
		" 12          1\n" +
		"             7\n" +
		"  1.2×10⁻²¹  kg"
	if got != want {
		t.Errorf("got\n%s\nwant\n%s", got, want)
	}
	if err := (Table{Columns: []Column{{Values: []int{1, 2}}}, Rules: []int{2}}).Check(); err == nil {
		t.Error("a rule below the last row is taken")
	}
}

func TestLongTable(t *testing.T) {
	x := make([]float64, 5000)
	for i := range x {
		x[i] = float64(i) / 7
	}
	tb := Table{Columns: []Column{{Quantity: "x", Unit: "1", Values: x}}}
	v := tb.View()
	for _, kind := range []string{"text/plain", "text/html", "text/latex"} {
		s := v.Data[kind].(string)
		if !strings.Contains(s, "4940 rows more") {
			t.Errorf("%s does not count the rows left out", kind)
		}
		if len(s) > 20000 {
			t.Errorf("%s has %d bytes", kind, len(s))
		}
	}
	c, _ := tb.CSV()
	if n := strings.Count(c, "\n"); n != 5001 {
		t.Errorf("the CSV has %d lines, want 5001", n)
	}
}

func TestTableSave(t *testing.T) {
	dir := t.TempDir()
	for _, ext := range []string{"csv", "tex", "html", "txt"} {
		path := filepath.Join(dir, "t."+ext)
		if err := wideTable().Save(path); err != nil {
			t.Fatal(err)
		}
		if b, err := os.ReadFile(path); err != nil || len(b) < 100 {
			t.Errorf("%s: %d bytes, %v", ext, len(b), err)
		}
	}
	if err := wideTable().Save(filepath.Join(dir, "t.xls")); err == nil {
		t.Error("an unknown ending is taken")
	}
}

func TestTableOf(t *testing.T) {
	type row struct {
		T    kelvin
		Cp   float64 `display:"C_p/(J/(mol K))"`
		U    float64 `display:"u"`
		Note string
		Skip int `display:"-"`
		priv int
	}
	tb, err := TableOf([]row{{T: 10, Cp: 1.2345, U: 0.01, Note: "a", priv: 1}, {T: 20, Cp: 12.345, U: 0.02, Note: "b"}})
	if err != nil {
		t.Fatal(err)
	}
	want := "T / K  C_p / (J mol⁻¹ K⁻¹)  Note\n" +
		"-----  -------------------  ----\n" +
		"   10            1.234(10)  a\n" +
		"   20           12.345(20)  b\n" +
		"In parentheses: standard uncertainty (k = 1) in the last digits."
	if got := text(tb); got != want {
		t.Errorf("got\n%s\nwant\n%s", got, want)
	}
	if _, err := TableOf(3); err == nil {
		t.Error("a number is taken for a slice of structs")
	}
}

func TestCorrelation(t *testing.T) {
	// A covariance matrix with standard deviations 2 and 3 and r = -0.5.
	tb, err := Correlation([]string{"θ_D", "γ"}, [][]float64{{4, -3}, {-3, 9}})
	if err != nil {
		t.Fatal(err)
	}
	if got := text(tb); !strings.Contains(got, "γ    -0.5   1.0") {
		t.Errorf("got\n%s", got)
	}
	for _, bad := range [][][]float64{{{1, 0.5}, {0.4, 1}}, {{1, 1.5}, {1.5, 1}}, {{0, 0}, {0, 1}}, {{1}}, {{1, math.NaN()}, {math.NaN(), 1}}} {
		if _, err := Correlation([]string{"a", "b"}, bad); err == nil {
			t.Errorf("%v is taken", bad)
		}
	}
}

func BenchmarkTable(b *testing.B) {
	for _, n := range []int{50, 5000} {
		x, u := make([]float64, n), make([]float64, n)
		for i := range x {
			x[i], u[i] = float64(i)/7, 0.01
		}
		tb := Table{Columns: []Column{{Quantity: "x", Unit: "K", Values: x}, {Quantity: "y", Unit: "K", Values: x, U: u}}}
		b.Run(fmt.Sprintf("rows=%d", n), func(b *testing.B) {
			b.ReportAllocs()
			for b.Loop() {
				tb.View()
			}
		})
	}
}

// Columns whose numbers differ by many powers of ten: half with a power of ten
// makes the long ones have one, one alone does not; all align on the point.
func TestTableOfMixedScales(t *testing.T) {
	tab := Table{Columns: []Column{
		{Quantity: "K", Unit: "1", Values: []float64{3.2e-18, 4440, 1.25e7, 33}},
		{Quantity: "p", Unit: "1", Values: []float64{0.94, 0.0000012, 0.32, 1}},
		{Quantity: "k / (J mol-1)", Values: []estimate{{v: 3.2e-18, u: 2e-19}, {v: 444, u: 10}, {v: 1e7, u: 2e5}, {v: 0, u: 0}}},
		{Quantity: "x", Unit: "1", Values: []float64{0.000123456789, 12.3456789, 98765.4321, 0}},
	}}
	got := strings.Split(text(tab), "\n")
	for i, parts := range [][]string{{"3.2×10⁻¹⁸", "0.94", "3.20(20)×10⁻¹⁸", "0.000123457"}, {"4.44×10³", "1.2×10⁻⁶", "444(10)", "12.3457"},
		{"1.25×10⁷", "0.32", "1.000(20)×10⁷", "98765.4"}, {"33", "1", "0", "0"}} {
		if fields := strings.Fields(got[i+2]); !slices.Equal(fields, parts) {
			t.Errorf("row %d: %q, want %q", i+1, fields, parts)
		}
	}
	if !strings.Contains(got[0], "k / (J mol⁻¹)") {
		t.Errorf("head %q", got[0])
	}
	at := strings.Index(got[2], "3.2×")
	if strings.Index(got[3], "4.44×") != at || strings.Index(got[4], "1.25×") != at {
		t.Errorf("not aligned on the point:\n%s", strings.Join(got, "\n"))
	}
	html := tab.View().Data["text/html"].(string)
	wellFormed(t, html)
	if !strings.Contains(html, `>4<span style="display:inline-block;min-width:7.6ch;text-align:left">.44×10<sup>3</sup></span></td>`) {
		t.Errorf("no box behind the point in\n%s", html)
	}
}

// Words are set as labels are, and keep their hyphens.
func TestTableOfWords(t *testing.T) {
	tab := Table{Columns: []Column{
		{Quantity: "name", Values: []string{"θ_D", "third-law H_2O", "run_7 <b>", `C:\beta ` + strings.Repeat("long ", 8)}},
		{Quantity: "unit", Values: []string{"K", "J K-1 mol-1", "1", "cm-1"}},
	}}
	v := tab.View()
	for _, want := range []string{">θ_D<", "<i>θ</i><sub>D</sub>", "third-law H<sub>2</sub>O", "run_7 &lt;b&gt;", `C:\beta`, "min-width:16em", "J\u00a0K<sup>−1</sup>\u00a0mol<sup>−1</sup>"} {
		if has := strings.Contains(v.Data["text/html"].(string), want); has == (want == ">θ_D<") {
			t.Errorf("%q in the HTML: %v\n%s", want, has, v.Data["text/html"])
		}
	}
	if s := v.Data["text/plain"].(string); !strings.Contains(s, "third-law H_2O") || !strings.Contains(s, "J K-1 mol-1") {
		t.Errorf("the text is not as given:\n%s", s)
	}
	if s := v.Data["text/latex"].(string); !strings.Contains(s, `third-law H$_{2}$O & J~K$^{-1}$~mol$^{-1}$`) {
		t.Errorf("LaTeX\n%s", s)
	}
}
