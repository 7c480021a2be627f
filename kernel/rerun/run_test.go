package rerun

import (
	"context"
	"errors"
	"fmt"
	"reflect"
	"strings"
	"testing"
	"testing/synctest"
	"time"

	"levelsum/display"
	"levelsum/kernel/engine"
	"levelsum/kernel/notebook"
)

// fake is a session whose language has one command a line:
//
//	print TEXT | warn TEXT | show TEXT | show@ID TEXT | replace@ID TEXT | clear | clearlater
//	progress TEXT
//	value TEXT | fail TEXT | die | ask | loop
//	result NAME VALUE U UNIT | table TEXT
//	read FILE SHA256 ROWS | seed NUMBER USE | stale TEXT
//
// "x := 1; x = 2" and comments do nothing.
type fake struct {
	stop      chan struct{}
	announced []int
	ran       []string
	closed    bool
	deaf      bool // the first Interrupt has no effect
	calls     int
	about     [][2]string
	stale     []string
}

func (f *fake) State(context.Context) (map[string]any, error) {
	return map[string]any{"about": f.about, "stale": f.stale}, nil
}

func newFake() *fake { return &fake{stop: make(chan struct{})} }

func (f *fake) Interrupt() {
	f.calls++
	if !f.deaf || f.calls == 2 {
		close(f.stop)
	}
}
func (f *fake) Close() error           { f.closed = true; return nil }
func (f *fake) Announce(c engine.Cell) { f.announced = append(f.announced, c.N) }

func (f *fake) Run(ctx context.Context, c engine.Cell, out engine.Output) (o engine.Outcome) {
	f.ran = append(f.ran, c.Source)
	o.How = map[string]any{"tier": "interpreted"}
	for l := range strings.Lines(c.Source) {
		cmd, arg, _ := strings.Cut(strings.TrimSuffix(l, "\n"), " ")
		cmd, id, _ := strings.Cut(cmd, "@")
		switch cmd {
		case "progress":
			v := display.Text(arg)
			v.Metadata = map[string]any{"levelsum": map[string]any{"transient": true}}
			out.Show(v, "line", false)
		case "print":
			out.Stream("stdout", arg+"\n")
		case "warn":
			out.Stream("stderr", arg+"\n")
		case "hint":
			out.(engine.Hinter).Hint(arg)
		case "show":
			out.Show(display.Text(arg), id, false)
		case "replace":
			out.Show(display.Text(arg), id, true)
		case "clear":
			out.Clear(false)
		case "clearlater":
			out.Clear(true)
		case "value":
			v := display.Text(arg)
			o.Value = &v
		case "result":
			var r struct {
				Name, Unit string
				Value, U   float64
			}
			if _, err := fmt.Sscan(arg, &r.Name, &r.Value, &r.U, &r.Unit); err != nil {
				panic(err)
			}
			out.Show(display.View{Data: map[string]any{"text/plain": arg,
				resultType: map[string]any{"name": r.Name, "value": r.Value, "u": r.U, "unit": r.Unit}}}, "", false)
		case "read", "seed":
			var n uint64
			o1 := display.Origin{Use: arg}
			if cmd == "read" {
				o1.Use = ""
				_, err := fmt.Sscan(arg, &o1.File, &o1.SHA256, &o1.Rows)
				if err != nil {
					panic(err)
				}
			} else if _, err := fmt.Sscan(arg, &n, &o1.Use); err != nil {
				panic(err)
			}
			o1.Seed = n
			list, _ := o.How["origins"].([]display.Origin)
			o.How["origins"] = append(list, o1)
		case "stale":
			v := display.Text(arg)
			v.Metadata = map[string]any{"levelsum": map[string]any{"stale": []string{arg}}}
			out.Show(v, "", false)
		case "fail", "die":
			o.Fault = &engine.Fault{Name: "panic", Message: arg, Trace: []string{arg, "In[1]:2"}}
			o.Restarted = cmd == "die"
			return o
		case "ask":
			if _, err := out.Ask("name? ", false); err != nil {
				o.Fault = &engine.Fault{Name: "error not looked at", Message: err.Error()}
			}
		case "loop":
			<-f.stop
			o.Fault = &engine.Fault{Name: "interrupted", Message: "interrupted"}
			return o
		}
	}
	return o
}

