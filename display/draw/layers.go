package draw

import (
	"image/color"
	"math"
	"slices"

	"levelsum/display/internal/mark"
	"levelsum/display/internal/scene"
)

func (q *panelPlan) ruler(right bool) *ruler {
	if right && q.right != nil {
		return q.right
	}
	return q.y
}

// layers draws the data of a panel, clipped to its box.
func (p *plan) layers(q *panelPlan) {
	if q.Zero && q.y.Min < 0 && q.y.Max > 0 {
		var z path
		y := q.y.place(0)
		z.move(q.box.x0, y)
		z.line(q.box.x1, y)
		p.s.stroke(&z, pen{paint: paint{ink: true, alpha: 0.6}, width: tickWidth})
	}
	if p.legend.placed && q == p.panels[0] {
		q.taken = append(q.taken, p.legend.box)
	}
	p.ruleLines(q)
	for _, l := range q.Layers {
		switch l := l.(type) {
		case scene.Points:
			p.points(q, l)
		case scene.Line:
			var line path
			q.polyline(&line, p.x, q.ruler(l.Right), l.X, l.Y)
			w := lineWidth
			if l.Width > 0 {
				w = l.Width
			}
			p.s.stroke(&line, pen{paint: series(l.Colour), width: w, dash: dashOf(l.Dash)})
		case scene.Band:
			p.band(q, l)
		case scene.Bars:
			p.bars(q, l)
		case scene.Cells:
			p.cells(q, l)
		case scene.Contours:
			p.contours(q, l)
		case scene.Ladder:
			p.ladder(q, l)
		}
	}
	for _, l := range q.Layers {
		if r, ok := l.(scene.Rule); ok {
			p.ruleLabel(q, r)
		}
	}
}

// polyline adds a line through the points, clipped, broken at NaN, with runs
// of points that fall into one column of the drawing reduced to their first,
// lowest, highest and last.
func (q *panelPlan) polyline(out *path, x, y *ruler, xs, ys []float64) {
	pts := make([]point, 0, len(xs))
	flush := func() {
		addClipped(out, reduce(pts), q.box)
		pts = pts[:0]
	}
	for i := range xs {
		if math.IsNaN(ys[i]) || y.Log && !(ys[i] > 0) {
			flush()
			continue
		}
		pts = append(pts, point{x.place(xs[i]), y.place(ys[i])})
	}
	flush()
}

// column is the width in which a line is reduced, in points.
const column = 0.25

func reduce(pts []point) []point {
	if len(pts) < 3000 {
		return pts
	}
	out := pts[:0:0]
	for i := 0; i < len(pts); {
		j, lo, hi := i, i, i
		col := math.Floor(pts[i].x / column)
		for j < len(pts) && math.Floor(pts[j].x/column) == col {
			if pts[j].y < pts[lo].y {
				lo = j
			}
			if pts[j].y > pts[hi].y {
				hi = j
			}
			j++
		}
		keep := []int{i, min(lo, hi), max(lo, hi), j - 1}
		for k, n := range keep {
			if k == 0 || n != keep[k-1] {
				out = append(out, pts[n])
			}
		}
		i = j
	}
	return out
}

// addClipped adds the parts of a polyline inside a box.
func addClipped(out *path, pts []point, b box) {
	drawing := false
	for i := 1; i < len(pts); i++ {
		a, c, ok := clip(pts[i-1], pts[i], b)
		if !ok {
			drawing = false
			continue
		}
		if !drawing || a != pts[i-1] {
			out.move(a.x, a.y)
		}
		out.line(c.x, c.y)
		drawing = c == pts[i]
	}
	if len(pts) == 1 && b.has(pts[0]) {
		out.move(pts[0].x, pts[0].y)
		out.line(pts[0].x+0.01, pts[0].y)
	}
}

