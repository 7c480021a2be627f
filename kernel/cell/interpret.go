package cell

import (
	"fmt"
	"go/ast"
	"go/token"
	"go/types"
	"strings"
)

// A Table is what the interpreter knows beside the session.
type Table interface {
	// Has tells whether a name of a package can be reached.
	Has(path, name string) bool
	// Known tells whether values of a type have one and the same type in
	// interpreted and in compiled code.
	Known(t types.Type) bool
}

// A Step is one statement for the interpreter.
type Step struct {
	Stmt  int     // the statement's number; -1 for a leading variable
	Line  int     // in the cell
	Text  string  // Go, with the session as Ɒs and packages by alias
	Check []*Slot // error variables that the reader must have looked at by now
}

// A Script is a cell for the interpreter.
type Script struct {
	Steps   []Step
	Imports map[string]string // alias -> path
	Slots   []*Slot
	Units   []*Unit // units whose functions or types it names
	End     []Look  // what to look at when all is done
}

// A Look is an error variable that nobody looks at after it is written.
type Look struct {
	Slot *Slot
	Line int // where it was written last
}

// Session is the package under which scripts reach the session.
const Session = "levelsum/session"

// Interpret writes the plan for the interpreter, if every statement of it is
// on the short list of what the interpreter is proved to do right: else it
// says what is not. The list is assignments, declarations of variables and
// calls, made of names, constants, selections, calls of compiled functions,
// arithmetic and comparison of basic types, indexing, and literals of known
// types. Constants are folded here; no function, loop, branch or type of the
// user's is interpreted.
func (p *Plan) Interpret(t Table) (*Script, string) {
	if len(p.decls) > 0 {
		return nil, "a declaration"
	}
	w := &scripter{p: p, t: t, s: &Script{Imports: map[string]string{}}, alias: map[string]string{}}
	w.lead()
	un := p.findUnread()
	for k, st := range p.stmts {
		if un.drops[k] {
			w.refuse("a call whose error is dropped")
		}
		line, _ := p.Source.place(p.scope.fset, st.Pos())
		step := Step{Stmt: k, Line: line, Text: w.stmt(st, k == len(p.stmts)-1)}
		for _, v := range un.after[k] {
			step.Check = append(step.Check, p.slotOf(v, p.sinfo))
		}
		w.s.Steps = append(w.s.Steps, step)
	}
	for _, v := range un.end {
		line, _ := p.Source.place(p.scope.fset, v.last)
		w.s.End = append(w.s.End, Look{p.slotOf(v.v, p.sinfo), line})
	}
	if w.why != "" {
		return nil, w.why
	}
	return w.s, ""
}

// A scripter writes one Script.
type scripter struct {
	p     *Plan
	t     Table
	s     *Script
	alias map[string]string
	info  *types.Info
	why   string
}

func (w *scripter) refuse(what string) string {
	if w.why == "" {
		w.why = what
	}
	return ""
}

// lead writes the leading variables.
func (w *scripter) lead() {
	w.info = w.p.info
	defer func() { w.info = w.p.sinfo }()
	lead := w.p.leadObjects()
	for v := range lead {
		if w.p.slots[v] == nil {
			w.refuse("a blank variable")
		}
	}
	done := map[*types.Var]bool{}
	var inits []*types.Initializer
	for _, in := range w.p.order {
		if lead[in.Lhs[0]] {
			inits = append(inits, in)
			for _, v := range in.Lhs {
				done[v] = true
			}
		}
	}
	for _, v := range w.p.vars {
		if lead[v] && !done[v] {
			w.s.Steps = append(w.s.Steps, Step{Stmt: -1, Line: 1, Text: w.zero(v)})
		}
	}
	for _, in := range inits {
		var left []string
		for _, v := range in.Lhs {
			left = append(left, w.slot(w.p.slots[v]))
			w.known(v.Type())
		}
		line, _ := w.p.Source.place(w.p.scope.fset, in.Rhs.Pos())
		w.s.Steps = append(w.s.Steps, Step{Stmt: -1, Line: line, Text: w.store(left, w.expr(in.Rhs))})
	}
}

// zero resets a variable: the runner does it, without the interpreter.
func (w *scripter) zero(v *types.Var) string {
	w.known(v.Type())
	w.slot(w.p.slots[v])
	return fmt.Sprintf("%ss.Zero(%q)", Inner, w.p.slots[v].ID)
}

func (w *scripter) known(t types.Type) {
	if t == nil || !w.t.Known(t) {
		w.refuse(fmt.Sprintf("a value of type %s", typeString(t)))
	}
}

func (w *scripter) slot(l *Slot) string {
	for _, o := range w.s.Slots {
		if o == l {
			return "(*" + Inner + "s." + l.Var() + ")"
		}
	}
	w.s.Slots = append(w.s.Slots, l)
	return "(*" + Inner + "s." + l.Var() + ")"
}

func (w *scripter) pkg(path string) string {
	if a, ok := w.alias[path]; ok {
		return a
	}
	// One name a package in the whole session, so that an import is made once.
	a := Inner + "p_" + strings.Map(func(r rune) rune {
		if r == '/' || r == '.' || r == '-' {
			return '_'
		}
		return r
	}, path)
	w.alias[path] = a
	w.s.Imports[a] = path
	return a
}

// CellSymbol is the name in the session package of what a unit declares.
func CellSymbol(u *Unit, name string) string {
	return Inner + "D_" + strings.ReplaceAll(u.Path, "/", "_") + "_" + mark(name)
}

func (w *scripter) cellName(o types.Object) string {
	u := w.p.scope.units[o.Pkg()]
	if u == nil {
		return w.refuse("a name without a compiled form")
	}
	w.s.Units = append(w.s.Units, u)
	return Inner + "s." + CellSymbol(u, o.Name())
}

