package engine

import (
	"bufio"
	"encoding/json"
	"fmt"
	"io"
	"sync"

	"levelsum/display"
)

// Descriptors of the child, beside 0 (nothing), 1 and 2 (what the process
// itself writes; a crash of the Go runtime comes out of 2).
const (
	FdRequests = 3 // messages from the parent
	FdEvents   = 4 // messages to the parent
	FdStdout   = 5 // what cells write to os.Stdout
	FdStderr   = 6 // what cells write to os.Stderr
)

// A Request is a message from the parent to the child.
type Request struct {
	Op     string // "run", "announce", "program", "complete", "inspect", "state", "stop", "ack", "answer"
	ID     int    `json:",omitempty"` // of the request that an event answers
	Cell   *Cell  `json:",omitempty"`
	Cells  []Cell `json:",omitempty"` // of a program
	Source string `json:",omitempty"`
	Cursor int    `json:",omitempty"`
	Detail int    `json:",omitempty"`
	Text   string `json:",omitempty"` // the answer to "ask"
	Err    string `json:",omitempty"`
}

// An Event is a message from the child to the parent. The child waits for an
// "ack" after an event with Sync, so that what was printed before it has been
// read before it is handled.
type Event struct {
	Op         string         // "ready", "show", "clear", "ask", "done", "reply", "warn", "hint"
	ID         int            `json:",omitempty"`
	Sync       bool           `json:",omitempty"`
	View       *display.View  `json:",omitempty"`
	Name       string         `json:",omitempty"` // display id; stream name for "warn"
	Replace    bool           `json:",omitempty"`
	Wait       bool           `json:",omitempty"`
	Secret     bool           `json:",omitempty"`
	Text       string         `json:",omitempty"` // the prompt of "ask"; text of "warn"
	Outcome    *Outcome       `json:",omitempty"`
	Program    *Program       `json:",omitempty"`
	Completion *Completion    `json:",omitempty"`
	Found      map[string]any `json:",omitempty"`
	Facts      map[string]any `json:",omitempty"`
}

// A Writer sends messages, one JSON value a line. It may be used from several
// goroutines.
type Writer struct {
	mu sync.Mutex // guards w
	w  io.Writer
}

// NewWriter returns a Writer to w.
func NewWriter(w io.Writer) *Writer { return &Writer{w: w} }

// Send writes one message.
func (w *Writer) Send(m any) error {
	b, err := json.Marshal(m)
	if err != nil {
		return fmt.Errorf("engine: message: %w", err)
	}
	w.mu.Lock()
	defer w.mu.Unlock()
	_, err = w.w.Write(append(b, '\n'))
	return err
}

// ReadRequests reads messages until the parent closes the pipe.
func ReadRequests(r io.Reader, handle func(Request)) error {
	br := bufio.NewReaderSize(r, 1<<16)
	for {
		line, err := br.ReadBytes('\n')
		if err == io.EOF {
			return nil
		}
		if err != nil {
			return err
		}
		var m Request
		if err := json.Unmarshal(line, &m); err != nil {
			return fmt.Errorf("engine: request: %w", err)
		}
		handle(m)
	}
}
