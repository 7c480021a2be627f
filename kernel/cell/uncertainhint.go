package cell

import (
	"go/ast"
	"go/token"
	"go/types"
	"slices"
	"strings"
)

// uncertainPath is the package of numbers with their uncertainty.
const uncertainPath = "levelsum/statmech/uncertain"

// isUncertain reports whether t is a number with its uncertainty.
func isUncertain(t types.Type) bool {
	n, ok := types.Unalias(orInvalid(t)).(*types.Named)
	return ok && n.Obj().Name() == "Quantity" && n.Obj().Pkg() != nil && n.Obj().Pkg().Path() == uncertainPath
}

// uncertainHint answers an operation on numbers with their uncertainty by the
// method that keeps it; "" for other operands.
func (c *checking) uncertainHint(b *ast.BinaryExpr) string {
	xq, yq := isUncertain(c.typeOf(b.X)), isUncertain(c.typeOf(b.Y))
	x, y := operand(c.text(b.X)), c.text(b.Y)
	switch {
	case xq && yq:
		if m := map[token.Token]string{token.ADD: "Plus", token.SUB: "Minus", token.MUL: "Times", token.QUO: "Over"}[b.Op]; m != "" {
			return "write " + x + "." + m + "(" + unbracketed(y) + ")"
		}
		if slices.Contains([]token.Token{token.LSS, token.GTR, token.LEQ, token.GEQ, token.EQL}, b.Op) {
			return "write " + x + ".Value() " + b.Op.String() + " " + operand(y) + ".Value()"
		}
	case xq:
		switch b.Op {
		case token.ADD:
			return "write " + x + ".Shift(" + unbracketed(y) + ")"
		case token.SUB:
			return "write " + x + ".Shift(-" + y + ")"
		case token.MUL:
			return "write " + x + ".Scale(" + unbracketed(y) + ")"
		case token.QUO:
			return "write " + x + ".Scale(1 / " + y + ")"
		}
	case yq:
		x = c.text(b.X)
		switch b.Op {
		case token.ADD:
			return "write " + operand(y) + ".Shift(" + unbracketed(x) + ")"
		case token.SUB:
			return "write " + operand(y) + ".Scale(-1).Shift(" + unbracketed(x) + ")"
		case token.MUL:
			return "write " + operand(y) + ".Scale(" + unbracketed(x) + ")"
		case token.QUO:
			return "write uncertain.Exact(" + unbracketed(x) + ").Over(" + unbracketed(y) + ")"
		}
	}
	return ""
}

// uncertainArgument answers a number with its uncertainty given where a plain
// number is wanted: by the function of the same name that keeps it, if it is an
// argument of one of math.
func (c *checking) uncertainArgument(x, to, where string) string {
	if to != "float64" {
		return ""
	}
	if f, ok := strings.CutPrefix(where, "argument to math."); ok && slices.Contains(c.exported(uncertainPath), f) {
		return "write uncertain." + f + "(" + x + ")"
	}
	return "write " + operand(x) + ".Value() for the value alone"
}

// molarMember answers a molar function of a mode that has only the reduced ones.
func (c *checking) molarMember(sel *ast.SelectorExpr) string {
	if !slices.Contains(c.membersOf(sel.X), "Reduced") {
		return ""
	}
	p, err := c.s.importer.Import("levelsum/statmech")
	if err != nil {
		return ""
	}
	molar := p.Scope().Lookup("Molar")
	if molar == nil {
		return ""
	}
	name := sel.Sel.Name
	if all := symbolMembers[strings.ToLower(name)]; len(all) > 0 {
		name = all[0]
	}
	if o, _, _ := types.LookupFieldOrMethod(molar.Type(), true, p, name); o == nil {
		return ""
	}
	return "write statmech.Molar{Mode: " + c.text(sel.X) + "}." + name
}
