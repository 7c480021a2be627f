package assist

import (
	"cmp"
	"go/ast"
	"go/scanner"
	"go/token"
	"go/types"
	"slices"
	"strings"
	"unicode"
	"unicode/utf8"
)

// A Completion lists what can stand from Start to End, offsets in bytes.
type Completion struct {
	Start, End int
	Matches    []Match
}

// A Match is one way to complete. Kind is "function", "method", "instance" (a
// variable), "constant", "class" (a type), "interface", "property" (a field),
// "module" (a package) or "keyword".
type Match struct {
	Text, Kind, Signature string
	rank                  int // lower comes first
}

// The ranks of matches.
const (
	rankWanted  = iota // has just the type that is wanted here
	rankMember         // a field that a struct literal lacks, a member
	rankLocal          // declared in this cell
	rankSession        // declared in the session
	rankPackage
	rankBuiltin
)

// Complete says how source can go on at the offset cursor.
func Complete(scope Scope, source string, cursor int) Completion {
	cursor = max(0, min(cursor, len(source)))
	start, end := wordAt(source, cursor)
	prefix := source[start:cursor]
	none := Completion{Start: cursor, End: cursor}
	if inText(source, start) {
		return none
	}
	text := source[:start] + placeholder + source[end:]
	c := check(scope, text)
	isCursor := func(id *ast.Ident) bool { return id.Name == placeholder }
	path := c.pathTo(isCursor)
	if path == nil {
		// What follows the cursor keeps the parser from seeing it.
		c = check(scope, source[:start]+placeholder)
		if path = c.pathTo(isCursor); path == nil {
			return none
		}
	}
	out := Completion{Start: start, End: end}
	for _, m := range c.candidates(scope, path) {
		if m.rank == rankWanted && hasPrefix(m.Text[strings.IndexByte(m.Text, '.')+1:], prefix) || hasPrefix(m.Text, prefix) {
			out.Matches = append(out.Matches, m)
		}
	}
	slices.SortStableFunc(out.Matches, func(a, b Match) int {
		return cmp.Or(cmp.Compare(a.rank, b.rank), cmp.Compare(strings.ToLower(a.Text), strings.ToLower(b.Text)), cmp.Compare(a.Text, b.Text))
	})
	out.Matches = slices.CompactFunc(out.Matches, func(a, b Match) bool { return a.Text == b.Text })
	return out
}

// hasPrefix is strings.HasPrefix that does not care for case.
func hasPrefix(s, prefix string) bool {
	return len(s) >= len(prefix) && strings.EqualFold(s[:len(prefix)], prefix)
}

// wordAt returns where the name around the offset cursor begins and ends.
func wordAt(source string, cursor int) (start, end int) {
	letter := func(r rune) bool { return r == '_' || unicode.IsLetter(r) || unicode.IsDigit(r) }
	start, end = cursor, cursor
	for start > 0 {
		r, n := utf8.DecodeLastRuneInString(source[:start])
		if !letter(r) {
			break
		}
		start -= n
	}
	for end < len(source) {
		r, n := utf8.DecodeRuneInString(source[end:])
		if !letter(r) {
			break
		}
		end += n
	}
	return start, end
}

// inText reports whether the offset is inside a comment, a string, a rune or a
// number.
func inText(source string, offset int) bool {
	file := token.NewFileSet().AddFile("", -1, len(source))
	var s scanner.Scanner
	s.Init(file, []byte(source), func(token.Position, string) {}, scanner.ScanComments)
	for {
		pos, tok, lit := s.Scan()
		at := file.Offset(pos)
		if tok == token.EOF || at > offset {
			return false
		}
		switch tok {
		case token.COMMENT:
			line := strings.HasPrefix(lit, "//")
			if at < offset && (offset < at+len(lit) || line && offset == at+len(lit)) {
				return true
			}
		case token.STRING, token.CHAR:
			if at < offset && offset < at+len(lit) {
				return true
			}
		case token.INT, token.FLOAT, token.IMAG:
			if at <= offset && offset < at+len(lit) {
				return true
			}
		}
	}
}

// candidates lists everything that can stand at the name that path leads to.
func (c *checked) candidates(scope Scope, path []ast.Node) []Match {
	id := path[0].(*ast.Ident)
	if sel, ok := parent(path, 0).(*ast.SelectorExpr); ok && sel.Sel == id {
		return c.membersOf(sel.X)
	}
	var all []Match
	if lit, keyed := literalAround(path); lit != nil {
		fields, only := c.missingFields(lit, id)
		all = append(all, fields...)
		if only || keyed {
			return all
		}
	}
	all = append(all, c.wanted(scope, path)...)
	all = append(all, c.visible(id.Pos())...)
	for _, name := range scope.ImportNames() {
		all = append(all, Match{Text: name, Kind: "module", Signature: scope.ImportPath(name), rank: rankPackage})
	}
	for tok := token.BREAK; tok <= token.VAR; tok++ {
		all = append(all, Match{Text: tok.String(), Kind: "keyword", rank: rankBuiltin})
	}
	return all
}

func parent(path []ast.Node, i int) ast.Node {
	if i+1 < len(path) {
		return path[i+1]
	}
	return nil
}

// visible lists what is declared where pos is.
func (c *checked) visible(pos token.Pos) []Match {
	var all []Match
	inner := c.pkg.Scope().Innermost(pos)
	if inner == nil {
		inner = c.pkg.Scope()
	}
	for s := inner; s != nil; s = s.Parent() {
		rank := rankLocal
		switch s {
		case c.pkg.Scope():
			rank = rankSession
		case types.Universe:
			rank = rankBuiltin
		}
		for _, name := range s.Names() {
			if name == placeholder || name == "_" {
				continue
			}
			if _, o := inner.LookupParent(name, pos); o != nil && o == s.Lookup(name) {
				all = append(all, match(o, rank))
			}
		}
	}
	return all
}

// match is how an object completes.
func match(o types.Object, rank int) Match {
	m := Match{Text: o.Name(), rank: rank}
	m.Kind, m.Signature = kindOf(o), signatureOf(o)
	return m
}

// kindOf is the kind of a match that is an object.
func kindOf(o types.Object) string {
	switch o := o.(type) {
	case *types.PkgName:
		return "module"
	case *types.TypeName:
		if types.IsInterface(o.Type()) {
			return "interface"
		}
		return "class"
	case *types.Const, *types.Nil:
		return "constant"
	case *types.Builtin:
		return "function"
	case *types.Func:
		if s, ok := o.Type().(*types.Signature); ok && s.Recv() != nil {
			return "method"
		}
		return "function"
	case *types.Var:
		if o.IsField() {
			return "property"
		}
	}
	return "instance"
}

// byName names packages in types by their names.
func byName(p *types.Package) string {
	if p.Path() == "cell" {
		return ""
	}
	return p.Name()
}

// signatureOf is the type of an object as it is written in Go.
func signatureOf(o types.Object) string {
	switch o := o.(type) {
	case *types.PkgName:
		return o.Imported().Path()
	case *types.TypeName:
		if o.IsAlias() {
			return "= " + types.TypeString(types.Unalias(o.Type()), byName)
		}
		switch u := o.Type().Underlying().(type) {
		case *types.Struct:
			return "struct"
		case *types.Interface:
			return "interface"
		default:
			return types.TypeString(u, byName)
		}
	case *types.Builtin, *types.Nil:
		return ""
	case *types.Const:
		return types.TypeString(o.Type(), byName) + " = " + o.Val().String()
	}
	return types.TypeString(o.Type(), byName)
}
