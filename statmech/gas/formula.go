package gas

import (
	"fmt"
	"math"
	"sort"
	"strconv"
	"strings"

	"levelsum/statmech/unit"
)

// A Formula is what a molecule is made of: how many atoms of each element or
// isotope, and the charge number.
type Formula struct {
	Text   string
	Atoms  map[string]int // by symbol; isotopes as "35Cl", "D"
	Charge int
}

// ParseFormula reads "H2O", "C2H6", "(CH3)2O", "NO2", "H3O+", "SO4-2", and
// isotopes in square brackets, "[35Cl]2", or D and T. It returns an error that
// names what is no element known here.
func ParseFormula(text string) (Formula, error) {
	f := Formula{Text: text, Atoms: map[string]int{}}
	body := strings.TrimSpace(text)
	if i := strings.LastIndexAny(body, "+-"); i > 0 {
		n := 1
		digits := body[i+1:]
		if digits != "" {
			var err error
			if n, err = strconv.Atoi(digits); err != nil || n < 1 {
				return Formula{}, fmt.Errorf("gas: formula %q: charge %q not understood", text, body[i:])
			}
		}
		if body[i] == '-' {
			n = -n
		}
		f.Charge, body = n, body[:i]
	}
	rest, err := f.group(body, 1, 0)
	if err != nil {
		return Formula{}, fmt.Errorf("gas: formula %q: %w", text, err)
	}
	if rest != "" || len(f.Atoms) == 0 {
		return Formula{}, fmt.Errorf("gas: formula %q: %q not understood", text, rest)
	}
	return f, nil
}

// group reads units up to the end or a closing parenthesis and adds them n times.
func (f *Formula) group(s string, n, depth int) (string, error) {
	for s != "" && s[0] != ')' {
		if s[0] == '(' {
			end := closing(s)
			if end < 0 || depth > 8 {
				return s, fmt.Errorf("parentheses do not match")
			}
			k, after, err := count(s[end+1:])
			if err != nil {
				return s, err
			}
			if rest, err := f.group(s[1:end], n*k, depth+1); err != nil || rest != "" {
				return s, fmt.Errorf("%q not understood", s[1:end])
			}
			s = after
			continue
		}
		name, after, err := symbol(s)
		if err != nil {
			return s, err
		}
		k, after, err := count(after)
		if err != nil {
			return s, err
		}
		f.Atoms[name] += n * k
		s = after
	}
	return s, nil
}

func closing(s string) int {
	depth := 0
	for i := range len(s) {
		switch s[i] {
		case '(':
			depth++
		case ')':
			if depth--; depth == 0 {
				return i
			}
		}
	}
	return -1
}

// symbol reads an element, D, T or an isotope in brackets.
func symbol(s string) (name, rest string, err error) {
	if s[0] == '[' {
		end := strings.IndexByte(s, ']')
		if end < 0 {
			return "", s, fmt.Errorf("a bracket is not closed")
		}
		i, err := unit.IsotopeOf(s[1:end])
		if err != nil {
			return "", s, err
		}
		return i.String(), s[end+1:], nil
	}
	if s[0] < 'A' || s[0] > 'Z' {
		return "", s, fmt.Errorf("%q where an element is wanted", s)
	}
	n := 1
	for n < len(s) && s[n] >= 'a' && s[n] <= 'z' {
		n++
	}
	name = s[:n]
	if name == "D" || name == "T" {
		i, err := unit.IsotopeOf(name)
		return i.String(), s[n:], err
	}
	if _, err := unit.ElementOf(name); err != nil {
		return "", s, err
	}
	return name, s[n:], nil
}

func count(s string) (n int, rest string, err error) {
	i := 0
	for i < len(s) && s[i] >= '0' && s[i] <= '9' {
		i++
	}
	if i == 0 {
		return 1, s, nil
	}
	n, err = strconv.Atoi(s[:i])
	if err != nil || n < 1 || n > 1000 {
		return 0, s, fmt.Errorf("the count %q is not between 1 and 1000", s[:i])
	}
	return n, s[i:], nil
}

// Count returns the number of atoms.
func (f Formula) Count() int {
	n := 0
	for _, k := range f.Atoms {
		n += k
	}
	return n
}

// symbols returns the atoms in alphabetical order.
func (f Formula) symbols() []string {
	var s []string
	for a := range f.Atoms {
		s = append(s, a)
	}
	sort.Strings(s)
	return s
}

// Elements returns how many atoms of each element there are, isotopes counted
// with their element.
func (f Formula) Elements() map[string]int {
	e := map[string]int{}
	for a, n := range f.Atoms {
		e[elementSymbol(a)] += n
	}
	return e
}

func elementSymbol(atom string) string { return strings.TrimLeft(atom, "0123456789") }

// Mass returns the mean mass of the molecule: standard atomic weights, for an
// isotope its own mass, less the electrons of a positive charge. u is the
// standard uncertainty from the atomic weights as IUPAC states it, which covers
// the variation of normal materials.
func (f Formula) Mass() (m, u unit.Mass, err error) {
	var v float64
	for _, a := range f.symbols() {
		n := unit.Mass(f.Atoms[a])
		if a[0] >= '0' && a[0] <= '9' {
			i, err := unit.IsotopeOf(a)
			if err != nil {
				return 0, 0, err
			}
			m += n * i.Mass
			v += float64(n*i.StandardUncertainty) * float64(n*i.StandardUncertainty)
			continue
		}
		e, err := unit.ElementOf(a)
		if err != nil {
			return 0, 0, err
		}
		m += n * e.Mass
		v += float64(n*e.StandardUncertainty) * float64(n*e.StandardUncertainty)
	}
	return m - unit.Mass(f.Charge)*unit.Electron, unit.Mass(math.Sqrt(v)), nil
}

// Electrons returns the number of electrons.
func (f Formula) Electrons() (int, error) {
	n := -f.Charge
	for a, k := range f.Atoms {
		e, err := unit.ElementOf(elementSymbol(a))
		if err != nil {
			return 0, err
		}
		n += k * e.Number
	}
	return n, nil
}
