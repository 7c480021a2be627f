package cell

import (
	"fmt"
	"go/ast"
	"go/parser"
	"go/token"
	"go/types"
	"regexp"
	"slices"
	"strings"
)

var (
	mismatch  = regexp.MustCompile(`^invalid operation: (.+) \(mismatched types .+\)$`)
	cannotUse = regexp.MustCompile(`^cannot use (.+) \((?:variable|value|constant \S+) of (?:\w+ )?type (\S+)\) as (\S+) value in (.+)$`)
)

// quantityHint answers an error about the kinds of quantities by the call that
// makes one of the other.
func (c *checking) quantityHint(pos token.Pos, msg string) string {
	if m := mismatch.FindStringSubmatch(msg); m != nil {
		for _, n := range c.pathAt(pos) {
			if b, ok := n.(*ast.BinaryExpr); ok && types.ExprString(b) == m[1] {
				return c.mismatchHint(b)
			}
			if a, ok := n.(*ast.AssignStmt); ok && len(a.Lhs) == 1 && len(a.Rhs) == 1 { // x += y
				if op, ok := withAssign[a.Tok]; ok {
					h := c.mismatchHint(&ast.BinaryExpr{X: a.Lhs[0], Op: op, OpPos: a.TokPos, Y: a.Rhs[0]})
					h, _, _ = strings.Cut(h, ", or ")
					begin := "write " + c.text(a.Lhs[0]) + " "
					if rest, ok := strings.CutPrefix(h, begin+op.String()+" "); ok {
						return begin + a.Tok.String() + " " + rest
					}
					if x, y := c.typeOf(a.Lhs[0]), c.typeOf(a.Rhs[0]); x != nil && y != nil && isNumber(typeString(x)) && quantity(y) != "" && (op == token.ADD || op == token.SUB) {
						return "write var " + c.text(a.Lhs[0]) + " " + typeString(y) + " to declare it"
					}
				}
			}
		}
		return ""
	}
	m := cannotUse.FindStringSubmatch(msg)
	if m == nil {
		return ""
	}
	x, from, to, where := m[1], m[2], m[3], m[4]
	if strings.Contains(msg, "has pointer receiver)") {
		return "write &" + operand(x)
	}
	if from == "uncertain.Quantity" {
		return c.uncertainArgument(x, to, where)
	}
	if many := c.manyOf(pos, from, to); many != "" {
		return many
	}
	if h := c.plainHint(pos, x, to); h != "" {
		return h
	}
	if e := c.exprAt(pos, x); e != nil {
		if h := c.counter(e, to); h != "" {
			return h
		}
		x = c.text(e)
	}
	if t, ok := strings.CutSuffix(strings.TrimPrefix(where, "argument to "), ".In"); ok && strings.HasPrefix(where, "argument to ") {
		if read := c.convert(t, to, from); read != "" {
			return "write " + read + ".In(" + x + ")"
		}
	}
	if call := c.conversion(x, from, to); call != "" {
		return "write " + call
	}
	return ""
}

// withAssign are the operations of x += y and its kin.
var withAssign = map[token.Token]token.Token{token.ADD_ASSIGN: token.ADD, token.SUB_ASSIGN: token.SUB, token.MUL_ASSIGN: token.MUL, token.QUO_ASSIGN: token.QUO}

