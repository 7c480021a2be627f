package assist

import (
	"cmp"
	"go/ast"
	"go/parser"
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

// A Match is one way to complete. Kind is "function", "method", "variable",
// "constant", "type", "field", "module" (a package) or "keyword".
type Match struct {
	Text, Kind, Signature string
	rank, order           int // lower comes first; order among those of one rank
}

// The ranks of matches.
const (
	rankWanted   = iota // a constant, or what else makes the type that is wanted here
	rankFits            // a variable of the type that is wanted here
	rankField           // a field, in the order of the struct
	rankMember          // another member
	rankOther           // a member that is wanted less often
	rankPlumbing        // a member that is there for other code
	rankLocal           // declared in this cell
	rankSession         // declared in the session
	rankPackage
	rankBuiltin
	rankKeyword
)

// Complete says how source can go on at the offset cursor.
func Complete(scope Scope, source string, cursor int) Completion {
	cursor = max(0, min(cursor, len(source)))
	if start, end, ok := importAt(source, cursor); ok {
		return Completion{start, end, importPaths(scope, source[start:cursor])}
	}
	start, end := wordAt(source, cursor)
	prefix := source[start:cursor]
	none := Completion{Start: cursor, End: cursor}
	if inText(source, start) {
		if out, ok := textAt(scope, source, cursor); ok {
			return out
		}
		return none
	}
	c, path := checkAt(scope, source, start, end)
	if path == nil {
		return none
	}
	out := Completion{Start: start, End: end}
	for _, m := range c.candidates(scope, path) {
		if m.rank == rankWanted && hasPrefix(m.Text[strings.IndexByte(m.Text, '.')+1:], prefix) || hasPrefix(strings.TrimPrefix(m.Text, "&"), prefix) {
			m.Signature = strings.ReplaceAll(m.Signature, placeholder, source[start:end])
			if (m.rank == rankField || m.rank == rankMember) && !strings.HasPrefix(m.Text, prefix) {
				m.rank = rankOther // written in another case
			}
			out.Matches = append(out.Matches, m)
		}
	}
	slices.SortStableFunc(out.Matches, func(a, b Match) int {
		return cmp.Or(cmp.Compare(a.rank, b.rank), cmp.Compare(a.order, b.order), cmp.Compare(strings.ToLower(a.Text), strings.ToLower(b.Text)), cmp.Compare(a.Text, b.Text))
	})
	seen := map[string]bool{}
	out.Matches = slices.DeleteFunc(out.Matches, func(m Match) bool {
		again := seen[m.Text]
		seen[m.Text] = true
		return again
	})
	return out
}

// checkAt checks the source with the placeholder from start to end and returns
// the way to it, nil if the parser does not see it in any form.
func checkAt(scope Scope, source string, start, end int) (*checked, []ast.Node) {
	before, after := source[:start], source[end:]
	for _, text := range []func() string{
		func() string { return before + placeholder + after },
		// What follows the cursor may keep the parser from seeing it.
		func() string { return before + placeholder },
		// After go and defer it sees only calls.
		func() string { return before + placeholder + "()" + after },
		// So may what is wrong before.
		func() string { return withoutBroken(before) + placeholder },
		func() string { return lastLine(before) + placeholder },
	} {
		c := check(scope, text())
		if path := c.pathTo(func(id *ast.Ident) bool { return id.Name == placeholder }); path != nil {
			return c, path
		}
	}
	return nil, nil
}

// lastLine blanks all lines but the last.
func lastLine(source string) string {
	i := strings.LastIndexByte(source, '\n') + 1
	return string(blanked(source[:i])) + source[i:]
}

// withoutBroken blanks the statements and declarations that do not parse, but
// for the last one.
func withoutBroken(source string) string {
	b := []byte(source)
	chunks := tokenise(source).chunks
	for i, k := range chunks {
		if i == len(chunks)-1 {
			break
		}
		text := source[k.start:k.end]
		around := "package cell;func _(){\n" + text + "\n}"
		if k.isDeclaration() {
			around = "package cell;" + text
		}
		if _, err := parser.ParseFile(token.NewFileSet(), "", around, parser.SkipObjectResolution); err != nil {
			copy(b[k.start:k.end], blanked(text))
		}
	}
	return string(b)
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
		members := c.membersOf(sel.X)
		if isTypePlace(path[1:]) {
			typesFirst(members)
			return members
		}
		return c.wantedFirst(scope, sel, path[1:], members)
	}
	var all []Match
	if lit, keyed := literalAround(path); lit != nil {
		fields, only := c.missingFields(lit, id)
		all = append(all, fields...)
		if only || keyed {
			return all
		}
	}
	want := c.wantedType(path)
	all = append(all, c.wanted(scope, want)...)
	if want == nil && c.scales(path) {
		all = append(all, c.units(scope)...)
	}
	all = append(all, c.visible(id.Pos(), want)...)
	for _, name := range scope.ImportNames() {
		all = append(all, Match{Text: name, Kind: "module", Signature: scope.ImportPath(name), rank: rankPackage})
	}
	if isTypePlace(path) {
		typesFirst(all)
	}
	for tok := token.BREAK; tok <= token.VAR; tok++ {
		all = append(all, Match{Text: tok.String(), Kind: "keyword", rank: rankKeyword})
	}
	return all
}

func parent(path []ast.Node, i int) ast.Node {
	if i+1 < len(path) {
		return path[i+1]
	}
	return nil
}

// visible lists what is declared where pos is. What has the type want comes
// first.
func (c *checked) visible(pos token.Pos, want types.Type) []Match {
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
				m := match(o, rank)
				if rank == rankSession && o.Pkg() != nil && o.Pkg() != c.pkg && o.Pkg().Path() != "cell" {
					m.rank = rankPackage // imported with a dot
				}
				if _, isVar := o.(*types.Var); isVar && want != nil {
					switch {
					case fits(o.Type(), want):
						m.rank = rankFits
					case fits(types.NewPointer(o.Type()), want):
						m.rank, m.Text = rankFits, "&"+m.Text
					}
				}
				all = append(all, m)
			}
		}
	}
	return all
}

// fits reports whether a value of type t is what is wanted: of this very type,
// or one that has the methods that are wanted.
func fits(t, want types.Type) bool {
	if types.Identical(t, want) {
		return true
	}
	i, ok := want.Underlying().(*types.Interface)
	return ok && !i.Empty() && types.AssignableTo(t, want)
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
		return "type"
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
			return "field"
		}
	}
	return "variable"
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
