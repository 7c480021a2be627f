// Package guard is what compiled cells import for what a notebook adds to Go:
// loops and waits that can be stopped, goroutines whose panic does not end the
// process, and the hand-over of a cell's last value.
//
// It has package-level state because compiled code reaches it by name and a
// process runs one cell at a time; the runner sets [Hooks] once.
package guard

import (
	"iter"
	"sync"
	"sync/atomic"
	"time"
)

// Stop is polled by loops and functions of compiled cells: not 0 means that
// they are to end by calling [Halt].
var Stop uint32

// At is the number of the statement that the running cell has come to.
var At int

// A halt is the panic value that ends a cell at the user's wish.
type halt struct{}

func (halt) Error() string { return "interrupted" }

// Halted is what Halt panics with.
var Halted error = halt{}

// An ExitError is what Exit panics with.
type ExitError struct{ Code int }

func (e ExitError) Error() string { return "the cell called os.Exit" }

// An UnreadError is an error that a cell did not look at.
type UnreadError struct {
	Name string // the variable it was left in, or ""
	At   int    // the statement
	Err  error
}

func (e UnreadError) Error() string { return e.Err.Error() }
func (e UnreadError) Unwrap() error { return e.Err }

// Hooks are the runner's side.
var Hooks struct {
	// Panic is told of a panic in a goroutine that a cell started.
	Panic func(value any)
	// Fatal logs what log.Fatal, log.Fatalf (with a format) or log.Fatalln
	// (with "\n" for a format) was given. It is here because this package is
	// linked into every plugin and is kept small.
	Fatal func(format string, v []any)
	// Read asks the reader for a line where none is left of the one before.
	Read func(b []byte) (int, error)
	// Scan is fmt.Scan, fmt.Scanln (with "\n" for a format) or fmt.Scanf on
	// what Read gives.
	Scan func(format string, a []any) (int, error)
}

var done atomic.Pointer[chan struct{}]

func init() { Reset() }

// Reset makes everything ready for the next cell.
func Reset() {
	c := make(chan struct{})
	done.Store(&c)
	atomic.StoreUint32(&Stop, 0)
}

// Interrupt makes all code of cells end that polls or waits.
func Interrupt() {
	if atomic.CompareAndSwapUint32(&Stop, 0, 1) {
		close(*done.Load())
	}
}

// Done is closed when the cell is to stop.
func Done() <-chan struct{} { return *done.Load() }

// Halt ends the calling goroutine of a cell.
func Halt() { panic(Halted) }

// Recover passes the value of recover() on, but not the wish to stop, which no
// cell may swallow.
func Recover(v any) any {
	switch v.(type) {
	case halt, ExitError:
		panic(v)
	}
	return v
}

// Recv receives from c, or halts.
func Recv[T any](c <-chan T) T {
	select {
	case v := <-c:
		return v
	default:
	}
	select {
	case v := <-c:
		return v
	case <-Done():
		panic(Halted)
	}
}

// Recv2 is Recv with the second value that says whether c is open.
func Recv2[T any](c <-chan T) (T, bool) {
	select {
	case v, ok := <-c:
		return v, ok
	case <-Done():
		panic(Halted)
	}
}

// Chan ranges over c, or halts.
func Chan[T any](c <-chan T) iter.Seq[T] {
	return func(yield func(T) bool) {
		for {
			v, ok := Recv2(c)
			if !ok || !yield(v) {
				return
			}
		}
	}
}

// Sleep is time.Sleep that can be stopped.
func Sleep(d time.Duration) {
	if d <= 0 {
		return
	}
	t := time.NewTimer(d)
	defer t.Stop()
	select {
	case <-t.C:
	case <-Done():
		panic(Halted)
	}
}

// Exit is os.Exit in a cell: it ends the cell, not the session.
func Exit(code int) { panic(ExitError{code}) }

// Fatal is log.Fatal in a cell.
func Fatal(v ...any) { Hooks.Fatal("", v); Exit(1) }

// Fatalf is log.Fatalf in a cell.
func Fatalf(format string, v ...any) { Hooks.Fatal(format, v); Exit(1) }

// Fatalln is log.Fatalln in a cell.
func Fatalln(v ...any) { Hooks.Fatal("\n", v); Exit(1) }

// shown holds the value of the cell's last expression.
var shown struct {
	sync.Mutex
	values []any
	set    bool
}

// Show hands over the value or values of the cell's last expression.
func Show(values ...any) {
	shown.Lock()
	defer shown.Unlock()
	shown.values, shown.set = values, true
}

// Shown takes what Show has left.
func Shown() ([]any, bool) {
	shown.Lock()
	defer shown.Unlock()
	v, ok := shown.values, shown.set
	shown.values, shown.set = nil, false
	return v, ok
}

// Dropped looks at the results of a call that a cell makes as a statement: a
// last result that is a non-nil error fails the cell.
func Dropped(results ...any) {
	if n := len(results); n > 0 {
		if err, ok := results[n-1].(error); ok && err != nil {
			panic(UnreadError{At: At, Err: err})
		}
	}
}

// Unread fails the cell if err, which nobody has looked at, is not nil.
func Unread(name string, err error) {
	if err != nil {
		panic(UnreadError{Name: name, At: At, Err: err})
	}
}
