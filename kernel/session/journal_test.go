package session

import (
	"context"
	"errors"
	"os"
	"path/filepath"
	"reflect"
	"slices"
	"strings"
	"sync/atomic"
	"testing"

	"levelsum/kernel/engine"
)

func sources(all []Record) []string {
	var s []string
	for _, r := range all {
		s = append(s, r.Source)
	}
	return s
}

func TestJournalOutlivesAKilledProcess(t *testing.T) {
	path := filepath.Join(t.TempDir(), "kernel-1.journal")
	j, err := OpenJournal(path)
	if err != nil {
		t.Fatal(err)
	}
	if info, err := os.Stat(path); err != nil || info.Mode().Perm() != 0o600 {
		t.Errorf("mode %v, %v, want 0600", info.Mode(), err)
	}
	j.Add(Record{N: 1, Source: "a\n\"θ\"", OK: true})
	j.Add(Record{N: 2, Source: "bad"})
	j.Add(Record{N: 3, Source: "c", OK: true, ID: "id"})
	if want := []string{"a\n\"θ\"", "bad", "c"}; !slices.Equal(sources(j.Live()), want) {
		t.Errorf("live %q, want %q", sources(j.Live()), want)
	}
	// The process is killed while it writes: there is no Close, and half a line.
	f, err := os.OpenFile(path, os.O_APPEND|os.O_WRONLY, 0)
	if err != nil {
		t.Fatal(err)
	}
	f.WriteString(`{"n":4,"sou`)
	f.Close()

	j, err = OpenJournal(path)
	if err != nil {
		t.Fatal(err)
	}
	if want := []string{"a\n\"θ\"", "c"}; !slices.Equal(sources(j.Lost()), want) || len(j.Live()) != 0 {
		t.Errorf("lost %q and live %q, want %q and none", sources(j.Lost()), sources(j.Live()), want)
	}
	j.Again(j.Lost()[0])
	j.Add(Record{N: 1, Source: "new", OK: true})
	j, err = OpenJournal(path) // killed again
	if err != nil {
		t.Fatal(err)
	}
	if want := []string{"c", "a\n\"θ\"", "new"}; !slices.Equal(sources(j.Lost()), want) {
		t.Errorf("lost %q, want %q", sources(j.Lost()), want)
	}
	if err := j.Close(); err != nil {
		t.Error(err)
	}
	if _, err := os.Stat(path); !os.IsNotExist(err) {
		t.Errorf("after Close the file is still there: %v", err)
	}
	if err := j.Close(); err != nil {
		t.Errorf("second Close: %v", err)
	}
}

func TestJournalInAFolderThatIsNotThere(t *testing.T) {
	if _, err := OpenJournal(filepath.Join(t.TempDir(), "gone", "k.journal")); err == nil {
		t.Error("no error")
	}
}

// When the engine was started again, the reader is told, and the cells that had
// succeeded can be run again: in their order, unseen.
func TestReplay(t *testing.T) {
	f := &fake{cells: cellMap{
		"one":   func(r *running) engine.Outcome { r.Stream("stdout", "one\n"); return value("1") },
		"bad":   func(*running) engine.Outcome { return fault("panic") },
		"crash": func(*running) engine.Outcome { o := fault("engine ended"); o.Restarted = true; return o },
	}}
	k := serveFake(t, f)
	c := connect(k)
	for _, code := range []string{"one", "bad", "two"} {
		c.shown(c.run(code, nil))
		c.wait(c.onShell)
	}
	m := c.run("crash", nil)
	if s := summary(c.shown(m)); s != "execute_input|stderr:levelsum: the values of earlier cells are gone; a cell that is only kernel.Replay() runs the 2 that had succeeded again\n|error:engine ended:it was engine ended" {
		t.Errorf("published %s", s)
	}
	c.reply(m, "execute_reply").want(t, "status", "error")
	m = c.run(" kernel.Replay()\n", nil)
	if s := summary(c.shown(m)); s != "execute_input|stdout:Run again: 2 of 2 cells.\n" {
		t.Errorf("published %s", s)
	}
	c.reply(m, "execute_reply").want(t, "status", "ok")
	if want := []string{"one", "bad", "two", "crash", "one", "two"}; !slices.Equal(f.sources(), want) {
		t.Errorf("the engine ran %q, want %q", f.sources(), want)
	}
	if want := []int{1, 2, 3, 4, 1, 3}; !slices.Equal(f.numbers(), want) {
		t.Errorf("the engine ran cells with the numbers %v, want %v", f.numbers(), want)
	}
	m = c.run("kernel.Replay()", nil)
	if s := summary(c.shown(m)); s != "execute_input|stdout:No cell has lost its values.\n" {
		t.Errorf("published %s", s)
	}
}

