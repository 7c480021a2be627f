package display

import (
	"fmt"
	"math"
	"reflect"
	"slices"
	"strings"

	"levelsum/display/internal/mark"
)

// What display sees of a quantity, whatever package it is from. A typed
// quantity is a float64 of a named type with a method Unit, whose result is a
// string or a struct with a field Symbol (and perhaps a Kind that names
// itself), or at least a String that ends in the unit. A value with an
// uncertainty has Value and StandardUncertainty.
type (
	uncertainValue interface {
		Value() float64
		StandardUncertainty() float64
	}
	withholder interface{ Withheld() string }
	unitText   interface{ Unit() string }
	nameText   interface{ Name() string }
)

// unitOf returns the unit of the values of a named float64 type and, where the
// type tells, what kind of quantity it is.
func unitOf(t reflect.Type) (unit, kind string) {
	v := reflect.New(t).Elem()
	defer func() { _ = recover() }() // a method of somebody's type on a zero value
	if m := v.MethodByName("Unit"); m.IsValid() && m.Type().NumIn() == 0 && m.Type().NumOut() == 1 {
		u := m.Call(nil)[0]
		if u.Kind() == reflect.String {
			return u.String(), ""
		}
		if u.Kind() == reflect.Struct {
			if s := u.FieldByName("Symbol"); s.IsValid() && s.Kind() == reflect.String {
				unit = s.String()
			}
			if k := u.FieldByName("Kind"); k.IsValid() && k.CanInterface() {
				if s, ok := k.Interface().(fmt.Stringer); ok {
					kind = s.String()
				}
			}
			return unit, kind
		}
	}
	if s, ok := v.Interface().(fmt.Stringer); ok {
		if num, u, found := strings.Cut(s.String(), " "); found && strings.ContainsAny(num, "0123456789") {
			return u, ""
		}
	}
	return "", ""
}

// isQuantity reports whether t is a named type of a float.
func isQuantity(t reflect.Type) bool {
	return (t.Kind() == reflect.Float64 || t.Kind() == reflect.Float32) && t.PkgPath() != ""
}

// sameUnit reports whether two unit texts say the same: the order of factors
// and the way of writing do not count.
func sameUnit(a, b string) bool { return mark.SameUnit(a, b) }

// A column holds numbers read from whatever the user has.
type column struct {
	v       []float64
	u       []float64 // nil if there are none; NaN where one is missing
	text    []string  // not nil for text
	integer bool
	name    string
	unit    string
	kind    string       // what a typed quantity measures
	typ     reflect.Type // the named quantity type, nil for plain numbers
	// withheld are the reasons why values have no standard uncertainty.
	withheld []string
}

func (c *column) len() int {
	if c.text != nil {
		return len(c.text)
	}
	return len(c.v)
}

// readColumn reads a slice or array of numbers, of typed quantities, of values
// with uncertainties or of strings, or a value with a method Values that gives
// one of these.
func readColumn(what string, x any) (*column, error) {
	if x == nil {
		return nil, fmt.Errorf("%s is nil", what)
	}
	rv := reflect.ValueOf(x)
	for rv.Kind() == reflect.Pointer && !rv.IsNil() && rv.Elem().Kind() != reflect.Struct {
		rv = rv.Elem()
	}
	if c, err := columnOfMethods(what, rv); c != nil || err != nil {
		return c, err
	}
	if rv.Kind() != reflect.Slice && rv.Kind() != reflect.Array {
		return nil, fmt.Errorf("%s is a %s, want a slice of numbers", what, rv.Type())
	}
	c := &column{}
	n, et := rv.Len(), rv.Type().Elem()
	switch et.Kind() {
	case reflect.Float64, reflect.Float32:
		if isQuantity(et) {
			c.typ = et
			c.unit, c.kind = unitOf(et)
		}
		c.v = make([]float64, n)
		if fs, ok := rv.Interface().([]float64); ok {
			copy(c.v, fs)
			return c, nil
		}
		for i := range n {
			c.v[i] = rv.Index(i).Float()
		}
		return c, nil
	case reflect.Int, reflect.Int8, reflect.Int16, reflect.Int32, reflect.Int64:
		c.integer = true
		for i := range n {
			c.v = append(c.v, float64(rv.Index(i).Int()))
		}
		return c, nil
	case reflect.Uint, reflect.Uint8, reflect.Uint16, reflect.Uint32, reflect.Uint64:
		c.integer = true
		for i := range n {
			c.v = append(c.v, float64(rv.Index(i).Uint()))
		}
		return c, nil
	case reflect.String:
		c.text = []string{}
		for i := range n {
			c.text = append(c.text, rv.Index(i).String())
		}
		return c, nil
	}
	if n == 0 {
		c.v = []float64{}
		return c, nil
	}
	numbers := true
	for i := range n {
		m, err := readNumber(rv.Index(i).Interface())
		if err != nil {
			numbers = false
			break
		}
		if i == 0 {
			c.unit, c.typ, c.kind = m.unit, m.typ, m.kind
		} else if !sameUnit(c.unit, m.unit) {
			return nil, fmt.Errorf("%s mixes the units %q and %q (element %d)", what, c.unit, m.unit, i)
		}
		c.v = append(c.v, m.v)
		if m.hasU && c.u == nil {
			c.u = slices.Repeat([]float64{math.NaN()}, n)
		}
		if m.hasU {
			c.u[i] = m.u
		}
		if m.withheld != "" {
			c.withheld = append(c.withheld, m.withheld)
		}
	}
	if numbers {
		return c, nil
	}
	c = &column{text: []string{}}
	for i := range n {
		c.text = append(c.text, oneLine(rv.Index(i).Interface()))
	}
	return c, nil
}

