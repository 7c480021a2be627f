package cell

import (
	"errors"
	"fmt"
	"go/ast"
	"go/token"
	"go/types"
	"slices"
	"strconv"
	"strings"
)

// Check checks a cell against the scope and plans how it is run. It changes
// nothing that a later cell can see. The error is a [Diagnostics].
func (s *Scope) Check(src *Source) (*Plan, error) {
	p, err := split(s.fset, src)
	if err != nil {
		s.release(p)
		return nil, err
	}
	plan, err := s.check(p)
	if err != nil {
		s.release(p)
		return nil, err
	}
	plan.parsed = p
	return plan, nil
}

// release gives back what the positions of a cell take that nothing of lasts.
func (s *Scope) release(p *parsed) {
	if p != nil {
		for _, f := range p.files {
			s.fset.RemoveFile(f)
		}
	}
}

// check checks a cell, its leading variables as a package's or, if that does
// not compile, as statements.
func (s *Scope) check(p *parsed) (*Plan, error) {
	if len(p.lead) == 0 {
		return s.checkParsed(p)
	}
	// As statements: where a statement declares a leading variable again, which
	// in one scope means the same variable, and as in var x = x + 1, where the
	// right side means an older x.
	q := *p
	q.lead, q.body = nil, &ast.BlockStmt{Lbrace: p.body.Lbrace, Rbrace: p.body.Rbrace}
	for _, d := range p.lead {
		q.body.List = append(q.body.List, &ast.DeclStmt{Decl: d})
	}
	q.body.List = append(q.body.List, p.stmts...)
	q.stmts = q.body.List
	lead := outerNames(&parsed{lead: p.lead})
	for _, n := range outerNames(&parsed{stmts: p.stmts}) {
		if slices.Contains(lead, n) {
			return s.checkParsed(&q)
		}
	}
	plan, err := s.checkParsed(p)
	if err != nil {
		if plan, err := s.checkParsed(&q); err == nil {
			return plan, nil
		}
	}
	return plan, err
}

// A checking is the work on one cell: what is tried again when an older decl
// turns out to be affected or broken.
type checking struct {
	s       *Scope
	p       *parsed
	imports map[string]string // of this cell
	dots    []string
	own     []*Decl  // decls of this cell
	vars    []string // names the statements declare at depth 0

	changed map[string]bool // names whose meaning changes
	redo    []*Decl         // own decls that changed and older ones that depend on a change
	drop    map[string]bool // variables whose type changed
	broken  map[*Decl]Diagnostics
	infos   []*types.Info // of the last attempt, for hints
}

func (s *Scope) checkParsed(p *parsed) (*Plan, error) {
	c := &checking{s: s, p: p, imports: map[string]string{}, broken: map[*Decl]Diagnostics{}, drop: map[string]bool{}}
	if err := c.readImports(); err != nil {
		return nil, err
	}
	c.readDecls()
	c.vars = outerNames(p)
	c.changed = c.firstChanges()
	for {
		c.spread()
		plan, errs, again := c.attempt()
		if again {
			continue
		}
		if len(errs) > 0 {
			return nil, errs.sorted()
		}
		return plan, nil
	}
}

// readImports resolves the cell's import declarations.
func (c *checking) readImports() error {
	var errs Diagnostics
	for _, spec := range c.p.imports {
		path, err := strconv.Unquote(spec.Path.Value)
		if err != nil {
			continue // the parser has said it
		}
		pkg, err := c.s.importer.Import(path)
		if err != nil {
			line, col := c.p.src.place(c.s.fset, spec.Path.Pos())
			errs = append(errs, Diagnostic{Source: c.p.src, Line: line, Column: col, Msg: fmt.Sprintf("could not import %s: %v", path, err)})
			continue
		}
		name := pkg.Name()
		if spec.Name != nil {
			name = spec.Name.Name
		}
		switch name {
		case "_":
		case ".":
			c.dots = append(c.dots, path)
		default:
			c.imports[name] = path
		}
	}
	if len(errs) > 0 {
		return errs
	}
	return nil
}

