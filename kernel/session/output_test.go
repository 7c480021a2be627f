package session

import (
	"fmt"
	"strings"
	"testing"
	"testing/synctest"
	"time"
	"unicode/utf8"

	"levelsum/display"
	"levelsum/kernel/engine"
	"levelsum/kernel/wire"
)

// shownBy returns what a cell that does what run says publishes.
func shownBy(t *testing.T, run func(*running)) []*wire.Message {
	t.Helper()
	f := &fake{cells: cellMap{"x": func(r *running) engine.Outcome { run(r); return engine.Outcome{} }}}
	c := connect(serveFake(t, f))
	m := c.run("x", nil)
	all := c.shown(m)
	if len(all) == 0 || all[0].Header.Type != "execute_input" {
		t.Fatalf("published %s", summary(all))
	}
	return all[1:]
}

func TestOutputKeepsItsOrder(t *testing.T) {
	got := shownBy(t, func(r *running) {
		r.Stream("stdout", "a\n")
		r.Stream("stdout", "b\n")
		r.Stream("stderr", "warn\n")
		r.Stream("stdout", "c\n")
		r.Show(display.Text("view"), "", false)
		r.Stream("stdout", "d\n")
	})
	if s := summary(got); s != "stdout:a\nb\n|stderr:warn\n|stdout:c\n|display_data:view|stdout:d\n" {
		t.Errorf("published %s", s)
	}
}

// Many small prints become few messages and no text is lost.
func TestOutputIsGathered(t *testing.T) {
	const lines = 20000
	line := func(i int) string { return fmt.Sprintf("line %d θ\n", i) }
	got := shownBy(t, func(r *running) {
		for i := range lines {
			r.Stream("stdout", line(i))
		}
	})
	var want strings.Builder
	for i := range lines {
		want.WriteString(line(i))
	}
	if len(got) > 20 {
		t.Errorf("%d messages for 20000 lines, %d bytes", len(got), want.Len())
	}
	if text := streamed(got); text != want.String() {
		t.Errorf("%d bytes were published of %d", len(text), want.Len())
	}
}

// streamed joins the text of messages.
func streamed(all []*wire.Message) string {
	var b strings.Builder
	for _, m := range all {
		if m.Header.Type == "stream" {
			b.WriteString(contentOf(m)["text"].(string))
		}
	}
	return b.String()
}

// Text of a cell that goes on is seen while it runs.
func TestOutputIsShownWhileTheCellRuns(t *testing.T) {
	seen := make(chan struct{})
	f := &fake{cells: cellMap{"x": func(r *running) engine.Outcome {
		r.Stream("stdout", "now")
		<-seen
		r.Stream("stdout", "then")
		return engine.Outcome{}
	}}}
	c := connect(serveFake(t, f))
	m := c.run("x", nil)
	for got := range c.published() {
		if got.Header.Type == "stream" {
			break
		}
	}
	close(seen)
	c.reply(m, "execute_reply")
}

func TestDisplayAndUpdate(t *testing.T) {
	got := shownBy(t, func(r *running) {
		r.Show(display.Text("1"), "p", false)
		r.Show(display.Text("other"), "q", true) // of an earlier cell
		r.Show(display.View{Data: map[string]any{"text/plain": "2", "image/png": []byte{1, 2}}, Metadata: map[string]any{"a": 1}}, "p", true)
		r.Show(display.Text("3"), "", true) // no id to replace
	})
	// Views of one place that come at once are one message.
	if s := summary(got); s != "display_data(p):2|update_display_data(q):other|display_data:3" {
		t.Errorf("published %s", s)
	}
	o := contentOf(got[0])
	o.want(t, "data", cell{"text/plain": "2", "image/png": "AQI="})
	o.want(t, "metadata", cell{"a": 1})
	contentOf(got[2]).want(t, "transient", cell{})
}

func TestUpdateLater(t *testing.T) {
	f := &fake{cells: cellMap{
		"show":   func(r *running) engine.Outcome { r.Show(display.Text("old"), "p", false); return engine.Outcome{} },
		"update": func(r *running) engine.Outcome { r.Show(display.Text("new"), "p", true); return engine.Outcome{} },
	}}
	c := connect(serveFake(t, f))
	if s := summary(c.shown(c.run("show", nil))); s != "execute_input|display_data(p):old" {
		t.Errorf("published %s", s)
	}
	if s := summary(c.shown(c.run("update", nil))); s != "execute_input|update_display_data(p):new" {
		t.Errorf("published %s", s)
	}
}