// clip returns the part of a segment inside a box (Liang and Barsky, 1984).
func clip(a, c point, b box) (point, point, bool) {
	t0, t1 := 0.0, 1.0
	dx, dy := c.x-a.x, c.y-a.y
	for _, e := range [4][2]float64{{-dx, a.x - b.x0}, {dx, b.x1 - a.x}, {-dy, a.y - b.y0}, {dy, b.y1 - a.y}} {
		d, dist := e[0], e[1]
		if d == 0 {
			if dist < 0 {
				return a, c, false
			}
			continue
		}
		t := dist / d
		if d < 0 {
			t0 = max(t0, t)
		} else {
			t1 = min(t1, t)
		}
		if t0 > t1 {
			return a, c, false
		}
	}
	from, to := a, c
	if t0 > 0 {
		from = point{a.x + t0*dx, a.y + t0*dy}
	}
	if t1 < 1 {
		to = point{a.x + t1*dx, a.y + t1*dy}
	}
	return from, to, true
}

// clipArea clips a polygon to a box (Sutherland and Hodgman, 1974).
func clipArea(pts []point, b box) []point {
	edge := func(pts []point, inside func(p point) bool, cross func(a, c point) point) []point {
		var out []point
		for i, c := range pts {
			a := pts[(i+len(pts)-1)%len(pts)]
			switch {
			case inside(c) && !inside(a):
				out = append(out, cross(a, c), c)
			case inside(c):
				out = append(out, c)
			case inside(a):
				out = append(out, cross(a, c))
			}
		}
		return out
	}
	atX := func(x float64) func(a, c point) point {
		return func(a, c point) point { return point{x, a.y + (c.y-a.y)*(x-a.x)/(c.x-a.x)} }
	}
	atY := func(y float64) func(a, c point) point {
		return func(a, c point) point { return point{a.x + (c.x-a.x)*(y-a.y)/(c.y-a.y), y} }
	}
	pts = edge(pts, func(p point) bool { return p.x >= b.x0 }, atX(b.x0))
	pts = edge(pts, func(p point) bool { return p.x <= b.x1 }, atX(b.x1))
	pts = edge(pts, func(p point) bool { return p.y >= b.y0 }, atY(b.y0))
	return edge(pts, func(p point) bool { return p.y <= b.y1 }, atY(b.y1))
}

// points draws error bars in one path, then the marks.
func (p *plan) points(q *panelPlan, l scene.Points) {
	y := q.ruler(l.Right)
	keep := thinPoints(l, p.x, y, q.box)
	var bars path
	bar := func(a, c point) {
		if a, c, ok := clip(a, c, q.box); ok {
			bars.move(a.x, a.y)
			bars.line(c.x, c.y)
		}
	}
	at := make([]point, 0, len(keep))
	for _, i := range keep {
		c := point{p.x.place(l.X[i]), y.place(l.Y[i])}
		if l.YErr != nil && l.YErr[i] > 0 {
			bar(point{c.x, foot(y, l.Y[i]-l.YErr[i])}, point{c.x, y.place(l.Y[i] + l.YErr[i])})
		}
		if l.XErr != nil && l.XErr[i] > 0 {
			bar(point{foot(p.x, l.X[i]-l.XErr[i]), c.y}, point{p.x.place(l.X[i] + l.XErr[i]), c.y})
		}
		if q.box.grow(0.5).has(c) {
			at = append(at, c)
		}
	}
	colour := series(l.Colour)
	p.s.stroke(&bars, pen{paint: colour.with(barAlpha), width: barWidth})
	p.marks(at, l.Marker, markSize(len(at)), colour)
}

// foot is the place of the lower end of a bar, which on a logarithmic axis may
// reach below zero.
func foot(r *ruler, v float64) float64 {
	if r.Log && !(v > 0) {
		return r.from + 10*(r.from-r.to)
	}
	return r.place(v)
}

func markSize(n int) float64 {
	switch {
	case n <= 60:
		return 2
	case n <= 400:
		return 1.7
	case n <= 5000:
		return 1.4
	}
	return 0.9
}

