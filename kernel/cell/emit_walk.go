package cell

import (
	"fmt"
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
		e.poll(n.Body)
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
			e.receive(n, parent)
		}
	case *ast.GoStmt:
		e.goStmt(n)
	case *ast.CallExpr:
		if id, ok := ast.Unparen(n.Fun).(*ast.Ident); ok && e.isBuiltin(id, "recover") {
			if _, deferred := parent.(*ast.DeferStmt); !deferred {
				e.insert(n.Pos(), e.guard("Recover")+"(")
				e.after(n, ")")
			}
		}
	case *ast.StructType:
		e.structType(n)
	case *ast.AssignStmt:
		if n.Tok == token.DEFINE && e.definesOuter(n) {
			e.replace(n.TokPos, n.TokPos+2, "=")
		} else if n.Tok == token.DEFINE {
			e.unusedIn(n, parent, stack)
		}
	case *ast.DeclStmt:
		if g, ok := n.Decl.(*ast.GenDecl); ok && g.Tok == token.VAR && e.declaresOuter(g) {
			e.outerVar(g)
			return false
		}
		e.unusedIn(n, parent, stack)
	case *ast.SelectorExpr:
		return e.selector(n)
	case *ast.Ident:
		e.ident(n)
	}
	return true
}

// poll lets a loop or function notice that it is to stop.
func (e *emitter) poll(b *ast.BlockStmt) { e.insert(b.Lbrace+1, e.pollText()) }

