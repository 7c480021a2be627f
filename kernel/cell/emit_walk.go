package cell

import (
	"go/ast"
	"go/token"
	"go/types"
	"strings"
)

// walk makes the edits of a node and all below it.
func (e *emitter) walk(n ast.Node) {
	if e.skip == nil {
		e.skip, e.comm = map[ast.Node]bool{}, map[ast.Node]bool{}
	}
	var stack []ast.Node
	ast.Inspect(n, func(n ast.Node) bool {
		if n == nil {
			stack = stack[:len(stack)-1]
			return true
		}
		if e.skip[n] {
			return false
		}
		if !e.visit(n, stack) {
			return false
		}
		stack = append(stack, n)
		return true
	})
}

// visit makes the edits of one node; false leaves out what is below it.
func (e *emitter) visit(n ast.Node, stack []ast.Node) bool {
	var parent ast.Node
	if len(stack) > 0 {
		parent = stack[len(stack)-1]
	}
	if e.list != nil {
		return e.visitListed(n, parent)
	}
	switch n := n.(type) {
	case *ast.FuncDecl:
		if n.Recv == nil && n.Name.Name == "init" {
			e.replace(n.Name.Pos(), n.Name.End(), initName(n, e.plan))
			e.skip[n.Name] = true
		}
		if n.Body != nil && calls(n.Body) {
			e.poll(n.Body)
		}
	case *ast.FuncLit:
		if calls(n.Body) {
			e.poll(n.Body)
		}
	case *ast.ForStmt:
		e.poll(n.Body)
	case *ast.RangeStmt:
		if !e.brief(n) {
			e.poll(n.Body)
		}
		if n.Tok == token.DEFINE {
			e.insert(n.Body.Lbrace+1, e.unusedNames(n.Key, n.Value))
		}
		if t := e.info.Types[n.X].Type; t != nil {
			if _, ok := t.Underlying().(*types.Chan); ok {
				e.insert(n.X.Pos(), e.guard("Chan")+"(")
				e.after(n.X, ")")
			}
		}
	case *ast.BranchStmt:
		if n.Tok == token.GOTO {
			e.insert(n.Pos(), e.pollText())
		}
	case *ast.SelectStmt:
		e.selectStmt(n)
	case *ast.SendStmt:
		if !e.comm[n] && inList(n, parent) {
			e.insert(n.Pos(), "select { case ")
			e.after(n, ": ; case <-"+e.guard("Done()")+": "+e.guard("Halt()")+" }")
		}
	case *ast.UnaryExpr:
		if n.Op == token.ARROW && !e.comm[n] {
			e.receive(n)
		}
	case *ast.GoStmt:
		e.goStmt(n)
	case *ast.CallExpr:
		e.printing(n, parent)
		if id, ok := ast.Unparen(n.Fun).(*ast.Ident); ok && e.isBuiltin(id, "recover") {
			if _, deferred := parent.(*ast.DeferStmt); !deferred {
				e.insert(n.Pos(), e.guard("Recover")+"(")
				e.after(n, ")")
			}
		}
	case *ast.StructType:
		e.structType(n)
	case *ast.AssignStmt, *ast.DeclStmt:
		return e.declaring(n, parent)
	case *ast.SelectorExpr:
		return e.selector(n, stack)
	case *ast.Ident:
		e.ident(n, stack)
	}
	return true
}

// declaring rewrites a statement that may declare variables, and says whether
// its parts are still to be looked at.
func (e *emitter) declaring(n, parent ast.Node) bool {
	switch n := n.(type) {
	case *ast.AssignStmt:
		if n.Tok == token.DEFINE && e.definesOuter(n) {
			e.replace(n.TokPos, n.TokPos+2, "=")
		} else if n.Tok == token.DEFINE {
			e.unusedIn(n, parent)
		}
	case *ast.DeclStmt:
		if g, ok := n.Decl.(*ast.GenDecl); ok && g.Tok == token.VAR && e.declaresOuter(g) {
			e.outerVar(g)
			return false
		}
		e.unusedIn(n, parent)
	}
	return true
}

// inList tells whether a statement stands in a list of statements.
func inList(n ast.Node, parent ast.Node) bool {
	switch p := parent.(type) {
	case nil, *ast.BlockStmt, *ast.LabeledStmt:
		return true
	case *ast.CaseClause:
		return true
	case *ast.CommClause:
		return p.Comm != n
	}
	return false
}

func (e *emitter) isBuiltin(id *ast.Ident, name string) bool {
	b, ok := e.info.Uses[id].(*types.Builtin)
	return ok && b.Name() == name
}

// definesOuter tells a := at depth 0.
func (e *emitter) definesOuter(n *ast.AssignStmt) bool {
	for _, x := range n.Lhs {
		if id, ok := x.(*ast.Ident); ok {
			if v, ok := objectOf(id, e.info).(*types.Var); ok && e.plan.slots[v] != nil {
				return true
			}
		}
	}
	// _ := f() does not compile; only blank names besides known ones.
	return false
}

func (e *emitter) declaresOuter(g *ast.GenDecl) bool {
	for _, s := range g.Specs {
		for _, id := range s.(*ast.ValueSpec).Names {
			if v, ok := e.info.Defs[id].(*types.Var); ok && e.plan.slots[v] != nil {
				return true
			}
		}
	}
	return false
}

// outerVar writes a var declaration of depth 0 as assignments.
func (e *emitter) outerVar(g *ast.GenDecl) {
	var parts []string
	for _, s := range g.Specs {
		v := s.(*ast.ValueSpec)
		var left, right []string
		for _, id := range v.Names {
			l, r := "_", ""
			if o, ok := e.info.Defs[id].(*types.Var); ok && e.plan.slots[o] != nil {
				l = e.slot(e.plan.slots[o])
				r = "*new(" + e.typ(o.Type()) + ")"
			} else if v.Type != nil {
				r = "*new(" + e.node(v.Type) + ")"
			}
			left, right = append(left, l), append(right, r)
		}
		if len(v.Values) > 0 {
			right = right[:0]
			for i, x := range v.Values {
				var to types.Type
				if len(v.Values) == len(v.Names) {
					to = e.info.TypeOf(v.Names[i])
				}
				text := e.value(x, to)
				if left[i] == "_" && v.Type != nil && len(v.Values) == len(left) {
					text = "(" + e.node(v.Type) + ")(" + text + ")"
				}
				right = append(right, text)
			}
		}
		parts = append(parts, strings.Join(left, ", ")+" = "+strings.Join(right, ", "))
	}
	e.replace(g.Pos(), g.End(), strings.Join(parts, "; "))
}
