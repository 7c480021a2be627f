package display

import (
	"fmt"
	"math"
	"slices"
	"strings"

	"levelsum/display/internal/scene"
)

// A plotted is one set of numbers of a figure, for the CSV and the text.
type plotted struct {
	what       string // "points", "curve", "band", ...
	name       string
	x, y       []float64
	xerr, yerr []float64
	lo, hi     []float64
	right      bool
}

// figureReader turns a Figure into a scene.
type figureReader struct {
	f       Figure
	out     *scene.Figure
	x       axisState
	y       axisState
	right   axisState
	main    []scene.Layer
	res     []scene.Layer
	all     []plotted
	colour  int
	marker  int
	dash    int
	wantRes bool
}

// read builds the scene and the plotted numbers.
func (f Figure) read() (*scene.Figure, []plotted, error) {
	r := &figureReader{f: f, x: newAxisState("x axis", f.XAxis), y: newAxisState("y axis", f.YAxis),
		right: newAxisState("right axis", f.RightAxis), wantRes: f.Residuals || f.RelativeResiduals}
	if err := r.run(); err != nil {
		return nil, nil, refuse("Figure", err)
	}
	return r.out, r.all, nil
}

func (r *figureReader) run() error {
	f := r.f
	if (f.X == nil) != (f.Y == nil) {
		return fmt.Errorf("X and Y belong together, only one is given")
	}
	if f.Map != nil {
		if err := r.heatMap(f.Map); err != nil {
			return err
		}
	}
	series := slices.Clone(f.Series)
	if f.X != nil {
		series = append([]Series{{Name: f.Name, X: f.X, Y: f.Y, Err: f.Err, XErr: f.XErr, Curve: f.Curve}}, series...)
	} else if f.Curve != nil {
		series = append(series, Series{Curve: f.Curve})
	}
	// Points settle the range that curves are drawn over, so they come first.
	read := make([]*seriesData, len(series))
	for i, s := range series {
		d, err := r.points(i, s)
		if err != nil {
			return err
		}
		read[i] = d
	}
	if f.Histogram != nil {
		if err := r.histogram(f.Histogram); err != nil {
			return err
		}
	}
	if err := r.ladders(); err != nil {
		return err
	}
	var below, above []scene.Layer
	curves := 0
	for i, s := range series {
		b, a, n, err := r.curves(s, read[i])
		if err != nil {
			return err
		}
		below, above, curves = append(below, b...), append(above, a...), curves+n
	}
	if r.wantRes && len(r.res) == 0 {
		return fmt.Errorf("residuals need points and a curve in the same series")
	}
	r.main = append(append(below, r.main...), above...)
	if err := r.marks(); err != nil {
		return err
	}
	if len(r.main) == 0 {
		return fmt.Errorf("there is nothing to plot")
	}
	return r.finish()
}

// finish settles the axes and puts the panels together.
func (r *figureReader) finish() error {
	f := r.f
	out := &scene.Figure{Width: f.Width, Height: f.Height, Legend: f.Legend}
	if out.Width == 0 {
		out.Width = 130
	}
	if !(out.Width >= 30 && out.Width <= 1000) {
		return fmt.Errorf("Width is %v mm, want 30 to 1000", out.Width)
	}
	if out.Height == 0 {
		out.Height = out.Width * 0.68
		if r.wantRes {
			out.Height = out.Width * 0.86
		}
	}
	if !(out.Height >= 20 && out.Height <= 1000) {
		return fmt.Errorf("Height is %v mm, want 20 to 1000", out.Height)
	}
	if err := checkLegend(f.Legend); err != nil {
		return err
	}
	if err := r.unlabelled(); err != nil {
		return err
	}
	if len(f.Ladders) > 0 {
		for _, l := range f.Ladders {
			out.Categories = append(out.Categories, l.Name)
		}
		out.X = scene.Axis{Min: 0, Max: float64(len(f.Ladders))}
	} else {
		x, err := r.x.settle(f.Map != nil)
		if err != nil {
			return err
		}
		out.X = x
	}
	y, err := r.y.settle(f.Map != nil)
	if err != nil {
		return err
	}
	p := scene.Panel{Weight: 1, Y: y, Layers: r.main}
	if f.Histogram != nil && !f.YAxis.Log && f.YAxis.Min == 0 {
		p.Y.Min = 0
	}
	switch {
	case r.right.used:
		if f.RightAxis.Factor != 0 {
			return fmt.Errorf("the right axis has data of its own and a Factor: one of them")
		}
		a, err := r.right.settle(false)
		if err != nil {
			return err
		}
		p.Right = &a
	case f.RightAxis.Factor != 0:
		k := f.RightAxis.Factor
		if !(k > 0) || math.IsInf(k, 0) {
			return fmt.Errorf("the right axis' Factor is %v, want a positive number", k)
		}
		if f.RightAxis.Unit == "" {
			return fmt.Errorf("the right axis has no unit")
		}
		q := f.RightAxis.Quantity
		if q == "" {
			q = y.Quantity
		}
		p.Right = &scene.Axis{Quantity: q, Unit: f.RightAxis.Unit, Min: p.Y.Min * k, Max: p.Y.Max * k, Log: y.Log}
	}
	out.Panels = []scene.Panel{p}
	if r.wantRes {
		out.Panels[0].Weight = 0.72
		out.Panels = append(out.Panels, r.residualPanel())
	}
	r.out = out
	r.out.Alt = f.Alt
	if r.out.Alt == "" {
		r.out.Alt = r.describe()
	}
	return nil
}

