package cell

import (
	"fmt"
	"go/ast"
	"go/types"
	"slices"
)

// pure are packages whose functions do nothing but return a value, with those
// that do more. Only functions count, not methods.
var pure = map[string][]string{
	"cmp":           nil,
	"errors":        {"As"}, // stores into its second argument
	"html":          nil,
	"maps":          nil,
	"math":          nil,
	"math/bits":     nil,
	"math/cmplx":    nil,
	"path":          nil,
	"slices":        nil,
	"strconv":       nil,
	"strings":       nil,
	"unicode":       nil,
	"unicode/utf16": nil,
	"unicode/utf8":  nil,
}

// pureOfFmt are the pure functions of fmt.
var pureOfFmt = []string{"Append", "Appendf", "Appendln", "Errorf", "Sprint", "Sprintf", "Sprintln"}

// useless warns of statements of the cell that call a pure function and leave
// its result. One whose last result is an error may be called for that alone,
// and one that is given a function for what that does.
func (c *checking) useless(plan *Plan) Diagnostics {
	var out Diagnostics
	look := func(n ast.Node, info *types.Info) {
		ast.Inspect(n, func(n ast.Node) bool {
			st, ok := n.(*ast.ExprStmt)
			if !ok || st.X == plan.result {
				return true
			}
			call, ok := ast.Unparen(st.X).(*ast.CallExpr)
			if !ok {
				return true
			}
			sel, ok := ast.Unparen(call.Fun).(*ast.SelectorExpr)
			if !ok {
				return true
			}
			f, ok := info.Uses[sel.Sel].(*types.Func)
			if !ok || !isPure(f) {
				return true
			}
			line, col := c.p.src.place(c.s.fset, st.Pos())
			out = append(out, Diagnostic{
				Source: c.p.src, Line: line, Column: col,
				Msg:  fmt.Sprintf("the result of %s.%s is not used", f.Pkg().Name(), f.Name()),
				Hint: "the call has no other effect: give the result a name, or delete the line",
			})
			return true
		})
	}
	for _, d := range c.redo {
		if d.Source == c.p.src {
			look(d.node, plan.info)
		}
	}
	for _, st := range c.p.stmts {
		look(st, plan.sinfo)
	}
	return out
}

func isPure(f *types.Func) bool {
	s := f.Signature()
	if f.Pkg() == nil || s.Recv() != nil || s.Results().Len() == 0 {
		return false
	}
	for v := range s.Params().Variables() {
		if _, ok := v.Type().Underlying().(*types.Signature); ok {
			return false
		}
	}
	if f.Pkg().Path() == "fmt" {
		return slices.Contains(pureOfFmt, f.Name())
	}
	exceptions, ok := pure[f.Pkg().Path()]
	if !ok || slices.Contains(exceptions, f.Name()) {
		return false
	}
	last := s.Results().At(s.Results().Len() - 1).Type()
	return f.Pkg().Path() == "errors" || !types.Identical(last, errorType)
}
