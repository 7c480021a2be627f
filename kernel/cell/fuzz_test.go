package cell_test

import (
	"errors"
	"fmt"
	"strings"
	"testing"
	"time"

	"levelsum/kernel/cell"
	"levelsum/kernel/compile"
	"levelsum/kernel/symbols/export"
)

func newScope() *cell.Scope {
	return cell.NewScope(export.New(compile.List("")), map[string]string{"fmt": "fmt", "math": "math", "sort": "sort", "strings": "strings", "errors": "errors", "os": "os", "time": "time"})
}

// FuzzCheck checks random text as cells: never a panic, an error always with
// its place inside the cell, and nothing changes by a check alone.
func FuzzCheck(f *testing.F) {
	for _, s := range []string{
		"x := 1\nfunc f() int { return x }\nf()",
		"type T struct{ a int; b []T }\nfunc (t *T) m() { t.a++ }\nvar t T\nt.m()\nt",
		"for i := range 3 { fmt.Println(i) }",
		"switch v := any(3).(type) { case int: fmt.Println(v) }",
		"var a = b\nvar b = 2",
		"import m \"math\"\nm.Sqrt(2)",
		"go func() { panic(1) }()\nselect {}",
		"func G[T any](x T) T { return x }\nG(1)",
		"L: for { break L }",
		"const ( a = iota; b )\na + b",
		"defer recover()",
		"c := make(chan int)\nc <- <-c",
		"package main\nfunc main() {}",
		"x := struct{ a, B int }{1, 2}\nx.a",
		"if err := f(); err != nil { return }",
		"a, err := strings.Cut(\"a=b\", \"=\")",
		"}{", "func (", "\"", "/*", "`", "é := 1", "\x00", "x.", "import", "func (T) ", "type T = T", "var _ = 1",
	} {
		f.Add(s)
	}
	s := newScope()
	if p, err := s.Check(&cell.Source{N: 1, Text: "x := 1.5\ntype P struct{ a int }\nfunc g(p P) int { return p.a }\np := P{1}"}); err != nil {
		f.Fatal(err)
	} else if u, err := p.Compile(true); err != nil {
		f.Fatal(err)
	} else {
		s.Adopt(p, u)
		s.Commit(p, func(string) bool { return true })
	}
	names := strings.Join(s.Names(), " ")
	f.Fuzz(func(t *testing.T, text string) {
		defer time.AfterFunc(8*time.Second, func() { panic(fmt.Sprintf("%q: the check does not end", text)) }).Stop()
		p, err := s.Check(&cell.Source{N: 2, Text: text})
		if err != nil {
			var ds cell.Diagnostics
			if !errors.As(err, &ds) || len(ds) == 0 {
				t.Fatalf("%q: error %T %v", text, err, err)
			}
			for _, d := range ds {
				if lines := strings.Count(text, "\n") + 1; d.Source.N == 2 && (d.Line < 1 || d.Line > lines || d.Column < 1) {
					t.Errorf("%q: %s is outside of the cell", text, d)
				}
				d.Lines()
			}
		} else if _, err := p.Compile(true); err == nil {
			p.Types()
			p.ConstantText()
		}
		if now := strings.Join(s.Names(), " "); now != names {
			t.Errorf("%q: a check changed the session from %s to %s", text, names, now)
		}
	})
}