// columnOfMethods reads a value that gives its numbers by a method Values (and
// its unit, name and uncertainties by others), nil if x is not of that kind.
func columnOfMethods(what string, rv reflect.Value) (*column, error) {
	get := func(names ...string) (reflect.Value, bool) {
		for _, name := range names {
			if m := rv.MethodByName(name); m.IsValid() && m.Type().NumIn() == 0 && m.Type().NumOut() == 1 {
				return m.Call(nil)[0], true
			}
			s := reflect.Indirect(rv)
			if s.Kind() == reflect.Struct {
				if f := s.FieldByName(name); f.IsValid() && f.CanInterface() {
					return f, true
				}
			}
		}
		return reflect.Value{}, false
	}
	vals, ok := get("Values")
	if !ok || vals.Kind() == reflect.Interface && vals.IsNil() {
		return nil, nil
	}
	c, err := readColumn(what, vals.Interface())
	if err != nil {
		return nil, err
	}
	if s, ok := get("Unit"); ok && s.Kind() == reflect.String && s.Len() > 0 {
		if c.typ != nil && !sameUnit(s.String(), c.unit) {
			return nil, fmt.Errorf("%s says its unit is %q, but its values are in %q", what, s.String(), c.unit)
		}
		c.unit = s.String()
	}
	if s, ok := get("Quantity", "Symbol", "Name"); ok && s.Kind() == reflect.String {
		c.name = s.String()
	}
	if u, ok := get("StandardUncertainties", "U"); ok && u.Kind() == reflect.Slice && u.Len() > 0 {
		cu, err := readColumn("the uncertainties of "+what, u.Interface())
		if err != nil {
			return nil, err
		}
		c.u = cu.v
	}
	return c, nil
}

// A measured is one number with what is known of it.
type measured struct {
	v        float64
	u        float64
	hasU     bool
	unit     string
	name     string
	kind     string
	withheld string // why there is no standard uncertainty
	integer  bool
	typ      reflect.Type
}

// readNumber reads one number: a Go number, a typed quantity, a value with an
// uncertainty, a [Number].
func readNumber(x any) (m measured, err error) {
	switch x := x.(type) {
	case nil:
		return m, fmt.Errorf("a number is wanted, not nil")
	case Number:
		return x.measured()
	case *Number:
		if x == nil {
			return m, fmt.Errorf("a number is wanted, not nil")
		}
		return x.measured()
	case uncertainValue:
		defer func() {
			if r := recover(); r != nil {
				err = fmt.Errorf("reading the value panicked: %v", r)
			}
		}()
		m.v = x.Value()
		if w, ok := x.(withholder); ok {
			m.withheld = w.Withheld()
		}
		if m.withheld == "" {
			m.u = x.StandardUncertainty()
			m.hasU = m.u > 0
		}
		if s, ok := x.(unitText); ok {
			m.unit = s.Unit()
		} else if vt, ok := reflect.TypeOf(x).MethodByName("Typed"); ok && vt.Type.NumOut() == 1 {
			m.unit, m.kind = unitOf(vt.Type.Out(0))
		}
		if s, ok := x.(nameText); ok {
			m.name = s.Name()
		}
		return m, nil
	}
	rv := reflect.ValueOf(x)
	if rv.Kind() == reflect.Pointer && !rv.IsNil() {
		rv = rv.Elem()
	}
	switch rv.Kind() {
	case reflect.Float64, reflect.Float32:
		m.v = rv.Float()
		if isQuantity(rv.Type()) {
			m.typ = rv.Type()
			m.unit, m.kind = unitOf(rv.Type())
		}
	case reflect.Int, reflect.Int8, reflect.Int16, reflect.Int32, reflect.Int64:
		m.v, m.integer = float64(rv.Int()), true
	case reflect.Uint, reflect.Uint8, reflect.Uint16, reflect.Uint32, reflect.Uint64:
		m.v, m.integer = float64(rv.Uint()), true
	case reflect.Struct:
		return structNumber(rv)
	default:
		return m, fmt.Errorf("a number is wanted, not a %s", rv.Type())
	}
	return m, nil
}

