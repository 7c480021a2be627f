package draw

import (
	"math"
	"slices"
	"strings"

	"levelsum/display/internal/mark"
	"levelsum/display/internal/scene"
)

// A plan is a figure laid out: where everything is.
type plan struct {
	f      *scene.Figure
	s      surface
	w, h   float64
	size   float64 // of text
	x      *ruler
	panels []*panelPlan
	legend legend
	bar    *scene.Cells // whose colours a bar explains
	barBox box
	barRul *ruler
	notes  []string
	second float64 // room for second lines of the labels on the left
}

type panelPlan struct {
	*scene.Panel
	box      box
	y, right *ruler
	taken    []box // places of labels
}

// draw lays a figure out and draws it.
func draw(f *scene.Figure, s surface, w, h float64) {
	p := &plan{f: f, s: s, w: w, h: h, size: 9}
	if f.Width < 100 {
		p.size = 8
	}
	p.legend = newLegend(f, p.size)
	thin := thinned(f)
	p.notes = append(append([]string(nil), f.Notes...), thin...)
	above := f.Legend == "above"
	p.lay(above)
	if len(p.legend.entries) > 0 && !above && !p.legend.findPlace(p) {
		p.lay(true)
	}
	p.drawAll()
}

// lay computes the boxes of the panels, from the outside to the inside.
func (p *plan) lay(legendAbove bool) {
	fs := p.size
	top, bottom := 0.75*fs, p.h-0.4*fs
	bottom -= float64(len(p.notes)) * 1.15 * fs * 0.85
	bottom -= 2.9 * fs // tick labels and the axis' label
	if p.f.Categories != nil {
		bottom += 1.2 * fs
	}
	p.legend.above = legendAbove
	if legendAbove {
		p.legend.wrap(p.w - 3*fs)
		top += float64(p.legend.rows)*1.35*fs + 0.3*fs
	}
	gap := 0.7 * fs
	weights := 0.0
	for i := range p.f.Panels {
		weights += p.f.Panels[i].Weight
	}
	room := bottom - top - gap*float64(len(p.f.Panels)-1)
	p.panels = p.panels[:0]
	y := top
	left, right := 0.0, 0.0
	p.bar = nil
	for i := range p.f.Panels {
		q := &panelPlan{Panel: &p.f.Panels[i]}
		q.box.y0 = y
		q.box.y1 = y + room*q.Weight/weights
		y = q.box.y1 + gap
		q.y = newRuler(q.Y, q.box.y1, q.box.y0, 2.6*fs)
		left = max(left, q.y.widest(fs))
		if q.Panel.Right != nil {
			q.right = newRuler(*q.Panel.Right, q.box.y1, q.box.y0, 3.1*fs)
			right = max(right, q.right.widest(fs)+2.3*fs)
		}
		for _, l := range q.Layers {
			if c, ok := l.(scene.Cells); ok {
				p.bar = &c
			}
		}
		p.panels = append(p.panels, q)
	}
	p.second = 0
	for _, q := range p.panels {
		if w := width(q.Y.Label(q.y.power), fs); w > p.labelRoom(q.box) {
			if _, _, ok := q.labelLines(); ok {
				p.second = 1.2 * fs
			}
		}
	}
	left += 2.5*fs + p.second
	if p.bar != nil {
		left += 0.8 * majorTick
		b := p.panels[0].box
		p.barRul = newRuler(p.bar.Scale, b.y1, b.y0, 3.1*fs)
		right += 2*fs + 0.9*fs + p.barRul.widest(fs) + 2.3*fs
	}
	x0, x1 := left, p.w-max(right, 1.3*fs)
	if x1 < x0+20 {
		x1 = x0 + 20
	}
	for _, q := range p.panels {
		q.box.x0, q.box.x1 = x0, x1
		q.taken = nil
	}
	if p.bar != nil {
		b := p.panels[0].box
		bx := x1 + 1.3*fs
		if p.panels[0].right != nil {
			bx += p.panels[0].right.widest(fs) + 2.3*fs
		}
		p.barBox = box{bx, b.y0, bx + 0.9*fs, b.y1}
	}
	p.x = newRuler(p.f.X, x0, x1, 5*fs)
	// Labels that would touch: fewer of them.
	for apart := 6 * fs; apart < 12*fs && p.x.crowded(fs); apart += fs {
		p.x = newRuler(p.f.X, x0, x1, apart)
	}
}

