package cell

import (
	"fmt"
	"go/ast"
	"go/types"
)

// poll lets a loop or function notice that it is to stop.
func (e *emitter) poll(b *ast.BlockStmt) { e.insert(b.Lbrace+1, e.pollText()) }

// The panic stands there itself: a call, which might return, would make the
// compiler keep in memory what the loop has in registers.
func (e *emitter) pollText() string {
	return fmt.Sprintf(" if %s != 0 { panic(%s) }; ", e.guard("Stop"), e.guard("Halted"))
}

// calls tells whether a body calls anything, and so may recurse.
func calls(b *ast.BlockStmt) bool {
	found := false
	ast.Inspect(b, func(n ast.Node) bool {
		switch n.(type) {
		case *ast.CallExpr:
			found = true
		case *ast.FuncLit:
			return false
		}
		return !found
	})
	return found
}

// brief tells a loop that ends soon by itself, in which a look at whether it is
// to stop would be most of the work: one over the elements of a slice or an
// array whose body is arithmetic. A thousand million elements take a second.
func (e *emitter) brief(n *ast.RangeStmt) bool {
	t := e.info.Types[n.X].Type
	if t == nil {
		return false
	}
	t = t.Underlying()
	if p, ok := t.(*types.Pointer); ok {
		t = p.Elem().Underlying()
	}
	switch t.(type) {
	case *types.Slice, *types.Array:
	default:
		return false
	}
	ok := true
	ast.Inspect(n.Body, func(n ast.Node) bool {
		switch n := n.(type) {
		case *ast.ForStmt, *ast.RangeStmt, *ast.FuncLit, *ast.GoStmt, *ast.DeferStmt, *ast.SelectStmt, *ast.SendStmt, *ast.CompositeLit, *ast.SwitchStmt, *ast.TypeSwitchStmt:
			ok = false
		case *ast.BranchStmt:
			ok = ok && n.Label == nil
		case *ast.CallExpr:
			ok = ok && e.quick(n)
		case *ast.UnaryExpr:
			ok = ok && e.number(n)
		case *ast.BinaryExpr:
			ok = ok && e.number(n) && (e.number(n.X) && e.number(n.Y))
		case *ast.AssignStmt:
			for _, x := range append(n.Lhs[:len(n.Lhs):len(n.Lhs)], n.Rhs...) {
				if id, is := x.(*ast.Ident); !is || id.Name != "_" {
					ok = ok && e.number(x)
				}
			}
		case *ast.IndexExpr:
			if t := e.info.Types[n.X].Type; t != nil {
				_, m := t.Underlying().(*types.Map)
				ok = ok && !m
			}
		}
		return ok
	})
	return ok
}

// number tells an expression whose value is a number or a truth value.
func (e *emitter) number(x ast.Expr) bool {
	t := e.info.Types[x].Type
	if id, ok := x.(*ast.Ident); ok && t == nil {
		if o := objectOf(id, e.info); o != nil {
			t = o.Type()
		}
	}
	if t == nil {
		return false
	}
	b, ok := t.Underlying().(*types.Basic)
	return ok && b.Info()&(types.IsNumeric|types.IsBoolean) != 0
}

// quick tells a call that takes next to no time: a conversion between numbers,
// len and its kin, a function of package math.
func (e *emitter) quick(n *ast.CallExpr) bool {
	switch fun := e.info.Types[n.Fun]; {
	case fun.IsType():
		return len(n.Args) == 1 && e.number(n) && e.number(n.Args[0])
	case fun.IsBuiltin():
		return e.number(n) && !e.isBuiltin(funcIdent(n.Fun), "copy")
	}
	id := funcIdent(n.Fun)
	if id == nil {
		return false
	}
	f, ok := e.info.Uses[id].(*types.Func)
	return ok && f.Pkg() != nil && f.Pkg().Path() == "math" && f.Signature().Recv() == nil
}
