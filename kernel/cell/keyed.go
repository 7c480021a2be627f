package cell

import (
	"go/ast"
	"go/types"
)

// keyed writes the field names into literals T{1, 2} of a struct type that an
// older cell declares and that has lower-case fields. Cells are one package,
// where such a literal is right, but go/types sees two and leaves its elements
// unchecked. It reports whether it changed any.
func (c *checking) keyed(files []*ast.File, pkg *types.Package, info *types.Info) bool {
	changed := false
	for _, f := range files {
		ast.Inspect(f, func(n ast.Node) bool {
			lit, ok := n.(*ast.CompositeLit)
			if !ok || len(lit.Elts) == 0 {
				return true
			}
			t := info.Types[lit].Type
			if t == nil {
				return true
			}
			if p, ok := t.Underlying().(*types.Pointer); ok { // &T left out in a slice or map
				t = p.Elem()
			}
			st, ok := t.Underlying().(*types.Struct)
			if !ok || st.NumFields() != len(lit.Elts) {
				return true
			}
			if _, ok := lit.Elts[0].(*ast.KeyValueExpr); ok {
				return true
			}
			foreign := false
			for i := range st.NumFields() {
				f := st.Field(i)
				foreign = foreign || !f.Exported() && isCell(f.Pkg()) && f.Pkg() != pkg
				if f.Name() == "_" {
					return true // cannot be named
				}
			}
			if !foreign {
				return true
			}
			changed = true
			for i, e := range lit.Elts {
				key := &ast.Ident{Name: st.Field(i).Name(), NamePos: e.Pos(), Obj: written}
				lit.Elts[i] = &ast.KeyValueExpr{Key: key, Colon: e.Pos(), Value: e}
			}
			return true
		})
	}
	return changed
}

// written marks a field name that stands in the syntax tree and not in the
// text.
var written = ast.NewObj(ast.Bad, "written")
