//go:build !amd64

package lattice

// There is assembly for amd64 only.
const vector = false

func hasVector() bool { return false }

func fill16(dst *uint64, blocks int, limbs *[6][8]uint64) {}

func update8(own, above, below, beside, side, sites *uint64, groups int, digits *digits, random *uint64, left int) (done, rest int) {
	return 0, left
}