// readDecls makes a Decl of each declaration of the cell.
func (c *checking) readDecls() {
	for i, n := range c.p.decls {
		d := &Decl{Source: c.p.src, node: n, text: c.p.src.text(c.s.fset, n)}
		switch n := n.(type) {
		case *ast.FuncDecl:
			switch {
			case n.Recv != nil && len(n.Recv.List) > 0:
				d.recv = receiverName(n.Recv.List[0].Type)
				d.names = []string{d.recv + "." + n.Name.Name}
			case n.Name.Name == "init" || n.Name.Name == "_":
				d.names = []string{fmt.Sprintf("%s#%d.%d", n.Name.Name, c.p.src.N, i)}
			default:
				d.names = []string{n.Name.Name}
			}
		case *ast.GenDecl:
			if n.Tok == token.VAR {
				continue
			}
			for _, spec := range n.Specs {
				switch spec := spec.(type) {
				case *ast.TypeSpec:
					d.names = append(d.names, spec.Name.Name)
				case *ast.ValueSpec:
					for _, id := range spec.Names {
						if id.Name != "_" {
							d.names = append(d.names, id.Name)
						}
					}
				}
			}
			if len(d.names) == 0 {
				d.names = []string{fmt.Sprintf("_#%d.%d", c.p.src.N, i)}
			}
		default:
			continue
		}
		c.own = append(c.own, d)
	}
}

// text is the source text of a node.
func (s *Source) text(fset *token.FileSet, n ast.Node) string {
	return s.Text[s.offset(fset, n.Pos()):min(s.offset(fset, n.End()), len(s.Text))]
}

// receiverName is the name of a method's receiver type.
func receiverName(e ast.Expr) string {
	switch e := e.(type) {
	case *ast.StarExpr:
		return receiverName(e.X)
	case *ast.ParenExpr:
		return receiverName(e.X)
	case *ast.IndexExpr:
		return receiverName(e.X)
	case *ast.IndexListExpr:
		return receiverName(e.X)
	case *ast.Ident:
		return e.Name
	}
	return "?"
}

// outerNames lists the names that a cell's variable declarations at depth 0
// introduce.
func outerNames(p *parsed) []string {
	var out []string
	add := func(id *ast.Ident) {
		if id.Name != "_" && !slices.Contains(out, id.Name) {
			out = append(out, id.Name)
		}
	}
	gen := func(d ast.Decl) {
		g, ok := d.(*ast.GenDecl)
		if !ok || g.Tok != token.VAR {
			return
		}
		for _, spec := range g.Specs {
			for _, id := range spec.(*ast.ValueSpec).Names {
				add(id)
			}
		}
	}
	for _, d := range p.lead {
		gen(d)
	}
	for _, st := range p.stmts {
		for {
			l, ok := st.(*ast.LabeledStmt)
			if !ok {
				break
			}
			st = l.Stmt
		}
		switch st := st.(type) {
		case *ast.AssignStmt:
			if st.Tok == token.DEFINE {
				for _, e := range st.Lhs {
					if id, ok := e.(*ast.Ident); ok {
						add(id)
					}
				}
			}
		case *ast.DeclStmt:
			gen(st.Decl)
		}
	}
	return out
}

// firstChanges lists the names that the cell itself gives another meaning.
func (c *checking) firstChanges() map[string]bool {
	out := map[string]bool{}
	for _, d := range c.own {
		old := c.s.decls[d.key()]
		if old == nil || old.broken || old.text != d.text || !slices.Equal(old.names, d.names) || c.importsDiffer(old) {
			for _, n := range d.names {
				out[n] = true
			}
		}
		// A type declared again without a method that its own cell had.
		if old != nil && old.Source != d.Source {
			for _, n := range d.names {
				for _, m := range c.s.methods[n] {
					if m.Source == old.Source && !c.owns(m.key()) {
						out[n] = true
						c.broken[m] = nil
					}
				}
			}
		}
		if d.recv != "" && out[d.key()] {
			out[d.recv] = true // a type and its methods are one unit
		}
	}
	for _, v := range c.vars {
		if e := c.s.entities[v]; e != nil && e.decl != nil || c.s.decls[v] != nil {
			out[v] = true
		}
	}
	for name, path := range c.imports {
		if old := c.s.importPath(name); old != "" && old != path {
			for _, d := range c.s.decls {
				if d.pkgs[name] == old {
					out[d.key()] = true
				}
			}
		}
	}
	return out
}