// structNumber reads a struct or value with typed Value and
// StandardUncertainty, methods or fields.
func structNumber(rv reflect.Value) (m measured, err error) {
	defer func() {
		if r := recover(); r != nil {
			err = fmt.Errorf("reading the value panicked: %v", r)
		}
	}()
	get := func(name string) (reflect.Value, bool) {
		if f := rv.MethodByName(name); f.IsValid() && f.Type().NumIn() == 0 && f.Type().NumOut() == 1 {
			return f.Call(nil)[0], true
		}
		if f := rv.FieldByName(name); f.IsValid() && f.CanInterface() {
			return f, true
		}
		return reflect.Value{}, false
	}
	v, ok := get("Value")
	if !ok {
		return m, fmt.Errorf("a number is wanted, not a %s", rv.Type())
	}
	m, err = readNumber(v.Interface())
	if err != nil {
		return m, err
	}
	if w, ok := get("Withheld"); ok && w.Kind() == reflect.String {
		m.withheld = w.String()
	}
	for _, name := range []string{"StandardUncertainty", "U"} {
		if u, ok := get(name); ok && m.withheld == "" {
			mu, err := readNumber(u.Interface())
			if err != nil {
				return m, err
			}
			m.u, m.hasU = mu.v, mu.v > 0
			break
		}
	}
	if s, ok := get("Unit"); ok && s.Kind() == reflect.String && s.Len() > 0 {
		m.unit = s.String()
	}
	if s, ok := get("Name"); ok && s.Kind() == reflect.String {
		m.name = s.String()
	}
	return m, nil
}

// factorIn returns the number that one unit of in is in the unit of the
// values, so that v/factor is the value in that unit.
func factorIn(what string, t reflect.Type, in any, unit string) (float64, error) {
	rv := reflect.ValueOf(in)
	if rv.Kind() != reflect.Float64 && rv.Kind() != reflect.Float32 {
		return 0, fmt.Errorf("%s: In is a %T, want a unit of the values' own type", what, in)
	}
	if t != nil && rv.Type() != t {
		return 0, fmt.Errorf("%s: In is a %s, but the values are of type %s", what, rv.Type(), t)
	}
	if unit == "" {
		return 0, fmt.Errorf("%s: In is given, so Unit must name that unit", what)
	}
	f := rv.Float()
	if !(f > 0) || math.IsInf(f, 0) {
		return 0, fmt.Errorf("%s: In is %v, want a positive unit", what, f)
	}
	return f, nil
}

// applyUnit settles the unit of a column: the user's In and Unit, else its own.
func (c *column) applyUnit(what, unit string, in any) error {
	if in != nil {
		f, err := factorIn(what, c.typ, in, unit)
		if err != nil {
			return err
		}
		for i := range c.v {
			c.v[i] /= f
		}
		for i := range c.u {
			c.u[i] /= f
		}
		c.unit = unit
		return nil
	}
	if strings.HasPrefix(unit, "°") && c.unit == "K" {
		return fmt.Errorf("%s: Unit is %q, but the values are in K: scales with another zero are not converted; give plain numbers less 273.15", what, unit)
	}
	if unit != "" && c.unit != "" && !sameUnit(unit, c.unit) {
		return fmt.Errorf("%s: Unit is %q, but the values are in %q; to convert them give In as well (In: the unit itself)", what, unit, c.unit)
	}
	if unit != "" {
		c.unit = unit
	}
	if c.typ != nil && c.unit == "" {
		return fmt.Errorf("%s: the values are of type %s, whose unit is not known: give Unit", what, c.typ)
	}
	return nil
}
