package cell

import (
	"go/ast"
	"go/token"
	"go/types"
	"slices"
	"strconv"
)

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
