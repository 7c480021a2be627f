package cell

import (
	"go/ast"
	"go/constant"
	"go/token"
	"go/types"
	"strconv"
)

// Sets tells whether a variable that the plan declares was given its value
// when the cell failed in statement reached.
func (p *Plan) Sets(name string, reached int) bool {
	if reached < 0 {
		return false
	}
	for _, d := range p.lead {
		if defines(&ast.DeclStmt{Decl: d}, name) {
			return true
		}
	}
	for k, st := range p.stmts {
		if k >= reached {
			return false
		}
		if defines(st, name) {
			return true
		}
	}
	return false
}

// defines tells whether a statement of depth 0 declares name.
func defines(st ast.Stmt, name string) bool {
	for {
		l, ok := st.(*ast.LabeledStmt)
		if !ok {
			break
		}
		st = l.Stmt
	}
	switch st := st.(type) {
	case *ast.AssignStmt:
		if st.Tok != token.DEFINE {
			return false
		}
		for _, e := range st.Lhs {
			if id, ok := e.(*ast.Ident); ok && id.Name == name {
				return true
			}
		}
	case *ast.DeclStmt:
		if g, ok := st.Decl.(*ast.GenDecl); ok && g.Tok == token.VAR {
			for _, s := range g.Specs {
				for _, id := range s.(*ast.ValueSpec).Names {
					if id.Name == name {
						return true
					}
				}
			}
		}
	}
	return false
}

// ConstantText is what a last expression that is an untyped constant, or nil,
// shows: its exact value, which need not fit any type.
func (p *Plan) ConstantText() (string, bool) {
	if p.result == nil || len(p.resultType) != 1 {
		return "", false
	}
	b, ok := p.resultType[0].(*types.Basic)
	if !ok || b.Info()&types.IsUntyped == 0 {
		return "", false
	}
	tv := p.sinfo.Types[p.result]
	switch {
	case b.Kind() == types.UntypedNil:
		return "nil", true
	case tv.Value == nil: // an untyped bool of a comparison is no constant
		return "", false
	case tv.Value.Kind() == constant.String:
		return constant.StringVal(tv.Value), true
	case b.Kind() == types.UntypedFloat:
		if f, exact := constant.Float64Val(tv.Value); exact || f != 0 {
			return strconv.FormatFloat(f, 'g', -1, 64), true
		}
	}
	return tv.Value.ExactString(), true
}
