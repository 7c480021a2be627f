package draw

import (
	"fmt"
	"image/color"
	"math"
	"math/rand/v2"
	"slices"
	"strings"
	"testing"

	"levelsum/display"
	"levelsum/display/internal/mark"
	"levelsum/display/internal/scene"
)

// WCAG 2.1, criterion 1.4.11 asks for a contrast of 3 between graphics and
// what is beside them.
func TestColours(t *testing.T) {
	for _, c := range seriesColours {
		for _, page := range []color.RGBA{hex(0xFFFFFF), hex(0x1E1E1E), hex(0x111111)} {
			if got := contrast(c, page); got < 3 {
				t.Errorf("%s on %s: contrast %.2f", hexOf(c), hexOf(page), got)
			}
		}
	}
	// Lightness rises along the palette, so that it reads without colours.
	p := sequential()
	for i := 1; i < len(p); i++ {
		if luminance(p[i]) < luminance(p[i-1])-0.002 {
			t.Errorf("the palette gets darker at %d", i)
		}
	}
}

func TestTicks(t *testing.T) {
	for _, test := range []struct {
		lo, hi float64
		log    bool
		want   string
		power  int
	}{
		{0, 10, false, "0 2 4 6 8 10", 0},
		{-0.3, 0.31, false, "−0.2 0.0 0.2", 0}, // no −0.0
		{0, 300, false, "0 100 200 300", 0},
		{-5e-5, 2.4e-4, false, "0 100 200", -6},
		{1e6, 5e6, false, "1 2 3 4 5", 6},
		{1, 1000, true, "1 10 100 1000", 0},
		{2, 40, true, "2 5 10 20", 0},
		{1e-12, 1e3, true, "10⁻¹² 10⁻⁹ 10⁻⁶ 10⁻³ 10⁰ 10³", 0},
		{20, 24, true, "20 21 22 23 24", 0},
		{343.1, 343.3, false, "343.10 343.15 343.20 343.25 343.30", 0},
	} {
		r := newRuler(scene.Axis{Min: test.lo, Max: test.hi, Log: test.log}, 0, 150, 28)
		var got []string
		for _, k := range r.ticks {
			if k.major {
				got = append(got, mark.Plain(k.label))
			}
		}
		if s := strings.Join(got, " "); s != test.want || r.power != test.power {
			t.Errorf("%v to %v: %s, power %d; want %s, power %d", test.lo, test.hi, s, r.power, test.want, test.power)
		}
	}
}

// Ticks exist for any range, and are inside it.
func TestTicksAnywhere(t *testing.T) {
	r := rand.New(rand.NewPCG(5, 6))
	for range 5000 {
		lo := (r.Float64() - 0.5) * math.Pow(10, 60*r.Float64()-30)
		hi := lo + math.Abs(lo)*math.Pow(10, 8*r.Float64()-4)
		log := lo > 0 && r.IntN(2) == 0
		k := newRuler(scene.Axis{Min: lo, Max: hi, Log: log}, 0, 200, 30)
		if n := k.majors(); n < 1 || n > 40 {
			t.Fatalf("%v to %v, log %v: %d ticks", lo, hi, log, n)
		}
		for _, m := range k.ticks {
			if m.at < lo-1e-8*(hi-lo)-1e-9*math.Abs(lo) || m.at > hi+1e-8*(hi-lo)+1e-9*math.Abs(hi) {
				t.Fatalf("%v to %v: a tick at %v", lo, hi, m.at)
			}
		}
	}
}

// The level 1 of x² + y² is the unit circle: one closed line of length 2π.
func TestContour(t *testing.T) {
	var x []float64
	for i := range 81 {
		x = append(x, -2+float64(i)*0.05)
	}
	z := make([][]float64, len(x))
	for j := range z {
		z[j] = make([]float64, len(x))
		for i := range z[j] {
			z[j][i] = x[i]*x[i] + x[j]*x[j]
		}
	}
	lines := contour(x, x, z, 1)
	if len(lines) != 1 || lines[0][0] != lines[0][len(lines[0])-1] {
		t.Fatalf("%d lines, want one closed one", len(lines))
	}
	for _, p := range lines[0] {
		if r := math.Hypot(p.x, p.y); math.Abs(r-1) > 0.05*0.05 {
			t.Errorf("radius %v", r)
		}
	}
	if n := length(lines[0]); math.Abs(n-2*math.Pi) > 0.01 {
		t.Errorf("length %v, want 2π", n)
	}
	if n := len(contour(x, x, z, 5)); n != 4 { // cut by the corners of the grid
		t.Errorf("%d lines at level 5, want 4 arcs", n)
	}
	z[40][60] = math.NaN()
	for _, s := range contour(x, x, z, 1) {
		for _, p := range s {
			if math.IsNaN(p.x) || math.IsNaN(p.y) {
				t.Fatal("a gap in the data is on a contour")
			}
		}
	}
}

