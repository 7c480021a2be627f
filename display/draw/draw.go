// Package draw renders the figures of package display with the vector
// graphics of gonum.org/v1/plot: SVG for pages, PDF and PNG for files. It is
// apart from display because it is large; a program that wants drawings calls
// [Register] once at its start.
//
// The look: a frame on four sides, major and minor ticks inward, ticks at 1, 2
// or 5 times a power of ten, a true minus sign, data as small filled marks
// with pale bars, fitted lines above them. Text and frame take the colour of
// the page (currentColor); the colours of data have a contrast of at least 3
// to white and to nearly black pages, and differ for colour-blind readers;
// marks and dashes differ as well.
//
// The output holds no identifiers, no scripts, no dates and no fonts: equal
// figures give equal bytes.
package draw

import (
	"bytes"
	"fmt"
	"regexp"

	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/vgimg"
	"gonum.org/v1/plot/vg/vgpdf"

	"levelsum/display"
	"levelsum/display/internal/scene"
)

// Register makes display draw its figures.
func Register() { display.SetRenderer(render) }

// pngDotsPerInch is the resolution of PNG files.
const pngDotsPerInch = 300

// creationDate is replaced in PDF files, so that equal figures give equal
// bytes.
var creationDate = regexp.MustCompile(`/(CreationDate|ModDate) \(D:\d{14}`)

// render draws a figure in some formats; both kinds of SVG are drawn once.
func render(f *scene.Figure, formats ...string) ([][]byte, error) {
	w, h := points(f.Width), points(f.Height)
	var out [][]byte
	var body []byte // of SVG
	for _, format := range formats {
		switch format {
		case "svg", "svg file":
			if body == nil {
				s := &svg{}
				draw(f, s, w, h)
				body = s.b.Bytes()
			}
			out = append(out, svgDocument(w, h, f.Alt, format == "svg file", body))
		case "pdf":
			c := vgpdf.New(vg.Length(w), vg.Length(h))
			draw(f, newCanvas(c, h), w, h)
			var b bytes.Buffer
			if _, err := c.WriteTo(&b); err != nil {
				return nil, fmt.Errorf("writing PDF: %w", err)
			}
			out = append(out, creationDate.ReplaceAll(b.Bytes(), []byte("/$1 (D:20000101000000")))
		case "png":
			c := vgimg.NewWith(vgimg.UseWH(vg.Length(w), vg.Length(h)), vgimg.UseDPI(pngDotsPerInch))
			draw(f, newCanvas(c, h), w, h)
			var b bytes.Buffer
			if _, err := (vgimg.PngCanvas{Canvas: c}).WriteTo(&b); err != nil {
				return nil, fmt.Errorf("writing PNG: %w", err)
			}
			out = append(out, b.Bytes())
		default:
			return nil, fmt.Errorf("no format %q", format)
		}
	}
	return out, nil
}

// points converts mm to points.
func points(mm float64) float64 { return mm * 72 / 25.4 }
