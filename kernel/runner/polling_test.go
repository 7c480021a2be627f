package runner_test

import (
	"encoding/json"
	"fmt"
	"os"
	"slices"
	"strings"
	"testing"
)

// TestPollingCost holds the cost of the looks that compiled loops and functions
// take at whether they are to stop, without which a cell could not be
// interrupted: the same text is compiled in a cell and in a package, where
// nothing is added, and the two are run in turn; the fastest of each counts.
// Loops that do next to nothing may take up to twice the time, and the median
// at most a tenth more.
func TestPollingCost(t *testing.T) {
	text, err := os.ReadFile("testdata/native/loops.go")
	if err != nil {
		t.Fatal(err)
	}
	decls := strings.TrimPrefix(string(text), "package native\n")
	e := start(t)
	if out, c := run(t, e, 1, decls); out.Fault != nil {
		t.Fatal(told(out, c))
	}
	loops := []struct {
		name string
		n    int
	}{{"Harmonic", 5e6}, {"Dot", 1e7}, {"Masked", 1e7}, {"Mix", 5e6}, {"Relax", 5e6}, {"Fib", 30}}
	var list strings.Builder
	for _, l := range loops {
		fmt.Fprintf(&list, "\t{func() { %s(%d) }, func() { native.%s(%d) }},\n", l.name, l.n, l.name, l.n)
	}
	out, c := run(t, e, 2, fmt.Sprintf(`import native %q
ratios := []float64{}
for _, pair := range [][2]func(){
%s} {
	best := [2]time.Duration{time.Hour, time.Hour}
	for range 25 {
		for k, f := range pair {
			start := time.Now()
			f()
			best[k] = min(best[k], time.Since(start))
		}
	}
	ratios = append(ratios, float64(best[0])/float64(best[1]))
}
b, err := json.Marshal(ratios)
fmt.Println(string(b))
`, nativePath, list.String()))
	if out.Fault != nil {
		t.Fatal(told(out, c))
	}
	var ratios []float64
	if err := json.Unmarshal([]byte(c.out()), &ratios); err != nil || len(ratios) != len(loops) {
		t.Fatalf("%q: %v", c.out(), err)
	}
	for i, r := range ratios {
		t.Logf("%s: %.2f", loops[i].name, r)
		if r > 2 {
			t.Errorf("%s takes %.2f times as long in a cell", loops[i].name, r)
		}
	}
	slices.Sort(ratios)
	if r := ratios[len(ratios)/2]; r > 1.1 {
		t.Errorf("the median of the loops is %.2f times as long in a cell, want at most 1.1", r)
	}
}