func TestClip(t *testing.T) {
	b := box{0, 0, 10, 10}
	a, c, ok := clip(point{-5, 5}, point{15, 5}, b)
	if !ok || a != (point{0, 5}) || c != (point{10, 5}) {
		t.Errorf("got %v %v %v", a, c, ok)
	}
	if _, _, ok := clip(point{-5, 12}, point{15, 11}, b); ok {
		t.Error("a segment outside is drawn")
	}
	area := clipArea([]point{{-5, -5}, {5, -5}, {5, 5}, {-5, 5}}, b)
	for _, p := range area {
		if !b.grow(1e-12).has(p) {
			t.Errorf("corner %v outside", p)
		}
	}
	if len(area) != 4 {
		t.Errorf("%d corners", len(area))
	}
}

func TestSpread(t *testing.T) {
	in := []float64{100, 99, 98, 50, 10, 9.5}
	out := slices.Clone(in)
	spread(len(in), 10, 5, 100, func(k int) float64 { return in[k] }, func(k int, y float64) { out[k] = y })
	for k := range out {
		if out[k] < 5-1e-9 || out[k] > 100+1e-9 || k > 0 && out[k-1]-out[k] < 10-1e-9 {
			t.Errorf("places %v", out)
			break
		}
	}
	if out[3] != 50 {
		t.Errorf("a label with room was moved to %v", out[3])
	}
}

// A texts surface keeps where texts are drawn.
type texts struct {
	boxes []box
	what  []string
}

func (s *texts) stroke(*path, pen)                                 {}
func (s *texts) fill(*path, paint)                                 {}
func (s *texts) dots([]point, float64, paint)                      {}
func (s *texts) cells(_, _ []float64, _ [][]uint8, _ []color.RGBA) {}
func (s *texts) text(rs []mark.Run, x, y, size float64, a anchor, up bool, _ paint) {
	w := width(rs, size)
	b := box{-w * float64(a) / 2, -0.75 * size, w - w*float64(a)/2, 0.2 * size}
	if up {
		b = box{b.y0, -b.x1, b.y1, -b.x0}
	}
	s.boxes = append(s.boxes, box{x + b.x0, y + b.y0, x + b.x1, y + b.y1})
	s.what = append(s.what, mark.Plain(rs))
}

// No text of any figure leaves the drawing or touches another, at any width.
func TestTextsApart(t *testing.T) {
	for name, f := range gallery() {
		for _, w := range []float64{60, display.OneColumn, 130, display.TwoColumns} {
			f.Width, f.Height = w, 0
			t.Run(fmt.Sprintf("%s/%v", name, w), func(t *testing.T) {
				var got *scene.Figure
				display.SetRenderer(func(s *scene.Figure, _ ...string) ([][]byte, error) { got = s; return [][]byte{nil, nil}, nil })
				defer Register()
				f.View()
				s := &texts{}
				draw(got, s, points(got.Width), points(got.Height))
				page := box{-0.1, -0.1, points(got.Width) + 0.1, points(got.Height) + 0.1}
				for i, b := range s.boxes {
					if b.x0 < page.x0 || b.y0 < page.y0 || b.x1 > page.x1 || b.y1 > page.y1 {
						t.Errorf("%q leaves the drawing: %v in %v", s.what[i], b, page)
					}
					for k := range i {
						if b.grow(-0.3).overlaps(s.boxes[k]) {
							t.Errorf("%q touches %q", s.what[i], s.what[k])
						}
					}
				}
			})
		}
	}
}

// The legend of every figure of the gallery covers no data.
func TestLegendFree(t *testing.T) {
	for name, f := range gallery() {
		var got *scene.Figure
		display.SetRenderer(func(s *scene.Figure, _ ...string) ([][]byte, error) { got = s; return [][]byte{nil, nil}, nil })
		f.View()
		Register()
		p := &plan{f: got, s: &texts{}, w: points(got.Width), h: points(got.Height), size: 9}
		p.legend = newLegend(got, p.size)
		p.lay(false)
		if len(p.legend.entries) == 0 || !p.legend.findPlace(p) {
			continue // above the panel
		}
		for _, l := range p.panels[0].Layers {
			s, ok := l.(scene.Points)
			if !ok {
				continue
			}
			for i := range s.X {
				if c := (point{p.x.place(s.X[i]), p.panels[0].ruler(s.Right).place(s.Y[i])}); p.legend.box.has(c) {
					t.Errorf("%s: the legend covers a point", name)
				}
			}
		}
	}
}

// bigFigure is the workload of the benchmark: 2,000 points with bars, a curve.
func bigFigure(n int) display.Figure {
	T, c, u := measured(n, einstein(240), 0.02, 2, 300)
	return display.Figure{X: T, Y: c, Err: u, Name: "data", Curve: display.Curve{Name: "fit", F: einstein(240)},
		XAxis: display.Axis{Quantity: "T"}, YAxis: display.Axis{Quantity: "C_{p,m}"}}
}

