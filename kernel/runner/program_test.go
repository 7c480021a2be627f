package runner_test

import (
	"context"
	"fmt"
	"strings"
	"testing"

	"levelsum/kernel/engine"
)

// startCompiled starts an engine that interprets nothing.
func startCompiled(t testing.TB, env ...string) *engine.Engine {
	t.Helper()
	e, err := engine.Start(t.Context(), engine.Options{
		Command: []string{host.Exe, "engine"}, Dir: t.TempDir(), Env: append([]string{"LEVELSUM_CACHE=" + host.Cache}, env...), Compiled: true,
	})
	if err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() { e.Close() })
	return e
}

func numbered(sources ...string) []engine.Cell {
	cells := make([]engine.Cell, len(sources))
	for i, s := range sources {
		cells[i] = engine.Cell{N: i + 1, Source: s}
	}
	return cells
}

// told is what a reader sees of a cell.
func told(out engine.Outcome, c *capture) string {
	s := strings.Join(c.all, "|")
	if out.Value != nil {
		s += fmt.Sprintf(" = %v", out.Value.Data["text/plain"])
	}
	if out.Fault != nil {
		s += " ! " + strings.Join(out.Fault.Trace, "\n")
	}
	return s
}

// programCells is a notebook: what cells declare is used and redefined by
// later ones, and some fail.
var programCells = numbered(
	"import \"strings\"\n// a level and its degeneracy\ntype level struct {\n\tg int\n\te float64\n}\nfunc (l level) String() string { return strings.Repeat(\"=\", l.g) }",
	"levels := []level{{1, 0}, {3, 100}, {5, 300}}",
	"func q(t float64) float64 {\n\ts := 0.0\n\tfor _, l := range levels {\n\t\ts += float64(l.g) * math.Exp(-l.e/t)\n\t}\n\treturn s\n}",
	"q(200)",
	"levels = append(levels, level{7, 600})\nfmt.Println(levels)",
	"q(200)",
	"type pair[T any] struct{ a, b T }\nfunc swap[T any](p pair[T]) pair[T] { return pair[T]{p.b, p.a} }",
	"p := swap(pair[level]{levels[0], levels[1]})\nfmt.Printf(\"%v %T\\n\", p.a, p)",
	"wrong +", // refused
	"func q(t float64) float64 { return t }",
	"q(200)",
	"var a any = levels[1]\nl, ok := a.(level)\nfmt.Println(l.e, ok)",
	"for i := range 5 {\n\tif i == 3 {\n\t\tpanic(levels[i])\n\t}\n}",
	"q(200)",    // the same text again
	"n := 2\nn", // would be interpreted otherwise
	"display.Show(levels[2])\n",
)

// TestProgram compiles a notebook of many cells with one link and runs it cell
// by cell: what each shows is what it shows in an ordinary session.
func TestProgram(t *testing.T) {
	ordinary, whole := start(t), startCompiled(t)
	before := plugins(t)
	p, err := whole.Program(t.Context(), programCells, &capture{})
	if err != nil || p.Alone != "" {
		t.Fatal(err, p.Alone)
	}
	if n := plugins(t) - before; n != 1 || !p.Linked {
		t.Errorf("%d links, want 1; %+v", n, p)
	}
	if p.Cells != 15 || p.Packages != 13 || len(p.Left) != 1 || p.Left[0].N != 9 {
		t.Errorf("%+v, want 15 cells in 13 packages without the cell that does not compile", p)
	}
	linked := plugins(t)
	var got []string
	for i, c := range programCells {
		cp := &capture{}
		out := whole.Run(t.Context(), c, cp)
		got = append(got, told(out, cp))
		switch {
		case c.N == 9:
			if out.Fault == nil {
				t.Errorf("In[9]: no fault")
			}
		case fmt.Sprint(out.How["program"]) != fmt.Sprint(p.Packages) || out.How["tier"] != "compiled":
			t.Errorf("In[%d]: %v, want it compiled in a program of %d", i+1, out.How, p.Packages)
		}
		if again := c.N == 6 || c.N == 14; again != (out.How["again"] == true) { // In[4] and In[11] as they were
			t.Errorf("In[%d]: %v", i+1, out.How)
		}
		if plugins(t) != linked {
			t.Fatalf("In[%d] was linked by itself", i+1)
		}
	}
	for i, c := range programCells {
		cp := &capture{}
		if want := told(ordinary.Run(t.Context(), c, cp), cp); got[i] != want {
			t.Errorf("In[%d]: %s\nin an ordinary session: %s", i+1, got[i], want)
		}
	}
}

