package cell

import (
	"strings"

	"levelsum/kernel/symbols/export"
)

// Documentation returns the comment with which a cell has declared a name, "T.m"
// for a method or a field of T, and the cell's number; of a variable the comment
// on the statement that declared it.
func (s *Scope) Documentation(name string) (text string, cell int, ok bool) {
	if e := s.entities[name]; e != nil && e.slot != nil {
		r := s.remarks[name]
		return r.text, r.cell, r.text != ""
	}
	for _, key := range []string{name, receiverOf(name)} {
		d := s.decls[key]
		if d == nil {
			continue
		}
		above := export.CommentAbove(d.Source.Text, d.Source.offset(s.fset, d.node.Pos()))
		if text, ok := export.Documented(d.node, above)[name]; ok {
			return text, d.Source.N, true
		}
	}
	return "", 0, false
}

// receiverOf is the part of "T.m" before the dot.
func receiverOf(name string) string {
	t, _, _ := strings.Cut(name, ".")
	return t
}
