package rerun

import (
	"encoding/json"
	"fmt"
	"math"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"levelsum/kernel/notebook"
)

func TestJudgeResult(t *testing.T) {
	base := Result{Value: 33.151, U: 0.05, HasU: true, Unit: "J/(mol K)"}
	with := func(f func(*Result)) Result { r := base; f(&r); return r }
	for _, test := range []struct {
		name string
		old  Result
		now  Result
		want Verdict
	}{
		{"same", base, base, Identical},
		{"1e-13 jitter", base, with(func(r *Result) { r.Value *= 1 + 1e-13 }), Rounding},
		{"relative 0.9e-9", base, with(func(r *Result) { r.Value *= 1 + 0.9e-9 }), Rounding},
		{"relative 1.1e-9", base, with(func(r *Result) { r.Value *= 1 + 1.1e-9 }), InsideU},
		{"0.99 u", base, with(func(r *Result) { r.Value += 0.99 * r.U }), InsideU},
		{"1.01 u", base, with(func(r *Result) { r.Value -= 1.01 * r.U }), Moved},
		{"u by 5 %", base, with(func(r *Result) { r.U *= 1.05 }), InsideU},
		{"u by 20 %", base, with(func(r *Result) { r.U *= 1.2 }), Moved},
		{"unit", base, with(func(r *Result) { r.Unit = "kJ/(mol K)" }), Moved},
		{"u lost", base, with(func(r *Result) { r.HasU, r.U = false, 0 }), Moved},
		{"NaN", base, with(func(r *Result) { r.Value = math.NaN() }), Moved},
		{"near zero, scale u", Result{U: 1, HasU: true}, Result{Value: 0.9e-12, U: 1, HasU: true}, Rounding},
		{"near zero, above", Result{U: 1, HasU: true}, Result{Value: 1e-11, U: 1, HasU: true}, InsideU},
		{"no u, zero to little", Result{}, Result{Value: 1e-300}, Moved},
		{"no u, 1 %", Result{Value: 1}, Result{Value: 1.01}, Moved},
	} {
		if got, note := judgeResult(test.old, test.now); got != test.want {
			t.Errorf("%s: %v (%s), want %v", test.name, got, note, test.want)
		}
	}
}

// findings writes what differs, one line each.
func findings(fs []Finding) string {
	var s []string
	for _, f := range fs {
		if f.Verdict != Identical {
			s = append(s, fmt.Sprintf("%s %q %v %.3g %.3g", f.Kind, f.Name, f.Verdict, f.Delta, f.DeltaU))
		}
	}
	return strings.Join(s, "; ")
}

func compareRuns(t *testing.T, before, after []string) string {
	t.Helper()
	a, b := doc(t, before...), doc(t, after...)
	run(t, a, Options{})
	run(t, b, Options{})
	fs, err := Compare(a, b)
	if err != nil {
		t.Fatal(err)
	}
	return findings(fs)
}

