package cell

import (
	"fmt"
	"go/ast"
	"go/format"
	"go/scanner"
	"go/token"
	"go/types"
	"maps"
	"slices"
	"strings"
)

// displayPath is the package that shows values.
const displayPath = "levelsum/display"

// A listing is many cells as one Go program for a reader and for the go
// command: the session's variables are those of a package, each cell's
// statements a function, and what a notebook adds to Go is written out: the
// last value is shown, an error that nobody looks at ends the program.
type listing struct {
	taken   map[string]bool   // identifiers of the cells and of the program
	names   map[any]string    // of objects and slots
	used    map[string]bool   // names that session objects have
	imports map[string]string // path -> name
	own     map[string]string // path -> the package's name, where imports has another
	vars    strings.Builder
	session map[string]bool // names that the cells declare for the session
	check   string          // the function that looks at errors, "" if none is needed
	bring   func(path string) (*types.Package, error)
}

// Listing returns cells as a Go program that does what the cells do, one after
// the other. about says, in a comment, what the program is. The error is that of
// the first cell that does not compile.
func (s *Scope) Listing(about string, cells []*Source) ([]byte, error) {
	l := &listing{
		taken: map[string]bool{"main": true, "init": true}, names: map[any]string{}, used: map[string]bool{},
		imports: map[string]string{}, own: map[string]string{}, session: map[string]bool{}, bring: s.importer.Import,
	}
	for _, src := range cells {
		l.scan(src.Text)
	}
	ahead := s.Clone()
	for _, src := range cells {
		p, err := ahead.Check(src)
		if err != nil {
			return nil, err
		}
		for _, v := range p.vars {
			l.session[v.Name()] = true
		}
		for _, d := range p.decls {
			for _, n := range d.names {
				l.session[n] = true
			}
		}
		ahead.Commit(p, func(string) bool { return true })
	}
	var body, main strings.Builder
	s = s.Clone()
	for _, src := range cells {
		p, err := s.Check(src)
		if err != nil {
			return nil, err
		}
		e := &emitter{plan: p, unit: &Unit{pkg: p.pkg}, alias: map[string]string{}, list: l}
		run := e.listed(&body)
		if e.err != nil {
			return nil, e.err
		}
		if strings.TrimSpace(run) != "" {
			name := l.fresh(fmt.Sprintf("cell%d", src.N))
			fmt.Fprintf(&main, "\t%s()\n", name)
			fmt.Fprintf(&body, "\n// %s\nfunc %s() {\n%s\n}\n", src.Name(), name, run)
		}
		s.Commit(p, func(string) bool { return true })
	}
	var out strings.Builder
	for line := range strings.Lines(about) {
		out.WriteString("// " + line)
	}
	out.WriteString("package main\n\n")
	if l.check != "" {
		l.use("log")
	}
	if len(l.imports) > 0 {
		out.WriteString("import (\n")
		for _, standard := range []bool{true, false} {
			for _, path := range slices.Sorted(maps.Keys(l.imports)) {
				first, _, _ := strings.Cut(path, "/")
				if standard != (first != "levelsum" && !strings.Contains(first, ".")) {
					continue
				}
				if l.own[path] != l.imports[path] {
					out.WriteString(l.imports[path] + " ")
				}
				fmt.Fprintf(&out, "%q\n", path)
			}
			out.WriteString("\n")
		}
		out.WriteString(")\n")
	}
	if l.vars.Len() > 0 {
		out.WriteString("\n// What the cells share.\nvar (\n" + l.vars.String() + ")\n")
	}
	out.WriteString("\nfunc main() {\n" + main.String() + "}\n" + body.String())
	if l.check != "" {
		fmt.Fprintf(&out, "\n// %s ends the program if the last of results is an error.\nfunc %s(results ...any) {\n\tif err, ok := results[len(results)-1].(error); ok && err != nil {\n\t\t%s.Fatal(err)\n\t}\n}\n", l.check, l.check, l.use("log"))
	}
	text, err := format.Source([]byte(Unmark(out.String())))
	if err != nil {
		return nil, fmt.Errorf("the cells cannot be written as one program: %w", err)
	}
	return text, nil
}

