package runner

import (
	"fmt"
	"reflect"
	"unsafe"
)

// slots are the places of session variables, by slot ID.
//
// A place is kept as a bare address beside its type. The type of a pointer to
// it is never made by reflection: reflection would make a new type where no
// loaded code has it yet, and code loaded later has one of its own, which is
// another type to a type assertion.
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
