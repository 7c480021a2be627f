package lanes

import "golang.org/x/sys/cpu"

// vector says that the loops in assembly may be used. Tests switch it.
var vector = hasVector()

func hasVector() bool {
	return cpu.X86.HasAVX512F && cpu.X86.HasAVX512DQ && cpu.X86.HasAVX512VL
}

// fill8 is the loop of Table8.run for groups of 8 numbers. It writes the lanes
// that are inside, says in inside which they are, and returns whether any was
// not.
//
//go:noescape
func fill8(dst, v *float64, inside *uint8, groups int, num, f1, f2 float64, rows *[9]float64, end float64, divide bool) bool

// products8 is the loop of Table8.AddProducts.
//
//go:noescape
func products8(sum, y *[Width]float64, w, weight *float64, n int, rows *[9]float64, end float64) int

// moments8 is the loop of Moments.Add for whole groups. It returns
// how many groups it did.
//
//go:noescape
func moments8(m *Moments, e, weight *float64, groups int) int

// chebyshev8 is the loop of ChebyshevMoments for groups of 8 points.
//
//go:noescape
func chebyshev8(sum *[Chebyshevs][Width]float64, w, weight *float64, groups int, mid, half float64)

// fill12 is the loop of fillLong for groups of 8 numbers; see fill8. The rows are
// of degree 12 or 11.
//
//go:noescape
func fill12(dst, x *float64, inside *uint8, groups int, from, perUnit, segments float64, rows *float64, twelve bool) bool
