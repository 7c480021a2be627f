package runner_test

import (
	"fmt"
	"os"
	"strings"
	"testing"
)

// anonymous is the resident memory of the engine less file pages, in kB.
func anonymous(t testing.TB, e interface{ Pid() int }) int {
	b, err := os.ReadFile(fmt.Sprintf("/proc/%d/status", e.Pid()))
	if err != nil {
		t.Skip("this system does not tell the memory of a process")
	}
	for l := range strings.Lines(string(b)) {
		if v, ok := strings.CutPrefix(l, "RssAnon:"); ok {
			var kb int
			fmt.Sscan(strings.TrimSuffix(strings.TrimSpace(v), "kB"), &kb)
			return kb
		}
	}
	return 0
}

func TestManyCellsTakeLittleMemory(t *testing.T) {
	e := start(t)
	run(t, e, 1, "x := 0")
	before := 0
	const first, last = 1000, 10000
	for n := range last {
		if n == first {
			run(t, e, n, "import \"runtime\"\nruntime.GC()\nruntime.GC()")
			before = anonymous(t, e)
		}
		if o, _ := run(t, e, n+2, fmt.Sprintf("x = x + %d", n)); o.Fault != nil {
			t.Fatal(o.Fault)
		}
	}
	run(t, e, last+1, "runtime.GC()\nruntime.GC()")
	after := anonymous(t, e)
	if per := float64(after-before) / (last - first); per > 5 {
		t.Errorf("%.1f kB a cell (from %d kB to %d kB), want under 5", per, before, after)
	} else {
		t.Logf("%.2f kB a cell", per)
	}
}

func BenchmarkTrivialCell(b *testing.B) {
	for _, declared := range []int{0, 300} {
		b.Run(fmt.Sprintf("after %d cells", declared), func(b *testing.B) {
			e := start(b)
			for i := range declared {
				run(b, e, i+1, fmt.Sprintf("v%d := %d.5", i, i))
			}
			n := declared
			for b.Loop() {
				n++
				if o, _ := run(b, e, n, "2.5 * math.Sqrt(3)"); o.Fault != nil {
					b.Fatal(o.Fault)
				}
			}
		})
	}
}

func BenchmarkDeclaringCell(b *testing.B) {
	e := start(b)
	n := 0
	for b.Loop() {
		n++
		if o, _ := run(b, e, n, fmt.Sprintf("func f(x float64) float64 { return x * %d }", n)); o.Fault != nil {
			b.Fatal(o.Fault)
		}
	}
}

func BenchmarkUnchangedDeclaringCell(b *testing.B) {
	e := start(b)
	n := 0
	for b.Loop() {
		n++
		if o, _ := run(b, e, n, "func f(x float64) float64 { return x * 2 }"); o.Fault != nil {
			b.Fatal(o.Fault)
		}
	}
}
