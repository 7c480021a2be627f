package cell

import (
	"fmt"
	"go/ast"
	"go/token"
	"go/types"
	"regexp"
	"slices"
	"strings"
)

// pathAt are the nodes around pos, innermost first; the innermost one begins at
// pos, if one does.
func (c *checking) pathAt(pos token.Pos) (path []ast.Node) {
	c.each(func(n ast.Node) {
		if pos < n.Pos() || pos >= n.End() || len(path) > 0 {
			return
		}
		ast.Inspect(n, func(n ast.Node) bool {
			if n == nil || pos < n.Pos() || pos >= n.End() {
				return false
			}
			path = append(path, n)
			return true
		})
	})
	slices.Reverse(path)
	return path
}

// around is the innermost node of a kind around pos.
func around[T ast.Node](c *checking, pos token.Pos) (found T) {
	for _, n := range c.pathAt(pos) {
		if n, ok := n.(T); ok {
			return n
		}
	}
	return found
}

// callAround is the call of which pos is in an argument or at the end.
func (c *checking) callAround(pos token.Pos) *ast.CallExpr {
	for _, n := range c.pathAt(pos) {
		if call, ok := n.(*ast.CallExpr); ok && pos > call.Lparen {
			return call
		}
	}
	return nil
}

// text is how the cell writes a node; what stands in an older cell is written as
// the printer does.
func (c *checking) text(n ast.Node) string {
	if c.s.fset.Position(n.Pos()).Filename == c.p.src.Name() {
		from, to := c.p.src.offset(c.s.fset, n.Pos()), c.p.src.offset(c.s.fset, n.End())
		if from >= 0 && to <= len(c.p.src.Text) && from <= to {
			return c.p.src.Text[from:to]
		}
	}
	if e, ok := n.(ast.Expr); ok {
		return types.ExprString(e)
	}
	return "..."
}

// parameters is a signature's list of parameters as a reader writes it.
func parameters(s *types.Signature) string {
	return strings.TrimPrefix(typeString(types.NewSignatureType(nil, nil, nil, s.Params(), nil, s.Variadic())), "func")
}

var (
	returnsMore  = regexp.MustCompile(`^assignment mismatch: (\d+) variables? but (.+) returns? (\d+) values?`)
	moreValues   = regexp.MustCompile(`^assignment mismatch: 1 variable but 2 values`)
	oneValue     = regexp.MustCompile(`^assignment mismatch: \d+ variables but 1 value$`)
	notIndirect  = regexp.MustCompile(`^invalid operation: cannot indirect `)
	notOperator  = regexp.MustCompile(`^invalid operation: operator (\S+) not defined on (.+) \(`)
	notType      = regexp.MustCompile(`^(\w+) (?:\(.+\) )?is not a type$`)
	notConverted = regexp.MustCompile(`^cannot convert (.+) \(.+ to type (\S+)$`)
	notUsed      = regexp.MustCompile(`^(.+) \((?:value|variable|constant).*\) is not used$`)
	wantString   = regexp.MustCompile(`^cannot use (.+) \(untyped string constant\) as (unit\.\w+) value in `)
	inCall       = regexp.MustCompile(`^multiple-value (.+) \(value of type \((.+)\)\) in `)
	wantMethod   = regexp.MustCompile(`does not implement (\S+) \(missing method (\w+)\)`)
	otherMethod  = regexp.MustCompile(`\(wrong type for method \w+\).*want (.+)$`)
	otherKind    = regexp.MustCompile(`^cannot use (.+) \(untyped (\w+) constant[^)]*\) as \S+ value in (assignment|variable declaration)`)
	noField      = regexp.MustCompile(`^unknown field (\w+) in struct literal of type \S+$`)
	notConstant  = regexp.MustCompile(`^(.+) \(.+\) is not constant$`)
)

