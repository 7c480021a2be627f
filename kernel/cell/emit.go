package cell

import (
	"crypto/sha256"
	"encoding/hex"
	"fmt"
	"go/ast"
	"go/token"
	"go/types"
	"slices"
	"strings"
)

// GuardPath is the package that compiled cells import for what a notebook adds
// to Go: stopping, goroutines that cannot end the process, results.
const GuardPath = "levelsum/kernel/runner/guard"

// Var is the name of the pointer variable through which compiled code reaches
// a slot.
func (l *Slot) Var() string { return Inner + "V_" + l.ID }

// Compile writes the plan as a Go package: its decls and, with statements, a
// function Ɒrun that runs them. Nil if there is nothing to compile.
func (p *Plan) Compile(statements bool) (*Unit, error) {
	if len(p.decls) == 0 && (!statements || len(p.stmts) == 0 && len(p.lead) == 0) {
		return nil, nil
	}
	e := &emitter{plan: p, unit: &Unit{pkg: p.pkg, Run: statements, Decls: p.decls}, alias: map[string]string{}}
	var body strings.Builder
	for _, d := range p.decls {
		e.info, e.src = p.info, d.Source
		text := e.node(d.node)
		if e.err != nil {
			return nil, e.err
		}
		line, col := d.Source.place(p.scope.fset, d.node.Pos())
		fmt.Fprintf(&body, "/*line %s:%d:%d*/%s\n", d.Source.Tag(), line, col, text)
	}
	if statements {
		e.info, e.src = p.sinfo, p.Source
		run := e.run()
		if e.err != nil {
			return nil, e.err
		}
		body.WriteString(run)
	}
	// The types of slots may bring imports in, so they are written first.
	var slots strings.Builder
	for _, l := range e.unit.Slots {
		fmt.Fprintf(&slots, "var %s *%s\n", l.Var(), e.typ(l.Type))
	}
	fmt.Fprintf(&slots, "var _ = %s\n", e.guard("Stop")) // always used
	if e.err != nil {
		return nil, e.err
	}
	head := "package cell\n\n"
	for _, path := range e.unit.Paths {
		head += fmt.Sprintf("import %s %q\n", e.alias[path], path)
	}
	for _, u := range e.unit.Uses {
		head += fmt.Sprintf("import %s %q\n", e.alias[u.Path], u.Path)
	}
	e.unit.Text = head + slots.String() + body.String()
	sum := sha256.Sum256([]byte(e.unit.Text))
	e.unit.Path = "cell/k" + hex.EncodeToString(sum[:8])
	return e.unit, nil
}

// Adopt says that the plan's decls are compiled in u. It is called once the
// unit is loaded, before Commit.
func (s *Scope) Adopt(p *Plan, u *Unit) {
	for _, d := range p.decls {
		d.unit = u
	}
	s.units[p.pkg] = u
}

// UnitOf is the unit in which a type that a cell declares is compiled, or nil.
func (s *Scope) UnitOf(o *types.TypeName) *Unit { return s.units[o.Pkg()] }

// Symbol is a name that the plugin offers to interpreted code.
type Symbol struct {
	Name    string // the user's name
	Emitted string // its name in the unit
	Type    bool
}

// Symbols lists the unit's functions and types, generic ones left out.
func (u *Unit) Symbols() []Symbol {
	var out []Symbol
	for _, d := range u.Decls {
		for _, n := range d.names {
			switch o := u.pkg.Scope().Lookup(n).(type) {
			case *types.Func:
				if d.recv == "" && o.Signature().TypeParams() == nil {
					out = append(out, Symbol{Name: n, Emitted: mark(n)})
				}
			case *types.TypeName:
				if _, alias := o.Type().(*types.Alias); alias || generic(o.Type()) {
					continue
				}
				if i, ok := o.Type().Underlying().(*types.Interface); ok && !i.IsMethodSet() {
					continue
				}
				out = append(out, Symbol{Name: n, Emitted: mark(n), Type: true})
			}
		}
	}
	return out
}

func generic(t types.Type) bool {
	n, ok := t.(*types.Named)
	return ok && n.TypeParams() != nil
}

// mark is the emitted form of a name of the user's.
func mark(name string) string {
	if name == "_" || token.IsExported(name) {
		return name
	}
	return Marker + name
}

