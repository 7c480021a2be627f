package draw

import (
	"slices"

	"levelsum/display/internal/mark"
	"levelsum/display/internal/scene"
)

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
