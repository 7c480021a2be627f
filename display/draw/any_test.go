package draw

import (
	"math"
	"math/rand/v2"
	"strings"
	"testing"

	"levelsum/display"
)

// Whatever the numbers are, a figure is refused or drawn, without a panic and
// without a coordinate that is not a number.
func TestAnyFigure(t *testing.T) {
	r := rand.New(rand.NewPCG(11, 12))
	scale := func() float64 { return math.Pow(10, 60*r.Float64()-30) }
	odd := []float64{0, math.Copysign(0, -1), math.NaN(), math.Inf(1), 1e308, -1e308, 5e-324, 1, -1}
	values := func(n int) []float64 {
		v := make([]float64, n)
		k, shift, mode := scale(), 0.0, r.IntN(5)
		if mode == 1 {
			shift = k * 1e9 // nearly constant
		}
		for i := range v {
			v[i] = shift + k*r.NormFloat64()
			switch {
			case mode == 2:
				v[i] = math.Abs(v[i])
			case mode == 3:
				v[i] = 3
			case r.IntN(40) == 0:
				v[i] = odd[r.IntN(len(odd))]
			}
		}
		return v
	}
	pick := func(p float64) bool { return r.Float64() < p }
	axis := func() display.Axis {
		a := display.Axis{Quantity: "q", Unit: "1", Log: pick(0.3)}
		if pick(0.1) {
			a.Min, a.Max = r.NormFloat64(), r.NormFloat64()
		}
		return a
	}
	drawn := 0
	for range 600 {
		n := r.IntN(30)
		f := display.Figure{XAxis: axis(), YAxis: axis(), RightAxis: axis(), Width: float64(30 + r.IntN(200))}
		for range r.IntN(3) {
			s := display.Series{Name: "s", X: values(n), Y: values(n), Line: pick(0.3), Right: pick(0.2), Marks: pick(0.5)}
			if pick(0.4) {
				s.Err = values(n)
			}
			if pick(0.2) {
				s.XErr = values(n)
			}
			if pick(0.2) {
				s.Lower, s.Upper = values(n), values(n)
			}
			if pick(0.3) {
				k := scale()
				s.Curve = func(x float64) float64 { return k * x }
			}
			f.Series = append(f.Series, s)
		}
		f.Residuals = pick(0.2)
		if pick(0.15) {
			f.Histogram = &display.Histogram{Values: values(n), Bins: r.IntN(30), Density: pick(0.5)}
		}
		if pick(0.15) {
			x, y := values(4), values(3)
			f.Map = &display.Map{X: sorted(x), Y: sorted(y), Z: [][]float64{values(4), values(4), values(4)}, Unit: "1",
				Contours: values(3), Log: pick(0.2), Diverging: pick(0.3), LinesOnly: pick(0.2)}
		}
		if pick(0.2) {
			f.Marks = []display.Mark{{X: values(1)[0], Label: "a label"}, {Y: values(1)[0], Label: "another one"}}
		}
		if len(f.Series) == 0 && f.Map == nil && f.Histogram == nil {
			f.Ladders = []display.Ladder{{Name: "a", Energies: values(n)}, {Name: "b", Energies: values(n + 1)}}
		}
		if f.Check() != nil {
			continue
		}
		drawn++
		s, ok := f.View().Data["image/svg+xml"].(string)
		if !ok {
			t.Fatalf("no drawing of %+v: %v", f, f.View().Data["text/plain"])
		}
		wellFormed(t, s)
		if i := strings.Index(s, "NaN"); i >= 0 {
			t.Fatalf("NaN in the drawing of %+v: %s", f, s[max(0, i-60):i+20])
		}
		for _, bad := range []string{"Inf", "-9223372036854775808"} {
			if strings.Contains(s, bad) {
				t.Fatalf("%s in the drawing of %+v", bad, f)
			}
		}
	}
	if drawn < 80 {
		t.Errorf("only %d figures of 600 were drawn", drawn)
	}
}