// advise says how Go writes what an error about types was meant to be.
func (c *checking) advise(pos token.Pos, msg string) string {
	switch {
	case strings.HasPrefix(msg, unusedVar):
		return c.unusedHint(pos, strings.TrimPrefix(msg, unusedVar+": "))
	case strings.HasPrefix(msg, "too many return values"):
		return c.returnHint(pos)
	case msg == "missing return":
		return c.missingReturn(pos)
	case strings.HasPrefix(msg, "not enough arguments in call"), strings.HasPrefix(msg, "too many arguments in call"):
		if call := c.callAround(pos); call != nil {
			if s, ok := c.typeOf(call.Fun).(*types.Signature); ok {
				return "it is called as " + c.text(call.Fun) + parameters(s)
			}
		}
	case strings.HasPrefix(msg, "cannot range over"):
		if x := c.rangeOver(pos); x != "" {
			return "write range int(" + x + ") to count, or range over a slice"
		}
	case strings.HasPrefix(msg, "invalid argument: index -"):
		if ix := around[*ast.IndexExpr](c, pos); ix != nil {
			x := c.text(ix.X)
			return fmt.Sprintf("write %s[len(%s)%s] to count from the end", x, x, c.text(ix.Index))
		}
	case strings.HasPrefix(msg, "label ") && strings.HasSuffix(msg, "declared and not used"):
		name := strings.Fields(msg)[1]
		if slices.Contains([]string{"try", "except", "finally"}, name) {
			return "write v, err := f() and if err != nil { ... }: Go has errors for exceptions"
		}
		return "write " + name + " := ... : a word with a colon is a label"
	case strings.HasPrefix(msg, "invalid argument: index ") && strings.HasSuffix(msg, "must be integer"):
		if ix := around[*ast.IndexExpr](c, pos); ix != nil {
			return "write " + c.text(ix.X) + "[int(" + unbracketed(c.text(ix.Index)) + ")]"
		}
	case strings.HasPrefix(msg, "cannot index "):
		return c.indexHint(pos)
	case strings.HasSuffix(msg, "truncated to int"):
		return "an int holds whole numbers: make it a float64, as in n := 3.0"
	case strings.HasPrefix(msg, "invalid operation: cannot call ") && strings.HasSuffix(msg, "is not a function"):
		if call := around[*ast.CallExpr](c, pos); call != nil && len(call.Args) == 0 {
			return "write " + c.text(call.Fun) + " without brackets"
		}
		if call := around[*ast.CallExpr](c, pos); call != nil {
			return "write " + c.text(call.Fun) + " * (...) for a product; only functions are called with brackets"
		}
	case strings.HasPrefix(msg, "no new variables on left side of :="):
		return "write = to give a variable another value"
	case strings.HasPrefix(msg, "invalid operation: cannot send to non-channel"):
		return "write = or := to assign: <- sends on a channel"
	case strings.HasPrefix(msg, "cannot assign to ") && strings.Contains(msg, "neither addressable"):
		if id := around[*ast.Ident](c, pos); id != nil {
			for _, info := range c.infos {
				if k, ok := info.Uses[id].(*types.Const); ok {
					return k.Name() + " is a constant: declare it by " + k.Name() + " := " + k.Val().String() + " to change it"
				}
			}
		}
		return c.assignedCall(pos)
	case strings.HasPrefix(msg, "invalid argument: ") && strings.HasSuffix(msg, " for built-in len"):
		return "len is for slices, strings and maps: to count to n write for i := range n"
	case strings.HasSuffix(msg, "cannot be ordered") && c.callAround(pos) != nil:
		if call := c.callAround(pos); len(call.Args) == 1 {
			name := c.text(call.Fun)
			return "write slices." + strings.ToUpper(name[:1]) + name[1:] + "(" + c.text(call.Args[0]) + ")"
		}
	case strings.HasPrefix(msg, "too few values in struct literal"):
		if lit := c.literalAt(pos); lit != nil {
			if s, ok := under[*types.Struct](c.typeOf(lit)); ok && s.NumFields() > 0 && len(lit.Elts) > 0 {
				name := ""
				if lit.Type != nil {
					name = c.text(lit.Type)
				}
				return "write " + name + "{" + s.Field(0).Name() + ": " + c.text(lit.Elts[0]) + "}: name the fields"
			}
		}
	case strings.HasPrefix(msg, "invalid operation: operator ! not defined on"):
		return "write x == 0 or x != 0: only what is true or false can be a condition"
	case strings.HasPrefix(msg, "non-boolean condition"):
		return "write a comparison: x != 0"
	}
	if notIndirect.MatchString(msg) {
		return c.powerHint(pos)
	}
	if m := notOperator.FindStringSubmatch(msg); m != nil {
		if b := around[*ast.BinaryExpr](c, pos); b != nil {
			if h := c.uncertainHint(b); h != "" {
				return h
			}
		}
		if b := around[*ast.BinaryExpr](c, pos); b != nil && b.Op == token.XOR {
			return power(c.text(b.X), c.text(b.Y))
		}
		if m[1] == "%" {
			if b := around[*ast.BinaryExpr](c, pos); b != nil {
				return "write math.Mod(" + c.text(b.X) + ", " + c.text(b.Y) + ")"
			}
		}
	}
	if m := returnsMore.FindStringSubmatch(msg); m != nil {
		return c.resultsHint(pos)
	}
	if m := oneValue.FindStringSubmatch(msg); m != nil {
		if a := around[*ast.AssignStmt](c, pos); a != nil && len(a.Rhs) == 1 {
			var values, elements []string
			for i := range a.Lhs {
				values = append(values, c.text(a.Rhs[0]))
				elements = append(elements, fmt.Sprintf("%s[%d]", c.text(a.Rhs[0]), i))
			}
			if _, ok := under[*types.Slice](c.typeOf(a.Rhs[0])); ok {
				values = elements
			}
			var left []string
			for _, l := range a.Lhs {
				left = append(left, c.text(l))
			}
			return "write " + strings.Join(left, ", ") + " " + a.Tok.String() + " " + strings.Join(values, ", ")
		}
	}
	if moreValues.MatchString(msg) {
		if a := around[*ast.AssignStmt](c, pos); a != nil && len(a.Rhs) == 2 && isInt(a.Rhs[1]) {
			return "write " + c.text(a.Rhs[0]) + "." + c.text(a.Rhs[1]) + " with a point, if it is one number"
		}
	}
	if m := notType.FindStringSubmatch(msg); m != nil {
		if f := around[*ast.Field](c, pos); f != nil && len(f.Names) == 1 && isBasic(f.Names[0].Name) {
			return "write " + m[1] + " " + f.Names[0].Name + ": the name comes before its type"
		} else if f != nil && len(f.Names) == 0 {
			return "write " + m[1] + " float64: a parameter has a type"
		}
	}
	if m := notConverted.FindStringSubmatch(msg); m != nil {
		if call := around[*ast.CallExpr](c, pos); call != nil {
			if s, ok := under[*types.Struct](c.typeOf(call.Fun)); ok && s.NumFields() > 0 {
				return "write " + m[2] + "{" + s.Field(0).Name() + ": " + m[1] + "}"
			}
		}
	}
	if m := notUsed.FindStringSubmatch(msg); m != nil {
		return c.notUsedHint(pos, m[1])
	}
	if m := wantString.FindStringSubmatch(msg); m != nil {
		if u := c.s.unitNamed(strings.Trim(m[1], `"`)); u != "" {
			return "write unit." + u
		}
		return "write a unit constant: unit." + exampleUnit(strings.TrimPrefix(m[2], "unit."))
	}
	if m := inCall.FindStringSubmatch(msg); m != nil {
		if e := c.exprAt(pos, m[1]); e != nil {
			m[1] = c.text(e)
		}
		return fmt.Sprintf("write v, %s := %s first, then use v", lastName(m[2]), m[1])
	}
	if m := otherMethod.FindStringSubmatch(msg); m != nil {
		return "write the method as " + m[1]
	}
	if m := wantMethod.FindStringSubmatch(msg); m != nil && m[1] != "error" {
		return "it needs the method " + m[2] + " to be a " + m[1]
	}
	if m := otherKind.FindStringSubmatch(msg); m != nil {
		return c.otherKindHint(pos, m[1], m[2], m[3])
	}
	if m := noField.FindStringSubmatch(msg); m != nil {
		return c.fieldsHint(pos, m[1])
	}
	if m := notConstant.FindStringSubmatch(msg); m != nil {
		if s := around[*ast.ValueSpec](c, pos); s != nil && len(s.Names) == 1 && len(s.Values) == 1 {
			return "write " + s.Names[0].Name + " := " + c.text(s.Values[0]) + " for a value that is computed"
		}
	}
	return ""
}