// doc makes a document of version 4.5 with the sources as code cells; one that
// begins with # is a markdown cell.
func doc(t *testing.T, sources ...string) *notebook.Document {
	t.Helper()
	var cells []string
	for _, s := range sources {
		if strings.HasPrefix(s, "#") {
			cells = append(cells, fmt.Sprintf(`{"cell_type":"markdown","metadata":{},"source":%q}`, s))
			continue
		}
		tags := ""
		if strings.Contains(s, "fail wanted") {
			tags = `"tags":["raises-exception"]`
		}
		cells = append(cells, fmt.Sprintf(`{"cell_type":"code","metadata":{%s},"source":%q,"execution_count":99,"outputs":[{"output_type":"stream","name":"stdout","text":"stale"}]}`, tags, s))
	}
	d, err := notebook.Parse("test.ipynb", []byte(`{"nbformat":4,"nbformat_minor":5,"metadata":{},"cells":[`+strings.Join(cells, ",")+`]}`))
	if err != nil {
		t.Fatal(err)
	}
	return d
}

func run(t *testing.T, d *notebook.Document, o Options) (*Report, *fake) {
	t.Helper()
	f := newFake()
	if o.Start == nil {
		o.Start = func(context.Context) (Session, error) { return f, nil }
	}
	r, err := Run(t.Context(), d, o)
	if err != nil {
		t.Fatal(err)
	}
	return r, f
}

// outline writes the outputs of a cell on one line.
func outline(c *notebook.Cell) string {
	var s []string
	for _, o := range c.Outputs() {
		switch o.Kind {
		case notebook.Stream:
			s = append(s, fmt.Sprintf("%s %q", o.Name, o.Text))
		case notebook.ErrorOutput:
			s = append(s, fmt.Sprintf("error %s %q %q", o.ErrorName, o.ErrorValue, o.Traceback))
		default:
			s = append(s, fmt.Sprintf("%s %q %d", o.Kind, o.Data["text/plain"], o.Count))
		}
	}
	return strings.Join(s, " | ")
}

func TestRunStoresOutputs(t *testing.T) {
	d := doc(t, "# prose", "print a\nprint b\nwarn w\nprint c\nvalue 7", "", "show@p old\nprint x", "replace@p new\nreplace@none n\nvalue 8",
		"print gone\nclear\nprint stays", "print first\nclearlater\nprint second", "print kept\nclearlater")
	r, f := run(t, d, Options{})
	if !r.OK() || len(r.Steps) != 6 || r.Steps[0].How != "interpreted" || r.Steps[0].First != "print a" {
		t.Errorf("report %+v", r)
	}
	want := []string{
		"",
		`stdout "a\nb\n" | stderr "w\n" | stdout "c\n" | execute_result "7" 1`,
		"",
		`display_data "new" 0 | stdout "x\n"`,
		`execute_result "8" 3`,
		`stdout "stays\n"`,
		`stdout "second\n"`,
		`stdout "kept\n"`,
	}
	counts := []int{0, 1, 0, 2, 3, 4, 5, 6}
	for i, c := range d.Cells() {
		if got := outline(c); got != want[i] {
			t.Errorf("cell %d: %s, want %s", i+1, got, want[i])
		}
		if c.ExecutionCount() != counts[i] {
			t.Errorf("cell %d: count %d, want %d", i+1, c.ExecutionCount(), counts[i])
		}
	}
	if !f.closed || !reflect.DeepEqual(f.announced, []int{2, 3, 4, 5, 6}) {
		t.Errorf("closed %v, announced %v", f.closed, f.announced)
	}
	first := string(d.Bytes())
	run(t, d, Options{})
	if string(d.Bytes()) != first {
		t.Error("run twice, the bytes differ")
	}
}

