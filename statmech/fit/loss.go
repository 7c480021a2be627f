package fit

import (
	"fmt"
	"math"
)

// loss gives the weight of a point from its residual in units of its standard
// uncertainty, times scale.
type loss struct {
	name   string
	weight func(z float64) float64
}

// Huber lessens the pull of points further than k standard uncertainties from
// the model: their weight falls as 1/|z|. k = 1.345 keeps 95 per cent of the
// efficiency for normal errors. (P. J. Huber, Ann. Math. Stat. 35, 73 (1964).)
func Huber(k float64) Option {
	return optionFunc(func(s *settings) error {
		if !(k > 0) {
			return fmt.Errorf("fit: Huber: k = %g, want positive", k)
		}
		s.loss = loss{fmt.Sprintf("Huber, k = %g", k), func(z float64) float64 {
			if a := math.Abs(z); a > k {
				return k / a
			}
			return 1
		}}
		return nil
	})
}

// Bisquare gives points further than k standard uncertainties from the model
// no weight. k = 4.685 keeps 95 per cent of the efficiency for normal errors.
// (A. E. Beaton, J. W. Tukey, Technometrics 16, 147 (1974).)
func Bisquare(k float64) Option {
	return optionFunc(func(s *settings) error {
		if !(k > 0) {
			return fmt.Errorf("fit: Bisquare: k = %g, want positive", k)
		}
		s.loss = loss{fmt.Sprintf("bisquare, k = %g", k), func(z float64) float64 {
			if t := z / k; math.Abs(t) < 1 {
				return (1 - t*t) * (1 - t*t)
			}
			return 0
		}}
		return nil
	})
}
