package runner_test

import (
	"strings"
	"testing"
	"time"

	"levelsum/kernel/engine"
)

// a starter is a capture that tells when the cell prints "go".
type starter struct {
	capture
	started chan struct{}
	stuck   chan struct{} // closed when the engine says that the cell hangs
}

func (s *starter) Stream(name, text string) {
	s.capture.Stream(name, text)
	if strings.Contains(text, "go") && s.started != nil {
		close(s.started)
		s.started = nil
	}
	if strings.Contains(text, "still running") && s.stuck != nil {
		close(s.stuck)
		s.stuck = nil
	}
}

// interrupted runs a cell that prints "go", interrupts it then and returns how
// it ended and how long that took.
func interrupted(t *testing.T, e *engine.Engine, src string) (engine.Outcome, time.Duration, *starter) {
	t.Helper()
	c := &starter{started: make(chan struct{})}
	started := c.started
	done := make(chan engine.Outcome, 1)
	go func() { done <- e.Run(t.Context(), engine.Cell{N: 1, Source: src}, c) }()
	select {
	case <-started:
	case o := <-done:
		t.Fatalf("the cell ended by itself: %+v", o.Fault)
	}
	t0 := time.Now()
	e.Interrupt()
	o := <-done
	return o, time.Since(t0), c
}

func TestInterruptEndsCells(t *testing.T) {
	e := start(t)
	for _, test := range []struct{ name, src string }{
		{"loop", "x := 0\nfmt.Println(\"go\")\nfor { x++ }"},
		{"loop without a look in it", "a := make([]float64, 1e6)\ns := 0.0\nfmt.Println(\"go\")\nfor { for i, x := range a { s += math.Sqrt(x) * float64(i) } }"},
		{"recursion", "func fib(n int) int { if n < 2 { return n }; return fib(n-1) + fib(n-2) }\nfmt.Println(\"go\")\nfib(80)"},
		{"sleep", "fmt.Println(\"go\")\ntime.Sleep(time.Hour)"},
		{"receive", "c := make(chan int)\nfmt.Println(\"go\")\n<-c"},
		{"send", "c := make(chan int)\nfmt.Println(\"go\")\nc <- 1"},
		{"range over channel", "c := make(chan int)\nfmt.Println(\"go\")\nfor range c {}"},
		{"select", "fmt.Println(\"go\")\nselect {}"},
		{"goto", "n := 0\nfmt.Println(\"go\")\nL: n++\ngoto L"},
		{"recover", "func try() { defer func() { recover() }(); for {} }\nfmt.Println(\"go\")\nfor { try() }"},
		{"goroutines", "c := make(chan int)\nfor range 3 { go func() { for { c <- 1 } }() }\nfmt.Println(\"go\")\nfor { <-c }"},
		{"callback", "fmt.Println(\"go\")\nsort.Slice(make([]int, 1<<30), func(i, j int) bool { return time.Now().IsZero() })"},
	} {
		o, took, _ := interrupted(t, e, test.src)
		if o.Fault == nil || o.Fault.Name != "interrupted" || o.Restarted {
			t.Errorf("%s: ended with %+v, want interrupted", test.name, o.Fault)
		}
		t.Logf("%s: %v", test.name, took)
	}
	if o, _ := run(t, e, 2, "1 + 1"); o.Fault != nil {
		t.Errorf("after all that: %v", o.Fault)
	}
}

func TestVariablesStandStillAfterInterrupt(t *testing.T) {
	e := start(t)
	if o, _, _ := interrupted(t, e, "n := 0\nfor {\n\tn++\n\tif n == 1000 {\n\t\tfmt.Println(\"go\")\n\t}\n}"); o.Fault == nil {
		t.Fatal("not interrupted")
	}
	a, _ := run(t, e, 2, "n")
	b, _ := run(t, e, 3, "n")
	if a.Fault != nil || b.Fault != nil || a.Value.Data["text/plain"] != b.Value.Data["text/plain"] || a.Value.Data["text/plain"] == "0" {
		t.Errorf("n is %v, then %v", a.Value, b.Value)
	}
}

func TestSecondInterruptRestarts(t *testing.T) {
	e := start(t)
	c := &starter{started: make(chan struct{}), stuck: make(chan struct{})}
	started, stuck := c.started, c.stuck
	done := make(chan engine.Outcome, 1)
	go func() {
		// The cell tells that it runs once it hangs in the lock.
		done <- e.Run(t.Context(), engine.Cell{N: 1, Source: "var mu sync.Mutex\nmu.Lock()\ntime.AfterFunc(50*time.Millisecond, func() { fmt.Println(\"go\") })\nmu.Lock()"}, c)
	}()
	<-started
	e.Interrupt()
	// The engine says after a second what keeps the cell; a second wish counts
	// from then on.
	select {
	case <-stuck:
	case o := <-done:
		t.Fatalf("ended by the first interrupt: %+v", o.Fault)
	}
	if !strings.Contains(c.err(), "sync.(*Mutex).Lock") {
		t.Errorf("the message does not name the call: %s", c.err())
	}
	e.Interrupt()
	if o := <-done; o.Fault == nil || !o.Restarted {
		t.Errorf("got %+v, want a restart", o)
	}
	if o, _ := run(t, e, 2, "40 + 2"); o.Fault != nil {
		t.Error(o.Fault)
	}
}

func TestMemoryLimitEndsTheCell(t *testing.T) {
	e, err := engine.Start(t.Context(), engine.Options{Command: []string{host.Exe, "engine"}, Dir: t.TempDir(), Env: []string{"LEVELSUM_CACHE=" + host.Cache}, MemoryLimit: 300 << 20})
	if err != nil {
		t.Fatal(err)
	}
	defer e.Close()
	o, _ := run(t, e, 1, "var all [][]byte\nfor {\n\tb := make([]byte, 1<<20)\n\tfor i := range b { b[i] = 1 }\n\tall = append(all, b)\n}")
	if o.Fault == nil || !strings.Contains(o.Fault.Message, "300 MiB of memory") || !o.Restarted {
		t.Errorf("got %+v", o.Fault)
	}
	if o, _ := run(t, e, 2, "1"); o.Fault != nil {
		t.Error(o.Fault)
	}
}

func TestOrderOfOutput(t *testing.T) {
	e := start(t)
	_, c := run(t, e, 1, `for i := range 20 {
	fmt.Println("a", i)
	display.Show(i)
	fmt.Fprintln(os.Stderr, "b", i)
	display.Show("s")
}`)
	want := 0
	for _, s := range strings.Split(strings.Join(c.all, "|"), "show:s") {
		if strings.Count(s, "stdout:a") > 1 {
			t.Fatalf("order lost: %q", c.all)
		}
		want++
	}
	if want != 21 {
		t.Errorf("%d values shown: %q", want-1, c.all)
	}
}

func TestAsk(t *testing.T) {
	e := start(t)
	c := &capture{answer: func(p string) (string, error) { return "answer to " + p, nil }}
	o := e.Run(t.Context(), engine.Cell{N: 1, CanAsk: true, Source: `s, err := display.Current().Ask("name? ", false)
if err != nil { panic(err) }
s`}, c)
	if o.Fault != nil || o.Value.Data["text/plain"] != "answer to name? " {
		t.Errorf("%+v %v", o.Fault, o.Value)
	}
}