// stmt writes one statement of depth 0.
func (w *scripter) stmt(st ast.Stmt, last bool) string {
	switch st := st.(type) {
	case *ast.EmptyStmt:
		return ""
	case *ast.ExprStmt:
		if last && w.p.result != nil {
			if _, ok := w.p.ConstantText(); ok {
				return ""
			}
			for _, t := range w.p.resultType {
				w.known(t)
			}
			if len(w.p.resultType) != 1 {
				return w.refuse("a last expression of several values")
			}
			return fmt.Sprintf("%ss.Show(%s)", Inner, w.boxed(w.p.result))
		}
		call, ok := ast.Unparen(st.X).(*ast.CallExpr)
		if !ok {
			return w.refuse("an expression as a statement")
		}
		return w.expr(call)
	case *ast.IncDecStmt:
		l := w.place(st.X)
		op := " + 1"
		if st.Tok == token.DEC {
			op = " - 1"
		}
		w.arithmetic(w.info.Types[st.X].Type)
		return w.store([]string{l}, l+op)
	case *ast.AssignStmt:
		return w.assign(st)
	case *ast.DeclStmt:
		g := st.Decl.(*ast.GenDecl)
		if g.Tok != token.VAR {
			return w.refuse("a declaration")
		}
		var parts []string
		for _, spec := range g.Specs {
			v := spec.(*ast.ValueSpec)
			var left []string
			for _, id := range v.Names {
				o, _ := w.info.Defs[id].(*types.Var)
				l := w.p.slots[o]
				if l == nil {
					return w.refuse("a blank variable")
				}
				w.known(o.Type())
				left = append(left, w.slot(l))
				if len(v.Values) == 0 {
					parts = append(parts, w.zero(o))
				}
			}
			if len(v.Values) > 0 {
				if len(v.Values) != 1 {
					return w.refuse("several values assigned at once")
				}
				parts = append(parts, w.store(left, w.expr(v.Values[0])))
			}
		}
		return strings.Join(parts, "; ")
	}
	return w.refuse("a statement beyond assignments and calls")
}

var assignOps = map[token.Token]token.Token{
	token.ADD_ASSIGN: token.ADD, token.SUB_ASSIGN: token.SUB, token.MUL_ASSIGN: token.MUL, token.QUO_ASSIGN: token.QUO,
}

func (w *scripter) assign(st *ast.AssignStmt) string {
	if len(st.Rhs) != 1 {
		return w.refuse("several values assigned at once")
	}
	if len(st.Lhs) > 1 {
		if _, ok := ast.Unparen(st.Rhs[0]).(*ast.CallExpr); !ok {
			return w.refuse("a form with a second value")
		}
	}
	var left []string
	for _, e := range st.Lhs {
		if id, ok := e.(*ast.Ident); ok && id.Name == "_" {
			left = append(left, "_")
			continue
		}
		if st.Tok == token.DEFINE {
			if v, ok := objectOf(e.(*ast.Ident), w.info).(*types.Var); ok {
				w.known(v.Type())
			}
		}
		left = append(left, w.place(e))
	}
	switch st.Tok {
	case token.ASSIGN, token.DEFINE:
		if len(left) == 1 && left[0] == "_" {
			return "_ = " + w.boxed(st.Rhs[0])
		}
		return w.store(left, w.expr(st.Rhs[0]))
	}
	op, ok := assignOps[st.Tok]
	if !ok {
		return w.refuse("the operator " + st.Tok.String())
	}
	if _, ok := ast.Unparen(st.Lhs[0]).(*ast.Ident); !ok {
		return w.refuse("an operation on a part of a variable")
	}
	w.arithmetic(w.info.Types[st.Lhs[0]].Type)
	return w.store(left, left[0]+" "+op.String()+" ("+w.expr(st.Rhs[0])+")")
}

// store writes an assignment by way of new variables: the interpreter loses a
// literal that is assigned through a pointer at once.
func (w *scripter) store(left []string, right string) string {
	tmp := make([]string, len(left))
	var puts strings.Builder
	for i, l := range left {
		tmp[i] = "_"
		if l != "_" {
			tmp[i] = fmt.Sprintf("%st%d", Inner, i)
			fmt.Fprintf(&puts, "; %s = %s", l, tmp[i])
		}
	}
	return strings.Join(tmp, ", ") + " := " + right + puts.String()
}

// place writes what can stand on the left of an assignment.
func (w *scripter) place(e ast.Expr) string {
	switch e := ast.Unparen(e).(type) {
	case *ast.Ident:
		if v, ok := objectOf(e, w.info).(*types.Var); ok {
			if l := w.p.slotOf(v, w.info); l != nil {
				w.known(v.Type())
				return w.slot(l)
			}
		}
		return w.refuse("an assignment to " + e.Name)
	case *ast.SelectorExpr:
		if sel := w.info.Selections[e]; sel != nil && sel.Kind() == types.FieldVal {
			if id, ok := ast.Unparen(e.X).(*ast.Ident); ok {
				return w.field(e, sel, w.place(id))
			}
		}
		return w.refuse("an assignment to a part of a part")
	case *ast.IndexExpr:
		if id, ok := ast.Unparen(e.X).(*ast.Ident); ok {
			switch w.info.Types[e.X].Type.Underlying().(type) {
			case *types.Slice, *types.Map:
				return w.place(id) + "[" + w.expr(e.Index) + "]"
			}
		}
	}
	return w.refuse("an assignment to this kind of place")
}

func (w *scripter) field(e *ast.SelectorExpr, sel *types.Selection, x string) string {
	if isCell(sel.Obj().Pkg()) && !sel.Obj().Exported() {
		return x + "." + mark(sel.Obj().Name())
	}
	return x + "." + e.Sel.Name
}