// An emitter writes Go: the source text with replacements at the places where
// a cell means something else than the text says in a package.
type emitter struct {
	plan  *Plan
	unit  *Unit
	info  *types.Info
	src   *Source
	alias map[string]string // import path -> name
	edits []edit
	skip  map[ast.Node]bool // nodes that an edit has replaced whole
	comm  map[ast.Node]bool // sends and receives that a select waits for
	list  *listing          // set if the text is for a reader and the go command
	err   error
}

type edit struct {
	start, end int
	text       string
	closes     bool // stands behind a node: before what follows, inner nodes first
}

func (e *emitter) replace(start, end token.Pos, text string) {
	fset := e.plan.scope.fset
	e.edits = append(e.edits, edit{e.src.offset(fset, start), e.src.offset(fset, end), text, false})
}

func (e *emitter) insert(at token.Pos, text string) { e.replace(at, at, text) }

// after inserts text behind a node.
func (e *emitter) after(n ast.Node, text string) {
	at := e.src.offset(e.plan.scope.fset, n.End())
	e.edits = append(e.edits, edit{at, at, text, true})
}

// ordered sorts edits by place. Nodes are visited outside in, so what closes
// an inner node was added later and comes first.
func ordered(edits []edit) []edit {
	var open, closing []edit
	for _, e := range edits {
		if e.closes {
			closing = append(closing, e)
		} else {
			open = append(open, e)
		}
	}
	slices.Reverse(closing)
	all := append(closing, open...)
	slices.SortStableFunc(all, func(a, b edit) int { return a.start - b.start })
	return all
}

// node returns the text of a node with all edits in it.
func (e *emitter) node(n ast.Node) string {
	outer := e.edits
	e.edits = nil
	e.walk(n)
	edits := e.edits
	e.edits = outer
	fset := e.plan.scope.fset
	start, end := e.src.offset(fset, n.Pos()), min(e.src.offset(fset, n.End()), len(e.src.Text))
	edits = ordered(edits)
	var out strings.Builder
	at := start
	for _, ed := range edits {
		if ed.start < at { // inside what is replaced whole
			continue
		}
		out.WriteString(e.src.Text[at:ed.start])
		out.WriteString(ed.text)
		at = ed.end
	}
	out.WriteString(e.src.Text[at:end])
	return out.String()
}

// use returns the name under which the unit imports a package.
func (e *emitter) use(path string) string {
	if e.list != nil {
		return e.list.use(path)
	}
	if a, ok := e.alias[path]; ok {
		return a
	}
	a := fmt.Sprintf("%sp%d", Inner, len(e.alias)+1)
	if path == GuardPath {
		a = Inner + "g"
	}
	e.alias[path] = a
	e.unit.Paths = append(e.unit.Paths, path)
	return a
}

// guard names something of the guard package.
func (e *emitter) guard(name string) string { return e.use(GuardPath) + "." + name }

// ref is how the unit names an object declared by a cell.
func (e *emitter) ref(o types.Object) string {
	if e.list != nil {
		return e.list.name(o, o.Name())
	}
	name := mark(o.Name())
	if o.Pkg() == e.plan.pkg {
		return name
	}
	u := e.plan.scope.units[o.Pkg()]
	if u == nil {
		e.fail(o.Pos(), fmt.Sprintf("%s has no compiled form", o.Name()))
		return name
	}
	if _, ok := e.alias[u.Path]; !ok {
		e.alias[u.Path] = fmt.Sprintf("%su%d", Inner, len(e.alias)+1)
		e.unit.Uses = append(e.unit.Uses, u)
	}
	return e.alias[u.Path] + "." + name
}

func (e *emitter) fail(pos token.Pos, msg string) {
	if e.err == nil {
		line, col := 1, 1
		if pos.IsValid() && e.plan.scope.fset.File(pos) != nil {
			line, col = e.src.place(e.plan.scope.fset, pos)
		}
		e.err = Diagnostics{{Source: e.src, Line: line, Column: col, Msg: msg}}
	}
}

// slot returns the expression for a session variable.
func (e *emitter) slot(l *Slot) string {
	if e.list != nil {
		return e.list.variable(e, l)
	}
	if !slices.Contains(e.unit.Slots, l) {
		e.unit.Slots = append(e.unit.Slots, l)
	}
	return "(*" + l.Var() + ")"
}

