package session

import (
	"context"

	"levelsum/kernel/engine"
)

// An Engine runs cells. [engine.Engine] is one.
type Engine interface {
	Run(ctx context.Context, c engine.Cell, out engine.Output) engine.Outcome
	Announce(c engine.Cell)
	Interrupt()
	Complete(ctx context.Context, source string, cursor int) (engine.Completion, error)
	Inspect(ctx context.Context, source string, cursor, detail int) (map[string]any, bool, error)
	Close() error
}

var (
	_ engine.Output = (*output)(nil)
	_ engine.Hinter = (*output)(nil)
)

var _ Engine = (*engine.Engine)(nil)