func (c *checking) owns(key string) bool {
	return slices.ContainsFunc(c.own, func(d *Decl) bool { return d.key() == key })
}

// importsDiffer tells whether an import name that d uses means another path now.
func (c *checking) importsDiffer(d *Decl) bool {
	for name, path := range d.pkgs {
		if p, ok := c.imports[name]; ok && p != path {
			return true
		}
	}
	return false
}

// spread follows the changes to all that depends on them and fills redo and
// drop.
func (c *checking) spread() {
	queue := make([]string, 0, len(c.changed))
	for n := range c.changed {
		queue = append(queue, n)
	}
	in := map[*Decl]bool{}
	mark := func(n string) {
		if !c.changed[n] {
			c.changed[n] = true
			queue = append(queue, n)
		}
	}
	include := func(d *Decl) {
		if _, gone := c.broken[d]; gone || in[d] {
			return
		}
		in[d] = true
		for _, n := range d.names {
			mark(n)
		}
		if d.recv != "" {
			mark(d.recv)
		}
	}
	for len(queue) > 0 {
		n := queue[0]
		queue = queue[1:]
		if d := c.s.decls[n]; d != nil && !c.replaced(d) {
			include(d)
		}
		for _, m := range c.s.methods[n] {
			if !c.replaced(m) {
				include(m)
			}
		}
		for d := range c.s.users[n] {
			if own := c.ownDecl(d.key()); own != nil {
				for _, n := range own.names {
					mark(n)
				}
				if own.recv != "" {
					mark(own.recv)
				}
				continue
			}
			if !c.replaced(d) {
				include(d)
			}
		}
		for v := range c.s.typed[n] {
			if !c.drop[v] {
				c.drop[v] = true
				mark(v)
			}
		}
	}
	c.redo = c.redo[:0]
	for _, d := range c.own {
		if slices.ContainsFunc(d.names, func(n string) bool { return c.changed[n] }) || strings.Contains(d.key(), "#") || d.recv != "" && c.changed[d.recv] {
			c.redo = append(c.redo, d)
		}
	}
	var older []*Decl
	for d := range in {
		older = append(older, d)
	}
	slices.SortFunc(older, func(a, b *Decl) int {
		if a.Source.N != b.Source.N {
			return a.Source.N - b.Source.N
		}
		return int(a.node.Pos() - b.node.Pos())
	})
	c.redo = append(c.redo, older...)
}

func (c *checking) ownDecl(key string) *Decl {
	for _, d := range c.own {
		if slices.Contains(d.names, key) {
			return d
		}
	}
	return nil
}

// replaced tells whether the cell declares a name of an older decl anew.
func (c *checking) replaced(d *Decl) bool {
	for _, n := range d.names {
		if c.ownDecl(n) != nil || slices.Contains(c.vars, n) {
			return true
		}
	}
	return false
}

