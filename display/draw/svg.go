package draw

import (
	"bytes"
	"encoding/base64"
	"image"
	"image/color"
	"image/png"
	"math"
	"strconv"
	"strings"

	"levelsum/display/internal/mark"
)

// svg writes a drawing as SVG. Coordinates are relative, in hundredths of a
// point; marks of one kind share one path.
type svg struct {
	b bytes.Buffer
}

// svgDocument puts a drawing into a document. One that stands alone brings paper
// and ink, light or dark as the reader prefers; one in a page takes the page's.
func svgDocument(w, h float64, alt string, alone bool, body []byte) []byte {
	head := `<svg xmlns="http://www.w3.org/2000/svg" role="img" aria-label="` + mark.Escape(alt) + `" width="` + num(w*4/3) +
		`" height="` + num(h*4/3) + `" viewBox="0 0 ` + num(w) + " " + num(h) + `" font-family="Liberation Sans, Arial, Helvetica, sans-serif"`
	if alone {
		head += `>` + "\n" + `<style>svg{color:#1a1a1a;background:#fff}@media (prefers-color-scheme:dark){svg{color:#e4e4e4;background:#15171a}}</style>` +
			"\n<title>" + mark.Escape(alt) + "</title>" // in a page it would be a tooltip over the whole figure
	} else {
		head += ` style="max-width:100%;height:auto;background:transparent">`
	}
	head += "\n" + `<g fill="none" stroke-linejoin="round">` + "\n"
	const tail = "</g>\n</svg>\n"
	out := make([]byte, 0, len(head)+len(body)+len(tail))
	return append(append(append(out, head...), body...), tail...)
}

// num writes a length with two decimals at most.
func num(x float64) string { return string(appendCenti(nil, centi(x))) }

func centi(x float64) int { return int(math.Round(x * 100)) }

// appendCenti writes n hundredths, without zeros that say nothing.
func appendCenti(b []byte, n int) []byte {
	if n < 0 {
		b = append(b, '-')
		n = -n
	}
	whole, frac := n/100, n%100
	if whole != 0 || frac == 0 {
		b = strconv.AppendInt(b, int64(whole), 10)
	}
	if frac != 0 {
		b = append(b, '.', byte('0'+frac/10))
		if frac%10 != 0 {
			b = append(b, byte('0'+frac%10))
		}
	}
	return b
}

// data writes a path: m for the first place of a polyline, l, h, v for what
// follows, relative to the place before.
func (p *path) data() []byte {
	b := make([]byte, 0, 12*len(p.ops))
	x, y, sx, sy := 0, 0, 0, 0
	var last byte
	for _, o := range p.ops {
		nx, ny := centi(o.x), centi(o.y)
		dx, dy := nx-x, ny-y
		switch {
		case o.kind == 'Z':
			b = append(b, 'z')
			x, y, last = sx, sy, 'z'
			continue
		case o.kind == 'M':
			b = append(b, 'm')
			b = pair(b, dx, dy)
			sx, sy, last = nx, ny, 'm'
		case dy == 0 && dx != 0:
			b = append(b, 'h')
			b = appendCenti(b, dx)
			last = 'h'
		case dx == 0 && dy != 0:
			b = append(b, 'v')
			b = appendCenti(b, dy)
			last = 'v'
		case dx == 0 && dy == 0:
			continue
		default:
			if last != 'l' && last != 'm' {
				b = append(b, 'l')
			} else if dx >= 0 {
				b = append(b, ' ')
			}
			b = pair(b, dx, dy)
			if last != 'm' {
				last = 'l'
			}
		}
		x, y = nx, ny
	}
	return b
}

func pair(b []byte, x, y int) []byte {
	b = appendCenti(b, x)
	if y >= 0 {
		b = append(b, ' ')
	}
	return appendCenti(b, y)
}

func (s *svg) colour(name string, p paint) {
	c := "currentColor"
	if !p.ink {
		c = hexOf(p.rgb)
	}
	s.b.WriteString(` ` + name + `="` + c + `"`)
	if p.alpha < 1 {
		s.b.WriteString(` ` + name + `-opacity="` + num(p.alpha) + `"`)
	}
}

func hexOf(c color.RGBA) string {
	const digits = "0123456789abcdef"
	return string([]byte{'#', digits[c.R>>4], digits[c.R&15], digits[c.G>>4], digits[c.G&15], digits[c.B>>4], digits[c.B&15]})
}

func (s *svg) stroke(p *path, by pen) {
	if len(p.ops) == 0 {
		return
	}
	s.b.WriteString("<path")
	s.colour("stroke", by.paint)
	s.b.WriteString(` stroke-width="` + num(by.width) + `"`)
	if by.round {
		s.b.WriteString(` stroke-linecap="round"`)
	}
	if len(by.dash) > 0 {
		s.b.WriteString(` stroke-dasharray="`)
		for i, d := range by.dash {
			if i > 0 {
				s.b.WriteByte(' ')
			}
			s.b.WriteString(num(d))
		}
		s.b.WriteByte('"')
	}
	s.b.WriteString(` d="`)
	s.b.Write(p.data())
	s.b.WriteString("\"/>\n")
}

