package runner

import (
	"go/types"
	"reflect"
	"strings"

	"levelsum/kernel/symbols"
)

// A typeTable answers which reflect.Type a type of the checker has, without
// ever making one: a type that reflection makes where no loaded code has it is
// another type than the one that code loaded later brings along.
type typeTable struct {
	named func(*types.TypeName) reflect.Type // pointers to types that cells declare
	plain map[string]reflect.Type            // composite types that this program itself has
}

func seen[T any](m map[string]reflect.Type) {
	t := reflect.TypeFor[T]()
	m[typeKey(t)] = t
}

// typeKey names a composite type the same for reflect and go/types.
func typeKey(t reflect.Type) string {
	switch t.Kind() {
	case reflect.Slice:
		if t.Name() == "" {
			return "[]" + typeKey(t.Elem())
		}
	case reflect.Map:
		if t.Name() == "" {
			return "map[" + typeKey(t.Key()) + "]" + typeKey(t.Elem())
		}
	case reflect.Pointer:
		if t.Name() == "" {
			return "*" + typeKey(t.Elem())
		}
	case reflect.Interface:
		if t.Name() == "" && t.NumMethod() == 0 {
			return "any"
		}
	}
	if t.PkgPath() == "" {
		return t.Name()
	}
	return t.PkgPath() + "." + t.Name()
}

func (tt *typeTable) init(named func(*types.TypeName) reflect.Type) {
	tt.named = named
	m := map[string]reflect.Type{}
	seen[[]float64](m)
	seen[[]int](m)
	seen[[]string](m)
	seen[[]bool](m)
	seen[[]byte](m)
	seen[[]any](m)
	seen[[]error](m)
	seen[[][]float64](m)
	seen[[][]string](m)
	seen[map[string]float64](m)
	seen[map[string]int](m)
	seen[map[string]string](m)
	seen[map[string]any](m)
	seen[map[int]float64](m)
	for path, table := range symbols.Table() {
		if strings.HasPrefix(path, "levelsum/") {
			for _, v := range table {
				collect(m, v.Type(), 0)
			}
		}
	}
	tt.plain = m
}

// collect adds the slice and map types that a type mentions. What the compiler
// wrote down in a signature or a field exists in this program.
func collect(m map[string]reflect.Type, t reflect.Type, depth int) {
	switch t.Kind() {
	case reflect.Func:
		for i := range t.NumIn() {
			collect(m, t.In(i), depth)
		}
		for i := range t.NumOut() {
			collect(m, t.Out(i), depth)
		}
	case reflect.Pointer:
		if depth == 0 { // the form in which a table holds a type
			for i := range t.NumMethod() {
				collect(m, t.Method(i).Type, 1)
			}
			collect(m, t.Elem(), 1)
		}
	case reflect.Struct:
		if depth == 1 {
			for i := range t.NumField() {
				collect(m, t.Field(i).Type, 2)
			}
		}
	case reflect.Slice, reflect.Map:
		if t.Name() == "" {
			m[typeKey(t)] = t
			collect(m, t.Elem(), 2)
		}
	}
}

// of returns the reflect.Type, nil if it is not known.
func (tt *typeTable) of(t types.Type) reflect.Type {
	switch t := types.Unalias(t).(type) {
	case *types.Basic:
		return basic[t.Kind()]
	case *types.Named:
		o := t.Obj()
		switch {
		case t.TypeArgs().Len() > 0:
			return nil
		case o.Pkg() == nil:
			if o.Name() == "error" {
				return reflect.TypeFor[error]()
			}
			return nil
		case o.Pkg().Path() == "cell":
			if p := tt.named(o); p != nil {
				return p.Elem()
			}
			return nil
		}
		v, ok := symbols.Table()[tablePath(o.Pkg())][o.Name()]
		if !ok || v.Kind() != reflect.Pointer {
			return nil
		}
		return v.Type().Elem()
	case *types.Pointer:
		n, ok := types.Unalias(t.Elem()).(*types.Named)
		if !ok || n.TypeArgs().Len() > 0 || n.Obj().Pkg() == nil {
			return nil
		}
		if n.Obj().Pkg().Path() == "cell" {
			return tt.named(n.Obj())
		}
		if v, ok := symbols.Table()[tablePath(n.Obj().Pkg())][n.Obj().Name()]; ok && v.Kind() == reflect.Pointer {
			return v.Type() // the table holds a nil pointer to each named type
		}
		return nil
	case *types.Interface:
		if t.Empty() {
			return reflect.TypeFor[any]()
		}
		return nil
	case *types.Slice, *types.Map:
		return tt.plain[checkerKey(t)]
	}
	return nil
}

func checkerKey(t types.Type) string {
	switch t := types.Unalias(t).(type) {
	case *types.Slice:
		return "[]" + checkerKey(t.Elem())
	case *types.Map:
		return "map[" + checkerKey(t.Key()) + "]" + checkerKey(t.Elem())
	case *types.Pointer:
		return "*" + checkerKey(t.Elem())
	case *types.Interface:
		if t.Empty() {
			return "any"
		}
	case *types.Basic:
		switch t.Kind() {
		case types.Byte:
			return "uint8"
		case types.Rune:
			return "int32"
		}
		return t.Name()
	case *types.Named:
		if t.TypeArgs().Len() > 0 || t.Obj().Pkg() != nil && t.Obj().Pkg().Path() == "cell" {
			return "?"
		}
		if t.Obj().Pkg() == nil {
			return t.Obj().Name()
		}
		return t.Obj().Pkg().Path() + "." + t.Obj().Name()
	}
	return "?"
}

func tablePath(p *types.Package) string { return p.Path() + "/" + p.Name() }

var basic = map[types.BasicKind]reflect.Type{
	types.Bool: reflect.TypeFor[bool](), types.String: reflect.TypeFor[string](),
	types.Int: reflect.TypeFor[int](), types.Int8: reflect.TypeFor[int8](), types.Int16: reflect.TypeFor[int16](), types.Int32: reflect.TypeFor[int32](), types.Int64: reflect.TypeFor[int64](),
	types.Uint: reflect.TypeFor[uint](), types.Uint8: reflect.TypeFor[uint8](), types.Uint16: reflect.TypeFor[uint16](), types.Uint32: reflect.TypeFor[uint32](), types.Uint64: reflect.TypeFor[uint64](),
	types.Float32: reflect.TypeFor[float32](), types.Float64: reflect.TypeFor[float64](),
	types.Complex64: reflect.TypeFor[complex64](), types.Complex128: reflect.TypeFor[complex128](),
	types.UntypedBool: reflect.TypeFor[bool](), types.UntypedNil: reflect.TypeFor[any](),
}
