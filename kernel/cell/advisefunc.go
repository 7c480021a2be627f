package cell

import (
	"go/ast"
	"go/token"
	"go/types"
	"slices"
	"strings"
)

// funcAround is the type and body of the function that pos is in.
func (c *checking) funcAround(pos token.Pos) (*ast.FuncType, *ast.BlockStmt) {
	for _, n := range c.pathAt(pos) {
		switch f := n.(type) {
		case *ast.FuncDecl:
			return f.Type, f.Body
		case *ast.FuncLit:
			return f.Type, f.Body
		}
	}
	return nil, nil
}

// returnHint answers a return with values where none are expected.
func (c *checking) returnHint(pos token.Pos) string {
	ret := around[*ast.ReturnStmt](c, pos)
	if ret == nil {
		return ""
	}
	f, _ := c.funcAround(pos)
	if f == nil {
		if len(ret.Results) == 1 && types.Identical(orInvalid(c.typeOf(ret.Results[0])), errorType) {
			return "delete the if: an error that nothing reads ends the cell and is shown"
		}
		return "write the value alone as the cell's last line: a cell does not return"
	}
	var ts []string
	for _, r := range ret.Results {
		t := "float64"
		if k := c.typeOf(r); k != nil && !untypedNumber(k) {
			t = typeString(k)
		}
		ts = append(ts, t)
	}
	result := strings.Join(ts, ", ")
	if len(ts) > 1 {
		result = "(" + result + ")"
	}
	if f.Results != nil {
		return "the function returns " + c.text(f.Results)
	}
	return "write the type of the result behind the brackets: func f(...) " + result + " {"
}

func untypedNumber(t types.Type) bool {
	b, ok := t.(*types.Basic)
	return ok && b.Info()&types.IsUntyped != 0 && b.Info()&types.IsNumeric != 0
}

func orInvalid(t types.Type) types.Type {
	if t == nil {
		return types.Typ[types.Invalid]
	}
	return t
}

// missingReturn answers a function whose last statement returns nothing.
func (c *checking) missingReturn(pos token.Pos) string {
	_, body := c.funcAround(pos)
	if body == nil || len(body.List) == 0 {
		return "write return and a value at the end of the function"
	}
	switch st := body.List[len(body.List)-1].(type) {
	case *ast.ExprStmt:
		return "write return " + c.text(st.X)
	case *ast.AssignStmt:
		if len(st.Lhs) == 1 {
			return "write return " + c.text(st.Lhs[0]) + " at the end of the function"
		}
	}
	return "write return and a value at the end of the function"
}

// notUsedHint answers a value that stands alone and is not shown.
func (c *checking) notUsedHint(pos token.Pos, x string) string {
	call := around[*ast.CallExpr](c, pos)
	if call != nil && len(call.Args) > 0 && c.text(call.Fun) == "append" {
		return "write " + c.text(call.Args[0]) + " = " + x
	}
	if strings.Contains(x, " == ") {
		return "write = to assign: == compares"
	}
	if f, body := c.funcAround(pos); f != nil {
		if f.Results != nil && len(body.List) > 0 && body.List[len(body.List)-1].Pos() <= pos {
			return "write return " + x
		}
		return "write fmt.Println(" + x + ") to see it, or give it a name"
	}
	if around[*ast.BlockStmt](c, pos) != nil {
		return "write fmt.Println(" + x + ") to see it"
	}
	return "write fmt.Println(" + x + ") to see it, or make it the cell's last line"
}

// unusedHint answers a variable inside a block that nothing reads.
func (c *checking) unusedHint(pos token.Pos, name string) string {
	if r := around[*ast.RangeStmt](c, pos); r != nil && r.Tok == token.DEFINE {
		key, _ := r.Key.(*ast.Ident)
		value, _ := r.Value.(*ast.Ident)
		over := "range " + c.text(r.X) + " {"
		switch {
		case key != nil && key.Pos() == pos && value != nil && value.Name != "_":
			return "write for _, " + value.Name + " := " + over
		case key != nil && key.Pos() == pos:
			return "write for " + over
		case value != nil && value.Pos() == pos:
			return "write for " + c.text(r.Key) + " := " + over
		}
	}
	if name == "err" {
		if f, _ := c.funcAround(pos); f != nil && f.Results != nil {
			last := f.Results.List[len(f.Results.List)-1]
			if id, ok := last.Type.(*ast.Ident); ok && id.Name == "error" {
				zeros := ""
				for range f.Results.NumFields() - 1 {
					zeros += "..., "
				}
				return "look at it: if err != nil { return " + zeros + "err }"
			}
		}
		return "look at it: if err != nil { panic(err) } ends the cell and shows it"
	}
	return "delete it, or write _ = " + name
}

