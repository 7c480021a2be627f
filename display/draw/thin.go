package draw

import (
	"fmt"
	"math"
	"strconv"

	"levelsum/display/internal/scene"
)

// Sets of more points than thinAbove are thinned to one point for each cell of
// a grid, in points of 1/72 inch: finer than the marks, so that the drawing
// keeps its shape. Where that still leaves too many the cells grow.
const (
	thinAbove = 8000
	cell      = 0.7
	mostMarks = 20000
)

// thinPoints returns the points that are drawn, in their order, and how many
// points each stands for; no counts where all are drawn.
func thinPoints(l scene.Points, x, y *ruler, b box) (keep, counts []int) {
	out := make([]int, 0, min(len(l.X), mostMarks))
	if len(l.X) <= thinAbove {
		for i := range l.X {
			if !math.IsNaN(l.Y[i]) {
				out = append(out, i)
			}
		}
		return out, nil
	}
	for c := cell; ; c *= 1.5 {
		out, counts = out[:0], counts[:0]
		nx, ny := int(b.w()/c)+1, int(b.h()/c)+1
		place := make([]int32, nx*ny) // of the cell's point in out, from 1
		for i := range l.X {
			p := point{x.place(l.X[i]), y.place(l.Y[i])}
			if !b.has(p) { // NaN is not in the box either
				continue
			}
			k := int((p.y-b.y0)/c)*nx + int((p.x-b.x0)/c)
			if place[k] > 0 {
				counts[place[k]-1]++
				continue
			}
			if out, counts = append(out, i), append(counts, 1); len(out) > mostMarks {
				break
			}
			place[k] = int32(len(out))
		}
		if len(out) <= mostMarks {
			return out, counts
		}
	}
}

// strengths are how opaque the marks of a thinned set are, from those that
// stand for one point to those that stand for the most.
var strengths = []float64{0.4, 0.55, 0.7, 0.85, 1}

// strength returns the class of a mark that stands for n points, on a
// logarithmic scale.
func strength(n, most int) int {
	if n <= 1 || most <= 1 {
		return 0
	}
	k := int(math.Log(float64(n)) / math.Log(float64(most)) * float64(len(strengths)))
	return min(k, len(strengths)-1)
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
				note := fmt.Sprintf("%s %s: one is drawn for each place, stronger where there are more.", grouped(s.Of), what)
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
