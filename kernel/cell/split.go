package cell

import (
	"crypto/sha256"
	"fmt"
	"go/ast"
	"go/parser"
	"go/scanner"
	"go/token"
	"strings"
)

// A Source is the text of one cell as it was run.
type Source struct {
	N    int    // the cell's number in messages
	Text string // what the user wrote
	ID   string // the front end's name of the cell, or ""
}

// Name is the file name of the cell in positions: In[3].
func (s *Source) Name() string { return fmt.Sprintf("In[%d]", s.N) }

// Tag is the file name of the cell in compiled code: In[ and a hash of the
// text. It does not hold the number, so that a cell that is run again as it was
// is compiled once.
func (s *Source) Tag() string {
	sum := sha256.Sum256([]byte(s.Text))
	return fmt.Sprintf("In[%x]", sum[:6])
}

// chunk is a piece of a cell between two semicolons at depth 0.
type chunk struct {
	kind       token.Token // IMPORT, CONST, TYPE, VAR, FUNC; PACKAGE; ILLEGAL for a statement
	start, end int         // byte offsets in the source; end includes the semicolon if it is written
}

// chunks cuts a cell at the semicolons of depth 0, written and automatic ones.
// Text that does not scan is one statement: the parser says what is wrong.
func chunks(text string) []chunk {
	fset := token.NewFileSet()
	file := fset.AddFile("", fset.Base(), len(text))
	var s scanner.Scanner
	s.Init(file, []byte(text), func(token.Position, string) {}, 0)
	var (
		out   []chunk
		toks  []token.Token // tokens of the current chunk, the first few
		start = -1
		depth int
	)
	flush := func(end int) {
		if start < 0 {
			return
		}
		out = append(out, chunk{kind: kindOf(toks), start: start, end: end})
		start, toks = -1, toks[:0]
	}
	for {
		pos, tok, lit := s.Scan()
		off := file.Offset(pos)
		if tok == token.EOF {
			flush(len(text))
			return out
		}
		if tok == token.SEMICOLON && depth <= 0 {
			end := off
			if lit == ";" {
				end++
			}
			flush(end)
			continue
		}
		if start < 0 {
			start = off
		}
		switch tok {
		case token.LPAREN, token.LBRACK, token.LBRACE:
			depth++
		case token.RPAREN, token.RBRACK, token.RBRACE:
			depth--
		}
		toks = append(toks, tok)
	}
}

// kindOf tells a declaration from a statement by its first tokens. A function
// literal or function type at the start of a statement is not a declaration.
func kindOf(toks []token.Token) token.Token {
	switch toks[0] {
	case token.IMPORT, token.CONST, token.TYPE, token.VAR, token.PACKAGE:
		return toks[0]
	case token.FUNC:
		if len(toks) > 1 && toks[1] == token.IDENT {
			return token.FUNC
		}
		// func (r T) name(: a method. func (x int) T {: a literal.
		depth := 0
		for i, t := range toks[1:] {
			switch t {
			case token.LPAREN:
				depth++
			case token.RPAREN:
				depth--
			}
			if depth == 0 {
				rest := toks[1+i+1:]
				if len(rest) > 1 && rest[0] == token.IDENT && rest[1] == token.LPAREN {
					return token.FUNC
				}
				return token.ILLEGAL
			}
		}
	}
	return token.ILLEGAL
}

// parsed is a cell split in declarations and statements. Offsets of a node in
// the source are file offset minus the length of the prefix.
type parsed struct {
	src     *Source
	imports []*ast.ImportSpec
	decls   []ast.Decl // CONST, TYPE, FUNC
	lead    []ast.Decl // VAR before the first statement: initialised in Go's order
	body    *ast.BlockStmt
	stmts   []ast.Stmt // statements in order, including later VAR
	files   []*token.File
	directs []string // directive comments: //levelsum:compile
}

const (
	declPrefix = "package cell;"
	stmtPrefix = "package cell;func _(){"
)

// split parses a cell. The error is a Diagnostics.
func split(fset *token.FileSet, src *Source) (*parsed, error) {
	p := &parsed{src: src}
	if i := strings.IndexAny(src.Text, markers); i >= 0 {
		return nil, diagnosticAt(src, i, "the letters "+quoteMarkers+" are reserved in cells")
	}
	for line := range strings.Lines(src.Text) {
		if d, ok := strings.CutPrefix(strings.TrimSpace(line), "//levelsum:"); ok {
			p.directs = append(p.directs, strings.TrimSpace(d))
		}
	}
	cs := chunks(src.Text)
	leading := true
	decl, stmt := []byte(src.Text), []byte(src.Text)
	blank(decl)
	for _, c := range cs {
		if c.kind == token.ILLEGAL {
			leading = false
		}
		isDecl := c.kind != token.ILLEGAL && (c.kind != token.VAR || leading)
		if isDecl {
			blank(stmt[c.start:c.end])
		}
		if isDecl && c.kind != token.PACKAGE {
			copy(decl[c.start:c.end], src.Text[c.start:c.end])
		}
	}
	line := "/*line " + src.Name() + ":1:1*/"
	const mode = parser.ParseComments | parser.SkipObjectResolution | parser.AllErrors
	df, derr := parser.ParseFile(fset, src.Name(), declPrefix+line+string(decl)+"\n", mode)
	sf, serr := parser.ParseFile(fset, src.Name(), stmtPrefix+line+string(stmt)+"\n}\n", mode)
	for _, f := range []*ast.File{df, sf} {
		if f != nil && f.Pos().IsValid() {
			p.files = append(p.files, fset.File(f.Pos()))
		}
	}
	if ds := syntaxErrors(src, derr, serr); len(ds) > 0 {
		return p, ds
	}
	for _, d := range df.Decls {
		if g, ok := d.(*ast.GenDecl); ok && g.Tok == token.IMPORT {
			for _, s := range g.Specs {
				p.imports = append(p.imports, s.(*ast.ImportSpec))
			}
			continue
		}
		if g, ok := d.(*ast.GenDecl); ok && g.Tok == token.VAR {
			p.lead = append(p.lead, d)
			continue
		}
		p.decls = append(p.decls, d)
	}
	if len(sf.Decls) != 1 {
		return nil, diagnosticAt(src, len(src.Text), "unexpected } at the end of the cell")
	}
	p.body = sf.Decls[0].(*ast.FuncDecl).Body
	p.stmts = p.body.List
	return p, nil
}

// blank overwrites text with spaces and keeps its lines.
func blank(b []byte) {
	for i, c := range b {
		if c != '\n' && c != '\r' {
			b[i] = ' '
		}
	}
}

// offset is the place of pos in the cell's text.
func (s *Source) offset(fset *token.FileSet, pos token.Pos) int {
	f := fset.File(pos)
	// Both prefixes end in the line directive; its length is what the file is
	// longer than the text by, less the tail.
	return f.Offset(pos) - s.prefix(f)
}

func (s *Source) prefix(f *token.File) int {
	line := len("/*line " + s.Name() + ":1:1*/")
	if f.Size() == len(stmtPrefix)+line+len(s.Text)+3 {
		return len(stmtPrefix) + line
	}
	return len(declPrefix) + line
}
