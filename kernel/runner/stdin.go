package runner

import (
	"fmt"
	"io"
	"sync"

	"levelsum/kernel/engine"
)

// typed is the standard input of cells: each time a cell wants more than is
// there, the reader is asked for a line.
type typed struct {
	r *Runner

	mu   sync.Mutex // one reads at a time; guards the fields below
	rest []byte     // of the line typed last
	told bool       // the reader of the running cell knows that nobody answers
}

// forget drops what the cell before has not read.
func (t *typed) forget() {
	// A goroutine that a cell has left behind may hold the lock and wait.
	if t.mu.TryLock() {
		t.rest, t.told = nil, false
		t.mu.Unlock()
	}
}

// Read is io.Reader's, for package fmt.
func (t *typed) Read(b []byte) (int, error) {
	if len(b) == 0 {
		return 0, nil
	}
	t.mu.Lock()
	defer t.mu.Unlock() // Ask panics when the cell is to stop
	if len(t.rest) == 0 {
		line, err := sink{t.r}.Ask("", false)
		if err != nil {
			return 0, fmt.Errorf("standard input: %w", err)
		}
		t.rest = append([]byte(line), '\n')
	}
	n := copy(b, t.rest)
	t.rest = t.rest[n:]
	return n, nil
}

// read is os.Stdin.Read. Who reads through a buffer often takes an error for
// the end of the input, so the reader is told of one, once in a cell.
func (t *typed) read(b []byte) (int, error) {
	n, err := t.Read(b)
	if err != nil {
		t.mu.Lock()
		told := t.told
		t.told = true
		t.mu.Unlock()
		if !told {
			_ = t.r.w.Send(engine.Event{Op: "warn", Text: "warning: the cell reads " + err.Error() + "\n"})
		}
	}
	return n, err
}

// scan is fmt.Scan and its kin.
func (t *typed) scan(format string, a []any) (int, error) {
	var in io.Reader = t
	switch format {
	case "":
		return fmt.Fscan(in, a...)
	case "\n":
		return fmt.Fscanln(in, a...)
	}
	return fmt.Fscanf(in, format, a...)
}

// A question to the reader waits for the answer with its number.
type question struct {
	id     int
	answer chan engine.Request // has room for one
}

// question returns the next question; the one before gets no answer any more.
func (r *Runner) question() question {
	r.mu.Lock()
	defer r.mu.Unlock()
	r.asked = question{r.asked.id + 1, make(chan engine.Request, 1)}
	return r.asked
}

// answered takes the reader's answer, unless it is to an older question.
func (r *Runner) answered(a engine.Request) {
	r.mu.Lock()
	defer r.mu.Unlock()
	if a.ID == r.asked.id {
		select {
		case r.asked.answer <- a:
		default:
		}
	}
}
