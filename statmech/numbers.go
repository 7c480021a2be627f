package statmech

import "unsafe"

// numbers returns the same memory as numbers in SI units.
func numbers[Q ~float64](q []Q) []float64 {
	return unsafe.Slice((*float64)(unsafe.Pointer(unsafe.SliceData(q))), len(q))
}
