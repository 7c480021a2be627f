//go:build !amd64

package lanes

// There is assembly for amd64 only.
const vector = false

func fill8(dst, v *float64, inside *uint8, groups int, num, f1, f2 float64, rows *[9]float64, end float64, divide bool) bool {
	return false
}

func products8(sum, y *[Width]float64, w, weight *float64, n int, rows *[9]float64, end float64) int {
	return 0
}

func hasVector() bool { return false }

func moments8(m *Moments, e, weight *float64, groups int) int { return 0 }

func chebyshev8(sum *[Chebyshevs][Width]float64, w, weight *float64, groups int, mid, half float64) {
}

func fill12(dst, x *float64, inside *uint8, groups int, from, perUnit, segments float64, rows *float64, twelve bool) bool {
	return false
}