// attempt checks with the decls and drops as they stand now. again means that
// something more has to be done again.
func (c *checking) attempt() (plan *Plan, errs Diagnostics, again bool) {
	plan = &Plan{
		lead:   c.p.lead,
		Source: c.p.src, scope: c.s, imports: c.imports, dots: c.dots,
		decls: slices.Clone(c.redo), body: c.p.body, stmts: c.p.stmts,
		slots: map[types.Object]*Slot{}, unused: map[token.Pos]bool{},
	}
	for _, d := range c.p.directs {
		if d == "compile" {
			plan.Force = true
		}
	}

	// The declarations.
	declared := map[string]bool{}
	for _, d := range c.redo {
		for _, n := range d.names {
			declared[n] = true
		}
	}
	var files []*ast.File
	for _, d := range c.redo {
		files = append(files, c.file(d.node, d, declared))
	}
	lead := map[string]bool{}
	for _, d := range c.p.lead {
		files = append(files, c.file(d, nil, declared))
		for _, spec := range d.(*ast.GenDecl).Specs {
			for _, id := range spec.(*ast.ValueSpec).Names {
				lead[id.Name], declared[id.Name] = true, true
			}
		}
	}
	var twins []string
	for _, v := range c.vars {
		if !lead[v] {
			twins = append(twins, v)
		}
	}
	if c.funcsMention(twins) {
		for _, d := range c.outerVars() {
			files = append(files, c.file(d, nil, declared))
		}
		for _, v := range twins {
			declared[v] = true
		}
	}
	var derrs, serrs []types.Error
	plan.pkg = types.NewPackage(cellPath, "")
	plan.info = newInfo()
	c.insert(plan.pkg, files, declared, nil)
	if len(files) > 0 {
		c.run(plan.pkg, files, plan.info, &derrs)
	}
	plan.pkg.SetName("")
	plan.order = plan.info.InitOrder

	// The statements.
	body := &ast.FuncDecl{Name: ast.NewIdent("_"), Type: &ast.FuncType{Params: &ast.FieldList{}, Func: c.p.body.Pos()}, Body: c.p.body}
	plan.sinfo = newInfo()
	c.infos = []*types.Info{plan.info, plan.sinfo}
	spkg := types.NewPackage(cellPath, "")
	hide := map[string]bool{}
	for _, n := range twins {
		if !c.isOwnName(n) {
			hide[n] = true // the package-level twin of a statement's variable
		}
	}
	if len(c.p.stmts) > 0 {
		sf := c.file(body, nil, declared)
		c.insert(spkg, []*ast.File{sf}, nil, c.declaredObjects(plan.pkg, hide))
		c.run(spkg, []*ast.File{sf}, plan.sinfo, &serrs)
		spkg.SetName("")
	}

	if c.keyed(files, plan.pkg, plan.info) || c.keyed([]*ast.File{{Name: ast.NewIdent("cell"), Decls: []ast.Decl{body}}}, spkg, plan.sinfo) {
		return nil, nil, true
	}

	// Errors: of older decls, which only leaves them behind; of this cell.
	outer := plan.sinfo.Scopes[body.Type]
	for _, e := range derrs {
		d, where := c.blame(e)
		switch {
		case where == nil || c.ignorable(e, plan, outer):
		case e.Soft && strings.HasPrefix(e.Msg, unusedVar):
			plan.unused[e.Pos] = true
			if where == c.p.src && !c.inStatements(e.Pos) {
				plan.Warnings = append(plan.Warnings, c.diagnose(e, where))
			}
		case where == c.p.src:
			if !c.inStatements(e.Pos) || c.inLead(e.Pos) {
				errs = append(errs, c.diagnose(e, where))
			}
		case d != nil && !e.Soft:
			c.broken[d] = append(c.broken[d], c.diagnose(e, where))
			again = true
		}
	}
	if again && len(errs) == 0 {
		return nil, nil, true
	}
	again = false
	plan.findResult()
	for _, e := range serrs {
		if c.ignorable(e, plan, outer) {
			continue
		}
		if _, where := c.blame(e); where != nil {
			d := c.diagnose(e, where)
			if e.Soft && strings.HasPrefix(e.Msg, unusedVar) {
				plan.unused[e.Pos] = true
				plan.Warnings = append(plan.Warnings, d)
				continue
			}
			errs = append(errs, d)
		}
	}
	if len(errs) == 0 {
		errs = append(errs, c.quantities(plan)...)
	}
	if len(errs) > 0 {
		return nil, errs, false
	}
	plan.finishResult()
	plan.Warnings = append(plan.Warnings, c.useless(plan)...)

	// The variables.
	for _, v := range c.vars {
		obj := c.varObject(plan, outer, v, lead[v])
		if obj == nil {
			continue
		}
		slot := c.s.slotFor(v, obj.Type(), c.p.src.N)
		plan.vars = append(plan.vars, obj)
		plan.slots[obj] = slot
		if old := c.s.entities[v]; old != nil && old.slot != slot && !c.changed[v] {
			c.changed[v] = true
			again = true
		} else if old == nil && !c.changed[v] && len(c.s.users[v]) > 0 {
			c.changed[v] = true // decls that waited for it
			again = true
		}
	}
	if again {
		return nil, nil, true
	}
	c.conclude(plan)
	return plan, nil, false
}

