package assist

import (
	"encoding/json"
	"go/ast"
	"go/types"
	"os"
	"path/filepath"
	"strings"
	"sync"

	"levelsum/kernel/symbols/export"
)

// Docs finds the documentation of packages: what was stored when levelsum was
// installed, which needs no source, or else in their source. It reads a package
// once. A nil Docs knows nothing. It is safe for concurrent use.
type Docs struct {
	// Stored is the folder with the documentation that was stored, "" if none.
	Stored string
	// folder is where the source of a package is, "" if it is not known.
	folder func(path string) string

	mu   sync.Mutex // guards read
	read map[string]export.Docs
}

// NewDocs returns documentation from the source of Go's own packages below
// goroot and that of a module below source. Either may be "".
func NewDocs(goroot, module, source string) *Docs {
	return &Docs{read: map[string]export.Docs{}, folder: func(path string) string {
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

// load returns the documentation of a package.
func (d *Docs) load(path string) export.Docs {
	if d == nil {
		return nil
	}
	d.mu.Lock()
	defer d.mu.Unlock()
	if m, ok := d.read[path]; ok {
		return m
	}
	var m export.Docs
	if d.Stored != "" {
		if data, err := os.ReadFile(filepath.Join(d.Stored, filepath.FromSlash(path)+".json")); err == nil {
			_ = json.Unmarshal(data, &m) // broken, it is as if it were not there
		}
	}
	if len(m) == 0 {
		if folder := d.folder(path); folder != "" {
			m = export.ReadDocs(folder)
		}
	}
	d.read[path] = m
	return m
}

// Declared scopes know the comments with which cells have declared names, "T.m"
// for a method or field, and the number of the cell.
type Declared interface {
	Documentation(name string) (text string, cell int, ok bool)
}

// docOf returns the documentation of an object: of a package, of the cell that
// is being written or of an earlier one, whose number it tells too.
func (c *checked) docOf(scope Scope, docs *Docs, o types.Object) (text string, cell int) {
	if p, ok := o.(*types.PkgName); ok {
		return docs.load(p.Imported().Path())[""], 0
	}
	if o.Pkg() == nil {
		return "", 0
	}
	if o.Pkg().Path() != "cell" {
		return docs.load(o.Pkg().Path())[keyOf(o, o.Pkg())], 0
	}
	if v, ok := o.(*types.Var); ok && !v.IsField() {
		if v.Pos().IsValid() { // of this cell
			return c.remark(v), 0
		}
		if d, ok := scope.(Declared); ok {
			text, _, _ := d.Documentation(o.Name()) // the cell is said with the value
			return text, 0
		}
		return "", 0
	}
	key := keyOf(o, c.pkg)
	if text, ok := c.own(key); ok {
		return text, 0
	}
	if d, ok := scope.(Declared); ok {
		if text, cell, ok := d.Documentation(key); ok {
			return text, cell
		}
	}
	return "", 0
}

// remark is the comment on the statement of the cell that declares v.
func (c *checked) remark(v *types.Var) (text string) {
	ast.Inspect(c.file, func(n ast.Node) bool {
		var names []ast.Expr
		switch n := n.(type) {
		case *ast.AssignStmt:
			names = n.Lhs
		case *ast.GenDecl:
			for _, s := range n.Specs {
				if s, ok := s.(*ast.ValueSpec); ok && len(n.Specs) == 1 {
					for _, id := range s.Names {
						names = append(names, id)
					}
				}
			}
		case *ast.ValueSpec:
			for _, id := range n.Names {
				names = append(names, id)
			}
		}
		for _, e := range names {
			if id, ok := e.(*ast.Ident); ok && id.Pos() == v.Pos() && text == "" {
				base := c.where(0)
				text = export.CommentOn(c.source, int(n.Pos()-base), int(n.End()-base))
			}
		}
		return text == ""
	})
	return text
}

// own returns the comment of a name that the cell itself declares.
func (c *checked) own(key string) (string, bool) {
	for _, d := range c.file.Decls {
		above := export.CommentAbove(c.source, int(d.Pos()-c.file.FileStart)-len(beforeDecls))
		if text, ok := export.Documented(d, above)[key]; ok {
			return text, true
		}
	}
	return "", false
}

// keyOf is the name by which an object is documented. Of a field it looks for
// the type in the package p.
func keyOf(o types.Object, p *types.Package) string {
	switch o := o.(type) {
	case *types.Func:
		if r := o.Origin().Signature().Recv(); r != nil {
			return typeName(r.Type()) + "." + o.Name()
		}
	case *types.Var:
		if !o.IsField() {
			break
		}
		for _, name := range p.Scope().Names() {
			t, ok := p.Scope().Lookup(name).(*types.TypeName)
			if !ok {
				continue
			}
			if s, ok := t.Type().Underlying().(*types.Struct); ok {
				for f := range s.Fields() {
					if f == o.Origin() {
						return name + "." + o.Name()
					}
				}
			}
		}
	}
	return o.Name()
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

// definition is how a constant of a package is defined, if that is more than a
// number.
func (d *Docs) definition(o types.Object) string {
	if _, ok := o.(*types.Const); !ok || o.Pkg() == nil || o.Pkg().Path() == "cell" {
		return ""
	}
	return d.load(o.Pkg().Path())["="+o.Name()]
}