func TestRunFailure(t *testing.T) {
	cells := []string{"print a", "fail wanted", "fail two", "print b", "die three", "print c"}
	d := doc(t, cells...)
	r, _ := run(t, d, Options{})
	if r.OK() || r.Failed != 1 || r.NotRun != 3 || r.Stopped != "" {
		t.Errorf("report %+v", r)
	}
	if got := outline(d.Cells()[1]); got != `error panic "wanted" ["wanted" "In[1]:2"]` {
		t.Errorf("a fault that is wanted: %s", got)
	}
	if c := d.Cells()[3]; outline(c) != "" || c.ExecutionCount() != 0 {
		t.Errorf("a cell that was not reached keeps %s", outline(c))
	}

	d = doc(t, cells...)
	r, _ = run(t, d, Options{KeepGoing: true})
	if r.Failed != 2 || r.NotRun != 1 || !strings.Contains(r.Stopped, "engine ended") {
		t.Errorf("keep going: %+v", r)
	}
	if got := outline(d.Cells()[3]); got != `stdout "b\n"` {
		t.Errorf("keep going: cell 4 has %s", got)
	}
}

func TestRunWithoutReader(t *testing.T) {
	d := doc(t, "ask")
	r, _ := run(t, d, Options{})
	if r.Failed != 1 || !strings.Contains(outline(d.Cells()[0]), "without a reader") {
		t.Errorf("%+v: %s", r, outline(d.Cells()[0]))
	}
}

func TestHintsAreNotStored(t *testing.T) {
	d := doc(t, "print a\nhint compiling\nprint b")
	var hints []string
	run(t, d, Options{Hint: func(s string) { hints = append(hints, s) }})
	if got := outline(d.Cells()[0]); got != `stdout "a\nb\n"` || !reflect.DeepEqual(hints, []string{"compiling"}) {
		t.Errorf("stored %s, hints %q", got, hints)
	}
}

// Lines of progress go to who watches and are not stored; where a front end has
// stored what is left of one, it is no output that is missing.
func TestProgressIsNotStored(t *testing.T) {
	cell := "print a\nprogress 1 of 9\nprogress\nprint b"
	d := doc(t, cell)
	var lines []string
	run(t, d, Options{Progress: func(s string) { lines = append(lines, s) }})
	if got := outline(d.Cells()[0]); got != `stdout "a\nb\n"` || !reflect.DeepEqual(lines, []string{"1 of 9", ""}) {
		t.Errorf("stored %s, lines %q", got, lines)
	}
	stored := doc(t, cell)
	run(t, stored, Options{})
	c := stored.Cells()[0]
	rest := notebook.Output{Kind: notebook.DisplayData, Data: map[string]any{"text/plain": ""}, Metadata: map[string]any{"levelsum": map[string]any{"transient": true}}}
	if err := c.SetOutputs(append([]notebook.Output{rest}, c.Outputs()...)); err != nil {
		t.Fatal(err)
	}
	fs, err := Compare(stored, d)
	if err != nil || findings(fs) != "" {
		t.Errorf("%s, error %v", findings(fs), err)
	}
}

func TestRunStartFails(t *testing.T) {
	want := errors.New("no engine")
	_, err := Run(t.Context(), doc(t, "print a"), Options{Start: func(context.Context) (Session, error) { return nil, want }})
	if !errors.Is(err, want) {
		t.Errorf("got %v", err)
	}
}

func TestRunLimit(t *testing.T) {
	for _, deaf := range []bool{false, true} {
		synctest.Test(t, func(t *testing.T) {
			d := doc(t, "print a", "loop", "print b")
			f := newFake()
			f.deaf = deaf
			start := time.Now()
			r, err := Run(t.Context(), d, Options{Limit: time.Minute, KeepGoing: true, Start: func(context.Context) (Session, error) { return f, nil }})
			if err != nil {
				t.Fatal(err)
			}
			took := time.Minute
			if deaf {
				took += grace
			}
			if time.Since(start) != took {
				t.Errorf("deaf %v: took %v of the test's clock, want %v", deaf, time.Since(start), took)
			}
			if r.Failed != 1 || r.NotRun != 1 || r.Stopped != "the time limit of the run, 1m0s, was reached" {
				t.Errorf("report %+v", r)
			}
			if got := outline(d.Cells()[1]); got != `error interrupted "the time limit of the run, 1m0s, was reached" []` {
				t.Errorf("cell 2: %s", got)
			}
		})
	}
}

