package cell

import (
	"cmp"
	"fmt"
	"go/ast"
	"go/token"
	"go/types"
	"maps"
	"regexp"
	"slices"
	"strings"
)

// atMost is how many spellings a hint offers.
const atMost = 2

var (
	noMember    = regexp.MustCompile(`undefined \(type .+ has no field or method \S+\)$`)
	notExported = regexp.MustCompile(`^name (\S+) not exported by package (\S+)$`)
)

// safeHint is hint, or "" should that fall over a cell: what is wrong is said all
// the same.
func (c *checking) safeHint(pos token.Pos, msg string) (h string) {
	if !c.s.bareHints {
		defer func() {
			if recover() != nil {
				h = ""
			}
		}()
	}
	return c.hint(pos, msg)
}

// hint answers an error at pos by the spelling that works, "" if it knows none.
func (c *checking) hint(pos token.Pos, msg string) string {
	if h := c.quantityHint(pos, msg); h != "" {
		return h
	}
	if noMember.MatchString(msg) {
		if sel, _ := c.selectorAt(pos); sel != nil {
			if h := c.foreignMember(sel); h != "" {
				return h
			}
			return didYouMean(nearest(sel.Sel.Name, c.membersOf(sel.X)))
		}
		return ""
	}
	if m := notExported.FindStringSubmatch(msg); m != nil {
		return didYouMean(prefixed(m[2]+".", nearest(m[1], c.exported(c.pathOf(m[2])))))
	}
	name, ok := strings.CutPrefix(msg, "undefined: ")
	if !ok {
		return c.advise(pos, msg)
	}
	if pkg, member, ok := strings.Cut(name, "."); ok {
		return c.unknownMember(pos, pkg, member)
	}
	if c.drop[name] {
		return name + " was dropped, since its type changes in this cell"
	}
	if why := c.s.dropped[name]; why != "" {
		return why
	}
	if d := c.s.decls[name]; d != nil && d.broken {
		return fmt.Sprintf("%s from %s no longer compiles: see the warning of the cell that changed what it uses", name, d.Source.Name())
	}
	return c.unknown(pos, name)
}

// unknownMember says what a name that its package does not have may stand for:
// another case, a unit's other name, a package of the same name that has it, a
// name like it.
func (c *checking) unknownMember(pos token.Pos, pkg, member string) string {
	if name, other, ok := strings.Cut(member, " (but have "); ok {
		if h := c.unitHint(pkg, name); h != "" {
			return h
		}
		return "write " + pkg + "." + strings.TrimSuffix(other, ")")
	}
	if h := c.unitHint(pkg, member); h != "" {
		return h
	}
	if paths := slices.DeleteFunc(c.packagesWith(pkg, member), func(p string) bool { return p == c.pathOf(pkg) }); len(paths) > 0 {
		return `write import "` + strings.Join(paths, `" or import "`) + `" to use this package ` + pkg
	}
	if h := foreignCall(pkg, member, nil); h != "" {
		return h
	}
	if strings.HasPrefix(c.pathOf(pkg), "levelsum/") {
		// Another package of ours may have it.
		out := c.membersNamed(func(m string) bool { return m == member }, c.fitting(beyond(c.pathAt(pos))))
		if out = slices.DeleteFunc(out, func(m string) bool { return rankOfPath(c.pathOf(m[:strings.IndexByte(m, '.')])) > 0 }); len(out) > 0 {
			return didYouMean(out)
		}
	}
	return didYouMean(prefixed(pkg+".", nearest(member, c.exported(c.pathOf(pkg)))))
}

// beyond is the path without its innermost node.
func beyond(path []ast.Node) []ast.Node {
	if len(path) == 0 {
		return nil
	}
	return path[1:]
}

// unknown says what a name that nothing declares may stand for: a package that
// is not imported, a member of one of the usual packages, a name like it.
func (c *checking) unknown(pos token.Pos, name string) string {
	sel, isPackage := c.selectorAt(pos)
	if isPackage {
		if paths := c.packagesWith(name, sel.Sel.Name); len(paths) > 0 {
			return `write import "` + strings.Join(paths, `" or import "`) + `" to use the package ` + name
		}
		if h := foreignCall(name, sel.Sel.Name, c.exported("math")); h != "" {
			return h
		}
	}
	path := c.pathAt(pos)
	if h := c.foreignName(path, name); h != "" {
		return h
	}
	fits := c.fitting(path)
	if where := c.s.failed[name]; where != "" && !slices.Contains(c.vars, name) {
		return name + " stands in " + where + ", which had an error and so declared nothing: mend it and run it again"
	}
	out := c.membersNamed(func(m string) bool { return m == name }, fits)
	near := nearest(name, c.names())
	fold := slices.ContainsFunc(near, func(n string) bool { return strings.EqualFold(n, name) })
	if len(out) == 0 && !fold {
		out = c.membersNamed(func(m string) bool { return strings.EqualFold(m, name) }, fits)
	}
	if isPackage {
		out = nil // a member has no package's members
	}
	out = append(out, near...)
	if len(out) == 0 && len([]rune(name)) > 4 { // short names are like too many
		out = c.membersNamed(func(m string) bool { return slips(strings.ToLower(m), strings.ToLower(name), 1) <= 1 }, fits)
	}
	if as, ok := assigned(path); ok && len(out) == 0 {
		return "write " + as + " to declare " + name
	}
	return didYouMean(out)
}

