package cell

import (
	"go/ast"
	"go/types"
)

// Text that package fmt makes of values may hold names of the session's types
// and fields. Printed, it is cleaned where it is read; made into a string or
// written to a file or buffer, it is cleaned here, so that its length and
// content are those of Go.

// printing makes the result of fmt.Sprint and its kin, or what fmt.Fprint and
// its kin write, plain.
func (e *emitter) printing(n *ast.CallExpr, parent ast.Node) {
	id := funcIdent(n.Fun)
	if id == nil || len(n.Args) == 0 {
		return
	}
	f, ok := e.info.Uses[id].(*types.Func)
	if !ok || f.Pkg() == nil || f.Pkg().Path() != "fmt" || f.Signature().Recv() != nil {
		return
	}
	named := false
	for _, a := range n.Args {
		named = named || mayName(e.info.Types[a].Type)
	}
	switch f.Name() {
	case "Sprint", "Sprintf", "Sprintln":
		switch parent.(type) {
		case *ast.GoStmt, *ast.DeferStmt: // the result is dropped
			return
		}
		if named {
			e.insert(n.Pos(), e.guard("Plain")+"(")
			e.after(n, ")")
		}
	case "Fprint", "Fprintf", "Fprintln":
		named = false // the writer's type is not printed
		for _, a := range n.Args[1:] {
			named = named || mayName(e.info.Types[a].Type)
		}
		if named {
			e.insert(n.Args[0].Pos(), e.guard("Out")+"(")
			e.after(n.Args[0], ")")
		}
	}
}

// mayName tells whether a value of the type may print as text with a name of
// the session's in it.
func mayName(t types.Type) bool {
	switch t := t.(type) {
	case *types.Basic:
		return false
	case *types.Alias:
		return mayName(types.Unalias(t))
	case *types.Named:
		_, basic := t.Underlying().(*types.Basic)
		return !basic || isCell(t.Obj().Pkg())
	case *types.Pointer:
		return mayName(t.Elem())
	case *types.Slice:
		return mayName(t.Elem())
	case *types.Array:
		return mayName(t.Elem())
	case *types.Map:
		return mayName(t.Key()) || mayName(t.Elem())
	}
	return true
}
