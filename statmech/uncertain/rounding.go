package uncertain

import (
	"fmt"
	"math"
	"strconv"
	"strings"

	"levelsum/statmech"
)

// A Rule says to how many digits a standard uncertainty is rounded in print.
type Rule int

const (
	// TwoDigits keeps two significant digits of u and the same place of the
	// value (JCGM 100:2008, 7.2.6). It is the rule of this package where none
	// is named.
	TwoDigits Rule = iota
	// Rule355 looks at the first three digits of u: 100 to 354 keep two
	// digits, 355 to 949 one, and 950 to 999 become 1000 and keep two (Particle
	// Data Group, Review of Particle Physics, Introduction, 5.3).
	Rule355
)

// Round returns value and u rounded to the same decimal place by the rule,
// half to even in the last place kept, as decimal texts of equal number of
// decimals. The rounding is that of the exact binary numbers.
func (r Rule) Round(value, u float64) (valueText, uText string) {
	finite("Rule.Round", "value", value)
	finite("Rule.Round", "u", u)
	if u < 0 {
		panic(&statmech.DomainError{Func: "uncertain.Rule.Round", Arg: "u", Value: fmt.Sprint(u), Want: "not negative"})
	}
	if u == 0 {
		return strconv.FormatFloat(value, 'g', -1, 64), "0"
	}
	digits, exp := r.digits(u)
	place := exp - digits + 1 // decimal exponent of the last place kept
	return atPlace(value, place), atPlace(u, place)
}

// digits returns how many digits of u are kept and the decimal exponent of the
// first one, after rounding.
func (r Rule) digits(u float64) (digits, exp int) {
	mantissa, exp := scientific(u, 3)
	if r == Rule355 {
		switch m, _ := strconv.Atoi(mantissa); {
		case m < 355:
			return 2, exp
		case m < 950:
			return 1, exp
		default:
			return 2, exp + 1
		}
	}
	_, exp = scientific(u, 2) // 0.0996 becomes 0.10, not 0.100
	return 2, exp
}

// scientific returns the first n significant digits of x > 0 and its exponent.
func scientific(x float64, n int) (digits string, exp int) {
	s := strconv.FormatFloat(x, 'e', n-1, 64)
	m, e, _ := strings.Cut(s, "e")
	exp, _ = strconv.Atoi(e)
	return strings.Replace(m, ".", "", 1), exp
}

// atPlace returns x rounded to a multiple of 10^place.
func atPlace(x float64, place int) string {
	if place <= 0 {
		return noNegativeZero(strconv.FormatFloat(x, 'f', -place, 64))
	}
	// Through the exact decimal digits, so that no second rounding occurs.
	if x == 0 {
		return "0"
	}
	_, exp := scientific(math.Abs(x), 17)
	n := exp - place + 1
	if n < 1 { // x is below half of the place, or about it
		if math.Abs(x) > 0.5*math.Pow10(place) {
			return noNegativeZero(strconv.FormatFloat(math.Copysign(math.Pow10(place), x), 'f', 0, 64))
		}
		return "0"
	}
	y, _ := strconv.ParseFloat(strconv.FormatFloat(x, 'e', n-1, 64), 64)
	return noNegativeZero(strconv.FormatFloat(y, 'f', 0, 64))
}

func noNegativeZero(s string) string {
	if strings.HasPrefix(s, "-") && strings.Trim(s, "-0.") == "" {
		return s[1:]
	}
	return s
}

// A Notation says how a value and its standard uncertainty are written.
type Notation struct {
	Rule      Rule
	PlusMinus bool // 10.058 ± 0.027 in place of 10.058(27)
}