func TestCompare(t *testing.T) {
	s := func(x ...string) []string { return x }
	for _, test := range []struct {
		name          string
		before, after []string
		want          string
	}{
		{"same", s("result S 33 0.1 J\nprint x\nvalue 7"), s("result S 33 0.1 J\nprint x\nvalue 7"), ""},
		{"moved", s("result S 33 0.1 J\nresult H 5 0.1 J"), s("result S 33.25 0.1 J\nresult H 5 0.1 J"), `result "S" moved 0.25 2.5`},
		{"renamed", s("result S 33 0.1 J"), s("result T 33 0.1 J"), `result "T" new 0 0; result "S" missing 0 0`},
		{"the same name twice", s("result S 1 0.1 J\nresult S 2 0.1 J"), s("result S 1 0.1 J\nresult S 3 0.1 J"), `result "S" moved 1 10`},
		{"moved to another cell", s("result S 1 0.1 J", "print a"), s("print a", "result S 1 0.1 J"), `text "output 1" new 0 0; text "output 1" missing 0 0`},
		{"jitter", s("result S 33 0.1 J\nprint T = 33.1234567890123 K"), s("result S 33.0000000000033 0.1 J\nprint T = 33.1234567890124 K"), `result "S" rounding-level 3.3e-12 3.3e-11; text "output 1" rounding-level 0 0`},
		{"text", s("print phase alpha"), s("print phase beta"), `text "output 1" moved 0 0`},
		{"number in a text", s("print T = 33.1 K"), s("print T = 33.2 K"), `text "output 1" moved 0 0`},
		{"spelling of a number", s("print T = 33.1 K"), s("print T = 33.10 K"), `text "output 1" moved 0 0`},
		{"value", s("value 3 K"), s("value 4 K"), `value "output 1" moved 0 0`},
		{"fewer outputs", s("print a\nshow b"), s("print a"), `value "output 2" missing 0 0`},
		{"another stream", s("print a"), s("warn a"), `text "output 1" moved 0 0`},
		{"cells that were not reached", s("print a", "result S 1 0.1 J\nprint b"), s("fail x", "result S 1 0.1 J\nprint b"), `fault "output 1" moved 0 0`},
		{"fault", s("fail wanted\nprint"), s("fail wanted, another"), `fault "output 1" moved 0 0`},
	} {
		if got := compareRuns(t, test.before, test.after); got != test.want {
			t.Errorf("%s: %s\nwant %s", test.name, got, test.want)
		}
	}
	if _, err := Compare(doc(t, "print a"), doc(t, "print a", "print b")); err == nil {
		t.Error("documents with other cells were compared")
	}
}

const table = "Third-law entropy\n" +
	" T / K  S / (J K⁻¹ mol⁻¹)  phase\n" +
	"------  ----------------  -----\n" +
	"  5.00         0.012(10)  α\n" +
	"298.15        33.151(50)  β\n" +
	"\nIn parentheses: standard uncertainty."

func TestCompareTables(t *testing.T) {
	for _, test := range []struct {
		from, to string
		want     Verdict
		deltaU   float64
		note     string
	}{
		{"", "", Identical, 0, ""},
		{"33.151(50)", "33.181(50)", InsideU, 0.6, "row 2, S / (J K⁻¹ mol⁻¹)"},
		{"33.151(50)", "33.251(50)", Moved, 2, "row 2, S / (J K⁻¹ mol⁻¹)"},
		{"33.151(50)", "33.151(60)", Moved, 0, "row 2, S / (J K⁻¹ mol⁻¹)"},
		{"298.15", "298.16", Moved, 0, "row 2, T / K"},
		{"  β", "  γ", Moved, 0, "row 2, phase"},
		{"T / K", "T / °", Moved, 0, "the columns differ"},
		{"In paren", "Not in paren", Moved, 0, ""},
		{"Third-law", "Fourth-law", Moved, 0, ""},
		{"  5.00         0.012(10)  α\n", "", Moved, 0, ""},
	} {
		got := compareTables(table, strings.Replace(table, test.from, test.to, 1))
		if got.Verdict != test.want || math.Abs(got.DeltaU-test.deltaU) > 1e-9 || test.note != "" && got.Note != test.note {
			t.Errorf("%q to %q: %+v", test.from, test.to, got)
		}
	}
	if _, ok := readTable("a line\n- a list\n"); ok {
		t.Error("a list is read as a table")
	}
	for s, want := range map[string][2]float64{"343.21(70)": {343.21, 0.70}, "-12(3)": {-12, 3}, "1.23(45)×10⁻⁷": {1.23e-7, 0.45e-7},
		"−4.5": {-4.5, 0}, "1e-3": {1e-3, 0}} {
		x, u, ok := readCell(s)
		if !ok || math.Abs(x-want[0]) > 1e-12*math.Abs(want[0]) || math.Abs(u-want[1]) > 1e-12*math.Abs(want[0]) {
			t.Errorf("readCell(%q) = %v, %v, %v; want %v", s, x, u, ok, want)
		}
	}
}

