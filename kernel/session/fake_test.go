package session

import (
	"context"
	"errors"
	"slices"
	"sync"

	"levelsum/display"
	"levelsum/kernel/engine"
)

// A fake engine runs Go functions in place of cells, chosen by the source.
type fake struct {
	cells    map[string]func(*running) engine.Outcome
	complete func(source string, cursor int) (engine.Completion, error)
	inspect  func(source string, cursor, detail int) (map[string]any, bool, error)

	mu         sync.Mutex // guards the fields below
	ran        []engine.Cell
	announced  []engine.Cell
	interrupts int
	current    *running
	closed     bool
}

// running is a cell that runs in the fake.
type running struct {
	engine.Output
	cell        engine.Cell
	interrupted chan struct{} // closed by the first interrupt and by Close
	once        sync.Once
}

// untilInterrupted is a cell that runs until it is interrupted.
func untilInterrupted(r *running) engine.Outcome {
	<-r.interrupted
	return fault("interrupted")
}

func fault(name string) engine.Outcome {
	return engine.Outcome{Fault: &engine.Fault{Name: name, Message: "it was " + name, Trace: []string{name, "line 2"}}}
}

func value(text string) engine.Outcome {
	v := display.Text(text)
	return engine.Outcome{Value: &v}
}

func (f *fake) start(context.Context) (Engine, error) { return f, nil }

func (f *fake) Run(_ context.Context, c engine.Cell, out engine.Output) engine.Outcome {
	r := &running{Output: out, cell: c, interrupted: make(chan struct{})}
	f.mu.Lock()
	f.ran = append(f.ran, c)
	f.current = r
	closed := f.closed
	f.mu.Unlock()
	if closed {
		return fault("engine ended")
	}
	defer func() {
		f.mu.Lock()
		f.current = nil
		f.mu.Unlock()
	}()
	if run := f.cells[c.Source]; run != nil {
		return run(r)
	}
	return engine.Outcome{}
}

func (f *fake) Announce(c engine.Cell) {
	f.mu.Lock()
	defer f.mu.Unlock()
	f.announced = append(f.announced, c)
}

func (f *fake) Interrupt() {
	f.mu.Lock()
	defer f.mu.Unlock()
	f.interrupts++
	if f.current != nil {
		f.current.once.Do(func() { close(f.current.interrupted) })
	}
}

func (f *fake) Complete(_ context.Context, source string, cursor int) (engine.Completion, error) {
	if f.complete == nil {
		return engine.Completion{}, errors.New("nothing to complete with")
	}
	return f.complete(source, cursor)
}

func (f *fake) Inspect(_ context.Context, source string, cursor, detail int) (map[string]any, bool, error) {
	if f.inspect == nil {
		return nil, false, nil
	}
	return f.inspect(source, cursor, detail)
}

func (f *fake) Close() error {
	f.Interrupt()
	f.mu.Lock()
	defer f.mu.Unlock()
	f.closed = true
	return nil
}

// sources returns the sources of the cells that ran.
func (f *fake) sources() []string {
	f.mu.Lock()
	defer f.mu.Unlock()
	var all []string
	for _, c := range f.ran {
		all = append(all, c.Source)
	}
	return all
}

// numbers returns the numbers of the cells that ran.
func (f *fake) numbers() []int {
	f.mu.Lock()
	defer f.mu.Unlock()
	var all []int
	for _, c := range f.ran {
		all = append(all, c.N)
	}
	return all
}

func (f *fake) announcedNow() []engine.Cell {
	f.mu.Lock()
	defer f.mu.Unlock()
	return slices.Clone(f.announced)
}

func (f *fake) interruptsNow() int {
	f.mu.Lock()
	defer f.mu.Unlock()
	return f.interrupts
}

type outcome = engine.Outcome

type cellMap = map[string]func(*running) engine.Outcome
