package cell

import (
	"go/ast"
	"go/constant"
	"go/token"
	"go/types"
	"strconv"
	"strings"
)

// arithmetic says that values of a type are added and multiplied right.
func (w *scripter) arithmetic(t types.Type) {
	b, ok := t.Underlying().(*types.Basic)
	if !ok || b.Kind() != types.Float64 && b.Kind() != types.Int && b.Kind() != types.String {
		w.refuse("arithmetic of type " + typeString(t))
	}
}

// boxed writes an expression that becomes an interface value: its type is said.
func (w *scripter) boxed(e ast.Expr) string {
	t := w.info.Types[e].Type
	if t == nil {
		return w.refuse("an expression without a type")
	}
	if b, ok := t.(*types.Basic); ok && b.Kind() == types.UntypedNil {
		return "nil"
	}
	if n, ok := types.Unalias(t).(*types.Named); ok {
		if b, ok := n.Underlying().(*types.Basic); ok && b.Kind() == types.Float64 && w.info.Types[e].Value == nil {
			return w.typ(t) + "(" + w.expr(e) + ")"
		}
	}
	return w.expr(e)
}

// expr writes an expression.
func (w *scripter) expr(e ast.Expr) string {
	e = ast.Unparen(e)
	tv, ok := w.info.Types[e]
	if !ok {
		return w.refuse("an expression without a type")
	}
	if tv.Value != nil {
		return w.constant(tv)
	}
	switch e := e.(type) {
	case *ast.Ident:
		switch o := w.info.Uses[e].(type) {
		case *types.Nil:
			return "nil"
		case *types.Var:
			if l := w.p.slotOf(o, w.info); l != nil {
				w.known(o.Type())
				return w.slot(l)
			}
		case *types.Func:
			if isOuter(o) && o.Signature().TypeParams() == nil {
				return w.cellName(o)
			}
		}
		return w.refuse("the name " + e.Name)
	case *ast.SelectorExpr:
		w.known(tv.Type)
		return w.selector(e)
	case *ast.CallExpr:
		return w.call(e)
	case *ast.BinaryExpr:
		return w.binary(e)
	case *ast.UnaryExpr:
		switch e.Op {
		case token.SUB:
			w.arithmetic(tv.Type)
			return "(-" + w.expr(e.X) + ")"
		case token.NOT:
			return "(!" + w.expr(e.X) + ")"
		case token.AND:
			if c, ok := ast.Unparen(e.X).(*ast.CompositeLit); ok {
				w.known(tv.Type)
				return "&" + w.composite(c)
			}
		}
		return w.refuse("the operator " + e.Op.String())
	case *ast.IndexExpr:
		if id := funcIdent(e.X); id != nil {
			if _, inst := w.info.Instances[id]; inst {
				return w.refuse("a generic function or type")
			}
		}
		w.known(tv.Type)
		t := w.info.Types[e.X].Type
		switch t.Underlying().(type) {
		case *types.Slice, *types.Map:
			w.known(t)
			return w.expr(e.X) + "[" + w.expr(e.Index) + "]"
		}
		return w.refuse("indexing of this kind")
	case *ast.CompositeLit:
		return w.composite(e)
	}
	return w.refuse("an expression of this kind")
}

func (w *scripter) selector(e *ast.SelectorExpr) string {
	if sel := w.info.Selections[e]; sel != nil {
		if sel.Kind() != types.FieldVal {
			return w.refuse("a method as a value")
		}
		w.known(w.info.Types[e.X].Type)
		return w.field(e, sel, w.expr(e.X))
	}
	o := w.info.Uses[e.Sel]
	if o == nil || o.Pkg() == nil || !w.t.Has(o.Pkg().Path(), o.Name()) {
		return w.refuse("the name " + e.Sel.Name + ", which the interpreter does not have")
	}
	if isStdin(o) {
		return w.refuse("standard input, which is the reader")
	}
	if _, ok := o.(*types.Var); !ok {
		if _, ok := o.(*types.Func); !ok {
			return w.refuse("the name " + e.Sel.Name)
		}
	}
	return w.pkg(o.Pkg().Path()) + "." + o.Name()
}