// legendPlaces are what Figure.Legend may be.
var legendPlaces = []string{"", "none", "above", "top left", "top", "top right", "bottom left", "bottom", "bottom right"}

func checkLegend(s string) error {
	if !slices.Contains(legendPlaces, s) {
		return fmt.Errorf("Legend is %q, want \"\" for a free place, or one of %s", s, strings.Join(legendPlaces[1:], ", "))
	}
	return nil
}

// unlabelled refuses axes of which nothing is known, all of them at once.
func (r *figureReader) unlabelled() error {
	axes := []*axisState{&r.x, &r.y}
	if len(r.f.Ladders) > 0 {
		axes = axes[1:]
	}
	if r.right.used {
		axes = append(axes, &r.right)
	}
	var names, fields []string
	for _, a := range axes {
		if a.quantity == "" && a.unit == "" && a.spec.Unit == "" {
			names = append(names, "the "+a.name)
			fields = append(fields, fmt.Sprintf(`%s: display.Axis{Quantity: "...", Unit: "..."}`, a.field()))
		}
	}
	if names == nil {
		return nil
	}
	has := " has"
	if len(names) > 1 {
		has = " have"
	}
	return fmt.Errorf("%s%s neither quantity nor unit: give %s (Unit \"1\" for a pure number)", strings.Join(names, " and "), has, strings.Join(fields, ", "))
}

type seriesData struct {
	x, y, yerr, xerr []float64
	rawX, rawY       []float64 // in the units of their types, as a fit sees them
	style            scene.Style
	axis             *axisState
}

// points reads the data of one series and adds its marks, line and band.
func (r *figureReader) points(i int, s Series) (*seriesData, error) {
	what := s.Name
	if what == "" {
		what = fmt.Sprintf("series %d", i+1)
	}
	d := &seriesData{axis: &r.y}
	if s.Right {
		d.axis = &r.right
	}
	if s.X == nil {
		if s.Y != nil || s.Lower != nil || s.Upper != nil {
			return nil, fmt.Errorf("%s: X is missing", what)
		}
		return d, nil // curves only
	}
	cx, err := readColumn("X of "+what, s.X)
	if err != nil {
		return nil, err
	}
	d.rawX = slices.Clone(cx.v)
	if err := r.x.take("X of "+what, cx); err != nil {
		return nil, err
	}
	d.x = cx.v
	if err := finiteOrGap("X of "+what, d.x, false); err != nil {
		return nil, err
	}
	if err := r.x.checkLog("X of "+what, d.x); err != nil {
		return nil, err
	}
	d.style = scene.Style{Colour: r.colour, Marker: r.marker, Name: s.Name}
	r.colour++
	if d.xerr, err = errorsOf("X of "+what, s.XErr, cx, &r.x); err != nil {
		return nil, err
	}
	if err := r.band(what, s, d); err != nil {
		return nil, err
	}
	if s.Y == nil {
		r.x.cover(d.x)
		return d, nil
	}
	cy, err := readColumn("Y of "+what, s.Y)
	if err != nil {
		return nil, err
	}
	if len(cy.v) != len(d.x) && cy.text == nil {
		return nil, fmt.Errorf("%s: X has %d values, Y has %d", what, len(d.x), len(cy.v))
	}
	d.rawY = slices.Clone(cy.v)
	if err := d.axis.take("Y of "+what, cy); err != nil {
		return nil, err
	}
	d.y = cy.v
	if err := finiteOrGap("Y of "+what, d.y, true); err != nil {
		return nil, err
	}
	if err := d.axis.checkLog("Y of "+what, d.y); err != nil {
		return nil, err
	}
	if d.yerr, err = errorsOf("Y of "+what, s.Err, cy, d.axis); err != nil {
		return nil, err
	}
	r.x.cover(d.x)
	r.coverShown(d.axis, d.x, d.y)
	r.coverBars(d.axis, d.x, d.y, d.yerr)
	r.coverBars(&r.x, d.x, d.x, d.xerr)
	kind := "points"
	if s.Line {
		kind = "line"
		st := d.style
		st.Dash = r.dash
		r.dash++
		if s.Marks {
			st.Name = "" // the marks have it
		}
		r.main = append(r.main, scene.Line{X: d.x, Y: d.y, Right: s.Right, Style: st})
	}
	if !s.Line || s.Marks {
		st := d.style
		if s.Line {
			st.Dash = r.dash - 1
		}
		r.marker++
		r.main = append(r.main, scene.Points{X: d.x, Y: d.y, XErr: d.xerr, YErr: d.yerr, Right: s.Right, Of: len(d.x), Joined: s.Line, Style: st})
	}
	r.all = append(r.all, plotted{what: kind, name: s.Name, x: d.x, y: d.y, xerr: d.xerr, yerr: d.yerr, right: s.Right})
	return d, nil
}

