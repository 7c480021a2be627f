package draw

import (
	"image/color"
	"math"
)

func hex(v uint32) color.RGBA {
	return color.RGBA{uint8(v >> 16), uint8(v >> 8), uint8(v), 255}
}

// seriesColours have a contrast of at least 3 to white and to #1e1e1e
// (TestColours). The first three follow M. Okabe, K. Ito, Color Universal
// Design (2008), the blue a little lighter for dark pages; the others were
// chosen to keep apart from them.
var seriesColours = []color.RGBA{
	hex(0x127DC0), // blue
	hex(0xD55E00), // vermilion
	hex(0x009E73), // bluish green
	hex(0xB8639B), // purple
	hex(0x8F7A1E), // olive
	hex(0x7C7C7C), // grey
}

// dashes in points.
var dashes = [][]float64{nil, {5, 2.5}, {1.5, 2}, {7, 2, 1.5, 2}, {3, 1.5}}

// inkOnPaper is the ink where the page is known to be white.
var inkOnPaper = hex(0x1A1A1A)

const (
	lineWidth  = 1.25
	barWidth   = 0.8
	frameWidth = 0.8
	tickWidth  = 0.6
	majorTick  = 4.2
	minorTick  = 2.3
	barAlpha   = 0.65
	bandAlpha  = 0.26
)

func series(i int) paint {
	if i < 0 {
		return paint{ink: true, alpha: 1}
	}
	return paint{rgb: seriesColours[i%len(seriesColours)], alpha: 1}
}

func (p paint) with(alpha float64) paint { p.alpha *= alpha; return p }

func dashOf(i int) []float64 { return dashes[i%len(dashes)] }

// paletteSize is the number of colours of a map.
const paletteSize = 128

// sequential goes from a deep blue over green to a pale yellow with lightness
// rising in equal steps, so that it reads the same without colours. It is
// computed in the colour space of B. Ottosson, Oklab (2020).
func sequential() []color.RGBA {
	out := make([]color.RGBA, paletteSize)
	for i := range out {
		t := float64(i) / (paletteSize - 1)
		out[i] = oklch(0.28+0.66*t, 0.08+0.04*math.Sin(math.Pi*t), 275-175*t)
	}
	return out
}

// diverging goes from blue over a neutral middle to vermilion.
func diverging() []color.RGBA {
	out := make([]color.RGBA, paletteSize)
	for i := range out {
		t := 2*float64(i)/(paletteSize-1) - 1
		h := 250.0
		if t > 0 {
			h = 45
		}
		a := math.Abs(t)
		out[i] = oklch(0.95-0.5*a, 0.15*a, h)
	}
	return out
}

// oklch converts lightness, chroma and hue in degrees to sRGB. The matrices
// are those of Ottosson's definition.
// A colour that no screen has gets less chroma until it is one.
func oklch(l, c, h float64) color.RGBA {
	for {
		rgb := linear(l, c, h)
		if min(rgb[0], rgb[1], rgb[2]) >= -1e-4 && max(rgb[0], rgb[1], rgb[2]) <= 1+1e-4 || c < 0.001 {
			return color.RGBA{srgb(rgb[0]), srgb(rgb[1]), srgb(rgb[2]), 255}
		}
		c -= 0.001
	}
}

func linear(l, c, h float64) [3]float64 {
	a, b := c*math.Cos(h*math.Pi/180), c*math.Sin(h*math.Pi/180)
	l1 := l + 0.3963377774*a + 0.2158037573*b
	m1 := l - 0.1055613458*a - 0.0638541728*b
	s1 := l - 0.0894841775*a - 1.2914855480*b
	l1, m1, s1 = l1*l1*l1, m1*m1*m1, s1*s1*s1
	return [3]float64{
		4.0767416621*l1 - 3.3077115913*m1 + 0.2309699292*s1,
		-1.2684380046*l1 + 2.6097574011*m1 - 0.3413193965*s1,
		-0.0041960863*l1 - 0.7034186147*m1 + 1.7076147010*s1}
}

func srgb(x float64) uint8 {
	x = min(max(x, 0), 1)
	if x <= 0.0031308 {
		x *= 12.92
	} else {
		x = 1.055*math.Pow(x, 1/2.4) - 0.055
	}
	return uint8(math.Round(255 * x))
}

// luminance is the relative luminance of WCAG 2.
func luminance(c color.RGBA) float64 {
	lin := func(v uint8) float64 {
		x := float64(v) / 255
		if x <= 0.04045 {
			return x / 12.92
		}
		return math.Pow((x+0.055)/1.055, 2.4)
	}
	return 0.2126*lin(c.R) + 0.7152*lin(c.G) + 0.0722*lin(c.B)
}

// contrast is the contrast ratio of WCAG 2.
func contrast(a, b color.RGBA) float64 {
	la, lb := luminance(a), luminance(b)
	return (max(la, lb) + 0.05) / (min(la, lb) + 0.05)
}
