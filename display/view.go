// Package display holds values that a reader looks at: tables, figures,
// derivations, live prose, progress lines and named results.
//
// A value that implements [Viewer] decides how it looks; the kernel asks for
// its [View] when it is the last value of a cell, and [Show] shows it at once,
// also in the middle of a cell. Where no kernel listens (an ordinary Go
// program, a test) the plain text goes to standard output, so that a program
// that uses this package needs no front end.
//
// # What there is
//
// [Table] shows columns, each value rounded by its own standard uncertainty;
// [Figure] plots; [Result] shows a named number and stores it, so that a later
// run can be compared with it; [Paragraph] and [Derivation] are prose and
// formulas whose numbers are live; [Progress] is one line while a computation
// runs. [ViewOf] shows any other value.
//
// # Quantities
//
// The package knows no physics. A typed quantity is a float64 of a named type
// with a method Unit, a value with an uncertainty has the methods Value and
// StandardUncertainty; units are text ("J/(mol K)", "cm-1"). They are never
// converted silently: a unit that does not fit is refused.
//
// # Text
//
// Names of quantities are written with _{}, ^{} and Greek letters, \theta or
// θ: "C_{p,m}". Symbols come out italic, words, units and formulas of
// substances ("H_2O") upright; \mathrm{...} makes upright what else would not
// be. Text from data is escaped in every form.
//
// # Refusals
//
// What would mislead is not shown: an axis without a unit, a logarithmic axis
// with values that are not positive, residuals from another data set, a slot
// that names nothing, slices of different lengths. Check says why, Show and
// Result panic with a [*Refusal], [Render] returns it.
//
// # Bytes
//
// Equal values give equal bytes: no dates, addresses or random identifiers,
// maps in order. HTML and SVG hold no scripts and no fixed colours for text,
// so that they can be read on light and dark pages.
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
