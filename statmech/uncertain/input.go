package uncertain

import (
	"fmt"
	"math"
	"sync/atomic"

	"levelsum/statmech"
)

// lastID numbers the origins in the order in which they are made, so that
// budgets list inputs in an order that does not change from run to run.
var lastID atomic.Uint64

// A source is one independent origin of uncertainty: a single measured value,
// or several values whose errors are correlated.
type source struct {
	id    uint64
	shape Shape
	value []float64
	cov   []float64 // n×n, row by row
	dof   float64   // degrees of freedom, +Inf if the uncertainty is taken as known
}

func (s *source) covariance(i, j int) float64 { return s.cov[i*len(s.value)+j] }

// An input is one value of a source.
type input struct {
	src        *source
	pos        int
	common     bool
	name, unit string
}

func (in *input) before(other *input) bool {
	if in.src != other.src {
		return in.src.id < other.src.id
	}
	return in.pos < other.pos
}

func (in *input) u() float64 { return math.Sqrt(in.src.covariance(in.pos, in.pos)) }

// A Shape is the form of the distribution that an input is drawn from.
type Shape int

// The shapes of JCGM 101:2008, table 1, that are offered. With finite degrees
// of freedom a Normal input is drawn from the scaled and shifted t-distribution.
const (
	Normal Shape = iota
	Uniform
	Triangle
	Arcsine
)

func (s Shape) String() string {
	switch s {
	case Normal:
		return "normal"
	case Uniform:
		return "rectangular"
	case Triangle:
		return "triangular"
	case Arcsine:
		return "arc sine"
	}
	return fmt.Sprintf("Shape(%d)", int(s))
}

// Exact returns a quantity without uncertainty.
func Exact(value float64) Quantity {
	finite("Exact", "value", value)
	return Quantity{&node{op: opConstant, k: value, value: value}}
}

// Measured returns a new input: a value with its standard uncertainty u
// (k = 1), normally distributed and independent of every other input. Each
// call makes an input of its own, so two calls with the same numbers are two
// measurements.
func Measured(value, u float64) Quantity {
	return newInput("Measured", value, u, Normal, math.Inf(1), false)
}

// Estimated is [Measured] with the degrees of freedom of the standard
// uncertainty, as from a mean of n readings (n-1).
func Estimated(value, u, degreesOfFreedom float64) Quantity {
	if !(degreesOfFreedom > 0) {
		panic(&statmech.DomainError{Func: "uncertain.Estimated", Arg: "degreesOfFreedom",
			Value: fmt.Sprint(degreesOfFreedom), Want: "positive"})
	}
	return newInput("Estimated", value, u, Normal, degreesOfFreedom, false)
}

// Rectangular returns an input known to lie within value ± halfWidth and no
// more: u = halfWidth/√3 (JCGM 100:2008, 4.3.7).
func Rectangular(value, halfWidth float64) Quantity {
	return newInput("Rectangular", value, halfWidth/math.Sqrt(3), Uniform, math.Inf(1), false)
}

// Triangular returns an input within value ± halfWidth, values near the middle
// being more likely: u = halfWidth/√6 (JCGM 100:2008, 4.3.9).
func Triangular(value, halfWidth float64) Quantity {
	return newInput("Triangular", value, halfWidth/math.Sqrt(6), Triangle, math.Inf(1), false)
}

// Oscillating returns an input that swings sinusoidally between value ±
// halfWidth with unknown phase: u = halfWidth/√2 (JCGM 101:2008, 6.4.6).
func Oscillating(value, halfWidth float64) Quantity {
	return newInput("Oscillating", value, halfWidth/math.Sqrt2, Arcsine, math.Inf(1), false)
}

// Common returns an error of expectation 0 and standard uncertainty u that all
// observations computed with it share, such as a relative calibration error:
//
//	scale := uncertain.Common("calibration", 0.005)
//	cp := uncertain.Measured(24.44, 0.02).Times(scale.Shift(1))
func Common(name string, u float64) Quantity {
	return newInput("Common", 0, u, Normal, math.Inf(1), true).Named(name)
}

func newInput(fn string, value, u float64, shape Shape, dof float64, common bool) Quantity {
	finite(fn, "value", value)
	if !(u >= 0) || math.IsInf(u, 0) {
		panic(&statmech.DomainError{Func: "uncertain." + fn, Arg: "u", Value: fmt.Sprint(u), Want: "a standard uncertainty, not negative and finite"})
	}
	if u == 0 {
		return Exact(value)
	}
	s := &source{id: lastID.Add(1), shape: shape, value: []float64{value}, cov: []float64{u * u}, dof: dof}
	return s.quantity(0, common)
}

func (s *source) quantity(pos int, common bool) Quantity {
	in := &input{src: s, pos: pos, common: common}
	return Quantity{&node{op: opInput, in: in, value: s.value[pos], terms: []term{{in, 1}}}}
}

// Observed returns the mean of repeated independent readings with the
// experimental standard deviation of the mean and n-1 degrees of freedom
// (JCGM 100:2008, 4.2). At least two readings are needed.
func Observed(readings []float64) (Quantity, error) {
	qs, err := ObservedTogether(readings)
	if err != nil {
		return Quantity{}, err
	}
	return qs[0], nil
}

