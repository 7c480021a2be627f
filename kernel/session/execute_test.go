package session

import (
	"slices"
	"testing"

	"levelsum/display"
	"levelsum/kernel/engine"
	"levelsum/kernel/wire"
)

func TestExecuteResult(t *testing.T) {
	c := connect(serveFake(t, &fake{cells: cellMap{"1+1": func(*running) engine.Outcome { return value("2") }}}))
	m := c.run("1+1", nil)
	got := c.shown(m)
	if s := summary(got); s != "execute_input|execute_result:2" {
		t.Errorf("published %s", s)
	}
	contentOf(got[0]).want(t, "code", "1+1")
	contentOf(got[0]).want(t, "execution_count", 1)
	contentOf(got[1]).want(t, "execution_count", 1)
	contentOf(got[1]).want(t, "metadata", map[string]any{})
	r := c.reply(m, "execute_reply")
	r.want(t, "status", "ok")
	r.want(t, "execution_count", 1)
	r.want(t, "user_expressions", map[string]any{})
	r.want(t, "payload", []any{})
}

func TestExecuteError(t *testing.T) {
	c := connect(serveFake(t, &fake{cells: cellMap{"bad": func(r *running) engine.Outcome {
		r.Stream("stdout", "before\n")
		return fault("panic")
	}}}))
	m := c.run("bad", nil)
	got := c.shown(m)
	if s := summary(got); s != "execute_input|stdout:before\n|error:panic:it was panic" {
		t.Errorf("published %s", s)
	}
	contentOf(got[2]).want(t, "traceback", []string{"panic", "line 2"})
	r := c.reply(m, "execute_reply")
	r.want(t, "status", "error")
	r.want(t, "ename", "panic")
	r.want(t, "evalue", "it was panic")
	r.want(t, "traceback", []string{"panic", "line 2"})
	r.want(t, "execution_count", 1)
}

// The counter goes up with each request that stores history, whether it
// succeeds or not, and no other.
func TestExecutionCount(t *testing.T) {
	f := &fake{cells: cellMap{"bad": func(*running) engine.Outcome { return fault("panic") }}}
	c := connect(serveFake(t, f))
	for _, test := range []struct {
		code string
		more cell
		want int
	}{
		{"a", nil, 1},
		{"b", cell{"silent": true}, 1},
		{"c", cell{"store_history": false}, 1},
		{"d", nil, 2},
		{" \n", nil, 2},
		{"bad", nil, 3},
		{"e", cell{"silent": true, "store_history": true}, 3},
		{"f", nil, 4},
	} {
		m := c.run(test.code, test.more)
		c.shown(m)
		r := c.reply(m, "execute_reply")
		r.want(t, "execution_count", test.want)
	}
	if got, want := f.numbers(), []int{1, 1, 1, 2, 3, 3, 4}; !slices.Equal(got, want) {
		t.Errorf("the engine ran cells with the numbers %v, want %v", got, want)
	}
}

func TestSilentPublishesNothing(t *testing.T) {
	c := connect(serveFake(t, &fake{cells: cellMap{
		"x": func(r *running) engine.Outcome {
			r.Stream("stdout", "text")
			r.Show(display.Text("view"), "", false)
			r.Clear(false)
			return value("3")
		},
		"bad": func(*running) engine.Outcome { return fault("panic") },
	}}))
	m := c.run("x", cell{"silent": true})
	if got := c.shown(m); len(got) != 0 {
		t.Errorf("published %s", summary(got))
	}
	c.reply(m, "execute_reply").want(t, "status", "ok")
	m = c.run("bad", cell{"silent": true})
	if got := c.shown(m); len(got) != 0 {
		t.Errorf("published %s", summary(got))
	}
	c.reply(m, "execute_reply").want(t, "status", "error")
	c.ask("history_request", cell{"hist_access_type": "tail", "n": 5}).want(t, "history", []any{})
}

func TestNotStoredIsShownAndNotRemembered(t *testing.T) {
	c := connect(serveFake(t, &fake{cells: cellMap{"1+1": func(*running) engine.Outcome { return value("2") }}}))
	m := c.run("1+1", cell{"store_history": false})
	if s := summary(c.shown(m)); s != "execute_input|execute_result:2" {
		t.Errorf("published %s", s)
	}
	c.reply(m, "execute_reply").want(t, "execution_count", 0)
	c.ask("history_request", cell{"hist_access_type": "tail", "n": 5}).want(t, "history", []any{})
}

// An error in one expression does not spoil the others, and one without an
// answer has an error.
func TestUserExpressions(t *testing.T) {
	f := &fake{cells: cellMap{"x": func(r *running) engine.Outcome {
		return engine.Outcome{Answers: map[string]engine.Answer{
			"good": {View: display.Text("5")},
			"bad":  {Fault: &engine.Fault{Name: "compile error", Message: "undefined: y"}},
		}}
	}}}
	c := connect(serveFake(t, f))
	asked := map[string]string{"good": "2+3", "bad": "y", "none": "z"}
	m := c.run("x", cell{"user_expressions": asked})
	r := c.reply(m, "execute_reply")
	r.want(t, "status", "ok")
	got := r["user_expressions"].(map[string]any)
	object(got["good"].(map[string]any)).want(t, "status", "ok")
	object(got["good"].(map[string]any)).want(t, "data", map[string]any{"text/plain": "5"})
	object(got["bad"].(map[string]any)).want(t, "status", "error")
	object(got["bad"].(map[string]any)).want(t, "evalue", "undefined: y")
	object(got["bad"].(map[string]any)).want(t, "traceback", []string{"compile error: undefined: y"})
	object(got["none"].(map[string]any)).want(t, "status", "error")
	f.mu.Lock()
	defer f.mu.Unlock()
	if len(f.ran) != 1 || len(f.ran[0].Asks) != 3 || f.ran[0].Asks["good"] != "2+3" {
		t.Errorf("the engine ran %+v", f.ran)
	}
}