// coverShown extends an axis by the values whose x the x axis shows: where the
// user has limited that, the rest does not count. If nothing is shown, all do.
func (r *figureReader) coverShown(a *axisState, x []float64, vs ...[]float64) {
	all := r.allShown(x)
	for _, v := range vs {
		for i := range v {
			if all || r.f.XAxis.shows(x[i]) {
				a.cover1(v[i])
			}
		}
	}
}

func (r *figureReader) coverBars(a *axisState, x, v, u []float64) {
	all := r.allShown(x)
	for i := range u {
		if u[i] > 0 && (all || r.f.XAxis.shows(x[i])) {
			a.cover1(v[i] - u[i])
			a.cover1(v[i] + u[i])
		}
	}
}

func (r *figureReader) allShown(x []float64) bool {
	return r.f.XAxis.Min == 0 && r.f.XAxis.Max == 0 || !slices.ContainsFunc(x, r.f.XAxis.shows)
}

// errorsOf reads the error bars of a column, nil if there are none.
func errorsOf(what string, x any, c *column, a *axisState) ([]float64, error) {
	u := c.u // already in the axis' unit
	if x != nil {
		raw := *c
		var err error
		if u, err = readU(what, x, &raw); err != nil {
			return nil, err
		}
		u = slices.Clone(u)
		for i := range u {
			u[i] /= a.factor
		}
	}
	for i, e := range u {
		if e < 0 || math.IsInf(e, 0) {
			return nil, fmt.Errorf("%s: the uncertainty at index %d is %v", what, i, e)
		}
	}
	return u, nil
}

// finiteOrGap refuses infinities; NaN in y is a gap.
func finiteOrGap(what string, v []float64, gaps bool) error {
	if len(v) == 0 {
		return fmt.Errorf("%s is empty", what)
	}
	n, first := 0, -1
	for i, x := range v {
		if math.IsInf(x, 0) || !gaps && math.IsNaN(x) {
			if first < 0 {
				first = i
			}
			n++
		}
	}
	if n > 0 {
		return fmt.Errorf("%d of %d values of %s are not finite (the first is %v, at index %d)", n, len(v), what, v[first], first)
	}
	return nil
}

// band adds the area between Lower and Upper.
func (r *figureReader) band(what string, s Series, d *seriesData) error {
	if s.Lower == nil && s.Upper == nil {
		return nil
	}
	if s.Lower == nil || s.Upper == nil {
		return fmt.Errorf("%s: a band needs Lower and Upper", what)
	}
	var v [2][]float64
	for k, x := range []any{s.Lower, s.Upper} {
		name := []string{"Lower", "Upper"}[k] + " of " + what
		c, err := readColumn(name, x)
		if err != nil {
			return err
		}
		if err := d.axis.take(name, c); err != nil {
			return err
		}
		if len(c.v) != len(d.x) {
			return fmt.Errorf("%s: X has %d values, %s has %d", what, len(d.x), name, len(c.v))
		}
		if err := finiteOrGap(name, c.v, false); err != nil {
			return err
		}
		if err := d.axis.checkLog(name, c.v); err != nil {
			return err
		}
		v[k] = c.v
	}
	st := d.style
	if s.Y != nil {
		st.Name = ""
	}
	r.coverShown(d.axis, d.x, v[0], v[1])
	r.main = append([]scene.Layer{scene.Band{X: d.x, Lower: v[0], Upper: v[1], Right: s.Right, Style: st}}, r.main...)
	r.all = append(r.all, plotted{what: "band", name: s.Name, x: d.x, lo: v[0], hi: v[1], right: s.Right})
	return nil
}
