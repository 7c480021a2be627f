package draw

import (
	"sync"

	"codeberg.org/go-fonts/liberation/liberationsansitalic"
	"codeberg.org/go-fonts/liberation/liberationsansregular"
	"golang.org/x/image/font"
	"golang.org/x/image/font/sfnt"
	"golang.org/x/image/math/fixed"

	"levelsum/display/internal/mark"
)

// Sub- and superscripts: their size, and how far they are moved, in ems of the
// text they belong to.
const (
	shiftSize = 0.7
	superRise = 0.36
	subDrop   = 0.18
)

// A face measures and outlines text. Liberation Sans has the widths of Arial
// and Helvetica, so that what is measured here fits what a browser sets.
type face struct {
	font *sfnt.Font
	em   float64
	mu   sync.Mutex // guards what follows
	buf  sfnt.Buffer
	wide map[rune]float64
}

var faces = sync.OnceValue(func() [2]*face {
	var out [2]*face
	for i, ttf := range [][]byte{liberationsansregular.TTF, liberationsansitalic.TTF} {
		f, err := sfnt.Parse(ttf)
		if err != nil {
			panic("draw: the built-in font does not parse: " + err.Error())
		}
		out[i] = &face{font: f, em: float64(f.UnitsPerEm()), wide: map[rune]float64{}}
	}
	return out
})

func faceOf(r mark.Run) *face {
	if r.Italic {
		return faces()[1]
	}
	return faces()[0]
}

// advance returns the width of a rune in ems.
func (f *face) advance(r rune) float64 {
	f.mu.Lock()
	defer f.mu.Unlock()
	if w, ok := f.wide[r]; ok {
		return w
	}
	w := 0.6
	if g, err := f.glyph(r); err == nil {
		ppem := fixed.I(int(f.em))
		if a, err := f.font.GlyphAdvance(&f.buf, g, ppem, font.HintingNone); err == nil {
			w = float64(a) / 64 / f.em
		}
	}
	f.wide[r] = w
	return w
}

// width returns the width of runs at a size.
func width(rs []mark.Run, size float64) float64 {
	w := 0.0
	for _, r := range rs {
		s, f := sizeOf(r, size), faceOf(r)
		for _, c := range r.Text {
			w += s * f.advance(c)
		}
	}
	return w
}

func sizeOf(r mark.Run, size float64) float64 {
	if r.Shift != 0 {
		return size * shiftSize
	}
	return size
}

// rise returns how far above the baseline a run stands.
func rise(r mark.Run, size float64) float64 {
	switch {
	case r.Shift > 0:
		return size * superRise
	case r.Shift < 0:
		return -size * subDrop
	}
	return 0
}

// substitutes stand for signs that the font lacks.
var substitutes = map[rune]rune{'⟨': '<', '⟩': '>', '\u00a0': ' ', '\u2009': ' ', '‐': '-', '⋅': '·', 'µ': 'μ'}

func (f *face) glyph(r rune) (sfnt.GlyphIndex, error) {
	g, err := f.font.GlyphIndex(&f.buf, r)
	if s, ok := substitutes[r]; g == 0 && err == nil && ok {
		return f.font.GlyphIndex(&f.buf, s)
	}
	return g, err
}

// outline calls its functions for the outline of a rune, in ems from the
// origin, y upwards.
func (f *face) outline(r rune, move, line func(p point), quad func(c, p point), cube func(c, d, p point)) {
	f.mu.Lock()
	defer f.mu.Unlock()
	g, err := f.glyph(r)
	if err != nil {
		return
	}
	segs, err := f.font.LoadGlyph(&f.buf, g, fixed.I(int(f.em)), nil)
	if err != nil {
		return
	}
	at := func(p fixed.Point26_6) point {
		return point{float64(p.X) / 64 / f.em, -float64(p.Y) / 64 / f.em}
	}
	for _, s := range segs {
		switch s.Op {
		case sfnt.SegmentOpMoveTo:
			move(at(s.Args[0]))
		case sfnt.SegmentOpLineTo:
			line(at(s.Args[0]))
		case sfnt.SegmentOpQuadTo:
			quad(at(s.Args[0]), at(s.Args[1]))
		case sfnt.SegmentOpCubeTo:
			cube(at(s.Args[0]), at(s.Args[1]), at(s.Args[2]))
		}
	}
}
