package cell

import "strings"

// Lower-case names do not cross from one compiled package to another, so every
// lower-case name that a cell declares is emitted with an upper-case letter in
// front. [Marker] stands before names of the user, [Inner] before names of our
// own. Neither may be used in a cell, and [Unmark] takes both out of everything
// that a reader sees.
const (
	Marker = "Ɐ" // U+2C6F
	Inner  = "Ɒ" // U+2C70

	markers      = Marker + Inner
	quoteMarkers = Marker + " and " + Inner
)

var unmarker = strings.NewReplacer(Marker, "", Inner, "")

// Unmark takes the marker letters out of text.
func Unmark(s string) string { return unmarker.Replace(s) }
