package cell

import (
	"fmt"
	"go/ast"
	"go/token"
	"go/types"
	"strings"
)

// selectStmt adds a clause for stopping to a select that may wait.
func (e *emitter) selectStmt(n *ast.SelectStmt) {
	waits := true
	for _, c := range n.Body.List {
		c := c.(*ast.CommClause)
		e.markComm(c.Comm)
		if c.Comm == nil { // a default clause
			waits = false
		}
	}
	if !waits {
		return
	}
	e.insert(n.Body.Rbrace, fmt.Sprintf("\ncase <-%s: %s; panic(0)\n", e.guard("Done()"), e.guard("Halt()")))
}

// markComm notes the send or receive of a select clause, which stays as it is.
func (e *emitter) markComm(st ast.Stmt) {
	switch st := st.(type) {
	case *ast.SendStmt:
		e.comm[st] = true
	case *ast.ExprStmt:
		e.comm[ast.Unparen(st.X)] = true
	case *ast.AssignStmt:
		e.comm[ast.Unparen(st.Rhs[0])] = true
	}
}

// receive lets a receive notice that it is to stop.
func (e *emitter) receive(n *ast.UnaryExpr) {
	t := e.info.Types[n.X].Type
	if t == nil {
		return
	}
	if _, ok := t.Underlying().(*types.Chan); !ok {
		return
	}
	name := "Recv"
	if tv, ok := e.info.Types[n]; ok {
		if tup, ok := tv.Type.(*types.Tuple); ok && tup.Len() == 2 {
			name = "Recv2"
		}
	}
	e.replace(n.OpPos, n.OpPos+2, e.guard(name)+"(")
	e.after(n, ")")
}

// goStmt guards a goroutine: a panic in it must not end the process. The
// goroutine is noted before it starts.
func (e *emitter) goStmt(n *ast.GoStmt) {
	late := fmt.Sprintf(" defer %s(%s()); ", e.guard("Left"), e.guard("Enter"))
	id := Inner + "id"
	early := fmt.Sprintf(" defer %s(%s); ", e.guard("Left"), id)
	if lit, ok := ast.Unparen(n.Call.Fun).(*ast.FuncLit); ok {
		params := lit.Type.Params
		named := 0
		for _, f := range params.List {
			named += len(f.Names)
		}
		if named != params.NumFields() || len(n.Call.Args) < named-1 || len(n.Call.Args) == 1 && named > 1 {
			e.insert(lit.Body.Lbrace+1, late)
			return
		}
		e.insert(params.Opening+1, id+" int, ")
		e.insert(lit.Body.Lbrace+1, early)
		e.insert(n.Call.Lparen+1, e.guard("Enter")+"(), ")
		return
	}
	guard := late
	fun := e.info.Types[n.Call.Fun]
	sig, ok := fun.Type.Underlying().(*types.Signature)
	if fun.IsBuiltin() || fun.IsType() || !ok {
		e.insert(n.Call.Pos(), "func() {"+guard)
		e.after(n.Call, "}()")
		return
	}
	// go func(f F, a0 T0, ...) { guard; f(a0, ...) }(fun, args...)
	var params, args strings.Builder
	fmt.Fprintf(&params, "%s int, %sf %s", id, Inner, e.typ(sig))
	for i := range sig.Params().Len() {
		t := sig.Params().At(i).Type()
		text := e.typ(t)
		if sig.Variadic() && i == sig.Params().Len()-1 {
			args.WriteString(fmt.Sprintf("%sa%d...", Inner, i))
			if n.Call.Ellipsis == token.NoPos {
				text = "..." + e.typ(t.(*types.Slice).Elem())
			}
		} else {
			args.WriteString(fmt.Sprintf("%sa%d, ", Inner, i))
		}
		fmt.Fprintf(&params, ", %sa%d %s", Inner, i, text)
	}
	if len(n.Call.Args) == 1 && sig.Params().Len() > 1 { // go f(g())
		e.insert(n.Call.Pos(), "func() {"+guard)
		e.after(n.Call, "}()")
		return
	}
	e.insert(n.Call.Pos(), fmt.Sprintf("func(%s) {%s%sf(%s) }(%s(), ", params.String(), early, Inner, args.String(), e.guard("Enter")))
	// f(args) becomes f, args): the parenthesis goes, and the instance is named.
	if id := funcIdent(n.Call.Fun); id != nil {
		if inst, ok := e.info.Instances[id]; ok && !explicit(n.Call.Fun) {
			var ts []string
			for i := range inst.TypeArgs.Len() {
				ts = append(ts, e.typ(inst.TypeArgs.At(i)))
			}
			e.after(n.Call.Fun, "["+strings.Join(ts, ", ")+"]")
		}
	}
	e.replace(n.Call.Lparen, n.Call.Lparen+1, ", ")
}

// funcIdent is the identifier that names a called function.
func funcIdent(f ast.Expr) *ast.Ident {
	switch f := ast.Unparen(f).(type) {
	case *ast.Ident:
		return f
	case *ast.SelectorExpr:
		return f.Sel
	}
	return nil
}

func explicit(f ast.Expr) bool {
	switch ast.Unparen(f).(type) {
	case *ast.IndexExpr, *ast.IndexListExpr:
		return true
	}
	return false
}
