package assist

import (
	"cmp"
	"go/scanner"
	"go/token"
	"slices"
	"strings"
)

// importAt returns where the path around the cursor begins and ends, without its
// quotes, if the cursor is in the string of an import. The string may be open.
func importAt(source string, cursor int) (start, end int, ok bool) {
	if !strings.Contains(source, "import") {
		return 0, 0, false
	}
	file := token.NewFileSet().AddFile("", -1, len(source))
	var s scanner.Scanner
	s.Init(file, []byte(source), func(token.Position, string) {}, 0)
	// What an import is made of, from its keyword on; group is inside brackets.
	in, group := false, false
	for {
		pos, tok, lit := s.Scan()
		at := file.Offset(pos)
		if tok == token.EOF || at >= cursor {
			return 0, 0, false
		}
		switch {
		case tok == token.IMPORT:
			in, group = true, false
		case !in:
		case tok == token.LPAREN:
			group = true
		case tok == token.STRING:
			quote := lit[:1]
			closed := len(lit) > 1 && strings.HasSuffix(lit, quote)
			start, end = at+1, at+len(lit)
			if closed {
				end--
			}
			if !closed {
				end = min(end, start+len(strings.TrimRight(source[start:end], " \t\r\n)")))
			}
			if start <= cursor && cursor <= end {
				return start, end, true
			}
		case tok == token.SEMICOLON, tok == token.IDENT, tok == token.PERIOD:
			in = group || tok != token.SEMICOLON
		default:
			in = false
		}
	}
}

// house orders import paths: levelsum's own, Go's, others.
func house(path string) int {
	switch {
	case strings.HasPrefix(path, "levelsum/"):
		return 0
	case !strings.Contains(path, "."):
		return 1
	}
	return 2
}

// importPaths lists what can be imported by a path that begins with prefix, and
// after that the paths with an element that does.
func importPaths(scope Scope, prefix string) []Match {
	var begin, within []Match
	for _, p := range scope.ImportPaths() {
		m := Match{Text: p, Kind: "module", Signature: `"` + p + `"`}
		switch {
		case hasPrefix(p, prefix):
			begin = append(begin, m)
		case slices.ContainsFunc(strings.Split(p, "/"), func(e string) bool { return hasPrefix(e, prefix) }):
			within = append(within, m)
		}
	}
	slices.SortStableFunc(begin, func(a, b Match) int { return cmp.Compare(house(a.Text), house(b.Text)) })
	return append(begin, within...)
}
