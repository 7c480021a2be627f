package gas

import (
	"fmt"
	"math"

	"levelsum/statmech"
)

// SpinWeights are the numbers of nuclear-spin states that go with the
// rotational levels of a molecule with identical nuclei. What the entries of
// Weights mean is said with each rotor: even and odd J of a linear one, the
// parities of Ka and Kc of an asymmetric top, K modulo n of a symmetric top, the
// species A, E, F of a tetrahedral spherical top.
//
// By default the spin degeneracy Total is divided out, the convention of
// thermochemical tables: S is less by R ln Total, and at high temperature the
// rotor behaves as with its symmetry number. With Include it is left in.
type SpinWeights struct {
	Weights []float64
	Total   float64 // Π(2I+1) over the nuclei that the weights are for
	Include bool
}

// check returns an error unless there are n weights, not negative and not all
// zero, and a positive Total.
func (s *SpinWeights) check(fn string, n int, meaning string) error {
	if n > 0 && len(s.Weights) != n || len(s.Weights) == 0 {
		return &statmech.DomainError{Func: fn, Arg: "Spin.Weights", Value: fmt.Sprint(s.Weights), Want: meaning}
	}
	sum := 0.0
	for _, w := range s.Weights {
		if !(w >= 0) || math.IsInf(w, 1) {
			return &statmech.DomainError{Func: fn, Arg: "Spin.Weights", Value: fmt.Sprint(s.Weights), Want: "finite weights, not negative"}
		}
		sum += w
	}
	if sum == 0 {
		return &statmech.DomainError{Func: fn, Arg: "Spin.Weights", Value: fmt.Sprint(s.Weights), Want: "at least one positive weight"}
	}
	if !(s.Total > 0) || math.IsInf(s.Total, 1) {
		return &statmech.DomainError{Func: fn, Arg: "Spin.Total", Value: fmt.Sprint(s.Total), Want: "the positive number of nuclear-spin states, Π(2I+1)"}
	}
	return nil
}

// checkSymmetry returns an error unless exactly one of a symmetry number and
// spin weights is given, which would count the symmetry twice.
func checkSymmetry(fn string, sigma int, s *SpinWeights) error {
	if s == nil && sigma < 1 {
		return &statmech.DomainError{Func: fn, Arg: "Symmetry", Value: fmt.Sprint(sigma), Want: "a symmetry number of 1 or more, or spin weights"}
	}
	if s != nil && sigma != 0 {
		return &statmech.DomainError{Func: fn, Arg: "Symmetry", Value: fmt.Sprint(sigma), Want: "0 where spin weights are given: they hold the symmetry already"}
	}
	return nil
}

// factor returns what q is multiplied with after the sum over levels.
func (s *SpinWeights) factor(sigma int) float64 {
	if s == nil {
		return 1 / float64(sigma)
	}
	if s.Include {
		return 1
	}
	return 1 / s.Total
}

// mean returns the mean weight of the levels at high temperature, given the
// share of the levels that each entry has.
func (s *SpinWeights) mean(share []float64) float64 {
	if s == nil {
		return 1
	}
	m := 0.0
	for i, w := range s.Weights {
		if share == nil {
			m += w / float64(len(s.Weights))
		} else {
			m += w * share[i]
		}
	}
	return m
}
