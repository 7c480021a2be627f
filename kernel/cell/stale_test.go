package cell_test

import (
	"fmt"
	"strings"
	"testing"

	"levelsum/kernel/cell"
)

// TestStale: what counts as made of what. Cells are run in the order of the
// list, each with an id of its own unless it says "id:".
func TestStale(t *testing.T) {
	for _, test := range []struct {
		name  string
		cells []string
		want  string // all stale names
	}{
		{"in order", []string{"x := 1", "y := x"}, ""},
		{"changed since", []string{"x := 1", "y := x", "x = 2"}, "y"},
		{"over one more", []string{"x := 1", "y := x", "z := y", "x = 2"}, "y z"},
		{"made again", []string{"x := 1", "y := x", "x = 2", "y = x"}, ""},
		{"an error that is only written is no source", []string{"a, err := os.Getwd()", "b, err := os.Getwd()", "_, err = a, err", "_ = b"}, ""},
		{"an error that is read", []string{"a, err := os.Getwd()", "s := err", "_, err = os.Getwd()", "_, _ = a, s"}, "s"},
		{"a cell is run whole", []string{"n := 1\nm := n\nn = 2"}, ""},
		{"and so is its loop", []string{"var sum float64\nvar list []float64\nfor range 3 {\n\tsum += 1\n\tlist = append(list, sum)\n}\nmean := sum / 3", "_ = mean"}, ""},
		{"a part of a value is changed", []string{"v := []int{1}", "w := v[0]", "v[0] = 2"}, "w"},
		{"counting up reads the old value", []string{"x := 1", "n := 0", "n += x", "x = 5"}, "n"},
		{"a function that was changed", []string{"func f() int { return 1 }", "x := f()", "func f() int { return 2 }"}, "x"},
		{"a function of the same cell", []string{"func f() int { return 1 }\nx := f()", "y := f() + x"}, ""},
		{"what a function uses was changed", []string{"const c = 1\nfunc f() int { return c }", "x := f()", "const c = 2"}, "x"},
		{"the cell was edited", []string{"id:a x := 1", "y := x", "id:a z := 2"}, "x y"},
	} {
		t.Run(test.name, func(t *testing.T) {
			s := newScope()
			for i, src := range test.cells {
				id := fmt.Sprint("c", i)
				if rest, ok := strings.CutPrefix(src, "id:"); ok {
					id, src, _ = strings.Cut(rest, " ")
				}
				p, err := s.Check(&cell.Source{N: i + 1, Text: src, ID: id})
				if err != nil {
					t.Fatalf("%s: %v", src, err)
				}
				s.Commit(p, func(string) bool { return true })
			}
			var got []string
			for _, x := range s.Stale() {
				got = append(got, x.Name)
			}
			if g := strings.Join(got, " "); g != test.want {
				t.Errorf("stale: %q (%+v), want %q", g, s.Stale(), test.want)
			}
		})
	}
}
