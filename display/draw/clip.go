package draw

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
