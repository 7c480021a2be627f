package display

import (
	"fmt"
	"math"
	"reflect"
	"slices"
	"sort"
	"strings"

	"levelsum/display/internal/scene"
)

// curvePoints is the number of points at which a function is drawn.
const curvePoints = 401

// A fittedCurve can tell whether it was fitted to these data; residuals from a
// curve that says no are refused.
type fittedCurve interface {
	FittedTo(x, y []float64) bool
}

// curveList takes apart what the user gives as Curve.
func curveList(x any) ([]any, error) {
	if x == nil {
		return nil, nil
	}
	rv := reflect.ValueOf(x)
	if rv.Kind() == reflect.Slice && (rv.Type().Elem().Kind() == reflect.Func || rv.Type().Elem().Kind() == reflect.Interface ||
		rv.Type().Elem() == reflect.TypeFor[Curve]()) {
		var out []any
		for i := range rv.Len() {
			out = append(out, rv.Index(i).Interface())
		}
		return out, nil
	}
	return []any{x}, nil
}

func asCurve(x any) (Curve, error) {
	switch c := x.(type) {
	case Curve:
		return c, nil
	case *Curve:
		if c != nil {
			return *c, nil
		}
	}
	rv := reflect.ValueOf(x)
	if rv.Kind() == reflect.Func && !rv.IsNil() {
		return Curve{F: x}, nil
	}
	if m := rv.MethodByName("Curve"); rv.IsValid() && m.IsValid() && m.Type().NumIn() == 0 && m.Type().NumOut() == 1 {
		return asCurve(m.Call(nil)[0].Interface())
	}
	return Curve{}, fmt.Errorf("a curve is a %T, want a function of x or a display.Curve%s", x, functionsOf(rv))
}

// functionsOf names methods of a model that could be drawn.
func functionsOf(rv reflect.Value) string {
	if !rv.IsValid() {
		return ""
	}
	var names []string
	for i := range rv.NumMethod() {
		t := rv.Type().Method(i).Type // with the receiver
		if t.NumIn() == 2 && t.NumOut() == 1 && t.In(1).Kind() == reflect.Float64 && t.Out(0).Kind() == reflect.Float64 {
			names = append(names, rv.Type().Method(i).Name)
		}
	}
	if len(names) == 0 {
		return ""
	}
	return "; its methods " + cut(strings.Join(names, ", "), 120) + " are such functions"
}

// curves draws the curves of a series over the range of its data (of the whole
// figure if it has none), bands below and lines above the points.
func (r *figureReader) curves(s Series, d *seriesData) (below, above []scene.Layer, n int, err error) {
	list, err := curveList(s.Curve)
	if err != nil {
		return nil, nil, 0, err
	}
	for i, x := range list {
		c, err := asCurve(x)
		if err != nil {
			return nil, nil, 0, err
		}
		if r.wantRes && i == 0 && d.y != nil {
			if w, ok := x.(fittedCurve); ok && !w.FittedTo(d.rawX, d.rawY) {
				return nil, nil, 0, fmt.Errorf("the residuals would be of another data set: the curve was not fitted to these points")
			}
		}
		e := &curveReader{r: r, axis: d.axis, c: c}
		if err := e.open(d); err != nil {
			return nil, nil, 0, err
		}
		st := scene.Style{Colour: r.colour, Dash: r.dash, Name: c.Name}
		if r.marker > 1 && d.y != nil { // several sets: the curve takes the colour of its own
			st.Colour, st.Dash = d.style.Colour, i
		} else {
			r.colour++
			r.dash++
		}
		gx, err := e.grid(d)
		if err != nil {
			return nil, nil, 0, err
		}
		gy, err := e.at(gx)
		if err != nil && len(d.x) == 0 && c.F != nil && gx[0] == 0 {
			// A range from 0 K on, where few models are defined.
			gx[0] = 1e-3 * gx[1]
			gy, err = e.at(gx)
		}
		if err != nil {
			return nil, nil, 0, err
		}
		if err := d.axis.checkLog("the curve", gy); err != nil {
			return nil, nil, 0, err
		}
		r.coverShown(d.axis, gx, gy)
		r.x.cover(gx)
		above = append(above, scene.Line{X: gx, Y: gy, Right: s.Right, Style: st})
		p := plotted{what: "curve", name: c.Name, x: gx, y: gy, right: s.Right}
		if c.U != nil {
			u, err := e.uncertainty(gx)
			if err != nil {
				return nil, nil, 0, err
			}
			k := c.K
			if k == 0 {
				k = 1
			}
			for j := range gx {
				p.lo, p.hi = append(p.lo, gy[j]-k*u[j]), append(p.hi, gy[j]+k*u[j])
			}
			r.coverShown(d.axis, gx, p.lo, p.hi)
			b := st
			b.Name = ""
			below = append(below, scene.Band{X: gx, Lower: p.lo, Upper: p.hi, Right: s.Right, Style: b})
		}
		r.all = append(r.all, p)
		if r.wantRes && i == 0 && d.y != nil {
			if err := r.residuals(e, d); err != nil {
				return nil, nil, 0, err
			}
		}
		n++
	}
	return below, above, n, nil
}

