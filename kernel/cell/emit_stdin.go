package cell

import (
	"go/ast"
	"go/types"
	"slices"
)

// A cell that reads os.Stdin asks the reader of the notebook. That is no file,
// so os.Stdin is replaced where it is used as a reader: where an interface is
// wanted, and in os.Stdin.Read. Elsewhere it stays a file, which cannot be read.

func isStdin(o types.Object) bool {
	v, ok := o.(*types.Var)
	return ok && !v.IsField() && v.Pkg() != nil && v.Pkg().Path() == "os" && v.Name() == "Stdin"
}

func (e *emitter) isStdin(x ast.Expr) bool {
	switch x := ast.Unparen(x).(type) {
	case *ast.SelectorExpr:
		return isStdin(e.info.Uses[x.Sel])
	case *ast.Ident: // behind a dot it is not reached by itself
		return isStdin(e.info.Uses[x])
	}
	return false
}

// value is node for an expression whose value is kept in a variable of a type,
// nil where it is one of several.
func (e *emitter) value(x ast.Expr, to types.Type) string {
	if to != nil && types.IsInterface(to) && e.isStdin(x) {
		return e.guard("Stdin")
	}
	return e.node(x)
}

// readsStdin tells whether os.Stdin, an expression below the nodes in stack, is
// used as a reader.
func (e *emitter) readsStdin(n ast.Expr, stack []ast.Node) bool {
	for len(stack) > 0 {
		p, ok := stack[len(stack)-1].(*ast.ParenExpr)
		if !ok {
			break
		}
		n, stack = p, stack[:len(stack)-1]
	}
	if len(stack) == 0 {
		return false
	}
	if s, ok := stack[len(stack)-1].(*ast.SelectorExpr); ok {
		return s.Sel.Name == "Read"
	}
	t := e.wanted(n, stack)
	return t != nil && types.IsInterface(t)
}

// wanted is the type of the place where a value stands, nil if there is none.
func (e *emitter) wanted(x ast.Expr, stack []ast.Node) types.Type {
	at := func(list []ast.Expr) int { return slices.Index(list, x) }
	switch p := stack[len(stack)-1].(type) {
	case *ast.CallExpr:
		fun := e.info.Types[p.Fun]
		if fun.IsType() {
			return fun.Type
		}
		if sig, ok := typeUnder[*types.Signature](fun.Type); ok && at(p.Args) >= 0 {
			return paramType(sig, at(p.Args), p.Ellipsis.IsValid())
		}
	case *ast.AssignStmt:
		if i := at(p.Rhs); i >= 0 && len(p.Lhs) == len(p.Rhs) {
			return e.info.TypeOf(p.Lhs[i])
		}
	case *ast.ValueSpec:
		if i := at(p.Values); i >= 0 && len(p.Names) == len(p.Values) {
			return e.info.TypeOf(p.Names[i])
		}
	case *ast.KeyValueExpr:
		if c, ok := stack[len(stack)-2].(*ast.CompositeLit); ok && p.Value == x {
			if id, ok := p.Key.(*ast.Ident); ok {
				if f, ok := e.info.Uses[id].(*types.Var); ok && f.IsField() {
					return f.Type()
				}
			}
			return elementType(e.info.TypeOf(c), 0)
		}
	case *ast.CompositeLit:
		return elementType(e.info.TypeOf(p), at(p.Elts))
	case *ast.ReturnStmt:
		for _, n := range slices.Backward(stack) {
			var sig *types.Signature
			switch f := n.(type) {
			case *ast.FuncLit:
				sig, _ = typeUnder[*types.Signature](e.info.TypeOf(f))
			case *ast.FuncDecl:
				sig, _ = typeUnder[*types.Signature](e.info.Defs[f.Name].Type())
			}
			if i := at(p.Results); sig != nil && i >= 0 && sig.Results().Len() == len(p.Results) {
				return sig.Results().At(i).Type()
			} else if sig != nil {
				return nil
			}
		}
	case *ast.SendStmt:
		if c, ok := typeUnder[*types.Chan](e.info.TypeOf(p.Chan)); ok && p.Value == x {
			return c.Elem()
		}
	}
	return nil
}

func typeUnder[T types.Type](t types.Type) (T, bool) {
	var none T
	if t == nil {
		return none, false
	}
	u, ok := t.Underlying().(T)
	return u, ok
}

// elementType is the type of the ith element of a composite literal of type t.
func elementType(t types.Type, i int) types.Type {
	if t == nil {
		return nil
	}
	switch u := t.Underlying().(type) {
	case *types.Struct:
		if i >= 0 && i < u.NumFields() {
			return u.Field(i).Type()
		}
	case *types.Slice:
		return u.Elem()
	case *types.Array:
		return u.Elem()
	case *types.Map:
		return u.Elem()
	}
	return nil
}
