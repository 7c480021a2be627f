package engine

import (
	"context"
	"errors"
	"fmt"
	"maps"
	"os"
	"slices"
	"sync"
	"time"
)

// Options say how the child is started.
type Options struct {
	// Command starts the child; nil means this executable with "engine".
	Command []string
	// Dir is the folder that relative paths in cells mean.
	Dir string
	// Env is added to the child's environment.
	Env []string
	// Compiled has every cell compiled and none interpreted.
	Compiled bool
	// MemoryLimit ends the child when its resident memory less file pages
	// passes it, in bytes; 0 means three quarters of what the machine or its
	// control group has.
	MemoryLimit int64
}

// ErrClosed is what calls return after Close.
var ErrClosed = errors.New("engine: closed")

// An Engine is a running child. Interrupt and Close may be called at any time;
// of the other methods one at a time.
type Engine struct {
	options Options

	mu      sync.Mutex // guards what follows
	child   *child
	running bool // a cell runs
	stops   int  // interrupts during this cell
	stopAt  time.Time
	closed  bool
	out     Output // of the cell that runs, else of the last one
	next    int
}

// Start starts a child and waits until it is ready.
func Start(ctx context.Context, o Options) (*Engine, error) {
	if o.Command == nil {
		exe, err := os.Executable()
		if err != nil {
			return nil, fmt.Errorf("engine: %w", err)
		}
		o.Command = []string{exe, "engine"}
	}
	if o.Compiled {
		o.Command = append(slices.Clone(o.Command), "-compiled")
	}
	if o.MemoryLimit == 0 {
		o.MemoryLimit = memoryAvailable() / 4 * 3
	}
	e := &Engine{options: o}
	if err := e.Restart(ctx); err != nil {
		return nil, err
	}
	return e, nil
}

// Restart ends the child and starts another: all values are gone.
func (e *Engine) Restart(ctx context.Context) error {
	e.mu.Lock()
	old, closed := e.child, e.closed
	e.mu.Unlock()
	if closed {
		return ErrClosed
	}
	if old != nil {
		old.end()
	}
	c, err := startChild(ctx, e.options, e.handle)
	if err != nil {
		return err
	}
	e.mu.Lock()
	defer e.mu.Unlock()
	if e.closed {
		c.end()
		return ErrClosed
	}
	e.child = c
	return nil
}

// Close ends the child.
func (e *Engine) Close() error {
	e.mu.Lock()
	c := e.child
	e.closed = true
	e.mu.Unlock()
	if c != nil {
		c.end()
	}
	return nil
}

// handle takes what the child sends without being asked: output and values
// shown, in order. It runs on the child's reading goroutine.
func (e *Engine) handle(c *child, ev *Event, stream, text string) {
	e.mu.Lock()
	out := e.out
	e.mu.Unlock()
	if ev == nil {
		if out != nil {
			out.Stream(stream, text)
		}
		return
	}
	switch ev.Op {
	case "warn":
		if out != nil {
			out.Stream("stderr", ev.Text)
		}
	case "hint":
		if h, ok := out.(Hinter); ok {
			h.Hint(ev.Text)
		} else if out != nil && ev.Name != "build" {
			out.Stream("stderr", ev.Text)
		}
	case "show":
		if out != nil {
			out.Show(*ev.View, ev.Name, ev.Replace)
		}
	case "clear":
		if out != nil {
			out.Clear(ev.Wait)
		}
	case "ask":
		go func() {
			r := Request{Op: "answer", ID: ev.ID}
			if out == nil {
				r.Err = "no reader is there to answer"
			} else if text, err := out.Ask(ev.Text, ev.Secret); err != nil {
				r.Err = err.Error()
			} else {
				r.Text = text
			}
			_ = c.w.Send(r) // a child that is gone is noticed elsewhere
		}()
	}
}

// current returns the child, starting one if the last one could not be.
func (e *Engine) current(ctx context.Context) (*child, error) {
	e.mu.Lock()
	c, closed := e.child, e.closed
	e.mu.Unlock()
	if closed {
		return nil, ErrClosed
	}
	if c == nil || c.gone() {
		if err := e.Restart(ctx); err != nil {
			return nil, err
		}
		e.mu.Lock()
		c = e.child
		e.mu.Unlock()
	}
	return c, nil
}

