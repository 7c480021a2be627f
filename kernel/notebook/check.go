package notebook

import (
	"fmt"
	"slices"
	"strings"
)

// A rule is broken: the field and what is wrong with it.
type broken struct{ field, reason string }

func wrong(field, format string, args ...any) *broken {
	return &broken{field, fmt.Sprintf(format, args...)}
}

// under puts a prefix before the field of a broken rule.
func (b *broken) under(prefix string) *broken {
	if b == nil {
		return nil
	}
	if b.field == "" || strings.HasPrefix(b.field, "[") {
		return &broken{prefix + b.field, b.reason}
	}
	return &broken{prefix + "." + b.field, b.reason}
}

// check holds the document against the rules of its version. Fields that the
// rules do not name are let through.
func (d *Document) check(file string) error {
	root := d.root
	fail := func(cell int, kind string, b *broken) error {
		return &FormatError{File: file, Cell: cell, Kind: kind, Field: b.field, Reason: b.reason}
	}
	if root.kind != object {
		return fail(0, "", wrong("", "not a notebook: the file holds %s, want an object", root.kind))
	}
	if root.get("nbformat") == nil && root.get("cells") == nil {
		return fail(0, "", wrong("", "not a notebook: neither nbformat nor cells in it"))
	}
	major, minor, ok := version(root)
	switch {
	case major > 0 && major < 4:
		return fail(0, "", wrong("nbformat", "version %d; versions from 4.0 are read: open it in a current Jupyter front end and save it", major))
	case !ok:
		return fail(0, "", wrong("nbformat, nbformat_minor", "want two whole numbers, the version of the format"))
	case major < 4:
		return fail(0, "", wrong("nbformat", "%d, want 4", major))
	case major > 4:
		return fail(0, "", wrong("nbformat", "version %d.%d is newer than this program, which reads 4", major, minor))
	case minor < 0:
		return fail(0, "", wrong("nbformat_minor", "%d, want 0 or more", minor))
	}
	d.minor = minor
	if b := checkMetadata(root.get("metadata")); b != nil {
		return fail(0, "", b.under("metadata"))
	}
	cells := root.get("cells")
	if b := want(cells, array); b != nil {
		return fail(0, "", b.under("cells"))
	}
	for i, c := range cells.items {
		if b := d.checkCell(c); b != nil {
			return fail(i+1, c.get("cell_type").str(), b)
		}
	}
	return nil
}

// want says what is wrong if v is not there or of another kind.
func want(v *value, k kind) *broken {
	switch {
	case v == nil:
		return wrong("", "missing, want %s", k)
	case v.kind != k:
		return wrong("", "%s, want %s", v.kind, k)
	}
	return nil
}

// optional is want for a field that may be missing.
func optional(holder *value, key string, k kind) *broken {
	if v := holder.get(key); v != nil {
		return want(v, k).under(key)
	}
	return nil
}

// first returns the first broken rule.
func first(bs ...*broken) *broken {
	for _, b := range bs {
		if b != nil {
			return b
		}
	}
	return nil
}

func checkMetadata(m *value) *broken {
	if b := want(m, object); b != nil {
		return b
	}
	if k := m.get("kernelspec"); k != nil {
		if b := want(k, object); b != nil {
			return b.under("kernelspec")
		}
		if b := first(want(k.get("name"), text).under("name"), want(k.get("display_name"), text).under("display_name")); b != nil {
			return b.under("kernelspec")
		}
	}
	if l := m.get("language_info"); l != nil {
		if b := want(l, object); b != nil {
			return b.under("language_info")
		}
		b := first(want(l.get("name"), text).under("name"), optional(l, "file_extension", text),
			optional(l, "mimetype", text), optional(l, "pygments_lexer", text))
		if mode := l.get("codemirror_mode"); b == nil && mode != nil && mode.kind != text && mode.kind != object {
			b = wrong("codemirror_mode", "%s, want a string or an object", mode.kind)
		}
		if b != nil {
			return b.under("language_info")
		}
	}
	if o := m.get("orig_nbformat"); o != nil {
		if n, ok := o.integer(); !ok || n < 1 {
			return wrong("orig_nbformat", "want a whole number from 1")
		}
	}
	return first(optional(m, "title", text), optional(m, "authors", array))
}

func (d *Document) checkCell(c *value) *broken {
	if b := want(c, object); b != nil {
		return b
	}
	if b := want(c.get("cell_type"), text); b != nil {
		return b.under("cell_type")
	}
	k := c.get("cell_type").str()
	if k != Code && k != Markdown && k != Raw {
		if d.minor <= 5 {
			return wrong("cell_type", "%q, want code, markdown or raw", k)
		}
		return want(c.get("metadata"), object).under("metadata")
	}
	if b := d.checkCellMetadata(c.get("metadata"), k); b != nil {
		return b.under("metadata")
	}
	if b := checkText(c.get("source")); b != nil {
		return b.under("source")
	}
	if id := c.get("id"); id != nil && d.minor >= 5 {
		if b := want(id, text); b != nil {
			return b.under("id")
		}
		if !validID(id.str()) {
			return wrong("id", "%q, want 1 to 64 of the letters a-z, A-Z, 0-9, - and _", id.str())
		}
	}
	if k != Code {
		return checkAttachments(c.get("attachments")).under("attachments")
	}
	if b := checkCount(c, "execution_count"); b != nil {
		return b
	}
	outputs := c.get("outputs")
	if b := want(outputs, array); b != nil {
		return b.under("outputs")
	}
	for i, o := range outputs.items {
		if b := d.checkOutput(o); b != nil {
			return b.under(fmt.Sprintf("outputs[%d]", i))
		}
	}
	return nil
}

