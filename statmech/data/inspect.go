package data

import (
	"fmt"
	"math"
	"regexp"
	"sort"
	"strconv"
	"strings"

	"levelsum/statmech/unit"
)

// assign fills the typed columns.
func (t *Table) assign() {
	t.T, t.UT, t.Cp, t.U, t.URandom, t.UCommon = nil, nil, nil, nil, nil, nil
	if t.shared == nil {
		t.shared = &shared{}
	}
	for k := range t.Columns {
		c := &t.Columns[k]
		if c.Values == nil {
			continue
		}
		switch {
		case temperature[c.Symbol] && t.T == nil:
			t.T = make([]unit.Temperature, len(c.Values))
			for i, v := range c.Values {
				t.T[i] = unit.Temperature(v)
			}
		case temperature[c.of]:
			if t.UT == nil {
				t.UT = make([]unit.TemperatureDifference, len(c.Values))
			}
			for i, v := range c.Values {
				t.UT[i] = unit.TemperatureDifference(math.Hypot(float64(t.UT[i]), v))
			}
		case heatCapacity[c.Symbol] && t.Cp == nil:
			t.Cp = molar(c.Values)
		case heatCapacity[c.of] && c.part == 'r':
			t.URandom = molar(c.Values)
		case heatCapacity[c.of] && c.part == 'c':
			t.UCommon = molar(c.Values)
		case heatCapacity[c.of]:
			t.U = molar(c.Values)
		}
	}
	if t.U == nil && (t.URandom != nil || t.UCommon != nil) {
		t.U = make([]unit.MolarEntropy, t.Len())
		for i := range t.U {
			var r, c float64
			if t.URandom != nil {
				r = float64(t.URandom[i])
			}
			if t.UCommon != nil {
				c = float64(t.UCommon[i])
			}
			t.U[i] = unit.MolarEntropy(math.Hypot(r, c))
		}
	}
}

func molar(xs []float64) []unit.MolarEntropy {
	out := make([]unit.MolarEntropy, len(xs))
	for i, x := range xs {
		out[i] = unit.MolarEntropy(x)
	}
	return out
}

var yearBefore1990 = regexp.MustCompile(`\b(18\d\d|19[0-8]\d)\b`)

// inspect fills the warnings that concern the table as a whole.
func (t *Table) inspect() {
	warn := func(format string, args ...any) { t.Warnings = append(t.Warnings, fmt.Sprintf(format, args...)) }
	t.inspectOrder(warn)
	for k := range t.Columns {
		c := &t.Columns[k]
		if c.Missing != nil {
			if n := countTrue(c.Missing); n > 0 {
				warn("%s: %d of %d cells are empty", c.Symbol, n, len(c.Missing))
			}
		}
		if c.of == "" || c.Values == nil {
			continue
		}
		zeros, first := 0, 0
		for i, v := range c.Values {
			if v == 0 && !(c.Missing != nil && c.Missing[i]) {
				if zeros == 0 {
					first = i + 1
				}
				zeros++
			}
		}
		if zeros > 0 {
			warn("%s is 0 in %d rows, first in row %d: a fit cannot weigh such a point", c.Symbol, zeros, first)
		}
	}
	if len(t.T) == 0 || len(t.Cp) == 0 {
		return
	}
	if t.U == nil {
		warn("no uncertainty of Cp")
	}
	switch scale := t.Note("temperature scale"); {
	case scale == "" || strings.HasPrefix(scale, "not stated"):
		for _, n := range t.Notes {
			if y := yearBefore1990.FindString(n.Value); y != "" && strings.EqualFold(n.Key, "source") {
				warn("the source is of %s and the temperature scale is not stated: older scales differ from ITS-90 by up to 0.01 K below 100 K and 0.026 K near 373 K", y)
				return
			}
		}
		t.Readings = append(t.Readings, "temperatures taken as ITS-90: the file does not say")
	case !strings.Contains(strings.ReplaceAll(scale, " ", "-"), "ITS-90"):
		warn("temperatures are on %s: convert to ITS-90 before comparing with newer work", scale)
	}
}

func (t *Table) inspectOrder(warn func(string, ...any)) {
	n := len(t.T)
	for i := 1; i < n; i++ {
		if t.T[i] < t.T[i-1] {
			warn("T is not in increasing order: row %d has %v after %v", i+1, t.T[i], t.T[i-1])
			break
		}
	}
	order := make([]int, n)
	for i := range order {
		order[i] = i
	}
	sort.SliceStable(order, func(a, b int) bool { return t.T[order[a]] < t.T[order[b]] })
	twice, first := 0, -1
	for k := 1; k < n; k++ {
		if t.T[order[k]] == t.T[order[k-1]] {
			if twice == 0 {
				first = k
			}
			twice++
		}
	}
	if twice > 0 {
		warn("%d temperatures are there twice, the first %v in rows %d and %d", twice, t.T[order[first]], order[first-1]+1, order[first]+1)
	}
	// A gap is a step three times as large as both neighbouring steps, in T and in ln T.
	for k := 2; k+1 < n; k++ {
		a, b, c, d := float64(t.T[order[k-2]]), float64(t.T[order[k-1]]), float64(t.T[order[k]]), float64(t.T[order[k+1]])
		if c-b > 3*max(b-a, d-c) && math.Log(c/b) > 3*max(math.Log(b/a), math.Log(d/c)) && b > a && d > c {
			warn("a gap between %v and %v", unit.Temperature(b), unit.Temperature(c))
		}
	}
}

func countTrue(b []bool) int {
	n := 0
	for _, v := range b {
		if v {
			n++
		}
	}
	return n
}

// limits returns the range of a column as it is written in the file.
func (c *Column) limits() (lo, hi float64, ok bool) {
	lo, hi = math.Inf(1), math.Inf(-1)
	for i, x := range c.raw {
		if c.Missing != nil && c.Missing[i] {
			continue
		}
		lo, hi, ok = min(lo, x), max(hi, x), true
	}
	return lo, hi, ok
}

// meaning says in words what a column is.
func (c *Column) meaning() string {
	switch {
	case c.Text != nil:
		return "text"
	case c.bare:
		return "count"
	case c.of != "":
		s := "standard uncertainty of " + c.of
		switch c.part {
		case 'r':
			s += ", random part"
		case 'c':
			s += ", common part"
		}
		return s
	}
	return c.Unit.Kind.String()
}

// conversion says how a value in the file becomes SI.
func (c *Column) conversion() string {
	switch {
	case c.Text != nil || c.bare || c.relative:
		return ""
	case c.Unit.Offset != 0 && c.of == "":
		return "+ " + strconv.FormatFloat(c.Unit.Offset, 'g', -1, 64) + " K"
	case c.Unit.Factor != 1:
		return "× " + strconv.FormatFloat(c.Unit.Factor, 'g', 10, 64)
	}
	return ""
}
