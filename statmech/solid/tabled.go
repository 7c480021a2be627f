package solid

import (
	"fmt"
	"unsafe"

	"levelsum/statmech/internal/lanes"
	"levelsum/statmech/unit"
)

// A tabledModel has a heat capacity n·c(θ/T) with c in a table: one pass over
// the temperatures divides, checks, looks up and converts to molar units.
type tabledModel interface{ heatTable() heatTable }

type heatTable struct {
	c        *lanes.Table8
	theta, n float64
	beyond   func(x float64) float64 // c where the table does not reach
}

// tabledHeats writes the molar heat capacities of h to dst.
func tabledHeats(dst []unit.MolarEntropy, fn string, ts []unit.Temperature, h heatTable) {
	// θ/T is in the table for positive and finite T only, so what is wrong with
	// a temperature is found here.
	h.c.FillQuotients(numbers(dst), numbers(ts), h.theta, h.n, float64(unit.R), func(k int) float64 {
		T, err := temperature(fn, "T", ts[k])
		if err != nil {
			err.Arg = fmt.Sprintf("ts[%d]", k)
			panic(err)
		}
		return h.beyond(h.theta / T)
	})
}

// numbers returns the same memory as numbers in SI units.
func numbers[Q ~float64](q []Q) []float64 {
	return unsafe.Slice((*float64)(unsafe.Pointer(unsafe.SliceData(q))), len(q))
}
