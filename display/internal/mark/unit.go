package mark

import (
	"strconv"
	"strings"
	"unicode"
)

// A factor of a unit: kJ, mol to the -1.
type factor struct {
	sym string
	exp int
}

var plainUnit = strings.NewReplacer("·", " ", "*", " ", "⁻", "-", "⁰", "0", "¹", "1", "²", "2", "³", "3",
	"⁴", "4", "⁵", "5", "⁶", "6", "−", "-", "^", "", "{", "", "}", "")

// factors parses a unit text: "J/(mol K)", "J mol-1 K-1", "J·mol^-1·K^-1",
// "cm-1", "m²". It reports false for what it does not understand, which is
// then shown as it stands.
func factors(s string) ([]factor, bool) {
	s = plainUnit.Replace(strings.TrimSpace(s))
	var out []factor
	sign, slashes, inParen := 1, 0, false
	closed := false // one denominator has been read outside parentheses
	for s != "" {
		c := s[0]
		switch {
		case c == ' ':
			s = s[1:]
		case c == '/':
			sign, closed = -1, false
			slashes++
			s = s[1:]
		case c == '(':
			if inParen || sign == 1 && slashes == 0 && len(out) == 0 {
				return nil, false
			}
			inParen = true
			s = s[1:]
		case c == ')':
			if !inParen {
				return nil, false
			}
			inParen, closed = false, true
			s = s[1:]
		default:
			if slashes > 0 && closed && !inParen {
				return nil, false // "J/mol K" can be read in two ways
			}
			n := 0
			for _, r := range s {
				if !unicode.IsLetter(r) && r != '°' && r != '%' && r != '_' {
					break
				}
				n += len(string(r))
			}
			if n == 0 {
				if c == '1' && len(out) == 0 { // 1/K
					s = s[1:]
					if s == "" || s[0] != '/' && s[0] != ' ' {
						return nil, false
					}
					continue
				}
				return nil, false
			}
			f := factor{sym: s[:n], exp: 1}
			s = s[n:]
			m := 0
			for m < len(s) && (s[m] >= '0' && s[m] <= '9' || m == 0 && (s[m] == '-' || s[m] == '+')) {
				m++
			}
			if m > 0 {
				e, err := strconv.Atoi(s[:m])
				if err != nil || e == 0 {
					return nil, false
				}
				f.exp, s = e, s[m:]
			}
			f.exp *= sign
			out = append(out, f)
			closed = slashes > 0 && !inParen
		}
	}
	return out, len(out) > 0 && !inParen
}

// Unit gives the runs of a unit as a product of powers ("J mol⁻¹ K⁻¹") and
// whether it has more than one factor.
func Unit(s string) (rs []Run, compound bool) {
	fs, ok := factors(s)
	if !ok {
		return Label(s), strings.ContainsAny(s, " /·*")
	}
	for i, f := range fs {
		sym := f.sym
		if i > 0 {
			sym = "\u00a0" + sym
		}
		rs = append(rs, Run{Text: sym})
		if f.exp != 1 {
			rs = append(rs, Run{Text: strings.ReplaceAll(strconv.Itoa(f.exp), "-", "−"), Shift: 1})
		}
	}
	return rs, len(fs) > 1
}

// Dimensionless reports whether the unit text stands for the unit one.
func Dimensionless(s string) bool { s = strings.TrimSpace(s); return s == "" || s == "1" }

// Over gives the runs of quantity / unit, the head of a column or the label of
// an axis.
func Over(quantity, unit string) []Run {
	rs := Symbol(quantity)
	if Dimensionless(unit) {
		return rs
	}
	u, compound := Unit(unit)
	if len(rs) > 0 {
		rs = append(rs, Run{Text: " / "})
	}
	if compound {
		rs = append(rs, Run{Text: "("})
	}
	rs = append(rs, u...)
	if compound {
		rs = append(rs, Run{Text: ")"})
	}
	return merge(rs)
}

func merge(rs []Run) []Run {
	var out []Run
	for _, r := range rs {
		if n := len(out); n > 0 && out[n-1].Shift == r.Shift && out[n-1].Italic == r.Italic {
			out[n-1].Text += r.Text
			continue
		}
		out = append(out, r)
	}
	return out
}

// SameUnit reports whether two unit texts say the same: the order of factors
// and the way of writing do not count.
func SameUnit(a, b string) bool {
	if strings.TrimSpace(a) == strings.TrimSpace(b) || Dimensionless(a) && Dimensionless(b) {
		return true
	}
	fa, oka := factors(a)
	fb, okb := factors(b)
	if !oka || !okb {
		return false
	}
	powers := map[string]int{}
	for _, f := range fa {
		powers[f.sym] += f.exp
	}
	for _, f := range fb {
		powers[f.sym] -= f.exp
	}
	for _, e := range powers {
		if e != 0 {
			return false
		}
	}
	return true
}

var bareUnit = strings.NewReplacer("^", "", "{", "", "}", "")

// AsWritten gives the runs of a unit in the writer's own arrangement, with
// exponents raised: "J/(mol K)" stays, "cm-1" gets its superscript.
func AsWritten(unit string) []Run {
	if _, ok := factors(unit); !ok {
		return Label(unit)
	}
	var rs []Run
	s := []rune(bareUnit.Replace(unit))
	for i := 0; i < len(s); {
		j := i
		if i > 0 && unicode.IsLetter(s[i-1]) {
			for j < len(s) && (unicode.IsDigit(s[j]) || j == i && (s[j] == '-' || s[j] == '−')) {
				j++
			}
		}
		if j > i && (j > i+1 || unicode.IsDigit(s[i])) {
			rs = append(rs, Run{Text: strings.ReplaceAll(string(s[i:j]), "-", "−"), Shift: 1})
			i = j
			continue
		}
		c := string(s[i])
		if c == " " {
			c = "\u00a0"
		}
		rs = append(rs, Run{Text: c})
		i++
	}
	return merge(rs)
}

// OverPower is [Over] for values that have been divided by 10^power; text
// takes the place of the quantity if it is not empty.
func OverPower(quantity, unit, text string, power int) []Run {
	if text != "" {
		return Label(text)
	}
	if power == 0 {
		return Over(quantity, unit)
	}
	rs := Symbol(quantity)
	if len(rs) > 0 {
		rs = append(rs, Run{Text: " / "})
	}
	p := Run{Text: strings.ReplaceAll(strconv.Itoa(power), "-", "−"), Shift: 1}
	if Dimensionless(unit) {
		return merge(append(rs, Run{Text: "10"}, p))
	}
	u, _ := Unit(unit)
	rs = append(rs, Run{Text: "(10"}, p, Run{Text: "\u00a0"})
	return merge(append(append(rs, u...), Run{Text: ")"}))
}

// Factors lists the factors of a unit text with their powers; ok is false if
// the text is not understood.
func Factors(unit string) (symbols []string, powers []int, ok bool) {
	if Dimensionless(unit) {
		return nil, nil, true
	}
	fs, ok := factors(unit)
	for _, f := range fs {
		symbols, powers = append(symbols, f.sym), append(powers, f.exp)
	}
	return symbols, powers, ok
}