// TestProgramTwice asks for the same program in another session: it is found
// as it was built.
func TestProgramTwice(t *testing.T) {
	cells := numbered("func twice(x int) int { return 2 * x }", "twice(21)")
	var p engine.Program
	for k := range 2 {
		e := startCompiled(t)
		var err error
		if p, err = e.Program(t.Context(), cells, &capture{}); err != nil || p.Alone != "" || p.Linked != (k == 0) {
			t.Fatalf("%d: %v %+v", k, err, p)
		}
		if out, c := run(t, e, 2, "twice(21)"); out.Fault == nil {
			t.Errorf("a cell was run before its turn: %s", told(out, c))
		}
		for _, c := range cells {
			if out, _ := run(t, e, c.N, c.Source); out.Fault != nil || out.How["alone"] != nil {
				t.Fatalf("%v %v", out.Fault, out.How)
			}
		}
	}
}

// TestProgramForeseenWrongly lets a cell fail when it runs, so that a variable
// of a later one has another type than was foreseen: that cell is compiled by
// itself, says so, and shares types with the program.
func TestProgramForeseenWrongly(t *testing.T) {
	e := startCompiled(t)
	cells := numbered(
		"type mark struct{ n int }\nfunc (m mark) String() string { return fmt.Sprint(\"mark \", m.n) }\nx, y := 1, 1.5\nm := mark{7}",
		"if m.n == 7 {\n\tpanic(\"seven\")\n}\nx := \"s\"",
		"y := x",
		"z := []any{y, m}\nfmt.Printf(\"%T %v %T\\n\", z[0], z[1], z[1])\nmark.String(z[1].(mark))",
		"z[1].(fmt.Stringer).String()",
	)
	if p, err := e.Program(t.Context(), cells, &capture{}); err != nil || p.Alone != "" || len(p.Left) > 0 {
		t.Fatalf("%v %+v", err, p)
	}
	linked := plugins(t)
	var outs []engine.Outcome
	var said []string
	for _, c := range cells {
		o, cp := run(t, e, c.N, c.Source)
		outs, said = append(outs, o), append(said, told(o, cp))
	}
	if outs[1].Fault == nil || outs[1].How["program"] == nil || outs[2].Fault == nil {
		t.Errorf("In[2]: %s\nIn[3]: %s", said[1], said[2])
	}
	const want = "stdout:float64 mark 7 cell.mark\n = mark 7"
	if said[3] != want {
		t.Errorf("In[4]: %s, want %s", said[3], want)
	}
	if why := fmt.Sprint(outs[3].How["alone"]); why != "what it is made of is not what was foreseen, since In[2], In[3] failed" {
		t.Errorf("In[4] by itself: %s", why)
	}
	if n := plugins(t) - linked; n != 1 {
		t.Errorf("%d cells were linked by themselves, want 1", n)
	}
	if said[4] != " = mark 7" || outs[4].How["program"] == nil {
		t.Errorf("In[5]: %s %v", said[4], outs[4].How)
	}
}

// TestProgramMixed compiles in an ordinary session, in one link, what is not
// interpreted.
func TestProgramMixed(t *testing.T) {
	e := start(t)
	cells := numbered("a := 2.5", "func cube(x float64) float64 { return x * x * x }", "a * 2", "s := 0.0\nfor i := range 4 {\n\ts += cube(float64(i))\n}\ns")
	p, err := e.Program(t.Context(), cells, &capture{})
	if err != nil || p.Cells != 2 || p.Packages != 2 {
		t.Fatalf("%v %+v", err, p)
	}
	linked := plugins(t)
	for i, want := range []string{"interpreted", "compiled", "interpreted", "compiled"} {
		if out, _ := run(t, e, i+1, cells[i].Source); out.Fault != nil || out.How["tier"] != want {
			t.Errorf("In[%d]: %v %v", i+1, out.Fault, out.How)
		}
	}
	if plugins(t) != linked {
		t.Error("a cell was linked by itself")
	}
}

// TestProgramWithoutCompiler says why nothing is compiled; no cell is
// interpreted in its stead.
func TestProgramWithoutCompiler(t *testing.T) {
	e := startCompiled(t, "PATH=/nowhere")
	p, err := e.Program(t.Context(), numbered("1 + 1"), &capture{})
	if err != nil || !strings.Contains(p.Alone, "is not found; install ") {
		t.Errorf("%v %+v", err, p)
	}
	out, c := run(t, e, 1, "1 + 1")
	if out.Fault == nil || !strings.HasPrefix(out.Fault.Message, "a run with every cell compiled needs the compiled tier, which is not there: the C compiler ") {
		t.Errorf("%s", told(out, c))
	}
}

// TestProgramInterrupted gives a program up: the session goes on.
func TestProgramInterrupted(t *testing.T) {
	e := startCompiled(t)
	ctx, cancel := context.WithCancel(t.Context())
	cancel()
	if _, err := e.Program(ctx, numbered("func interrupted() int { return 8 }"), &capture{}); err == nil {
		t.Error("no error")
	}
	if out, _ := run(t, e, 1, "func interrupted() int { return 8 }\ninterrupted()"); out.Fault != nil || out.Value.Data["text/plain"] != "8" {
		t.Errorf("afterwards: %v %v", out.Fault, out.Value)
	}
}
