package assist

import (
	"go/ast"
	"go/token"
	"go/types"
	"slices"
)

// wanted lists what makes a value of the type t, written with its package: the
// constants of the type, so that units come first where a quantity is wanted;
// for a function or an interface, as options are, the functions that return it;
// for a struct, the type itself.
func (c *checked) wanted(scope Scope, want types.Type) []Match {
	p, pointer := want.(*types.Pointer)
	if pointer {
		want = p.Elem()
	}
	t, _ := types.Unalias(want).(*types.Named)
	if t == nil || t.Obj().Pkg() == nil || t.Obj().Pkg() == c.pkg || t.Obj().Pkg().Path() == "cell" {
		return nil
	}
	return c.constantsOf(scope, t.Obj().Pkg(), func(o types.Object) bool {
		switch o := o.(type) {
		case *types.Const:
			return types.Identical(o.Type(), t)
		case *types.Func:
			_, option := t.Underlying().(*types.Signature)
			r := o.Signature().Results()
			return (option || types.IsInterface(t)) && r.Len() == 1 && types.Identical(r.At(0).Type(), t)
		case *types.TypeName:
			return structOf(t) != nil && o == t.Obj() && !pointer && exportsFields(t)
		}
		return false
	})
}

// exportsFields reports whether a cell can fill in a struct.
func exportsFields(t types.Type) bool {
	for f := range structOf(t).Fields() {
		if f.Exported() {
			return true
		}
	}
	return false
}

// unitPath is the package whose constants are units.
const unitPath = "levelsum/statmech/unit"

// units lists the units of all quantities.
func (c *checked) units(scope Scope) []Match {
	p, err := scope.Import(unitPath)
	if err != nil {
		return nil
	}
	return c.constantsOf(scope, p, func(o types.Object) bool {
		return isUnit(o)
	})
}

// wantedFirst ranks the members of a package that make a value of the type that
// is wanted of sel, at the start of path, before the others.
func (c *checked) wantedFirst(scope Scope, sel *ast.SelectorExpr, path []ast.Node, members []Match) []Match {
	x, ok := sel.X.(*ast.Ident)
	if !ok {
		return members
	}
	want := c.wantedType(path)
	first := c.wanted(scope, want)
	if want == nil && c.scales(path) {
		first = c.units(scope)
	}
	is := make(map[string]bool, len(first))
	for _, m := range first {
		is[m.Text] = true
	}
	for i := range members {
		if is[x.Name+"."+members[i].Text] {
			members[i].rank = rankWanted
		}
	}
	return members
}

// constantsOf lists the exported objects of a package that are wanted.
func (c *checked) constantsOf(scope Scope, p *types.Package, want func(types.Object) bool) []Match {
	// A package that is known only because another one mentions it may lack
	// most of its names.
	if whole, err := scope.Import(p.Path()); err == nil {
		p = whole
	}
	prefix := c.nameOf(p)
	if slices.Contains(dotsOf(scope), p.Path()) {
		prefix = ""
	}
	var all []Match
	for _, name := range p.Scope().Names() {
		if o := p.Scope().Lookup(name); o.Exported() && want(o) {
			m := match(o, rankWanted)
			m.Text = prefix + name
			m.order = usual(p, name)
			all = append(all, m)
		}
	}
	return all
}

// nameOf is how the cell writes the names of a package: "unit.", or as the cell
// has imported it.
func (c *checked) nameOf(p *types.Package) string {
	for _, s := range c.file.Imports {
		if s.Name == nil || s.Path.Value != `"`+p.Path()+`"` {
			continue
		}
		switch s.Name.Name {
		case "_":
		case ".":
			return ""
		default:
			return s.Name.Name + "."
		}
	}
	return p.Name() + "."
}

// scales reports whether the name at the start of path stands after a plain
// number and *, where nothing says of which kind the product is: a unit.
func (c *checked) scales(path []ast.Node) bool {
	b, ok := parent(path, 0).(*ast.BinaryExpr)
	if !ok || b.Op != token.MUL || b.Y != path[0] {
		return false
	}
	x := b.X
	if u, ok := x.(*ast.UnaryExpr); ok {
		x = u.X
	}
	_, ok = x.(*ast.BasicLit)
	return ok
}

