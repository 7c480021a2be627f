package session

import (
	"errors"
	"testing"

	"levelsum/kernel/engine"
)

// Cursors count code points: not bytes, not units of UTF-16.
func TestComplete(t *testing.T) {
	const code = "θ𝛼.He"
	f := &fake{complete: func(source string, cursor int) (engine.Completion, error) {
		if source != code || cursor != len("θ𝛼.H") {
			return engine.Completion{}, errors.New("wrong question")
		}
		return engine.Completion{Start: len("θ𝛼."), End: len("θ𝛼.He"), Matches: []engine.Match{
			{Text: "HeatCapacity", Kind: "function", Signature: "func(T unit.Temperature)"},
			{Text: "Helmholtz", Kind: "function"},
		}}, nil
	}}
	c := connect(serveFake(t, f))
	r := c.ask("complete_request", cell{"code": code, "cursor_pos": 4})
	r.want(t, "status", "ok")
	r.want(t, "matches", []string{"HeatCapacity", "Helmholtz"})
	r.want(t, "cursor_start", 3)
	r.want(t, "cursor_end", 5)
	types := r["metadata"].(map[string]any)["_jupyter_types_experimental"].([]any)
	first := object(types[0].(map[string]any))
	first.want(t, "text", "HeatCapacity")
	first.want(t, "type", "function")
	first.want(t, "signature", "func(T unit.Temperature)")
	first.want(t, "start", 3)
	first.want(t, "end", 5)

	// Nothing is known: no match, and no error to disturb who types.
	r = c.ask("complete_request", cell{"code": "é", "cursor_pos": 1})
	r.want(t, "status", "ok")
	r.want(t, "matches", []string{})
	r.want(t, "cursor_start", 1)
	r.want(t, "cursor_end", 1)
}

func TestByteOffset(t *testing.T) {
	for _, test := range []struct {
		code   string
		cursor int
		want   int
	}{
		{"abc", 0, 0}, {"abc", 2, 2}, {"abc", 3, 3}, {"abc", 9, 3}, {"abc", -1, 0},
		{"θ𝛼x", 1, 2}, {"θ𝛼x", 2, 6}, {"θ𝛼x", 3, 7}, {"", 0, 0}, {"", 5, 0},
	} {
		if got := byteOffset(test.code, &test.cursor); got != test.want {
			t.Errorf("byteOffset(%q, %d) = %d, want %d", test.code, test.cursor, got, test.want)
		}
	}
	if got := byteOffset("θx", nil); got != 3 {
		t.Errorf("byteOffset without a cursor = %d, want the end, 3", got)
	}
	for _, test := range []struct {
		offset, want int
	}{{0, 0}, {2, 1}, {6, 2}, {7, 3}, {99, 3}, {-1, 0}} {
		if got := runeOffset("θ𝛼x", test.offset); got != test.want {
			t.Errorf("runeOffset(%d) = %d, want %d", test.offset, got, test.want)
		}
	}
}

func TestInspect(t *testing.T) {
	f := &fake{inspect: func(source string, cursor, detail int) (map[string]any, bool, error) {
		switch {
		case source == "θ.C" && cursor == 3 && detail == 1:
			return map[string]any{"text/plain": "heat capacity"}, true, nil
		case source == "broken":
			return nil, true, errors.New("no engine")
		}
		return nil, false, nil
	}}
	c := connect(serveFake(t, f))
	r := c.ask("inspect_request", cell{"code": "θ.C", "cursor_pos": 2, "detail_level": 1})
	r.want(t, "status", "ok")
	r.want(t, "found", true)
	r.want(t, "data", cell{"text/plain": "heat capacity"})
	for _, code := range []string{"x", "broken"} {
		r = c.ask("inspect_request", cell{"code": code, "cursor_pos": 0, "detail_level": 0})
		r.want(t, "status", "ok")
		r.want(t, "found", false)
		r.want(t, "data", cell{})
	}
}

func TestIsComplete(t *testing.T) {
	c := connect(serveFake(t, &fake{}))
	r := c.ask("is_complete_request", cell{"code": "func f() {"})
	r.want(t, "status", "incomplete")
	r.want(t, "indent", "\t")
	c.ask("is_complete_request", cell{"code": "x := 1"}).want(t, "status", "complete")
	c.ask("is_complete_request", cell{"code": "x := )"}).want(t, "status", "invalid")
}