// indexHint answers x["name"] of what has fields or columns by that name.
func (c *checking) indexHint(pos token.Pos) string {
	ix := around[*ast.IndexExpr](c, pos)
	if ix == nil {
		return ""
	}
	name := strings.Trim(c.text(ix.Index), `"`)
	members := c.membersOf(ix.X)
	switch {
	case slices.Contains(members, name):
		return "write " + c.text(ix.X) + "." + name
	case slices.Contains(members, "Column"):
		return "write " + c.text(ix.X) + ".Column(" + c.text(ix.Index) + ")"
	}
	return ""
}

// mostFields is how many fields a hint lists.
const mostFields = 6

// fieldsHint answers a field that a struct does not have.
func (c *checking) fieldsHint(pos token.Pos, name string) string {
	lit := c.literalAt(pos)
	if lit == nil {
		return ""
	}
	s, ok := under[*types.Struct](c.typeOf(lit))
	if !ok {
		return ""
	}
	var fields []string
	for f := range s.Fields() {
		if f.Exported() || isCell(f.Pkg()) {
			fields = append(fields, f.Name())
		}
	}
	if near := nearest(name, fields); len(near) > 0 {
		return didYouMean(near)
	}
	if len(fields) > mostFields {
		fields = append(fields[:mostFields], "...")
	}
	return "its fields are " + strings.Join(fields, ", ")
}

