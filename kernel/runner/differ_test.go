package runner_test

import (
	"fmt"
	"math/rand/v2"
	"strings"
	"testing"
)

// decls are what the random cells of TestInterpretedAsCompiled use.
const decls = `
type pt struct {
	x int
	y float64
	s []float64
}
func (p pt) sum() float64 { return float64(p.x) + p.y }
func (p *pt) grow(d int) int { p.x += d; return p.x }
func (p pt) with(x int) pt { p.x = x; return p }
type box struct {
	pt
	name string
	in   pt
	m    map[string]int
}
func (b box) label() string { return b.name + "/" + fmt.Sprint(b.x) }
type summer interface{ sum() float64 }
type grade float64
func (g grade) String() string { return fmt.Sprintf("grade %.2f", float64(g)) }
func two(a int, b float64) (int, float64) { return a * 2, b / 2 }
func mk(a int) pt { return pt{a, float64(a) / 4, []float64{1, 2, float64(a)}} }
func id(v any) string { return fmt.Sprintf("%T %v", v, v) }
func ref(p pt) *pt { return &p }
i1, i2 := 3, 5
f1, f2 := 0.5, 2.25
s1, s2 := "a", "b"
t1, t2 := 300 * unit.K, 12.5 * unit.K
g1 := grade(1.5)
p1, p2 := mk(1), mk(2)
q1 := ref(mk(7))
b1 := box{name: "bx", in: mk(4), m: map[string]int{"k": 1}}
v1 := []float64{1, 2, 3}
w1 := []string{"x", "y"}
m1 := map[string]float64{"a": 1}
any1 := any(1)
var su summer = p1
deb := solid.Debye{Theta: 343 * unit.K}
ok1 := true
func all() {
	fmt.Println(i1, i2, f1, f2, s1, s2, t1, t2, g1, p1, p2, *q1, b1, v1, w1, m1, id(any1), su.sum(), deb, ok1)
}
`

const all = "all()"

// A maker writes random statements of the kind that is interpreted.
type maker struct{ r *rand.Rand }

func (m maker) pick(xs ...string) string { return xs[m.r.IntN(len(xs))] }

func (m maker) int(d int) string {
	if d <= 0 {
		return m.pick("i1", "i2", "p1.x", "q1.x", "b1.x", "b1.in.x", "7", "-2", "len(v1)", "len(s1)", `b1.m["k"]`)
	}
	switch m.r.IntN(6) {
	case 0:
		return "(" + m.int(d-1) + m.pick(" + ", " - ", " * ") + m.int(d-1) + ")"
	case 1:
		return m.pick("p1", "p2", "q1") + ".grow(" + m.int(d-1) + ")"
	case 2:
		return "strings.Count(" + m.str(d-1) + `, "a")`
	case 3:
		return "-" + m.pick("i1", "p2.x")
	case 4:
		return "int(" + m.pick("i1", "i2") + ")"
	}
	return m.int(0)
}

func (m maker) float(d int) string {
	if d <= 0 {
		return m.pick("f1", "f2", "p1.y", "q1.y", "b1.y", "v1[1]", `m1["a"]`, "1.25", "math.Pi", "p1.s[0]", "float64(g1)")
	}
	switch m.r.IntN(8) {
	case 0:
		return "(" + m.float(d-1) + m.pick(" + ", " - ", " * ", " / ") + m.float(d-1) + ")"
	case 1:
		return "math.Sqrt(" + m.float(d-1) + ")"
	case 2:
		return "float64(" + m.int(d-1) + ")"
	case 3:
		return m.pick("p1", "p2", "q1", "su", "b1.in", "b1", "mk(3)", "p1.with(9)") + ".sum()"
	case 4:
		return "math.Max(" + m.float(d-1) + ", " + m.float(d-1) + ")"
	case 5:
		return m.pick("t1", "t2", "deb.Theta") + ".In(unit.K)"
	case 6:
		return "float64(" + m.temp(d-1) + ")"
	}
	return m.float(0)
}

func (m maker) temp(d int) string {
	if d <= 0 {
		return m.pick("t1", "t2", "deb.Theta", "4*unit.K", "unit.K")
	}
	switch m.r.IntN(4) {
	case 0:
		return "(" + m.temp(d-1) + m.pick(" + ", " - ") + m.temp(d-1) + ")"
	case 1:
		return "unit.Temperature(" + m.float(d-1) + ") * unit.K"
	case 2:
		return m.temp(0) + " / 2"
	}
	return m.temp(0)
}