func TestComms(t *testing.T) {
	c := connect(serveFake(t, &fake{}))
	c.ask("comm_info_request", cell{"target_name": "x"}).want(t, "comms", cell{})
	m := c.request("comm_open", cell{"comm_id": "c1", "target_name": "jupyter.widget", "data": cell{}})
	got := c.shown(m)
	if s := summary(got); s != "comm_close" {
		t.Fatalf("published %s, want comm_close", s)
	}
	contentOf(got[0]).want(t, "comm_id", "c1")
}

func TestHistory(t *testing.T) {
	f := &fake{cells: cellMap{"y := 2": func(*running) engine.Outcome { return value("2") }}}
	c := connect(serveFake(t, f))
	for _, code := range []string{"x := 1", "y := 2", "// a*b", "x := 1", "long\nx"} {
		c.reply(c.run(code, nil), "execute_reply")
	}
	e := func(n int, source string) []any { return []any{1, n, source} }
	for _, test := range []struct {
		name string
		ask  cell
		want [][]any
	}{
		{"range", cell{"hist_access_type": "range", "session": 0, "start": 2, "stop": 4}, [][]any{e(2, "y := 2"), e(3, "// a*b")}},
		{"range to the end", cell{"hist_access_type": "range", "session": 0, "start": 4}, [][]any{e(4, "x := 1"), e(5, "long\nx")}},
		{"range of this session by its number", cell{"hist_access_type": "range", "session": 1, "start": 1, "stop": 2}, [][]any{e(1, "x := 1")}},
		{"range of a session before", cell{"hist_access_type": "range", "session": -1, "start": 1, "stop": 9}, [][]any{}},
		{"tail", cell{"hist_access_type": "tail", "n": 2}, [][]any{e(4, "x := 1"), e(5, "long\nx")}},
		{"tail of more than there is", cell{"hist_access_type": "tail", "n": 99, "output": false}, [][]any{e(1, "x := 1"), e(2, "y := 2"), e(3, "// a*b"), e(4, "x := 1"), e(5, "long\nx")}},
		{"tail of none", cell{"hist_access_type": "tail", "n": 0}, [][]any{}},
		{"tail with output", cell{"hist_access_type": "tail", "n": 4, "output": true}, [][]any{
			{1, 2, []any{"y := 2", "2"}}, {1, 3, []any{"// a*b", nil}}, {1, 4, []any{"x := 1", nil}}, {1, 5, []any{"long\nx", nil}}}},
		{"search", cell{"hist_access_type": "search", "pattern": "x*"}, [][]any{e(1, "x := 1"), e(4, "x := 1")}},
		{"search, unique", cell{"hist_access_type": "search", "pattern": "x*", "unique": true}, [][]any{e(4, "x := 1")}},
		{"search, last", cell{"hist_access_type": "search", "pattern": "?*:= ?", "n": 2}, [][]any{e(2, "y := 2"), e(4, "x := 1")}},
		{"search across lines", cell{"hist_access_type": "search", "pattern": "l*x"}, [][]any{e(5, "long\nx")}},
		{"search in a set", cell{"hist_access_type": "search", "pattern": "[yz] *"}, [][]any{e(2, "y := 2")}},
		{"search outside a set", cell{"hist_access_type": "search", "pattern": "[!xl]*"}, [][]any{e(2, "y := 2"), e(3, "// a*b")}},
		{"search for a star", cell{"hist_access_type": "search", "pattern": "*a[*]b"}, [][]any{e(3, "// a*b")}},
		{"search, whole cells only", cell{"hist_access_type": "search", "pattern": "y"}, [][]any{}},
		{"search for nothing in particular", cell{"hist_access_type": "search", "n": 1}, [][]any{e(5, "long\nx")}},
		{"a way that is not known", cell{"hist_access_type": "fly"}, [][]any{}},
	} {
		t.Run(test.name, func(t *testing.T) {
			r := c.ask("history_request", test.ask)
			r.want(t, "status", "ok")
			r.want(t, "history", test.want)
		})
	}
}

func TestGlobTakesAnyPattern(t *testing.T) {
	for _, test := range []struct {
		pattern, text string
		want          bool
	}{
		{"[z-a]", "[z-a]", true}, {"[", "[", true}, {"[]", "[]", true}, {"[!", "[!", true}, {"a.c", "abc", false},
		{"[]a]", "]", true}, {`a\`, `a\`, true}, {"θ?", "θx", true}, {"\xff*", "x", false}, {"[^a]", "b", true}, {"[a-c]", "b", true},
	} {
		if got := glob(test.pattern).MatchString(test.text); got != test.want {
			t.Errorf("glob(%q) matches %q: %v, want %v", test.pattern, test.text, got, test.want)
		}
	}
}
