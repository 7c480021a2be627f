package cell

import (
	"fmt"
	"go/ast"
	"go/types"
	"strconv"
	"strings"
)

// typ writes a type as the unit names it.
func (e *emitter) typ(t types.Type) string {
	switch t := t.(type) {
	case *types.Basic:
		if t.Kind() == types.UnsafePointer {
			return e.use("unsafe") + ".Pointer"
		}
		return t.Name()
	case *types.Alias:
		return e.named(t.Obj(), t.TypeArgs())
	case *types.Named:
		return e.named(t.Obj(), t.TypeArgs())
	case *types.TypeParam:
		return t.Obj().Name()
	case *types.Pointer:
		return "*" + e.typ(t.Elem())
	case *types.Slice:
		return "[]" + e.typ(t.Elem())
	case *types.Array:
		return fmt.Sprintf("[%d]%s", t.Len(), e.typ(t.Elem()))
	case *types.Map:
		return fmt.Sprintf("map[%s]%s", e.typ(t.Key()), e.typ(t.Elem()))
	case *types.Chan:
		switch t.Dir() {
		case types.SendOnly:
			return "chan<- (" + e.typ(t.Elem()) + ")"
		case types.RecvOnly:
			return "<-chan (" + e.typ(t.Elem()) + ")"
		}
		return "chan (" + e.typ(t.Elem()) + ")"
	case *types.Signature:
		return "func" + e.signature(t)
	case *types.Struct:
		var fs []string
		for i := range t.NumFields() {
			f := t.Field(i)
			s := e.typ(f.Type())
			if !f.Embedded() {
				s = mark(f.Name()) + " " + s
			} else if b, ok := f.Type().(*types.Basic); ok {
				s = e.guard(mark(b.Name()))
			}
			tag := t.Tag(i)
			if e.list == nil && !f.Exported() && f.Name() != "_" && !(f.Embedded() && isStruct(f.Type())) {
				tag = strings.TrimSpace(`json:"-" xml:"-" ` + tag)
			}
			if tag != "" {
				s += " " + strconv.Quote(tag)
			}
			fs = append(fs, s)
		}
		return "struct{ " + strings.Join(fs, "; ") + " }"
	case *types.Interface:
		if t.Empty() {
			return "interface{}"
		}
		var ms []string
		for i := range t.NumExplicitMethods() {
			m := t.ExplicitMethod(i)
			ms = append(ms, mark(m.Name())+e.signature(m.Signature()))
		}
		for i := range t.NumEmbeddeds() {
			ms = append(ms, e.typ(t.EmbeddedType(i)))
		}
		return "interface{ " + strings.Join(ms, "; ") + " }"
	case *types.Union:
		var us []string
		for i := range t.Len() {
			s := e.typ(t.Term(i).Type())
			if t.Term(i).Tilde() {
				s = "~" + s
			}
			us = append(us, s)
		}
		return strings.Join(us, " | ")
	}
	e.fail(0, "a type that cannot be written: "+t.String())
	return "int"
}

func (e *emitter) signature(t *types.Signature) string {
	list := func(tup *types.Tuple, variadic bool) string {
		var ps []string
		for i := range tup.Len() {
			if variadic && i == tup.Len()-1 {
				ps = append(ps, "..."+e.typ(tup.At(i).Type().(*types.Slice).Elem()))
				continue
			}
			ps = append(ps, e.typ(tup.At(i).Type()))
		}
		return "(" + strings.Join(ps, ", ") + ")"
	}
	s := list(t.Params(), t.Variadic())
	if t.Results().Len() > 0 {
		s += " " + list(t.Results(), false)
	}
	return s
}

func (e *emitter) named(o *types.TypeName, args *types.TypeList) string {
	s := o.Name()
	switch {
	case o.Pkg() == nil: // error, any, comparable
	case isOuter(o):
		s = e.ref(o)
	case isCell(o.Pkg()):
		e.fail(o.Pos(), fmt.Sprintf("type %s is declared inside a function and cannot be the type of a session variable", o.Name()))
	default:
		if !o.Exported() {
			e.fail(0, fmt.Sprintf("a session variable cannot have the type %s.%s, whose name is not exported", o.Pkg().Name(), o.Name()))
		}
		s = e.use(o.Pkg().Path()) + "." + o.Name()
	}
	if args.Len() > 0 {
		var as []string
		for i := range args.Len() {
			as = append(as, e.typ(args.At(i)))
		}
		s += "[" + strings.Join(as, ", ") + "]"
	}
	return s
}

func constantString(lit *ast.BasicLit) string {
	s, err := strconv.Unquote(lit.Value)
	if err != nil {
		return ""
	}
	return s
}
