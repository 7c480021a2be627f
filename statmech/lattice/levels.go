package lattice

import (
	"fmt"
	"math/bits"

	"levelsum/statmech"
	"levelsum/statmech/unit"
)

// mostEnumerated is 2²⁵ states, a second or less.
const mostEnumerated = 25

// Levels returns the energies of the lattice with the number of states of
// each, by going through all states once: 25 spins at most. Energies are in
// ascending order, from -2NJ.
//
// It returns a [*statmech.DomainError] if a field is out of range or there are
// more spins.
func (t Torus) Levels() (*statmech.Levels, error) {
	g, err := t.states("lattice.Torus.Levels")
	if err != nil {
		return nil, err
	}
	var energies []unit.Energy
	var degeneracies []float64
	for i, n := range g {
		if n > 0 {
			energies = append(energies, t.J*unit.Energy(2*i-2*t.Spins()))
			degeneracies = append(degeneracies, n)
		}
	}
	return statmech.NewLevels(energies, degeneracies)
}

// states returns the number of states with 0, 1, … disagreeing pairs. Each
// state differs from the one before by one spin (Gray code).
func (t Torus) states(fn string) ([]float64, error) {
	if err := t.check(fn); err != nil {
		return nil, err
	}
	n := t.Spins()
	if n > mostEnumerated {
		return nil, &statmech.DomainError{Func: fn, Arg: "Rows and Columns", Value: fmt.Sprintf("%d and %d", t.Rows, t.Columns), Want: fmt.Sprintf("%d spins at most", mostEnumerated)}
	}
	near := make([][4]uint32, n) // the neighbours, a bit each
	for i := range near {
		r, c := i/t.Columns, i%t.Columns
		bit := func(r, c int) uint32 { return 1 << (r*t.Columns + c) }
		near[i] = [4]uint32{bit((r+1)%t.Rows, c), bit((r+t.Rows-1)%t.Rows, c), bit(r, (c+1)%t.Columns), bit(r, (c+t.Columns-1)%t.Columns)}
	}
	g := make([]float64, 2*n+1)
	state, disagree := uint32(0), 0
	g[0]++
	for k := uint32(1); k < 1<<n; k++ {
		i := bits.TrailingZeros32(k)
		up := state >> i & 1
		for _, b := range near[i] {
			if (state&b != 0) == (up == 1) {
				disagree++
			} else {
				disagree--
			}
		}
		state ^= 1 << i
		g[disagree]++
	}
	return g, nil
}