// ObservedTogether returns the means of several quantities that were read at
// the same moments, with the covariances of the means (JCGM 100:2008,
// equation 17). readings[i] are the readings of quantity i, in one order.
func ObservedTogether(readings ...[]float64) ([]Quantity, error) {
	if len(readings) == 0 || len(readings[0]) < 2 {
		return nil, &statmech.DomainError{Func: "uncertain.ObservedTogether", Arg: "readings", Value: "fewer than two", Want: "at least two readings"}
	}
	n := len(readings[0])
	mean := make([]float64, len(readings))
	for i, r := range readings {
		if len(r) != n {
			return nil, &statmech.DomainError{Func: "uncertain.ObservedTogether", Arg: fmt.Sprintf("readings[%d]", i),
				Value: fmt.Sprintf("%d readings", len(r)), Want: fmt.Sprintf("%d, as many as of the first", n)}
		}
		for _, x := range r {
			if math.IsNaN(x) || math.IsInf(x, 0) {
				return nil, &statmech.DomainError{Func: "uncertain.ObservedTogether", Arg: fmt.Sprintf("readings[%d]", i), Value: fmt.Sprint(x), Want: "finite numbers"}
			}
			mean[i] += x
		}
		mean[i] /= float64(n)
	}
	k := len(readings)
	cov := make([]float64, k*k)
	for i := range k {
		for j := range k {
			var s float64
			for t := range n {
				s += (readings[i][t] - mean[i]) * (readings[j][t] - mean[j])
			}
			cov[i*k+j] = s / float64(n*(n-1))
		}
	}
	return joint(mean, cov, float64(n-1), false), nil
}

// Correlated returns inputs with the given covariance matrix, as from a fit or
// from a published evaluation. The matrix must be symmetric and without
// negative eigenvalues beyond rounding.
func Correlated(values []float64, covariance [][]float64) ([]Quantity, error) {
	cov, err := checkCovariance(values, covariance)
	if err != nil {
		return nil, err
	}
	return joint(values, cov, math.Inf(1), false), nil
}

// CorrelatedCommon is [Correlated] for errors that are common to many
// observations: they count in [Quantity.CommonPart].
func CorrelatedCommon(values []float64, covariance [][]float64) ([]Quantity, error) {
	cov, err := checkCovariance(values, covariance)
	if err != nil {
		return nil, err
	}
	return joint(values, cov, math.Inf(1), true), nil
}

func checkCovariance(values []float64, covariance [][]float64) ([]float64, error) {
	bad := func(value, want string) error {
		return &statmech.DomainError{Func: "uncertain.Correlated", Arg: "covariance", Value: value, Want: want}
	}
	n := len(values)
	if len(covariance) != n || n == 0 {
		return nil, bad(fmt.Sprintf("%d rows", len(covariance)), fmt.Sprintf("%d, one for each value", n))
	}
	cov := make([]float64, n*n)
	for i, row := range covariance {
		if len(row) != n {
			return nil, bad(fmt.Sprintf("%d columns in row %d", len(row), i), fmt.Sprint(n))
		}
		if math.IsNaN(values[i]) || math.IsInf(values[i], 0) {
			return nil, &statmech.DomainError{Func: "uncertain.Correlated", Arg: "values", Value: fmt.Sprint(values[i]), Want: "finite numbers"}
		}
		copy(cov[i*n:], row)
	}
	for i := range n {
		for j := range n {
			c, limit := cov[i*n+j], math.Sqrt(cov[i*n+i]*cov[j*n+j])
			if !(cov[i*n+i] >= 0) || math.IsInf(c, 0) || !(math.Abs(c) <= limit*(1+1e-9)) {
				return nil, bad(fmt.Sprintf("element (%d,%d) = %g", i, j, c), "a covariance no larger than the product of the two standard uncertainties")
			}
			if math.Abs(c-cov[j*n+i]) > 1e-9*limit {
				return nil, bad(fmt.Sprintf("elements (%d,%d) and (%d,%d) differ", i, j, j, i), "a symmetric matrix")
			}
		}
	}
	if _, ok := factor(cov, n); !ok {
		return nil, bad("a matrix with a negative eigenvalue", "a positive semidefinite matrix")
	}
	return cov, nil
}

func joint(values, cov []float64, dof float64, common bool) []Quantity {
	s := &source{id: lastID.Add(1), value: append([]float64(nil), values...), cov: cov, dof: dof}
	qs := make([]Quantity, len(values))
	for i := range qs {
		if s.covariance(i, i) == 0 {
			qs[i] = Exact(values[i])
			continue
		}
		qs[i] = s.quantity(i, common)
	}
	return qs
}

// factor returns the lower triangle L of cov = L Lᵀ for a positive
// semidefinite matrix; ok is false if a pivot is negative beyond rounding.
func factor(cov []float64, n int) (l []float64, ok bool) {
	l = make([]float64, n*n)
	for j := range n {
		d := cov[j*n+j]
		for k := range j {
			d -= float64(l[j*n+k] * l[j*n+k])
		}
		tol := 1e-10 * cov[j*n+j]
		if d < -tol {
			return nil, false
		}
		if d <= tol*1e-3 {
			continue // no freedom of its own: the column stays 0
		}
		l[j*n+j] = math.Sqrt(d)
		for i := j + 1; i < n; i++ {
			s := cov[i*n+j]
			for k := range j {
				s -= float64(l[i*n+k] * l[j*n+k])
			}
			l[i*n+j] = s / l[j*n+j]
		}
	}
	return l, true
}