// didYouMean offers at most two names.
func didYouMean(names []string) string {
	if len(names) == 0 {
		return ""
	}
	return "did you mean " + strings.Join(names[:min(len(names), atMost)], " or ") + "?"
}

func prefixed(prefix string, names []string) []string {
	out := make([]string, len(names))
	for i, n := range names {
		out[i] = prefix + n
	}
	return out
}

// selectorAt finds the selection of which the package's name or the member is
// at pos.
func (c *checking) selectorAt(pos token.Pos) (sel *ast.SelectorExpr, isX bool) {
	look := func(n ast.Node) bool {
		if s, ok := n.(*ast.SelectorExpr); ok && sel == nil {
			if s.X.Pos() == pos {
				if _, ok := s.X.(*ast.Ident); ok {
					sel, isX = s, true
				}
			} else if s.Sel.Pos() == pos {
				sel = s
			}
		}
		return sel == nil
	}
	c.each(func(n ast.Node) { ast.Inspect(n, look) })
	return sel, isX
}

// each calls f with every declaration and statement that is checked.
func (c *checking) each(f func(ast.Node)) {
	for _, d := range c.redo {
		f(d.node)
	}
	for _, d := range c.p.lead {
		f(d)
	}
	for _, st := range c.p.stmts {
		f(st)
	}
}

// eachNew calls f with every declaration and statement of the cell itself, and
// what is known of the types in it.
func (c *checking) eachNew(plan *Plan, f func(ast.Node, *types.Info)) {
	for _, d := range c.redo {
		if d.Source == c.p.src {
			f(d.node, plan.info)
		}
	}
	for _, d := range c.p.lead {
		f(d, plan.info)
	}
	for _, st := range c.p.stmts {
		f(st, plan.sinfo)
	}
}

// membersOf lists the fields and methods of an expression that has been checked.
func (c *checking) membersOf(x ast.Expr) []string {
	var t types.Type
	for _, info := range c.infos {
		if tv, ok := info.Types[x]; ok && tv.Type != nil {
			t = tv.Type
		}
	}
	if t == nil {
		return nil
	}
	out := map[string]bool{}
	see := func(o types.Object) {
		if o.Exported() || isCell(o.Pkg()) {
			out[o.Name()] = true
		}
	}
	if p, ok := t.Underlying().(*types.Pointer); ok {
		t = p.Elem()
	}
	// Of embedded fields the methods are in the set; their fields one level down.
	var fields func(t types.Type, depth int)
	fields = func(t types.Type, depth int) {
		if p, ok := t.Underlying().(*types.Pointer); ok {
			t = p.Elem()
		}
		s, ok := t.Underlying().(*types.Struct)
		if !ok || depth > 4 {
			return
		}
		for f := range s.Fields() {
			see(f)
			if f.Embedded() {
				fields(f.Type(), depth+1)
			}
		}
	}
	fields(t, 0)
	if !types.IsInterface(t) {
		t = types.NewPointer(t)
	}
	set := types.NewMethodSet(t)
	for i := range set.Len() {
		see(set.At(i).Obj())
	}
	return slices.Sorted(maps.Keys(out))
}

// pathOf is the package that an import name means in the cell, "" if none.
func (c *checking) pathOf(name string) string {
	if p := c.imports[name]; p != "" {
		return p
	}
	return c.s.importPath(name)
}

// exported lists what a package exports.
func (c *checking) exported(path string) []string {
	if path == "" {
		return nil
	}
	p, err := c.s.importer.Import(path)
	if err != nil {
		return nil
	}
	return slices.DeleteFunc(p.Scope().Names(), func(n string) bool { return !token.IsExported(n) })
}