// crowded reports whether the labels of a horizontal axis touch.
func (r *ruler) crowded(size float64) bool {
	end := math.Inf(-1)
	for _, t := range r.ticks {
		if !t.major {
			continue
		}
		w := width(t.label, size)
		at := r.place(t.at)
		if at-w/2 < end+0.5*size {
			return true
		}
		end = at + w/2
	}
	return false
}

// drawAll draws from the back to the front.
func (p *plan) drawAll() {
	for _, q := range p.panels {
		p.layers(q)
	}
	for i, q := range p.panels {
		p.frame(q, i == len(p.panels)-1)
	}
	if p.bar != nil {
		p.colourBar()
	}
	p.legend.draw(p)
	for i, n := range p.notes {
		size := 0.85 * p.size
		y := p.h - 0.5*p.size - float64(len(p.notes)-1-i)*1.15*size
		p.s.text(mark.Label(n), p.panels[0].box.x0, y, size, start, false, paint{ink: true, alpha: 0.8})
	}
}

// frame draws the box, ticks and labels of a panel.
func (p *plan) frame(q *panelPlan, last bool) {
	b, fs := q.box, p.size
	ink := paint{ink: true, alpha: 1}
	var major, minor, outline path
	in, away := 1.0, 0.0
	if p.bar != nil { // on a map ticks point outward, where they can be seen
		in, away = -0.8, 0.8*majorTick-0.1*fs
	}
	outline.rect(b)
	if p.f.Categories == nil {
		for _, t := range p.x.ticks {
			x := p.x.place(t.at)
			if x < b.x0-0.01 || x > b.x1+0.01 {
				continue
			}
			l, to := minorTick, &minor
			if t.major {
				l, to = majorTick, &major
			}
			to.move(x, b.y1)
			to.line(x, b.y1-in*l)
			to.move(x, b.y0)
			to.line(x, b.y0+in*l)
			if t.major && last {
				p.s.text(t.label, x, b.y1+1.2*fs+away, fs, middle, false, ink)
			}
		}
	}
	side := func(r *ruler, x, dir float64, labels bool) {
		for _, t := range r.ticks {
			y := r.place(t.at)
			if y < b.y0-0.01 || y > b.y1+0.01 {
				continue
			}
			l, to := minorTick, &minor
			if t.major {
				l, to = majorTick, &major
			}
			to.move(x, y)
			to.line(x+dir*in*l, y)
			if !t.major || !labels || !last && y > b.y1-0.3*fs || q != p.panels[0] && y < b.y0+0.3*fs {
				continue
			}
			if dir > 0 {
				p.s.text(t.label, x-0.45*fs-away, y+0.36*fs, fs, end, false, ink)
			} else {
				p.s.text(t.label, x+0.45*fs+away, y+0.36*fs, fs, start, false, ink)
			}
		}
	}
	side(q.y, b.x0, 1, true)
	if q.right != nil {
		side(q.right, b.x1, -1, true)
	} else {
		side(q.y, b.x1, -1, false)
	}
	p.s.stroke(&minor, pen{paint: ink, width: tickWidth})
	p.s.stroke(&major, pen{paint: ink, width: frameWidth})
	p.s.stroke(&outline, pen{paint: ink, width: frameWidth})
	label := q.Y.Label(q.y.power)
	if first, second, ok := q.labelLines(); ok && p.second > 0 && width(label, fs) > p.labelRoom(b) {
		p.upLabel(first, 1.15*fs, b)
		label = second
	}
	p.upLabel(label, 1.15*fs+p.second, b)
	if q.right != nil {
		p.upLabel(q.Panel.Right.Label(q.right.power), b.x1+0.45*fs+q.right.widest(fs)+1.45*fs, b)
	}
	if !last {
		return
	}
	if p.f.Categories != nil {
		w := b.w() / float64(len(p.f.Categories))
		for i, c := range p.f.Categories {
			p.fit(mark.Label(c), b.x0+(float64(i)+0.5)*w, b.y1+1.35*fs, w-fs/2, ink)
		}
		return
	}
	p.fit(p.f.X.Label(p.x.power), (b.x0+b.x1)/2, b.y1+2.65*fs, p.w-fs, ink)
}

