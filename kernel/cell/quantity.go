package cell

import (
	"fmt"
	"go/ast"
	"go/constant"
	"go/token"
	"go/types"
	"strings"
)

// unitPath is the package whose types are quantities.
const unitPath = "levelsum/statmech/unit"

// quantity returns the name of a quantity type, "" for other types.
func quantity(t types.Type) string {
	n, ok := types.Unalias(t).(*types.Named)
	if !ok || n.Obj().Pkg() == nil || n.Obj().Pkg().Path() != unitPath {
		return ""
	}
	if b, ok := n.Underlying().(*types.Basic); !ok || b.Kind() != types.Float64 {
		return ""
	}
	return n.Obj().Name()
}

// quantities refuses what compiles and is wrong in physics: a bare number used
// as a quantity, and a product of two quantities of one kind.
func (c *checking) quantities(plan *Plan) Diagnostics {
	var out Diagnostics
	check := func(n ast.Node, info *types.Info) {
		say := func(pos token.Pos, msg, hint string) {
			line, col := c.p.src.place(c.s.fset, pos)
			out = append(out, Diagnostic{Source: c.p.src, Line: line, Column: col, Msg: msg, Hint: hint})
		}
		var stack []ast.Node
		ast.Inspect(n, func(n ast.Node) bool {
			if n == nil {
				stack = stack[:len(stack)-1]
				return true
			}
			stack = append(stack, n)
			e, ok := n.(ast.Expr)
			if !ok {
				return true
			}
			tv, ok := info.Types[e]
			if !ok || tv.Type == nil {
				return true
			}
			q := quantity(tv.Type)
			if q == "" {
				return true
			}
			if b, ok := e.(*ast.BinaryExpr); ok && b.Op == token.MUL {
				for _, x := range []ast.Expr{b.X, b.Y} {
					if call, ok := ast.Unparen(x).(*ast.CallExpr); ok && types.ExprString(call.Fun) == "unit.Celsius" {
						say(b.OpPos, "product with a temperature in °C, whose zero is not 0 K", "write unit.Celsius(25) for 25 °C")
						return true
					}
				}
			}
			if b, ok := e.(*ast.BinaryExpr); ok && b.Op == token.MUL && !untyped(b.X, info) && !untyped(b.Y, info) && !(scaled(b.X, info) || scaled(b.Y, info)) {
				say(b.OpPos, fmt.Sprintf("product of two quantities of the kind unit.%s", q),
					"write float64(x) * y to scale y by a number; products of physics have methods, as S.Times(T)")
			}
			if b, ok := e.(*ast.BinaryExpr); ok && (b.Op == token.MUL || b.Op == token.QUO) {
				if k, x := constantFactor(b, info); k != nil {
					say(b.OpPos, fmt.Sprintf("unit.%s has a unit of its own, so the result is no unit.%s", k.Name(), q), c.constantHint(b, k, x, info))
					return true
				}
			}
			if call, ok := e.(*ast.CallExpr); ok && len(call.Args) == 1 && info.Types[call.Fun].IsType() {
				x := call.Args[0]
				from := quantity(info.Types[x].Type)
				if b := binary(x); from != "" && from != q && (b == nil || b.Op != token.QUO) {
					if to := c.convert(c.text(x), "unit."+from, "unit."+q); strings.HasSuffix(to, "()") {
						say(call.Pos(), fmt.Sprintf("unit.%s(%s) keeps the number in SI of a unit.%s, which is not the same as a unit.%s", q, types.ExprString(x), from, q), "write "+to)
					}
				}
			}
			if b, ok := e.(*ast.BinaryExpr); ok && b.Op == token.QUO && !untyped(b.X, info) && !untyped(b.Y, info) && !scaled(b.Y, info) && !asNumber(stack, info) {
				x, y := typeString(info.Types[b.X].Type), types.ExprString(b.Y)
				hint := "write float64(" + types.ExprString(b) + ")"
				if _, ok := constantOf(b.Y, info); ok {
					hint = "write " + operand(types.ExprString(b.X)) + ".In(" + y + ")"
				}
				say(b.OpPos, "the ratio of two quantities of the kind "+x+" is a plain number, which Go would take for a "+x, hint)
			}
			if tv.Value == nil || !untyped(e, info) || zero(tv.Value) {
				return true
			}
			parent := enclosing(stack)
			switch p := parent.(type) {
			case *ast.BinaryExpr:
				if p.Op == token.MUL || p.Op == token.QUO && ast.Unparen(p.Y) == ast.Unparen(e) || untyped(p, info) {
					return true
				}
			case *ast.CallExpr:
				if info.Types[p.Fun].IsType() { // unit.Temperature(300) says it
					return true
				}
			case *ast.UnaryExpr, *ast.ParenExpr:
				return true // looked at as a whole
			}
			hint := fmt.Sprintf("give it a unit: %s * unit.%s", tv.Value, c.unitFor(q, tv.Value))
			if q == "Temperature" && tv.Value.String() == "273.15" {
				hint = "write unit.Celsius(25) for a temperature in °C, or 273.15 * unit.K"
			}
			say(e.Pos(), fmt.Sprintf("bare constant %s used as a quantity (unit.%s)", tv.Value, q), hint)
			return true
		})
	}
	c.eachNew(plan, check)
	return out
}

