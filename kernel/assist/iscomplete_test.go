package assist

import "testing"

func TestIsComplete(t *testing.T) {
	for _, test := range []struct{ source, status, indent string }{
		{"", Complete, ""},
		{"1 + 2", Complete, ""},
		{"x := 3; y := 4", Complete, ""},
		{"undeclared", Complete, ""},
		{"// only a comment", Complete, ""},
		{"import \"fmt\"\nfmt.Println(1)", Complete, ""},
		{"func f() int { return 1 }\nf()", Complete, ""},
		{"func f[T any](x T) T { return x }", Complete, ""},
		{"type T struct{ x int }\nfunc (t T) X() int { return t.x }\nT{1}.X()", Complete, ""},
		{"func(x int) int { return x }(3)", Complete, ""},
		{"func(x int) unit.Energy { return 0 }(3)", Complete, ""},
		{"f := func() {\n}", Complete, ""},
		{"for i := range 3 {\n\tfmt.Println(i)\n}", Complete, ""},
		{"s := `two\nlines`", Complete, ""},
		{"s := \"{[(\"", Complete, ""},
		{"return", Complete, ""},
		{"/* a\nb */ 1", Complete, ""},
		{"x := []int{\n1,\n2,\n}", Complete, ""},

		{"func f() {", Incomplete, "\t"},
		{"for i := range 3 {\n\tfmt.Println(i)", Incomplete, "\t"},
		{"func f() {\n\tfor {\n\t\tg(1,", Incomplete, "\t\t\t"},
		{"f(g(", Incomplete, "\t"},
		{"x := 1 +", Incomplete, "\t"},
		{"x :=", Incomplete, "\t"},
		{"fmt.", Incomplete, "\t"},
		{"s := `one line", Incomplete, ""},
		{"x := 1 /* and", Incomplete, ""},
		{"if x", Invalid, ""},

		{"x := )", Invalid, ""},
		{"f(]", Invalid, ""},
		{"}", Invalid, ""},
		{"s := \"open", Invalid, ""},
		{"r := 'ab'", Invalid, ""},
		{"a b c", Invalid, ""},
		{"x := 1 2", Invalid, ""},
		{"func () {", Incomplete, "\t"},
		{"func f( { }", Incomplete, "\t"},
		{"else { }", Invalid, ""},
		{"package main", Invalid, ""},
		{"x := 3 }; func g() {", Invalid, ""},
		{"import 3", Invalid, ""},
		{"a ? b", Invalid, ""},
		{"x := 0o9", Invalid, ""},
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
		if status, _ := IsComplete(cell[:i+1]); status == Invalid {
			t.Errorf("the first lines are called invalid:\n%s", cell[:i+1])
		}
	}
}

func FuzzIsComplete(f *testing.F) {
	f.Add("func f() {")
	f.Add("x := `")
	f.Fuzz(func(t *testing.T, source string) {
		status, indent := IsComplete(source)
		if status != Incomplete && indent != "" {
			t.Errorf("IsComplete(%q) = %s with the indent %q", source, status, indent)
		}
	})
}
