package engine

import "levelsum/display"

// A Cell is one piece of source to run.
type Cell struct {
	// N is the number the cell has in messages: In[N]. Numbers may repeat
	// (a silent request keeps the counter); they only name the cell.
	N      int
	Source string
	// ID is the front end's name for the cell, stable when it is edited and
	// run again; empty if it has none.
	ID string
	// CanAsk says that the Output of this run can answer Ask.
	CanAsk bool
	// Asks are expressions evaluated after the cell, each by itself.
	Asks map[string]string
}

// An Output receives what a cell shows while it runs, and after it if it left
// goroutines behind. Calls come one at a time, in the order in which the cell
// made them.
type Output interface {
	// Stream gets text written to "stdout" or "stderr"; never half a rune.
	Stream(name, text string)
	// Show gets a value shown in the middle of the cell (id and replace as in
	// display.Sink).
	Show(v display.View, id string, replace bool)
	// Clear takes back what has been shown.
	Clear(wait bool)
	// Ask asks the reader for a line. An error reaches the cell.
	Ask(prompt string, secret bool) (string, error)
}

// A Hinter is an Output that takes hints for the reader of the moment: that the
// cell is being compiled, what it waits for, which call does not return. When
// they come depends on the machine's load, so what is stored must not hold
// them. An Output that is no Hinter gets them as text written to "stderr", but
// is not told that the cell is being compiled.
type Hinter interface {
	Hint(text string)
}

// An Outcome says how a cell ended.
type Outcome struct {
	// Value is the value of the last expression, nil if there is nothing to show.
	Value *display.View
	// Fault is nil if the cell succeeded.
	Fault *Fault
	// Notes are warnings for the reader (an older cell that no longer
	// compiles, a value that was dropped), one line each. They have been
	// written to the Output's "stderr" stream already.
	Notes []string
	// Answers has one entry for each of Cell.Asks.
	Answers map[string]Answer
	// How says how the cell was run: "interpreted", "compiled", "declared";
	// and further facts for the reply's metadata.
	How map[string]any
	// Restarted says that the engine died or was ended and has been started
	// again: the session's values are gone.
	Restarted bool
}

// An Answer is the value of one of Cell.Asks, or why there is none.
type Answer struct {
	View  display.View
	Fault *Fault
}

// A Fault is the error that ended a cell.
type Fault struct {
	// Name is the kind: "compile error", "panic", "domain error", "error not
	// looked at", "interrupted", "engine ended", "refused", "aborted".
	Name string
	// Message is one line.
	Message string
	// Trace is what a front end prints, line by line, without colours: the
	// message, the source line with its place marked, the user's frames.
	Trace []string
}

func (f *Fault) Error() string { return f.Name + ": " + f.Message }