func TestReplayStopsAtTheFirstThatFails(t *testing.T) {
	var times atomic.Int32
	f := &fake{cells: cellMap{
		"once": func(*running) engine.Outcome {
			if times.Add(1) == 1 {
				return engine.Outcome{}
			}
			return fault("panic")
		},
		"crash": func(*running) engine.Outcome { o := fault("engine ended"); o.Restarted = true; return o },
	}}
	k := serveFake(t, f)
	c := connect(k)
	for _, code := range []string{"a", "once", "b", "crash"} {
		c.shown(c.run(code, nil))
		c.wait(c.onShell)
	}
	m := c.run("kernel.Replay()", nil)
	if s := summary(c.shown(m)); s != "execute_input|stdout:Run again: 1 of 3 cells. Cell 2 had succeeded and fails now.\n|error:panic:it was panic" {
		t.Errorf("published %s", s)
	}
	c.reply(m, "execute_reply").want(t, "ename", "panic")
	if want := []string{"once", "b"}; !slices.Equal(sources(k.session.journal.Lost()), want) {
		t.Errorf("still lost: %q, want %q", sources(k.session.journal.Lost()), want)
	}
}

func TestInterruptEndsAReplay(t *testing.T) {
	var times atomic.Int32
	f := &fake{cells: cellMap{
		"a": func(r *running) engine.Outcome {
			if times.Add(1) == 1 {
				return engine.Outcome{}
			}
			return untilInterrupted(r)
		},
		"crash": func(*running) engine.Outcome { o := fault("engine ended"); o.Restarted = true; return o },
	}}
	k := serveFake(t, f)
	c := connect(k)
	for _, code := range []string{"a", "b", "crash"} {
		c.shown(c.run(code, nil))
		c.wait(c.onShell)
	}
	m := c.run("kernel.Replay()", nil)
	k.waitFor(func() bool { return len(f.sources()) == 4 })
	k.session.Interrupt()
	c.reply(m, "execute_reply").want(t, "ename", "interrupted")
	if want := []string{"a", "b"}; !slices.Equal(sources(k.session.journal.Lost()), want) {
		t.Errorf("still lost: %q, want %q", sources(k.session.journal.Lost()), want)
	}
}

// The journal of a killed process is there at the next start, and used only
// when it is asked for.
func TestReplayAfterAKilledProcess(t *testing.T) {
	path := filepath.Join(t.TempDir(), "k.journal")
	old, err := OpenJournal(path)
	if err != nil {
		t.Fatal(err)
	}
	old.Add(Record{N: 7, Source: "from before", OK: true})
	j, err := OpenJournal(path)
	if err != nil {
		t.Fatal(err)
	}
	f := &fake{}
	c := connect(serveFake(t, f, func(o *Options) { o.Journal = j }))
	c.reply(c.run("new", nil), "execute_reply")
	m := c.run("kernel.Journal()", nil)
	r := c.reply(m, "execute_reply")
	page := r["payload"].([]any)[0].(map[string]any)
	object(page).want(t, "source", "page")
	text := page["data"].(map[string]any)["text/plain"].(string)
	if !strings.Contains(text, "[7]\n\tfrom before\n") || !strings.Contains(text, "[1]\n\tnew\n") {
		t.Errorf("page %q", text)
	}
	c.reply(c.run("kernel.Replay()", nil), "execute_reply").want(t, "status", "ok")
	if want := []string{"new", "from before"}; !slices.Equal(f.sources(), want) {
		t.Errorf("the engine ran %q, want %q", f.sources(), want)
	}
}

// whole is a fake that compiles many cells at once.
type whole struct {
	*fake
	compiled []engine.Cell
}

