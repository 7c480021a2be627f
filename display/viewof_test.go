package display

import (
	"errors"
	"math"
	"reflect"
	"strings"
	"testing"

	"gonum.org/v1/gonum/mat"
)

type (
	point struct {
		X, Y float64
		Name string
		n    int
	}
	badText struct{}
	badErr  struct{}
	badView struct{}
	ring    struct {
		Next *ring
		V    int
	}
	half struct{} // a Viewer without plain text
	deep struct{ In any }
)

func (badText) String() string { panic("no text") }
func (badErr) Error() string   { panic(badText{}) }
func (badView) View() View     { panic(errors.New("no view")) }
func (badView) Check() error   { panic("no check") }
func (half) View() View        { return View{Data: map[string]any{"text/html": "<b>x</b>"}} }

func TestViewOf(t *testing.T) {
	r := &ring{V: 1}
	r.Next = r
	ch := make(chan int, 4)
	ch <- 1
	long := make([]float64, 1000)
	for i := range long {
		long[i] = math.Sqrt(float64(i))
	}
	var nest any
	for range 100 {
		nest = deep{nest}
	}
	var b strings.Builder
	for _, v := range []any{
		nil, true, 3, 1.5, 1e300, math.NaN(), 2 + 3i, kelvin(3.5), joule(2), "text\nmore", "", "\x00<b>",
		[]float64{1, 2.5, 1.0 / 3}, []kelvin{1, 2.5}, long, [3]int{1, 2, 3}, []string{"a", "b c"}, []any{1, "a", nil}, []int(nil), []int{},
		map[string]int{"b": 1, "a": 2}, map[int]any{10: nil, 9: badText{}}, map[string]int(nil), map[float64]kelvin{},
		point{1, 2, "a", 3}, &point{}, (*point)(nil), []point{{1, 2, "x", 1}, {10.5, 22.25, "<b>", 1}}, []*point{{X: 1}, nil},
		struct{}{}, r, nest, errors.New("boom"), func(T kelvin) molar { return 1 }, (func())(nil), ch, (chan int)(nil),
		mat.NewDense(2, 3, []float64{1, 2, 3, 4.25, 5, 6}), [][]float64{{1, 2}, {3, 4.5}}, [][]float64{{1}, {2, 3}},
		badText{}, []badText{{}}, badErr{}, badView{}, half{}, (*half)(nil),
		Text("a view"), View{}, []Number{{Name: "a", Value: 1, Unit: "K"}, {Name: "b", Value: 2}}, []Viewer{half{}, badView{}}, map[string]any{"t": Table{}, "h": half{}},
	} {
		b.WriteString("--- ")
		if v != nil {
			b.WriteString(reflect.TypeOf(v).String())
		}
		b.WriteString("\n" + text(v) + "\n")
	}
	golden(t, "viewof.txt", b.String())
}

func TestViewersInARow(t *testing.T) {
	v := ViewOf([]Viewer{Number{Name: "<b>", Value: 1, Unit: "K"}, badView{}})
	wellFormed(t, v.Data["text/html"].(string))
}

func TestViewOfWithoutAddresses(t *testing.T) {
	x := 1
	for _, v := range []any{&x, []*int{&x}, map[string]*int{"a": &x}, struct{ P *int }{&x}, struct{ F func() }{func() {}}, make(chan int)} {
		if got := text(v); strings.Contains(got, "0x") {
			t.Errorf("%T: %s", v, got)
		}
	}
}

func TestLongValues(t *testing.T) {
	long := strings.Repeat("é", 20001)
	if got := text(long); len(got) > 21000 || !strings.Contains(got, "more bytes") {
		t.Errorf("a long text takes %d bytes", len(got))
	}
	if got := text(mat.NewDense(300, 300, nil)); len(got) > 5000 || !strings.Contains(got, "rows more") || !strings.Contains(got, "288 columns more") {
		t.Errorf("a large matrix takes %d bytes", len(got))
	}
	m := map[int]int{}
	for i := range 10000 {
		m[i] = i
	}
	if got := text(m); len(got) > 5000 || !strings.Contains(got, "rows more") {
		t.Errorf("a large map takes %d bytes", len(got))
	}
	if got := text(make([]string, 1e6)); len(got) > 5000 {
		t.Errorf("a large slice takes %d bytes", len(got))
	}
}

func TestRenderAndShow(t *testing.T) {
	r := record(t)
	Show(1, "two", kelvin(3))
	if got := strings.Join(r.shown, ";"); got != "1;two;3 K" {
		t.Errorf("shown %q", got)
	}
	if _, err := Render(badView{}); err != nil {
		t.Errorf("a Check that panics is no refusal, got %v", err)
	}
	defer func() {
		if _, ok := recover().(*Refusal); !ok {
			t.Error("Show of a bad figure does not panic with a Refusal")
		}
	}()
	Show(Figure{})
}