// marks draws symbols of one kind: filled discs, squares, triangles, diamonds,
// then open ones, then crosses.
func (p *plan) marks(at []point, marker int, r float64, with paint) {
	if len(at) == 0 {
		return
	}
	const kinds = 8
	var q path
	poly := func(c point, pts ...float64) {
		for i := 0; i < len(pts); i += 2 {
			if i == 0 {
				q.move(c.x+r*pts[0], c.y+r*pts[1])
			} else {
				q.line(c.x+r*pts[i], c.y+r*pts[i+1])
			}
		}
		q.close()
	}
	kind := marker % kinds
	shape := map[int][]float64{
		1: {-0.9, -0.9, 0.9, -0.9, 0.9, 0.9, -0.9, 0.9},
		2: {0, -1.25, 1.15, 0.8, -1.15, 0.8},
		3: {0, -1.35, 1.35, 0, 0, 1.35, -1.35, 0},
	}
	switch kind {
	case 0:
		p.s.dots(at, r, with)
		return
	case 1, 2, 3:
		for _, c := range at {
			poly(c, shape[kind]...)
		}
		p.s.fill(&q, with)
		return
	case 4, 5, 6:
		pts := shape[kind-3]
		for _, c := range at {
			poly(c, pts...)
		}
	default:
		for _, c := range at {
			q.move(c.x-r, c.y-r)
			q.line(c.x+r, c.y+r)
			q.move(c.x-r, c.y+r)
			q.line(c.x+r, c.y-r)
		}
	}
	p.s.stroke(&q, pen{paint: with, width: 0.9})
}

func (p *plan) band(q *panelPlan, l scene.Band) {
	y := q.ruler(l.Right)
	var pts []point
	for i := range l.X {
		pts = append(pts, point{p.x.place(l.X[i]), y.place(l.Upper[i])})
	}
	for i := len(l.X) - 1; i >= 0; i-- {
		pts = append(pts, point{p.x.place(l.X[i]), foot(y, l.Lower[i])})
	}
	var a path
	for i, c := range clipArea(pts, q.box) {
		if i == 0 {
			a.move(c.x, c.y)
		} else {
			a.line(c.x, c.y)
		}
	}
	if len(a.ops) > 0 {
		a.close()
	}
	p.s.fill(&a, series(l.Colour).with(bandAlpha))
}

func (p *plan) bars(q *panelPlan, l scene.Bars) {
	var area, line path
	for i, h := range l.Heights {
		if !(h > 0) {
			continue
		}
		y0, y1 := q.y.place(h), q.box.y1
		if !q.y.Log {
			y1 = min(q.box.y1, q.y.place(0))
		}
		b := box{p.x.place(l.Edges[i]), max(y0, q.box.y0), p.x.place(l.Edges[i+1]), y1}
		b.x0, b.x1 = max(b.x0, q.box.x0), min(b.x1, q.box.x1)
		if b.x0 >= b.x1 || b.y0 >= b.y1 {
			continue
		}
		area.rect(b)
		line.rect(b)
	}
	p.s.fill(&area, series(l.Colour).with(0.35))
	p.s.stroke(&line, pen{paint: series(l.Colour), width: barWidth})
}

func paletteOf(c *scene.Cells) []color.RGBA {
	if c.Diverging {
		return diverging()
	}
	return sequential()
}

// shade returns where v lies on the scale of colours, 0 to 1.
func shade(a scene.Axis, v float64) float64 {
	t := (v - a.Min) / (a.Max - a.Min)
	if a.Log {
		t = math.Log(v/a.Min) / math.Log(a.Max/a.Min)
	}
	return min(max(t, 0), 1)
}