// constantFactor finds the physical constant, a plain number in SI with a unit
// that Go does not see, by which a quantity is multiplied or divided, and that
// quantity; nil if there is none. A number that was made a quantity just for
// that says what it is.
func constantFactor(b *ast.BinaryExpr, info *types.Info) (k *types.Const, x ast.Expr) {
	for _, e := range [][2]ast.Expr{{b.X, b.Y}, {b.Y, b.X}} {
		c, ok := constantOf(e[0], info)
		if !ok || c.Pkg() == nil || c.Pkg().Path() != unitPath || !untypedConst(c) || c.Name() == "FineStructureConstant" {
			continue
		}
		if quantity(orInvalid(info.Types[e[1]].Type)) != "" && !untyped(e[1], info) && !scaled(e[1], info) {
			return c, e[1]
		}
	}
	return nil, nil
}

// constantHint is the method for a product or quotient of a quantity x with a
// physical constant.
func (c *checking) constantHint(b *ast.BinaryExpr, k *types.Const, x ast.Expr, info *types.Info) string {
	op := b.Op.String()
	text := operand(unbracketed(c.text(x)))
	q := quantity(info.Types[x].Type)
	if x == b.X || b.Op == token.MUL {
		if m := map[string]string{
			"Temperature*Boltzmann": "AsEnergy()", "Energy/Boltzmann": "AsTemperature()", "Energy*Avogadro": "PerMole()", "MolarEnergy/Avogadro": "PerParticle()",
			"Frequency*Planck": "AsEnergy()", "Energy/Planck": "AsFrequency()", "MolarEntropy/Avogadro": "PerParticle()", "Mass*Avogadro": "PerMole()",
		}[q+op+k.Name()]; m != "" {
			return "write " + text + "." + m
		}
		if q == "Temperature" && k.Name() == "GasConstant" && b.Op == token.MUL {
			return "write unit.R.Times(" + unbracketed(c.text(x)) + ")"
		}
		if k.Name() == "GasConstant" && q == "MolarEntropy" {
			return "write " + text + ".In(unit.R)"
		}
	}
	return "write it with plain numbers in SI: " + text + ".SI()"
}

// asNumber reports whether the last of stack, a ratio, becomes a plain number:
// it is converted to one, or it scales another quantity of its kind.
func asNumber(stack []ast.Node, info *types.Info) bool {
	for i := len(stack) - 2; i >= 0; i-- {
		switch p := stack[i].(type) {
		case *ast.ParenExpr, *ast.UnaryExpr:
		case *ast.CallExpr:
			return info.Types[p.Fun].IsType() // unit.Energy(a/b) * e too says what it is
		case *ast.BinaryExpr:
			if p.Op != token.ADD && p.Op != token.SUB {
				return false
			}
		default:
			return false
		}
	}
	return false
}

// constantOf is the unit constant that an expression names.
func constantOf(e ast.Expr, info *types.Info) (*types.Const, bool) {
	sel, ok := ast.Unparen(e).(*ast.SelectorExpr)
	if !ok {
		return nil, false
	}
	k, ok := info.Uses[sel.Sel].(*types.Const)
	return k, ok
}

// enclosing is the node around the last of stack, parentheses left out.
func enclosing(stack []ast.Node) ast.Node {
	for i := len(stack) - 2; i >= 0; i-- {
		if _, ok := stack[i].(*ast.ParenExpr); !ok {
			return stack[i]
		}
	}
	return nil
}

// untyped tells whether an expression is made of untyped constants only.
func untyped(e ast.Expr, info *types.Info) bool {
	switch e := ast.Unparen(e).(type) {
	case *ast.BasicLit:
		return true
	case *ast.Ident:
		return untypedConst(info.Uses[e])
	case *ast.SelectorExpr:
		return untypedConst(info.Uses[e.Sel])
	case *ast.UnaryExpr:
		return untyped(e.X, info)
	case *ast.BinaryExpr:
		return untyped(e.X, info) && untyped(e.Y, info)
	}
	return false
}

func untypedConst(o types.Object) bool {
	k, ok := o.(*types.Const)
	if !ok {
		return false
	}
	b, ok := k.Type().(*types.Basic)
	return ok && b.Info()&types.IsUntyped != 0
}

// scaled tells a conversion of a plain number to a quantity, which is how a
// float64 is multiplied by a unit: unit.Temperature(x) * unit.K.
func scaled(e ast.Expr, info *types.Info) bool {
	call, ok := ast.Unparen(e).(*ast.CallExpr)
	if !ok || len(call.Args) != 1 || !info.Types[call.Fun].IsType() {
		return false
	}
	return quantity(info.Types[call.Args[0]].Type) == ""
}

func zero(v constant.Value) bool {
	switch v.Kind() {
	case constant.Int, constant.Float:
		return constant.Sign(v) == 0
	}
	return true
}

// unitFor is the unit that a bare number of a kind of quantity has most likely:
// no pressure in bar is as large as one in Pa.
func (c *checking) unitFor(q string, v constant.Value) string {
	if x, _ := constant.Float64Val(v); q == "Pressure" && x >= 1000 {
		return "Pa"
	}
	if p, err := c.s.importer.Import(unitPath); err == nil {
		return unitOf(p, q)
	}
	return exampleUnit(q)
}

// exampleUnit is a unit constant for a kind of quantity.
func exampleUnit(q string) string {
	switch q {
	case "Temperature":
		return "K"
	case "Energy":
		return "PerCm"
	case "Pressure":
		return "Bar"
	case "Mass":
		return "U"
	case "Length":
		return "Angstrom"
	}
	return "X (a unit constant of that kind)"
}
