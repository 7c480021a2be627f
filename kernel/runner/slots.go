package runner

import (
	"fmt"
	"reflect"
	"unsafe"
)

// slots are the places of session variables, by slot ID.
//
// A place is kept as a bare address beside its type, and compiled code is given
// the bare address. The type of a pointer that reflection makes where no loaded
// code has it is another type, to a type assertion, than the one that code
// loaded later brings along; only the interpreter is handed such a pointer, to
// read and write through, and it is never a value of the user's.
type slots struct{ m map[string]place }

type place struct {
	typ  reflect.Type
	addr unsafe.Pointer
}

func (s *slots) init() { s.m = map[string]place{} }

// bind sets a pointer variable, given by its address of type **T, to the
// slot's place, which is made now if it is new.
func (s *slots) bind(id string, variable reflect.Value) error {
	typ := variable.Type().Elem().Elem()
	pl, ok := s.m[id]
	if !ok {
		pl = place{typ, reflect.New(typ).UnsafePointer()}
		s.m[id] = pl
	}
	if pl.typ != typ {
		return fmt.Errorf("has the type %s in one place and %s in another; this is a defect of levelsum", pl.typ, typ)
	}
	*(*unsafe.Pointer)(variable.UnsafePointer()) = pl.addr
	return nil
}

// pointer returns a pointer to a slot's place for interpreted code.
func (s *slots) pointer(id string, typ reflect.Type) (reflect.Value, error) {
	pl, ok := s.m[id]
	if !ok {
		pl = place{typ, reflect.New(typ).UnsafePointer()}
		s.m[id] = pl
	}
	if pl.typ != typ {
		return reflect.Value{}, fmt.Errorf("a variable has the type %s in one place and %s in another; this is a defect of levelsum", pl.typ, typ)
	}
	return reflect.NewAt(typ, pl.addr), nil
}

// value returns what a slot holds, nil if it has no place yet.
func (s *slots) value(id string) any {
	pl, ok := s.m[id]
	if !ok {
		return nil
	}
	return reflect.NewAt(pl.typ, pl.addr).Elem().Interface()
}

// zero gives a slot the zero value of its type.
func (s *slots) zero(id string) {
	if pl, ok := s.m[id]; ok {
		reflect.NewAt(pl.typ, pl.addr).Elem().SetZero()
	}
}
