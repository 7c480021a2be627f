package cell

import (
	"fmt"
	"go/ast"
	"go/parser"
	"go/types"
	"regexp"
	"slices"
	"strings"
)

var (
	mismatch  = regexp.MustCompile(`^invalid operation: (.+) (\*|/|\+|-|==|!=|<|<=|>|>=) (.+) \(mismatched types (\S+) and (\S+)\)`)
	cannotUse = regexp.MustCompile(`^cannot use (.+) \((?:variable|value|constant \S+) of (?:\w+ )?type (\S+)\) as (\S+) value in `)
)

// quantityHint answers an error about the kinds of quantities by the call that
// makes one of the other.
func (c *checking) quantityHint(msg string) string {
	if m := mismatch.FindStringSubmatch(msg); m != nil {
		x, op, y, tx, ty := m[1], m[2], m[3], m[4], m[5]
		switch {
		case op == "*" && tx == "float64" && strings.HasPrefix(ty, "unit."):
			return fmt.Sprintf("write %s(%s) * %s", ty, x, y)
		case op == "*" && ty == "float64" && strings.HasPrefix(tx, "unit."):
			return fmt.Sprintf("write %s * %s(%s)", x, tx, y)
		case op == "*":
			return ""
		case op == "/" && ty == "float64" && strings.HasPrefix(tx, "unit."):
			return fmt.Sprintf("write %s / %s(%s)", operand(x), tx, y)
		case op == "/":
			return ""
		}
		var ways []string
		if to := c.convert(y, ty, tx); to != "" && tx != "float64" {
			ways = append(ways, operand(x)+" "+op+" "+to)
		}
		if to := c.convert(x, tx, ty); to != "" && ty != "float64" {
			ways = append(ways, to+" "+op+" "+operand(y))
		}
		if len(ways) > 0 {
			return "write " + strings.Join(ways, ", or ")
		}
		return ""
	}
	if m := cannotUse.FindStringSubmatch(msg); m != nil {
		if to := c.convert(m[1], m[2], m[3]); to != "" {
			return "write " + to
		}
	}
	return ""
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
