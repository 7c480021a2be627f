package cell

import (
	"errors"
	"fmt"
	"go/ast"
	"go/token"
	"go/types"
	"regexp"
	"slices"
	"strings"
)

// Check checks a cell against the scope and plans how it is run. It changes
// nothing that a later cell can see. The error is a [Diagnostics].
func (s *Scope) Check(src *Source) (*Plan, error) {
	p, err := split(s.fset, src)
	if err != nil {
		s.release(p)
		s.noteFailed(src)
		var ds Diagnostics
		if errors.As(err, &ds) {
			return nil, s.withHabits(src, ds)
		}
		return nil, err
	}
	plan, err := s.check(p)
	if err != nil {
		s.release(p)
		s.noteFailed(src)
		return nil, err
	}
	plan.parsed = p
	return plan, nil
}

var declares = regexp.MustCompile(`(?m)^(?:(?:var|const|type|func)[ \t]+([\pL_][\pL\pN_]*)|([\pL_][\pL\pN_]*(?:[ \t]*,[ \t]*[\pL_][\pL\pN_]*)*)[ \t]*:=)`)

// noteFailed notes the names that a cell with an error would have declared, for
// the hints of later cells.
func (s *Scope) noteFailed(src *Source) {
	if s.clone {
		return
	}
	for _, m := range declares.FindAllStringSubmatch(src.Text, -1) {
		for n := range strings.SplitSeq(m[1]+m[2], ",") {
			if n = strings.TrimSpace(n); n != "_" {
				s.failed[n] = src.Name()
			}
		}
	}
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
	plan.Warnings = append(plan.Warnings, c.doubtful(plan)...)

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
			plan.Dropped = append(plan.Dropped, fmt.Sprintf("%s is dropped: its type %s has changed; run In[%d] again to have it back", v, typeString(e.slot.Type), c.s.madeBy(e.slot)))
		}
	}
	slices.Sort(plan.drop)
	slices.Sort(plan.Dropped)
}

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