// After an error the cells that wait are aborted, after the idle of the one
// that failed; what is no cell is answered, and all in order.
func TestAbort(t *testing.T) {
	hold := make(chan struct{})
	f := &fake{cells: cellMap{"bad": func(*running) engine.Outcome { <-hold; return fault("panic") }}}
	k := serveFake(t, f)
	c := connect(k)
	bad := c.run("bad", nil)
	second := c.run("second", nil)
	info := c.request("kernel_info_request", cell{})
	third := c.run("third", nil)
	k.waitQueued(3)
	close(hold)

	shown := []string{}
	for m := range c.published() {
		if m.Header.Type != "status" {
			continue
		}
		for name, r := range map[string]*wire.Message{"bad": bad, "second": second, "info": info, "third": third} {
			if string(m.Parent) == string(r.RawHeader) {
				shown = append(shown, name+" "+contentOf(m)["execution_state"].(string))
			}
		}
		if len(shown) == 8 {
			break
		}
	}
	want := []string{"bad busy", "bad idle", "second busy", "second idle", "info busy", "info idle", "third busy", "third idle"}
	if !slices.Equal(shown, want) {
		t.Errorf("statuses %q, want %q", shown, want)
	}
	c.reply(bad, "execute_reply").want(t, "status", "error")
	for i, m := range []*wire.Message{second, info, third} {
		if i == 1 {
			c.reply(m, "kernel_info_reply").want(t, "status", "ok")
			continue
		}
		r := c.reply(m, "execute_reply")
		r.want(t, "status", "aborted")
		if n, ok := r["execution_count"]; ok {
			t.Errorf("an aborted cell has the execution_count %v", n)
		}
	}
	if got, want := f.sources(), []string{"bad"}; !slices.Equal(got, want) {
		t.Errorf("the engine ran %q, want %q", got, want)
	}
	// The client knows of the error now: what it sends next is run, with the next number.
	after := c.run("after", nil)
	r := c.reply(after, "execute_reply")
	r.want(t, "status", "ok")
	r.want(t, "execution_count", 2)
}

// A cell that was sent before the error but comes after it is aborted too.
func TestAbortOfWhatWasUnderWay(t *testing.T) {
	c := connect(serveFake(t, &fake{cells: cellMap{"bad": func(*running) engine.Outcome { return fault("panic") }}}))
	early := c.message("execute_request", cell{"code": "early"})
	bad := c.run("bad", nil)
	c.reply(bad, "execute_reply").want(t, "status", "error")
	c.send(c.shell, early)
	c.reply(early, "execute_reply").want(t, "status", "aborted")
	late := c.run("late", nil)
	c.reply(late, "execute_reply").want(t, "status", "ok")
}

func TestNoAbortWithoutStopOnError(t *testing.T) {
	hold := make(chan struct{})
	f := &fake{cells: cellMap{"bad": func(*running) engine.Outcome { <-hold; return fault("panic") }}}
	k := serveFake(t, f)
	c := connect(k)
	bad := c.run("bad", cell{"stop_on_error": false})
	next := c.run("next", nil)
	k.waitQueued(1)
	close(hold)
	c.reply(bad, "execute_reply").want(t, "status", "error")
	r := c.reply(next, "execute_reply")
	r.want(t, "status", "ok")
	r.want(t, "execution_count", 2)
}

// Cells that wait are announced with the numbers that they will have.
func TestAnnounce(t *testing.T) {
	hold := make(chan struct{})
	f := &fake{cells: cellMap{"first": func(*running) engine.Outcome { <-hold; return engine.Outcome{} }}}
	k := serveFake(t, f)
	c := connect(k)
	m := c.message("execute_request", cell{"code": "second"})
	m.Metadata = []byte(`{"cellId":"cell-2"}`)
	first := c.run("first", nil)
	c.send(c.shell, m)
	third := c.run("third", nil)
	k.waitFor(func() bool { return len(f.announcedNow()) == 2 })
	close(hold)
	for _, m := range []*wire.Message{first, m, third} {
		c.reply(m, "execute_reply")
	}
	got := f.announcedNow()
	if got[0].N != 2 || got[0].Source != "second" || got[0].ID != "cell-2" || got[1].N != 3 || got[1].Source != "third" {
		t.Errorf("announced %+v", got)
	}
	if want := []int{1, 2, 3}; !slices.Equal(f.numbers(), want) {
		t.Errorf("ran with the numbers %v, want %v", f.numbers(), want)
	}
}

func TestPayload(t *testing.T) {
	next := map[string]any{"source": "set_next_input", "text": "x", "replace": true}
	c := connect(serveFake(t, &fake{cells: cellMap{"x": func(*running) engine.Outcome {
		return engine.Outcome{How: map[string]any{"payload": []any{next}, "tier": "interpreted"}}
	}}}))
	m := c.run("x", nil)
	got := c.wait(c.onShell)
	c.check(got, m, "execute_reply").want(t, "payload", []any{next})
	if want := `{"tier":"interpreted"}`; string(got.Metadata) != want {
		t.Errorf("metadata = %s, want %s", got.Metadata, want)
	}
}

func TestContentThatCannotBeRead(t *testing.T) {
	f := &fake{}
	c := connect(serveFake(t, f))
	for _, kind := range []string{"execute", "complete", "inspect", "is_complete", "history"} {
		r := c.ask(kind+"_request", cell{"code": 5, "hist_access_type": 7})
		r.want(t, "status", "error")
		r.want(t, "ename", "bad request")
	}
	if len(f.sources()) != 0 {
		t.Errorf("the engine ran %q", f.sources())
	}
}
