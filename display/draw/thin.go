package draw

import (
	"fmt"
	"strconv"

	"levelsum/display/internal/scene"
)

// Sets of more points than thinAbove are thinned to one point for each cell of
// a grid of side cell, in points of 1/72 inch: finer than the marks, so that
// the drawing keeps its shape.
const (
	thinAbove = 8000
	cell      = 0.7
)

// thinPoints returns the points that are drawn, in their order.
func thinPoints(l scene.Points, x, y *ruler, b box) []int {
	out := make([]int, 0, min(len(l.X), thinAbove))
	if len(l.X) <= thinAbove {
		for i := range l.X {
			if l.Y[i] == l.Y[i] {
				out = append(out, i)
			}
		}
		return out
	}
	nx, ny := int(b.w()/cell)+1, int(b.h()/cell)+1
	seen := make([]bool, nx*ny)
	for i := range l.X {
		c := point{x.place(l.X[i]), y.place(l.Y[i])}
		if !b.has(c) { // NaN is not in the box either
			continue
		}
		k := int((c.y-b.y0)/cell)*nx + int((c.x-b.x0)/cell)
		if !seen[k] {
			seen[k] = true
			out = append(out, i)
		}
	}
	return out
}

// thinned returns the notes about sets that are too large to be drawn whole.
func thinned(f *scene.Figure) []string {
	var out []string
	for _, p := range f.Panels {
		for _, l := range p.Layers {
			if s, ok := l.(scene.Points); ok && len(s.X) > thinAbove {
				what := "points"
				if s.Name != "" {
					what += " of " + s.Name
				}
				note := fmt.Sprintf("%s %s; where several fall on one place, one is drawn.", grouped(s.Of), what)
				if len(out) == 0 || out[len(out)-1] != note {
					out = append(out, note)
				}
			}
		}
	}
	return out
}

// grouped writes a whole number with thin spaces between thousands.
func grouped(n int) string {
	s := strconv.Itoa(n)
	for i := len(s) - 3; i > 0; i -= 3 {
		s = s[:i] + "\u00a0" + s[i:]
	}
	return s
}
