package display

import (
	"fmt"
	"reflect"
	"slices"
	"strconv"
	"strings"

	"levelsum/display/internal/mark"
)

// brief writes values on one line, without addresses and with maps in order,
// so that two runs give the same text. left bounds what is written.
type brief struct {
	b    strings.Builder
	left int // runes that may still be written
	full bool
}

func oneLineText(s string) string {
	return strings.Map(func(r rune) rune {
		if r == '\n' || r == '\r' || r == '\t' {
			return ' '
		}
		return r
	}, mark.Clean(s))
}

// oneLine writes a value on one line, cut if it is long.
func oneLine(v any) string { return oneLineValue(reflect.ValueOf(v), 100) }

func oneLineValue(v reflect.Value, most int) string {
	w := &brief{left: most}
	w.value(v, 0)
	return w.b.String()
}

func (w *brief) put(s string) {
	if w.full {
		return
	}
	rs := []rune(oneLineText(s))
	if len(rs) > w.left {
		w.b.WriteString(string(rs[:max(w.left, 0)]) + "…")
		w.full, w.left = true, 0
		return
	}
	w.b.WriteString(string(rs))
	w.left -= len(rs)
}

// depthLimit ends values that refer to themselves.
const depthLimit = 5

func (w *brief) value(v reflect.Value, depth int) {
	if w.full {
		return
	}
	if !v.IsValid() {
		w.put("nil")
		return
	}
	if v.CanInterface() {
		if s, ok := methodText(v); ok {
			w.put(s)
			return
		}
	}
	if depth > depthLimit {
		w.put("…")
		return
	}
	switch v.Kind() {
	case reflect.Bool:
		w.put(strconv.FormatBool(v.Bool()))
	case reflect.Int, reflect.Int8, reflect.Int16, reflect.Int32, reflect.Int64:
		w.put(strconv.FormatInt(v.Int(), 10))
	case reflect.Uint, reflect.Uint8, reflect.Uint16, reflect.Uint32, reflect.Uint64, reflect.Uintptr:
		w.put(strconv.FormatUint(v.Uint(), 10))
	case reflect.Float32:
		w.put(strconv.FormatFloat(v.Float(), 'g', -1, 32))
	case reflect.Float64:
		w.float(v)
	case reflect.Complex64, reflect.Complex128:
		w.put(fmt.Sprint(v.Complex()))
	case reflect.String:
		if depth == 0 {
			w.put(v.String())
		} else {
			w.put(strconv.Quote(v.String()))
		}
	case reflect.Slice, reflect.Array:
		if v.Kind() == reflect.Slice && v.IsNil() {
			w.put("nil")
			return
		}
		w.put("[")
		for i := 0; i < v.Len() && !w.full; i++ {
			if i > 0 {
				w.put(", ")
			}
			w.value(v.Index(i), depth+1)
		}
		w.put("]")
	case reflect.Map:
		if v.IsNil() {
			w.put("nil")
			return
		}
		w.put("{")
		for i, k := range sortedKeys(v) {
			if w.full {
				return
			}
			if i > 0 {
				w.put(", ")
			}
			w.value(k, depth+1)
			w.put(": ")
			w.value(v.MapIndex(k), depth+1)
		}
		w.put("}")
	case reflect.Struct:
		w.put("{")
		for i := 0; i < v.NumField() && !w.full; i++ {
			if i > 0 {
				w.put(", ")
			}
			w.put(v.Type().Field(i).Name + ": ")
			w.value(v.Field(i), depth+1)
		}
		w.put("}")
	case reflect.Interface:
		w.value(v.Elem(), depth)
	case reflect.Pointer:
		if v.IsNil() {
			w.put("nil")
			return
		}
		w.put("&")
		w.value(v.Elem(), depth+1)
	case reflect.Func:
		if v.IsNil() {
			w.put("nil ")
		}
		w.put(v.Type().String())
	case reflect.Chan:
		w.put(chanText(v))
	default:
		w.put(v.Type().String())
	}
}

// float writes a number; a named type with a unit gets it.
func (w *brief) float(v reflect.Value) {
	w.put(strconv.FormatFloat(v.Float(), 'g', -1, 64))
	if isQuantity(v.Type()) {
		if u, _ := unitOf(v.Type()); u != "" && u != "1" {
			w.put(" " + u)
		}
	}
}

func chanText(v reflect.Value) string {
	if v.IsNil() {
		return "nil " + v.Type().String()
	}
	if v.Cap() == 0 {
		return v.Type().String()
	}
	return fmt.Sprintf("%s with %d of %d values waiting", v.Type(), v.Len(), v.Cap())
}

// methodText asks a value for its own text: an error, a Stringer. A method
// that panics is reported.
func methodText(v reflect.Value) (s string, ok bool) {
	if !v.CanInterface() {
		return "", false
	}
	switch x := v.Interface().(type) {
	case error:
		return callText(v, "Error", x.Error), true
	case fmt.Stringer:
		return callText(v, "String", x.String), true
	case Viewer:
		return callText(v, "View", func() string {
			t, _ := x.View().Data["text/plain"].(string)
			line, _, more := strings.Cut(t, "\n")
			switch {
			case more:
				line += " …"
			case line == "":
				line = fmt.Sprintf("(%T)", x)
			}
			return line
		}), true
	}
	return "", false
}

func callText(v reflect.Value, name string, f func() string) (s string) {
	for v.Kind() == reflect.Interface {
		v = v.Elem()
	}
	if v.Kind() == reflect.Pointer && v.IsNil() {
		return "nil " + v.Type().String()
	}
	defer func() {
		if r := recover(); r != nil {
			s = fmt.Sprintf("(%s: its %s panicked: %s)", v.Type(), name, panicText(r))
		}
	}()
	return f()
}

// panicText writes what was thrown, without trusting its methods.
func panicText(r any) (s string) {
	defer func() {
		if recover() != nil {
			s = fmt.Sprintf("a %T whose text panics", r)
		}
	}()
	return oneLineText(fmt.Sprint(r))
}

// sortedKeys returns the keys of a map in order: numbers by value, text by
// bytes, others by how they are written.
func sortedKeys(m reflect.Value) []reflect.Value {
	keys := m.MapKeys()
	slices.SortFunc(keys, func(a, b reflect.Value) int {
		for a.Kind() == reflect.Interface {
			a = a.Elem()
		}
		for b.Kind() == reflect.Interface {
			b = b.Elem()
		}
		if a.IsValid() && b.IsValid() && a.Kind() == b.Kind() {
			switch a.Kind() {
			case reflect.Int, reflect.Int8, reflect.Int16, reflect.Int32, reflect.Int64:
				return compare(a.Int() < b.Int(), a.Int() > b.Int())
			case reflect.Uint, reflect.Uint8, reflect.Uint16, reflect.Uint32, reflect.Uint64:
				return compare(a.Uint() < b.Uint(), a.Uint() > b.Uint())
			case reflect.Float32, reflect.Float64:
				return compare(a.Float() < b.Float(), a.Float() > b.Float())
			case reflect.String:
				return strings.Compare(a.String(), b.String())
			}
		}
		return strings.Compare(oneLineValue(a, 200), oneLineValue(b, 200))
	})
	return keys
}

func compare(less, more bool) int {
	switch {
	case less:
		return -1
	case more:
		return 1
	}
	return 0
}
