package runner_test

import (
	"strings"
	"testing"
)

// refusals are the cases that are refused with a reason.
var refusals = map[string]string{
	"native_hidden": "native.hidden, whose name is not exported",
}

// TestCases runs every case as one cell and compares what it prints with what
// the Go compiler's program prints. A case that Go does not compile must be
// refused; any other refusal is counted and named.
func TestCases(t *testing.T) {
	cases := cellCases(t)
	want := truths(t, cases)
	e := start(t)
	refused := 0
	for i, c := range cases {
		t.Run(c.name, func(t *testing.T) {
			tr := want[c.file+" "+c.name]
			src := strings.Join(importsOf(c.decls+"\n"+c.stmts), "\n") + "\n" + c.decls + "\n" + c.stmts
			out, cap := run(t, e, i+1, src)
			switch {
			case tr.Error != "":
				if out.Fault == nil || out.Fault.Name != "compile error" {
					t.Errorf("Go does not compile it, the cell gives %q, fault %v\n%s", cap.out(), out.Fault, tr.Error)
				}
			case out.Fault != nil && out.Fault.Name == "refused" && refusals[c.name] != "":
				refused++
				if !strings.Contains(out.Fault.Message, refusals[c.name]) {
					t.Errorf("refused with %q, want %q in it", out.Fault.Message, refusals[c.name])
				}
			case out.Fault != nil && out.Fault.Name == "refused":
				t.Errorf("refused: %s", strings.Join(out.Fault.Trace, "\n"))
			case out.Fault != nil && tr.Exit == 0:
				t.Errorf("fault: %s\n%s", strings.Join(out.Fault.Trace, "\n"), src)
			case strings.ReplaceAll(cap.out(), "cell.", "main.") != tr.Output:
				t.Errorf("silently wrong: got %q, want %q\n%s", cap.out(), tr.Output, src)
			}
		})
	}
	t.Logf("%d cases, %d refused", len(cases), refused)
}