// packagesWith lists importable packages that name can mean and that have the
// member; without one that has it, none.
func (c *checking) packagesWith(name, member string) []string {
	i, ok := c.s.importer.(interface{ Named(string) []string })
	if !ok {
		return nil
	}
	var out []string
	for _, path := range i.Named(name) {
		if p, err := c.s.importer.Import(path); err == nil && p.Name() == name {
			if o := p.Scope().Lookup(member); o != nil && o.Exported() {
				out = append(out, path)
			}
		}
	}
	slices.SortStableFunc(out, func(a, b string) int { return cmp.Compare(rankOfPath(a), rankOfPath(b)) })
	return out[:min(len(out), atMost)]
}

// rankOfPath orders packages by how likely a cell means them: levelsum's own,
// the standard library, others.
func rankOfPath(path string) int {
	switch {
	case strings.HasPrefix(path, "levelsum/"):
		return 0
	case !strings.Contains(path, "."):
		return 1
	}
	return 2
}

// membersNamed lists members of the packages that the cell can use without an
// import, with the package's name: math's before others of Go's own.
func (c *checking) membersNamed(match func(string) bool, fits func(types.Object) bool) []string {
	names := c.s.ImportNames()
	rank := func(name string) int {
		switch path := c.pathOf(name); path {
		case "math":
			return -1
		case "levelsum/statmech/derive", "levelsum/statmech/uncertain", "levelsum/statmech/special":
			return 1 // the same names as those of math and of the models
		default:
			return rankOfPath(path)
		}
	}
	slices.SortStableFunc(names, func(a, b string) int { return cmp.Compare(rank(a), rank(b)) })
	var out []string
	for _, n := range names {
		p, err := c.s.importer.Import(c.pathOf(n))
		if err != nil {
			continue
		}
		for _, m := range p.Scope().Names() {
			if o := p.Scope().Lookup(m); o.Exported() && match(m) && fits(o) {
				out = append(out, n+"."+m)
			}
		}
		if n == "math" && len(out) > 0 { // Go's other packages mean something else by it
			return append(out, c.uncertain(match, fits)...)
		}
	}
	return out
}

// uncertain lists members of the package whose functions are those of math for
// values with an uncertainty.
func (c *checking) uncertain(match func(string) bool, fits func(types.Object) bool) (out []string) {
	const name = "uncertain"
	for _, m := range c.exported(c.s.usual[name]) {
		if p, err := c.s.importer.Import(c.s.usual[name]); err == nil && match(m) && fits(p.Scope().Lookup(m)) {
			out = append(out, name+"."+m)
		}
	}
	return out
}

// names lists what a name in the cell can be: what the session and the cell
// declare, packages, Go's own.
func (c *checking) names() []string {
	all := map[string]bool{}
	for n := range c.s.entities {
		all[n] = true
	}
	for _, n := range slices.Concat(c.s.ImportNames(), types.Universe.Names(), c.vars) {
		all[n] = true
	}
	for n := range c.imports {
		all[n] = true
	}
	for _, info := range c.infos {
		for id, o := range info.Defs {
			if v, ok := o.(*types.Var); ok && v.IsField() || o == nil {
				continue
			}
			if f, ok := o.(*types.Func); ok && f.Signature().Recv() != nil {
				continue
			}
			all[id.Name] = true
		}
	}
	delete(all, "_")
	return slices.Sorted(maps.Keys(all))
}

// nearest lists the names that differ least from name, by slips of the keyboard;
// none if even they differ by more than slips.
func nearest(name string, among []string) []string {
	limit := 2
	switch n := len([]rune(name)); {
	case n <= 2:
		limit = 0
	case n <= 5:
		limit = 1
	}
	var out []string
	least := -1
	for _, n := range among {
		d := slips(strings.ToLower(name), strings.ToLower(n), limit)
		if n == name || d > limit {
			continue
		}
		d += slips(name, n, len(name)) // capitals count less than letters
		switch {
		case least < 0 || d < least:
			least, out = d, []string{n}
		case d == least:
			out = append(out, n)
		}
	}
	return out
}

// slips counts the letters that are wrong, missing, added or exchanged with
// their neighbour between two names. Of lengths that differ by more than limit
// it says that it is more.
func slips(a, b string, limit int) int {
	x, y := []rune(a), []rune(b)
	if d := len(x) - len(y); d > limit || -d > limit {
		return limit + 1
	}
	var before, last []int
	row := make([]int, len(y)+1)
	for j := range row {
		row[j] = j
	}
	for i := range x {
		before, last, row = last, row, make([]int, len(y)+1)
		row[0] = i + 1
		for j := range y {
			d := last[j]
			if x[i] != y[j] {
				d++
			}
			row[j+1] = min(d, last[j+1]+1, row[j]+1)
			if i > 0 && j > 0 && x[i] == y[j-1] && x[i-1] == y[j] {
				row[j+1] = min(row[j+1], before[j-1]+1)
			}
		}
	}
	return row[len(y)]
}