func TestClear(t *testing.T) {
	got := shownBy(t, func(r *running) {
		r.Stream("stdout", "gone\n")
		r.Show(display.Text("gone"), "", false)
		r.Show(display.Text("elsewhere"), "q", true)
		r.Clear(false)
		r.Clear(true)
		r.Stream("stdout", "kept\n")
	})
	if s := summary(got); s != "update_display_data(q):elsewhere|clear_output:false|stdout:kept\n" {
		t.Errorf("published %s", s)
	}
	got = shownBy(t, func(r *running) { r.Clear(true); r.Show(display.Text("v"), "", false) })
	if s := summary(got); s != "clear_output:true|display_data:v" {
		t.Errorf("published %s", s)
	}
}

// A progress line drawn anew ten thousand times does not flood the front end.
func TestAnimationIsThinned(t *testing.T) {
	got := shownBy(t, func(r *running) {
		for i := range 10000 {
			r.Clear(true)
			r.Stream("stdout", fmt.Sprintf("step %d\n", i))
		}
	})
	if len(got) > 100 {
		t.Errorf("%d messages", len(got))
	}
	if s := summary(got[len(got)-1:]); s != "stdout:step 9999\n" {
		t.Errorf("last %s", s)
	}
}

// Numbers that JSON does not have, shown as data, do not stop the output.
func TestNotANumberIsShown(t *testing.T) {
	nan := 0.0
	nan /= nan
	got := shownBy(t, func(r *running) {
		r.Show(display.View{Data: map[string]any{"text/plain": "NaN", "application/json": []float64{1, nan}}}, "", false)
	})
	contentOf(got[0]).want(t, "data", cell{"text/plain": "NaN", "application/json": []any{1, nil}})
}

func TestBytesThatAreNotUTF8(t *testing.T) {
	for _, test := range []struct {
		name  string
		parts []string
		want  string
	}{
		{"whole", []string{"θ = 1\n"}, "θ = 1\n"},
		{"a rune in two parts", []string{"a\xce", "\xb8b"}, "aθb"},
		{"a rune in four parts", []string{"\xf0", "\x9d", "\x9b", "\xbc"}, "𝛼"},
		{"a byte in the middle", []string{"a\xffb"}, `a\xffb`},
		{"a rune that never ends", []string{"a\xf0\x9d", "b"}, `a\xf0\x9db`},
		{"a rune cut by the end", []string{"a\xf0\x9d"}, `a\xf0\x9d`},
		{"two wrong bytes", []string{"\xc0\x80"}, `\xc0\x80`},
		{"the replacement character itself", []string{"\ufffd"}, "\ufffd"},
	} {
		t.Run(test.name, func(t *testing.T) {
			got := streamed(shownBy(t, func(r *running) {
				for _, p := range test.parts {
					r.Stream("stdout", p)
				}
			}))
			if got != test.want {
				t.Errorf("published %q, want %q", got, test.want)
			}
		})
	}
}

// A rune whose halves come on either side of text on the other stream.
func TestRunesOfTwoStreams(t *testing.T) {
	got := shownBy(t, func(r *running) {
		r.Stream("stdout", "\xce")
		r.Stream("stderr", "e")
		r.Stream("stdout", "\xb8")
	})
	if s := summary(got); s != "stderr:e|stdout:θ" {
		t.Errorf("published %s", s)
	}
}

// Very long output keeps its head and its tail, by whole lines, and says what
// is left out.
func TestLongOutputIsCut(t *testing.T) {
	const lines = 100_000
	line := func(i int) string { return fmt.Sprintf("%07d Cp/R = 2.5 at θ\n", i) }
	got := shownBy(t, func(r *running) {
		for i := range lines {
			r.Stream("stdout", line(i))
		}
	})
	var stdout, stderr strings.Builder
	size := 0
	for _, m := range got {
		o := contentOf(m)
		text := o["text"].(string)
		size += len(text)
		if !utf8.ValidString(text) {
			t.Error("a rune was split")
		}
		if o["name"] == "stderr" {
			stderr.WriteString(text)
		} else {
			stdout.WriteString(text)
		}
	}
	if size > engine.HeadBytes+engine.TailBytes+1000 {
		t.Errorf("%d bytes were published", size)
	}
	shown := strings.Count(stdout.String(), "\n")
	if !strings.HasPrefix(stdout.String(), line(0)+line(1)) || !strings.HasSuffix(stdout.String(), line(lines-2)+line(lines-1)) {
		t.Error("the first or the last lines are missing")
	}
	// One line may be shown in its first half only.
	var left, bytes int
	notice := stderr.String()
	if n, _ := fmt.Sscanf(notice[strings.LastIndex(notice, "levelsum:"):], "levelsum: %d lines (%d bytes) are left out here", &left, &bytes); n != 2 {
		t.Fatalf("notice %q", notice)
	}
	if left+shown != lines {
		t.Errorf("%d lines are shown and %d said to be left out, of %d", shown, left, lines)
	}
	if bytes+stdout.Len() != lines*len(line(0)) {
		t.Errorf("%d bytes are shown and %d said to be left out, of %d", stdout.Len(), bytes, lines*len(line(0)))
	}
}