// mismatchHint answers the error of an operation whose operands have different
// types.
func (c *checking) mismatchHint(b *ast.BinaryExpr) string {
	x, op, y := c.text(b.X), b.Op.String(), c.text(b.Y)
	a, t := c.typeOf(b.X), c.typeOf(b.Y)
	if a == nil || t == nil {
		return ""
	}
	for _, f := range []struct {
		t     types.Type
		x     ast.Expr
		other string
	}{{a, b.X, y}, {t, b.Y, x}} {
		s, ok := f.t.(*types.Signature)
		switch {
		case !ok:
		case s.Params().Len() == 0:
			return "write " + c.text(f.x) + "(): a function is called with brackets"
		case s.Params().Len() == 1 && b.Op == token.MUL:
			return "write " + c.text(f.x) + "(" + f.other + ")"
		default:
			return "it is called as " + c.text(f.x) + parameters(s)
		}
	}
	if h := c.uncertainHint(b); h != "" {
		return h
	}
	for _, e := range []ast.Expr{b.X, b.Y} {
		if h := c.counter(e, ""); h != "" {
			return h
		}
	}
	tx, ty := typeString(a), typeString(t)
	xs, ys := strings.HasPrefix(tx, "unit."), strings.HasPrefix(ty, "unit.")
	switch {
	case op == "*" && isNumber(tx) && ys:
		return fmt.Sprintf("write %s(%s) * %s", ty, x, y)
	case (op == "*" || op == "/") && isNumber(ty) && xs:
		return fmt.Sprintf("write %s %s %s(%s)", operand(x), op, tx, unbracketed(y))
	case (op == "*" || op == "/") && xs && ys && tx != ty:
		return c.productHint(x, op, y, tx, ty)
	case isNumber(tx) && isNumber(ty):
		var ways []string
		if ty == "float64" {
			ways = append(ways, "float64("+unbracketed(x)+") "+op+" "+y)
		} else if tx == "float64" {
			ways = append(ways, x+" "+op+" float64("+unbracketed(y)+")")
		}
		if len(ways) > 0 {
			return "write " + ways[0]
		}
		return ""
	case strings.HasPrefix(tx, "[]") && !strings.HasPrefix(ty, "[]"):
		return elementwise(x, op, y)
	case strings.HasPrefix(ty, "[]") && !strings.HasPrefix(tx, "[]"):
		return elementwise(y, op, x)
	case op == "+" && (tx == "string" || tx == "untyped string" || ty == "string" || ty == "untyped string"):
		return "write fmt.Sprint(" + x + ", " + y + ")"
	case op == "*" || op == "/":
		return ""
	}
	if xs && ys && c.convert(x, tx, ty) == "" && c.convert(y, ty, tx) == "" {
		return "they measure different things, and no call makes one of the other"
	}
	var ways []string
	if to := c.conversion(y, ty, tx); to != "" && tx != "float64" {
		ways = append(ways, x+" "+op+" "+to)
	}
	if to := c.conversion(x, tx, ty); to != "" && ty != "float64" {
		ways = append(ways, to+" "+op+" "+y)
	}
	if len(ways) > 0 {
		return "write " + strings.Join(ways, ", or ")
	}
	return ""
}

// elementwise says how to compute with each element of xs.
func elementwise(xs, op, y string) string {
	return fmt.Sprintf("write a loop: for i := range %s { %s[i] = %s[i] %s %s }", xs, xs, xs, op, y)
}

// productHint answers a product or quotient of two kinds of quantities by the
// named method for it, if there is one.
func (c *checking) productHint(x, op, y, tx, ty string) string {
	p, err := c.s.importer.Import(unitPath)
	if err != nil {
		return ""
	}
	a, b := typeNamed(p, tx), typeNamed(p, ty)
	if a == nil || b == nil {
		return ""
	}
	name := "Times"
	if op == "/" {
		name = "Over"
		// E/(kT) is written with k by the method.
		plain := timesConstant.ReplaceAllString(unbracketed(y), "")
		if tx == "unit.Energy" && ty == "unit.Temperature" {
			x = overConstant.ReplaceAllString(x, "")
			return fmt.Sprintf("write %s.OverKT(%s) for the ratio to kT", operand(x), plain)
		}
		y = plain
	}
	if call := methodTaking(a, b, name); call != "" {
		return "write " + operand(x) + "." + call + "(" + unbracketed(y) + ")"
	}
	if op == "*" {
		if call := methodTaking(b, a, name); call != "" {
			return "write " + operand(y) + "." + call + "(" + unbracketed(x) + ")"
		}
	}
	return fmt.Sprintf("no method makes a quantity of these two: for a plain number in SI write %s.SI() %s %s.SI()", operand(x), op, operand(y))
}

var timesConstant = regexp.MustCompile(`^unit\.(Boltzmann|GasConstant) ?\* ?`)

var overConstant = regexp.MustCompile(` ?/ ?unit\.(Boltzmann|GasConstant)$`)

// methodTaking is the method of t, its name beginning as said, whose one
// argument is an arg.
func methodTaking(t, arg types.Type, prefix string) string {
	n, ok := t.(*types.Named)
	if !ok {
		return ""
	}
	for m := range n.Methods() {
		ps := m.Signature().Params()
		if strings.HasPrefix(m.Name(), prefix) && ps.Len() == 1 && types.Identical(ps.At(0).Type(), arg) {
			return m.Name()
		}
	}
	return ""
}

// counter answers the first variable of a range over quantities, which counts
// them, used as one of them; to is the type that is wanted, "" for any.
func (c *checking) counter(e ast.Expr, to string) string {
	id, ok := e.(*ast.Ident)
	if !ok {
		return ""
	}
	for _, n := range c.pathAt(e.Pos()) {
		r, ok := n.(*ast.RangeStmt)
		if !ok {
			continue
		}
		key, ok := r.Key.(*ast.Ident)
		if !ok || key.Name != id.Name || r.Value != nil {
			continue
		}
		if l, ok := under[*types.Slice](c.typeOf(r.X)); ok && quantity(l.Elem()) != "" && (to == "" || to == typeString(l.Elem())) {
			return "write for _, " + id.Name + " := range " + c.text(r.X) + " { ... }: the first variable counts"
		}
	}
	return ""
}