// slotOf returns the slot of a session variable, nil for other variables.
func (p *Plan) slotOf(v *types.Var, info *types.Info) *Slot {
	if l := p.slots[v]; l != nil {
		return l
	}
	if v.IsField() || !isOuter(v) {
		return nil
	}
	if e := p.scope.entities[v.Name()]; e != nil && e.obj == types.Object(v) {
		return e.slot
	}
	if v.Pkg() == p.pkg { // the package-level twin of a statement's variable
		for o, l := range p.slots {
			if o.Name() == v.Name() {
				return l
			}
		}
	}
	return nil
}

// run writes the function that runs the statements.
func (e *emitter) run() string {
	p := e.plan
	var out strings.Builder
	at := e.guard("At")
	fmt.Fprintf(&out, "\nfunc %srun() {\n", Inner)
	fmt.Fprintf(&out, "%s = -1\n", at)
	e.info = p.info
	e.inOrder(&out)
	e.info = p.sinfo
	for _, d := range p.decls {
		if f, ok := d.node.(*ast.FuncDecl); ok && f.Recv == nil && f.Name.Name == "init" {
			fmt.Fprintf(&out, "%s()\n", initName(f, p))
		}
	}
	un := p.findUnread()
	for k, st := range p.stmts {
		line, col := e.src.place(p.scope.fset, st.Pos())
		fmt.Fprintf(&out, "%s%s = %d; /*line %s:%d:%d*/", e.pollText(), at, k, e.src.Tag(), line, col)
		switch {
		case k == len(p.stmts)-1 && p.result != nil:
			out.WriteString(e.show(p.result))
		case un.drops[k]:
			fmt.Fprintf(&out, "%s(%s)", e.guard("Dropped"), e.node(st))
		default:
			out.WriteString(e.node(st))
		}
		out.WriteString("\n")
		for _, v := range un.after[k] {
			fmt.Fprintf(&out, "%s(%q, %s)\n", e.guard("Unread"), v.Name(), e.slot(p.slotOf(v, p.sinfo)))
		}
	}
	for _, end := range un.end {
		line, col := e.src.place(p.scope.fset, end.last)
		fmt.Fprintf(&out, "/*line %s:%d:%d*/%s(%q, %s)\n", e.src.Tag(), line, col, e.guard("Unread"), end.v.Name(), e.slot(p.slotOf(end.v, p.sinfo)))
	}
	fmt.Fprintf(&out, "%s%s = %d\n}\n", e.pollText(), at, len(p.stmts))
	return out.String()
}

// show writes the statement that hands the last value over. Constants are
// shown by the checker's own value.
func (e *emitter) show(x ast.Expr) string {
	if _, constant := e.plan.ConstantText(); constant {
		return ""
	}
	return e.guard("Show") + "(" + e.node(x) + ")"
}

// inOrder writes the leading variables in Go's order of initialisation.
func (e *emitter) inOrder(out *strings.Builder) {
	p := e.plan
	lead := p.leadObjects()
	for _, in := range p.order {
		for _, v := range in.Lhs {
			delete(lead, v)
		}
	}
	for _, v := range p.vars {
		if lead[v] {
			fmt.Fprintf(out, "%s = *new(%s)\n", e.slot(p.slots[v]), e.typ(v.Type()))
		}
	}
	lead = p.leadObjects()
	for _, in := range p.order {
		left := make([]string, len(in.Lhs))
		for i, v := range in.Lhs {
			left[i] = "_"
			if l := p.slots[v]; l != nil {
				left[i] = e.slot(l)
			}
		}
		if !lead[in.Lhs[0]] { // the twin of a statement's variable
			continue
		}
		line, col := e.src.place(p.scope.fset, in.Rhs.Pos())
		right := e.value(in.Rhs, in.Lhs[0].Type())
		fmt.Fprintf(out, "%s = /*line %s:%d:%d*/%s\n", strings.Join(left, ", "), e.src.Tag(), line, col, right)
	}
}

// leadObjects are the objects of the leading variables, blank ones included.
func (p *Plan) leadObjects() map[*types.Var]bool {
	out := map[*types.Var]bool{}
	for _, d := range p.lead {
		for _, spec := range d.(*ast.GenDecl).Specs {
			for _, id := range spec.(*ast.ValueSpec).Names {
				if v, ok := p.info.Defs[id].(*types.Var); ok {
					out[v] = true
				}
			}
		}
	}
	return out
}
