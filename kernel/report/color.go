package report

import (
	"go/scanner"
	"go/token"
	"strings"
)

// colored returns Go code with its comments, texts and keywords marked; of
// other code it marks what looks the same.
func colored(source string) string {
	var s scanner.Scanner
	files := token.NewFileSet()
	file := files.AddFile("", files.Base(), len(source))
	s.Init(file, []byte(source), func(token.Position, string) {}, scanner.ScanComments)
	var b strings.Builder
	at := 0
	for {
		pos, tok, lit := s.Scan()
		if tok == token.EOF {
			break
		}
		class := ""
		switch {
		case tok == token.COMMENT:
			class = "c"
		case tok == token.STRING || tok == token.CHAR:
			class = "s"
		case tok.IsKeyword():
			class = "k"
		}
		start := file.Offset(pos)
		end := start + len(lit)
		// The scanner drops carriage returns; then the text is not where it says.
		if class == "" || start < at || end > len(source) || source[start:end] != lit {
			continue
		}
		b.WriteString(escape(source[at:start]))
		b.WriteString(`<span class="` + class + `">` + escape(lit) + "</span>")
		at = end
	}
	b.WriteString(escape(source[at:]))
	return b.String()
}