func TestCompareJSON(t *testing.T) {
	val := func(s string) (x any) {
		d := json.NewDecoder(strings.NewReader(s))
		d.UseNumber()
		if err := d.Decode(&x); err != nil {
			t.Fatal(err)
		}
		return x
	}
	const a = `{"x":[1,2,1000],"name":"C","nested":{"y":[0.5]}}`
	for _, test := range []struct {
		b    string
		want Verdict
		note string
	}{
		{a, Identical, ""},
		{`{"x":[1.0000000000001,2,1000],"name":"C","nested":{"y":[0.5]}}`, Rounding, ""},
		{`{"x":[1,2.0000001,1000],"name":"C","nested":{"y":[0.5]}}`, Moved, "x[1]"},
		{`{"x":[1,2],"name":"C","nested":{"y":[0.5]}}`, Moved, "x: 3 values"},
		{`{"x":[1,3,1001],"name":"C","nested":{"y":[0.6]}}`, Moved, "nested.y[0], and 2 more numbers"},
		{`{"x":[1,2,1000],"name":"D","nested":{"y":[0.5]}}`, Moved, "name"},
		{`{"x":[1,2,1000],"name":"C"}`, Moved, "nested"},
	} {
		if got := compareJSON(val(a), val(test.b)); got.Verdict != test.want || got.Note != test.note {
			t.Errorf("%s: %+v", test.b, got)
		}
	}
}

func TestCompareFigures(t *testing.T) {
	figure := func(svg string) *notebook.Document {
		d := doc(t, "x")
		if err := d.Cells()[0].SetOutputs([]notebook.Output{{Kind: notebook.DisplayData,
			Data: map[string]any{"text/plain": "figure", "image/svg+xml": svg}}}); err != nil {
			t.Fatal(err)
		}
		return d
	}
	for svg, want := range map[string]string{
		`<path d="M1.25,3L4,5"/>`:               "",
		`<path d="M1.2500000000001,3L4,5"/>`:    `figure "output 1" rounding-level 0 0`,
		`<path d="M1.26,3L4,5"/>`:               `figure "output 1" moved 0 0`,
		`<path d="M1.25,3L4,5L6,7"/>`:           `figure "output 1" moved 0 0`,
		`<path d="M1.25,3L4,5"/><text>a</text>`: `figure "output 1" moved 0 0`,
	} {
		fs, err := Compare(figure(`<path d="M1.25,3L4,5"/>`), figure(svg))
		if err != nil || findings(fs) != want {
			t.Errorf("%s: %s, %v; want %s", svg, findings(fs), err, want)
		}
	}
}

func TestDataFiles(t *testing.T) {
	dir := t.TempDir()
	write := func(s string) {
		if err := os.WriteFile(filepath.Join(dir, "run.csv"), []byte(s), 0o644); err != nil {
			t.Fatal(err)
		}
	}
	source := []string{"print data.Read(\"run.csv\") and `missing.csv` and \".\" // \"other.csv\"", "print \"run.csv\""}
	write("# source: invented\nT / K, Cp / (J/(mol K))\n1, 2\n\n3, 4")
	a := doc(t, source...)
	run(t, a, Options{Dir: dir})
	// sha256sum of the file.
	want := []DataFile{{File: "run.csv", Rows: 2, Named: true, SHA256: "72ae35ffe63aee5b116646419be0bba6a137717e2d7d39c213aaec6c2b1d760c"}}
	p, err := ReadProvenance(a)
	if err != nil || len(p.Data) != 1 || p.Data[0] != want[0] {
		t.Errorf("stored %+v, %v", p, err)
	}
	write("# source: invented\nT / K, Cp / (J/(mol K))\n1, 2.02\n\n3, 4")
	b := doc(t, source...)
	run(t, b, Options{Dir: dir})
	fs, err := Compare(a, b)
	if err != nil || findings(fs) != `data "run.csv" moved 0 0` {
		t.Errorf("%s, %v", findings(fs), err)
	}
	before := string(doc(t, source...).Bytes())
	if err := Clear(b); err != nil {
		t.Fatal(err)
	}
	clean := doc(t, source...)
	for _, c := range clean.Cells() {
		c.SetExecutionCount(0)
		if err := c.SetOutputs(nil); err != nil {
			t.Fatal(err)
		}
	}
	if string(b.Bytes()) != string(clean.Bytes()) || string(b.Bytes()) == before {
		t.Errorf("cleared:\n%s", b.Bytes())
	}
}
