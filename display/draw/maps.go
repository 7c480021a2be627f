package draw

import (
	"image/color"
	"math"
	"slices"

	"levelsum/display/internal/mark"
	"levelsum/display/internal/scene"
)

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
		if !(v > 0) {
			return 0
		}
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

func decimalText(v float64) []mark.Run {
	return mark.Label(numberText(v))
}