// Run runs one cell and returns when it is over. If ctx ends, the cell is
// interrupted, and after a second the child is ended.
func (e *Engine) Run(ctx context.Context, c Cell, out Output) Outcome {
	ch, err := e.current(context.WithoutCancel(ctx))
	if err != nil {
		return Outcome{Fault: newFault("engine ended", err.Error())}
	}
	e.mu.Lock()
	e.out, e.running, e.stops = out, true, 0
	e.next++
	id := e.next
	e.mu.Unlock()
	defer func() {
		e.mu.Lock()
		e.running = false
		e.mu.Unlock()
	}()
	ctxDone := ctx.Done()
	reply, err := ch.ask(Request{Op: "run", ID: id, Cell: &c}, id)
	if err != nil {
		return e.died(ch)
	}
	var force <-chan time.Time
	for {
		select {
		case ev := <-reply:
			if ev == nil {
				return e.died(ch)
			}
			return *ev.Outcome
		case <-ctxDone:
			ctxDone = nil
			e.Interrupt()
			force = time.After(time.Second)
		case <-force:
			ch.kill("ended, since it did not stop when its time was over")
		}
	}
}

// died makes the outcome of a cell whose child has ended, and starts another.
func (e *Engine) died(c *child) Outcome {
	why := c.why()
	out := Outcome{Fault: newFault("engine ended", why), Restarted: true}
	e.mu.Lock()
	closed := e.closed
	e.mu.Unlock()
	if closed {
		out.Restarted = false
		return out
	}
	ctx, cancel := context.WithTimeout(context.Background(), 30*time.Second)
	defer cancel()
	if err := e.Restart(ctx); err != nil {
		out.Fault = newFault("engine ended", why+"; it could not be started again: "+err.Error())
		out.Restarted = false
	}
	return out
}

func newFault(name, msg string) *Fault {
	return &Fault{Name: name, Message: msg, Trace: []string{name + ": " + msg}}
}

// Announce tells the child of a cell that will be run soon, so that its build
// can start.
func (e *Engine) Announce(c Cell) {
	e.mu.Lock()
	ch := e.child
	e.mu.Unlock()
	if ch != nil {
		_ = ch.w.Send(Request{Op: "announce", Cell: &c}) // only a hint
	}
}

// Interrupt asks the running cell to end; called a second time while the first
// has had no effect for a second, it ends the child and starts another.
func (e *Engine) Interrupt() {
	e.mu.Lock()
	ch, running := e.child, e.running
	again := running && e.stops > 0 && time.Since(e.stopAt) >= time.Second
	if running && e.stops == 0 {
		e.stopAt = time.Now()
	}
	if running {
		e.stops++
	}
	e.mu.Unlock()
	switch {
	case ch == nil:
	case again:
		ch.kill("ended by the second interrupt: the first could not stop the cell")
	default:
		_ = ch.w.Send(Request{Op: "stop"})
	}
}

// A Completion is the answer to a request for completion. Start and End are
// byte offsets into the source.
type Completion struct {
	Start, End int
	Matches    []Match
}

// A Match is one way to complete.
type Match struct {
	Text, Kind, Signature string
}

// call sends a request and waits for the event that answers it.
func (e *Engine) call(ctx context.Context, r Request) (*Event, error) {
	ch, err := e.current(ctx)
	if err != nil {
		return nil, err
	}
	e.mu.Lock()
	e.next++
	r.ID = e.next
	e.mu.Unlock()
	reply, err := ch.ask(r, r.ID)
	if err != nil {
		return nil, err
	}
	select {
	case ev := <-reply:
		if ev == nil {
			return nil, fmt.Errorf("engine: %s", ch.why())
		}
		return ev, nil
	case <-ctx.Done():
		return nil, ctx.Err()
	}
}

// Complete completes source at the byte offset cursor.
func (e *Engine) Complete(ctx context.Context, source string, cursor int) (Completion, error) {
	ev, err := e.call(ctx, Request{Op: "complete", Source: source, Cursor: cursor})
	if err != nil || ev.Completion == nil {
		return Completion{Start: cursor, End: cursor}, err
	}
	return *ev.Completion, nil
}

// Inspect describes what stands at the byte offset cursor; ok is false if
// nothing is known about it.
func (e *Engine) Inspect(ctx context.Context, source string, cursor, detail int) (v map[string]any, ok bool, err error) {
	ev, err := e.call(ctx, Request{Op: "inspect", Source: source, Cursor: cursor, Detail: detail})
	if err != nil {
		return nil, false, err
	}
	return ev.Found, len(ev.Found) > 0, nil
}

// State reports facts about the session: "names" (what it has declared),
// "goroutines" (those that cells have started and that live).
func (e *Engine) State(ctx context.Context) (map[string]any, error) {
	ev, err := e.call(ctx, Request{Op: "state"})
	if err != nil {
		return nil, err
	}
	return maps.Clone(ev.Facts), nil
}

// Pid is the process in which cells run, 0 if there is none.
func (e *Engine) Pid() int {
	e.mu.Lock()
	defer e.mu.Unlock()
	if e.child == nil {
		return 0
	}
	return e.child.cmd.Process.Pid
}
