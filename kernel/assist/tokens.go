package assist

import (
	"go/scanner"
	"go/token"
	"strings"
)

// tokens is what the scan of a cell found.
type tokens struct {
	open     []opening // brackets without their partner
	openText bool      // ends inside a comment or a raw string
	bad      bool      // cannot become right
	dangling bool      // ends with a token that something has to follow
	chunks   []chunk
}

type opening struct {
	close token.Token
	line  int
}

// A chunk is a declaration or statement at depth 0.
type chunk struct {
	start, end int // in the source, without the semicolon
	toks       []token.Token
}

// openLines counts the lines on which a bracket was left open.
func (t *tokens) openLines() int {
	n, last := 0, 0
	for _, o := range t.open {
		if o.line != last {
			n, last = n+1, o.line
		}
	}
	return n
}

var closers = map[token.Token]token.Token{
	token.LPAREN: token.RPAREN,
	token.LBRACK: token.RBRACK,
	token.LBRACE: token.RBRACE,
}

func tokenise(source string) *tokens {
	t := &tokens{}
	fset := token.NewFileSet()
	file := fset.AddFile("", fset.Base(), len(source))
	var s scanner.Scanner
	s.Init(file, []byte(source), func(_ token.Position, msg string) {
		if strings.HasPrefix(msg, "comment not terminated") || strings.HasPrefix(msg, "raw string literal not terminated") {
			t.openText = true
		} else {
			t.bad = true
		}
	}, 0)
	start := 0
	var toks []token.Token
	for {
		pos, tok, lit := s.Scan()
		offset := file.Offset(pos)
		switch tok {
		case token.LPAREN, token.LBRACK, token.LBRACE:
			t.open = append(t.open, opening{closers[tok], file.Line(pos)})
		case token.RPAREN, token.RBRACK, token.RBRACE:
			if n := len(t.open); n == 0 || t.open[n-1].close != tok {
				t.bad = true
			} else {
				t.open = t.open[:n-1]
			}
		}
		end := tok == token.EOF
		if end || tok == token.SEMICOLON && len(t.open) == 0 {
			if len(toks) > 0 {
				t.chunks = append(t.chunks, chunk{start, offset, toks})
			}
			start, toks = min(offset+len(lit), len(source)), nil
		} else {
			toks = append(toks, tok)
		}
		if end {
			return t
		}
		// After a token that can end a statement the scanner puts a semicolon,
		// at the end of the source too; so the last token is a semicolon or
		// asks for more.
		t.dangling = tok != token.SEMICOLON
	}
}

// isDeclaration reports whether the chunk is an import, a function or a method:
// what cannot stand inside a function.
func (c chunk) isDeclaration() bool {
	switch c.toks[0] {
	case token.IMPORT:
		return true
	case token.FUNC:
	default:
		return false
	}
	if len(c.toks) > 1 && c.toks[1] == token.IDENT {
		return true
	}
	// A method has "(receiver) name (", a function literal never has.
	depth := 0
	for i, tok := range c.toks {
		switch tok {
		case token.LPAREN:
			depth++
		case token.RPAREN:
			if depth--; depth == 0 {
				return i+2 < len(c.toks) && c.toks[i+1] == token.IDENT && c.toks[i+2] == token.LPAREN
			}
		}
	}
	return false
}
