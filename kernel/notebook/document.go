package notebook

import (
	"bytes"
	"errors"
	"fmt"
	"os"
	"strconv"
)

// A Document is a notebook document.
type Document struct {
	// Mended says what was put right while reading, one line each.
	Mended []string

	root  *value
	cells []*Cell
	minor int
	crlf  bool // every line of the file ends in CR LF
}

// ErrSyntax is matched by the error of a file that is not JSON.
var ErrSyntax = errors.New("not a notebook")

// A FormatError says where a document breaks the rules of its format.
type FormatError struct {
	File   string // as given to Read or Parse
	Cell   int    // from 1, all kinds counted; 0 outside the cells
	Kind   string // of the cell, if it is known
	Field  string // "outputs[0].data", "metadata"
	Reason string
}

func (e *FormatError) Error() string {
	s := e.File + ": "
	if e.Cell > 0 {
		s += fmt.Sprintf("cell %d", e.Cell)
		if e.Kind != "" {
			s += " (" + e.Kind + ")"
		}
		s += ": "
	}
	if e.Field != "" {
		s += e.Field + ": "
	}
	return s + e.Reason
}

// Read reads the document in a file.
func Read(path string) (*Document, error) {
	data, err := os.ReadFile(path)
	if err != nil {
		return nil, err
	}
	return Parse(path, data)
}

// Parse reads a document from data; file is its name in messages.
func Parse(file string, data []byte) (*Document, error) {
	data = bytes.TrimPrefix(data, []byte("\xef\xbb\xbf"))
	root, err := parse(data)
	if err != nil {
		var s *syntaxError
		if errors.As(err, &s) {
			return nil, fmt.Errorf("%s:%d:%d: %w: %s", file, s.line, s.column, ErrSyntax, s.reason)
		}
		return nil, err
	}
	lines := bytes.Count(data, []byte("\n"))
	d := &Document{root: root, crlf: lines > 0 && lines == bytes.Count(data, []byte("\r\n"))}
	if err := d.check(file); err != nil {
		return nil, err
	}
	for i, v := range root.get("cells").items {
		d.cells = append(d.cells, &Cell{N: i + 1, v: v, d: d})
	}
	d.addIDs()
	return d, nil
}

// Minor returns the minor version of the format: 5 for nbformat 4.5.
func (d *Document) Minor() int { return d.minor }

// Cells returns the cells in order.
func (d *Document) Cells() []*Cell { return d.cells }

// Metadata returns the document's metadata under the path of keys, in the
// types of encoding/json with numbers as json.Number, and nil if there is none.
func (d *Document) Metadata(path ...string) any {
	return descend(d.root.get("metadata"), path).toGo()
}

// SetMetadata puts x, anything that encoding/json can encode, into the
// document's metadata under the path of keys.
func (d *Document) SetMetadata(x any, path ...string) error {
	return putMetadata(d.root, x, path)
}

func descend(v *value, path []string) *value {
	for _, k := range path {
		v = v.get(k)
	}
	return v
}

func putMetadata(holder *value, x any, path []string) error {
	w, err := fromGo(x)
	if err != nil {
		return err
	}
	v := holder
	for i, k := range append([]string{"metadata"}, path...) {
		if i == len(path) {
			v.set(k, w)
			return nil
		}
		next := v.get(k)
		if next == nil || next.kind != object {
			next = &value{kind: object}
			v.set(k, next)
		}
		v = next
	}
	return nil
}

// Bytes returns the document as it is written to a file.
func (d *Document) Bytes() []byte {
	b := append(d.root.write(nil, 0), '\n')
	if d.crlf { // a string holds no line end of its own
		b = bytes.ReplaceAll(b, []byte("\n"), []byte("\r\n"))
	}
	return b
}

// version reads nbformat and nbformat_minor.
func version(root *value) (major, minor int, ok bool) {
	major, ok1 := root.get("nbformat").integer()
	minor, ok2 := root.get("nbformat_minor").integer()
	return major, minor, ok1 && ok2
}

// integer returns the value of a number without a fraction; 4.0 is one, as
// JSON Schema counts.
func (v *value) integer() (int, bool) {
	if v == nil || v.kind != number {
		return 0, false
	}
	if n, err := strconv.Atoi(v.lit); err == nil {
		return n, true
	}
	x, err := strconv.ParseFloat(v.lit, 64)
	if err != nil || x != float64(int(x)) {
		return 0, false
	}
	return int(x), true
}

// RemoveMetadata takes the document's metadata under the path of keys away,
// and what becomes empty by that.
func (d *Document) RemoveMetadata(path ...string) {
	for n := len(path); n > 0; n-- {
		parent := descend(d.root.get("metadata"), path[:n-1])
		v := parent.get(path[n-1])
		if v == nil || n < len(path) && len(v.members) > 0 {
			return
		}
		parent.remove(path[n-1])
	}
}
