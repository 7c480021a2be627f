package runner_test

import (
	"flag"
	"fmt"
	"os"
	"slices"
	"strings"
	"sync"
	"testing"
	"time"

	"levelsum/kernel/engine"
)

var declaring = flag.Int("declaring", 60, "how many declaring cells TestManyDeclaringCells runs in one session; the gate runs 300")

// status reads a figure of a process from /proc, in kB.
func status(t testing.TB, pid int, name string) int {
	b, err := os.ReadFile(fmt.Sprintf("/proc/%d/status", pid))
	if err != nil {
		t.Fatalf("this system does not tell the memory of a process: %v", err)
	}
	for l := range strings.Lines(string(b)) {
		if v, ok := strings.CutPrefix(l, name+":"); ok {
			var kb int
			fmt.Sscan(strings.TrimSuffix(strings.TrimSpace(v), "kB"), &kb)
			return kb
		}
	}
	return 0
}

// TestManyDeclaringCells runs many cells that each declare something in one
// session, and at the same time in another kernel in the opposite order, so
// that the two share a cache and each builds about half. Every cell is a plugin
// of its own, and plugins cannot be unloaded: what they take is measured, and
// the reader is told at 300. A fresh session in which all are compiled as one
// program, as kernel.Replay() does it, takes a fraction.
func TestManyDeclaringCells(t *testing.T) {
	n := *declaring
	cells := make([]engine.Cell, n)
	for i := range cells {
		cells[i] = engine.Cell{N: i + 1, Source: fmt.Sprintf("type level%d struct{ e float64 }\nfunc (l level%d) boltzmann(t float64) float64 { return %d * math.Exp(-l.e/t) }\nfmt.Println(level%d{1}.boltzmann(1))", i, i, i, i)}
	}
	before := plugins(t)
	var kernels [2]*engine.Engine
	var notes [2][]string
	var took [2][]time.Duration
	empty := 0
	for k := range kernels {
		kernels[k] = start(t)
		run(t, kernels[k], 0, "1")
		empty = status(t, kernels[k].Pid(), "VmRSS")
	}
	var wg sync.WaitGroup
	for k, e := range kernels {
		wg.Go(func() {
			order := slices.Clone(cells)
			if k == 1 {
				slices.Reverse(order)
			}
			for _, c := range order {
				start := time.Now()
				out, cp := run(t, e, c.N, c.Source)
				took[k] = append(took[k], time.Since(start))
				if out.Fault != nil {
					t.Error(out.Fault.Trace)
					return
				}
				if s := cp.err(); s != "" {
					notes[k] = append(notes[k], s)
				}
			}
		})
	}
	wg.Wait()
	if got := plugins(t) - before; got != n {
		t.Errorf("two kernels have linked %d plugins for %d cells", got, n)
	}
	many := 0
	for k, e := range kernels {
		many = status(t, e.Pid(), "VmRSS")
		median := func(d []time.Duration) time.Duration { d = slices.Sorted(slices.Values(d)); return d[len(d)/2] }
		tenth := max(1, n/10)
		t.Logf("kernel %d: %d MB resident (%d of them anonymous), %.2f MB a cell; a cell took %v at first, %v at last", k, many/1000, anonymous(t, e)/1000,
			float64(many-empty)/1000/float64(n), median(took[k][:tenth]), median(took[k][n-tenth:]))
		if want := n / 300; len(notes[k]) != want || want > 0 && !strings.Contains(notes[k][0], "run kernel.Replay()") {
			t.Errorf("kernel %d: %d notes, want %d: %q", k, len(notes[k]), want, notes[k])
		}
		if out, c := run(t, e, n+1, "level0{2}.boltzmann(2)"); out.Fault != nil {
			t.Errorf("kernel %d, afterwards: %s", k, told(out, c))
		}
		e.Close()
	}

	e := start(t)
	p, err := e.Program(t.Context(), cells, &capture{})
	if err != nil || p.Alone != "" || p.Cells != n {
		t.Fatalf("%v %+v", err, p)
	}
	for _, c := range cells {
		if out, _ := run(t, e, c.N, c.Source); out.Fault != nil || out.How["program"] == nil {
			t.Fatalf("In[%d] in the program: %v %v", c.N, out.Fault, out.How)
		}
	}
	if got := plugins(t) - before; got != n+1 {
		t.Errorf("the program took %d links, want 1", got-n)
	}
	one := status(t, e.Pid(), "VmRSS")
	t.Logf("as one program, made in %v: %d MB resident", p.Took.Round(time.Millisecond), one/1000)
	if (one-empty)*5 > many-empty {
		t.Errorf("as one program %d kB above an empty session, one by one %d kB: want less than a fifth", one-empty, many-empty)
	}
}
