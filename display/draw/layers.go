package draw

import (
	"math"
	"slices"

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

// points draws error bars in one path, then the marks.
func (p *plan) points(q *panelPlan, l scene.Points) {
	y := q.ruler(l.Right)
	keep, counts := thinPoints(l, p.x, y, q.box)
	var bars path
	bar := func(a, c point) {
		if a, c, ok := clip(a, c, q.box); ok {
			bars.move(a.x, a.y)
			bars.line(c.x, c.y)
		}
	}
	for _, u := range [][]float64{l.XErr, l.YErr} {
		if u != nil {
			bars.ops = slices.Grow(bars.ops, 2*len(keep))
		}
	}
	at := make([]point, 0, len(keep))
	byStrength := make([][]point, len(strengths))
	most := 0
	for _, n := range counts {
		most = max(most, n)
	}
	for k, i := range keep {
		c := point{p.x.place(l.X[i]), y.place(l.Y[i])}
		if l.YErr != nil && l.YErr[i] > 0 {
			bar(point{c.x, foot(y, l.Y[i]-l.YErr[i])}, point{c.x, y.place(l.Y[i] + l.YErr[i])})
		}
		if l.XErr != nil && l.XErr[i] > 0 {
			bar(point{foot(p.x, l.X[i]-l.XErr[i]), c.y}, point{p.x.place(l.X[i] + l.XErr[i]), c.y})
		}
		switch {
		case !q.box.grow(0.5).has(c):
		case counts != nil:
			s := strength(counts[k], most)
			byStrength[s] = append(byStrength[s], c)
		default:
			at = append(at, c)
		}
	}
	colour := series(l.Colour)
	p.s.stroke(&bars, pen{paint: colour.with(barAlpha), width: barWidth})
	if counts == nil {
		p.marks(at, l.Marker, markSize(len(at)), colour)
		return
	}
	for s, at := range byStrength { // the strongest on top
		p.marks(at, l.Marker, markSize(len(keep)), colour.with(strengths[s]))
	}
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
