package runner

import (
	"go/types"
	"sync"

	"levelsum/kernel/cell"
	"levelsum/kernel/engine"
	"levelsum/kernel/symbols"
)

// ahead starts the builds of cells that wait behind the running one, on the
// assumption that each succeeds. What it makes is only in the cache: a wrong
// assumption costs work and nothing else.
type ahead struct {
	mu     sync.Mutex // guards what follows
	queue  []engine.Cell
	cancel chan struct{} // closed when another cell runs
}

// announce is told of a cell that will be run soon.
func (a *ahead) announce(c engine.Cell) {
	a.mu.Lock()
	defer a.mu.Unlock()
	a.queue = append(a.queue, c)
}

// forget drops what was announced.
func (a *ahead) forget() {
	a.mu.Lock()
	defer a.mu.Unlock()
	a.queue = nil
}

// take returns the cells behind the one that is about to run, and ends the
// work that an earlier cell has started.
func (a *ahead) take(running string) ([]engine.Cell, chan struct{}) {
	a.mu.Lock()
	defer a.mu.Unlock()
	if a.cancel != nil {
		close(a.cancel)
		a.cancel = nil
	}
	for i, c := range a.queue {
		if c.Source == running {
			a.queue = a.queue[i+1:]
			break
		}
	}
	if len(a.queue) == 0 {
		return nil, nil
	}
	a.cancel = make(chan struct{})
	return append([]engine.Cell(nil), a.queue...), a.cancel
}

// buildAhead checks the cells behind a plan that is about to run on a scope of
// its own, and starts the builds they need.
func (r *Runner) buildAhead(plan *cell.Plan) {
	cells, cancel := r.ahead.take(plan.Source.Text)
	if len(cells) == 0 || r.kit == nil {
		return
	}
	scope := r.scope.Clone()
	all := func(string) bool { return true }
	scope.Commit(plan.On(scope), all)
	go func() {
		for _, c := range cells {
			select {
			case <-cancel:
				return
			default:
			}
			p, err := scope.Check(&cell.Source{N: c.N, Text: c.Source})
			if err != nil {
				return // it may be right when its turn comes
			}
			if !r.interprets(p) {
				u, err := p.Compile(true)
				if err != nil {
					return
				}
				if u != nil {
					r.built.ahead(u)
					scope.Adopt(p, u)
				}
			}
			scope.Commit(p, all)
		}
	}()
}

// likely is the table of an interpreter of which only the names are asked.
type likely struct{}

func (likely) Has(path, name string) bool { return symbols.Has(path, name) }
func (likely) Known(types.Type) bool      { return true }
