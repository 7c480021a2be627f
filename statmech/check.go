package statmech

import (
	"math"
	"strconv"

	"levelsum/statmech/unit"
)

// CheckTemperature panics with a [*DomainError] that names the function fn if
// T is not positive and finite. Modes call it at their exported edge.
func CheckTemperature(fn string, T unit.Temperature) {
	if !(T > 0) || math.IsInf(float64(T), 1) {
		panic(&DomainError{Func: fn, Arg: "T", Value: T.String(), Want: "positive and finite"})
	}
}

// CheckPositive panics with a [*DomainError] that names the function fn and
// the argument arg if x is not positive and finite.
func CheckPositive(fn, arg string, x unit.Quantity) {
	if v := x.SI(); !(v > 0) || math.IsInf(v, 1) {
		panic(&DomainError{Func: fn, Arg: arg, Value: x.String(), Want: "positive and finite"})
	}
}

// CheckRatio panics with a [*DomainError] that names the function fn and the
// argument arg if the number x is not positive and finite.
func CheckRatio(fn, arg string, x float64) {
	if !(x > 0) || math.IsInf(x, 1) {
		panic(&DomainError{Func: fn, Arg: arg, Value: strconv.FormatFloat(x, 'g', -1, 64), Want: "positive and finite"})
	}
}