// otherKindHint answers a constant that is assigned to a variable of another
// type, which it keeps.
func (c *checking) otherKindHint(pos token.Pos, x, kind, where string) string {
	if where == "variable declaration" {
		s := around[*ast.ValueSpec](c, pos)
		t := map[string]string{"float": "float64", "string": "string", "int": "int", "bool": "bool"}[kind]
		if s == nil || t == "" || len(s.Names) != 1 {
			return ""
		}
		return "write var " + s.Names[0].Name + " " + t + " = " + x
	}
	a := around[*ast.AssignStmt](c, pos)
	if a == nil || len(a.Lhs) != 1 || a.Tok != token.ASSIGN {
		return ""
	}
	if id, ok := a.Lhs[0].(*ast.Ident); ok {
		return "write " + id.Name + " := " + x + " to declare " + id.Name + " anew: a variable keeps its type"
	}
	return ""
}

// lastName is what the last of several results is called: err for an error.
func lastName(results string) string {
	if strings.HasSuffix(results, "error") {
		return "err"
	}
	return "_"
}

func isInt(e ast.Expr) bool {
	l, ok := e.(*ast.BasicLit)
	return ok && l.Kind == token.INT
}

// under is the underlying type as a T; ok says whether it is one.
func under[T types.Type](t types.Type) (u T, ok bool) {
	if t != nil {
		u, ok = t.Underlying().(T)
	}
	return u, ok
}

// literalAt is the composite literal that pos is in or at the end of.
func (c *checking) literalAt(pos token.Pos) *ast.CompositeLit {
	if lit := around[*ast.CompositeLit](c, pos); lit != nil {
		return lit
	}
	return around[*ast.CompositeLit](c, pos-1)
}

func (c *checking) rangeOver(pos token.Pos) string {
	if r := around[*ast.RangeStmt](c, pos); r != nil {
		if b, ok := under[*types.Basic](c.typeOf(r.X)); ok && b.Info()&types.IsFloat != 0 {
			return c.text(r.X)
		}
	}
	return ""
}

// powerHint answers x**y, which Go reads as a product with *y.
func (c *checking) powerHint(pos token.Pos) string {
	path := c.pathAt(pos)
	for i, n := range path {
		star, ok := n.(*ast.StarExpr)
		if !ok {
			continue
		}
		if i+1 < len(path) {
			if b, ok := path[i+1].(*ast.BinaryExpr); ok && b.Op == token.MUL && b.Y == star {
				return power(c.text(b.X), c.text(star.X))
			}
		}
	}
	for _, n := range path { // the error may be at the operand
		if b, ok := n.(*ast.BinaryExpr); ok && b.Op == token.MUL {
			if star, ok := b.Y.(*ast.StarExpr); ok {
				return power(c.text(b.X), c.text(star.X))
			}
		}
	}
	return ""
}

var simple = regexp.MustCompile(`^[\pL_][\pL\pN_.]*$`)

// power writes x to the power y.
func power(x, y string) string {
	// Of a*b^2 only b is raised.
	y = unbracketed(y)
	if x == "10" || x == "10.0" {
		if regexp.MustCompile(`^-?\d+$`).MatchString(y) {
			return "write 1e" + y
		}
	}
	if y == "2" && simple.MatchString(x) {
		return "write " + x + "*" + x + " or math.Pow(" + x + ", 2)"
	}
	return "write math.Pow(" + unbracketed(x) + ", " + y + ")"
}
