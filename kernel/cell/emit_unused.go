package cell

import (
	"go/ast"
	"go/token"
	"strings"
)

// unusedIn makes variables count as used that the checker has only warned of:
// the Go compiler refuses them.
func (e *emitter) unusedIn(n, parent ast.Node) {
	var names string
	switch n := n.(type) {
	case *ast.AssignStmt:
		names = e.unusedNames(n.Lhs...)
	case *ast.DeclStmt:
		if g, ok := n.Decl.(*ast.GenDecl); ok && g.Tok == token.VAR {
			for _, s := range g.Specs {
				for _, id := range s.(*ast.ValueSpec).Names {
					names += e.unusedNames(id)
				}
			}
		}
	}
	if names == "" {
		return
	}
	switch p := parent.(type) {
	case *ast.IfStmt:
		e.insert(p.Body.Lbrace+1, names)
	case *ast.ForStmt:
		e.insert(p.Body.Lbrace+1, names)
	case *ast.SwitchStmt:
		e.after(n, "; "+strings.TrimSuffix(names, "; "))
	case *ast.TypeSwitchStmt:
		if a, ok := n.(*ast.AssignStmt); ok && p.Assign == ast.Stmt(a) {
			e.replace(a.Pos(), a.Rhs[0].Pos(), "")
			for _, x := range a.Lhs {
				e.skip[x] = true
			}
		}
	case *ast.CommClause:
		if p.Comm == n {
			e.insert(p.Colon+1, names)
		} else {
			e.after(n, "; "+names)
		}
	default:
		e.after(n, "; "+names)
	}
}

// unusedNames writes a use of each variable among xs that nothing reads.
func (e *emitter) unusedNames(xs ...ast.Expr) string {
	var out string
	for _, x := range xs {
		if id, ok := x.(*ast.Ident); ok && e.plan.unused[id.Pos()] {
			out += " _ = " + id.Name + "; "
		}
	}
	return out
}
