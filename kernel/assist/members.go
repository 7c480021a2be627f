package assist

import (
	"go/ast"
	"go/types"
)

// membersOf lists what can follow x and a dot.
func (c *checked) membersOf(x ast.Expr) []Match {
	if id, ok := x.(*ast.Ident); ok {
		if p, ok := c.info.Uses[id].(*types.PkgName); ok {
			return packageMembers(p.Imported())
		}
	}
	tv, ok := c.info.Types[x]
	if !ok || tv.Type == nil || tv.Type == types.Typ[types.Invalid] {
		return nil
	}
	if tv.IsType() {
		return c.methods(tv.Type, false)
	}
	return append(c.fields(tv.Type), c.methods(tv.Type, true)...)
}

func packageMembers(p *types.Package) []Match {
	var all []Match
	for _, name := range p.Scope().Names() {
		if o := p.Scope().Lookup(name); o.Exported() {
			all = append(all, match(o, rankMember))
		}
	}
	return all
}

// methods lists the methods of t; with value, those that a value of type t,
// taken as addressable, has.
func (c *checked) methods(t types.Type, value bool) []Match {
	if _, isPointer := t.Underlying().(*types.Pointer); value && !isPointer && !types.IsInterface(t) {
		t = types.NewPointer(t)
	}
	var all []Match
	set := types.NewMethodSet(t)
	for i := range set.Len() {
		if o := set.At(i).Obj(); c.sees(o) {
			all = append(all, match(o, rankMember))
		}
	}
	return all
}

// sees reports whether a cell may use the member o.
func (c *checked) sees(o types.Object) bool {
	return o.Exported() || o.Pkg() != nil && o.Pkg().Path() == c.pkg.Path()
}

// fields lists the fields of t, or of what it points to, and those of embedded
// structs.
func (c *checked) fields(t types.Type) []Match {
	var all []Match
	seen := map[string]bool{}
	done := map[types.Type]bool{}
	level := []types.Type{t}
	for len(level) > 0 {
		var next []types.Type
		for _, t := range level {
			s := structOf(t)
			if s == nil || done[s] {
				continue
			}
			done[s] = true
			for f := range s.Fields() {
				if f.Embedded() {
					next = append(next, f.Type())
				}
				if c.sees(f) && !seen[f.Name()] {
					seen[f.Name()] = true
					all = append(all, match(f, rankMember))
				}
			}
		}
		level = next
	}
	return all
}

// structOf is the struct that t is or points to.
func structOf(t types.Type) *types.Struct {
	if p, ok := t.Underlying().(*types.Pointer); ok {
		t = p.Elem()
	}
	s, _ := t.Underlying().(*types.Struct)
	return s
}

// literalAround returns the literal of which the name at the start of path is an
// element or a key; keyed says that it is the key before a value.
func literalAround(path []ast.Node) (lit *ast.CompositeLit, keyed bool) {
	switch p := parent(path, 0).(type) {
	case *ast.CompositeLit:
		if p.Type != path[0] {
			return p, false
		}
	case *ast.KeyValueExpr:
		if p.Key == path[0] {
			lit, _ := parent(path, 1).(*ast.CompositeLit)
			return lit, true
		}
	}
	return nil, false
}

// missingFields lists the fields of a struct literal that it does not name yet.
// Only says that nothing else can stand there: other elements are named.
func (c *checked) missingFields(lit *ast.CompositeLit, at *ast.Ident) (all []Match, only bool) {
	tv, ok := c.info.Types[lit]
	if !ok || structOf(tv.Type) == nil {
		return nil, false
	}
	named := map[string]bool{}
	for _, e := range lit.Elts {
		if kv, ok := e.(*ast.KeyValueExpr); ok {
			if id, ok := kv.Key.(*ast.Ident); ok && id != at {
				named[id.Name] = true
				only = true
			}
		}
	}
	for f := range structOf(tv.Type).Fields() {
		if c.sees(f) && !named[f.Name()] {
			all = append(all, match(f, rankMember))
		}
	}
	return all, only
}

// wanted lists the constants of the type that is wanted where path begins,
// written with their package: units first where a quantity is wanted.
func (c *checked) wanted(scope Scope, path []ast.Node) []Match {
	t, _ := types.Unalias(c.wantedType(path)).(*types.Named)
	if t == nil || t.Obj().Pkg() == nil || t.Obj().Pkg() == c.pkg || t.Obj().Pkg().Path() == "cell" {
		return nil
	}
	// A package that is known only because another one mentions it may lack
	// most of its names.
	p := t.Obj().Pkg()
	if whole, err := scope.Import(p.Path()); err == nil {
		p = whole
	}
	var all []Match
	for _, name := range p.Scope().Names() {
		if k, ok := p.Scope().Lookup(name).(*types.Const); ok && k.Exported() && types.Identical(k.Type(), t) {
			m := match(k, rankWanted)
			m.Text = p.Name() + "." + name
			all = append(all, m)
		}
	}
	return all
}

// wantedType is the type that the expression at the start of path should have;
// nil if it is not known.
func (c *checked) wantedType(path []ast.Node) types.Type {
	x := path[0]
	for i := 1; i < len(path); i++ {
		switch p := path[i].(type) {
		case *ast.ParenExpr:
		case *ast.BinaryExpr:
			other := p.X
			if other == x {
				other = p.Y
			}
			if tv := c.info.Types[other]; tv.Type != nil {
				if b, ok := tv.Type.(*types.Basic); !ok || b.Info()&types.IsUntyped == 0 {
					return tv.Type
				}
			}
		case *ast.KeyValueExpr:
			lit, ok := parent(path, i).(*ast.CompositeLit)
			key, isName := p.Key.(*ast.Ident)
			if !ok || !isName || p.Value != x || c.info.Types[lit].Type == nil {
				return nil
			}
			if s := structOf(c.info.Types[lit].Type); s != nil {
				for f := range s.Fields() {
					if f.Name() == key.Name {
						return f.Type()
					}
				}
			}
			return nil
		case *ast.CallExpr:
			return c.parameter(p, x)
		case *ast.AssignStmt:
			for j, r := range p.Rhs {
				if r == x && j < len(p.Lhs) && len(p.Lhs) == len(p.Rhs) {
					return c.info.Types[p.Lhs[j]].Type
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

// parameter is the type of the parameter to which x is given in a call.
func (c *checked) parameter(call *ast.CallExpr, x ast.Node) types.Type {
	t := c.info.Types[call.Fun].Type
	if t == nil {
		return nil
	}
	s, ok := t.Underlying().(*types.Signature)
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
