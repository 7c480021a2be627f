package cell

import (
	"fmt"
	"go/ast"
	"go/types"
	"strings"
)

// selector handles a selected name: of a package, a field or a method.
func (e *emitter) selector(n *ast.SelectorExpr, stack []ast.Node) bool {
	if e.isStdin(n) && e.readsStdin(n, stack) {
		e.replace(n.Pos(), n.End(), e.guard("Stdin"))
		return false
	}
	if with := replaced(e.info.Uses[n.Sel]); with != "" {
		e.replace(n.Pos(), n.End(), e.guard(with))
		return false
	}
	return true
}

// replaced is what stands in package guard for a library's function that would
// wait without end, end the process, or read a standard input that is none; ""
// for others.
func replaced(o types.Object) string {
	f, ok := o.(*types.Func)
	if !ok || f.Pkg() == nil || f.Signature().Recv() != nil {
		return ""
	}
	switch f.Pkg().Path() + "." + f.Name() {
	case "time.Sleep", "os.Exit", "log.Fatal", "log.Fatalf", "log.Fatalln", "fmt.Scan", "fmt.Scanf", "fmt.Scanln":
		return f.Name()
	}
	return ""
}

// ident renames one identifier.
func (e *emitter) ident(id *ast.Ident, stack []ast.Node) {
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
		if with := replaced(o); with != "" {
			e.replace(id.Pos(), id.End(), e.guard(with))
			return
		}
		if isStdin(o) && e.readsStdin(id, stack) {
			e.replace(id.Pos(), id.End(), e.guard("Stdin"))
			return
		}
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

// initName is the name under which a func init is called.
func initName(f *ast.FuncDecl, p *Plan) string {
	for i, d := range p.decls {
		if d.node == ast.Decl(f) {
			return fmt.Sprintf("%sinit%d", Inner, i)
		}
	}
	return Inner + "init"
}