// resultsHint answers a call with several results that is assigned to fewer
// variables.
func (c *checking) resultsHint(pos token.Pos) string {
	var left []ast.Expr
	var right ast.Expr
	op := " := "
	if a := around[*ast.AssignStmt](c, pos); a != nil && len(a.Rhs) == 1 {
		left, right = a.Lhs, a.Rhs[0]
		op = " " + a.Tok.String() + " "
	} else if s := around[*ast.ValueSpec](c, pos); s != nil && len(s.Values) == 1 {
		for _, n := range s.Names {
			left = append(left, n)
		}
		right = s.Values[0]
	}
	call, ok := right.(*ast.CallExpr)
	if !ok {
		return ""
	}
	sig, ok := c.typeOf(call.Fun).(*types.Signature)
	if !ok || sig.Results().Len() == 0 {
		return ""
	}
	var names []string
	for i := range sig.Results().Len() {
		switch {
		case i < len(left) && !(i == sig.Results().Len()-1 && len(left) > sig.Results().Len()):
			names = append(names, c.text(left[i]))
		case types.Identical(sig.Results().At(i).Type(), errorType):
			names = append(names, "err")
			if op == " = " && c.s.entities["err"] == nil {
				op = " := "
			}
		default:
			names = append(names, "_")
		}
	}
	return "write " + strings.Join(names, ", ") + op + c.text(call)
}

// assigned reports whether the name at the start of path is given a value by =,
// and how it is declared.
func assigned(path []ast.Node) (string, bool) {
	if len(path) < 2 {
		return "", false
	}
	a, ok := path[1].(*ast.AssignStmt)
	if !ok || a.Tok != token.ASSIGN || !slices.Contains(a.Lhs, path[0].(ast.Expr)) {
		return "", false
	}
	var left, right []string
	for _, e := range a.Lhs {
		left = append(left, types.ExprString(e))
	}
	for _, e := range a.Rhs {
		right = append(right, types.ExprString(e))
	}
	return strings.Join(left, ", ") + " := " + strings.Join(right, ", "), true
}

// assignedCall answers f(x) = ..., which declares a function elsewhere.
func (c *checking) assignedCall(pos token.Pos) string {
	a := around[*ast.AssignStmt](c, pos)
	if a == nil || len(a.Lhs) != 1 || len(a.Rhs) != 1 {
		return ""
	}
	call, ok := a.Lhs[0].(*ast.CallExpr)
	if !ok {
		return ""
	}
	var args []string
	for _, x := range call.Args {
		args = append(args, c.text(x))
	}
	return "write func " + c.text(call.Fun) + "(" + typedParams(strings.Join(args, ", ")) + ") float64 { return " + c.text(a.Rhs[0]) + " }"
}

// fitting tells which objects can stand for the name at the start of path: a
// function or type where it is called, a type where a literal begins.
func (c *checking) fitting(path []ast.Node) func(types.Object) bool {
	if len(path) > 1 {
		switch p := path[1].(type) {
		case *ast.CallExpr:
			if p.Fun == path[0] {
				return func(o types.Object) bool { _, ok := o.(*types.Func); return ok }
			}
		case *ast.CompositeLit:
			if p.Type == path[0] {
				return func(o types.Object) bool { _, ok := o.(*types.TypeName); return ok }
			}
		case *ast.BinaryExpr:
			return func(o types.Object) bool {
				switch o.(type) {
				case *types.Const, *types.Var:
					return true
				}
				return false
			}
		}
	}
	return func(types.Object) bool { return true }
}