func (p *plan) cells(q *panelPlan, l scene.Cells) {
	pal := paletteOf(&l)
	// Columns and rows that the axes show, from the top of the drawing.
	var xs, ys []float64
	var cols, rows []int
	edge := func(r *ruler, e []float64, lo, hi float64) (places []float64, idx []int) {
		for i := 0; i+1 < len(e); i++ {
			a, b := r.place(e[i]), r.place(e[i+1])
			a, b = min(max(min(a, b), lo), hi), min(max(max(r.place(e[i]), b), lo), hi)
			if b-a < 1e-9 {
				continue
			}
			if len(places) == 0 || a > places[len(places)-1] {
				if len(places) == 0 {
					places = append(places, a)
				}
			}
			places = append(places, b)
			idx = append(idx, i)
		}
		return places, idx
	}
	xs, cols = edge(p.x, l.XEdges, q.box.x0, q.box.x1)
	down := make([]float64, len(l.YEdges))
	for i := range down {
		down[i] = l.YEdges[len(down)-1-i]
	}
	ys, rows = edge(q.y, down, q.box.y0, q.box.y1)
	if len(cols) == 0 || len(rows) == 0 {
		return
	}
	idx := make([][]uint8, len(rows))
	for j, row := range rows {
		idx[j] = make([]uint8, len(cols))
		z := l.Z[len(l.Z)-1-row]
		for i, col := range cols {
			if math.IsNaN(z[col]) {
				idx[j][i] = 255
				continue
			}
			idx[j][i] = uint8(math.Round(shade(l.Scale, z[col]) * float64(len(pal)-1)))
		}
	}
	p.s.cells(xs, ys, idx, pal)
}

// contours draws the lines of each level with its value on the longest one.
func (p *plan) contours(q *panelPlan, l scene.Contours) {
	fs := 0.85 * p.size
	var on *scene.Cells
	for _, o := range q.Layers {
		if c, ok := o.(scene.Cells); ok {
			on = &c
		}
	}
	levels := slices.Clone(l.Levels)
	slices.Sort(levels)
	for _, v := range levels {
		ink := paint{ink: true, alpha: 1}
		if on != nil {
			// On colours the ink is dark or light by what is under it.
			pal := paletteOf(on)
			c := pal[int(math.Round(shade(on.Scale, v)*float64(len(pal)-1)))]
			ink = paint{rgb: hex(0xFFFFFF), alpha: 1}
			if contrast(c, hex(0xFFFFFF)) < contrast(c, inkOnPaper) {
				ink.rgb = inkOnPaper
			}
		}
		var lines [][]point
		long, most := -1, 0.0
		for _, s := range contour(l.X, l.Y, l.Z, v) {
			for i := range s {
				s[i] = point{p.x.place(s[i].x), q.y.place(s[i].y)}
			}
			if n := length(s); n > most {
				long, most = len(lines), n
			}
			lines = append(lines, s)
		}
		label := decimalText(v)
		w := width(label, fs)
		var at point
		labelled := long >= 0 && most > 3*w
		if labelled {
			at = p.contourLabel(q, lines[long], w, fs)
			labelled = at != point{}
		}
		gap := box{at.x - w/2 - 1.5, at.y - 0.5*fs, at.x + w/2 + 1.5, at.y + 0.5*fs}
		var line path
		for _, s := range lines {
			if !labelled {
				addClipped(&line, s, q.box)
				continue
			}
			var part []point
			for _, c := range s {
				if gap.has(c) {
					addClipped(&line, part, q.box)
					part = nil
					continue
				}
				part = append(part, c)
			}
			if len(part) > 1 {
				addClipped(&line, part, q.box)
			}
		}
		p.s.stroke(&line, pen{paint: ink, width: 0.9})
		if labelled {
			p.s.text(label, at.x, at.y+0.36*fs, fs, middle, false, ink)
			q.taken = append(q.taken, gap)
		}
	}
}