// conclude writes down what the plan changes beside its decls.
func (c *checking) conclude(plan *Plan) {
	for _, d := range c.redo {
		d := *d // the scope's own stays as it is until Commit
		d.broken = false
		d.uses, d.pkgs = dependencies(d.node, plan.info)
		if d.recv != "" {
			d.uses[d.recv] = true
		}
		for i := range plan.decls {
			if plan.decls[i].node == d.node {
				plan.decls[i] = &d
			}
		}
	}
	for d, errs := range c.broken {
		if !d.broken && len(errs) > 0 {
			for _, e := range errs {
				e.Msg = d.names[0] + " no longer compiles: " + e.Msg
				plan.Warnings = append(plan.Warnings, e)
			}
		}
		plan.broken = append(plan.broken, d)
	}
	plan.Warnings = plan.Warnings.sorted()
	for v := range c.drop {
		if slices.Contains(c.vars, v) {
			continue
		}
		if e := c.s.entities[v]; e != nil && e.slot != nil {
			plan.drop = append(plan.drop, v)
			plan.Dropped = append(plan.Dropped, fmt.Sprintf("%s is dropped: its type %s has changed; run In[%d] again to have it back", v, typeString(e.slot.Type), e.slot.Cell))
		}
	}
	slices.Sort(plan.drop)
	slices.Sort(plan.Dropped)
	for _, d := range plan.decls {
		if f, ok := d.node.(*ast.FuncDecl); ok && f.Recv == nil && f.Name.Name == "init" {
			plan.inits = append(plan.inits, d.key())
		}
	}
}

// isOwnName tells whether a decl of this cell has the name.
func (c *checking) isOwnName(n string) bool { return c.ownDecl(n) != nil }

// varObject finds the object of a variable declared at depth 0.
func (c *checking) varObject(plan *Plan, outer *types.Scope, name string, lead bool) *types.Var {
	var o types.Object
	if lead {
		o = plan.pkg.Scope().Lookup(name)
	} else if outer != nil {
		o = outer.Lookup(name)
	}
	v, _ := o.(*types.Var)
	return v
}

// file wraps a declaration in a file of its own, with the imports it needs.
func (c *checking) file(n ast.Decl, d *Decl, declared map[string]bool) *ast.File {
	f := &ast.File{Package: n.Pos(), Name: &ast.Ident{Name: "cell", NamePos: n.Pos()}}
	add := func(name, path string) {
		spec := &ast.ImportSpec{Path: &ast.BasicLit{ValuePos: n.Pos(), Kind: token.STRING, Value: strconv.Quote(path)}}
		if name != "" {
			spec.Name = &ast.Ident{Name: name, NamePos: n.Pos()}
		}
		f.Imports = append(f.Imports, spec)
		f.Decls = append(f.Decls, &ast.GenDecl{Tok: token.IMPORT, TokPos: n.Pos(), Specs: []ast.Spec{spec}})
	}
	if d != nil && d.Source != c.p.src { // an older decl keeps its imports
		for name, path := range d.pkgs {
			if p, ok := c.imports[name]; ok {
				path = p
			}
			add(name, path)
		}
	} else {
		for name := range selected(n) {
			path, own := c.imports[name]
			if !own {
				if declared[name] || c.s.entities[name] != nil {
					continue
				}
				path = c.s.importPath(name)
			}
			if path != "" {
				add(name, path)
			}
		}
		for _, path := range append(slices.Clone(c.s.dots), c.dots...) {
			add(".", path)
		}
	}
	f.Decls = append(f.Decls, n)
	return f
}

// selected lists the names that stand before a dot.
func selected(n ast.Node) map[string]bool {
	out := map[string]bool{}
	ast.Inspect(n, func(n ast.Node) bool {
		if sel, ok := n.(*ast.SelectorExpr); ok {
			if id, ok := sel.X.(*ast.Ident); ok {
				out[id.Name] = true
			}
		}
		return true
	})
	return out
}

// insert puts the session's objects that files mention into a package.
func (c *checking) insert(pkg *types.Package, files []*ast.File, declared map[string]bool, extra map[string]types.Object) {
	seen := map[string]bool{}
	for _, f := range files {
		ast.Inspect(f, func(n ast.Node) bool {
			id, ok := n.(*ast.Ident)
			if !ok || seen[id.Name] || declared[id.Name] {
				return true
			}
			seen[id.Name] = true
			if o := extra[id.Name]; o != nil {
				pkg.Scope().Insert(o)
			} else if e := c.s.entities[id.Name]; e != nil && !c.drop[id.Name] && !c.isBroken(e.decl) {
				pkg.Scope().Insert(e.obj)
			}
			return true
		})
	}
}

