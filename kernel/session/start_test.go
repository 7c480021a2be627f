package session

import (
	"context"
	"errors"
	"runtime"
	"strings"
	"testing"
)

// What needs no engine is answered while it starts; a cell waits for it.
func TestRequestsWhileTheEngineStarts(t *testing.T) {
	f := &fake{}
	ready := make(chan struct{})
	k := serveFake(t, f, func(o *Options) {
		o.Start = func(context.Context) (Engine, error) { <-ready; return f, nil }
	})
	c := connect(k)
	c.ask("kernel_info_request", cell{}).want(t, "status", "ok")
	m := c.run("x", nil)
	stopped := c.run("y", nil)
	k.waitQueued(1)
	close(ready)
	c.reply(m, "execute_reply").want(t, "status", "ok")
	c.reply(stopped, "execute_reply").want(t, "status", "ok")
}

// An interrupt reaches a cell that waits for the engine.
func TestInterruptWhileTheEngineStarts(t *testing.T) {
	f := &fake{}
	ready := make(chan struct{})
	k := serveFake(t, f, func(o *Options) {
		o.Start = func(context.Context) (Engine, error) { <-ready; return f, nil }
	})
	c := connect(k)
	m := c.run("x", nil)
	k.waitQueued(0)
	i := c.send(c.control, c.message("interrupt_request", cell{}))
	c.check(c.wait(c.onControl), i, "interrupt_reply")
	close(ready)
	c.reply(m, "execute_reply").want(t, "ename", "interrupted")
	if len(f.sources()) != 0 {
		t.Errorf("the engine ran %q", f.sources())
	}
}

func TestShutdownWhileTheEngineStarts(t *testing.T) {
	k := serveFake(t, &fake{}, func(o *Options) {
		o.Start = func(ctx context.Context) (Engine, error) { <-ctx.Done(); return nil, ctx.Err() }
	})
	c := connect(k)
	m := c.send(c.control, c.message("shutdown_request", cell{}))
	c.check(c.wait(c.onControl), m, "shutdown_reply").want(t, "status", "ok")
	<-k.done
	if k.err != nil {
		t.Errorf("Serve: %v", k.err)
	}
}

func TestEngineThatDoesNotStart(t *testing.T) {
	none := errors.New("no child")
	k := serveFake(t, &fake{}, func(o *Options) {
		o.Start = func(context.Context) (Engine, error) { return nil, none }
	})
	<-k.done
	if !errors.Is(k.err, none) || !strings.Contains(k.err.Error(), "the engine does not start") {
		t.Errorf("Serve: %v", k.err)
	}
}

// Cells, clients and sessions leave no goroutine behind.
func TestNoGoroutineIsLeft(t *testing.T) {
	before := runtime.NumGoroutine()
	t.Run("session", func(t *testing.T) {
		k := serveFake(t, &fake{cells: cellMap{"x": func(r *running) (o outcome) { r.Stream("stdout", "x"); return }}})
		c := connect(k)
		during := 0
		for i := range 300 {
			m := c.run("x", nil)
			c.shown(m)
			c.reply(m, "execute_reply")
			if i == 0 {
				during = runtime.NumGoroutine()
			}
		}
		// The connection for input, which no cell has used, may have been made
		// after the first of them.
		const ofConnections = 20
		if n := runtime.NumGoroutine(); n > during+ofConnections {
			t.Errorf("%d goroutines after 300 cells, %d after the first", n, during)
		}
		k.end()
		for _, z := range []interface{ Close() error }{c.shell, c.control, c.stdin, c.iopub} {
			z.Close()
		}
	})
	k := &served{t: t}
	k.waitFor(func() bool { return runtime.NumGoroutine() <= before })
}