// wantedType is the type that the expression at the start of path should have;
// nil if it is not known.
func (c *checked) wantedType(path []ast.Node) types.Type {
	x := path[0]
	for i := 1; i < len(path); i++ {
		switch p := path[i].(type) {
		case *ast.ParenExpr, *ast.UnaryExpr:
		case *ast.BinaryExpr:
			other := p.X
			if other == x {
				other = p.Y
			}
			if p.Op == token.LAND || p.Op == token.LOR || p.Op == token.SHL || p.Op == token.SHR {
				return nil
			}
			if tv := c.info.Types[other]; tv.Type != nil {
				if b, ok := tv.Type.(*types.Basic); !ok || b.Info()&types.IsUntyped == 0 {
					return valid(tv.Type)
				}
			}
			switch p.Op {
			case token.EQL, token.NEQ, token.LSS, token.LEQ, token.GTR, token.GEQ:
				return nil
			}
		case *ast.KeyValueExpr:
			lit, ok := parent(path, i).(*ast.CompositeLit)
			if !ok || p.Value != x || c.info.Types[lit].Type == nil {
				return nil
			}
			key, _ := p.Key.(*ast.Ident)
			return c.element(lit, key, -1)
		case *ast.CompositeLit:
			for j, e := range p.Elts {
				if e == x && c.info.Types[p].Type != nil {
					return c.element(p, nil, j)
				}
			}
			return nil
		case *ast.CallExpr:
			return c.parameter(p, x)
		case *ast.AssignStmt:
			for j, r := range p.Rhs {
				if r == x && j < len(p.Lhs) && len(p.Lhs) == len(p.Rhs) {
					return valid(c.info.Types[p.Lhs[j]].Type)
				}
			}
			return nil
		case *ast.ValueSpec:
			if p.Type != nil && p.Type != x {
				return valid(c.info.Types[p.Type].Type)
			}
			return nil
		case *ast.ReturnStmt:
			return c.result(path[i:], x)
		case *ast.SendStmt:
			if t := c.info.Types[p.Chan].Type; p.Value == x && t != nil {
				if ch, ok := t.Underlying().(*types.Chan); ok {
					return ch.Elem()
				}
			}
			return nil
		default:
			return nil
		}
		x = path[i]
	}
	return nil
}

// valid is t, or nil for the type of what the checker does not understand.
func valid(t types.Type) types.Type {
	if t == types.Typ[types.Invalid] {
		return nil
	}
	return t
}

// element is the type of an element of a literal: of the field key of a struct,
// or else of the j-th element. The first element of a struct may still become a
// key.
func (c *checked) element(lit *ast.CompositeLit, key *ast.Ident, j int) types.Type {
	t := c.info.Types[lit].Type
	if s := structOf(t); s != nil {
		if key == nil && j > 0 && j < s.NumFields() {
			return s.Field(j).Type()
		}
		for f := range s.Fields() {
			if key != nil && f.Name() == key.Name {
				return f.Type()
			}
		}
		return nil
	}
	if e, ok := t.Underlying().(interface{ Elem() types.Type }); ok { // slice, array, map
		return e.Elem()
	}
	return nil
}

// result is the type of the result x of the return statement at the start of
// path.
func (c *checked) result(path []ast.Node, x ast.Node) types.Type {
	var f *ast.FuncType
	for _, n := range path {
		switch n := n.(type) {
		case *ast.FuncLit:
			f = n.Type
		case *ast.FuncDecl:
			f = n.Type
		}
		if f != nil {
			break
		}
	}
	if f == nil || f.Results == nil {
		return nil
	}
	var all []types.Type
	for _, r := range f.Results.List {
		for range max(1, len(r.Names)) {
			all = append(all, valid(c.info.Types[r.Type].Type))
		}
	}
	for j, r := range path[0].(*ast.ReturnStmt).Results {
		if r == x && j < len(all) {
			return all[j]
		}
	}
	return nil
}

// parameter is the type of the parameter to which x is given in a call.
func (c *checked) parameter(call *ast.CallExpr, x ast.Node) types.Type {
	tv := c.info.Types[call.Fun]
	if tv.Type == nil {
		return nil
	}
	if tv.IsType() { // a conversion
		return valid(tv.Type)
	}
	s, ok := tv.Type.Underlying().(*types.Signature)
	if !ok {
		return nil
	}
	for i, a := range call.Args {
		if a != x {
			continue
		}
		n := s.Params().Len()
		switch {
		case s.Variadic() && i >= n-1:
			if l, ok := s.Params().At(n - 1).Type().(*types.Slice); ok {
				return l.Elem()
			}
		case i < n:
			return s.Params().At(i).Type()
		}
	}
	return nil
}

// isUnit reports whether an object is a unit of a quantity.
func isUnit(o types.Object) bool {
	k, ok := o.(*types.Const)
	if !ok || o.Pkg() == nil || o.Pkg().Path() != unitPath {
		return false
	}
	t, ok := k.Type().(*types.Named)
	if !ok {
		return false
	}
	b, ok := t.Underlying().(*types.Basic)
	return ok && b.Info()&types.IsFloat != 0
}

// everyday are the units that the field writes most, most of all the first.
var everyday = []string{"K", "PerCm", "JPerMolK", "MolarKJ", "KJPerMol", "Bar", "U", "GPerMol", "Angstrom", "THz", "MilliEV", "EV", "Gram", "GPa", "Pa", "Atm"}

// familiar orders units of one kind: those of every day before the others.
func familiar(name string) int {
	if i := slices.Index(everyday, name); i >= 0 {
		return i
	}
	return len(everyday)
}
