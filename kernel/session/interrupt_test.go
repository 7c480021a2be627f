package session

import (
	"context"
	"testing"

	"levelsum/kernel/engine"
)

func TestInterruptWhileRunning(t *testing.T) {
	started := make(chan struct{})
	f := &fake{cells: cellMap{"loop": func(r *running) engine.Outcome { close(started); return untilInterrupted(r) }}}
	c := connect(serveFake(t, f))
	m := c.run("loop", nil)
	<-started
	i := c.send(c.control, c.message("interrupt_request", cell{}))
	c.check(c.wait(c.onControl), i, "interrupt_reply").want(t, "status", "ok")
	r := c.reply(m, "execute_reply")
	r.want(t, "status", "error")
	r.want(t, "ename", "interrupted")
	if n := f.interruptsNow(); n != 1 {
		t.Errorf("the engine was interrupted %d times, want once", n)
	}
}

// As soon as a client has seen busy, an interrupt counts for the cell.
func TestInterruptRightAfterBusy(t *testing.T) {
	f := &fake{cells: cellMap{"loop": untilInterrupted}}
	c := connect(serveFake(t, f))
	for range 50 {
		m := c.run("loop", nil)
		for got := range c.published() {
			if got.Header.Type == "status" && string(got.Parent) == string(m.RawHeader) {
				break
			}
		}
		for answered := false; !answered; {
			// The fake forgets an interrupt that comes before Run, as an engine
			// may; a user presses the button again.
			c.send(c.control, c.message("interrupt_request", cell{}))
			c.wait(c.onControl)
			select {
			case r := <-c.onShell:
				c.check(r, m, "execute_reply").want(t, "ename", "interrupted")
				answered = true
			default:
			}
		}
	}
}

func TestInterruptWhileIdle(t *testing.T) {
	f := &fake{}
	k := serveFake(t, f)
	c := connect(k)
	i := c.send(c.control, c.message("interrupt_request", cell{}))
	c.check(c.wait(c.onControl), i, "interrupt_reply").want(t, "status", "ok")
	if got := c.shown(i); len(got) != 0 {
		t.Errorf("published %s", summary(got))
	}
	k.session.Interrupt() // the signal
	m := c.run("x", nil)
	c.reply(m, "execute_reply").want(t, "status", "ok")
	if n := f.interruptsNow(); n != 0 {
		t.Errorf("the engine was interrupted %d times while it was idle", n)
	}
}

// An interrupt aborts the cells behind the one that runs.
func TestInterruptAbortsTheQueue(t *testing.T) {
	f := &fake{cells: cellMap{"loop": untilInterrupted}}
	k := serveFake(t, f)
	c := connect(k)
	m := c.run("loop", nil)
	next := c.run("next", nil)
	k.waitQueued(1)
	k.waitFor(func() bool { return len(f.sources()) == 1 })
	k.session.Interrupt()
	c.reply(m, "execute_reply").want(t, "ename", "interrupted")
	c.reply(next, "execute_reply").want(t, "status", "aborted")
}

// A client that is gone before its reply is no error.
func TestClientGoneBeforeItsReply(t *testing.T) {
	hold := make(chan struct{})
	f := &fake{cells: cellMap{"x": func(*running) engine.Outcome { <-hold; return engine.Outcome{} }}}
	k := serveFake(t, f)
	gone, c := connect(k), connect(k)
	m := gone.run("x", nil)
	k.waitFor(func() bool { return len(f.sources()) == 1 })
	gone.shell.Close()
	gone.control.Close()
	close(hold)
	c.shown(m)
	c.drained()
	k.end()
	if k.log.Len() > 0 {
		t.Errorf("log: %s", k.log)
	}
}

func TestShutdown(t *testing.T) {
	for _, channel := range []string{"control", "shell"} {
		for _, restart := range []bool{false, true} {
			t.Run(channel, func(t *testing.T) {
				f := &fake{cells: cellMap{"loop": untilInterrupted}}
				k := serveFake(t, f)
				c := connect(k)
				loop := c.run("loop", nil)
				k.waitFor(func() bool { return len(f.sources()) == 1 })
				z, in := c.control, c.onControl
				if channel == "shell" {
					z, in = c.shell, c.onShell
				}
				m := c.send(z, c.message("shutdown_request", cell{"restart": restart}))
				o := c.check(c.wait(in), m, "shutdown_reply")
				o.want(t, "status", "ok")
				o.want(t, "restart", restart)
				if s := summary(c.shown(m)); s != "shutdown_reply" {
					t.Errorf("published %s", s)
				}
				c.reply(loop, "execute_reply").want(t, "status", "error")
				<-k.done
				if k.restart != restart {
					t.Errorf("Serve reported restart %v, want %v", k.restart, restart)
				}
				if !f.closed {
					t.Error("the engine was not closed")
				}
			})
		}
	}
}

// A cell that does not end does not keep the session from ending.
func TestShutdownOfACellThatHangs(t *testing.T) {
	hold := make(chan struct{})
	f := &fake{cells: cellMap{"hang": func(*running) engine.Outcome { <-hold; return engine.Outcome{} }}}
	k := serveFake(t, f, hasty)
	c := connect(k)
	c.run("hang", nil)
	k.waitFor(func() bool { return len(f.sources()) == 1 })
	m := c.send(c.control, c.message("shutdown_request", cell{}))
	c.check(c.wait(c.onControl), m, "shutdown_reply")
	<-k.done
	close(hold)
}

func TestServeEndsWithItsContext(t *testing.T) {
	ctx, cancel := context.WithCancel(context.Background())
	f := &fake{}
	s, err := Open(Options{Connection: connectionForTests(), Start: f.start})
	if err != nil {
		t.Fatal(err)
	}
	done := make(chan struct{})
	go func() { s.Serve(ctx); close(done) }()
	cancel()
	<-done
	if !f.closed {
		t.Error("the engine was not closed")
	}
}
