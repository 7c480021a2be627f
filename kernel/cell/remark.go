package cell

import (
	"go/ast"
	"go/token"

	"levelsum/kernel/symbols/export"
)

// A remark is the comment on the statement that declared a session variable.
type remark struct {
	text string
	cell int
}

// remarks finds the comments on the variables that a plan declares. A statement
// that begins a cell has no comment of its own behind //levelsum: lines.
func (p *Plan) remarks() map[string]remark {
	out := map[string]remark{}
	note := func(n ast.Node, names []*ast.Ident) {
		from, to := p.Source.offset(p.scope.fset, n.Pos()), p.Source.offset(p.scope.fset, n.End())
		for _, id := range names {
			if id.Name != "_" {
				out[id.Name] = remark{export.CommentOn(p.Source.Text, from, to), p.Source.N}
			}
		}
	}
	var nodes []ast.Node
	for _, d := range p.lead {
		nodes = append(nodes, &ast.DeclStmt{Decl: d})
	}
	for _, st := range p.stmts {
		nodes = append(nodes, st)
	}
	for _, n := range nodes {
		switch n := n.(type) {
		case *ast.AssignStmt:
			if n.Tok == token.DEFINE {
				note(n, namesOf(n.Lhs))
			}
		case *ast.DeclStmt:
			g, ok := n.Decl.(*ast.GenDecl)
			if !ok {
				continue
			}
			for _, s := range g.Specs {
				s, ok := s.(*ast.ValueSpec)
				switch {
				case !ok:
				case len(g.Specs) == 1 && !g.Lparen.IsValid():
					note(g, s.Names)
				default:
					note(s, s.Names)
				}
			}
		}
	}
	return out
}

// namesOf are the names among expressions.
func namesOf(all []ast.Expr) (out []*ast.Ident) {
	for _, e := range all {
		if id, ok := e.(*ast.Ident); ok {
			out = append(out, id)
		}
	}
	return out
}
