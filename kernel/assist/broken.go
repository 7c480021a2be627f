package assist

import (
	"go/ast"
	"go/parser"
	"go/token"
	"go/types"
	"slices"
	"strings"
)

// placeholder stands for the name at the cursor.
const placeholder = "Ⱶcursor"

// A checked cell is what parser and type checker make of a cell, broken or not.
type checked struct {
	fset *token.FileSet
	file *ast.File
	pkg  *types.Package
	info *types.Info
	// source is the cell.
	source string
	// where maps an offset in the cell to a position in file.
	where func(offset int) token.Pos
}

const (
	beforeDecls = "package cell;"
	beforeStmts = "\nfunc _(){"
)

// check parses and checks a cell in which brackets may be open.
func check(scope Scope, source string) *checked {
	t := tokenise(source)
	decls, stmts := blanked(source), []byte(source)
	inDecls := make([]bool, len(t.chunks))
	for i, c := range t.chunks {
		end := c.end
		if end < len(source) && source[end] == ';' {
			end++
		}
		inDecls[i] = c.toks[0] == token.CONST || c.toks[0] == token.TYPE || c.isDeclaration()
		if inDecls[i] {
			copy(decls[c.start:], source[c.start:end])
			copy(stmts[c.start:], blanked(source[c.start:end]))
		}
	}
	var closing strings.Builder
	for _, o := range slices.Backward(t.open) {
		closing.WriteString("\n" + o.close.String())
	}
	// What is open is open in the last chunk.
	declEnd, stmtEnd := "", closing.String()
	if n := len(t.chunks); n > 0 && inDecls[n-1] {
		declEnd, stmtEnd = stmtEnd, ""
	}
	text := beforeDecls + string(decls) + declEnd + beforeStmts + string(stmts) + stmtEnd + "\n}"

	c := &checked{fset: token.NewFileSet(), source: source}
	c.file, _ = parser.ParseFile(c.fset, "", text, parser.AllErrors|parser.SkipObjectResolution|parser.ParseComments)
	start := c.fset.File(c.file.FileStart)
	c.where = func(offset int) token.Pos {
		base := len(beforeDecls) + len(decls) + len(declEnd) + len(beforeStmts)
		for i, k := range t.chunks {
			if inDecls[i] && k.start <= offset && offset <= k.end {
				base = len(beforeDecls)
			}
		}
		return start.Pos(min(base+offset, start.Size()))
	}
	c.types(scope)
	return c
}

// blanked is text with everything but line ends made blank.
func blanked(text string) []byte {
	b := []byte(text)
	for i := range b {
		if b[i] != '\n' {
			b[i] = ' '
		}
	}
	return b
}

// types checks the file against the scope. Errors are passed over.
func (c *checked) types(scope Scope) {
	c.pkg = types.NewPackage("cell", "cell")
	c.info = &types.Info{
		Types:      map[ast.Expr]types.TypeAndValue{},
		Defs:       map[*ast.Ident]types.Object{},
		Uses:       map[*ast.Ident]types.Object{},
		Selections: map[*ast.SelectorExpr]*types.Selection{},
	}
	own := map[string]bool{}
	for _, d := range c.file.Decls {
		switch d := d.(type) {
		case *ast.FuncDecl:
			if d.Recv == nil {
				own[d.Name.Name] = true
			}
		case *ast.GenDecl:
			for _, s := range d.Specs {
				switch s := s.(type) {
				case *ast.TypeSpec:
					own[s.Name.Name] = true
				case *ast.ValueSpec:
					for _, n := range s.Names {
						own[n.Name] = true
					}
				case *ast.ImportSpec:
					own[importName(s)] = true
				}
			}
		}
	}
	for _, d := range c.file.Decls {
		if f, ok := d.(*ast.FuncDecl); ok && f.Recv != nil && !own[receiverType(f)] {
			asFunction(f)
		}
	}
	for _, name := range scope.Names() {
		if own[name] {
			continue
		}
		switch o := scope.Lookup(name).(type) {
		case nil:
		case *types.Var:
			// The session's variable may be visible only from its own place on.
			c.pkg.Scope().Insert(types.NewVar(token.NoPos, c.pkg, name, o.Type()))
		default:
			c.pkg.Scope().Insert(o)
		}
	}
	for _, path := range dotsOf(scope) {
		p, err := scope.Import(path)
		if err != nil {
			continue
		}
		for _, name := range p.Scope().Names() {
			if o := p.Scope().Lookup(name); o.Exported() && !own[name] && c.pkg.Scope().Lookup(name) == nil {
				c.pkg.Scope().Insert(o)
			}
		}
	}
	ast.Inspect(c.file, func(n ast.Node) bool {
		sel, ok := n.(*ast.SelectorExpr)
		if !ok {
			return true
		}
		id, ok := sel.X.(*ast.Ident)
		if !ok || own[id.Name] || c.pkg.Scope().Lookup(id.Name) != nil {
			return true
		}
		if path := scope.ImportPath(id.Name); path != "" {
			if p, err := scope.Import(path); err == nil {
				c.pkg.Scope().Insert(types.NewPkgName(token.NoPos, c.pkg, id.Name, p))
			}
		}
		return true
	})
	// The checker is made for files that a parser has found right; should it
	// fall over what ours has made of a broken cell, what it has understood so
	// far is still good.
	defer func() { _ = recover() }()
	conf := types.Config{Importer: scope, Error: func(error) {}, GoVersion: "go1.26"}
	_ = types.NewChecker(&conf, c.fset, c.pkg, c.info).Files([]*ast.File{c.file})
}

// receiverType is the name of the type of which f is a method.
func receiverType(f *ast.FuncDecl) string {
	if len(f.Recv.List) == 0 {
		return ""
	}
	x := f.Recv.List[0].Type
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

// asFunction makes a function of a method of one of the session's types, since
// the checker knows methods only beside their type. Inside, nothing changes.
func asFunction(f *ast.FuncDecl) {
	f.Name = &ast.Ident{NamePos: f.Name.NamePos, Name: "_"}
	if f.Type.Params == nil {
		f.Type.Params = &ast.FieldList{}
	}
	f.Type.Params.List = append(f.Recv.List, f.Type.Params.List...)
	f.Recv = nil
}

// importName is the name under which an import is used.
func importName(s *ast.ImportSpec) string {
	if s.Name != nil {
		return s.Name.Name
	}
	path := strings.Trim(s.Path.Value, "`\"")
	return path[strings.LastIndexByte(path, '/')+1:]
}

// pathTo returns the nodes from the identifier at pos outwards; nil if there is
// no identifier.
func (c *checked) pathTo(match func(*ast.Ident) bool) []ast.Node {
	var path, found []ast.Node
	ast.Inspect(c.file, func(n ast.Node) bool {
		if found != nil {
			return false
		}
		if n == nil {
			path = path[:len(path)-1]
			return true
		}
		path = append(path, n)
		if id, ok := n.(*ast.Ident); ok && match(id) {
			found = slices.Clone(path)
			slices.Reverse(found)
		}
		return true
	})
	return found
}
