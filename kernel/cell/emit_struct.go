package cell

import (
	"fmt"
	"go/ast"
	"go/token"
	"go/types"
	"strings"
)

// structType marks lower-case fields as the ones that encoders leave out.
func (e *emitter) structType(n *ast.StructType) {
	const tag = `json:"-" xml:"-"`
	for _, f := range n.Fields.List {
		var lower, upper int
		for _, id := range f.Names {
			if token.IsExported(id.Name) || id.Name == "_" {
				upper++
			} else {
				lower++
			}
		}
		if len(f.Names) == 0 {
			id := embeddedName(f.Type)
			if id == nil || token.IsExported(id.Name) || isStruct(e.info.Types[f.Type].Type) {
				continue
			}
			lower++
		}
		if lower == 0 {
			continue
		}
		if upper > 0 { // A, b int: each by itself
			var parts []string
			for _, id := range f.Names {
				part := mark(id.Name) + " " + e.node(f.Type)
				if f.Tag != nil || !token.IsExported(id.Name) {
					part += " " + fieldTag(f.Tag, tag, !token.IsExported(id.Name))
				}
				parts = append(parts, part)
			}
			e.replace(f.Pos(), f.End(), strings.Join(parts, "; "))
			e.skip[f] = true
			continue
		}
		if f.Tag != nil {
			e.replace(f.Tag.Pos(), f.Tag.End(), fieldTag(f.Tag, tag, true))
		} else {
			e.after(f.Type, " `"+tag+"`")
		}
	}
}

func fieldTag(lit *ast.BasicLit, tag string, lower bool) string {
	s := ""
	if lit != nil {
		s = constantString(lit)
	}
	if lower {
		s = strings.TrimSpace(tag + " " + s)
	}
	return fmt.Sprintf("%q", s)
}

func embeddedName(t ast.Expr) *ast.Ident {
	switch t := t.(type) {
	case *ast.StarExpr:
		return embeddedName(t.X)
	case *ast.Ident:
		return t
	case *ast.SelectorExpr:
		return t.Sel
	case *ast.IndexExpr:
		return embeddedName(t.X)
	case *ast.IndexListExpr:
		return embeddedName(t.X)
	}
	return nil
}

func isStruct(t types.Type) bool {
	if t == nil {
		return false
	}
	if p, ok := t.Underlying().(*types.Pointer); ok {
		t = p.Elem()
	}
	_, ok := t.Underlying().(*types.Struct)
	return ok
}
