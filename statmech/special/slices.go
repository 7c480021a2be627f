package special

import "fmt"

// destination returns the slice that a slice form writes into.
func destination(name string, dst, x []float64) []float64 {
	if dst == nil {
		return make([]float64, len(x))
	}
	if len(dst) != len(x) {
		panic(fmt.Sprintf("special: %s: dst has %d elements, the argument has %d", name, len(dst), len(x)))
	}
	return dst
}
