package session

import (
	"strings"
	"testing"

	"levelsum/display"
	"levelsum/kernel/engine"
	"levelsum/kernel/wire"
)

// stored is what a front end keeps of what is published.
func stored(all []*wire.Message) string {
	var kept []*wire.Message
	clear := false
	for _, m := range all {
		switch m.Header.Type {
		case "clear_output":
			if contentOf(m)["wait"] == true {
				clear = true
			} else {
				kept = nil
			}
		case "stream", "display_data", "execute_result", "error":
			if clear {
				kept, clear = nil, false
			}
			kept = append(kept, m)
		}
	}
	return summary(kept)
}

// A hint is seen while it holds, and what is stored is the same as without it.
func TestHintsAreSeenAndNotStored(t *testing.T) {
	hint := func(r *running) { r.Output.(engine.Hinter).Hint("waits\n") }
	// More than is kept to be shown again.
	long := strings.Repeat("stdout:"+strings.Repeat("x", gatherBytes)+"|", 5)
	for _, test := range []struct {
		name      string
		run       func(*running)
		published string
		stored    string
	}{
		{"alone", func(r *running) { hint(r) },
			"stderr:waits\n|clear_output:false", ""},
		{"before the output", func(r *running) { hint(r); r.Stream("stdout", "a") },
			"stderr:waits\n|clear_output:false|stdout:a", "stdout:a"},
		{"between", func(r *running) {
			r.Stream("stdout", "a")
			r.Show(display.Text("v"), "id", false)
			hint(r)
			r.Stream("stdout", "b")
		}, "stdout:a|display_data(id):v|stderr:waits\n|clear_output:false|stdout:a|display_data(id):v|stdout:b", "stdout:a|display_data(id):v|stdout:b"},
		{"twice", func(r *running) { hint(r); hint(r); r.Stream("stdout", "a"); hint(r) },
			"stderr:waits\n|stderr:waits\n|clear_output:false|stdout:a|stderr:waits\n|clear_output:false|stdout:a", "stdout:a"},
		{"after a clear", func(r *running) { r.Stream("stdout", "a"); r.Clear(false); r.Stream("stdout", "b"); hint(r) },
			"clear_output:false|stdout:b|stderr:waits\n|clear_output:false|stdout:b", "stdout:b"},
		{"after long output", func(r *running) {
			for range 5 {
				r.Stream("stdout", strings.Repeat("x", gatherBytes))
			}
			hint(r)
		}, long + "stderr:waits\n", long + "stderr:waits\n"},
	} {
		t.Run(test.name, func(t *testing.T) {
			got := shownBy(t, test.run)
			if s := summary(got); s != test.published {
				t.Errorf("published %.300s\nwant %.300s", s, test.published)
			}
			if s := stored(got); s != test.stored {
				t.Errorf("stored %.300s\nwant %.300s", s, test.stored)
			}
		})
	}
}

// A progress line is seen while the cell runs, and nothing of it is stored.
func TestProgressIsSeenAndNotStored(t *testing.T) {
	line := func(s string) display.View {
		v := display.Text(s)
		v.Metadata = map[string]any{"levelsum": map[string]any{"transient": true}}
		return v
	}
	for _, test := range []struct {
		name   string
		run    func(*running)
		stored string
	}{
		{"alone", func(r *running) {
			r.Show(line("1 of 2"), "p", false)
			r.Ask("", false) // publishes
			r.Show(line(""), "p", true)
		}, ""},
		{"not ended", func(r *running) { r.Show(line("1 of 2"), "p", false) }, ""},
		{"between", func(r *running) {
			r.Stream("stdout", "a")
			r.Show(line("1 of 2"), "p", false)
			r.Show(display.Text("v"), "id", false)
			r.Show(line("2 of 2"), "p", true)
			r.Stream("stdout", "b")
		}, "stdout:a|display_data(id):v|stdout:b"},
		{"with a hint", func(r *running) {
			r.Show(line("1 of 2"), "p", false)
			r.Output.(engine.Hinter).Hint("waits\n")
			r.Show(line("2 of 2"), "p", true)
			r.Stream("stdout", "b")
		}, "stdout:b"},
	} {
		t.Run(test.name, func(t *testing.T) {
			got := shownBy(t, test.run)
			if s := stored(got); s != test.stored {
				t.Errorf("stored %.300s\nwant %.300s", s, test.stored)
			}
			if s := summary(got); !strings.Contains(s, "display_data(p):1 of 2") && !strings.Contains(s, "display_data(p):2 of 2") {
				t.Errorf("the line is not seen: %s", s)
			}
		})
	}
}

// The error of an interrupted cell stays, the hint before it does not.
func TestHintBeforeAnError(t *testing.T) {
	f := &fake{cells: cellMap{"x": func(r *running) engine.Outcome {
		r.Stream("stdout", "a")
		r.Output.(engine.Hinter).Hint("still running\n")
		return fault("interrupted")
	}}}
	c := connect(serveFake(t, f))
	if s := stored(c.shown(c.run("x", nil))); s != "stdout:a|error:interrupted:it was interrupted" {
		t.Errorf("stored %s", s)
	}
}
