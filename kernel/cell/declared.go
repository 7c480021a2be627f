package cell

import (
	"fmt"
	"go/ast"
	"go/token"
	"slices"
	"strconv"
)

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
