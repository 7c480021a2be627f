package display

import (
	"fmt"
	"math"
	"slices"

	"levelsum/display/internal/scene"
)

// matrix is what gonum's mat.Matrix has.
type matrix interface {
	Dims() (r, c int)
	At(i, j int) float64
}

func readGrid(what string, z any) ([][]float64, error) {
	switch m := z.(type) {
	case matrix:
		r, c := m.Dims()
		out := make([][]float64, r)
		for i := range out {
			out[i] = make([]float64, c)
			for j := range out[i] {
				out[i][j] = m.At(i, j)
			}
		}
		return out, nil
	case [][]float64:
		out := make([][]float64, len(m))
		for i := range m {
			if len(m[i]) != len(m[0]) {
				return nil, fmt.Errorf("%s: row 0 has %d values, row %d has %d", what, len(m[0]), i, len(m[i]))
			}
			out[i] = slices.Clone(m[i])
		}
		return out, nil
	}
	return nil, fmt.Errorf("%s is a %T, want a matrix or a [][]float64", what, z)
}

func (r *figureReader) heatMap(m *Map) error {
	var grid [2][]float64
	for k, v := range []any{m.X, m.Y} {
		what, a := "X of the map", &r.x
		if k == 1 {
			what, a = "Y of the map", &r.y
		}
		c, err := readColumn(what, v)
		if err != nil {
			return err
		}
		if err := a.take(what, c); err != nil {
			return err
		}
		if err := finiteOrGap(what, c.v, false); err != nil {
			return err
		}
		if err := a.checkLog(what, c.v); err != nil {
			return err
		}
		if len(c.v) < 2 || !ascending(c.v) {
			return fmt.Errorf("%s: want at least two values in ascending order", what)
		}
		grid[k] = c.v
	}
	z, err := readGrid("Z of the map", m.Z)
	if err != nil {
		return err
	}
	if len(z) != len(grid[1]) || len(z[0]) != len(grid[0]) {
		return fmt.Errorf("Z of the map has %d rows and %d columns, want one row for each of %d Y and one column for each of %d X",
			len(z), len(z[0]), len(grid[1]), len(grid[0]))
	}
	if m.Quantity == "" && m.Unit == "" {
		return fmt.Errorf("the map's colours have neither quantity nor unit")
	}
	f := 1.0
	if m.In != nil {
		if f, err = factorIn("Z of the map", nil, m.In, m.Unit); err != nil {
			return err
		}
	}
	lo, hi, bad := math.Inf(1), math.Inf(-1), 0
	for j := range z {
		for i := range z[j] {
			z[j][i] /= f
			v := z[j][i]
			if math.IsNaN(v) {
				continue // a gap
			}
			if math.IsInf(v, 0) || m.Log && !(v > 0) {
				bad++
				continue
			}
			lo, hi = math.Min(lo, v), math.Max(hi, v)
		}
	}
	if bad > 0 {
		want := "finite"
		if m.Log {
			want = "positive, as a logarithmic scale needs"
		}
		return fmt.Errorf("%d of %d values of Z of the map are not %s", bad, len(z)*len(z[0]), want)
	}
	if lo > hi {
		return fmt.Errorf("Z of the map has no numbers")
	}
	if m.Diverging && m.Log {
		return fmt.Errorf("the colours of the map cannot part at zero on a logarithmic scale")
	}
	if m.Diverging {
		lo, hi = -math.Max(math.Abs(lo), math.Abs(hi)), math.Max(math.Abs(lo), math.Abs(hi))
	}
	if pad := 1e-9 * math.Max(math.Abs(lo), math.Abs(hi)); hi-lo < pad || lo == hi {
		pad = math.Max(pad, 0.5*b2f(lo == 0))
		lo, hi = lo-pad, hi+pad
	}
	scale := scene.Axis{Quantity: m.Quantity, Unit: m.Unit, Min: lo, Max: hi, Log: m.Log}
	if err := drawable("scale of colours", scale); err != nil {
		return err
	}
	ex, ey := edges(grid[0], r.x.spec.Log), edges(grid[1], r.y.spec.Log)
	if m.LinesOnly {
		r.x.cover(grid[0])
		r.y.cover(grid[1])
	} else {
		r.x.cover(ex)
		r.y.cover(ey)
		r.main = append(r.main, scene.Cells{XEdges: ex, YEdges: ey, Z: z, Diverging: m.Diverging, Scale: scale})
	}
	for _, v := range m.Contours {
		if math.IsNaN(v) || math.IsInf(v, 0) {
			return fmt.Errorf("a contour of the map is at %v", v)
		}
	}
	if len(m.Contours) > 0 {
		r.main = append(r.main, scene.Contours{X: grid[0], Y: grid[1], Z: z, Levels: slices.Clone(m.Contours), Style: scene.Style{Colour: -1}})
	} else if m.LinesOnly {
		return fmt.Errorf("the map has LinesOnly but no Contours")
	}
	for j := range z {
		r.all = append(r.all, plotted{what: fmt.Sprintf("map, y = %s", full(grid[1][j])), x: grid[0], y: z[j]})
	}
	return nil
}

