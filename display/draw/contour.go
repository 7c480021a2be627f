package draw

import (
	"math"
	"strconv"
	"strings"
)

// contour returns the lines z = level over a grid, by marching squares; the
// two cases of a saddle are told apart by the mean of its corners. Cells with
// a gap (NaN) have no line.
func contour(x, y []float64, z [][]float64, level float64) [][]point {
	// An edge of the grid is named by its lower left node and its direction;
	// each is crossed at one place, so lines join exactly.
	type edge struct {
		i, j int
		up   bool
	}
	above := func(i, j int) bool { return z[j][i] >= level }
	cross := func(e edge) point {
		i2, j2 := e.i+1, e.j
		if e.up {
			i2, j2 = e.i, e.j+1
		}
		a, b := z[e.j][e.i], z[j2][i2]
		t := (level - a) / (b - a)
		return point{x[e.i] + t*(x[i2]-x[e.i]), y[e.j] + t*(y[j2]-y[e.j])}
	}
	next := map[edge][]edge{}
	var order []edge
	join := func(a, b edge) {
		for _, e := range []edge{a, b} {
			if _, ok := next[e]; !ok {
				order = append(order, e)
			}
		}
		next[a] = append(next[a], b)
		next[b] = append(next[b], a)
	}
	for j := 0; j+1 < len(y); j++ {
		for i := 0; i+1 < len(x); i++ {
			sum := z[j][i] + z[j][i+1] + z[j+1][i+1] + z[j+1][i]
			if math.IsNaN(sum) {
				continue
			}
			b, r, t, l := edge{i, j, false}, edge{i + 1, j, true}, edge{i, j + 1, false}, edge{i, j, true}
			n := 0
			for k, in := range []bool{above(i, j), above(i+1, j), above(i+1, j+1), above(i, j+1)} {
				if in {
					n |= 1 << k
				}
			}
			switch n {
			case 1, 14:
				join(l, b)
			case 2, 13:
				join(b, r)
			case 4, 11:
				join(r, t)
			case 8, 7:
				join(t, l)
			case 3, 12:
				join(l, r)
			case 6, 9:
				join(b, t)
			case 5, 10:
				if (sum/4 >= level) == (n == 5) {
					join(l, t)
					join(b, r)
				} else {
					join(l, b)
					join(r, t)
				}
			}
		}
	}
	used := map[edge]bool{}
	walk := func(e edge) []point {
		var out []point
		first, prev := e, edge{-1, -1, false}
		for {
			used[e] = true
			out = append(out, cross(e))
			var to *edge
			for k := range next[e] {
				if c := next[e][k]; !used[c] {
					to = &next[e][k]
					break
				} else if c == first && prev != first && len(out) > 2 {
					return append(out, out[0]) // closed
				}
			}
			if to == nil {
				return out
			}
			prev, e = e, *to
		}
	}
	var lines [][]point
	for _, ends := range []bool{true, false} { // open lines from their ends first
		for _, e := range order {
			if !used[e] && (!ends || len(next[e]) == 1) {
				if s := walk(e); len(s) > 1 {
					lines = append(lines, s)
				}
			}
		}
	}
	return lines
}

// numberText writes a level with at most six digits and a true minus sign.
func numberText(v float64) string {
	s := strconv.FormatFloat(v, 'g', 6, 64)
	if m, e, ok := strings.Cut(s, "e"); ok {
		n, _ := strconv.Atoi(e)
		s = m + "×10^{" + strconv.Itoa(n) + "}"
	}
	return strings.ReplaceAll(s, "-", "−")
}
