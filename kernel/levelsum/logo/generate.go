//go:build ignore

// This program draws the kernel's logo, a stack of energy levels beside a sum
// sign, as the files that front ends look for in a kernelspec.
package main

import (
	"bytes"
	"fmt"
	"image"
	"image/color"
	"image/png"
	"log"
	"math"
	"os"
	"path/filepath"
)

// The drawing is 64 units wide and high, y downwards.
const size = 64

type point struct{ x, y float64 }

type shape struct {
	fill    color.NRGBA
	outline []point
}

// drawing returns the shapes, those behind first. The levels lie closer the
// higher they are and are the shorter the fewer systems are in them.
func drawing() []shape {
	ground := color.NRGBA{0x23, 0x2f, 0x4d, 0xff}
	sum := color.NRGBA{0xf4, 0xf1, 0xe6, 0xff}
	level := color.NRGBA{0x4f, 0xc3, 0xb2, 0xff}
	shapes := []shape{
		{ground, rounded(1, 1, 63, 63, 11)},
		{sum, []point{
			{9, 12}, {35, 12}, {35, 19}, {20, 19}, {29.5, 32}, {20, 45}, {35, 45}, {35, 52},
			{9, 52}, {9, 46}, {19.5, 32}, {9, 18},
		}},
	}
	for _, l := range []struct{ y, length float64 }{{49.5, 17}, {34.5, 12}, {22.5, 8}, {14, 5}} {
		shapes = append(shapes, shape{level, []point{
			{40, l.y - 2.5}, {40 + l.length, l.y - 2.5}, {40 + l.length, l.y + 2.5}, {40, l.y + 2.5},
		}})
	}
	return shapes
}

// rounded is a rectangle with corners of radius r.
func rounded(x0, y0, x1, y1, r float64) []point {
	const steps = 16
	var out []point
	for corner, c := range []point{{x1 - r, y1 - r}, {x0 + r, y1 - r}, {x0 + r, y0 + r}, {x1 - r, y0 + r}} {
		for i := range steps + 1 {
			sin, cos := math.Sincos(math.Pi / 2 * (float64(corner) + float64(i)/steps))
			out = append(out, point{c.x + float64(r*cos), c.y + float64(r*sin)})
		}
	}
	return out
}

func svg(shapes []shape) []byte {
	var b bytes.Buffer
	fmt.Fprintf(&b, `<svg xmlns="http://www.w3.org/2000/svg" width="%d" height="%d" viewBox="0 0 %d %d">`+"\n<title>Levelsum</title>\n", size, size, size, size)
	for _, s := range shapes {
		fmt.Fprintf(&b, `<path fill="#%02x%02x%02x" d="`, s.fill.R, s.fill.G, s.fill.B)
		for i, p := range s.outline {
			op := "L"
			if i == 0 {
				op = "M"
			}
			fmt.Fprintf(&b, "%s%.4g %.4g", op, p.x, p.y)
		}
		b.WriteString("Z\"/>\n")
	}
	b.WriteString("</svg>\n")
	return b.Bytes()
}

// inside counts crossings of a ray to the right.
func inside(outline []point, x, y float64) bool {
	in := false
	for i, a := range outline {
		b := outline[(i+1)%len(outline)]
		if (a.y > y) != (b.y > y) && x < a.x+float64((y-a.y)/(b.y-a.y)*(b.x-a.x)) {
			in = !in
		}
	}
	return in
}

// raster draws at a width in pixels, from 8 × 8 points a pixel.
func raster(shapes []shape, pixels int) ([]byte, error) {
	const sub = 8
	img := image.NewNRGBA(image.Rect(0, 0, pixels, pixels))
	unit := float64(size) / float64(pixels*sub)
	for py := range pixels {
		for px := range pixels {
			var r, g, b, a int
			for i := range sub * sub {
				x := (float64(px*sub+i%sub) + 0.5) * unit
				y := (float64(py*sub+i/sub) + 0.5) * unit
				for k := len(shapes) - 1; k >= 0; k-- {
					if inside(shapes[k].outline, x, y) {
						c := shapes[k].fill
						r, g, b, a = r+int(c.R), g+int(c.G), b+int(c.B), a+1
						break
					}
				}
			}
			if a > 0 {
				img.SetNRGBA(px, py, color.NRGBA{uint8(r / a), uint8(g / a), uint8(b / a), uint8(255 * a / (sub * sub))})
			}
		}
	}
	var out bytes.Buffer
	enc := png.Encoder{CompressionLevel: png.BestCompression}
	err := enc.Encode(&out, img)
	return out.Bytes(), err
}

func main() {
	log.SetFlags(0)
	shapes := drawing()
	files := map[string][]byte{"logo-svg.svg": svg(shapes)}
	for _, pixels := range []int{32, 64} {
		data, err := raster(shapes, pixels)
		if err != nil {
			log.Fatal(err)
		}
		files[fmt.Sprintf("logo-%dx%d.png", pixels, pixels)] = data
	}
	for name, data := range files {
		if err := os.WriteFile(filepath.Join("logo", name), data, 0o666); err != nil {
			log.Fatal(err)
		}
	}
}