func TestSize(t *testing.T) {
	v := bigFigure(2000).View()
	for _, kind := range []string{"image/svg+xml", "text/html"} {
		if n := len(v.Data[kind].(string)); n > 250_000 {
			t.Errorf("%s has %d bytes for 2,000 points, want at most 250,000", kind, n)
		} else {
			t.Logf("%s: %d bytes", kind, n)
		}
	}
}

func TestMillionPoints(t *testing.T) {
	r := rand.New(rand.NewPCG(7, 8))
	n := 1_000_000
	x, y := make([]float64, n), make([]float64, n)
	for i := range x {
		x[i], y[i] = r.NormFloat64(), r.Float64()
	}
	f := display.Figure{X: x, Y: y, XAxis: display.Axis{Quantity: "x", Unit: "1"}, YAxis: display.Axis{Quantity: "y", Unit: "1"}}
	s := f.View().Data["image/svg+xml"].(string)
	if len(s) > 400_000 {
		t.Errorf("%d bytes", len(s))
	}
	if !strings.Contains(s, "1 000 000 points: one is drawn for each place, stronger where there are more.") {
		t.Error("nothing says that the points are thinned")
	}
	f = display.Figure{Series: []display.Series{{X: sorted(x), Y: y, Line: true}}, XAxis: f.XAxis, YAxis: f.YAxis}
	if s := f.View().Data["image/svg+xml"].(string); len(s) > 400_000 {
		t.Errorf("a line of a million points takes %d bytes", len(s))
	}
}

// The strength of a mark of a thinned set rises with the number of points that
// it stands for: of 9,000 points 8,000 are at one place.
func TestThinnedStrength(t *testing.T) {
	n := 9000
	x, y := make([]float64, n), make([]float64, n)
	for i := range 1000 {
		x[i], y[i] = float64(i%40), float64(i/40)
	}
	l := scene.Points{X: x, Y: y}
	r := newRuler(scene.Axis{Min: -1, Max: 40}, 0, 200, 30)
	keep, counts := thinPoints(l, r, r, box{0, 0, 200, 200})
	if len(keep) != 1000 || counts[0] != 8001 || counts[1] != 1 {
		t.Fatalf("%d places, the first two stand for %v points", len(keep), counts[:2])
	}
	if strength(8001, 8001) != len(strengths)-1 || strength(1, 8001) != 0 || strength(90, 8001) != 2 { // ln 90 / ln 8001 = 0.5007
		t.Errorf("strengths %d, %d, %d", strength(8001, 8001), strength(1, 8001), strength(90, 8001))
	}
	s := display.Figure{X: x, Y: y, XAxis: display.Axis{Quantity: "x"}, YAxis: display.Axis{Quantity: "y"}}.View().Data["image/svg+xml"].(string)
	for _, want := range []string{`stroke-opacity=".4" stroke-width="2.8"`, `stroke="#127dc0" stroke-width="2.8"`} {
		if !strings.Contains(s, want) {
			t.Errorf("no marks with %s", want)
		}
	}
}

func sorted(x []float64) []float64 { s := slices.Clone(x); slices.Sort(s); return s }

func BenchmarkFigure(b *testing.B) {
	for _, n := range []int{50, 2000, 100_000} {
		f := bigFigure(n)
		b.Run(fmt.Sprintf("points=%d", n), func(b *testing.B) {
			b.ReportAllocs()
			for b.Loop() {
				f.View()
			}
		})
	}
	b.Run("svg/points=2000", func(b *testing.B) {
		var got *scene.Figure
		display.SetRenderer(func(s *scene.Figure, _ ...string) ([][]byte, error) { got = s; return [][]byte{nil, nil}, nil })
		bigFigure(2000).View()
		Register()
		b.ReportAllocs()
		for b.Loop() {
			if _, err := render(got, "svg file"); err != nil {
				b.Fatal(err)
			}
		}
	})
}

// A label that is longer than its panel takes two lines in full size.
func TestLongLabel(t *testing.T) {
	f := display.Figure{X: []kelvin{1, 2, 3}, Y: []molar{1, 2, 3}, XAxis: display.Axis{Quantity: "T"}, Width: 70, Height: 45,
		YAxis: display.Axis{Quantity: "heat capacity of the sample"}}
	s := f.View().Data["text/html"].(string)
	for _, want := range []string{">heat capacity of the sample /</text>", ">(J mol<tspan"} {
		i := strings.Index(s, want)
		if i < 0 {
			t.Fatalf("no line %q in\n%s", want, s)
		}
		tag := s[strings.LastIndex(s[:i+1], "<text"):i]
		if !strings.Contains(tag, `rotate(-90)" font-size="8"`) {
			t.Errorf("%q is set as %s", want, tag)
		}
	}
}
