package runner

import (
	"errors"
	"fmt"
	"io"
	"log"
	"os"
	"runtime/debug"
	"sync"

	"levelsum/display"
	"levelsum/display/draw"
	"levelsum/kernel/assist"
	"levelsum/kernel/cell"
	"levelsum/kernel/compile"
	"levelsum/kernel/engine"
	"levelsum/kernel/runner/guard"
	"levelsum/kernel/symbols/export"
)

// A Runner is one session.
type Runner struct {
	w         *engine.Writer
	scope     *cell.Scope
	kit       *compile.Kit // nil without the compiled tier
	noKit     error        // why
	saidNoKit bool

	acks   chan struct{}
	asking sync.Mutex // one question at a time
	typed  typed

	slots   slots
	interp  interpreter
	built   builds
	ahead   ahead
	docs    *assist.Docs
	plugins map[string]*loaded // by unit path
	opened  int                // plugins
	whole   *engine.Program    // the last one that was asked for, or nil
	failed  []string           // cells that have failed since, though it was foreseen otherwise

	compileAll bool // no cell is interpreted
	origin     provenance

	mu       sync.Mutex // guards what follows
	running  bool
	stopped  chan struct{} // closed by an interrupt of the request to run; nil if there is none
	asked    question      // the last one
	async    []string      // panics in goroutines of the running cell
	syncDone sync.Mutex
}

// Main runs the child until the parent closes its end. With compileAll no
// cell is interpreted. It returns the exit status.
func Main(about About, compileAll bool) int {
	os.Args = os.Args[:1]        // a cell has no arguments
	debug.SetMaxStack(256 << 20) // endless recursion ends in seconds, not in swap
	requests := os.NewFile(engine.FdRequests, "requests")
	events := os.NewFile(engine.FdEvents, "events")
	if requests == nil || events == nil {
		fmt.Fprintln(os.Stderr, "levelsum engine: is started by levelsum itself, not by hand")
		return 2
	}
	standardFiles(true)
	r, err := New(engine.NewWriter(events))
	if err != nil {
		fmt.Fprintln(os.NewFile(2, "crash"), "fatal error:", err)
		return 1
	}
	r.compileAll = compileAll
	r.origin.init(about)
	return r.serve(requests)
}

// New returns a fresh session that sends its events to w.
func New(w *engine.Writer) (*Runner, error) {
	r := &Runner{
		w:       w,
		acks:    make(chan struct{}, 1),
		plugins: map[string]*loaded{},
	}
	var source export.Source
	r.kit, r.noKit = compile.Here()
	if r.noKit == nil {
		source = r.kit
	} else if t, err := compile.TypesHere(); err == nil {
		source = t
	} else {
		return nil, err
	}
	r.docs = newDocs(source)
	r.scope = cell.NewScope(export.New(source), usual)
	r.slots.init()
	r.interp.init(r)
	r.built.init(r)
	guard.Hooks.Panic = r.goroutinePanic
	guard.Hooks.Fatal = logFatal
	r.typed.r = r
	guard.Hooks.Read, guard.Hooks.Scan = r.typed.read, r.typed.scan
	draw.Register()
	display.SetSink(sink{r})
	return r, nil
}

// serve reads requests and runs cells until the pipe is closed.
func (r *Runner) serve(requests io.Reader) int {
	queue := make(chan engine.Request, 1024)
	go func() {
		defer close(queue)
		err := engine.ReadRequests(requests, func(q engine.Request) {
			switch q.Op {
			case "ack":
				select {
				case r.acks <- struct{}{}:
				default:
				}
			case "answer":
				r.answered(q)
			case "stop":
				r.stop()
			case "announce":
				r.ahead.announce(*q.Cell)
			default:
				if q.Op == "run" || q.Op == "program" {
					r.accept()
				}
				queue <- q
			}
		})
		if err != nil {
			fmt.Fprintln(os.NewFile(2, "crash"), "fatal error:", err)
		}
		os.Exit(0) // the parent is gone or has closed us: whatever still runs ends
	}()
	if err := r.w.Send(engine.Event{Op: "ready", Text: cell.Marker + cell.Inner}); err != nil {
		return 1
	}
	for q := range queue {
		r.answer(q)
	}
	return 0
}

// answer handles one request that may take long.
func (r *Runner) answer(q engine.Request) {
	ev := engine.Event{Op: "reply", ID: q.ID}
	switch q.Op {
	case "run":
		out := r.run(*q.Cell)
		if out.Fault != nil {
			r.ahead.forget() // what was queued behind it may be aborted
			r.noteFailed(q.Cell.N)
		}
		r.over()
		ev = engine.Event{Op: "done", ID: q.ID, Sync: true, Outcome: &out}
	case "program":
		r.whole, r.failed = r.program(q.Cells), nil
		r.over()
		ev.Program = r.whole
	case "complete":
		ev.Completion = r.complete(q.Source, q.Cursor)
	case "inspect":
		ev.Found = r.inspect(q.Source, q.Cursor, q.Detail)
	case "state":
		ev.Facts = r.state()
	}
	r.send(ev)
}

// send sends an event; with Sync it returns when the parent has handled it.
func (r *Runner) send(ev engine.Event) {
	if !ev.Sync {
		if err := r.w.Send(ev); err != nil {
			os.Exit(1)
		}
		return
	}
	r.syncDone.Lock()
	defer r.syncDone.Unlock()
	if err := r.w.Send(ev); err != nil {
		var bad interface{ Unwrap() error }
		if ev.Outcome != nil && errors.As(err, &bad) { // a view that JSON does not take
			ev.Outcome.Value = nil
			ev.Outcome.Fault = &engine.Fault{Name: "panic", Message: err.Error(), Trace: []string{err.Error()}}
			err = r.w.Send(ev)
		}
		if err != nil {
			os.Exit(1)
		}
	}
	<-r.acks
}

// goroutinePanic notes a panic in a goroutine that the cell started and stops
// the cell, which in Go would have ended with it.
func (r *Runner) goroutinePanic(v any) {
	f := faultOf(v, userFrames(0), nil)
	r.mu.Lock()
	running := r.running
	if running {
		r.async = append(r.async, f.Message)
	}
	r.mu.Unlock()
	if running {
		guard.Interrupt()
		return
	}
	_ = r.w.Send(engine.Event{Op: "warn", Text: "a goroutine that a cell left behind has panicked: " + f.Message + "\n"})
}

// logFatal writes what a cell gave to log.Fatal and its kin.
func logFatal(format string, v []any) {
	switch format {
	case "":
		log.Print(v...)
	case "\n":
		log.Println(v...)
	default:
		log.Printf(format, v...)
	}
}