func (w *scripter) call(e *ast.CallExpr) string {
	tv := w.info.Types[e]
	if t, ok := tv.Type.(*types.Tuple); ok {
		for i := range t.Len() {
			w.known(t.At(i).Type())
		}
	} else if !tv.IsVoid() {
		w.known(tv.Type)
	}
	fun := w.info.Types[e.Fun]
	if fun.IsType() {
		return w.conversion(e, fun.Type)
	}
	if fun.IsBuiltin() {
		id, ok := ast.Unparen(e.Fun).(*ast.Ident)
		if ok && id.Name == "len" && len(e.Args) == 1 {
			switch w.info.Types[e.Args[0]].Type.Underlying().(type) {
			case *types.Slice, *types.Map, *types.Basic:
				return "len(" + w.expr(e.Args[0]) + ")"
			}
		}
		return w.refuse("a builtin function")
	}
	sig, ok := fun.Type.Underlying().(*types.Signature)
	if !ok {
		return w.refuse("a call of this kind")
	}
	var f string
	switch x := ast.Unparen(e.Fun).(type) {
	case *ast.SelectorExpr:
		sel := w.info.Selections[x]
		switch {
		case sel == nil:
			o, _ := w.info.Uses[x.Sel].(*types.Func)
			if o == nil || o.Pkg() == nil || o.Signature().TypeParams() != nil || replaced(o) != "" || !w.t.Has(o.Pkg().Path(), o.Name()) {
				return w.refuse("a call of " + x.Sel.Name + ", which the interpreter does not have")
			}
			f = w.pkg(o.Pkg().Path()) + "." + o.Name()
		case sel.Kind() == types.MethodVal:
			w.known(w.info.Types[x.X].Type)
			f = w.method(x, sel)
		default:
			return w.refuse("a call of a function in a field")
		}
	case *ast.Ident:
		o, _ := w.info.Uses[x].(*types.Func)
		if o == nil || !isOuter(o) || o.Signature().TypeParams() != nil {
			return w.refuse("a call of a function value or generic function")
		}
		f = w.cellName(o)
	default:
		return w.refuse("a call of this kind")
	}
	if len(e.Args) == 1 && sig.Params().Len() > 1 {
		return w.refuse("a call with the results of a call")
	}
	var args []string
	for i, a := range e.Args {
		pt := paramType(sig, i, e.Ellipsis.IsValid())
		if at := w.info.Types[a].Type; pt != nil && types.IsInterface(pt) && !types.IsInterface(at) {
			w.known(at)
			args = append(args, w.boxed(a))
			continue
		}
		args = append(args, w.expr(a))
	}
	s := f + "(" + strings.Join(args, ", ")
	if e.Ellipsis.IsValid() {
		s += "..."
	}
	return s + ")"
}

// method writes the receiver and name of a method that is called.
func (w *scripter) method(x *ast.SelectorExpr, sel *types.Selection) string {
	recv := w.info.Types[x.X].Type
	m := sel.Obj().(*types.Func)
	name := m.Name()
	if isCell(m.Pkg()) && !m.Exported() {
		name = mark(name)
	}
	if _, ptr := m.Signature().Recv().Type().(*types.Pointer); ptr {
		if _, isPtr := recv.Underlying().(*types.Pointer); !isPtr {
			// The address of a variable is taken without a word.
			if _, ok := ast.Unparen(x.X).(*ast.Ident); !ok {
				return w.refuse("a method that needs the address of a part")
			}
		}
	}
	if len(sel.Index()) > 1 {
		return w.refuse("a method of an embedded type")
	}
	return w.expr(x.X) + "." + name
}

func paramType(sig *types.Signature, i int, ellipsis bool) types.Type {
	n := sig.Params().Len()
	if sig.Variadic() && i >= n-1 && !ellipsis {
		return sig.Params().At(n - 1).Type().(*types.Slice).Elem()
	}
	if i < n {
		return sig.Params().At(i).Type()
	}
	return nil
}

// conversion writes a conversion between numbers.
func (w *scripter) conversion(e *ast.CallExpr, to types.Type) string {
	from := w.info.Types[e.Args[0]].Type
	number := func(t types.Type) bool {
		b, ok := t.Underlying().(*types.Basic)
		return ok && (b.Kind() == types.Float64 || b.Kind() == types.Int)
	}
	if !number(from) || !number(to) {
		return w.refuse("a conversion other than between float64 and int")
	}
	if b := to.Underlying().(*types.Basic); b.Kind() == types.Int && from.Underlying().(*types.Basic).Kind() == types.Float64 {
		return w.refuse("a conversion of float64 to int")
	}
	w.known(to)
	return w.typ(to) + "(" + w.expr(e.Args[0]) + ")"
}

