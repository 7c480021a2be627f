package assist

import (
	"go/ast"
	"go/scanner"
	"go/token"
	"go/types"
	"strings"
)

// textAt completes the text at the cursor, if it is given to a function of which
// the scope knows what texts it takes.
func textAt(scope Scope, source string, cursor int) (Completion, bool) {
	known, ok := scope.(Texts)
	if !ok {
		return Completion{}, false
	}
	start, end, ok := stringAt(source, cursor)
	if !ok {
		return Completion{}, false
	}
	behind := end
	if behind < len(source) && source[behind] == '"' {
		behind++
	}
	c, path := checkAt(scope, source, start-1, behind)
	call, ok := parent(path, 0).(*ast.CallExpr)
	if !ok || len(call.Args) == 0 || call.Args[0] != path[0] {
		return Completion{}, false
	}
	sel, ok := call.Fun.(*ast.SelectorExpr)
	if !ok {
		return Completion{}, false
	}
	f, ok := c.info.Uses[sel.Sel].(*types.Func)
	if !ok || f.Pkg() == nil || f.Signature().Recv() != nil {
		return Completion{}, false
	}
	out := Completion{Start: start, End: end}
	for _, t := range known.Texts(f.Pkg().Path(), f.Name()) {
		if hasPrefix(t, source[start:cursor]) {
			out.Matches = append(out.Matches, Match{Text: t, Kind: "text"})
		}
	}
	return out, true
}

// stringAt returns where the text around the cursor, in double quotes that may
// be open, begins and ends.
func stringAt(source string, cursor int) (start, end int, ok bool) {
	file := token.NewFileSet().AddFile("", -1, len(source))
	var s scanner.Scanner
	s.Init(file, []byte(source), func(token.Position, string) {}, 0)
	for {
		pos, tok, lit := s.Scan()
		at := file.Offset(pos)
		if tok == token.EOF || at >= cursor {
			return 0, 0, false
		}
		if tok != token.STRING || lit[0] != '"' {
			continue
		}
		start, end = at+1, at+len(lit)
		if len(lit) > 1 && strings.HasSuffix(lit, `"`) {
			end--
		} else { // open: to the end of the name
			rest := source[start:]
			if i := strings.IndexAny(rest, "\n)"); i >= 0 {
				rest = rest[:i]
			}
			end = start + len(rest)
		}
		if start <= cursor && cursor <= end {
			return start, end, true
		}
	}
}