// scan takes the identifiers of a cell.
func (l *listing) scan(text string) {
	fset := token.NewFileSet()
	var s scanner.Scanner
	s.Init(fset.AddFile("", fset.Base(), len(text)), []byte(text), func(token.Position, string) {}, 0)
	for {
		_, tok, lit := s.Scan()
		if tok == token.EOF {
			return
		}
		if tok == token.IDENT {
			l.taken[lit] = true
		}
	}
}

// fresh returns a name that nothing has, like the one given.
func (l *listing) fresh(name string) string {
	base := name
	for i := 2; l.taken[name] || l.session[name]; i++ {
		name = fmt.Sprintf("%s_%d", base, i)
	}
	l.taken[name] = true
	return name
}

// name names a session object, by key: the first of a name has it, one that is
// declared again as another thing has a number.
func (l *listing) name(key any, name string) string {
	if n, ok := l.names[key]; ok {
		return n
	}
	n := name
	if l.used[name] || name == "main" || name == "init" {
		n = l.fresh(name)
	}
	l.used[name] = true
	l.names[key] = n
	return n
}

// variable names a session variable, which is declared when it is first named.
func (l *listing) variable(e *emitter, s *Slot) string {
	if n, ok := l.names[s.ID]; ok {
		return n
	}
	n := l.name(s.ID, s.Name)
	fmt.Fprintf(&l.vars, "%s %s\n", n, e.typ(s.Type))
	return n
}

// use returns the name under which the program imports a package.
func (l *listing) use(path string) string {
	if n, ok := l.imports[path]; ok {
		return n
	}
	name := path[strings.LastIndex(path, "/")+1:]
	if p, err := l.bring(path); err == nil {
		name = p.Name()
	}
	l.own[path] = name
	if l.session[name] || slices.Contains(slices.Collect(maps.Values(l.imports)), name) {
		name = l.fresh(name)
	}
	l.imports[path] = name
	return name
}

// checker is the function that looks at errors.
func (l *listing) checker() string {
	if l.check == "" {
		l.check = l.fresh("check")
	}
	return l.check
}

// listed writes the plan's declarations and returns the text of its
// statements, with the comments between them.
func (e *emitter) listed(decls *strings.Builder) string {
	p, fset := e.plan, e.plan.scope.fset
	for _, d := range p.decls {
		e.info, e.src = p.info, d.Source
		fmt.Fprintf(decls, "\n%s\n", e.node(d.node))
	}
	e.src = p.Source
	var head strings.Builder
	e.info = p.info
	e.inOrder(&head)
	for _, d := range p.decls {
		if f, ok := d.node.(*ast.FuncDecl); ok && f.Recv == nil && f.Name.Name == "init" {
			fmt.Fprintf(&head, "%s()\n", e.list.name(d, "init"))
		}
	}
	e.info = p.sinfo
	e.edits = nil
	leading := true
	asStatements := len(p.lead) == 0 // leading variables may have been checked as statements
	for _, c := range chunks(p.Source.Text) {
		leading = leading && c.kind != token.ILLEGAL
		if c.kind != token.ILLEGAL && (c.kind != token.VAR || leading && !asStatements) {
			e.edits = append(e.edits, edit{c.start, c.end, "", false})
		}
	}
	un := p.findUnread()
	// At the end of the cell, and before its last value is shown.
	var atEnd, atResult string
	for _, end := range un.end {
		text := e.list.checker() + "(" + e.slot(p.slotOf(end.v, p.sinfo)) + ")\n"
		if p.result != nil && end.last < p.result.Pos() {
			atResult += text
		} else {
			atEnd += "\n" + text
		}
	}
	for k, st := range p.stmts {
		start, end := e.src.offset(fset, st.Pos()), min(e.src.offset(fset, st.End()), len(e.src.Text))
		last := k == len(p.stmts)-1 && p.result != nil
		outer := e.edits
		var text string
		switch {
		case last:
			text = atResult + e.listedResult()
		case un.drops[k]:
			text = e.list.checker() + "(" + e.node(st) + ")"
		default:
			text = e.node(st)
		}
		for _, v := range un.after[k] {
			text += "\n" + e.list.checker() + "(" + e.slot(p.slotOf(v, p.sinfo)) + ")"
		}
		e.edits = append(outer, edit{start, end, text, false})
	}
	edits := ordered(e.edits)
	e.edits = nil
	out := &head
	at := 0
	for _, ed := range edits {
		out.WriteString(e.src.Text[at:ed.start] + ed.text)
		at = ed.end
	}
	out.WriteString(e.src.Text[at:])
	return out.String() + atEnd
}

