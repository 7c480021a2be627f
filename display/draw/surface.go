package draw

import (
	"image/color"

	"levelsum/display/internal/mark"
)

// A point of the drawing, in points of 1/72 inch, y downwards from the top.
type point struct{ x, y float64 }

// A path is a list of polylines.
type path struct {
	ops []op
}

type op struct {
	point
	kind byte // 'M', 'L' or 'Z'
}

func (p *path) move(x, y float64) { p.ops = append(p.ops, op{point{x, y}, 'M'}) }
func (p *path) line(x, y float64) { p.ops = append(p.ops, op{point{x, y}, 'L'}) }
func (p *path) close()            { p.ops = append(p.ops, op{kind: 'Z'}) }

func (p *path) rect(r box) {
	p.move(r.x0, r.y0)
	p.line(r.x1, r.y0)
	p.line(r.x1, r.y1)
	p.line(r.x0, r.y1)
	p.close()
}

// A box has x0 <= x1 and y0 <= y1.
type box struct{ x0, y0, x1, y1 float64 }

func (b box) w() float64 { return b.x1 - b.x0 }
func (b box) h() float64 { return b.y1 - b.y0 }
func (b box) grow(d float64) box {
	return box{b.x0 - d, b.y0 - d, b.x1 + d, b.y1 + d}
}
func (b box) overlaps(c box) bool {
	return b.x0 < c.x1 && c.x0 < b.x1 && b.y0 < c.y1 && c.y0 < b.y1
}
func (b box) has(p point) bool { return p.x >= b.x0 && p.x <= b.x1 && p.y >= b.y0 && p.y <= b.y1 }

// A paint is the colour of the page's text, or a fixed one.
type paint struct {
	ink   bool
	rgb   color.RGBA
	alpha float64
}

// A pen strokes paths.
type pen struct {
	paint
	width float64
	dash  []float64
	round bool // round ends
}

// Where a text stands relative to its place.
type anchor int

const (
	start anchor = iota
	middle
	end
)

// A surface is what figures are drawn on.
type surface interface {
	stroke(p *path, by pen)
	fill(p *path, with paint)
	// dots draws filled discs.
	dots(at []point, radius float64, with paint)
	// text writes runs with their baseline at (x, y); upwards turns it by 90
	// degrees, to be read from the right.
	text(rs []mark.Run, x, y, size float64, a anchor, upwards bool, with paint)
	// cells fills a grid with colours of a palette; index 255 is left empty.
	// xs and ys are the edges on the drawing, in ascending order.
	cells(xs, ys []float64, index [][]uint8, palette []color.RGBA)
}