func (m maker) str(d int) string {
	if d <= 0 {
		return m.pick("s1", "s2", "b1.name", `"lit a"`, "w1[0]", "g1.String()")
	}
	switch m.r.IntN(6) {
	case 0:
		return "(" + m.str(d-1) + " + " + m.str(d-1) + ")"
	case 1:
		return "fmt.Sprint(" + m.any(d-1) + ", " + m.any(d-1) + ")"
	case 2:
		return "id(" + m.any(d-1) + ")"
	case 3:
		return m.pick("b1.label()", "t1.String()", "strings.ToUpper("+m.str(d-1)+")")
	case 4:
		return `fmt.Sprintf("%T|%v|%5.2f", ` + m.any(d-1) + ", " + m.any(d-1) + ", " + m.float(d-1) + ")"
	}
	return m.str(0)
}

func (m maker) pt(d int) string {
	switch m.r.IntN(6) {
	case 0:
		return "pt{" + m.int(d-1) + ", " + m.float(d-1) + ", " + m.vec(d-1) + "}"
	case 1:
		return "pt{y: " + m.float(d-1) + ", x: " + m.int(d-1) + "}"
	case 2:
		return "mk(" + m.int(d-1) + ")"
	case 3:
		return m.pick("p1", "p2") + ".with(" + m.int(d-1) + ")"
	case 4:
		return "b1.in"
	}
	return m.pick("p1", "p2")
}

func (m maker) vec(d int) string {
	switch m.r.IntN(3) {
	case 0:
		return "[]float64{" + m.float(d-1) + ", " + m.float(d-1) + ", " + m.float(d-1) + "}"
	case 1:
		return m.pick("p1.s", "mk(2).s", "[]float64{1, 2, 3}") // at least three elements unless p1 was made without
	}
	return "v1"
}

func (m maker) bool(d int) string {
	switch m.r.IntN(6) {
	case 0:
		return "(" + m.int(d-1) + m.pick(" < ", " <= ", " == ", " != ", " > ", " >= ") + m.int(d-1) + ")"
	case 1:
		return "(" + m.float(d-1) + m.pick(" < ", " >= ") + m.float(d-1) + ")"
	case 2:
		return "(" + m.str(d-1) + m.pick(" == ", " != ", " < ") + m.str(d-1) + ")"
	case 3:
		return "(" + m.pick("ok1", "!ok1") + m.pick(" && ", " || ") + m.pick("ok1", "(i1 > 3)", "strings.Contains(s1, \"a\")") + ")"
	case 4:
		return "(" + m.temp(d-1) + " < " + m.temp(d-1) + ")"
	}
	return m.pick("ok1", "!ok1", "true")
}

func (m maker) any(d int) string {
	switch m.r.IntN(9) {
	case 0:
		return m.int(d)
	case 1:
		return m.float(d)
	case 2:
		return m.str(d)
	case 3:
		return m.temp(d)
	case 4:
		return "g1"
	case 5:
		return m.pt(d)
	case 6:
		return m.vec(d)
	case 7:
		return m.bool(d)
	}
	return m.pick("any1", "nil", "deb", "w1", "m1", "2", "1.5", `"lit"`, "*new(int)", "unit.K")
}

func (m maker) statement() string {
	d := m.r.IntN(3)
	switch m.r.IntN(22) {
	case 0:
		return m.pick("i1", "i2", "p1.x", "q1.x", "b1.x", "b1.in.x") + " = " + m.int(d)
	case 1:
		return m.pick("f1", "f2", "p1.y", "p2.y", "v1[0]", `m1["b"]`, "q1.y") + " = " + m.float(d)
	case 2:
		return m.pick("s1", "s2", "b1.name", "w1[1]") + " = " + m.str(d) + "[:min(6, len(s1))]"
	case 3:
		return m.pick("s1", "s2", "b1.name", "w1[1]") + " = " + m.str(min(d, 1))
	case 4:
		return m.pick("t1", "t2", "deb.Theta") + " = " + m.temp(d)
	case 5:
		return m.pick("p1", "p2", "b1.in") + " = " + m.pt(d)
	case 6:
		return "q1 = ref(" + m.pt(d) + ")"
	case 7:
		return "q1 = &pt{x: " + m.int(d) + "}"
	case 8:
		return m.pick("i1, f1", "p1.x, f2", "i2, _") + " = two(" + m.int(d) + ", " + m.float(d) + ")"
	case 9:
		return m.pick("i1", "i2") + m.pick(" += ", " -= ", " *= ") + m.int(d)
	case 10:
		return m.pick("f1", "f2") + m.pick(" += ", " -= ", " *= ", " /= ") + m.float(d)
	case 11:
		return m.pick("i1++", "i2--", "s1 += \"a\"")
	case 12:
		return "any1 = " + m.any(d)
	case 13:
		return "su = " + m.pick("p1", "p2", "q1", "mk(5)", "b1", "pt{1, 2, nil}")
	case 14:
		return m.pick("p1", "p2", "q1") + ".grow(" + m.int(d) + ")"
	case 15:
		return "fmt.Println(" + m.any(d) + ", " + m.any(d) + ")"
	case 16:
		return "ok1 = " + m.bool(d)
	case 17:
		return "p1, p2 := mk(" + m.int(d) + "), " + m.pt(d)
	case 18:
		return "i1 := " + m.int(d)
	case 19:
		return "var f1 float64 = " + m.float(d)
	case 20:
		return "g1 = grade(" + m.float(d) + ")"
	}
	return "b1 = box{name: " + m.str(0) + ", in: " + m.pt(d) + ", m: map[string]int{\"k\": " + m.int(d) + "}}"
}

