package runner_test

import (
	"io/fs"
	"path/filepath"
	"strings"
	"sync"
	"testing"

	"levelsum/kernel/engine"
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

// TestBuildAhead announces a cell while another runs: when its turn comes its
// build has been done.
func TestBuildAhead(t *testing.T) {
	e := start(t)
	const first = "func double(x float64) float64 { return 2 * x }\nvar in string\nin, err := display.Current().Ask(\"\", false)\nif err != nil {\n\tpanic(err)\n}\nin"
	const second = "s := 0.0\nfor i := range 5 {\n\ts += double(float64(i))\n}\ns"
	e.Announce(engine.Cell{N: 2, Source: second})
	// The first cell waits until the kit's cache holds one plugin more than at
	// its start: that of the second cell.
	var before int
	c := &capture{}
	c.answer = func(string) (string, error) {
		before = plugins(t)
		for plugins(t) == before {
			if t.Context().Err() != nil {
				return "", t.Context().Err()
			}
		}
		return "built", nil
	}
	if out := e.Run(t.Context(), engine.Cell{N: 1, Source: first, CanAsk: true}, c); out.Fault != nil {
		t.Fatal(out.Fault.Trace)
	}
	built := plugins(t)
	out, _ := run(t, e, 2, second)
	if out.Fault != nil || out.Value.Data["text/plain"] != "20" {
		t.Fatalf("%v %v", out.Fault, out.Value)
	}
	if plugins(t) != built {
		t.Error("the announced cell was built once more")
	}
}

// plugins counts what has been built.
func plugins(t *testing.T) int {
	seen.Lock()
	defer seen.Unlock()
	err := filepath.WalkDir(filepath.Join(host.Cache, "built"), func(path string, d fs.DirEntry, err error) error {
		if err == nil && strings.HasSuffix(path, ".so") && d.Name() != "plugin.so" { // that one is being linked
			seen.plugins[path] = true
		}
		return nil
	})
	if err != nil {
		t.Fatal(err)
	}
	return len(seen.plugins)
}

// seen are the plugins that have been in the cache; old ones may have been
// evicted where the tests take long.
var seen = struct {
	sync.Mutex
	plugins map[string]bool
}{plugins: map[string]bool{}}