// listedResult writes the statement that shows the cell's last value.
func (e *emitter) listedResult() string {
	p := e.plan
	show := e.use(displayPath) + ".Show"
	if text, constant := p.ConstantText(); constant {
		return fmt.Sprintf("%s(%s.Text(%q))", show, e.use(displayPath), text)
	}
	n := len(p.resultType)
	if n < 2 || !types.Identical(p.resultType[n-1], errorType) {
		return show + "(" + e.node(p.result) + ")"
	}
	// The error is looked at, the other values are shown.
	var names []string
	for i := range n {
		names = append(names, fmt.Sprintf("v%d", i+1))
	}
	return fmt.Sprintf("{ %s := %s\n%s(%s)\n%s(%s) }", strings.Join(names, ", "), e.node(p.result),
		e.list.checker(), names[n-1], show, strings.Join(names[:n-1], ", "))
}

// visitListed makes the edits of one node of a listing: names, := of session
// variables, variables that nothing reads.
func (e *emitter) visitListed(n, parent ast.Node) bool {
	switch n := n.(type) {
	case *ast.FuncDecl:
		if n.Recv == nil && n.Name.Name == "init" {
			for _, d := range e.plan.decls {
				if d.node == ast.Decl(n) {
					e.replace(n.Name.Pos(), n.Name.End(), e.list.name(d, "init"))
				}
			}
			e.skip[n.Name] = true
		}
	case *ast.RangeStmt:
		if n.Tok == token.DEFINE {
			if text := e.unusedNames(n.Key, n.Value); text != "" {
				e.insert(n.Body.Lbrace+1, text)
			}
		}
	case *ast.AssignStmt, *ast.DeclStmt:
		return e.declaring(n, parent)
	case *ast.Ident:
		e.identListed(n)
	}
	return true
}

// identListed renames one identifier where the program has another name for
// what it means.
func (e *emitter) identListed(id *ast.Ident) {
	o := e.info.Uses[id]
	if o == nil {
		o = e.info.Defs[id]
	}
	if o == nil || id.Obj == written {
		return
	}
	name := id.Name
	switch o := o.(type) {
	case *types.PkgName:
		name = e.use(o.Imported().Path())
	case *types.Var:
		if l := e.plan.slotOf(o, e.info); l != nil {
			name = e.slot(l)
		} else if isOuter(o) && !o.IsField() {
			name = e.ref(o)
		}
	case *types.Func:
		if o.Signature().Recv() == nil && isOuter(o) {
			name = e.ref(o)
		}
	default:
		if isOuter(o) {
			name = e.ref(o)
		}
	}
	if o.Pkg() != nil && !isCell(o.Pkg()) && o.Parent() == o.Pkg().Scope() && e.info.Uses[id] != nil && !e.qualified(id) {
		name = e.use(o.Pkg().Path()) + "." + o.Name() // by a dot import
	}
	if name != id.Name {
		e.replace(id.Pos(), id.End(), name)
	}
}
