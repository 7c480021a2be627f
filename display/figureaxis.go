package display

import (
	"fmt"
	"math"
	"reflect"

	"levelsum/display/internal/scene"
)

// axisState gathers what is known of an axis.
type axisState struct {
	spec     Axis
	name     string // "x axis"
	typ      reflect.Type
	factor   float64 // values of typ are divided by it
	quantity string
	unit     string
	known    bool // unit settled by some data
	words    bool // the quantity is named by its type: "molar entropy or heat capacity"
	lo, hi   float64
	used     bool
}

// take converts a column to the axis and settles the axis' unit by it.
func (a *axisState) take(what string, c *column) error {
	if c.text != nil {
		return fmt.Errorf("%s is text, want numbers", what)
	}
	if err := c.applyUnit(what+" ("+a.name+")", a.spec.Unit, a.spec.In); err != nil {
		return err
	}
	if a.used && a.known != (c.unit != "") {
		return fmt.Errorf("%s has %s, other data on the %s have %s", what, unitOr(c.unit), a.name, unitOr(a.unit))
	}
	if a.known && !sameUnit(a.unit, c.unit) {
		return fmt.Errorf("%s is in %s, other data on the %s are in %s", what, c.unit, a.name, a.unit)
	}
	if c.unit != "" {
		a.unit, a.known = c.unit, true
	}
	if c.typ != nil {
		a.typ = c.typ
	}
	if a.spec.In != nil {
		a.factor = reflect.ValueOf(a.spec.In).Float()
	}
	if a.quantity == "" {
		a.quantity = c.name
	}
	if a.quantity == "" {
		a.quantity = c.kind
		a.words = a.quantity != ""
	}
	a.used = true
	return nil
}

func unitOr(u string) string {
	if u == "" {
		return "no unit"
	}
	return u
}

func (a *axisState) cover(vs ...[]float64) {
	for _, v := range vs {
		for _, x := range v {
			a.cover1(x)
		}
	}
}

func (a *axisState) cover1(x float64) {
	if math.IsNaN(x) || math.IsInf(x, 0) || a.spec.Log && !(x > 0) {
		return
	}
	if x < a.lo {
		a.lo = x
	}
	if x > a.hi {
		a.hi = x
	}
}

func newAxisState(name string, spec Axis) axisState {
	return axisState{spec: spec, name: name, factor: 1, quantity: spec.Quantity, lo: math.Inf(1), hi: math.Inf(-1)}
}

// limits returns the ends that the user has given. A zero beside a number is
// an end too, where it can be one.
func (s Axis) limits() (from, to float64, low, high bool) {
	low = s.Min != 0 || s.Max > 0 && !s.Log
	high = s.Max != 0 || s.Min < 0 && !s.Log
	return s.Min, s.Max, low, high
}

// shows reports whether x is on an axis as the user has limited it.
func (s Axis) shows(x float64) bool {
	from, to, low, high := s.limits()
	return (!low || x >= from) && (!high || x <= to)
}

// settle returns the axis with its range, 4 % wider than the data.
func (a *axisState) settle(tight bool) (scene.Axis, error) {
	s := a.spec
	out := scene.Axis{Quantity: a.quantity, Unit: a.unit, Log: s.Log, Min: a.lo, Max: a.hi}
	if out.Unit == "" {
		out.Unit = s.Unit
	}
	if a.lo > a.hi {
		out.Min, out.Max = 0, 1
		if s.Log {
			out.Min, out.Max = 1, 10
		}
	}
	from, to, low, high := s.limits()
	switch {
	case low && high && !(from < to):
		return out, fmt.Errorf("the %s goes from %v to %v: want Min < Max", a.name, s.Min, s.Max)
	case low && s.Log && !(from > 0):
		return out, fmt.Errorf("the %s is logarithmic and begins at %v: want a positive Min", a.name, s.Min)
	case low && !high && !(from < out.Max), high && !low && !(to > out.Min):
		return out, fmt.Errorf("the %s shows no data: they go from %v to %v", a.name, out.Min, out.Max)
	case low && high:
		out.Min, out.Max = from, to
	case tight && a.lo < a.hi:
	case s.Log:
		l, h := math.Log10(out.Min), math.Log10(out.Max)
		pad := 0.04 * (h - l)
		if pad == 0 {
			pad = 0.3
		}
		out.Min, out.Max = math.Pow(10, l-pad), math.Pow(10, h+pad)
	default:
		pad := 0.04 * (out.Max - out.Min)
		if pad == 0 {
			pad = 0.04*math.Abs(out.Max) + 0.5*b2f(out.Max == 0)
		}
		// Values that differ in the last digits only are shown as equal.
		pad = math.Max(pad, 1e-9*math.Max(math.Abs(out.Min), math.Abs(out.Max)))
		out.Min, out.Max = out.Min-pad, out.Max+pad
	}
	if low {
		out.Min = from
	}
	if high {
		out.Max = to
	}
	return out, drawable(a.name, out)
}

// drawable refuses ranges that have no ticks in floating point.
func drawable(name string, a scene.Axis) error {
	size := math.Max(math.Abs(a.Min), math.Abs(a.Max))
	switch {
	case !(size < 1e290) || !(a.Max-a.Min > 1e-290) || a.Log && !(a.Min > 1e-290):
		return fmt.Errorf("the %s would go from %v to %v, which cannot be drawn: give Min and Max, or another unit", name, a.Min, a.Max)
	case !(a.Max-a.Min > 1e-11*size):
		return fmt.Errorf("the %s would go from %v to %v: too narrow for its values", name, a.Min, a.Max)
	}
	return nil
}

func b2f(b bool) float64 {
	if b {
		return 1
	}
	return 0
}

func (a *axisState) field() string {
	switch a.name {
	case "x axis":
		return "XAxis"
	case "y axis":
		return "YAxis"
	}
	return "RightAxis"
}

// checkLog refuses values that a logarithmic axis cannot show.
func (a *axisState) checkLog(what string, v []float64) error {
	if !a.spec.Log {
		return nil
	}
	n, first := 0, -1
	for i, x := range v {
		if !(x > 0) && !math.IsNaN(x) {
			if first < 0 {
				first = i
			}
			n++
		}
	}
	if n > 0 {
		return fmt.Errorf("the %s is logarithmic, but %d of %d values of %s are not positive (the first is %v, at index %d)",
			a.name, n, len(v), what, v[first], first)
	}
	return nil
}
