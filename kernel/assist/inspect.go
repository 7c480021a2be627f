package assist

import (
	"cmp"
	"fmt"
	"go/ast"
	"go/doc/comment"
	"go/token"
	"go/types"
	"slices"
	"strings"
)

// A Valued scope knows what session variables hold. Cell is the number of the
// cell that declared the variable last.
type Valued interface {
	ValueOf(name string) (text string, cell int, ok bool)
}

// An Inspection describes what stands at a cursor, as plain text and as
// Markdown.
type Inspection struct {
	Text, Markdown string
}

// Inspect describes the name at the offset cursor, or the function whose
// arguments the cursor is among. With more detail than 0 all members of a type
// are listed. Docs may be nil.
func Inspect(scope Scope, docs *Docs, source string, cursor, detail int) (Inspection, bool) {
	cursor = max(0, min(cursor, len(source)))
	start, _ := wordAt(source, cursor)
	if inText(source, start) {
		return Inspection{}, false
	}
	c := check(scope, source)
	at := c.where(start)
	path := c.pathTo(func(id *ast.Ident) bool { return id.Pos() == at })
	if path == nil {
		path = c.callee(c.where(cursor))
	}
	if path == nil {
		return Inspection{}, false
	}
	id := path[0].(*ast.Ident)
	o := c.info.ObjectOf(id)
	if o == nil {
		if importPath := scope.ImportPath(id.Name); importPath != "" {
			if p, err := scope.Import(importPath); err == nil {
				o = types.NewPkgName(token.NoPos, c.pkg, id.Name, p)
			}
		}
	}
	if o == nil {
		return Inspection{}, false
	}
	d := c.describe(scope, docs, o, detail)
	return d, d.Text != ""
}

// callee returns the way to the name of the function of the innermost call that
// has pos between its brackets.
func (c *checked) callee(pos token.Pos) []ast.Node {
	var name *ast.Ident
	ast.Inspect(c.file, func(n ast.Node) bool {
		call, ok := n.(*ast.CallExpr)
		if !ok || pos <= call.Lparen || call.Rparen.IsValid() && pos > call.Rparen {
			return true
		}
		switch f := ast.Unparen(call.Fun).(type) {
		case *ast.Ident:
			name = f
		case *ast.SelectorExpr:
			name = f.Sel
		}
		return true
	})
	if name == nil {
		return nil
	}
	return c.pathTo(func(id *ast.Ident) bool { return id == name })
}

// fewMembers is how many members of a type are listed without further detail.
const fewMembers = 12

// describe says what o is.
func (c *checked) describe(scope Scope, docs *Docs, o types.Object, detail int) Inspection {
	head := headOf(o)
	var extra, methods []string // methods come last: they hide the text in a small window
	switch o := o.(type) {
	case *types.Var:
		v, ok := scope.(Valued)
		if !ok || o.IsField() || o.Parent() != c.pkg.Scope() {
			break
		}
		if text, cell, ok := v.ValueOf(o.Name()); ok {
			extra = append(extra, fmt.Sprintf("// set by In[%d]", cell), o.Name()+" = "+text)
		}
	case *types.TypeName:
		extra = listed(c.fields(o.Type()), detail)
		methods = listed(inOrder(c.methods(o.Type(), true)), detail)
	case *types.PkgName:
		members := packageMembers(o.Imported())
		if detail > 0 {
			for _, m := range members {
				extra = append(extra, strings.TrimRight("\t"+m.line(), " "))
			}
		} else {
			extra = append(extra, fmt.Sprintf("// %d names", len(members)))
		}
	}
	if def := docs.definition(o); def != "" {
		extra = append(extra, "// "+o.Name()+" = "+def)
	}
	text, cell := c.docOf(scope, docs, o)
	if cell > 0 {
		extra = append([]string{fmt.Sprintf("// declared in In[%d]", cell)}, extra...)
	}
	code := strings.Join(append([]string{head}, extra...), "\n")
	d := Inspection{Text: code, Markdown: "```go\n" + code + "\n```"}
	for _, text := range []string{text, c.modelOf(scope, docs, o, text)} {
		if text != "" {
			plain, markdown := printed(text)
			d.Text += "\n\n" + plain
			d.Markdown += "\n\n" + markdown
		}
	}
	if len(methods) > 0 {
		code := "// methods\n" + strings.Join(methods, "\n")
		d.Text += "\n\n" + code
		d.Markdown += "\n\n```go\n" + code + "\n```"
	}
	return d
}

