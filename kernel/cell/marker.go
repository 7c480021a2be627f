package cell

import (
	"regexp"
	"strings"
)

// Lower-case names do not cross from one compiled package to another, so every
// lower-case name that a cell declares is emitted with an upper-case letter in
// front. [Marker] stands before names of the user, [Inner] before names of our
// own. Neither may be used in a cell, and [Unmark] takes both out of everything
// that a reader sees; text that a cell makes with fmt.Sprint, fmt.Fprint and
// their kin is cleaned as it is made (emit_print.go).
//
// A library that looks at a type by reflection still finds an exported name.
// encoding/json and encoding/xml are told by a tag to leave the field out, as
// they do with a lower-case one. What remains, each held by a case of the
// scenario lower-case-limits:
//
//   - reflect says that such a field is exported, and its name has the letter
//     in it: one letter and three bytes more;
//   - package fmt calls the String, Error or Format method of a value in such a
//     field, where Go prints the value plainly, since it may not call it;
//   - encoding/gob writes such fields, where Go leaves them out, with the
//     letter in their names and in that of the type;
//   - fmt.Errorf, fmt.Append and what a library makes of a type's name keep the
//     letter until they are shown; a width (%20T) counts it.
const (
	Marker = "Ɐ" // U+2C6F
	Inner  = "Ɒ" // U+2C70

	markers      = Marker + Inner
	quoteMarkers = Marker + " and " + Inner
)

var unmarker = strings.NewReplacer(Marker, "", Inner, "")

// unitsPath is the path of a unit, which the Go runtime and reflection print in
// front of names.
var unitsPath = regexp.MustCompile(`\bcell/k[0-9a-f]{16}\b`)

// Unmark takes the marker letters and the paths of units out of text.
func Unmark(s string) string {
	s = unmarker.Replace(s)
	if strings.Contains(s, "cell/k") {
		s = unitsPath.ReplaceAllString(s, "cell")
	}
	return s
}
