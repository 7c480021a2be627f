package session

import (
	"sync"

	"levelsum/kernel/engine"
)

// hints are the cells that wait in the queue and of which the engine has not
// been told. Telling may take the engine's time, never the shell reader's.
type hints struct {
	ready chan struct{}

	mu      sync.Mutex // guards waiting
	waiting []hint
}

type hint struct {
	r      *request
	number int
}

func newHints() *hints { return &hints{ready: make(chan struct{}, 1)} }

func (h *hints) push(r *request, number int) {
	h.mu.Lock()
	h.waiting = append(h.waiting, hint{r, number})
	h.mu.Unlock()
	select {
	case h.ready <- struct{}{}:
	default:
	}
}

func (h *hints) takeAll() []hint {
	h.mu.Lock()
	defer h.mu.Unlock()
	all := h.waiting
	h.waiting = nil
	return all
}

// announce tells the engine of the cells that wait, unless their turn has come
// meanwhile.
func (s *Session) announce() {
	for {
		for _, h := range s.hints.takeAll() {
			if e := s.awaitEngine(); e != nil && !h.r.started.Load() && s.ctx.Err() == nil {
				e.Announce(s.cell(h.r, h.number))
			}
		}
		select {
		case <-s.hints.ready:
		case <-s.ctx.Done():
			return
		}
	}
}

// cell is the cell that r asks to run, under a number.
func (s *Session) cell(r *request, number int) engine.Cell {
	return engine.Cell{
		N:      number,
		Source: r.execute.Code,
		ID:     cellID(r.msg),
		CanAsk: r.execute.AllowStdin,
		Asks:   r.execute.UserExpressions,
	}
}
