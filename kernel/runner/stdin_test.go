package runner_test

import (
	"errors"
	"strings"
	"sync"
	"testing"
	"time"

	"levelsum/kernel/engine"
)

// typing is a capture whose reader types these lines, one for each question.
func typing(lines ...string) *capture {
	var mu sync.Mutex // questions come from goroutines of their own
	return &capture{answer: func(string) (string, error) {
		mu.Lock()
		defer mu.Unlock()
		if len(lines) == 0 {
			return "", errors.New("nothing more is typed")
		}
		l := lines[0]
		lines = lines[1:]
		return l, nil
	}}
}

func TestStandardInputIsTheReader(t *testing.T) {
	e := start(t)
	for _, test := range []struct{ name, src, typed, want string }{
		{"Scan", "var a, b float64\nfmt.Scan(&a, &b)\na + b", "300 1.5", "301.5"},
		{"Scan of two lines", "var a, b float64\nfmt.Scan(&a, &b)\na - b", "300|1.5", "298.5"},
		{"two calls of Scan on a line", "var a, b int\nfmt.Scan(&a)\nfmt.Scan(&b)\n10*a + b", "1 2", "12"},
		{"Scanln", "var a, b string\nfmt.Scanln(&a)\nfmt.Scanln(&b)\na + \"/\" + b", "x|y", "x/y"},
		{"Scanf", "var a int\nvar u string\nfmt.Scanf(\"%d %s\", &a, &u)\nfmt.Sprint(a, u)", "300 K", "300K"},
		{"a function value", "scan := fmt.Scan\nvar a int\nscan(&a)\na", "7", "7"},
		{"dot import", "import . \"fmt\"\nvar a int\nScan(&a)\na", "7", "7"},
		{"Fscan", "var a int\nfmt.Fscan(os.Stdin, &a)\na", "8", "8"},
		{"Reader", "in := bufio.NewReader(os.Stdin)\nl, err := in.ReadString('\\n')\nif err != nil { panic(err) }\nl", "a b c", "a b c\n"},
		{"Scanner", "in := bufio.NewScanner((os.Stdin))\nin.Scan()\nfirst := in.Text()\nin.Scan()\nfirst + in.Text()", "ab|cd", "abcd"},
		{"session variable", "var in2 io.Reader = os.Stdin\nvar a int\nfmt.Fscan(in2, &a)\na", "9", "9"},
		{"assignment", "var in3 io.Reader\nin3 = os.Stdin\nvar a int\nfmt.Fscan(in3, &a)\na", "9", "9"},
		{"conversion", "in4 := io.Reader(os.Stdin)\nvar a int\nfmt.Fscan(in4, &a)\na", "9", "9"},
		{"in a function", "func source() io.Reader { return os.Stdin }\nvar a int\nfmt.Fscan(source(), &a)\na", "9", "9"},
		{"local variable", "func read() (a int) { var r io.Reader = os.Stdin; fmt.Fscan(r, &a); return }\nread()", "9", "9"},
		{"fields and elements", "type in struct{ R io.Reader }\nx := in{R: os.Stdin}\ny := in{os.Stdin}\nz := []io.Reader{os.Stdin}\nm := map[string]io.Reader{\"k\": os.Stdin}\nvar a, b, c, d int\nfmt.Fscan(x.R, &a)\nfmt.Fscan(y.R, &b)\nfmt.Fscan(z[0], &c)\nfmt.Fscan(m[\"k\"], &d)\na + b + c + d", "1|20|300|4000", "4321"},
		{"channel", "c := make(chan io.Reader, 1)\nc <- os.Stdin\nvar a int\nfmt.Fscan(<-c, &a)\na", "9", "9"},
		{"Read", "b := make([]byte, 3)\nn, err := os.Stdin.Read(b)\nif err != nil { panic(err) }\nstring(b[:n])", "abcdef", "abc"},
		{"TeeReader", "var copied strings.Builder\nvar a int\nfmt.Fscan(io.TeeReader(os.Stdin, &copied), &a)\na", "6", "6"},
		{"an empty line", "in := bufio.NewScanner(os.Stdin)\nin.Scan()\nlen(in.Text())", "", "0"},
	} {
		c := typing(strings.Split(test.typed, "|")...)
		o := e.Run(t.Context(), engine.Cell{N: 1, CanAsk: true, Source: test.src}, c)
		if o.Fault != nil || o.Value == nil || o.Value.Data["text/plain"] != test.want {
			t.Errorf("%s: %+v %v, want %q", test.name, o.Fault, o.Value, test.want)
		}
	}
}

func TestACellDoesNotSeeTheInputOfAnother(t *testing.T) {
	e := start(t)
	c := typing("1 2 3", "4")
	for n, want := range []string{"1", "4"} {
		o := e.Run(t.Context(), engine.Cell{N: n, CanAsk: true, Source: "var a int\nfmt.Scan(&a)\na"}, c)
		if o.Fault != nil || o.Value.Data["text/plain"] != want {
			t.Errorf("%+v %v, want %s", o.Fault, o.Value, want)
		}
	}
}