func (d *Document) checkCellMetadata(m *value, cellKind string) *broken {
	if b := want(m, object); b != nil {
		return b
	}
	if b := optional(m, "jupyter", object); b != nil && d.minor >= 3 {
		return b
	}
	if t := m.get("tags"); t != nil {
		if b := checkTags(t); b != nil {
			return b.under("tags")
		}
	}
	if n := m.get("name"); n != nil {
		if b := want(n, text); b != nil {
			return b.under("name")
		}
		if strings.Trim(n.str(), "\n\r\u2028\u2029") == "" {
			return wrong("name", "empty, want a name or none at all")
		}
	}
	switch cellKind {
	case Raw:
		return optional(m, "format", text)
	case Code:
		if e := m.get("execution"); e != nil && d.minor >= 4 {
			if b := want(e, object); b != nil {
				return b.under("execution")
			}
			for _, x := range e.members {
				if b := want(x.val, text); b != nil {
					return b.under(x.key).under("execution")
				}
			}
		}
		if s := m.get("scrolled"); s != nil && s.kind != boolean && !(s.kind == text && s.str() == "auto") {
			return wrong("scrolled", "want true, false or \"auto\"")
		}
		return optional(m, "collapsed", boolean)
	}
	return nil
}

func checkTags(t *value) *broken {
	if b := want(t, array); b != nil {
		return b
	}
	var seen []string
	for i, x := range t.items {
		at := fmt.Sprintf("[%d]", i)
		if b := want(x, text); b != nil {
			return b.under(at)
		}
		switch s := x.str(); {
		case s == "" || strings.Contains(s, ","):
			return wrong(at, "%q, want a word without a comma", s)
		case slices.Contains(seen, s):
			return wrong(at, "%q stands there twice", s)
		default:
			seen = append(seen, s)
		}
	}
	return nil
}

// checkText wants a string or a list of strings.
func checkText(v *value) *broken {
	switch {
	case v == nil:
		return wrong("", "missing, want a string or a list of strings")
	case v.kind == text:
		return nil
	case v.kind != array:
		return wrong("", "%s, want a string or a list of strings", v.kind)
	}
	for i, w := range v.items {
		if b := want(w, text); b != nil {
			return b.under(fmt.Sprintf("[%d]", i))
		}
	}
	return nil
}

// checkCount wants null or a whole number that is not negative.
func checkCount(holder *value, key string) *broken {
	v := holder.get(key)
	switch {
	case v == nil:
		return wrong(key, "missing, want a whole number or null")
	case v.kind == null:
		return nil
	}
	if n, ok := v.integer(); !ok || n < 0 {
		return wrong(key, "want a whole number from 0, or null")
	}
	return nil
}

func checkBundle(v *value) *broken {
	if b := want(v, object); b != nil {
		return b
	}
	for _, m := range v.members {
		if isJSON(m.key) {
			continue
		}
		if b := checkText(m.val); b != nil {
			return b.under("[" + m.key + "]")
		}
	}
	return nil
}

func checkAttachments(v *value) *broken {
	if v == nil {
		return nil
	}
	if b := want(v, object); b != nil {
		return b
	}
	for _, m := range v.members {
		if b := checkBundle(m.val); b != nil {
			return b.under("[" + m.key + "]")
		}
	}
	return nil
}

func (d *Document) checkOutput(o *value) *broken {
	if b := want(o, object); b != nil {
		return b
	}
	if b := want(o.get("output_type"), text); b != nil {
		return b.under("output_type")
	}
	switch k := o.get("output_type").str(); k {
	case Stream:
		return first(want(o.get("name"), text).under("name"), checkText(o.get("text")).under("text"))
	case DisplayData, ExecuteResult:
		b := first(checkBundle(o.get("data")).under("data"), want(o.get("metadata"), object).under("metadata"))
		if b == nil && k == ExecuteResult {
			b = checkCount(o, "execution_count")
		}
		return b
	case ErrorOutput:
		b := first(want(o.get("ename"), text).under("ename"), want(o.get("evalue"), text).under("evalue"),
			want(o.get("traceback"), array).under("traceback"))
		if b != nil {
			return b
		}
		for i, l := range o.get("traceback").items {
			if b := want(l, text); b != nil {
				return b.under(fmt.Sprintf("traceback[%d]", i))
			}
		}
		return nil
	default:
		if d.minor <= 5 {
			return wrong("output_type", "%q, want stream, display_data, execute_result or error", k)
		}
		return nil
	}
}

func validID(s string) bool {
	if len(s) < 1 || len(s) > 64 {
		return false
	}
	for i := range len(s) {
		c := s[i]
		if !(c >= 'a' && c <= 'z' || c >= 'A' && c <= 'Z' || c >= '0' && c <= '9' || c == '-' || c == '_') {
			return false
		}
	}
	return true
}
