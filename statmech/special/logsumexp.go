package special

import (
	"fmt"
	"math"
)

// LogSumExp returns ln Σ exp(x_i), the logarithm of a partition function from
// the logarithms of its terms, without overflow.
//
// Special cases are:
//
//	LogSumExp(nil) = -Inf
//	LogSumExp of -Inf only = -Inf
//	LogSumExp with a +Inf = +Inf
//	LogSumExp with a NaN = NaN
//
// Accuracy: 4 eps of max(1, |result|) for any number of terms
// (TestLogSumExpAccuracy): the largest term is taken out and the rest is summed
// with compensation (A. Neumaier, Z. angew. Math. Mech. 54, 39 (1974)).
func LogSumExp(x []float64) float64 {
	return LogSumExpWeighted(x, nil)
}

// LogSumExpWeighted returns ln Σ w_i exp(x_i) for weights w_i >= 0 such as
// degeneracies; nil weights are all 1. A negative or NaN weight gives NaN; a
// term of weight 0 does not count, whatever its x. It panics if the lengths
// differ. Otherwise it is as [LogSumExp].
func LogSumExpWeighted(x, w []float64) float64 {
	if w != nil && len(w) != len(x) {
		panic(fmt.Sprintf("special: LogSumExpWeighted: %d terms and %d weights", len(x), len(w)))
	}
	top := math.Inf(-1)
	at := -1
	for i, v := range x {
		if w != nil {
			switch {
			case w[i] == 0:
				continue
			case !(w[i] > 0):
				return math.NaN()
			}
		}
		if math.IsNaN(v) {
			return v
		}
		if at < 0 || v > top {
			top, at = v, i
		}
	}
	if at < 0 || math.IsInf(top, 0) {
		return top
	}
	lead := 1.0
	if w != nil {
		lead = w[at]
	}
	var sum, low float64
	for i, v := range x {
		if i == at || w != nil && w[i] == 0 {
			continue
		}
		y := math.Exp(v - top)
		if w != nil {
			y *= w[i]
		}
		s := sum + y
		if sum >= y {
			low += (sum - s) + y
		} else {
			low += (y - s) + sum
		}
		sum = s
	}
	// ln(lead + rest): near 0 only if lead is 1, where log1p keeps the rest.
	rest := sum + low
	if lead == 1 {
		return top + math.Log1p(rest)
	}
	return top + math.Log(lead+rest)
}

// LogAddExp returns ln(eᵃ + eᵇ); special cases and accuracy as [LogSumExp].
func LogAddExp(a, b float64) float64 {
	if math.IsNaN(a) || math.IsNaN(b) {
		return math.NaN()
	}
	hi, lo := max(a, b), min(a, b)
	if math.IsInf(hi, 0) {
		return hi
	}
	return hi + math.Log1p(math.Exp(lo-hi))
}

// LogAddExps is [LogAddExp] of every pair; a and b have the same length.
func LogAddExps(dst, a, b []float64) []float64 {
	dst = destination("LogAddExps", dst, a)
	if len(b) != len(a) {
		panic(fmt.Sprintf("special: LogAddExps: %d and %d elements", len(a), len(b)))
	}
	for i, v := range a {
		dst[i] = LogAddExp(v, b[i])
	}
	return dst
}
