package draw

import (
	"slices"

	"levelsum/display/internal/mark"
	"levelsum/display/internal/scene"
)

// A legend says which mark is which set of data.
type legend struct {
	entries []entry
	size    float64
	above   bool
	rows    int
	box     box
	placed  bool
}

type entry struct {
	name  []mark.Run
	layer scene.Layer
	w     float64
	row   int
	x     float64
}

const swatch = 2.2 // width of a sample, in ems

func newLegend(f *scene.Figure, size float64) legend {
	l := legend{size: size}
	if f.Legend == "none" {
		return l
	}
	for _, p := range f.Panels {
		for _, y := range p.Layers {
			name := ""
			switch y := y.(type) {
			case scene.Points:
				name = y.Name
			case scene.Line:
				name = y.Name
			case scene.Band:
				name = y.Name
			case scene.Bars:
				name = y.Name
			}
			if name != "" {
				rs := shorten(mark.Label(name), size, points(f.Width)-(swatch+3.5)*size)
				l.entries = append(l.entries, entry{name: rs, layer: y, w: (swatch+0.5)*size + width(rs, size)})
			}
		}
	}
	return l
}

// shorten cuts text that is wider than its room; the whole name is in the
// alternative text.
func shorten(rs []mark.Run, size, room float64) []mark.Run {
	if width(rs, size) <= room {
		return rs
	}
	out := slices.Clone(rs)
	for len(out) > 0 {
		last := &out[len(out)-1]
		t := []rune(last.Text)
		if len(t) <= 1 {
			out = out[:len(out)-1]
			continue
		}
		last.Text = string(t[:len(t)-1])
		if width(out, size)+size*faceOf(mark.Run{}).advance('…') <= room {
			break
		}
	}
	return append(out, mark.Run{Text: "…"})
}

// wrap arranges the entries in rows above the panels.
func (l *legend) wrap(room float64) {
	x, row := 0.0, 0
	for i := range l.entries {
		e := &l.entries[i]
		if x > 0 && x+e.w > room {
			x, row = 0, row+1
		}
		e.x, e.row = x, row
		x += e.w + 1.5*l.size
	}
	l.rows = row + 1
}

// findPlace looks for a corner or side of the main panel where the legend
// covers no data; it reports false if there is none.
func (l *legend) findPlace(p *plan) bool {
	b, fs := p.panels[0].box, l.size
	w, h := 0.0, float64(len(l.entries))*1.3*fs
	for _, e := range l.entries {
		w = max(w, e.w)
	}
	pad := 0.8 * fs
	at := map[string]box{}
	for name, x := range map[string]float64{"left": b.x0 + pad, "": (b.x0 + b.x1 - w) / 2, "right": b.x1 - pad - w} {
		for side, y := range map[string]float64{"top": b.y0 + pad, "bottom": b.y1 - pad - h} {
			key := side
			if name != "" {
				key += " " + name
			}
			at[key] = box{x, y, x + w, y + h}
		}
	}
	set := func(c box) {
		l.box, l.placed = c, true
		for i := range l.entries {
			l.entries[i].x, l.entries[i].row = 0, i
		}
	}
	if c, ok := at[p.f.Legend]; ok {
		set(c)
		return true
	}
	if w > b.w()-2*pad || h > b.h()-2*pad {
		return false
	}
	for _, name := range []string{"top right", "top left", "bottom right", "bottom left", "top", "bottom"} {
		c := at[name]
		if p.free(p.panels[0], c.grow(0.4*fs)) {
			set(c)
			return true
		}
	}
	return false
}

// free reports whether no data lie in c.
func (p *plan) free(q *panelPlan, c box) bool {
	for _, l := range q.Layers {
		if !p.freeOf(q, l, c) {
			return false
		}
	}
	return true
}

