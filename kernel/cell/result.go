package cell

import (
	"go/ast"
	"go/types"
	"strings"
)

// findResult notes the last statement if it is an expression whose value may
// be shown.
func (p *Plan) findResult() {
	if len(p.stmts) == 0 {
		return
	}
	if e, ok := p.stmts[len(p.stmts)-1].(*ast.ExprStmt); ok {
		p.result = e.X
	}
}

// finishResult decides, now that types are known, whether the last expression
// is shown: a call without results is not, nor what fmt.Print and its kin
// return, nor the error that is all a call returns: the cell fails with that.
func (p *Plan) finishResult() {
	if p.result == nil {
		return
	}
	tv, ok := p.sinfo.Types[p.result]
	if !ok || tv.IsVoid() {
		p.result = nil
		return
	}
	if call, ok := ast.Unparen(p.result).(*ast.CallExpr); ok && (p.prints(call) || p.mayFail(call)) {
		p.result = nil
		return
	}
	if t, ok := tv.Type.(*types.Tuple); ok {
		if t.Len() == 0 {
			p.result = nil
			return
		}
		for i := range t.Len() {
			p.resultType = append(p.resultType, t.At(i).Type())
		}
		return
	}
	p.resultType = []types.Type{tv.Type}
}

// prints tells a call of a print function of fmt.
func (p *Plan) prints(call *ast.CallExpr) bool {
	f := p.callee(call)
	return f != nil && f.Pkg() != nil && f.Pkg().Path() == "fmt" && (strings.HasPrefix(f.Name(), "Print") || strings.HasPrefix(f.Name(), "Fprint"))
}

// mayFail tells a call whose only result is an error, save those that make one.
func (p *Plan) mayFail(call *ast.CallExpr) bool {
	if p.sinfo.Types[call.Fun].IsType() || !types.Identical(p.sinfo.TypeOf(call), errorType) {
		return false
	}
	f := p.callee(call)
	return f == nil || f.FullName() != "fmt.Errorf" && (f.Pkg() == nil || f.Pkg().Path() != "errors")
}

// callee is the function or method that a call names, nil for a call of a value.
func (p *Plan) callee(call *ast.CallExpr) *types.Func {
	switch f := ast.Unparen(call.Fun).(type) {
	case *ast.Ident:
		o, _ := p.sinfo.Uses[f].(*types.Func)
		return o
	case *ast.SelectorExpr:
		o, _ := p.sinfo.Uses[f.Sel].(*types.Func)
		return o
	}
	return nil
}
