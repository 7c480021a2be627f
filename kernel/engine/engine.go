package engine

import (
	"context"
	"errors"
)

// Options say how the child is started.
type Options struct {
	// Command starts the child; nil means this executable with "engine".
	Command []string
	// Dir is the folder that relative paths in cells mean.
	Dir string
	// MemoryLimit ends the child when its resident memory less file pages
	// passes it, in bytes; 0 means three quarters of what the machine or its
	// control group has.
	MemoryLimit int64
}

// An Engine is a running child.
type Engine struct{}

// Start starts a child and waits until it is ready.
func Start(ctx context.Context, o Options) (*Engine, error) {
	return nil, errors.New("engine: not built yet")
}

// Run runs one cell and returns when it is over.
func (e *Engine) Run(ctx context.Context, c Cell, out Output) Outcome { return Outcome{} }

// Announce tells the child of a cell that will be run soon, so that its build
// can start.
func (e *Engine) Announce(c Cell) {}

// Interrupt asks the running cell to end; called a second time while the first
// has had no effect, it ends the child and starts another.
func (e *Engine) Interrupt() {}

// Restart ends the child and starts another: all values are gone.
func (e *Engine) Restart(ctx context.Context) error { return nil }

// Close ends the child.
func (e *Engine) Close() error { return nil }

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

// Complete completes source at the byte offset cursor.
func (e *Engine) Complete(ctx context.Context, source string, cursor int) (Completion, error) {
	return Completion{}, nil
}

// Inspect describes what stands at the byte offset cursor; ok is false if
// nothing is known about it.
func (e *Engine) Inspect(ctx context.Context, source string, cursor, detail int) (v map[string]any, ok bool, err error) {
	return nil, false, nil
}
