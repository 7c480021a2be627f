package cell

import (
	"go/ast"
	"go/types"
)

// dependencies lists the session names and the imports that a declaration uses.
func dependencies(n ast.Node, info *types.Info) (uses map[string]bool, pkgs map[string]string) {
	uses, pkgs = map[string]bool{}, map[string]string{}
	ast.Inspect(n, func(n ast.Node) bool {
		switch n := n.(type) {
		case *ast.Ident:
			switch o := info.Uses[n].(type) {
			case nil:
			case *types.PkgName:
				pkgs[o.Name()] = o.Imported().Path()
			default:
				if isOuter(o) {
					uses[o.Name()] = true
				}
			}
		case *ast.SelectorExpr:
			if sel := info.Selections[n]; sel != nil {
				for t := range namedIn(sel.Recv()) {
					uses[t] = true
				}
			}
		}
		return true
	})
	return uses, pkgs
}

// isOuter tells whether an object is declared at the outer level of a cell.
func isOuter(o types.Object) bool {
	if !isCell(o.Pkg()) || o.Parent() == nil {
		return false
	}
	if _, ok := o.(*types.PkgName); ok {
		return false
	}
	return o.Parent().Parent() == types.Universe
}

// free lists every name that stands in a node for itself, not behind a dot:
// what a decl that does not compile may be waiting for.
func free(n ast.Node) map[string]bool {
	out := map[string]bool{}
	ast.Inspect(n, func(n ast.Node) bool {
		switch n := n.(type) {
		case *ast.SelectorExpr:
			ast.Inspect(n.X, func(m ast.Node) bool {
				if id, ok := m.(*ast.Ident); ok {
					out[id.Name] = true
				}
				return true
			})
			return false
		case *ast.Ident:
			out[n.Name] = true
		}
		return true
	})
	return out
}
