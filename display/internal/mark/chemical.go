package mark

import (
	"strings"
	"unicode/utf8"
)

// elements are the symbols of the elements, a space around each. T (tritium)
// is left out: with a number below it is a temperature.
const elements = " H He Li Be B C N O F Ne Na Mg Al Si P S Cl Ar K Ca Sc Ti V Cr Mn Fe Co Ni Cu Zn Ga Ge As Se Br Kr Rb Sr Y Zr Nb Mo " +
	"Tc Ru Rh Pd Ag Cd In Sn Sb Te I Xe Cs Ba La Ce Pr Nd Pm Sm Eu Gd Tb Dy Ho Er Tm Yb Lu Hf Ta W Re Os Ir Pt Au Hg Tl Pb Bi Po At Rn " +
	"Fr Ra Ac Th Pa U Np Pu Am Cm D "

// How sure it is that a text is the formula of a substance.
type certainty int

const (
	noFormula certainty = iota
	perhaps             // H_2, N_2: also quantities with a number
	surely              // H_2O, Cl_2, Al_2O_3
)

// chemical returns how long the formula at the front of s is, and how sure it
// is that it is one: symbols of elements, at least one with a number below it,
// perhaps with parentheses.
func chemical(s string) (n int, sure certainty) {
	kinds, counts, single, first := 0, 0, true, byte(0)
	open := 0
	for n < len(s) {
		c := s[n]
		if c == '(' && n+1 < len(s) && element(s[n+1:]) > 0 && kinds > 0 {
			open++
			n++
			continue
		}
		if c == ')' && open > 0 {
			open--
			n++
		} else if k := element(s[n:]); k > 0 {
			if kinds == 0 {
				first = c
			}
			kinds++
			single = single && k == 1
			n += k
		} else {
			break
		}
		k, count := below(s[n:])
		if count == "1" || count == "0" {
			return 0, noFormula // P_1V_1 are quantities
		}
		if k > 0 {
			counts++
		}
		n += k
	}
	if open > 0 || counts == 0 || n < len(s) && (letters(s[n:]) != "" || s[n] == '_' || s[n] >= '0' && s[n] <= '9') {
		return 0, noFormula
	}
	if r, _ := utf8.DecodeRuneInString(s[n:]); strings.ContainsRune("₀₁", r) && n < len(s) {
		return 0, noFormula
	}
	if word, _, _ := strings.Cut(s[n:], " "); fileEnding(word) {
		return 0, noFormula
	}
	if kinds == 1 && single {
		if strings.IndexByte("HNOFIPS", first) < 0 {
			return 0, noFormula
		}
		return n, perhaps
	}
	return n, surely
}

// fileEnding reports whether the rest of a word ends it like the name of a
// file: Cu_7.csv, NaCl_2-b.txt.
func fileEnding(s string) bool {
	i := strings.LastIndexByte(s, '.')
	return i >= 0 && letters(s[i+1:]) != ""
}

// element returns the length of the symbol of an element at the front of s.
func element(s string) int {
	if s == "" || s[0] < 'A' || s[0] > 'Z' {
		return 0
	}
	if len(s) > 1 && s[1] >= 'a' && s[1] <= 'z' && strings.Contains(elements, " "+s[:2]+" ") {
		return 2
	}
	if strings.Contains(elements, " "+s[:1]+" ") {
		return 1
	}
	return 0
}

// below returns the length of a number below the line at the front of s, and
// the number.
func below(s string) (n int, count string) {
	if strings.HasPrefix(s, "_") {
		arg, rest := "", ""
		if len(s) > 1 {
			arg, rest = argument(s[1:])
		}
		if arg == "" || strings.Trim(arg, "0123456789.xn") != "" {
			return 0, ""
		}
		return len(s) - len(rest), arg
	}
	for n < len(s) {
		r, k := utf8.DecodeRuneInString(s[n:])
		base, shift := unshifted(r)
		if shift != -1 {
			break
		}
		count += string(base)
		n += k
	}
	return n, count
}

// substances reports whether a text names at least one substance beyond doubt,
// so that H_2 in it is hydrogen.
func substances(s string) bool {
	for i := range s {
		if wordBegins(s, i) {
			if _, sure := chemical(s[i:]); sure == surely {
				return true
			}
		}
	}
	return false
}

// wordBegins reports whether a formula may begin at i.
func wordBegins(s string, i int) bool {
	if i == 0 {
		return true
	}
	r, _ := utf8.DecodeLastRuneInString(s[:i])
	return strings.ContainsRune(" (,;:/=+-−–·[\u00a0", r) || r >= '0' && r <= '9' && (i == 1 || !isWord(s[i-2]))
}

func isWord(c byte) bool {
	return c >= 'a' && c <= 'z' || c >= 'A' && c <= 'Z' || c == '_' || c == '^' || c == '{'
}

// substance writes a formula as runs: upright, numbers below.
func substance(s string) []Run {
	var out []Run
	text := ""
	flush := func() {
		if text != "" {
			out = append(out, Run{Text: text})
			text = ""
		}
	}
	for s != "" {
		if n, count := below(s); n > 0 {
			flush()
			out = append(out, Run{Text: count, Shift: -1})
			s = s[n:]
			continue
		}
		text, s = text+s[:1], s[1:]
	}
	flush()
	return out
}
