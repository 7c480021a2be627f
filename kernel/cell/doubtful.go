package cell

import (
	"fmt"
	"go/ast"
	"go/constant"
	"go/scanner"
	"go/token"
	"go/types"
	"regexp"
	"strings"
)

// doubtful warns of what compiles and is another number than most would expect:
// 1/2, 10^-3, the verbs of Printf given to Println.
func (c *checking) doubtful(plan *Plan) Diagnostics {
	var out Diagnostics
	look := func(n ast.Node, info *types.Info) {
		say := func(pos token.Pos, msg, hint string) {
			line, col := c.p.src.place(c.s.fset, pos)
			out = append(out, Diagnostic{Source: c.p.src, Line: line, Column: col, Msg: msg, Hint: hint})
		}
		ast.Inspect(n, func(n ast.Node) bool {
			switch n := n.(type) {
			case *ast.BinaryExpr:
				switch n.Op {
				case token.QUO:
					if msg, hint := c.wholeQuotient(n, info); msg != "" {
						say(n.OpPos, msg, hint)
					}
				case token.XOR:
					if msg, hint := c.exclusiveOr(n, info); msg != "" {
						say(n.OpPos, msg, hint)
					}
				}
			case *ast.CallExpr:
				if msg, hint := c.wholeConversion(n, info); msg != "" {
					say(n.Pos(), msg, hint)
				}
				if msg, hint := c.verbs(n, info); msg != "" {
					say(n.Pos(), msg, hint)
				}
			}
			return true
		})
	}
	c.eachNew(plan, look)
	return append(out, c.floorComments()...)
}

// wholeQuotient tells a division of two whole numbers that are written out and
// leave a remainder.
func (c *checking) wholeQuotient(b *ast.BinaryExpr, info *types.Info) (msg, hint string) {
	x, y := literalInt(b.X), literalInt(b.Y)
	if x == nil || y == nil || constant.Sign(y) == 0 {
		return "", ""
	}
	whole := constant.BinaryOp(x, token.QUO_ASSIGN, y) // of integers
	if constant.Compare(constant.BinaryOp(whole, token.MUL, y), token.EQL, x) {
		return "", ""
	}
	if t := info.Types[b].Type; t != nil {
		if k, ok := t.Underlying().(*types.Basic); !ok || k.Info()&types.IsInteger == 0 && k.Info()&types.IsFloat == 0 {
			return "", ""
		}
	}
	text := types.ExprString(b)
	return fmt.Sprintf("%s divides whole numbers and is %s", text, whole), fmt.Sprintf("write %s.0 / %s", types.ExprString(b.X), types.ExprString(b.Y))
}

// literalInt is the value of a whole number in decimal, perhaps with a sign or
// in brackets; nil for other expressions.
func literalInt(e ast.Expr) constant.Value {
	switch e := e.(type) {
	case *ast.ParenExpr:
		return literalInt(e.X)
	case *ast.UnaryExpr:
		if v := literalInt(e.X); v != nil && e.Op == token.SUB {
			return constant.UnaryOp(token.SUB, v, 0)
		}
	case *ast.BasicLit:
		if e.Kind == token.INT && (e.Value == "0" || !strings.HasPrefix(e.Value, "0")) {
			return constant.MakeFromLiteral(e.Value, token.INT, 0)
		}
	}
	return nil
}

// exclusiveOr tells a ^ that looks like a power: its right side is a small whole
// number in decimal, or it stands between two.
func (c *checking) exclusiveOr(b *ast.BinaryExpr, info *types.Info) (msg, hint string) {
	y := literalInt(b.Y)
	if y == nil {
		return "", ""
	}
	if n, exact := constant.Int64Val(y); !exact || n > 99 || n < -99 || n == -1 || n == 1 && literalInt(b.X) == nil {
		return "", "" // x^1 and x^-1 flip bits
	}
	msg = types.ExprString(b) + " is an exclusive or of bits, no power"
	if tv := info.Types[b]; tv.Value != nil {
		msg += ", and is " + tv.Value.String()
	}
	x := types.ExprString(b.X)
	if x != "10" && !simple.MatchString(x) || info.Types[b.X].Value == nil && x != "10" {
		if types.ExprString(ast.Unparen(b.Y)) == "2" && simple.MatchString(x) {
			return msg, "write " + x + "*" + x
		}
		if info.Types[b.X].Value == nil {
			x = "float64(" + unbracketed(x) + ")"
		}
		return msg, "write math.Pow(" + x + ", " + unbracketed(types.ExprString(b.Y)) + ")"
	}
	return msg, power(x, types.ExprString(b.Y))
}

