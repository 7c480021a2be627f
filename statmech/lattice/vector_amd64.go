package lattice

import "golang.org/x/sys/cpu"

// vector says that the loops in assembly may be used. Tests switch it.
var vector = hasVector()

func hasVector() bool {
	return cpu.X86.HasAVX512F && cpu.X86.HasAVX512DQ && cpu.X86.HasAVX512IFMA
}

// fill16 writes 16 numbers of the generator for each block, from the states of
// the first 16 in limbs of 52 bits, and leaves those of the last 16.
//
//go:noescape
func fill16(dst *uint64, blocks int, limbs *[6][8]uint64)

// update8 is the loop of spins.update. It returns how many groups it did and
// how many random numbers are left.
//
//go:noescape
func update8(own, above, below, beside, side, sites *uint64, groups int, digits *digits, random *uint64, left int) (done, rest int)