// fit writes text around x, smaller if it is wider than its room.
func (p *plan) fit(rs []mark.Run, x, y, room float64, ink paint) {
	size := p.size
	if w := width(rs, size); w > room {
		size *= max(0.5, room/w)
	}
	half := width(rs, size) / 2
	x = min(max(x, half+2), p.w-half-2)
	p.s.text(rs, x, y, size, middle, false, ink)
}

// labelRoom is the length that the label of a panel may have.
func (p *plan) labelRoom(b box) float64 { return b.h() + 1.2*p.size }

// labelLines splits the label of the left axis between quantity and unit.
func (q *panelPlan) labelLines() (first, second []mark.Run, ok bool) {
	rs := q.Y.Label(q.y.power)
	for i, r := range rs {
		if at := strings.Index(r.Text, " / "); at >= 0 && r.Shift == 0 {
			head, tail := r, r
			head.Text, tail.Text = r.Text[:at+2], r.Text[at+3:]
			first = append(slices.Clone(rs[:i]), head)
			return first, append([]mark.Run{tail}, rs[i+1:]...), true
		}
	}
	return nil, nil, false
}

// upLabel writes the label of a vertical axis, smaller if it is longer than
// the panel.
func (p *plan) upLabel(rs []mark.Run, x float64, b box) {
	ink := paint{ink: true, alpha: 1}
	mid, room := (b.y0+b.y1)/2, p.labelRoom(b)
	size := p.size
	w := width(rs, size)
	if w > room {
		size *= max(0.5, room/w)
		w = width(rs, size)
	}
	// Keep it on the drawing when it is still too long.
	lo, hi := w/2+1, p.h-w/2-1
	if lo <= hi {
		mid = min(max(mid, lo), hi)
	}
	p.s.text(rs, x, mid, size, middle, true, ink)
}

// colourBar draws the scale of a map's colours.
func (p *plan) colourBar() {
	b, fs := p.barBox, p.size
	ink := paint{ink: true, alpha: 1}
	pal := paletteOf(p.bar)
	n := len(pal)
	ys := make([]float64, n+1)
	idx := make([][]uint8, n)
	for i := range ys {
		ys[i] = b.y0 + b.h()*float64(i)/float64(n)
	}
	for i := range idx {
		idx[i] = []uint8{uint8(n - 1 - i)}
	}
	p.s.cells([]float64{b.x0, b.x1}, ys, idx, pal)
	var outline, ticks path
	outline.rect(b)
	for _, t := range p.barRul.ticks {
		if !t.major {
			continue
		}
		y := p.barRul.place(t.at)
		ticks.move(b.x1, y)
		ticks.line(b.x1+2, y)
		p.s.text(t.label, b.x1+0.45*fs, y+0.36*fs, fs, start, false, ink)
	}
	p.s.stroke(&ticks, pen{paint: ink, width: tickWidth})
	p.s.stroke(&outline, pen{paint: ink, width: tickWidth})
	p.upLabel(p.bar.Scale.Label(p.barRul.power), b.x1+0.45*fs+p.barRul.widest(fs)+1.45*fs, b)
}
