package uncertain

import (
	"fmt"
	"sort"

	"levelsum/statmech"
)

// Values returns the finite draws in the order in which they were made.
func (s *Simulation) Values() []float64 { return append([]float64(nil), s.values...) }

// Interval returns the ends of the probabilistically symmetric coverage
// interval for probability p (JCGM 101:2008, 7.7).
func (s *Simulation) Interval(p float64) (lo, hi float64) {
	checkProbability("Interval", p)
	s.mu.Lock()
	defer s.mu.Unlock()
	if s.sorted != nil { // others may be reading it
		a, b := ranks(len(s.sorted), p)
		return s.sorted[a], s.sorted[b]
	}
	return interval(s.Values(), p)
}

// Shortest returns the ends of the shortest coverage interval for probability
// p (JCGM 101:2008, 5.3.4): where the distribution is not symmetric it is not
// the symmetric one.
func (s *Simulation) Shortest(p float64) (lo, hi float64) {
	checkProbability("Shortest", p)
	v := s.inOrder()
	q := min(len(v)-1, int(p*float64(len(v))+0.5))
	best := 0
	for r := range len(v) - q {
		if v[r+q]-v[r] < v[best+q]-v[best] {
			best = r
		}
	}
	return v[best], v[best+q]
}

func checkProbability(fn string, p float64) {
	if !(p > 0) || !(p < 1) {
		panic(&statmech.DomainError{Func: "uncertain.Simulation." + fn, Arg: "p", Value: fmt.Sprint(p), Want: "between 0 and 1"})
	}
}

func (s *Simulation) inOrder() []float64 {
	s.mu.Lock()
	defer s.mu.Unlock()
	if s.sorted == nil {
		s.sorted = append([]float64(nil), s.values...)
		sort.Float64s(s.sorted)
	}
	return s.sorted
}

// ranks returns where the ends of the symmetric interval of m values are.
func ranks(m int, p float64) (a, b int) {
	q := int(p*float64(m) + 0.5)
	r := (m - q) / 2
	return max(0, r-1), min(m-1, r+q-1)
}

// interval returns the symmetric interval of values that it may reorder.
func interval(v []float64, p float64) (lo, hi float64) {
	a, b := ranks(len(v), p)
	selectRank(v, a)
	lo = v[a]
	selectRank(v[a:], b-a)
	return lo, v[b]
}

// selectRank moves the element of rank k to its place (C. A. R. Hoare, Commun.
// ACM 4, 321 (1961), algorithm 65).
func selectRank(v []float64, k int) {
	lo, hi := 0, len(v)-1
	for lo < hi {
		a, b, c := v[lo], v[lo+(hi-lo)/2], v[hi]
		pivot := max(min(a, b), min(max(a, b), c))
		i, j := lo, hi
		for i <= j {
			for v[i] < pivot {
				i++
			}
			for v[j] > pivot {
				j--
			}
			if i <= j {
				v[i], v[j] = v[j], v[i]
				i++
				j--
			}
		}
		switch {
		case k <= j:
			hi = j
		case k >= i:
			lo = i
		default:
			return
		}
	}
}