func (c *checking) isBroken(d *Decl) bool {
	if d == nil {
		return false
	}
	_, ok := c.broken[d]
	return ok
}

// declaredObjects are the package-level objects of the decls.
func (c *checking) declaredObjects(pkg *types.Package, hide map[string]bool) map[string]types.Object {
	out := map[string]types.Object{}
	for _, n := range pkg.Scope().Names() {
		if !hide[n] {
			out[n] = pkg.Scope().Lookup(n)
		}
	}
	return out
}

// run runs go/types over the files.
func (c *checking) run(pkg *types.Package, files []*ast.File, info *types.Info, errs *[]types.Error) {
	conf := types.Config{
		GoVersion: goVersion,
		Importer:  c.s.importer,
		Error: func(err error) {
			var e types.Error
			if errors.As(err, &e) {
				*errs = append(*errs, e)
			}
		},
	}
	_ = types.NewChecker(&conf, c.s.fset, pkg, info).Files(files) // the errors are in errs
}

// goVersion is the language of cells, the one that go.mod states.
const goVersion = "go1.26"

func newInfo() *types.Info {
	return &types.Info{
		Types: map[ast.Expr]types.TypeAndValue{}, Defs: map[*ast.Ident]types.Object{}, Uses: map[*ast.Ident]types.Object{},
		Selections: map[*ast.SelectorExpr]*types.Selection{}, Instances: map[*ast.Ident]types.Instance{},
		Implicits: map[ast.Node]types.Object{}, Scopes: map[ast.Node]*types.Scope{},
	}
}

// funcsMention tells whether a function of redo mentions one of the names.
func (c *checking) funcsMention(names []string) bool {
	found := false
	for _, d := range c.redo {
		ast.Inspect(d.node, func(n ast.Node) bool {
			if id, ok := n.(*ast.Ident); ok && slices.Contains(names, id.Name) {
				found = true
			}
			return !found
		})
	}
	return found
}

// outerVars restates the variables that statements declare at depth 0 as
// package-level declarations, so that the cell's functions can be checked
// against their types. The first declaration of a name counts.
func (c *checking) outerVars() []ast.Decl {
	var out []ast.Decl
	done := map[string]bool{}
	add := func(names []*ast.Ident, typ ast.Expr, values []ast.Expr) {
		spec := &ast.ValueSpec{Type: typ, Values: values}
		fresh := false
		for _, id := range names {
			if id.Name == "_" || done[id.Name] {
				id = &ast.Ident{Name: "_", NamePos: id.NamePos}
			} else {
				done[id.Name] = true
				fresh = true
			}
			spec.Names = append(spec.Names, id)
		}
		if fresh {
			out = append(out, &ast.GenDecl{Tok: token.VAR, TokPos: names[0].Pos(), Specs: []ast.Spec{spec}})
		}
	}
	for _, st := range c.p.stmts {
		switch st := st.(type) {
		case *ast.AssignStmt:
			if st.Tok != token.DEFINE {
				continue
			}
			var ids []*ast.Ident
			for _, e := range st.Lhs {
				if id, ok := e.(*ast.Ident); ok {
					ids = append(ids, id)
				}
			}
			add(ids, nil, st.Rhs)
		case *ast.DeclStmt:
			if g, ok := st.Decl.(*ast.GenDecl); ok && g.Tok == token.VAR {
				for _, spec := range g.Specs {
					v := spec.(*ast.ValueSpec)
					add(v.Names, v.Type, v.Values)
				}
			}
		}
	}
	return out
}

// inLead tells whether pos lies in one of the leading var declarations.
func (c *checking) inLead(pos token.Pos) bool {
	return slices.ContainsFunc(c.p.lead, func(d ast.Decl) bool { return d.Pos() <= pos && pos < d.End() })
}

// inStatements tells whether pos lies in the parse of the cell's statements.
func (c *checking) inStatements(pos token.Pos) bool {
	return len(c.p.stmts) > 0 && c.s.fset.File(pos) == c.s.fset.File(c.p.body.Pos())
}

