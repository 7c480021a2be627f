package cell

import (
	"go/ast"
	"go/token"
	"go/types"
	"sort"
)

// unread says where a cell's statements leave an error that nobody looks at.
type unread struct {
	drops map[int]bool         // statement k is a call whose last result is an error
	after map[int][]*types.Var // after statement k, variables that are written again unread
	end   []ending             // at the end of the cell
}

// An ending is an error variable whose last value nobody looks at.
type ending struct {
	v    *types.Var
	last token.Pos // where it was written last
}

var errorType = types.Universe.Lookup("error").Type()

// findUnread looks through the statements of depth 0. A use of an error
// variable that is not the left side of an assignment counts as a look, also
// in a function of the cell.
func (p *Plan) findUnread() unread {
	u := unread{drops: map[int]bool{}, after: map[int][]*types.Var{}}
	type event struct {
		pos   token.Pos
		name  token.Pos
		write bool
		stmt  int
		outer bool // the write is the statement itself
	}
	events := map[*types.Var][]event{}
	for k, st := range p.stmts {
		if e, ok := st.(*ast.ExprStmt); ok && e.X != p.result {
			u.drops[k] = p.dropsError(e.X)
		}
		left := map[*ast.Ident]token.Pos{}
		ast.Inspect(st, func(n ast.Node) bool {
			switch n := n.(type) {
			case *ast.AssignStmt:
				if n.Tok == token.ASSIGN || n.Tok == token.DEFINE {
					for _, e := range n.Lhs {
						if id, ok := ast.Unparen(e).(*ast.Ident); ok {
							left[id] = n.End()
						}
					}
				}
			case *ast.ValueSpec:
				for _, id := range n.Names {
					if len(n.Values) > 0 {
						left[id] = n.End()
					}
				}
			case *ast.Ident:
				o := p.sinfo.Uses[n]
				if o == nil {
					o = p.sinfo.Defs[n]
				}
				v, ok := o.(*types.Var)
				if !ok || v.IsField() || !types.Identical(v.Type(), errorType) || p.slotOf(v, p.sinfo) == nil {
					return true
				}
				if at, ok := left[n]; ok {
					events[v] = append(events[v], event{pos: at, name: n.Pos(), write: true, stmt: k, outer: at == st.End()})
				} else if p.sinfo.Uses[n] != nil {
					events[v] = append(events[v], event{pos: n.Pos(), stmt: k})
				}
			}
			return true
		})
	}
	seenInDecls := map[string]bool{}
	for _, d := range p.decls {
		for n := range d.uses {
			seenInDecls[n] = true
		}
	}
	for _, st := range p.stmts { // in order, for stable output
		ast.Inspect(st, func(n ast.Node) bool {
			id, ok := n.(*ast.Ident)
			if !ok {
				return true
			}
			v, _ := objectOf(id, p.sinfo).(*types.Var)
			es := events[v]
			if v == nil || es == nil {
				return true
			}
			delete(events, v)
			if seenInDecls[v.Name()] {
				return true
			}
			// By place: a write counts at the end of its statement, after the
			// reads on its right side.
			sort.SliceStable(es, func(i, j int) bool { return es[i].pos < es[j].pos })
			for i, e := range es {
				switch {
				case !e.write:
				case i == len(es)-1:
					u.end = append(u.end, ending{v, e.name})
				case es[i+1].write && e.outer:
					u.after[e.stmt] = append(u.after[e.stmt], v)
				}
			}
			return true
		})
	}
	return u
}

func objectOf(id *ast.Ident, info *types.Info) types.Object {
	if o := info.Uses[id]; o != nil {
		return o
	}
	return info.Defs[id]
}

// dropsError tells a call, as a statement, whose last result is an error.
func (p *Plan) dropsError(e ast.Expr) bool {
	call, ok := ast.Unparen(e).(*ast.CallExpr)
	if !ok || p.prints(call) {
		return false
	}
	tv := p.sinfo.Types[call]
	switch t := tv.Type.(type) {
	case nil:
		return false
	case *types.Tuple:
		return t.Len() > 0 && types.Identical(t.At(t.Len()-1).Type(), errorType)
	default:
		return !tv.IsVoid() && types.Identical(t, errorType)
	}
}

// ErrorLine is the line on which the error came up that the cell left in the
// variable name, "" for one that a statement dropped, seen in statement at; 0 if
// it is not known.
func (p *Plan) ErrorLine(name string, at int) int {
	line := func(n ast.Node) int {
		l, _ := p.Source.place(p.scope.fset, n.Pos())
		return l
	}
	if name == "" {
		if at >= 0 && at < len(p.stmts) {
			return line(p.stmts[at])
		}
		return 0
	}
	last := 0
	look := func(n ast.Node) {
		ast.Inspect(n, func(n ast.Node) bool {
			switch n := n.(type) {
			case *ast.AssignStmt:
				for _, e := range n.Lhs {
					if id, ok := ast.Unparen(e).(*ast.Ident); ok && id.Name == name {
						last = line(n)
					}
				}
			case *ast.ValueSpec:
				for _, id := range n.Names {
					if id.Name == name && len(n.Values) > 0 {
						last = line(n)
					}
				}
			}
			return true
		})
	}
	for _, d := range p.lead {
		look(d)
	}
	for k, st := range p.stmts {
		if k <= at {
			look(st)
		}
	}
	return last
}

// ResultLine is the line of the last expression, 0 if none is shown.
func (p *Plan) ResultLine() int {
	if p.result == nil {
		return 0
	}
	l, _ := p.Source.place(p.scope.fset, p.result.Pos())
	return l
}