// plainHint answers a ratio or product of quantities of one kind where a plain
// number is wanted: Go gives it the type of the quantity, which it is not.
func (c *checking) plainHint(pos token.Pos, x, to string) string {
	if to != "float64" {
		return ""
	}
	e := c.exprAt(pos, x)
	b := binary(e)
	if b == nil || quantity(c.typeOf(b.X)) == "" || quantity(c.typeOf(b.Y)) == "" {
		return ""
	}
	switch b.Op {
	case token.QUO:
		return "write float64(" + x + "): the ratio is a plain number"
	case token.MUL:
		return fmt.Sprintf("write %s.SI() * %s.SI() for the product as a plain number in SI", operand(types.ExprString(b.X)), operand(types.ExprString(b.Y)))
	}
	return ""
}

// manyOf answers a slice given where the function wants one value: by its form
// for slices, or a loop.
func (c *checking) manyOf(pos token.Pos, from, to string) string {
	if from != "[]"+to {
		return ""
	}
	call := c.callAround(pos)
	if call == nil {
		return ""
	}
	if sel, ok := call.Fun.(*ast.SelectorExpr); ok && len(call.Args) == 1 {
		name := sel.Sel.Name
		members := c.membersOf(sel.X)
		if id, ok := sel.X.(*ast.Ident); ok && members == nil {
			members = c.exported(c.pathOf(id.Name))
		}
		for _, plural := range []string{name + "s", strings.TrimSuffix(name, "y") + "ies"} {
			if slices.Contains(members, plural) {
				return "write " + types.ExprString(sel.X) + "." + plural + "(" + c.text(call.Args[0]) + ")"
			}
		}
	}
	return fmt.Sprintf("write a loop: for _, x := range %s { ... %s(x) ... }", types.ExprString(call.Args[0]), types.ExprString(call.Fun))
}

// binary is the operation that an expression is, signs and brackets left out.
func binary(e ast.Expr) *ast.BinaryExpr {
	for {
		switch x := e.(type) {
		case *ast.ParenExpr:
			e = x.X
		case *ast.UnaryExpr:
			e = x.X
		case *ast.BinaryExpr:
			return x
		default:
			return nil
		}
	}
}

// exprAt finds the expression that begins at pos and is written as text.
func (c *checking) exprAt(pos token.Pos, text string) (found ast.Expr) {
	c.each(func(n ast.Node) {
		ast.Inspect(n, func(n ast.Node) bool {
			if e, ok := n.(ast.Expr); ok && found == nil && e.Pos() == pos && types.ExprString(e) == text {
				found = e
			}
			return found == nil
		})
	})
	return found
}

// typeOf is the type of an expression of the cell, nil if it has none.
func (c *checking) typeOf(e ast.Expr) types.Type {
	for _, info := range c.infos {
		if tv, ok := info.Types[e]; ok && tv.Type != nil && tv.Type != types.Typ[types.Invalid] {
			return tv.Type
		}
	}
	return nil
}

// isNumber tells the name of one of Go's own number types.
func isNumber(name string) bool {
	o, ok := types.Universe.Lookup(name).(*types.TypeName)
	if !ok {
		return false
	}
	b, ok := o.Type().Underlying().(*types.Basic)
	return ok && b.Info()&(types.IsInteger|types.IsFloat) != 0
}

// unbracketed is an expression without brackets around all of it.
func unbracketed(x string) string {
	if e, err := parser.ParseExpr(x); err == nil {
		if p, ok := e.(*ast.ParenExpr); ok {
			return types.ExprString(p.X)
		}
	}
	return x
}

// perMole are the units of energies per particle with those of molar energies.
var perMole = map[string]string{"KJPerMol": "MolarKJ", "KcalPerMol": "MolarKcal"}

// conversion writes what makes a value of type to of the expression x of type
// from, "" if there is nothing.
func (c *checking) conversion(x, from, to string) string {
	for particle, molar := range perMole {
		switch {
		case from == "unit.Energy" && to == "unit.MolarEnergy" && strings.HasSuffix(x, "unit."+particle):
			return strings.TrimSuffix(x, particle) + molar
		case from == "unit.MolarEnergy" && to == "unit.Energy" && strings.HasSuffix(x, "unit."+molar):
			return strings.TrimSuffix(x, molar) + particle
		}
	}
	switch {
	case to == "*"+from:
		return "&" + operand(x)
	case from == "*"+to:
		return "*" + operand(x)
	case isNumber(from) && isNumber(to):
		return to + "(" + unbracketed(x) + ")"
	case isNumber(from) && from != "float64" && strings.HasPrefix(to, "unit."):
		return c.convert(x, "float64", to)
	case to == "[]"+from:
		return to + "{" + x + "}"
	case isNumber(from) && to == "string":
		return "fmt.Sprint(" + x + ")"
	}
	return c.convert(x, from, to)
}