func (s *svg) fill(p *path, with paint) {
	if len(p.ops) == 0 {
		return
	}
	s.b.WriteString("<path")
	s.colour("fill", with)
	s.b.WriteString(` d="`)
	s.b.Write(p.data())
	s.b.WriteString("\"/>\n")
}

// dots writes discs as lines of no length with round ends, the shortest form.
func (s *svg) dots(at []point, radius float64, with paint) {
	if len(at) == 0 {
		return
	}
	s.b.WriteString("<path")
	s.colour("stroke", with)
	s.b.WriteString(` stroke-width="` + num(2*radius) + `" stroke-linecap="round" d="`)
	b := make([]byte, 0, 14*len(at))
	x, y := 0, 0
	for _, p := range at {
		nx, ny := centi(p.x), centi(p.y)
		b = append(b, 'm')
		b = pair(b, nx-x, ny-y)
		b = append(b, 'h', '0')
		x, y = nx, ny
	}
	s.b.Write(b)
	s.b.WriteString("\"/>\n")
}

func (s *svg) text(rs []mark.Run, x, y, size float64, a anchor, upwards bool, with paint) {
	if len(rs) == 0 {
		return
	}
	s.b.WriteString("<text")
	if upwards {
		s.b.WriteString(` transform="translate(` + num(x) + " " + num(y) + `)rotate(-90)"`)
	} else {
		s.b.WriteString(` x="` + num(x) + `" y="` + num(y) + `"`)
	}
	s.b.WriteString(` font-size="` + num(size) + `"`)
	if a != start {
		s.b.WriteString(` text-anchor="` + [...]string{"start", "middle", "end"}[a] + `"`)
	}
	s.colour("fill", with)
	s.b.WriteByte('>')
	up, gap := 0.0, 0.0
	for i, r := range rs {
		// A space at the border of a run is lost in some viewers: a shift
		// stands for it.
		text := strings.ReplaceAll(r.Text, "\u00a0", " ")
		space := sizeOf(r, size) * faceOf(r).advance(' ')
		for i > 0 && strings.HasPrefix(text, " ") {
			text, gap = text[1:], gap+space
		}
		next := 0.0
		for i+1 < len(rs) && strings.HasSuffix(text, " ") {
			text, next = text[:len(text)-1], next+space
		}
		if text == "" {
			gap += next
			continue
		}
		text = strings.ReplaceAll(mark.Escape(text), "  ", "\u00a0 ")
		attr := ""
		if gap > 0 {
			attr += ` dx="` + num(gap) + `"`
		}
		gap = next
		if d := up - rise(r, size); d != 0 {
			attr += ` dy="` + num(d) + `"`
		}
		up = rise(r, size)
		if r.Shift != 0 {
			attr += ` font-size="` + num(sizeOf(r, size)) + `"`
		}
		if r.Italic {
			attr += ` font-style="italic"`
		}
		if attr == "" {
			s.b.WriteString(text)
		} else {
			s.b.WriteString("<tspan" + attr + ">" + text + "</tspan>")
		}
	}
	s.b.WriteString("</text>\n")
}

// cells writes an even grid as an image with one pixel a cell, another one as
// rectangles.
func (s *svg) cells(xs, ys []float64, index [][]uint8, palette []color.RGBA) {
	if even(xs) && even(ys) {
		pal := make(color.Palette, len(palette)+1)
		for i, c := range palette {
			pal[i] = c
		}
		pal[len(palette)] = color.RGBA{}
		img := image.NewPaletted(image.Rect(0, 0, len(xs)-1, len(ys)-1), pal)
		for j := range index {
			for i, n := range index[j] {
				if n == 255 {
					n = uint8(len(palette))
				}
				img.SetColorIndex(i, j, n)
			}
		}
		var b bytes.Buffer
		if err := png.Encode(&b, img); err == nil {
			s.b.WriteString(`<image x="` + num(xs[0]) + `" y="` + num(ys[0]) + `" width="` + num(xs[len(xs)-1]-xs[0]) +
				`" height="` + num(ys[len(ys)-1]-ys[0]) + `" preserveAspectRatio="none" style="image-rendering:pixelated" href="data:image/png;base64,` +
				base64.StdEncoding.EncodeToString(b.Bytes()) + `"/>` + "\n")
			return
		}
	}
	s.b.WriteString(`<g shape-rendering="crispEdges">` + "\n")
	for n, c := range palette {
		var p path
		for j := range index {
			for i := 0; i < len(index[j]); i++ {
				if int(index[j][i]) != n {
					continue
				}
				k := i + 1
				for k < len(index[j]) && int(index[j][k]) == n {
					k++
				}
				p.rect(box{xs[i], ys[j], xs[k], ys[j+1]})
				i = k - 1
			}
		}
		s.fill(&p, paint{rgb: c, alpha: 1})
	}
	s.b.WriteString("</g>\n")
}

func even(v []float64) bool {
	step := (v[len(v)-1] - v[0]) / float64(len(v)-1)
	for i := 1; i < len(v); i++ {
		if math.Abs(v[i]-v[i-1]-step) > 0.01 {
			return false
		}
	}
	return true
}