func ascending(v []float64) bool {
	for i := 1; i < len(v); i++ {
		if !(v[i] > v[i-1]) {
			return false
		}
	}
	return true
}

// edges returns the borders half way between centres.
func edges(c []float64, log bool) []float64 {
	mid := func(a, b float64) float64 { return (a + b) / 2 }
	if log {
		mid = func(a, b float64) float64 { return math.Sqrt(a * b) }
	}
	n := len(c)
	e := make([]float64, n+1)
	for i := 1; i < n; i++ {
		e[i] = mid(c[i-1], c[i])
	}
	if log {
		e[0], e[n] = c[0]*c[0]/e[1], c[n-1]*c[n-1]/e[n-1]
	} else {
		e[0], e[n] = 2*c[0]-e[1], 2*c[n-1]-e[n-1]
	}
	return e
}

func (r *figureReader) histogram(h *Histogram) error {
	c, err := readColumn("Values of the histogram", h.Values)
	if err != nil {
		return err
	}
	if err := r.x.take("Values of the histogram", c); err != nil {
		return err
	}
	if err := finiteOrGap("Values of the histogram", c.v, false); err != nil {
		return err
	}
	if err := r.x.checkLog("the histogram", c.v); err != nil {
		return err
	}
	if h.Bins < 0 || h.Bins > 2000 {
		return fmt.Errorf("the histogram has %d bins, want 1 to 2000", h.Bins)
	}
	e := binEdges(c.v, h.Bins, r.x.spec.Log)
	n := make([]float64, len(e)-1)
	for _, v := range c.v {
		i, found := slices.BinarySearch(e, v)
		if !found {
			i--
		}
		n[min(max(i, 0), len(n)-1)]++
	}
	if r.y.quantity == "" {
		r.y.quantity = "count"
		if h.Density {
			r.y.quantity = "probability density"
		}
	}
	unit := "1"
	if h.Density {
		for i := range n {
			n[i] /= float64(len(c.v)) * (e[i+1] - e[i])
		}
		if r.x.unit != "" && r.x.unit != "1" {
			unit = "1/(" + r.x.unit + ")"
		}
	}
	if r.y.spec.Unit == "" {
		r.y.spec.Unit = unit
	}
	r.y.unit, r.y.known, r.y.used = r.y.spec.Unit, true, true
	r.x.cover(e)
	r.y.cover(n, []float64{0})
	r.main = append(r.main, scene.Bars{Edges: e, Heights: n, Style: scene.Style{Colour: r.colour, Name: h.Name}})
	r.colour++
	p := plotted{what: "histogram", name: h.Name}
	for i := range n {
		p.x, p.y = append(p.x, e[i]), append(p.y, n[i])
		p.lo, p.hi = append(p.lo, e[i]), append(p.hi, e[i+1])
	}
	r.all = append(r.all, p)
	return nil
}

