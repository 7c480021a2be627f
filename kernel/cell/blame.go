package cell

import (
	"go/ast"
	"go/token"
	"go/types"
	"slices"
	"strings"
)

// inLead tells whether pos lies in one of the leading var declarations.
func (c *checking) inLead(pos token.Pos) bool {
	return slices.ContainsFunc(c.p.lead, func(d ast.Decl) bool { return d.Pos() <= pos && pos < d.End() })
}

// inStatements tells whether pos lies in the parse of the cell's statements.
func (c *checking) inStatements(pos token.Pos) bool {
	return len(c.p.stmts) > 0 && c.s.fset.File(pos) == c.s.fset.File(c.p.body.Pos())
}

// blame finds the cell an error belongs to, and the older decl.
func (c *checking) blame(e types.Error) (*Decl, *Source) {
	for _, d := range c.redo {
		if d.node.Pos() <= e.Pos && e.Pos <= d.node.End() {
			return d, d.Source
		}
	}
	return nil, c.p.src
}

// diagnose turns an error of go/types into a Diagnostic.
func (c *checking) diagnose(e types.Error, src *Source) Diagnostic {
	line, col := src.place(c.s.fset, e.Pos)
	msg := strings.ReplaceAll(strings.ReplaceAll(e.Msg, "\n\t\t", ", "), "\n\t", ", ")
	msg = strings.ReplaceAll(msg, "\n", " ")
	msg = strings.ReplaceAll(msg, `"cell".`, "")
	return Diagnostic{Source: src, Line: line, Column: col, Msg: msg, Hint: c.safeHint(e.Pos, msg)}
}

// ignorable tells the errors that are none in a cell.
func (c *checking) ignorable(e types.Error, plan *Plan, outer *types.Scope) bool {
	msg := e.Msg
	switch {
	case strings.Contains(msg, "imported and not used"),
		strings.Contains(msg, "already declared through import of"),
		strings.Contains(msg, "already declared through dot-import"),
		strings.HasPrefix(msg, "other declaration of"),
		strings.HasPrefix(msg, "initialization cycle") && !c.inLead(e.Pos):
		return true
	case strings.HasPrefix(msg, unusedVar):
		// A variable of depth 0 is for later cells.
		name := strings.TrimPrefix(msg, unusedVar+": ")
		if outer != nil {
			if o := outer.Lookup(name); o != nil && o.Pos() == e.Pos {
				return true
			}
		}
		return false
	case strings.HasSuffix(msg, "is not used"):
		return plan.result != nil && plan.result.Pos() <= e.Pos && e.Pos < plan.result.End() && !insideFunc(plan.result, e.Pos)
	}
	return false
}

// unusedVar begins the error about a variable that nothing reads. It is a
// warning in a cell, and none at depth 0, where later cells may read it.
const unusedVar = "declared and not used"

// insideFunc tells whether pos is in the body of a function literal of e.
func insideFunc(e ast.Expr, pos token.Pos) bool {
	found := false
	ast.Inspect(e, func(n ast.Node) bool {
		if f, ok := n.(*ast.FuncLit); ok && f.Body.Pos() <= pos && pos < f.Body.End() {
			found = true
		}
		return !found
	})
	return found
}
