package assist

import (
	"go/ast"
	"go/build"
	"go/doc"
	"go/parser"
	"go/token"
	"go/types"
	"path/filepath"
	"strings"
	"sync"
)

// Docs finds the documentation of packages in their source. It reads a package
// once. A nil Docs knows nothing. It is safe for concurrent use.
type Docs struct {
	// folder is where the source of a package is, "" if it is not known.
	folder func(path string) string

	mu   sync.Mutex // guards read
	read map[string]map[string]string
}

// NewDocs returns documentation from the source of Go's own packages below
// goroot and that of a module below source. Either may be "".
func NewDocs(goroot, module, source string) *Docs {
	return &Docs{read: map[string]map[string]string{}, folder: func(path string) string {
		if path == module || strings.HasPrefix(path, module+"/") {
			if source == "" {
				return ""
			}
			return filepath.Join(source, filepath.FromSlash(strings.TrimPrefix(path, module)))
		}
		first, _, _ := strings.Cut(path, "/")
		if goroot == "" || strings.Contains(first, ".") {
			return ""
		}
		return filepath.Join(goroot, "src", filepath.FromSlash(path))
	}}
}

// of returns the documentation of o, "" if there is none.
func (d *Docs) of(o types.Object) string {
	if d == nil {
		return ""
	}
	p, key := o.Pkg(), o.Name()
	switch o := o.(type) {
	case *types.PkgName:
		p, key = o.Imported(), ""
	case *types.Func:
		o = o.Origin()
		if r := o.Signature().Recv(); r != nil {
			key = typeName(r.Type()) + "." + key
		}
	case *types.Var:
		if o.IsField() {
			key = "." + key
		}
	}
	if p == nil || p.Path() == "cell" {
		return ""
	}
	return d.load(p.Path())[key]
}

// typeName is the name of the type that a method has as its receiver.
func typeName(t types.Type) string {
	if ptr, ok := t.(*types.Pointer); ok {
		t = ptr.Elem()
	}
	if n, ok := types.Unalias(t).(*types.Named); ok {
		return n.Obj().Name()
	}
	return ""
}

// load returns the documentation of a package by name: "" for the package
// itself, "T.m" for a method, ".f" for a field whose name is used once.
func (d *Docs) load(path string) map[string]string {
	d.mu.Lock()
	defer d.mu.Unlock()
	if m, ok := d.read[path]; ok {
		return m
	}
	m := map[string]string{}
	d.read[path] = m
	folder := d.folder(path)
	if folder == "" {
		return m
	}
	b, err := build.ImportDir(folder, 0)
	if err != nil && b == nil {
		return m
	}
	fset := token.NewFileSet()
	var files []*ast.File
	for _, name := range append(b.GoFiles, b.CgoFiles...) {
		if f, err := parser.ParseFile(fset, filepath.Join(folder, name), nil, parser.ParseComments); err == nil {
			files = append(files, f)
		}
	}
	if len(files) == 0 {
		return m
	}
	p, err := doc.NewFromFiles(fset, files, path)
	if err != nil {
		return m
	}
	m[""] = p.Doc
	values := func(all []*doc.Value) {
		for _, v := range all {
			group := v.Doc
			for _, s := range v.Decl.Specs {
				s := s.(*ast.ValueSpec)
				text := s.Doc.Text() + s.Comment.Text()
				if text == "" {
					text = group
				}
				for _, n := range s.Names {
					m[n.Name] = text
				}
			}
		}
	}
	funcs := func(all []*doc.Func, prefix string) {
		for _, f := range all {
			m[prefix+f.Name] = f.Doc
		}
	}
	values(p.Consts)
	values(p.Vars)
	funcs(p.Funcs, "")
	for _, t := range p.Types {
		m[t.Name] = t.Doc
		values(t.Consts)
		values(t.Vars)
		funcs(t.Funcs, "")
		funcs(t.Methods, t.Name+".")
		fieldDocs(t.Decl, m)
	}
	return m
}

// fieldDocs notes the documentation of the fields of a type. Types share the
// names of fields, so a name with several documentations has none.
func fieldDocs(decl *ast.GenDecl, m map[string]string) {
	ast.Inspect(decl, func(n ast.Node) bool {
		f, ok := n.(*ast.Field)
		if !ok {
			return true
		}
		text := f.Doc.Text() + f.Comment.Text()
		for _, name := range f.Names {
			key := "." + name.Name
			if old, ok := m[key]; ok && old != text {
				text = ""
			}
			m[key] = text
		}
		return true
	})
}
