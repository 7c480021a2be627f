package runner_test

import (
	"strings"
	"testing"

	"levelsum/kernel/engine"
)

// TestCasesWithoutCompiler runs the cases in an engine that has no compiled
// tier, since there are no tools on the path: what is not proved for the interpreter is refused with the words that
// say what to install, and nothing is silently wrong.
func TestCasesWithoutCompiler(t *testing.T) {
	cases := cellCases(t)
	want := truths(t, cases)
	e, err := engine.Start(t.Context(), engine.Options{Command: []string{host.Exe, "engine"}, Dir: t.TempDir(), Env: []string{"LEVELSUM_CACHE=" + host.Cache, "PATH="}})
	if err != nil {
		t.Fatal(err)
	}
	defer e.Close()
	said := 0 // how often the engine says by itself what is missing
	right, refused := 0, 0
	for i, c := range cases {
		tr := want[c.file+" "+c.name]
		if tr.Error != "" || strings.Contains(c.decls+c.stmts, "native.") {
			continue // what does not compile is the other test's; the engine does not have the package native
		}
		// Each statement is a cell of its own, so that some are interpreted.
		src := strings.Join(importsOf(c.decls+"\n"+c.stmts), "\n") + "\n" + c.decls + "\n" + c.stmts
		out, cap := run(t, e, i+1, src)
		if s := cap.err(); strings.HasPrefix(s, "note: only simple statements run here") {
			if said++; !strings.Contains(s, "install") {
				t.Errorf("the note does not say what to do: %s", s)
			}
		}
		switch {
		case out.Fault != nil && out.Fault.Name == "refused":
			refused++
			if !strings.Contains(out.Fault.Message, "install") {
				t.Errorf("%s: refused without a word what to do: %s", c.name, out.Fault.Message)
			}
		case out.Fault != nil && tr.Exit == 0:
			t.Errorf("%s: %s", c.name, strings.Join(out.Fault.Trace, "\n"))
		case strings.ReplaceAll(cap.out(), "cell.", "main.") != tr.Output:
			t.Errorf("%s: silently wrong: got %q, want %q", c.name, cap.out(), tr.Output)
		default:
			right++
		}
	}
	t.Logf("%d right, %d refused", right, refused)
	if said != 1 {
		t.Errorf("the engine said %d times what is missing, want once", said)
	}
	for _, src := range []string{"x := 2.5", "x * 2", "cu := solid.Debye{Theta: 343 * unit.K}", "cu.HeatCapacity(300 * unit.K)"} {
		if out, _ := run(t, e, 1, src); out.Fault != nil {
			t.Errorf("%s: %s", src, strings.Join(out.Fault.Trace, "\n"))
		}
	}
}
