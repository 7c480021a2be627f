package display

import (
	"fmt"
	"reflect"
	"strings"
	"unicode/utf8"

	"levelsum/display/internal/mark"
)

// How much of a long value is shown.
const (
	textLimit   = 20000 // characters of a text
	valueLimit  = 40    // values of a slice of numbers
	columnLimit = 12    // columns of a matrix
	viewerLimit = 20    // values that show themselves
)

// ViewOf returns how v looks: by its own View if it is a [Viewer], else in a
// form that suits its kind: text as it is; numbers with their unit; slices and
// maps in order, long ones cut with a count; a slice of structs, a struct and
// a matrix as a table; a function by its type. It never panics and shows no
// addresses: a method of v that panics is reported in the text.
func ViewOf(v any) (view View) {
	defer func() {
		if r := recover(); r != nil {
			view = Text(fmt.Sprintf("(%T: looking at it panicked: %s)", v, panicText(r)))
		}
	}()
	if v == nil {
		return Text("nil")
	}
	if w, ok := v.(View); ok {
		return mended(w, "display.View")
	}
	rv := reflect.ValueOf(v)
	if w, ok := v.(Viewer); ok {
		if rv.Kind() == reflect.Pointer && rv.IsNil() {
			return Text("nil " + rv.Type().String())
		}
		return viewOfViewer(w)
	}
	if s, ok := methodText(rv); ok {
		return Text(cutText(mark.Clean(s)))
	}
	for rv.Kind() == reflect.Pointer && !rv.IsNil() {
		rv = rv.Elem()
		if rv.CanInterface() {
			if w, ok := rv.Interface().(Viewer); ok {
				return viewOfViewer(w)
			}
		}
	}
	if rv.Kind() == reflect.Pointer {
		return Text("nil " + rv.Type().String())
	}
	if m, ok := v.(matrix); ok {
		return viewOfMatrix(m)
	}
	switch rv.Kind() {
	case reflect.String:
		if rv.Len() == 0 {
			return Text(`"" (empty text)`)
		}
		return Text(cutText(mark.Clean(rv.String())))
	case reflect.Slice, reflect.Array:
		return viewOfSlice(rv)
	case reflect.Map:
		return viewOfMap(rv)
	case reflect.Struct:
		return viewOfStruct(rv)
	}
	return Text(oneLineValue(rv, textLimit))
}

// viewOfViewer asks a viewer and mends what it gives: there is always plain
// text.
func viewOfViewer(w Viewer) (view View) {
	defer func() {
		if r := recover(); r != nil {
			view = Text(fmt.Sprintf("(%T: its View panicked: %s)", w, panicText(r)))
		}
	}()
	return mended(w.View(), fmt.Sprintf("%T", w))
}

// mended adds plain text to a view that has none.
func mended(view View, name string) View {
	if _, ok := view.Data["text/plain"]; !ok {
		data := map[string]any{"text/plain": "(" + name + ")"}
		for k, d := range view.Data {
			data[k] = d
		}
		view.Data = data
	}
	return view
}

func cutText(s string) string {
	if len(s) <= textLimit {
		return s
	}
	n := textLimit
	for n > 0 && !utf8.RuneStart(s[n]) {
		n--
	}
	return fmt.Sprintf("%s\n… %d more bytes", s[:n], len(s)-n)
}

func viewOfSlice(v reflect.Value) View {
	n := v.Len()
	et := v.Type().Elem()
	if v.Kind() == reflect.Slice && v.IsNil() {
		return Text("nil " + v.Type().String())
	}
	if n == 0 {
		return Text("[] (no values)")
	}
	if et.Kind() == reflect.Pointer && et.Elem().Kind() == reflect.Struct {
		et = et.Elem()
	}
	if n <= viewerLimit && v.Type().Elem().Implements(reflect.TypeFor[Viewer]()) {
		return viewOfViewers(v)
	}
	if et.Kind() == reflect.Struct && et.NumField() > 0 && !hasText(et) {
		if t, err := TableOf(v.Interface()); err == nil {
			return t.View()
		}
	}
	if et.Kind() == reflect.Slice && numeric(et.Elem()) || et.Kind() == reflect.Array && numeric(et.Elem()) {
		if t, ok := tableOfRows(n, func(i int) reflect.Value { return v.Index(i) }); ok {
			return t.View()
		}
	}
	var b strings.Builder
	b.WriteString("[")
	head, tail := n, n
	if n > valueLimit {
		head, tail = valueLimit*3/4, n-valueLimit/4
	}
	unit := ""
	if isQuantity(et) {
		unit, _ = unitOf(et)
	}
	for i := 0; i < n; i++ {
		if i == head {
			fmt.Fprintf(&b, ", … %d more …", tail-head)
			i = tail
		}
		if i > 0 {
			b.WriteString(", ")
		}
		if et.Kind() == reflect.Float64 && (unit != "" || !isQuantity(et)) {
			b.WriteString(plainNumber(v.Index(i).Float(), 7).text())
			continue
		}
		w := &brief{left: 200}
		w.value(v.Index(i), 1)
		b.WriteString(w.b.String())
	}
	b.WriteString("]")
	if unit != "" && unit != "1" {
		b.WriteString(" " + unit)
	}
	if n > valueLimit {
		fmt.Fprintf(&b, " (%d values)", n)
	}
	return Text(b.String())
}

