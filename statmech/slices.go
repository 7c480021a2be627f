package statmech

import (
	"levelsum/display"
	"levelsum/statmech/unit"
)

// A SliceMode is a Mode that has a faster way for many temperatures than one
// call for each.
type SliceMode interface {
	Mode
	ReducedAt(ts []unit.Temperature) []Reduced
}

// ReducedAt returns the functions of m at each temperature, by m's own slice
// form if it has one.
func ReducedAt(m Mode, ts []unit.Temperature) []Reduced {
	if s, ok := m.(SliceMode); ok {
		return s.ReducedAt(ts)
	}
	rs := make([]Reduced, len(ts))
	for i, T := range ts {
		if i%64 == 0 {
			display.Checkpoint()
		}
		rs[i] = m.Reduced(T)
	}
	return rs
}
