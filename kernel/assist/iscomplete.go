package assist

import (
	"go/ast"
	"go/parser"
	"go/token"
	"strings"
)

// The answers of [IsComplete].
const (
	complete   = "complete"
	incomplete = "incomplete"
	invalid    = "invalid"
)

// IsComplete says whether source can be run as it is ("complete"), needs
// further lines ("incomplete"; indent is what the next one should begin with),
// or is wrong whatever follows ("invalid"). Only syntax counts: a name that is
// not declared is no reason to wait for more.
func IsComplete(source string) (status, indent string) {
	t := tokenise(source)
	switch {
	case t.openText:
		return incomplete, ""
	case t.bad:
		return invalid, ""
	case len(t.open) > 0:
		return incomplete, strings.Repeat("\t", t.openLines())
	case t.dangling:
		return incomplete, "\t"
	}
	for _, chunk := range t.chunks {
		if !parses(chunk, source[chunk.start:chunk.end]) {
			return invalid, ""
		}
	}
	return complete, ""
}

// parses reports whether the parser takes the chunk.
func parses(c chunk, text string) bool {
	source := "package p; func _() {" + text + "\n}"
	if c.isDeclaration() {
		source = "package p; " + text
	}
	f, err := parser.ParseFile(token.NewFileSet(), "", source, parser.SkipObjectResolution)
	return err == nil && (c.isDeclaration() || len(f.Decls) == 1 && isFunc(f.Decls[0]))
}

func isFunc(d ast.Decl) bool {
	_, ok := d.(*ast.FuncDecl)
	return ok
}