func TestRunInterrupted(t *testing.T) {
	ctx, cancel := context.WithCancel(t.Context())
	d := doc(t, "loop", "print b")
	f := newFake()
	r, err := Run(ctx, d, Options{Start: func(context.Context) (Session, error) { cancel(); return f, nil }})
	if err != nil || r.Stopped != "the run was interrupted" || r.NotRun != 1 {
		t.Errorf("%+v, %v", r, err)
	}
}

func TestLateOutputBelongsToItsCell(t *testing.T) {
	r := &recorder{places: map[string][]place{}}
	one, two := r.cell(1), r.cell(2)
	one.Stream("stdout", "a")
	two.Stream("stdout", "b")
	one.Stream("stdout", "c")
	out := r.finish()
	one.Stream("stdout", "too late")
	if out[1][0].Text != "ac" || out[2][0].Text != "b" || len(out[1]) != 1 {
		t.Errorf("%+v", out)
	}
}

func TestSettings(t *testing.T) {
	const in = directive + "\ntheta := 343 * unit.K // of copper\nvar (\n\tn int = 5\n)\nfile := \"alloy-run-07.csv\""
	set := func(s ...string) (o Options) {
		for _, x := range s {
			p, err := ParseSetting(x)
			if err != nil {
				t.Fatal(err)
			}
			o.Set = append(o.Set, p)
		}
		return o
	}
	d := doc(t, "other := 1", in)
	r, f := run(t, d, set("theta=350*unit.K", "file=alloy-run-08.csv", "n = n*2"))
	want := directive + "\ntheta := 343 * unit.K; theta = 350*unit.K // of copper\nvar (\n\tn int = 5\n); n = n*2\nfile := \"alloy-run-07.csv\"; file = \"alloy-run-08.csv\""
	if f.ran[1] != want || d.Cells()[1].Source() != want {
		t.Errorf("ran\n%s\nstored\n%s", f.ran[1], d.Cells()[1].Source())
	}
	var got []string
	for _, x := range r.Inputs {
		got = append(got, fmt.Sprintf("%d %s %s %s", x.Cell, x.Name, x.Own, x.Set))
	}
	if w := []string{`2 theta 343 * unit.K 350*unit.K`, `2 n 5 n*2`, `2 file "alloy-run-07.csv" "alloy-run-08.csv"`}; !reflect.DeepEqual(got, w) {
		t.Errorf("inputs %q", got)
	}
	d = doc(t, in)
	if r, _ = run(t, d, Options{}); d.Cells()[0].Source() != in || len(r.Inputs) != 3 || r.Inputs[0].Set != "" {
		t.Errorf("without settings: %+v\n%s", r.Inputs, d.Cells()[0].Source())
	}

	for _, test := range []struct {
		cells []string
		set   []string
		want  string
	}{
		{[]string{"theta := 1"}, []string{"theta=2"}, "cannot set the input theta: there is none of this name; no cell is marked with //levelsum:input"},
		{[]string{in}, []string{"gamma=2"}, "cannot set the input gamma: there is none of this name; the inputs are theta, n, file"},
		{[]string{in}, []string{"n=2", "n=3"}, "cannot set the input n: it is set twice"},
		{[]string{in}, []string{"n=2; os.Exit(1)"}, `cannot set the input n: "2; os.Exit(1)" is not one Go expression`},
		{[]string{in, in}, []string{"n=2"}, "cannot set the input: cell 2: input theta is declared in cell 1 already"},
		{[]string{directive + "\nfunc f() {}"}, []string{"n=2"}, "cannot set the input: cell 1: an input cell holds variables with values and nothing else"},
	} {
		o := set(test.set...)
		o.Start = func(context.Context) (Session, error) { t.Error("started"); return newFake(), nil }
		_, err := Run(t.Context(), doc(t, test.cells...), o)
		if err == nil || !strings.HasPrefix(err.Error(), test.want) {
			t.Errorf("%q: got %v, want %s", test.set, err, test.want)
		}
	}
	for _, s := range []string{"", "n", "=3", "n=", "2n=3", "a.b=1", "_=1"} {
		if p, err := ParseSetting(s); err == nil {
			t.Errorf("ParseSetting(%q) = %+v", s, p)
		}
	}
}