// A little more than the head is shown whole.
func TestOutputALittleLonger(t *testing.T) {
	want := strings.Repeat("0123456789abcde\n", engine.HeadBytes/16+100)
	got := shownBy(t, func(r *running) { r.Stream("stdout", want) })
	var stdout strings.Builder
	for _, m := range got {
		if o := contentOf(m); o["name"] == "stdout" {
			stdout.WriteString(o["text"].(string))
		}
	}
	if stdout.String() != want {
		t.Errorf("%d bytes of %d are shown", stdout.Len(), len(want))
	}
}

// The cut is in the same place however the text was cut into calls.
func TestCutDoesNotDependOnTiming(t *testing.T) {
	text := strings.Repeat("some line with a number 0.123456789\n", 60_000)
	cut := func(step int) string {
		l := engine.NewLimit()
		var b strings.Builder
		for i := 0; i < len(text); i += step {
			now, notice := l.Add("stdout", text[i:min(i+step, len(text))])
			b.WriteString(now + notice)
		}
		notice, last := l.Rest()
		b.WriteString(notice)
		for _, p := range last {
			b.Write(p.Text)
		}
		return b.String()
	}
	want := cut(len(text))
	for _, step := range []int{36, 1000, 4097, 300_000} {
		if cut(step) != want {
			t.Errorf("the text is cut elsewhere with %d bytes a call", step)
		}
	}
}

// What a goroutine prints after its cell belongs to that cell.
func TestOutputAfterTheCell(t *testing.T) {
	left := make(chan *running, 1)
	f := &fake{cells: cellMap{"go": func(r *running) engine.Outcome { left <- r; return engine.Outcome{} }}}
	c := connect(serveFake(t, f))
	m := c.run("go", nil)
	c.shown(m)
	(<-left).Stream("stdout", "late\n")
	got := c.wait(c.onIOPub)
	if s := summary([]*wire.Message{got}); s != "stdout:late\n" || string(got.Parent) != string(m.RawHeader) {
		t.Errorf("published %s with the parent %s", s, got.Parent)
	}
}

// In no three seconds does a flow let through more than the usual server takes.
func TestFlow(t *testing.T) {
	for _, size := range []int{100, 5000, 64 << 10} {
		t.Run(fmt.Sprint(size), func(t *testing.T) {
			synctest.Test(t, func(t *testing.T) {
				f := newFlow()
				var sent []time.Time
				for range 4000 {
					f.pass(t.Context(), size)
					sent = append(sent, time.Now())
				}
				from := 0
				for i, at := range sent {
					for at.Sub(sent[from]) >= 3*time.Second {
						from++
					}
					if n := i - from + 1; n > 3000 || n*size > 3_000_000+2*size {
						t.Fatalf("%d messages of %d bytes within three seconds", n, size)
					}
				}
				if took := sent[len(sent)-1].Sub(sent[0]); took > time.Duration(4000*(size+1200))*time.Second/bytesPerSecond {
					t.Errorf("4000 messages of %d bytes took %v", size, took)
				}
			})
		})
	}
}

// Large figures are not held back: it is text whose bytes the server counts.
func TestLargeValuesPassAtOnce(t *testing.T) {
	f := &fake{cells: cellMap{"x": func(r *running) engine.Outcome {
		for range 4 {
			r.Show(display.Text(strings.Repeat("x", 4<<20)), "", false)
		}
		return engine.Outcome{}
	}}}
	k := serveFake(t, f)
	c := connect(k)
	if got := c.shown(c.run("x", nil)); len(got) != 5 {
		t.Errorf("published %d messages, want 5", len(got))
	}
	k.session.flow.mu.Lock()
	defer k.session.flow.mu.Unlock()
	if k.session.flow.bytes < 0 {
		t.Errorf("what follows is held back by %g bytes", -k.session.flow.bytes)
	}
}
