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
			m := match(o, rankInPackage(p, o))
			m.order = usual(p, name)
			all = append(all, m)
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
			m := match(o, rankOfMethod(o))
			m.order = usual(o.Pkg(), o.Name())
			all = append(all, m)
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
					m := match(f, rankField)
					m.order = len(all)
					all = append(all, m)
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
			m := match(f, rankField)
			m.order = len(all)
			all = append(all, m)
		}
	}
	return all, only
}
