package engine

import (
	"context"
	"time"
)

// A Program says what the compiler made of cells that will be run one after
// the other.
type Program struct {
	// Cells is how many of the cells have code in the program, and Packages
	// how many Go packages hold it.
	Cells, Packages int
	// Compiled is how many packages were compiled now; the others were found
	// as an earlier build left them. Linked says the same of the program.
	Compiled int
	Linked   bool
	Took     time.Duration
	// Left lists the cells that are to be compiled and are not part of the
	// program, and why.
	Left []Left
	// Alone says why there is no program and each cell is built when its turn
	// comes; empty if there is one, or nothing to compile.
	Alone string
}

// A Left is a cell that is not part of a program.
type Left struct {
	N   int
	Why string // one line
}

// Program has what the compiler is to do for cells done at once: they are
// checked in order without being run, each on the assumption that those before
// it succeed, and compiled and linked as one program. It changes nothing but
// the time that running them takes: a cell for which the assumption was wrong
// is built when its turn comes. Hints go to out. If ctx ends, the work is given
// up.
func (e *Engine) Program(ctx context.Context, cells []Cell, out Output) (Program, error) {
	e.mu.Lock()
	e.out = out
	e.mu.Unlock()
	stop := context.AfterFunc(ctx, e.Interrupt)
	defer stop()
	ev, err := e.call(ctx, Request{Op: "program", Cells: cells})
	if err != nil || ev.Program == nil {
		return Program{}, err
	}
	return *ev.Program, nil
}
