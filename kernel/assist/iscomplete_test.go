package assist

import "testing"

func TestIsComplete(t *testing.T) {
	for _, test := range []struct{ source, status, indent string }{
		{"", complete, ""},
		{"1 + 2", complete, ""},
		{"x := 3; y := 4", complete, ""},
		{"undeclared", complete, ""},
		{"// only a comment", complete, ""},
		{"import \"fmt\"\nfmt.Println(1)", complete, ""},
		{"func f() int { return 1 }\nf()", complete, ""},
		{"func f[T any](x T) T { return x }", complete, ""},
		{"type T struct{ x int }\nfunc (t T) X() int { return t.x }\nT{1}.X()", complete, ""},
		{"func(x int) int { return x }(3)", complete, ""},
		{"func(x int) unit.Energy { return 0 }(3)", complete, ""},
		{"f := func() {\n}", complete, ""},
		{"for i := range 3 {\n\tfmt.Println(i)\n}", complete, ""},
		{"s := `two\nlines`", complete, ""},
		{"s := \"{[(\"", complete, ""},
		{"return", complete, ""},
		{"/* a\nb */ 1", complete, ""},
		{"x := []int{\n1,\n2,\n}", complete, ""},

		{"func f() {", incomplete, "\t"},
		{"for i := range 3 {\n\tfmt.Println(i)", incomplete, "\t"},
		{"func f() {\n\tfor {\n\t\tg(1,", incomplete, "\t\t\t"},
		{"f(g(", incomplete, "\t"},
		{"x := 1 +", incomplete, "\t"},
		{"x :=", incomplete, "\t"},
		{"fmt.", incomplete, "\t"},
		{"s := `one line", incomplete, ""},
		{"x := 1 /* and", incomplete, ""},
		{"if x", invalid, ""},

		{"x := )", invalid, ""},
		{"f(]", invalid, ""},
		{"}", invalid, ""},
		{"s := \"open", invalid, ""},
		{"r := 'ab'", invalid, ""},
		{"a b c", invalid, ""},
		{"x := 1 2", invalid, ""},
		{"func () {", incomplete, "\t"},
		{"func f( { }", incomplete, "\t"},
		{"else { }", invalid, ""},
		{"package main", invalid, ""},
		{"x := 3 }; func g() {", invalid, ""},
		{"import 3", invalid, ""},
		{"a ? b", invalid, ""},
		{"x := 0o9", invalid, ""},
	} {
		status, indent := IsComplete(test.source)
		if status != test.status || indent != test.indent {
			t.Errorf("IsComplete(%q) = %s, %q, want %s, %q", test.source, status, indent, test.status, test.indent)
		}
	}
}

// Whatever is typed, a prefix of a right cell is never called wrong at the end
// of a line: the user could not go on.
func TestPrefixOfACellIsNotInvalid(t *testing.T) {
	const cell = `type P struct {
	x, y float64
}
func (p P) Sum(
	more ...float64,
) float64 {
	s := p.x +
		p.y
	for _, m := range more {
		switch {
		case m > 0:
			s += m
		default:
			s -= m
		}
	}
	return s
}
f := func(
	p P,
) float64 {
	return p.Sum(1, 2,
		3)
}
f(P{1, 2})`
	for i, c := range cell {
		if c != '\n' {
			continue
		}
		if status, _ := IsComplete(cell[:i+1]); status == invalid {
			t.Errorf("the first lines are called invalid:\n%s", cell[:i+1])
		}
	}
}

func FuzzIsComplete(f *testing.F) {
	f.Add("func f() {")
	f.Add("x := `")
	f.Fuzz(func(t *testing.T, source string) {
		status, indent := IsComplete(source)
		if status != incomplete && indent != "" {
			t.Errorf("IsComplete(%q) = %s with the indent %q", source, status, indent)
		}
	})
}