// viewOfViewers shows values that show themselves one under the other.
func viewOfViewers(v reflect.Value) View {
	var text, html []string
	for i := range v.Len() {
		one := ViewOf(v.Index(i).Interface())
		t, _ := one.Data["text/plain"].(string)
		text = append(text, t)
		h, ok := one.Data["text/html"].(string)
		if !ok {
			h = "<pre>" + mark.Escape(t) + "</pre>"
		}
		html = append(html, "<div>"+h+"</div>")
	}
	return View{Data: map[string]any{"text/plain": strings.Join(text, "\n"), "text/html": strings.Join(html, "\n")}}
}

func numeric(t reflect.Type) bool {
	switch t.Kind() {
	case reflect.Float64, reflect.Float32, reflect.Int, reflect.Int8, reflect.Int16, reflect.Int32, reflect.Int64,
		reflect.Uint, reflect.Uint8, reflect.Uint16, reflect.Uint32, reflect.Uint64:
		return true
	}
	return false
}

// hasText reports whether values of t have a text of their own.
func hasText(t reflect.Type) bool {
	for _, i := range []reflect.Type{reflect.TypeFor[error](), reflect.TypeFor[fmt.Stringer](), reflect.TypeFor[Viewer]()} {
		if t.Implements(i) || reflect.PointerTo(t).Implements(i) {
			return true
		}
	}
	return false
}

func viewOfMap(m reflect.Value) View {
	if m.IsNil() {
		return Text("nil " + m.Type().String())
	}
	if m.Len() == 0 {
		return Text("{} (no entries)")
	}
	keys := sortedKeys(m)
	var k, v []string
	for _, key := range keys {
		k = append(k, oneLineValue(key, 100))
		w := &brief{left: 200}
		w.value(m.MapIndex(key), 1)
		v = append(v, w.b.String())
	}
	return bare(Table{Columns: []Column{{Quantity: "key", Values: k}, {Quantity: "value", Values: v}}})
}

func viewOfStruct(s reflect.Value) View {
	if s.NumField() == 0 {
		return Text("{} (no fields)")
	}
	var k, v []string
	for i := range s.NumField() {
		k = append(k, s.Type().Field(i).Name)
		w := &brief{left: 200}
		w.value(s.Field(i), 1)
		v = append(v, w.b.String())
	}
	return bare(Table{Columns: []Column{{Quantity: "field", Values: k}, {Quantity: "value", Values: v}}})
}

// bare is the view of a table that is no result: without LaTeX.
func bare(t Table) View {
	v := t.View()
	delete(v.Data, "text/latex")
	return v
}

func viewOfMatrix(m matrix) View {
	r, c := m.Dims()
	t, _ := tableOfMatrix(r, c, m.At)
	t.Caption = fmt.Sprintf("%d × %d matrix", r, c)
	if r == 0 || c == 0 {
		return Text(t.Caption)
	}
	return t.View()
}

// tableOfRows makes a table of slices of numbers, if all are of one length.
func tableOfRows(n int, row func(int) reflect.Value) (Table, bool) {
	c := row(0).Len()
	for i := range n {
		if row(i).Len() != c {
			return Table{}, false
		}
	}
	at := func(i, j int) float64 {
		switch e := row(i).Index(j); e.Kind() {
		case reflect.Float64, reflect.Float32:
			return e.Float()
		case reflect.Int, reflect.Int8, reflect.Int16, reflect.Int32, reflect.Int64:
			return float64(e.Int())
		default:
			return float64(e.Uint())
		}
	}
	return tableOfMatrix(n, c, at)
}

func tableOfMatrix(r, c int, at func(i, j int) float64) (Table, bool) {
	if r == 0 || c == 0 {
		return Table{}, false
	}
	t := Table{Limit: 24}
	rows := make([]int, r)
	for i := range rows {
		rows[i] = i
	}
	t.Columns = append(t.Columns, Column{Quantity: "row", Values: rows})
	for j := range c {
		if c > columnLimit+1 && j == columnLimit {
			t.Notes = append(t.Notes, fmt.Sprintf("%d columns more.", c-columnLimit))
			break
		}
		v := make([]float64, r)
		for i := range v {
			v[i] = at(i, j)
		}
		t.Columns = append(t.Columns, Column{Quantity: fmt.Sprintf("%d", j), Values: v})
	}
	return t, true
}