// binEdges returns equal bins; their number by Freedman and Diaconis (1981),
// width 2·IQR/n^(1/3), if bins is 0.
func binEdges(v []float64, bins int, log bool) []float64 {
	s := slices.Clone(v)
	if log {
		for i := range s {
			s[i] = math.Log(s[i])
		}
	}
	slices.Sort(s)
	n := len(s)
	lo, hi := s[0], s[n-1]
	if lo == hi {
		lo, hi = lo-0.5, hi+0.5
	}
	if bins == 0 {
		w := 2 * (s[n*3/4] - s[n/4]) / math.Cbrt(float64(n))
		bins = 10
		if w > 0 {
			bins = min(max(int(math.Ceil((hi-lo)/w)), 4), 200)
		}
	}
	e := make([]float64, bins+1)
	for i := range e {
		e[i] = lo + (hi-lo)*float64(i)/float64(bins)
		if log {
			e[i] = math.Exp(e[i])
		}
	}
	return e
}

func (r *figureReader) ladders() error {
	for k, l := range r.f.Ladders {
		what := fmt.Sprintf("Energies of ladder %d", k+1)
		if l.Name != "" {
			what = "Energies of " + l.Name
		}
		if r.f.X != nil || len(r.f.Series) > 0 || r.f.Map != nil || r.f.Histogram != nil {
			return fmt.Errorf("a level diagram has no other data in it")
		}
		c, err := readColumn(what, l.Energies)
		if err != nil {
			return err
		}
		if err := r.y.take(what, c); err != nil {
			return err
		}
		if err := finiteOrGap(what, c.v, false); err != nil {
			return err
		}
		if err := r.y.checkLog(what, c.v); err != nil {
			return err
		}
		for _, n := range []struct {
			name string
			n    int
		}{{"Labels", len(l.Labels)}, {"Degeneracies", len(l.Degeneracies)}, {"Populations", len(l.Populations)}} {
			if n.n != 0 && n.n != len(c.v) {
				return fmt.Errorf("%s: %d values, but %d %s", what, len(c.v), n.n, n.name)
			}
		}
		for i, p := range l.Populations {
			if !(p >= 0 && p <= 1) {
				return fmt.Errorf("%s: the population at index %d is %v, want 0 to 1", what, i, p)
			}
		}
		r.y.cover(c.v)
		r.main = append(r.main, scene.Ladder{Column: k, Y: c.v, Labels: l.Labels, Degeneracy: l.Degeneracies,
			Population: l.Populations, Style: scene.Style{Colour: r.colour}})
		r.colour++
		x := make([]float64, len(c.v))
		for i := range x {
			x[i] = float64(i)
		}
		r.all = append(r.all, plotted{what: "levels", name: l.Name, x: x, y: c.v})
	}
	return nil
}

func (r *figureReader) marks() error {
	for i, m := range r.f.Marks {
		what := fmt.Sprintf("mark %d", i+1)
		v, a, vertical := m.X, &r.x, true
		if v == nil {
			v, a, vertical = m.Y, &r.y, false
		}
		if v == nil || m.X != nil && m.Y != nil {
			return fmt.Errorf("%s: want X or Y", what)
		}
		n, err := readNumber(v)
		if err != nil {
			return fmt.Errorf("%s: %w", what, err)
		}
		c := &column{v: []float64{n.v}, unit: n.unit, typ: n.typ, kind: n.kind}
		if n.typ == nil && n.unit == "" {
			c.unit = a.unit
		}
		if err := a.take(what, c); err != nil {
			return err
		}
		if err := a.checkLog(what, c.v); err != nil {
			return err
		}
		a.cover(c.v)
		r.main = append(r.main, scene.Rule{At: c.v[0], Vertical: vertical, Label: m.Label, Style: scene.Style{Colour: -1}})
	}
	return nil
}
