package export

import (
	"go/ast"
	"go/build"
	"go/parser"
	"go/printer"
	"go/token"
	"path/filepath"
	"strings"
)

// Docs are the documentation comments of a package by name: "" is the package
// itself, "T.m" a method or field of T. Under "=C" stands how the constant C is
// defined, if that is more than a number.
type Docs map[string]string

// ReadDocs reads the documentation of the package whose source is in a folder.
// Files that cannot be read say nothing.
func ReadDocs(folder string) Docs {
	d := Docs{}
	b, err := build.ImportDir(folder, 0)
	if err != nil && b == nil {
		return d
	}
	fset := token.NewFileSet()
	for _, name := range append(b.GoFiles, b.CgoFiles...) {
		f, err := parser.ParseFile(fset, filepath.Join(folder, name), nil, parser.ParseComments|parser.SkipObjectResolution)
		if err != nil {
			continue
		}
		if text := f.Doc.Text(); text != "" {
			d[""] = text
		}
		for _, decl := range f.Decls {
			d.add(fset, decl)
		}
	}
	return d
}

// add notes the documentation of the exported names of a declaration.
func (d Docs) add(fset *token.FileSet, decl ast.Decl) {
	names := Documented(decl, docOf(decl))
	for name, text := range names {
		if text != "" && exported(name) {
			d[name] = text
		}
	}
	g, ok := decl.(*ast.GenDecl)
	if !ok || g.Tok != token.CONST {
		return
	}
	for _, s := range g.Specs {
		s := s.(*ast.ValueSpec)
		for i, n := range s.Names {
			if i >= len(s.Values) || !n.IsExported() {
				continue
			}
			if _, plain := s.Values[i].(*ast.BasicLit); plain {
				continue
			}
			var b strings.Builder
			if printer.Fprint(&b, fset, s.Values[i]) == nil {
				d["="+n.Name] = strings.Join(strings.Fields(b.String()), " ")
			}
		}
	}
}

func exported(name string) bool {
	for part := range strings.SplitSeq(name, ".") {
		if !token.IsExported(part) {
			return false
		}
	}
	return true
}

func docOf(decl ast.Decl) string {
	switch d := decl.(type) {
	case *ast.FuncDecl:
		return d.Doc.Text()
	case *ast.GenDecl:
		return d.Doc.Text()
	}
	return ""
}

// Documented lists what a declaration declares, methods, fields and the methods
// of interfaces as "T.m", each with its comment. Above is the comment that stands
// above the whole declaration.
func Documented(decl ast.Decl, above string) map[string]string {
	out := map[string]string{}
	switch d := decl.(type) {
	case *ast.FuncDecl:
		name := d.Name.Name
		if d.Recv != nil && len(d.Recv.List) > 0 {
			name = typeName(d.Recv.List[0].Type) + "." + name
		}
		out[name] = above
	case *ast.GenDecl:
		for _, s := range d.Specs {
			switch s := s.(type) {
			case *ast.TypeSpec:
				out[s.Name.Name] = either(s.Doc.Text()+s.Comment.Text(), above)
				members(s, out)
			case *ast.ValueSpec:
				for _, n := range s.Names {
					out[n.Name] = either(s.Doc.Text()+s.Comment.Text(), above)
				}
			}
		}
	}
	return out
}

func members(s *ast.TypeSpec, out map[string]string) {
	var list *ast.FieldList
	switch t := s.Type.(type) {
	case *ast.StructType:
		list = t.Fields
	case *ast.InterfaceType:
		list = t.Methods
	}
	if list == nil {
		return
	}
	for _, f := range list.List {
		for _, n := range f.Names {
			out[s.Name.Name+"."+n.Name] = f.Doc.Text() + f.Comment.Text()
		}
	}
}

func either(a, b string) string {
	if a != "" {
		return a
	}
	return b
}

// typeName is the name of a method's receiver type.
func typeName(x ast.Expr) string {
	for {
		switch t := x.(type) {
		case *ast.StarExpr:
			x = t.X
		case *ast.ParenExpr:
			x = t.X
		case *ast.IndexExpr:
			x = t.X
		case *ast.IndexListExpr:
			x = t.X
		case *ast.Ident:
			return t.Name
		default:
			return ""
		}
	}
}

// CommentAbove returns the comment that ends on the line above the offset in a
// text, as a documentation comment does.
func CommentAbove(text string, offset int) string {
	lines := strings.Split(text[:max(0, min(offset, len(text)))], "\n")
	lines = lines[:len(lines)-1]
	n := len(lines)
	if n > 0 && strings.HasSuffix(strings.TrimSpace(lines[n-1]), "*/") {
		for i := n - 1; i >= 0; i-- {
			if strings.HasPrefix(strings.TrimSpace(lines[i]), "/*") {
				return comment(strings.TrimSpace(strings.Join(lines[i:], "\n")))
			}
		}
		return ""
	}
	i := n
	for i > 0 && strings.HasPrefix(strings.TrimSpace(lines[i-1]), "//") {
		i--
	}
	var b []string
	for _, l := range lines[i:] {
		b = append(b, strings.TrimSpace(l))
	}
	return comment(b...)
}

// comment is the text of comments, without their marks and directives.
func comment(parts ...string) string {
	if len(parts) == 0 {
		return ""
	}
	g := &ast.CommentGroup{}
	for _, p := range parts {
		g.List = append(g.List, &ast.Comment{Text: p})
	}
	return strings.TrimLeft(g.Text(), " ")
}

// CommentOn returns the comment on the statement that begins at the offset in a
// text: the one that ends on the line above, or else the one behind the
// statement on its line.
func CommentOn(text string, from, to int) string {
	if above := CommentAbove(text, from); above != "" {
		return above
	}
	to = max(0, min(to, len(text)))
	line, _, _ := strings.Cut(text[to:], "\n")
	line = strings.TrimSpace(strings.TrimLeft(strings.TrimSpace(line), ";"))
	if strings.HasPrefix(line, "//") {
		return comment(line)
	}
	return ""
}