func (e *emitter) pollText() string {
	return fmt.Sprintf(" if %s != 0 { %s() }; ", e.guard("Stop"), e.guard("Halt"))
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
func (e *emitter) receive(n *ast.UnaryExpr, parent ast.Node) {
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
	_ = parent
	e.replace(n.OpPos, n.OpPos+2, e.guard(name)+"(")
	e.after(n, ")")
}

func (e *emitter) isBuiltin(id *ast.Ident, name string) bool {
	b, ok := e.info.Uses[id].(*types.Builtin)
	return ok && b.Name() == name
}

// goStmt guards a goroutine: a panic in it must not end the process.
func (e *emitter) goStmt(n *ast.GoStmt) {
	guard := fmt.Sprintf(" defer %s(%s()); ", e.guard("Left"), e.guard("Enter"))
	if lit, ok := ast.Unparen(n.Call.Fun).(*ast.FuncLit); ok {
		e.insert(lit.Body.Lbrace+1, guard)
		return
	}
	fun := e.info.Types[n.Call.Fun]
	sig, ok := fun.Type.Underlying().(*types.Signature)
	if fun.IsBuiltin() || fun.IsType() || !ok {
		e.insert(n.Call.Pos(), "func() {"+guard)
		e.after(n.Call, "}()")
		return
	}
	// go func(f F, a0 T0, ...) { guard; f(a0, ...) }(fun, args...)
	var params, args strings.Builder
	fmt.Fprintf(&params, "%sf %s", Inner, e.typ(sig))
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
	e.insert(n.Call.Pos(), fmt.Sprintf("func(%s) {%s%sf(%s) }(", params.String(), guard, Inner, args.String()))
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
				text := e.node(x)
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

// selector handles a selected name: of a package, a field or a method.
func (e *emitter) selector(n *ast.SelectorExpr) bool {
	if f, ok := e.info.Uses[n.Sel].(*types.Func); ok && f.Pkg() != nil && f.Signature().Recv() == nil {
		switch f.Pkg().Path() + "." + f.Name() {
		case "time.Sleep":
			e.replace(n.Pos(), n.End(), e.guard("Sleep"))
			return false
		case "os.Exit":
			e.replace(n.Pos(), n.End(), e.guard("Exit"))
			return false
		case "log.Fatal", "log.Fatalf", "log.Fatalln":
			e.replace(n.Pos(), n.End(), e.guard(f.Name()))
			return false
		}
	}
	return true
}

// ident renames one identifier.
func (e *emitter) ident(id *ast.Ident) {
	if id.Obj == written {
		if o := e.info.Uses[id]; o != nil {
			e.insert(id.Pos(), mark(o.Name())+": ")
		}
		return
	}
	o := e.info.Uses[id]
	def := e.info.Defs[id]
	if o == nil {
		o = def
	}
	if o == nil {
		return
	}
	if f, ok := def.(*types.Var); ok && f.IsField() && f.Embedded() {
		// The type's name is the field's: a predeclared type gets a name that
		// crosses packages.
		if t, ok := o.(*types.TypeName); ok && t.Pkg() == nil {
			e.replace(id.Pos(), id.End(), e.guard(mark(id.Name)))
			return
		}
	}
	switch o := o.(type) {
	case *types.PkgName:
		e.replace(id.Pos(), id.End(), e.use(o.Imported().Path()))
		return
	case *types.Var:
		if l := e.plan.slotOf(o, e.info); l != nil {
			e.replace(id.Pos(), id.End(), e.slot(l))
			return
		}
		if o.IsField() && isCell(o.Pkg()) && !o.Exported() {
			e.replace(id.Pos(), id.End(), mark(o.Name()))
			return
		}
	case *types.Func:
		if isCell(o.Pkg()) && o.Signature().Recv() != nil {
			if !o.Exported() {
				e.replace(id.Pos(), id.End(), mark(o.Name()))
			}
			return
		}
	case *types.TypeName:
		if _, param := o.Type().(*types.TypeParam); param {
			return
		}
		if isCell(o.Pkg()) && !isOuter(o) {
			e.replace(id.Pos(), id.End(), mark(o.Name()))
			return
		}
	}
	if o.Pkg() == nil {
		return
	}
	if isOuter(o) {
		e.replace(id.Pos(), id.End(), e.ref(o))
		return
	}
	// A name of another package that a dot import brings in.
	if !isCell(o.Pkg()) && o.Parent() == o.Pkg().Scope() && e.info.Uses[id] != nil && !e.qualified(id) {
		e.replace(id.Pos(), id.End(), e.use(o.Pkg().Path())+"."+o.Name())
	}
}

// qualified tells whether an identifier stands behind a dot.
func (e *emitter) qualified(id *ast.Ident) bool {
	fset := e.plan.scope.fset
	off := e.src.offset(fset, id.Pos())
	before := strings.TrimRight(e.src.Text[:off], " \t\r\n")
	return strings.HasSuffix(before, ".")
}

// structType marks lower-case fields as the ones that encoders leave out.
func (e *emitter) structType(n *ast.StructType) {
	const tag = `json:"-" xml:"-"`
	for _, f := range n.Fields.List {
		var lower, upper int
		for _, id := range f.Names {
			if token.IsExported(id.Name) || id.Name == "_" {
				upper++
			} else {
				lower++
			}
		}
		if len(f.Names) == 0 {
			id := embeddedName(f.Type)
			if id == nil || token.IsExported(id.Name) || isStruct(e.info.Types[f.Type].Type) {
				continue
			}
			lower++
		}
		if lower == 0 {
			continue
		}
		if upper > 0 { // A, b int: each by itself
			var parts []string
			for _, id := range f.Names {
				part := mark(id.Name) + " " + e.node(f.Type)
				if f.Tag != nil || !token.IsExported(id.Name) {
					part += " " + fieldTag(f.Tag, tag, !token.IsExported(id.Name))
				}
				parts = append(parts, part)
			}
			e.replace(f.Pos(), f.End(), strings.Join(parts, "; "))
			e.skip[f] = true
			continue
		}
		if f.Tag != nil {
			e.replace(f.Tag.Pos(), f.Tag.End(), fieldTag(f.Tag, tag, true))
		} else {
			e.after(f.Type, " `"+tag+"`")
		}
	}
}

func fieldTag(lit *ast.BasicLit, tag string, lower bool) string {
	s := ""
	if lit != nil {
		s = constantString(lit)
	}
	if lower {
		s = strings.TrimSpace(tag + " " + s)
	}
	return fmt.Sprintf("%q", s)
}

func embeddedName(t ast.Expr) *ast.Ident {
	switch t := t.(type) {
	case *ast.StarExpr:
		return embeddedName(t.X)
	case *ast.Ident:
		return t
	case *ast.SelectorExpr:
		return t.Sel
	case *ast.IndexExpr:
		return embeddedName(t.X)
	case *ast.IndexListExpr:
		return embeddedName(t.X)
	}
	return nil
}

func isStruct(t types.Type) bool {
	if t == nil {
		return false
	}
	if p, ok := t.Underlying().(*types.Pointer); ok {
		t = p.Elem()
	}
	_, ok := t.Underlying().(*types.Struct)
	return ok
}

// initName is the name under which a func init is called.
func initName(f *ast.FuncDecl, p *Plan) string {
	for i, d := range p.decls {
		if d.node == ast.Decl(f) {
			return fmt.Sprintf("%sinit%d", Inner, i)
		}
	}
	return Inner + "init"
}

// unusedIn makes variables count as used that the checker has only warned of:
// the Go compiler refuses them.
func (e *emitter) unusedIn(n ast.Node, parent ast.Node, stack []ast.Node) {
	var names string
	switch n := n.(type) {
	case *ast.AssignStmt:
		names = e.unusedNames(n.Lhs...)
	case *ast.DeclStmt:
		if g, ok := n.Decl.(*ast.GenDecl); ok && g.Tok == token.VAR {
			for _, s := range g.Specs {
				for _, id := range s.(*ast.ValueSpec).Names {
					names += e.unusedNames(id)
				}
			}
		}
	}
	if names == "" {
		return
	}
	switch p := parent.(type) {
	case *ast.IfStmt:
		e.insert(p.Body.Lbrace+1, names)
	case *ast.ForStmt:
		e.insert(p.Body.Lbrace+1, names)
	case *ast.SwitchStmt:
		e.after(n, "; "+strings.TrimSuffix(names, "; "))
	case *ast.TypeSwitchStmt:
		if a, ok := n.(*ast.AssignStmt); ok && p.Assign == ast.Stmt(a) {
			e.replace(a.Pos(), a.Rhs[0].Pos(), "")
			for _, x := range a.Lhs {
				e.skip[x] = true
			}
		}
	case *ast.CommClause:
		if p.Comm == n {
			e.insert(p.Colon+1, names)
		} else {
			e.after(n, "; "+names)
		}
	default:
		e.after(n, "; "+names)
	}
}

// unusedNames writes a use of each variable among xs that nothing reads.
func (e *emitter) unusedNames(xs ...ast.Expr) string {
	var out string
	for _, x := range xs {
		if id, ok := x.(*ast.Ident); ok && e.plan.unused[id.Pos()] {
			out += " _ = " + id.Name + "; "
		}
	}
	return out
}