// blame finds the cell an error belongs to, and the older decl.
func (c *checking) blame(e types.Error) (*Decl, *Source) {
	for _, d := range c.redo {
		if d.node.Pos() <= e.Pos && e.Pos <= d.node.End() {
			return d, d.Source
		}
	}
	return nil, c.p.src
}

// diagnose turns an error of go/types into a Diagnostic.
func (c *checking) diagnose(e types.Error, src *Source) Diagnostic {
	line, col := src.place(c.s.fset, e.Pos)
	msg := strings.ReplaceAll(e.Msg, "\n\t", ", ")
	msg = strings.ReplaceAll(msg, "\n", " ")
	msg = strings.ReplaceAll(msg, `"cell".`, "")
	return Diagnostic{Source: src, Line: line, Column: col, Msg: msg, Hint: c.hint(e.Pos, msg)}
}

// ignorable tells the errors that are none in a cell.
func (c *checking) ignorable(e types.Error, plan *Plan, outer *types.Scope) bool {
	msg := e.Msg
	switch {
	case strings.Contains(msg, "imported and not used"),
		strings.Contains(msg, "already declared through import of"),
		strings.Contains(msg, "already declared through dot-import"),
		strings.HasPrefix(msg, "other declaration of"),
		strings.HasPrefix(msg, "initialization cycle") && !c.inLead(e.Pos):
		return true
	case strings.HasPrefix(msg, unusedVar):
		// A variable of depth 0 is for later cells.
		name := strings.TrimPrefix(msg, unusedVar+": ")
		if outer != nil {
			if o := outer.Lookup(name); o != nil && o.Pos() == e.Pos {
				return true
			}
		}
		return false
	case strings.HasSuffix(msg, "is not used"):
		return plan.result != nil && plan.result.Pos() <= e.Pos && e.Pos < plan.result.End() && !insideFunc(plan.result, e.Pos)
	}
	return false
}

// unusedVar begins the error about a variable that nothing reads. It is a
// warning in a cell, and none at depth 0, where later cells may read it.
const unusedVar = "declared and not used"

// insideFunc tells whether pos is in the body of a function literal of e.
func insideFunc(e ast.Expr, pos token.Pos) bool {
	found := false
	ast.Inspect(e, func(n ast.Node) bool {
		if f, ok := n.(*ast.FuncLit); ok && f.Body.Pos() <= pos && pos < f.Body.End() {
			found = true
		}
		return !found
	})
	return found
}

// dependencies lists the session names and the imports that a declaration uses.
func dependencies(n ast.Node, info *types.Info) (uses map[string]bool, pkgs map[string]string) {
	uses, pkgs = map[string]bool{}, map[string]string{}
	ast.Inspect(n, func(n ast.Node) bool {
		switch n := n.(type) {
		case *ast.Ident:
			switch o := info.Uses[n].(type) {
			case nil:
			case *types.PkgName:
				pkgs[o.Name()] = o.Imported().Path()
			default:
				if isOuter(o) {
					uses[o.Name()] = true
				}
			}
		case *ast.SelectorExpr:
			if sel := info.Selections[n]; sel != nil {
				for t := range namedIn(sel.Recv()) {
					uses[t] = true
				}
			}
		}
		return true
	})
	return uses, pkgs
}

// isOuter tells whether an object is declared at the outer level of a cell.
func isOuter(o types.Object) bool {
	if !isCell(o.Pkg()) || o.Parent() == nil {
		return false
	}
	if _, ok := o.(*types.PkgName); ok {
		return false
	}
	return o.Parent().Parent() == types.Universe
}

// free lists every name that stands in a node for itself, not behind a dot:
// what a decl that does not compile may be waiting for.
func free(n ast.Node) map[string]bool {
	out := map[string]bool{}
	ast.Inspect(n, func(n ast.Node) bool {
		switch n := n.(type) {
		case *ast.SelectorExpr:
			ast.Inspect(n.X, func(m ast.Node) bool {
				if id, ok := m.(*ast.Ident); ok {
					out[id.Name] = true
				}
				return true
			})
			return false
		case *ast.Ident:
			out[n.Name] = true
		}
		return true
	})
	return out
}
