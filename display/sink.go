package display

import (
	"fmt"
	"io"
	"os"
	"strings"
	"sync"
)

// A Sink takes what a running program shows and answers what it asks. The
// kernel sets one; elsewhere the terminal serves. Methods may be called from
// several goroutines and return when the reader's side has taken the call.
type Sink interface {
	// Show shows v. With a non-empty id the place can be shown again by a
	// later call with the same id and replace set.
	Show(v View, id string, replace bool)
	// Clear takes back what the running cell has shown; with wait, only when
	// something new is shown.
	Clear(wait bool)
	// Ask asks the reader for a line of text; secret hides what is typed.
	Ask(prompt string, secret bool) (string, error)
}

var (
	sinkMu sync.Mutex // guards sink
	sink   Sink       = terminal{}
)

// SetSink makes s the place where values are shown. Nil restores the terminal.
func SetSink(s Sink) {
	sinkMu.Lock()
	defer sinkMu.Unlock()
	if s == nil {
		s = terminal{}
	}
	sink = s
}

// Current returns the sink in force.
func Current() Sink {
	sinkMu.Lock()
	defer sinkMu.Unlock()
	return sink
}

// Interrupted reports whether the reader has asked the running work to stop.
// Long computations of libraries ask it now and then, and end with what they
// have. A sink that knows has a method Interrupted; elsewhere it is false.
func Interrupted() bool {
	s, ok := Current().(interface{ Interrupted() bool })
	return ok && s.Interrupted()
}

// Checkpoint is where a long computation without a result of its own for that
// case ends when the reader has asked the running work to stop: it panics then,
// and the running cell ends as interrupted. It is for the goroutine that the
// cell runs on; goroutines of a library ask Interrupted and return. Elsewhere
// than in the kernel it does nothing.
func Checkpoint() {
	if s, ok := Current().(interface{ Checkpoint() }); ok {
		s.Checkpoint()
	}
}

// terminal is the sink of a program without a front end.
type terminal struct{}

// Show prints the plain text. A progress line is written over the one before,
// and only where somebody watches.
func (terminal) Show(v View, _ string, _ bool) {
	s, ok := v.Data["text/plain"].(string)
	switch {
	case !ok:
	case Transient(v):
		if f, err := os.Stdout.Stat(); err == nil && f.Mode()&os.ModeCharDevice != 0 {
			fmt.Print("\r\x1b[K" + s)
		}
	default:
		fmt.Println(s)
	}
}

func (terminal) Clear(bool) {}

func (terminal) Ask(prompt string, _ bool) (string, error) {
	fmt.Print(prompt)
	// Byte by byte: what stands behind the line is for who reads next.
	var line []byte
	for b := make([]byte, 1); ; {
		n, err := os.Stdin.Read(b)
		switch {
		case n == 1 && b[0] != '\n':
			line = append(line, b[0])
		case n == 1 || err == io.EOF && len(line) > 0:
			return strings.TrimSuffix(string(line), "\r"), nil
		case err == io.EOF:
			return "", fmt.Errorf("display: Ask: standard input is closed")
		case err != nil:
			return "", err
		}
	}
}