func (w *scripter) binary(e *ast.BinaryExpr) string {
	tx, ty := w.info.Types[e.X].Type, w.info.Types[e.Y].Type
	switch e.Op {
	case token.LAND, token.LOR:
	case token.ADD, token.SUB, token.MUL, token.QUO:
		w.arithmetic(tx)
		w.arithmetic(ty)
		if e.Op == token.QUO && tx.Underlying().(*types.Basic).Kind() == types.Int {
			return w.refuse("division of integers")
		}
	case token.LSS, token.LEQ, token.GTR, token.GEQ, token.EQL, token.NEQ:
		for _, t := range []types.Type{tx, ty} {
			if b, ok := t.Underlying().(*types.Basic); !ok || b.Info()&types.IsUntyped != 0 && b.Kind() != types.UntypedBool || b.Info()&(types.IsNumeric|types.IsString) == 0 {
				return w.refuse("a comparison of type " + typeString(t))
			}
			if b, ok := t.Underlying().(*types.Basic); ok && b.Kind() != types.Float64 && b.Kind() != types.Int && b.Kind() != types.String {
				return w.refuse("a comparison of type " + typeString(t))
			}
		}
	default:
		return w.refuse("the operator " + e.Op.String())
	}
	return "(" + w.expr(e.X) + " " + e.Op.String() + " " + w.expr(e.Y) + ")"
}

// composite writes a literal of a slice, map or struct.
func (w *scripter) composite(e *ast.CompositeLit) string {
	t := w.info.Types[e].Type
	w.known(t)
	var parts []string
	switch u := t.Underlying().(type) {
	case *types.Slice:
		for _, el := range e.Elts {
			if _, ok := el.(*ast.KeyValueExpr); ok {
				return w.refuse("a slice literal with indices")
			}
			parts = append(parts, w.element(el, u.Elem()))
		}
	case *types.Map:
		for _, el := range e.Elts {
			kv := el.(*ast.KeyValueExpr)
			parts = append(parts, w.element(kv.Key, u.Key())+": "+w.element(kv.Value, u.Elem()))
		}
	case *types.Struct:
		if _, named := types.Unalias(t).(*types.Named); !named {
			return w.refuse("a struct type without a name")
		}
		for i, el := range e.Elts {
			f, value := u.Field(i), el
			name := f.Name()
			if kv, ok := el.(*ast.KeyValueExpr); ok {
				value = kv.Value
				f, _ = w.info.Uses[kv.Key.(*ast.Ident)].(*types.Var)
				name = f.Name()
			}
			if isCell(f.Pkg()) && !f.Exported() {
				name = mark(name)
			}
			parts = append(parts, name+": "+w.element(value, f.Type()))
		}
	default:
		return w.refuse("a literal of this kind")
	}
	return w.typ(t) + "{" + strings.Join(parts, ", ") + "}"
}

func (w *scripter) element(e ast.Expr, t types.Type) string {
	if types.IsInterface(t) && !types.IsInterface(w.info.Types[e].Type) {
		w.known(w.info.Types[e].Type)
		return w.boxed(e)
	}
	return w.expr(e)
}

// typ writes a type.
func (w *scripter) typ(t types.Type) string {
	switch t := types.Unalias(t).(type) {
	case *types.Basic:
		return t.Name()
	case *types.Pointer:
		return "*" + w.typ(t.Elem())
	case *types.Slice:
		return "[]" + w.typ(t.Elem())
	case *types.Map:
		return "map[" + w.typ(t.Key()) + "]" + w.typ(t.Elem())
	case *types.Interface:
		if t.Empty() {
			return "interface{}"
		}
	case *types.Named:
		o := t.Obj()
		switch {
		case t.TypeArgs().Len() > 0:
			return w.refuse("a generic type")
		case o.Pkg() == nil:
			return o.Name()
		case isOuter(o):
			return w.cellName(o)
		case isCell(o.Pkg()):
			return w.refuse("a type declared inside a function")
		}
		return w.pkg(o.Pkg().Path()) + "." + o.Name()
	}
	return w.refuse("the type " + typeString(t))
}

// constant writes the value of a constant expression with its type.
func (w *scripter) constant(tv types.TypeAndValue) string {
	t := tv.Type
	if b, ok := t.(*types.Basic); ok && b.Info()&types.IsUntyped != 0 {
		t = types.Default(t)
	}
	w.known(t)
	b, ok := t.Underlying().(*types.Basic)
	if !ok {
		return w.refuse("a constant as an interface") // the default type was not recorded
	}
	var lit string
	switch {
	case b.Info()&types.IsBoolean != 0:
		lit = strconv.FormatBool(constant.BoolVal(tv.Value))
	case b.Info()&types.IsString != 0:
		lit = strconv.Quote(constant.StringVal(tv.Value))
	case b.Kind() == types.Int:
		n, ok := constant.Int64Val(constant.ToInt(tv.Value))
		if !ok {
			return w.refuse("a constant of this size")
		}
		lit = strconv.FormatInt(n, 10)
	case b.Kind() == types.Float64:
		f, _ := constant.Float64Val(constant.ToFloat(tv.Value))
		lit = strconv.FormatFloat(f, 'g', -1, 64)
		if !strings.ContainsAny(lit, ".e") {
			lit += ".0"
		}
	default:
		return w.refuse("a constant of type " + typeString(t))
	}
	return w.typ(t) + "(" + lit + ")"
}
