package statmech

import (
	"errors"
	"fmt"
)

// ErrDomain is matched by every [*DomainError].
var ErrDomain = errors.New("argument outside the domain")

// A DomainError says which argument of which function was outside the range
// in which the function has a value. Evaluations panic with it; constructors
// and readers return it.
type DomainError struct {
	Func  string // "solid.Debye.HeatCapacity"
	Arg   string // "T"
	Value string // "-3 K"
	Want  string // "positive and finite"
}

func (e *DomainError) Error() string {
	return fmt.Sprintf("%s: %s = %s, want %s", e.Func, e.Arg, e.Value, e.Want)
}

// Unwrap makes errors.Is(err, ErrDomain) true.
func (e *DomainError) Unwrap() error { return ErrDomain }