// contourLabel finds a place on a line, near its middle, where a label is
// inside the panel and over no other label.
func (p *plan) contourLabel(q *panelPlan, s []point, w, fs float64) point {
	n := len(s)
	for k := range n {
		i := n/2 + (k+1)/2*(1-2*(k%2))
		if i < 0 || i >= n {
			continue
		}
		c := s[i]
		b := box{c.x - w/2 - 2, c.y - 0.6*fs, c.x + w/2 + 2, c.y + 0.6*fs}
		if b.x0 < q.box.x0+2 || b.x1 > q.box.x1-2 || b.y0 < q.box.y0+2 || b.y1 > q.box.y1-2 {
			continue
		}
		if !slices.ContainsFunc(q.taken, b.overlaps) {
			return c
		}
	}
	return point{}
}

func length(s []point) float64 {
	n := 0.0
	for i := 1; i < len(s); i++ {
		n += math.Hypot(s[i].x-s[i-1].x, s[i].y-s[i-1].y)
	}
	return n
}

// ruleLines draws the lines of all rules of a panel, so that labels can keep
// away from them.
func (p *plan) ruleLines(q *panelPlan) {
	var line path
	for _, l := range q.Layers {
		r, ok := l.(scene.Rule)
		if !ok {
			continue
		}
		a, c := point{q.box.x0, q.y.place(r.At)}, point{q.box.x1, q.y.place(r.At)}
		if r.Vertical {
			x := p.x.place(r.At)
			a, c = point{x, q.box.y0}, point{x, q.box.y1}
		}
		if a, c, ok := clip(a, c, q.box); ok {
			line.move(a.x, a.y)
			line.line(c.x, c.y)
			q.taken = append(q.taken, box{a.x, a.y, c.x, c.y}.grow(0.5))
		}
	}
	p.s.stroke(&line, pen{paint: paint{ink: true, alpha: 0.75}, width: tickWidth, dash: dashes[4]})
}

// ruleLabel writes the label of a rule beside it, where no other label, no
// line and if possible no data stand.
func (p *plan) ruleLabel(q *panelPlan, l scene.Rule) {
	fs := 0.9 * p.size
	rs := mark.Label(l.Label)
	w := width(rs, fs)
	if w == 0 {
		return
	}
	var places []box
	add := func(x, y float64) {
		b := box{x, y, x + w, y + 1.15*fs}
		if b.x0 >= q.box.x0+2 && b.x1 <= q.box.x1-2 && b.y0 >= q.box.y0+2 && b.y1 <= q.box.y1-2 {
			places = append(places, b)
		}
	}
	if l.Vertical {
		x := p.x.place(l.At)
		if x < q.box.x0 || x > q.box.x1 {
			return
		}
		for y := q.box.y0 + 0.4*fs; y < q.box.y1; y += 1.2 * fs {
			add(x+0.4*fs, y)
			add(x-0.4*fs-w, y)
		}
	} else {
		y := q.y.place(l.At)
		if y < q.box.y0 || y > q.box.y1 {
			return
		}
		for x := q.box.x1 - 0.6*fs - w; x > q.box.x0; x -= 2 * fs {
			add(x, y-1.25*fs)
			add(x, y+0.15*fs)
		}
	}
	if len(places) == 0 {
		return
	}
	best := places[0]
	for pass := range 2 {
		k := slices.IndexFunc(places, func(b box) bool {
			return !slices.ContainsFunc(q.taken, b.overlaps) && (pass > 0 || p.freeOfMarks(q, b))
		})
		if k >= 0 {
			best = places[k]
			break
		}
	}
	q.taken = append(q.taken, best)
	p.s.text(rs, best.x0, best.y0+0.88*fs, fs, start, false, paint{ink: true, alpha: 1})
}

// freeOfMarks reports whether no data lie in c, rules left aside.
func (p *plan) freeOfMarks(q *panelPlan, c box) bool {
	for _, l := range q.Layers {
		if _, ok := l.(scene.Rule); !ok && !p.freeOf(q, l, c) {
			return false
		}
	}
	return true
}

func decimalText(v float64) []mark.Run {
	return mark.Label(numberText(v))
}
