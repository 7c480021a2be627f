package session

import (
	"context"
	"sync"
	"time"
)

// A queue holds the requests that have come over shell and wait for the
// worker. It gives cells their numbers: the counter goes up by one with each
// cell that is stored in the history, in the order in which they are run.
type queue struct {
	ready chan struct{} // holds a token while the queue may not be empty

	mu      sync.Mutex // guards the fields below
	waiting []*request
	count   int  // the number given last
	stored  int  // how many of waiting will be given a number
	busy    bool // the worker has a request
	barrier barrier
	grace   time.Duration // how long barrier stands
}

// A barrier aborts what was sent before its sender could know of an error, but
// came after the abort of what was waiting then.
type barrier struct {
	session string
	sent    time.Time // when the error was told
	until   time.Time
}

// usualGrace is how long after an error a request may come in that was sent
// before it.
const usualGrace = 200 * time.Millisecond

func newQueue() *queue { return &queue{ready: make(chan struct{}, 1), grace: usualGrace} }

// push adds r. If r is a cell that will have to wait and be stored, push
// returns the number that it will have if no cell before it fails.
func (q *queue) push(r *request) (number int, waits bool) {
	q.mu.Lock()
	defer q.mu.Unlock()
	if r.execute != nil && q.barrier.holds(r) {
		r.abort = true
	}
	waits = q.busy || len(q.waiting) > 0
	q.waiting = append(q.waiting, r)
	if r.stored() {
		q.stored++
		number = q.count + q.stored
	}
	select {
	case q.ready <- struct{}{}:
	default:
	}
	return number, waits && number > 0
}

func (b barrier) holds(r *request) bool {
	if time.Now().After(b.until) || r.msg.Header.Session != b.session {
		return false
	}
	sent, ok := r.msg.Header.Time()
	return ok && sent.Before(b.sent)
}

// pop waits for the next request and numbers it; nil if ctx has ended.
func (q *queue) pop(ctx context.Context) *request {
	for {
		if ctx.Err() != nil {
			return nil
		}
		if r := q.take(); r != nil {
			return r
		}
		select {
		case <-q.ready:
		case <-ctx.Done():
		}
	}
}

func (q *queue) take() *request {
	q.mu.Lock()
	defer q.mu.Unlock()
	q.busy = len(q.waiting) > 0
	if !q.busy {
		return nil
	}
	r := q.waiting[0]
	q.waiting[0] = nil
	q.waiting = q.waiting[1:]
	r.started.Store(true)
	if r.stored() {
		q.stored--
		q.count++
	}
	r.number = q.count
	return r
}

// abort marks the cells that wait: an error in the cell of r, told at the time
// told, ends them. Other requests stay as they are.
func (q *queue) abort(r *request, told time.Time) {
	q.mu.Lock()
	defer q.mu.Unlock()
	for _, w := range q.waiting {
		if w.execute == nil || w.abort {
			continue
		}
		if w.stored() {
			q.stored--
		}
		w.abort = true
		w.started.Store(true)
	}
	q.barrier = barrier{session: r.msg.Header.Session, sent: told, until: time.Now().Add(q.grace)}
}