func (p *plan) freeOf(q *panelPlan, l scene.Layer, c box) bool {
	crosses := func(xs, ys []float64, r *ruler) bool {
		for i := range xs {
			a := point{p.x.place(xs[i]), r.place(ys[i])}
			if c.has(a) {
				return true
			}
			if i > 0 {
				if _, _, ok := clip(point{p.x.place(xs[i-1]), r.place(ys[i-1])}, a, c); ok {
					return true
				}
			}
		}
		return false
	}
	switch l := l.(type) {
	case scene.Points:
		r := q.ruler(l.Right)
		for i := range l.X {
			x, y := p.x.place(l.X[i]), r.place(l.Y[i])
			if c.has(point{x, y}) {
				return false
			}
			if l.YErr != nil && l.YErr[i] > 0 {
				if _, _, ok := clip(point{x, r.place(l.Y[i] - l.YErr[i])}, point{x, r.place(l.Y[i] + l.YErr[i])}, c); ok {
					return false
				}
			}
		}
	case scene.Line:
		return !crosses(l.X, l.Y, q.ruler(l.Right))
	case scene.Band:
		r := q.ruler(l.Right)
		if crosses(l.X, l.Lower, r) || crosses(l.X, l.Upper, r) {
			return false
		}
		for i := range l.X {
			if x := p.x.place(l.X[i]); x >= c.x0 && x <= c.x1 && r.place(l.Upper[i]) <= c.y0 && r.place(l.Lower[i]) >= c.y1 {
				return false
			}
		}
	case scene.Bars:
		for i, h := range l.Heights {
			if (box{p.x.place(l.Edges[i]), q.y.place(h), p.x.place(l.Edges[i+1]), q.box.y1}).overlaps(c) {
				return false
			}
		}
	case scene.Rule:
		if l.Vertical {
			x := p.x.place(l.At)
			return x < c.x0 || x > c.x1
		}
		y := q.y.place(l.At)
		return y < c.y0 || y > c.y1
	case scene.Contours:
		for k := range l.Levels {
			for _, s := range contour(l.X, l.Y, l.Z, l.Levels[k]) {
				for i := 1; i < len(s); i++ {
					a := point{p.x.place(s[i-1].x), q.y.place(s[i-1].y)}
					if _, _, ok := clip(a, point{p.x.place(s[i].x), q.y.place(s[i].y)}, c); ok {
						return false
					}
				}
			}
		}
	case scene.Cells, scene.Ladder:
		return false
	}
	return true
}

// draw draws the entries: inside one under the other, above in rows.
func (l *legend) draw(p *plan) {
	if len(l.entries) == 0 {
		return
	}
	fs := l.size
	x0, y0, line := l.box.x0, l.box.y0, 1.3*fs
	if l.above {
		x0, y0, line = p.panels[0].box.x0, 0.5*fs, 1.35*fs
		w := 0.0
		for _, e := range l.entries {
			w = max(w, e.x+e.w)
		}
		if x0+w > p.w-fs {
			x0 = max(fs, p.w-fs-w)
		}
	} else if !l.placed {
		return
	}
	for _, e := range l.entries {
		x, y := x0+e.x, y0+(float64(e.row)+0.5)*line
		l.sample(p, e.layer, x, y)
		p.s.text(e.name, x+(swatch+0.5)*fs, y+0.36*fs, fs, start, false, paint{ink: true, alpha: 1})
	}
}

func (l *legend) sample(p *plan, layer scene.Layer, x, y float64) {
	w := swatch * l.size
	switch s := layer.(type) {
	case scene.Points:
		if s.Joined {
			var q path
			q.move(x, y)
			q.line(x+w, y)
			p.s.stroke(&q, pen{paint: series(s.Colour), width: lineWidth, dash: dashOf(s.Dash)})
		}
		if s.YErr != nil || s.XErr != nil {
			var q path
			q.move(x+w/2, y-0.45*l.size)
			q.line(x+w/2, y+0.45*l.size)
			p.s.stroke(&q, pen{paint: series(s.Colour).with(barAlpha), width: barWidth})
		}
		p.marks([]point{{x + w/2, y}}, s.Marker, 2, series(s.Colour))
	case scene.Line:
		var q path
		q.move(x, y)
		q.line(x+w, y)
		p.s.stroke(&q, pen{paint: series(s.Colour), width: lineWidth, dash: dashOf(s.Dash)})
	case scene.Band:
		var q path
		q.rect(box{x, y - 0.35*l.size, x + w, y + 0.35*l.size})
		p.s.fill(&q, series(s.Colour).with(bandAlpha))
	case scene.Bars:
		var q path
		q.rect(box{x, y - 0.35*l.size, x + w, y + 0.35*l.size})
		p.s.fill(&q, series(s.Colour).with(0.35))
		p.s.stroke(&q, pen{paint: series(s.Colour), width: barWidth})
	}
}
