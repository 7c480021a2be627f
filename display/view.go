// Package display holds values that a reader looks at: tables, figures,
// derivations, live prose, progress lines and named results.
//
// A value that implements [Viewer] decides how it looks; the kernel asks for
// its [View] when it is the last value of a cell, and [Show] shows it at once,
// also in the middle of a cell. Where no kernel listens (an ordinary Go
// program, a test) the plain text goes to standard output, so that a program
// that uses this package needs no front end.
package display

// A View is one value in several media types. The keys are media types
// ("text/plain", "text/html", "text/latex", "image/svg+xml", "image/png",
// "application/json"); the value is a string for text, a []byte for binary
// data and anything that encoding/json takes for JSON types. Every View has
// "text/plain".
type View struct {
	Data     map[string]any
	Metadata map[string]any
}

// A Viewer shows itself.
type Viewer interface {
	View() View
}

// Text returns a View that is plain text only.
func Text(s string) View {
	return View{Data: map[string]any{"text/plain": s}}
}
