package display

import (
	"fmt"
	"math"
	"strings"

	"levelsum/display/internal/mark"
)

// A dimension is the powers of the base units kg, m, s, K, mol, A, cd.
type dimension [7]int

// dimensions of named units, from the SI brochure (BIPM, 9th edition, 2019,
// tables 4 and 8). Only the dimension counts here, so the eV is a J.
var dimensions = map[string]dimension{
	"kg": {1}, "g": {1}, "u": {1}, "Da": {1},
	"m": {0, 1}, "Å": {0, 1}, "s": {0, 0, 1}, "min": {0, 0, 1}, "h": {0, 0, 1}, "d": {0, 0, 1},
	"K": {0, 0, 0, 1}, "mol": {0, 0, 0, 0, 1}, "A": {0, 0, 0, 0, 0, 1}, "cd": {0, 0, 0, 0, 0, 0, 1},
	"Hz": {0, 0, -1}, "N": {1, 1, -2}, "Pa": {1, -1, -2}, "bar": {1, -1, -2}, "atm": {1, -1, -2}, "Torr": {1, -1, -2},
	"J": {1, 2, -2}, "cal": {1, 2, -2}, "eV": {1, 2, -2}, "W": {1, 2, -3},
	"C": {0, 0, 1, 0, 0, 1}, "V": {1, 2, -3, 0, 0, -1}, "T": {1, 0, -2, 0, 0, -1},
	"L": {0, 3}, "l": {0, 3}, "rad": {}, "%": {},
}

var prefixes = []string{"da", "Q", "R", "Y", "Z", "E", "P", "T", "G", "M", "k", "h", "d", "c", "m", "μ", "µ", "n", "p", "f", "a", "z", "y", "r", "q"}

// dimensionOf returns the dimension of a unit text, false if a part of it is
// not known.
func dimensionOf(unit string) (dimension, bool) {
	var d dimension
	symbols, powers, ok := mark.Factors(unit)
	if !ok {
		return d, false
	}
	for i, s := range symbols {
		f, known := dimensions[s]
		for _, p := range prefixes {
			if known {
				break
			}
			if rest, cut := strings.CutPrefix(s, p); cut && rest != "" && rest != "kg" {
				f, known = dimensions[rest]
			}
		}
		if !known {
			return d, false
		}
		for k := range d {
			d[k] += powers[i] * f[k]
		}
	}
	return d, true
}

// baseScales stand for other base units: if they are changed so, a formula
// whose units fit gives the same quantity. Their logarithms have no simple
// ratios.
var baseScales = [7]float64{1.0471, 0.9173, 1.0893, 1.0317, 0.9541, 1.1213, 0.9727}

func (d dimension) scale() float64 {
	s := 1.0
	for k, n := range d {
		s *= math.Pow(baseScales[k], float64(n))
	}
	return s
}

// checkUnits evaluates a formula in two systems of units and reports it if the
// results are not the same quantity: then terms of different dimensions are
// added, or the argument of a logarithm has a unit. Formulas with a unit that
// is not known are let pass.
func checkUnits(f func(map[string]float64) float64, numbers map[string]float64, units map[string]string, unit string) error {
	want, ok := dimensionOf(unit)
	if !ok {
		return nil
	}
	scaled := map[string]float64{}
	for name, v := range numbers {
		d, ok := dimensionOf(units[name])
		if !ok {
			return nil
		}
		scaled[name] = v * d.scale()
	}
	a, b := f(numbers)*want.scale(), f(scaled)
	if !(math.Abs(a-b) <= 1e-8*math.Max(math.Abs(a), math.Abs(b))) {
		return fmt.Errorf("the units do not fit: in other base units the formula gives another quantity; the result is said to be in %s", unitOr(unit))
	}
	return nil
}