// wholeConversion tells float64(n/2), which has lost the remainder.
func (c *checking) wholeConversion(call *ast.CallExpr, info *types.Info) (msg, hint string) {
	if len(call.Args) != 1 || !info.Types[call.Fun].IsType() {
		return "", ""
	}
	to, ok := info.Types[call.Fun].Type.Underlying().(*types.Basic)
	if !ok || to.Info()&types.IsFloat == 0 {
		return "", ""
	}
	b, ok := ast.Unparen(call.Args[0]).(*ast.BinaryExpr)
	if !ok || b.Op != token.QUO || info.Types[b].Value != nil {
		return "", ""
	}
	from, ok := orInvalid(info.Types[b].Type).Underlying().(*types.Basic)
	if !ok || from.Info()&types.IsInteger == 0 {
		return "", ""
	}
	name := types.ExprString(call.Fun)
	y := types.ExprString(b.Y)
	if info.Types[b.Y].Value == nil {
		y = name + "(" + unbracketed(y) + ")"
	}
	return types.ExprString(b) + " divides whole numbers before it is a " + name, "write " + name + "(" + unbracketed(types.ExprString(b.X)) + ") / " + y
}

var verb = regexp.MustCompile(`%[-+ #0]*\d*(?:\.\d+)?[vdefgsqtxT]`)

// verbs tells a format given to a function that reads none, and whole-number
// verbs that get a number with a fraction.
func (c *checking) verbs(call *ast.CallExpr, info *types.Info) (msg, hint string) {
	sel, ok := call.Fun.(*ast.SelectorExpr)
	if !ok || len(call.Args) == 0 {
		return "", ""
	}
	f, ok := info.Uses[sel.Sel].(*types.Func)
	if !ok || f.Pkg() == nil || f.Pkg().Path() != "fmt" {
		return "", ""
	}
	format := info.Types[call.Args[0]].Value
	if format == nil || format.Kind() != constant.String {
		return "", ""
	}
	found := verb.FindAllString(constant.StringVal(format), -1)
	switch f.Name() {
	case "Print", "Println", "Sprint", "Sprintln":
		if len(found) > 0 && len(call.Args) > 1 {
			name := strings.TrimSuffix(f.Name(), "ln")
			return "fmt." + f.Name() + " does not read " + found[0], "write fmt." + name + "f(...)"
		}
	case "Printf", "Sprintf":
		if strings.Contains(strings.ReplaceAll(constant.StringVal(format), "%%", ""), "*") || len(found) != len(call.Args)-1 {
			return "", ""
		}
		for i, v := range found {
			b, ok := orInvalid(info.Types[call.Args[i+1]].Type).Underlying().(*types.Basic)
			if ok && strings.HasSuffix(v, "d") && b.Info()&types.IsFloat != 0 {
				return "fmt." + f.Name() + " writes a number with a fraction badly by " + v, "write " + strings.TrimSuffix(v, "d") + "g"
			}
			if ok && b.Info()&types.IsInteger != 0 && strings.HasSuffix(v, "f") {
				return "fmt." + f.Name() + " writes a whole number badly by " + v, "write " + strings.TrimSuffix(v, "f")[:1] + "d"
			}
		}
	}
	return "", ""
}

// floorComments warns of n // 2, of which Go sees only n.
func (c *checking) floorComments() Diagnostics {
	text := c.p.src.Text
	if !strings.Contains(text, "//") {
		return nil
	}
	var out Diagnostics
	fset := token.NewFileSet()
	file := fset.AddFile("", fset.Base(), len(text))
	var s scanner.Scanner
	s.Init(file, []byte(text), func(token.Position, string) {}, scanner.ScanComments)
	before, line := token.EOF, 0 // the last token and its line
	for {
		pos, tok, lit := s.Scan()
		if tok == token.EOF {
			return out
		}
		if tok == token.COMMENT && strings.HasPrefix(lit, "//") && line == file.Line(pos) {
			n := strings.TrimSpace(lit[2:])
			switch before {
			case token.IDENT, token.INT, token.FLOAT, token.RPAREN, token.RBRACK:
				if wholeNumber.MatchString(n) {
					d := diagnosticAt(c.p.src, file.Offset(pos), "// "+n+" is a comment: nothing is divided")[0]
					d.Hint = "write / for a division of whole numbers that drops the remainder"
					out = append(out, d)
				}
			}
		}
		if tok != token.COMMENT && !(tok == token.SEMICOLON && lit == "\n") {
			before, line = tok, file.Line(pos)
		}
	}
}

var wholeNumber = regexp.MustCompile(`^[1-9]\d{0,2}$`)