// TestInterpretedAsCompiled runs random statements as cells of a few, which
// are interpreted where they are on the list, and as one compiled cell, and
// compares all variables after each statement.
func TestInterpretedAsCompiled(t *testing.T) {
	const seeds, cells, each = 6, 40, 2
	interpreted, total := 0, 0
	whys := map[string]int{}
	for seed := range seeds {
		m := maker{rand.New(rand.NewPCG(uint64(seed), 1))}
		e := start(t)
		if out, c := run(t, e, 1, decls); out.Fault != nil {
			t.Fatal(out.Fault.Trace, c.err())
		}
		var compiled strings.Builder
		var got strings.Builder
		var history []string
		for k := range cells {
			var src []string
			for range each {
				// Declarations again are of depth 0 in both.
				st := m.statement()
				src = append(src, st, all)
			}
			text := strings.Join(src, "\n")
			out, cap := run(t, e, k+2, text)
			total++
			if testing.Verbose() && out.How["why"] != nil {
				whys[fmt.Sprint(out.How["why"])]++
			}
			if out.How["tier"] == "interpreted" {
				interpreted++
			}
			if out.Fault != nil {
				if out.Fault.Name == "compile error" {
					continue // the random statement is no Go
				}
				if out.Fault.Name == "runtime error" { // both must fail: ends this seed
					history = append(history, text)
					fmt.Fprintf(&compiled, "func() {\n%s\n}()\n", redeclared(text))
					got.WriteString(cap.out())
					break
				}
				t.Fatalf("seed %d: %s\n%s", seed, strings.Join(out.Fault.Trace, "\n"), text)
			}
			history = append(history, text)
			got.WriteString(cap.out())
			fmt.Fprintf(&compiled, "%s\n", redeclared(text))
		}
		f := start(t)
		if out, c := run(t, f, 1, decls); out.Fault != nil {
			t.Fatal(out.Fault.Trace, c.err())
		}
		_, cap := run(t, f, 2, "//levelsum:compile\n"+compiled.String())
		if cap.out() != got.String() {
			a, b := strings.Split(got.String(), "\n"), strings.Split(cap.out(), "\n")
			for i := range min(len(a), len(b)) {
				if a[i] != b[i] {
					t.Errorf("seed %d line %d:\ninterpreted %s\ncompiled    %s\n%s", seed, i, a[i], b[i], strings.Join(history, "\n--\n"))
					break
				}
			}
			if len(a) != len(b) {
				t.Errorf("seed %d: %d lines interpreted, %d compiled", seed, len(a), len(b))
			}
		}
	}
	if interpreted < total/4 {
		t.Errorf("only %d of %d cells were interpreted", interpreted, total)
	}
	t.Logf("%d of %d cells were interpreted; the others for %v", interpreted, total, whys)
}

// redeclared turns declarations at depth 0 into assignments, so that many
// cells can be one.
func redeclared(text string) string {
	var out []string
	for l := range strings.Lines(text) {
		l = strings.TrimRight(l, "\n")
		l = strings.ReplaceAll(l, "p1, p2 := ", "p1, p2 = ")
		l = strings.ReplaceAll(l, "i1 := ", "i1 = ")
		l = strings.ReplaceAll(l, "var f1 float64 = ", "f1 = ")
		out = append(out, l)
	}
	return strings.Join(out, "\n")
}