// curveReader evaluates one curve in the units of the axes.
type curveReader struct {
	r    *figureReader
	axis *axisState
	c    Curve
	x, y []float64 // of a curve given by values
	u    []float64
}

func (e *curveReader) open(d *seriesData) error {
	if e.c.F != nil {
		return e.checkFunc("the curve", e.c.F)
	}
	if e.c.X == nil || e.c.Y == nil {
		return fmt.Errorf("a curve needs F, or X and Y")
	}
	cx, err := readColumn("X of the curve", e.c.X)
	if err != nil {
		return err
	}
	if err := e.r.x.take("X of the curve", cx); err != nil {
		return err
	}
	cy, err := readColumn("Y of the curve", e.c.Y)
	if err != nil {
		return err
	}
	if len(cx.v) != len(cy.v) {
		return fmt.Errorf("the curve has %d values of X and %d of Y", len(cx.v), len(cy.v))
	}
	if e.c.U != nil && reflect.ValueOf(e.c.U).Kind() != reflect.Func {
		if e.u, err = errorsOf("the curve", e.c.U, cy, e.axis); err != nil {
			return err
		}
	}
	if err := e.axis.take("Y of the curve", cy); err != nil {
		return err
	}
	e.x, e.y = cx.v, cy.v
	if err := finiteOrGap("X of the curve", e.x, false); err != nil {
		return err
	}
	if !slices.IsSorted(e.x) {
		return fmt.Errorf("X of the curve is not in ascending order")
	}
	return finiteOrGap("Y of the curve", e.y, false)
}

// checkFunc refuses a function of another kind of quantity than the axes show.
func (e *curveReader) checkFunc(what string, f any) error {
	t := reflect.TypeOf(f)
	if t.Kind() != reflect.Func || t.NumIn() != 1 || t.NumOut() != 1 || t.IsVariadic() {
		return fmt.Errorf("%s is a %s, want a function of one number that gives one number", what, t)
	}
	in, out := t.In(0), t.Out(0)
	if in.Kind() == reflect.Slice && out.Kind() == reflect.Slice {
		in, out = in.Elem(), out.Elem()
	}
	if in.Kind() != reflect.Float64 || out.Kind() != reflect.Float64 {
		return fmt.Errorf("%s is a %s, want a function of one number that gives one number", what, t)
	}
	for _, p := range []struct {
		t reflect.Type
		a *axisState
	}{{in, &e.r.x}, {out, e.axis}} {
		if !isQuantity(p.t) {
			continue
		}
		if p.a.typ != nil && p.a.typ != p.t {
			return fmt.Errorf("%s is a %s, but the %s shows %s", what, t, p.a.name, p.a.typ)
		}
		c := &column{typ: p.t, v: []float64{1}}
		c.unit, c.kind = unitOf(p.t)
		if p.a.typ == nil && p.a.used && !sameUnit(c.unit, p.a.unit) {
			return fmt.Errorf("%s is a %s in %s, but the %s is in %s", what, t, unitOr(c.unit), p.a.name, unitOr(p.a.unit))
		}
		if err := p.a.take(what, c); err != nil {
			return err
		}
	}
	return nil
}

// grid returns where the curve is drawn.
func (e *curveReader) grid(d *seriesData) ([]float64, error) {
	if e.x != nil {
		return e.x, nil
	}
	a := &e.r.x
	lo, hi := a.lo, a.hi
	if len(d.x) > 0 {
		lo, hi = slices.Min(d.x), slices.Max(d.x)
	}
	from, to, low, high := a.spec.limits()
	none := len(d.x) == 0
	if low && (none || lo < from && from < hi) {
		lo = from
	}
	if high && (none || lo < to && to < hi) {
		hi = to
	}
	if lo > hi {
		return nil, fmt.Errorf("a curve without data needs the range to draw it over: give XAxis.Min and XAxis.Max")
	}
	g := make([]float64, curvePoints)
	for i := range g {
		t := float64(i) / (curvePoints - 1)
		if a.spec.Log {
			g[i] = lo * math.Pow(hi/lo, t)
		} else {
			g[i] = lo + t*(hi-lo)
		}
	}
	g[len(g)-1] = hi
	return g, nil
}

// at returns the curve at xs, in the units of the axes.
func (e *curveReader) at(xs []float64) ([]float64, error) {
	if e.c.F != nil {
		return e.call("the curve", e.c.F, xs)
	}
	return interpolate("the curve", e.x, e.y, xs)
}

