package runner

import (
	"time"

	"levelsum/kernel/engine"
	"levelsum/kernel/runner/guard"
)

// An interrupt counts for a cell from the moment its request has come: also
// while the cell is checked and compiled, when nothing polls yet.

// accept notes that a request to run has come.
func (r *Runner) accept() {
	r.mu.Lock()
	defer r.mu.Unlock()
	r.stopped = make(chan struct{})
}

// over notes that the request to run has been done.
func (r *Runner) over() {
	r.mu.Lock()
	defer r.mu.Unlock()
	r.stopped = nil
}

// stops returns what is closed when the request to run is to end.
func (r *Runner) stops() <-chan struct{} {
	r.mu.Lock()
	defer r.mu.Unlock()
	return r.stopped
}

// isStopped reports whether the request to run is to end; r.mu is held.
func (r *Runner) isStopped() bool {
	select {
	case <-r.stopped:
		return true
	default:
		return false
	}
}

// stop ends the cell that runs or is about to. After a second it says what
// keeps a cell from ending.
func (r *Runner) stop() {
	guard.Interrupt()
	r.mu.Lock()
	defer r.mu.Unlock()
	request := r.stopped
	if request == nil {
		time.AfterFunc(100*time.Millisecond, func() { // goroutines that poll have had their chance
			r.mu.Lock()
			defer r.mu.Unlock()
			if r.stopped == nil {
				guard.Reset()
			}
		})
		return
	}
	if !r.isStopped() {
		close(request)
	}
	time.AfterFunc(time.Second, func() {
		r.mu.Lock()
		still := r.running && r.stopped == request
		r.mu.Unlock()
		if still {
			_ = r.w.Send(engine.Event{Op: "hint", Text: "still running: " + runningCall() + "; interrupt once more to end the engine, which loses all values\n"})
		}
	})
}
