package notebook

import (
	"strings"
	"unicode/utf8"
)

// Kinds of cells.
const (
	Code     = "code"
	Markdown = "markdown"
	Raw      = "raw"
)

// A Cell is one cell of a document. Its methods read and change the document.
type Cell struct {
	N int // place in the document, from 1, all kinds counted

	v *value
	d *Document
}

// Kind returns Code, Markdown or Raw, or the word that a later version of the
// format uses.
func (c *Cell) Kind() string { return c.v.get("cell_type").str() }

// ID returns the cell's id, empty before version 4.5.
func (c *Cell) ID() string { return c.v.get("id").str() }

// Source returns the cell's text.
func (c *Cell) Source() string { return join(c.v.get("source")) }

// SetSource changes the cell's text.
func (c *Cell) SetSource(s string) { c.v.set("source", lines(s)) }

// Metadata returns the cell's metadata under the path of keys, in the types of
// encoding/json with numbers as json.Number, and nil if there is none.
func (c *Cell) Metadata(path ...string) any {
	return descend(c.v.get("metadata"), path).toGo()
}

// SetMetadata puts x, anything that encoding/json can encode, into the cell's
// metadata under the path of keys.
func (c *Cell) SetMetadata(x any, path ...string) error {
	return putMetadata(c.v, x, path)
}

// HasTag says whether the cell carries the tag.
func (c *Cell) HasTag(tag string) bool {
	tags := descend(c.v.get("metadata"), []string{"tags"})
	if tags == nil {
		return false
	}
	for _, t := range tags.items {
		if t.str() == tag {
			return true
		}
	}
	return false
}

// ExecutionCount returns the number that the cell's last run had, 0 if it has
// not been run.
func (c *Cell) ExecutionCount() int {
	n, _ := c.v.get("execution_count").integer()
	return n
}

// SetExecutionCount sets the number of the cell's run; 0 says it has not been
// run.
func (c *Cell) SetExecutionCount(n int) {
	if n == 0 {
		c.v.set("execution_count", newNull())
		return
	}
	c.v.set("execution_count", newInt(n))
}

// join returns the text of a string or a list of strings.
func join(v *value) string {
	if v == nil || v.kind != array {
		return v.str()
	}
	var b strings.Builder
	for _, w := range v.items {
		b.WriteString(w.str())
	}
	return b.String()
}

// lines returns the text as the list of its lines.
func lines(s string) *value {
	v := &value{kind: array}
	for _, l := range splitLines(s) {
		v.items = append(v.items, newText(l))
	}
	return v
}

// splitLines cuts s after every line end, also after those that only Unicode
// counts as such: the format's tools do, and a file saved by them would differ
// otherwise.
func splitLines(s string) []string {
	var out []string
	start := 0
	for i := 0; i < len(s); {
		r, n := utf8.DecodeRuneInString(s[i:])
		i += n
		switch r {
		case '\r':
			if i < len(s) && s[i] == '\n' {
				i++
			}
		case '\n', '\v', '\f', 0x1c, 0x1d, 0x1e, 0x85, 0x2028, 0x2029:
		default:
			continue
		}
		out = append(out, s[start:i])
		start = i
	}
	if start < len(s) {
		out = append(out, s[start:])
	}
	return out
}