func (w *whole) Program(_ context.Context, cells []engine.Cell, _ engine.Output) (engine.Program, error) {
	w.compiled = cells
	return engine.Program{}, errors.New("cells are compiled one by one then")
}

// A restart that the reader asks for keeps the journal for the process that
// follows, and the cells are compiled as one program before they are run again.
func TestReplayAfterARestart(t *testing.T) {
	path := filepath.Join(t.TempDir(), "k.journal")
	old, err := OpenJournal(path)
	if err != nil {
		t.Fatal(err)
	}
	old.Add(Record{N: 1, ID: "x", Source: "one", OK: true})
	old.Add(Record{N: 2, Source: "bad"})
	old.Add(Record{N: 3, Source: "two", OK: true})
	old.Keep()
	if err := old.Close(); err != nil {
		t.Fatal(err)
	}
	j, err := OpenJournal(path)
	if err != nil {
		t.Fatal(err)
	}
	w := &whole{fake: &fake{}}
	c := connect(serveFake(t, w.fake, func(o *Options) {
		o.Journal = j
		o.Start = func(context.Context) (Engine, error) { return w, nil }
	}))
	c.reply(c.run("kernel.Replay()", nil), "execute_reply").want(t, "status", "ok")
	if want := []string{"one", "two"}; !slices.Equal(w.sources(), want) {
		t.Errorf("the engine ran %q, want %q", w.sources(), want)
	}
	if want := []engine.Cell{{N: 1, ID: "x", Source: "one"}, {N: 3, Source: "two"}}; !reflect.DeepEqual(w.compiled, want) {
		t.Errorf("compiled %v, want %v", w.compiled, want)
	}
	if err := j.Close(); err != nil {
		t.Error(err)
	}
	if _, err := os.Stat(path); !os.IsNotExist(err) {
		t.Errorf("a session that ends for good leaves its journal: %v", err)
	}
}

// Who runs another cell first after a restart begins anew: the cells from
// before are not run again when the engine dies later.
func TestJournalOfARestartIsForgotten(t *testing.T) {
	path := filepath.Join(t.TempDir(), "k.journal")
	j, err := OpenJournal(path)
	if err != nil {
		t.Fatal(err)
	}
	j.Add(Record{N: 1, Source: "old", OK: true})
	j.Keep()
	j.Close()
	for _, again := range []bool{false, true} {
		if j, err = OpenJournal(path); err != nil {
			t.Fatal(err)
		}
		if again { // and it stays so for a process after this one
			break
		}
		if !slices.Equal(sources(j.Lost()), []string{"old"}) {
			t.Errorf("lost %q", sources(j.Lost()))
		}
		j.Add(Record{N: 1, Source: "new", OK: true})
		if len(j.Lost()) > 0 {
			t.Errorf("after another cell: lost %q", sources(j.Lost()))
		}
	}
	if !slices.Equal(sources(j.Lost()), []string{"new"}) {
		t.Errorf("in the process after it: lost %q", sources(j.Lost()))
	}
}

func TestCompleteOwnCalls(t *testing.T) {
	c := connect(serveFake(t, &fake{}))
	r := c.ask("complete_request", cell{"code": " kernel.Re", "cursor_pos": 10})
	r.want(t, "matches", []string{"kernel.Replay()"})
	r.want(t, "cursor_start", 1)
	r.want(t, "cursor_end", 10)
	c.ask("complete_request", cell{"code": "kernel.", "cursor_pos": 7}).want(t, "matches", []string{"kernel.Journal()", "kernel.Replay()"})
	c.ask("complete_request", cell{"code": "x := kernel.", "cursor_pos": 12}).want(t, "matches", []string{})
}

func TestOwnCell(t *testing.T) {
	for source, want := range map[string]bool{
		"kernel.Replay()": true, "\n kernel.Journal() // list\n": true, "kernel.Replay();": true,
		"kernel.Replay": false, "kernel.Replay(1)": false, "kernel.Other()": false, "x := kernel.Replay()": false,
		"Replay()": false, "other.Replay()": false, "kernel.Replay()\nx": false, "kernel.Replay() + 1": false, "kernel.": false,
	} {
		if got := ownCell(source) != nil; got != want {
			t.Errorf("ownCell(%q) answers: %v, want %v", source, got, want)
		}
	}
}