func (e *curveReader) uncertainty(xs []float64) ([]float64, error) {
	if e.u != nil {
		return interpolate("the curve's uncertainty", e.x, e.u, xs)
	}
	if err := e.checkFunc("the curve's uncertainty", e.c.U); err != nil {
		return nil, err
	}
	return e.call("the curve's uncertainty", e.c.U, xs)
}

// call evaluates a function of the user's, whose panic is an error here.
func (e *curveReader) call(what string, f any, xs []float64) (ys []float64, err error) {
	at := math.NaN()
	defer func() {
		if p := recover(); p != nil {
			where := ""
			if !math.IsNaN(at) {
				where = fmt.Sprintf(" at x = %v", at)
			}
			err = fmt.Errorf("%s panicked%s: %v", what, where, p)
		}
	}()
	fv := reflect.ValueOf(f)
	t := fv.Type()
	kx, ky := e.r.x.factor, e.axis.factor
	if t.In(0).Kind() == reflect.Slice {
		in := reflect.MakeSlice(t.In(0), len(xs), len(xs))
		for i, x := range xs {
			in.Index(i).SetFloat(x * kx)
		}
		out := fv.Call([]reflect.Value{in})[0]
		if out.Len() != len(xs) {
			return nil, fmt.Errorf("%s gave %d values for %d of x", what, out.Len(), len(xs))
		}
		for i := range xs {
			ys = append(ys, out.Index(i).Float()/ky)
		}
	} else {
		arg := reflect.New(t.In(0)).Elem()
		for _, x := range xs {
			at = x * kx
			arg.SetFloat(at)
			ys = append(ys, fv.Call([]reflect.Value{arg})[0].Float()/ky)
		}
		at = math.NaN()
	}
	for i, y := range ys {
		if math.IsNaN(y) || math.IsInf(y, 0) {
			return nil, fmt.Errorf("%s gives %v at x = %v", what, y, xs[i]*kx)
		}
	}
	return ys, nil
}

// interpolate reads a curve given by values between its points, on straight
// lines; outside it has no value.
func interpolate(what string, x, y, at []float64) ([]float64, error) {
	out := make([]float64, len(at))
	for k, a := range at {
		i := sort.SearchFloat64s(x, a)
		switch {
		case i < len(x) && x[i] == a:
			out[k] = y[i]
		case i == 0 || i == len(x):
			return nil, fmt.Errorf("%s goes from x = %v to %v, but there are data at %v", what, x[0], x[len(x)-1], a)
		default:
			t := (a - x[i-1]) / (x[i] - x[i-1])
			out[k] = y[i-1] + t*(y[i]-y[i-1])
		}
	}
	return out, nil
}

// residuals adds the points of the lower panel.
func (r *figureReader) residuals(e *curveReader, d *seriesData) error {
	if d.axis != &r.y {
		return fmt.Errorf("residuals are for data on the left axis")
	}
	c, err := e.at(d.x)
	if err != nil {
		return err
	}
	res, u := make([]float64, len(c)), []float64(nil)
	if d.yerr != nil {
		u = make([]float64, len(c))
	}
	for i := range c {
		k := 1.0
		if r.f.RelativeResiduals {
			if c[i] == 0 {
				return fmt.Errorf("relative residuals: the curve is 0 at x = %v", d.x[i])
			}
			k = 100 / math.Abs(c[i])
		}
		res[i] = (d.y[i] - c[i]) * k
		if u != nil {
			u[i] = d.yerr[i] * k
		}
	}
	st := d.style
	st.Name = ""
	r.res = append(r.res, scene.Points{X: d.x, Y: res, YErr: u, Of: len(res), Style: st})
	r.all = append(r.all, plotted{what: "residuals", name: d.style.Name, x: d.x, y: res, yerr: u})
	return nil
}

func (r *figureReader) residualPanel() scene.Panel {
	a := newAxisState("residuals", Axis{})
	for _, l := range r.res {
		p := l.(scene.Points)
		r.coverShown(&a, p.X, p.Y)
		r.coverBars(&a, p.X, p.Y, p.YErr)
	}
	a.cover([]float64{0})
	a.quantity = "r"
	y, _ := a.settle(false) // has a quantity, so it cannot fail
	q := r.y.quantity
	if strings.Contains(q, "/") { // a quotient needs brackets: Δ(C_p/T)/(C_p/T)
		q = "(" + q + ")"
	}
	y.Quantity, y.Unit = "Δ"+q, r.y.unit
	if r.y.words { // too long for the panel
		y.Quantity = "residual"
	}
	if r.f.RelativeResiduals {
		y.Quantity, y.Unit = "Δ"+q+"/"+q, "%"
		if r.y.words {
			y.Quantity = "residual"
		}
	}
	m := math.Max(math.Abs(y.Min), math.Abs(y.Max))
	y.Min, y.Max = -m, m
	return scene.Panel{Weight: 0.28, Y: y, Zero: true, Layers: r.res}
}