// convert writes the call of package unit that makes a value of type to of the
// expression x of type from; "" if there is none.
func (c *checking) convert(x, from, to string) string {
	p, err := c.s.importer.Import(unitPath)
	if err != nil {
		return ""
	}
	f, t := typeNamed(p, from), typeNamed(p, to)
	if f == nil || t == nil || from == to {
		return ""
	}
	switch {
	case from == "float64" && quantity(t) != "":
		return fmt.Sprintf("%s(%s) * unit.%s", to, x, unitOf(p, quantity(t)))
	case to == "float64" && quantity(f) != "":
		return fmt.Sprintf("%s.In(unit.%s)", operand(x), unitOf(p, quantity(f)))
	}
	if call := method(f, t); call != "" {
		return operand(x) + call
	}
	for _, name := range p.Scope().Names() {
		fn, ok := p.Scope().Lookup(name).(*types.Func)
		if !ok || !fn.Exported() {
			continue
		}
		ps, rs := fn.Signature().Params(), fn.Signature().Results()
		if ps.Len() > 0 && rs.Len() == 1 && types.Identical(ps.At(0).Type(), f) && types.Identical(rs.At(0).Type(), t) {
			args := []string{x}
			for i := 1; i < ps.Len(); i++ {
				arg := ps.At(i).Name()
				if q := quantity(ps.At(i).Type()); q != "" {
					arg = "unit." + unitOf(p, q)
				}
				args = append(args, arg)
			}
			return "unit." + name + "(" + strings.Join(args, ", ") + ")"
		}
	}
	// Over a third kind, by calls that need nothing else.
	for _, name := range p.Scope().Names() {
		tn, ok := p.Scope().Lookup(name).(*types.TypeName)
		if !ok || quantity(tn.Type()) == "" {
			continue
		}
		a, b := method(f, tn.Type()), method(tn.Type(), t)
		if strings.HasSuffix(a, "()") && strings.HasSuffix(b, "()") {
			return operand(x) + a + b
		}
	}
	return ""
}

// method is the call of a method of from that returns a to; one that needs
// nothing else is preferred.
func method(from, to types.Type) string {
	n, ok := from.(*types.Named)
	if !ok {
		return ""
	}
	found := ""
	for m := range n.Methods() {
		ps, rs := m.Signature().Params(), m.Signature().Results()
		if !m.Exported() || rs.Len() != 1 || !types.Identical(rs.At(0).Type(), to) {
			continue
		}
		if ps.Len() == 0 {
			return "." + m.Name() + "()"
		}
		var args []string
		for p := range ps.Variables() {
			args = append(args, p.Name())
		}
		if found == "" {
			found = "." + m.Name() + "(" + strings.Join(args, ", ") + ")"
		}
	}
	return found
}

// typeNamed is the type that an error message writes as name, nil if it is no
// number or quantity or a slice of such.
func typeNamed(p *types.Package, name string) types.Type {
	if elem, ok := strings.CutPrefix(name, "[]"); ok {
		if t := typeNamed(p, elem); t != nil {
			return types.NewSlice(t)
		}
		return nil
	}
	if name == "float64" {
		return types.Typ[types.Float64]
	}
	if q, ok := strings.CutPrefix(name, "unit."); ok {
		if o, ok := p.Scope().Lookup(q).(*types.TypeName); ok {
			return o.Type()
		}
	}
	return nil
}

// unitOf is the name of a unit for a kind of quantity: the one that the field
// uses, else the first in the order of names.
func unitOf(p *types.Package, q string) string {
	if u := exampleUnit(q); !strings.Contains(u, " ") {
		return u
	}
	names := slices.DeleteFunc(p.Scope().Names(), func(n string) bool {
		k, ok := p.Scope().Lookup(n).(*types.Const)
		return !ok || quantity(k.Type()) != q
	})
	for _, n := range names {
		if k := p.Scope().Lookup(n).(*types.Const); k.Val().ExactString() == "1" {
			return n
		}
	}
	if len(names) > 0 {
		return names[0]
	}
	return exampleUnit(q)
}

// operand is an expression with brackets around it if a selection needs them.
func operand(x string) string {
	e, err := parser.ParseExpr(x)
	if err != nil {
		return x
	}
	switch e.(type) {
	case *ast.BinaryExpr, *ast.UnaryExpr, *ast.StarExpr, *ast.FuncLit:
		return "(" + x + ")"
	}
	return x
}
