package runner_test

import (
	"strings"
	"testing"
)

// TestCellAgain runs a compiled cell again as it was: nothing is compiled
// anew, and a fault carries the number of the new run.
func TestCellAgain(t *testing.T) {
	e := start(t)
	const src = "n := 0\nfor i := range 4 {\n\tn += i\n}\nif n > 100 {\n\tpanic(n)\n}\nn"
	for k := 1; k <= 3; k++ {
		out, _ := run(t, e, k, src)
		if out.Fault != nil || out.Value.Data["text/plain"] != "6" {
			t.Fatalf("run %d: %v %v", k, out.Fault, out.Value)
		}
		if again := out.How["again"] == true; again != (k > 1) {
			t.Errorf("run %d: compiled anew: %v", k, !again)
		}
	}
	const bad = "for i := range 3 {\n\tif i == 2 {\n\t\tpanic(\"at two\")\n\t}\n}"
	for k := 5; k <= 6; k++ {
		out, _ := run(t, e, k, bad)
		if want := map[int]string{5: "In[5]:3: panic: at two", 6: "In[6]:3: panic: at two"}[k]; out.Fault == nil || !strings.HasPrefix(out.Fault.Trace[0], want) {
			t.Errorf("run %d: %v, want %s", k, out.Fault, want)
		}
	}
}
