package display

import (
	"math"
	"strconv"
	"strings"

	"levelsum/display/internal/mark"
)

// A rounded number in parts, so that text, HTML and LaTeX write the same
// digits.
type rounded struct {
	digits string // "-343.21", with an ASCII minus
	unc    string // "70": the standard uncertainty in units of the last digit, or "1.2" where it reaches over the point
	exp    int    // power of ten that digits and unc are multiplied by
	word   string // "NaN", "∞", "-∞", "" or text
	split  bool   // the word is a number, to be aligned at its point
}

// round rounds v by its standard uncertainty u as JCGM 100:2008, 7.2.6 has it:
// u to two significant digits, v to the same place.
func round(v, u float64) rounded {
	if w, bad := notFinite(v); bad {
		return rounded{word: w}
	}
	if !(u > 0) || math.IsInf(u, 0) {
		return plainNumber(v, 10)
	}
	lead := math.Max(math.Abs(v), u)
	if lead >= 1e7 || lead < 1e-4 || u >= 1e3 && lead >= 1e4 || u < 1e-9 {
		return roundScientific(v, u)
	}
	return roundAt(v, u, decimalsOf(u, 2))
}

// roundScientific rounds v by u with one digit before the point.
func roundScientific(v, u float64) rounded {
	lead := math.Max(math.Abs(v), u)
	exp := exponent(lead)
	if w := scale10(lead, exp); roundsUp(w, scale10(u, exp)) {
		exp++ // rounding carries 9.99 to 10.0
	}
	sv, su := scale10(v, exp), scale10(u, exp)
	d := decimalsOf(su, 2)
	r := roundAt(sv, su, d)
	r.exp = exp
	return r
}

// roundsUp reports whether w, less than 10, becomes 10 when it is rounded by u.
func roundsUp(w, u float64) bool {
	return strings.HasPrefix(fixed(w, max(decimalsOf(u, 2), 0)), "10")
}

// roundAt rounds a value and its uncertainty to d decimals.
func roundAt(v, u float64, d int) rounded {
	r := rounded{digits: fixed(v, d)}
	us := strconv.FormatFloat(u, 'f', max(d, 0), 64)
	switch {
	case d <= 0:
		r.unc = fixed(u, d)
	case strings.HasPrefix(us, "0."):
		r.unc = strings.TrimLeft(strings.Replace(us, ".", "", 1), "0")
		if r.unc == "" {
			r.unc = "0"
		}
	default:
		r.unc = us
	}
	return r
}

// decimalsOf returns the number of decimals at which x has n significant
// digits once it is rounded there; negative to the left of the point.
func decimalsOf(x float64, n int) int {
	_, e, _ := strings.Cut(strconv.FormatFloat(x, 'e', n-1, 64), "e")
	k, _ := strconv.Atoi(e)
	return n - 1 - k
}

// exponent returns floor(log10|x|) without the rounding errors of a logarithm.
func exponent(x float64) int {
	_, e, _ := strings.Cut(strconv.FormatFloat(math.Abs(x), 'e', -1, 64), "e")
	k, _ := strconv.Atoi(e)
	return k
}

// scale10 returns x·10^-e with one rounding.
func scale10(x float64, e int) float64 {
	if e == 0 {
		return x
	}
	m, old, _ := strings.Cut(strconv.FormatFloat(x, 'e', -1, 64), "e")
	k, _ := strconv.Atoi(old)
	y, _ := strconv.ParseFloat(m+"e"+strconv.Itoa(k-e), 64)
	return y
}

// fixed writes x with d decimals; a negative d rounds to tens and hundreds. A
// result of zero has no sign.
func fixed(x float64, d int) string {
	var s string
	if d < 0 {
		s = strconv.FormatFloat(scale10(x, -d), 'f', 0, 64)
		if strings.Trim(s, "-0") != "" {
			s += strings.Repeat("0", -d)
		}
	} else {
		s = strconv.FormatFloat(x, 'f', d, 64)
	}
	if strings.Trim(s, "-0.") == "" {
		s = strings.TrimPrefix(s, "-")
	}
	return s
}

// plainNumber writes a number without an uncertainty to at most n significant
// digits, without zeros at the end.
func plainNumber(v float64, n int) rounded {
	if w, bad := notFinite(v); bad {
		return rounded{word: w}
	}
	if v == 0 {
		return rounded{digits: "0"}
	}
	s := strconv.FormatFloat(v, 'e', n-1, 64)
	m, es, _ := strings.Cut(s, "e")
	e, _ := strconv.Atoi(es)
	if e >= -4 && e < max(n, 7) {
		r := strconv.FormatFloat(v, 'f', max(n-1-e, 0), 64)
		return rounded{digits: trimZeros(r)}
	}
	return rounded{digits: trimZeros(m), exp: e}
}

// scientific writes a number that is not zero to at most n significant digits,
// one before the point.
func scientific(v float64, n int) rounded {
	m, es, _ := strings.Cut(strconv.FormatFloat(v, 'e', n-1, 64), "e")
	e, _ := strconv.Atoi(es)
	return rounded{digits: trimZeros(m), exp: e}
}

func trimZeros(s string) string {
	if !strings.Contains(s, ".") {
		return s
	}
	return strings.TrimSuffix(strings.TrimRight(s, "0"), ".")
}

func notFinite(v float64) (string, bool) {
	switch {
	case math.IsNaN(v):
		return "NaN", true
	case math.IsInf(v, 1):
		return "∞", true
	case math.IsInf(v, -1):
		return "-∞", true
	}
	return "", false
}

const minus = "−" // U+2212

// text writes the number as plain text with an ASCII minus, so that it can be
// copied into code.
func (r rounded) text() string {
	if r.word != "" {
		return r.word
	}
	s := r.digits
	if r.unc != "" {
		s += "(" + r.unc + ")"
	}
	if r.exp != 0 {
		p, _ := mark.Superscript(strconv.Itoa(r.exp))
		s += "×10" + p
	}
	return s
}

func (r rounded) html() string {
	if r.word != "" {
		return mark.Escape(strings.Replace(r.word, "-", minus, 1))
	}
	s := strings.Replace(r.digits, "-", minus, 1)
	if r.unc != "" {
		s += "(" + r.unc + ")"
	}
	if r.exp != 0 {
		s += "×10<sup>" + strings.Replace(strconv.Itoa(r.exp), "-", minus, 1) + "</sup>"
	}
	return s
}

// math writes the number for LaTeX's math mode.
func (r rounded) math() string {
	switch r.word {
	case "":
	case "∞":
		return `\infty`
	case "-∞":
		return `-\infty`
	default:
		return `\mathrm{` + r.word + `}`
	}
	s := r.digits
	if r.unc != "" {
		s += "(" + r.unc + ")"
	}
	if r.exp != 0 {
		s += `\times 10^{` + strconv.Itoa(r.exp) + "}"
	}
	return s
}

// full writes a number so that reading it gives the same float64.
func full(v float64) string { return strconv.FormatFloat(v, 'g', -1, 64) }
