package draw

import (
	"image/color"
	"math"

	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/vgpdf"

	"levelsum/display/internal/mark"
)

// canvas draws on one of gonum/plot's canvases, for PDF and PNG. Text is drawn
// as outlines: the PDF canvas' own fonts have no Greek and no true minus.
type canvas struct {
	c   vg.Canvas
	h   float64
	pdf bool
}

func newCanvas(c vg.Canvas, h float64) *canvas {
	_, pdf := c.(*vgpdf.Canvas)
	return &canvas{c, h, pdf}
}

// straight is a colour that has not been multiplied by its alpha, which is
// what the PDF canvas takes RGBA's result for.
type straight struct{ color.NRGBA }

func (c straight) RGBA() (r, g, b, a uint32) {
	return uint32(c.R) * 0x101, uint32(c.G) * 0x101, uint32(c.B) * 0x101, uint32(c.A) * 0x101
}

func (s *canvas) at(p point) vg.Point { return vg.Point{X: vg.Length(p.x), Y: vg.Length(s.h - p.y)} }

func (s *canvas) colour(p paint) {
	c := p.rgb
	if p.ink {
		c = inkOnPaper
	}
	n := color.NRGBA{c.R, c.G, c.B, uint8(math.Round(255 * p.alpha))}
	if s.pdf {
		s.c.SetColor(straight{n})
		return
	}
	s.c.SetColor(n)
}

func (s *canvas) path(p *path) vg.Path {
	out := make(vg.Path, 0, len(p.ops))
	for _, o := range p.ops {
		switch o.kind {
		case 'M':
			out.Move(s.at(o.point))
		case 'L':
			out.Line(s.at(o.point))
		default:
			out.Close()
		}
	}
	return out
}

func (s *canvas) stroke(p *path, by pen) {
	if len(p.ops) == 0 {
		return
	}
	s.colour(by.paint)
	s.c.SetLineWidth(vg.Length(by.width))
	d := make([]vg.Length, len(by.dash))
	for i := range d {
		d[i] = vg.Length(by.dash[i])
	}
	s.c.SetLineDash(d, 0)
	s.c.Stroke(s.path(p))
}

func (s *canvas) fill(p *path, with paint) {
	if len(p.ops) == 0 {
		return
	}
	s.colour(with)
	s.c.Fill(s.path(p))
}

// kappa is the length of the control arms of a quarter circle.
const kappa = 0.5522847498307936

func (s *canvas) dots(at []point, radius float64, with paint) {
	if len(at) == 0 {
		return
	}
	s.colour(with)
	r, k := vg.Length(radius), vg.Length(radius*kappa)
	var q vg.Path // all in one, so that discs of one set that overlap are not darker there
	for _, p := range at {
		c := s.at(p)
		pt := func(x, y vg.Length) vg.Point { return vg.Point{X: c.X + x, Y: c.Y + y} }
		q.Move(pt(r, 0))
		q.CubeTo(pt(r, k), pt(k, r), pt(0, r))
		q.CubeTo(pt(-k, r), pt(-r, k), pt(-r, 0))
		q.CubeTo(pt(-r, -k), pt(-k, -r), pt(0, -r))
		q.CubeTo(pt(k, -r), pt(r, -k), pt(r, 0))
		q.Close()
	}
	s.c.Fill(q)
}

func (s *canvas) text(rs []mark.Run, x, y, size float64, a anchor, upwards bool, with paint) {
	s.colour(with)
	w := width(rs, size)
	along := -w * float64(a) / 2
	var q vg.Path
	for _, r := range rs {
		f, em, up := faceOf(r), sizeOf(r, size), rise(r, size)
		for _, c := range r.Text {
			place := func(p point) vg.Point {
				dx, dy := along+em*p.x, up+em*p.y
				if upwards {
					return s.at(point{x - dy, y - dx})
				}
				return s.at(point{x + dx, y - dy})
			}
			open := false
			f.outline(c,
				func(p point) {
					if open {
						q.Close()
					}
					open = true
					q.Move(place(p))
				},
				func(p point) { q.Line(place(p)) },
				func(c, p point) { q.QuadTo(place(c), place(p)) },
				func(c, d, p point) { q.CubeTo(place(c), place(d), place(p)) })
			if open {
				q.Close()
			}
			along += em * f.advance(c)
		}
	}
	if len(q) > 0 {
		s.c.Fill(q)
	}
}

func (s *canvas) cells(xs, ys []float64, index [][]uint8, palette []color.RGBA) {
	for j := range index {
		for i := 0; i < len(index[j]); {
			k := i + 1
			for k < len(index[j]) && index[j][k] == index[j][i] {
				k++
			}
			if n := index[j][i]; n != 255 {
				var p path
				// A little too large, so that no seam shows between cells.
				p.rect(box{xs[i], ys[j], min(xs[k]+0.15, xs[len(xs)-1]), min(ys[j+1]+0.15, ys[len(ys)-1])})
				s.fill(&p, paint{rgb: palette[n], alpha: 1})
			}
			i = k
		}
	}
}
