package display

import (
	"fmt"
	"reflect"
	"strings"
	"unicode/utf8"

	"levelsum/display/internal/mark"
)

// oneLineText makes text from data fit into one line of plain text.
func oneLineText(s string) string {
	return strings.Map(func(r rune) rune {
		if r == '\n' || r == '\r' || r == '\t' {
			return ' '
		}
		return r
	}, mark.Clean(s))
}

// oneLine writes a value on one line, cut if it is long.
func oneLine(v any) string {
	s := oneLineText(safeString(v))
	return cut(s, 80)
}

// cut shortens s to n characters and says how many are left out.
func cut(s string, n int) string {
	if utf8.RuneCountInString(s) <= n {
		return s
	}
	rs := []rune(s)
	return fmt.Sprintf("%s… (%d characters more)", string(rs[:n]), len(rs)-n)
}

// safeString is fmt.Sprint for values whose methods may panic.
func safeString(v any) (s string) {
	defer func() {
		if r := recover(); r != nil {
			s = fmt.Sprintf("(%T: its String panicked: %v)", v, r)
		}
	}()
	switch x := v.(type) {
	case nil:
		return "nil"
	case string:
		return x
	case error:
		return x.Error()
	case fmt.Stringer:
		return x.String()
	}
	return fmt.Sprint(v)
}

// ViewOf returns how v looks: by its own View if it is a [Viewer], else in a
// form that suits its kind. It never panics: a method of v that does is
// reported in the text.
func ViewOf(v any) (view View) {
	if w, ok := v.(Viewer); ok {
		if rv := reflect.ValueOf(v); rv.Kind() == reflect.Pointer && rv.IsNil() {
			return Text(fmt.Sprintf("nil (%T)", v))
		}
		return viewOfViewer(w)
	}
	return Text(safeString(v))
}

// viewOfViewer asks a viewer and mends what it gives: there is always plain
// text.
func viewOfViewer(w Viewer) (view View) {
	defer func() {
		if r := recover(); r != nil {
			view = Text(fmt.Sprintf("(%T: its View panicked: %v)", w, r))
		}
	}()
	view = w.View()
	if _, ok := view.Data["text/plain"]; !ok {
		data := map[string]any{"text/plain": fmt.Sprintf("(%T)", w)}
		for k, d := range view.Data {
			data[k] = d
		}
		view.Data = data
	}
	return view
}