// enough is the length of a documentation that says more than a name does.
const enough = 240

// modelOf is the documentation of the type of which o is a method, if what o
// itself says is short: formula, range and source stand there.
func (c *checked) modelOf(scope Scope, docs *Docs, o types.Object, text string) string {
	f, ok := o.(*types.Func)
	if !ok || len(text) > enough || f.Signature().Recv() == nil || !strings.HasPrefix(pkgPath(f), "levelsum/statmech") || pkgPath(f) == unitPath {
		return ""
	}
	t := f.Signature().Recv().Type()
	if p, ok := t.(*types.Pointer); ok {
		t = p.Elem()
	}
	n, ok := types.Unalias(t).(*types.Named)
	if !ok {
		return ""
	}
	doc, _ := c.docOf(scope, docs, n.Obj())
	return doc
}

// inOrder sorts members as completion does.
func inOrder(all []Match) []Match {
	slices.SortStableFunc(all, func(a, b Match) int {
		return cmp.Or(cmp.Compare(a.rank, b.rank), cmp.Compare(a.order, b.order))
	})
	return all
}

// listed is a line for each member, for a few of them without detail.
func listed(members []Match, detail int) (lines []string) {
	for i, m := range members {
		if detail == 0 && i == fewMembers {
			return append(lines, fmt.Sprintf("// and %d more", len(members)-i))
		}
		lines = append(lines, strings.TrimRight("\t"+m.line(), " "))
	}
	return lines
}

// printed is a documentation comment as plain text and as Markdown, in which
// formulas are LaTeX.
func printed(text string) (plain, markdown string) {
	p := comment.Parser{
		LookupSym:     func(string, string) bool { return true },
		LookupPackage: func(name string) (string, bool) { return name, true },
	}
	doc := p.Parse(text)
	for _, b := range doc.Content {
		withoutLinks(b)
	}
	pr := comment.Printer{HeadingLevel: 4, HeadingID: func(*comment.Heading) string { return "" }}
	return strings.TrimSpace(string(pr.Text(doc))), formulas(strings.TrimSpace(string(pr.Markdown(doc))))
}

// withoutLinks makes code of the links to other names, which lead nowhere here.
func withoutLinks(b comment.Block) {
	switch b := b.(type) {
	case *comment.Paragraph:
		b.Text = plainLinks(b.Text)
	case *comment.Heading:
		b.Text = plainLinks(b.Text)
	case *comment.List:
		for _, item := range b.Items {
			for _, c := range item.Content {
				withoutLinks(c)
			}
		}
	}
}

func plainLinks(all []comment.Text) []comment.Text {
	var out []comment.Text
	for _, t := range all {
		if l, ok := t.(*comment.DocLink); ok {
			out = append(out, l.Text...)
			continue
		}
		out = append(out, t)
	}
	return out
}

// line is a member of a type or package on a line of its own.
func (m Match) line() string {
	if s, ok := strings.CutPrefix(m.Signature, "func"); ok {
		return m.Text + s
	}
	return m.Text + " " + m.Signature
}

// headOf is the declaration of o in one line.
func headOf(o types.Object) string {
	name := o.Name()
	if p := o.Pkg(); p != nil && p.Path() != "cell" && o.Parent() == p.Scope() {
		name = p.Name() + "." + name
	}
	switch o := o.(type) {
	case *types.PkgName:
		return fmt.Sprintf("package %s // %q", o.Imported().Name(), o.Imported().Path())
	case *types.Func:
		s := o.Signature()
		if r := s.Recv(); r != nil {
			name = "(" + types.TypeString(r.Type(), byName) + ") " + name
		}
		return "func " + name + strings.TrimPrefix(types.TypeString(s, byName), "func")
	case *types.Builtin:
		return "func " + name
	case *types.TypeName:
		return "type " + name + " " + signatureOf(o)
	case *types.Const:
		return "const " + name + " " + signatureOf(o)
	case *types.Var:
		if o.IsField() {
			return "field " + name + " " + signatureOf(o)
		}
		return "var " + name + " " + signatureOf(o)
	}
	return name
}