// Where nobody answers, no cell takes that for an empty input.
func TestNobodyAnswers(t *testing.T) {
	e := start(t)
	for _, test := range []struct{ src, fault, warning string }{
		{"var a int\nfmt.Scan(&a)", "standard input: nobody answers", ""},
		{"var a int\nfmt.Fscan(os.Stdin, &a)", "standard input: nobody answers", "warning: the cell reads standard input: nobody answers\n"},
		{"n := 0\nin := bufio.NewScanner(os.Stdin)\nfor in.Scan() { n++ }\nfor in.Scan() { n++ }", "", "warning: the cell reads standard input: nobody answers\n"},
		{"f := os.Stdin\nl, err := bufio.NewReader(f).ReadString('\\n')", "err: read standard input as a file (a cell reads os.Stdin itself, or calls fmt.Scan): bad file descriptor", ""},
		{"var a int\nif _, err := fmt.Scan(&a); err != nil { a = 300 }\na", "", ""},
	} {
		o, c := run(t, e, 1, test.src)
		got := ""
		if o.Fault != nil {
			got = o.Fault.Message
		}
		if got != test.fault || c.err() != test.warning {
			t.Errorf("%s\nends with %q and warns %q, want %q and %q", test.src, got, c.err(), test.fault, test.warning)
		}
	}
}

func TestInterruptWhileInputIsAwaited(t *testing.T) {
	e := start(t)
	asked, late := make(chan struct{}, 1), make(chan struct{})
	waits := &capture{answer: func(string) (string, error) {
		asked <- struct{}{}
		<-late
		return "99", nil
	}}
	done := make(chan engine.Outcome, 1)
	go func() {
		done <- e.Run(t.Context(), engine.Cell{N: 1, CanAsk: true, Source: "var a int\nfmt.Scan(&a)\na"}, waits)
	}()
	<-asked
	t0 := time.Now()
	e.Interrupt()
	if o := <-done; o.Fault == nil || o.Fault.Name != "interrupted" || o.Restarted {
		t.Errorf("ended with %+v, want interrupted", o.Fault)
	}
	t.Logf("after %v", time.Since(t0))
	// What is typed too late answers no later question.
	c := &capture{answer: func(string) (string, error) {
		close(late)
		return "1", nil
	}}
	o := e.Run(t.Context(), engine.Cell{N: 2, CanAsk: true, Source: "var a int\nfmt.Scan(&a)\na"}, c)
	if o.Fault != nil || o.Value.Data["text/plain"] != "1" {
		t.Errorf("%+v %v, want 1", o.Fault, o.Value)
	}
}

// What a cell closes is there again for the next.
func TestClosedStandardFiles(t *testing.T) {
	e := start(t)
	for n, src := range []string{
		"os.Stdout.Close()\nos.Stderr.Close()\nos.Stdin.Close()",
		"for _, fd := range []uintptr{1, 2, 5, 6} { os.NewFile(fd, \"mine\").Close() }\nx := 2",
		"os.Stdout = nil\nos.Stderr = nil\ny := 3",
		"f, err := os.CreateTemp(\".\", \"f\")\nif err != nil { panic(err) }\nos.Stdout.Close()\nos.Stdout = f\n_ = f.Close()",
	} {
		if o, _ := run(t, e, n+1, src); o.Fault != nil {
			t.Errorf("%s: %+v", src, o.Fault)
		}
		o, c := run(t, e, 10, "import \"log\"\nfmt.Println(\"interpreted\")\nfmt.Fprintln(os.Stderr, \"too\")")
		if c.out() != "interpreted\n" || c.err() != "too\n" || o.How["tier"] != "interpreted" {
			t.Errorf("after %s: %q, %q, %v %+v", src, c.out(), c.err(), o.How, o.Fault)
		}
		o, c = run(t, e, 11, "import \"log\"\nfor range 2 { fmt.Println(\"compiled\"); log.New(os.Stderr, \"\", 0).Print(\"a\") }\nlog.SetFlags(0)\nlog.Print(\"b\")")
		if c.out() != "compiled\ncompiled\n" || c.err() != "a\na\nb\n" {
			t.Errorf("after %s: %q, %q, %+v", src, c.out(), c.err(), o.Fault)
		}
	}
	// What the process writes at its end is not lost to a collection either.
	if o, _ := run(t, e, 12, "import \"runtime\"\nfor range 3 { runtime.GC() }\nfunc r(n int) int { return r(n+1) + 1 }\nr(0)"); o.Fault == nil || !strings.HasPrefix(o.Fault.Message, "endless recursion") {
		t.Errorf("endless recursion ends with %+v", o.Fault)
	}
}