// Format writes a value with a standard uncertainty: 10.058(27), or
// 10.058 ± 0.027. Large and small numbers get one power of ten for both. An
// uncertainty above the value's first digits keeps its decimal point inside
// the parentheses: 1.5(1.2).
func (f Notation) Format(value, u float64) string {
	finite("Notation.Format", "value", value)
	finite("Notation.Format", "u", u)
	if u == 0 {
		return strconv.FormatFloat(value, 'g', -1, 64)
	}
	power := 0
	if size := max(math.Abs(value), u); size >= 1e7 || size < 1e-4 || u >= 1e3 && size >= 1e4 || u < 1e-9 {
		_, power = scientific(size, 17)
		// Rounding may carry 9.99 to 10.0.
		if v, w := f.Rule.Round(shiftDecimal(value, -power), shiftDecimal(u, -power)); strings.HasPrefix(strings.TrimPrefix(v, "-"), "10") || strings.HasPrefix(w, "10") {
			power++
		}
	}
	suffix := ""
	if power != 0 {
		value, u = shiftDecimal(value, -power), shiftDecimal(u, -power)
		suffix = "×10" + raised(power)
	}
	v, w := f.Rule.Round(value, u)
	if f.PlusMinus {
		if suffix != "" {
			return "(" + v + " ± " + w + ")" + suffix
		}
		return v + " ± " + w
	}
	if strings.HasPrefix(w, "0.") {
		w = strings.TrimLeft(w[2:], "0")
	}
	return v + "(" + w + ")" + suffix
}

// raised writes an exponent with raised digits.
func raised(n int) string {
	var b strings.Builder
	for _, r := range strconv.Itoa(n) {
		if r == '-' {
			b.WriteRune('⁻')
			continue
		}
		b.WriteRune([]rune("⁰¹²³⁴⁵⁶⁷⁸⁹")[r-'0'])
	}
	return b.String()
}

// shiftDecimal returns x·10^n by its shortest decimal text, so that 962e-4
// stays 962 and does not become 961.9999.
func shiftDecimal(x float64, n int) float64 {
	m, e, _ := strings.Cut(strconv.FormatFloat(x, 'e', -1, 64), "e")
	exp, _ := strconv.Atoi(e)
	y, err := strconv.ParseFloat(m+"e"+strconv.Itoa(exp+n), 64)
	if err != nil {
		return x * math.Pow10(n)
	}
	return y
}

// String writes the value, its standard uncertainty in the short notation with
// two digits, and the unit: "10.058(27) J/(mol K)".
func (q Quantity) String() string { return q.Format(Notation{}) }

// Format writes q in a notation of choice.
func (q Quantity) Format(f Notation) string {
	n := q.node()
	var s string
	switch {
	case n.withheld != "":
		s = strconv.FormatFloat(n.value, 'g', 6, 64)
	default:
		s = f.Format(n.value, q.StandardUncertainty())
		if f.PlusMinus && n.unit != "" && strings.Contains(s, "±") && !strings.HasPrefix(s, "(") {
			s = "(" + s + ")"
		}
	}
	if n.unit != "" && n.unit != "1" {
		s += " " + n.unit
	}
	if n.withheld != "" {
		s += " (no standard uncertainty: " + n.withheld + ")"
	}
	return s
}

// Expanded writes value ± k·u and names k, as "10.058 ± 0.054 (k = 2)". There
// is no way to print an expanded uncertainty without its coverage factor.
func (q Quantity) Expanded(k float64) string {
	if !(k > 0) || math.IsInf(k, 0) {
		panic(&statmech.DomainError{Func: "uncertain.Quantity.Expanded", Arg: "k", Value: fmt.Sprint(k), Want: "a coverage factor, positive and finite"})
	}
	s := Notation{PlusMinus: true}.Format(q.Value(), k*q.StandardUncertainty())
	if u := q.Unit(); u != "" && u != "1" {
		if !strings.HasPrefix(s, "(") {
			s = "(" + s + ")"
		}
		s += " " + u
	}
	return s + " (k = " + strconv.FormatFloat(k, 'g', -1, 64) + ")"
}

// CorrelationText writes a correlation coefficient with three digits.
func CorrelationText(r float64) string {
	return noNegativeZero(strconv.FormatFloat(r, 'f', 3, 64))
}