func TestResults(t *testing.T) {
	d := doc(t, "result S 33.151 0.05 J/(mol·K)\nprint x\nresult H 5004 4 J/mol")
	r, _ := run(t, d, Options{})
	want := []Result{{Cell: 1, Name: "S", Value: 33.151, U: 0.05, HasU: true, Unit: "J/(mol·K)", Shown: "S 33.151 0.05 J/(mol·K)"},
		{Cell: 1, Name: "H", Value: 5004, U: 4, HasU: true, Unit: "J/mol", Shown: "H 5004 4 J/mol"}}
	if !reflect.DeepEqual(r.Results, want) {
		t.Errorf("got %+v", r.Results)
	}
}

// A whole is a fake session that compiles cells as one program.
type whole struct {
	*fake
	cells []engine.Cell
}

func (w *whole) Program(_ context.Context, cells []engine.Cell, out engine.Output) (engine.Program, error) {
	w.cells = cells
	out.(engine.Hinter).Hint("compiling")
	out.Stream("stderr", "not stored")
	return engine.Program{Cells: len(cells), Linked: true}, nil
}

// TestRunWhole has the cells compiled before the first runs, with the sources
// as they are run, and only when it is asked for.
func TestRunWhole(t *testing.T) {
	var hints []string
	var told engine.Program
	d := doc(t, "# prose", "//levelsum:input\nx := 1", "", "value 7")
	w := &whole{fake: newFake()}
	o := Options{
		Whole: true, Start: func(context.Context) (Session, error) { return w, nil },
		Set: []Setting{{"x", "2"}}, Hint: func(s string) { hints = append(hints, s) },
		Compiled: func(p engine.Program) { told = p },
	}
	r, _ := run(t, d, o)
	if !r.OK() || r.Program == nil || r.Program.Cells != 2 || told.Cells != 2 || !reflect.DeepEqual(hints, []string{"compiling"}) {
		t.Errorf("report %+v, told %+v, hints %q", r, told, hints)
	}
	var sources []string
	for i, c := range w.cells {
		if sources = append(sources, c.Source); c.N != i+1 {
			t.Errorf("cell %d has the number %d", i+1, c.N)
		}
	}
	if !reflect.DeepEqual(sources, w.ran) || !strings.Contains(sources[0], "x = 2") {
		t.Errorf("compiled %q, run %q", sources, w.ran)
	}
	for _, c := range d.Cells() {
		if strings.Contains(outline(c), "not stored") {
			t.Errorf("cell %d: %s", c.N, outline(c))
		}
	}
	w.cells, o.Whole = nil, false
	if r, _ := run(t, d, o); r.Program != nil || w.cells != nil {
		t.Error("a program though none was asked for")
	}
}

// cancelling is a fake session in which the run is interrupted while cells are
// compiled.
type cancelling struct {
	*fake
	cancel func()
}

func (c *cancelling) Program(ctx context.Context, _ []engine.Cell, _ engine.Output) (engine.Program, error) {
	c.cancel()
	return engine.Program{}, ctx.Err()
}

func TestRunInterruptedWhileCompiling(t *testing.T) {
	ctx, cancel := context.WithCancel(t.Context())
	s := &cancelling{newFake(), cancel}
	r, err := Run(ctx, doc(t, "loop", "print never"), Options{
		Whole: true, Start: func(context.Context) (Session, error) { return s, nil },
		Compiled: func(p engine.Program) { t.Errorf("told of a program: %+v", p) },
	})
	if err != nil || r.Program != nil || r.Stopped != "the run was interrupted" || r.NotRun != 1 {
		t.Errorf("%v %+v", err, r)
	}
}
