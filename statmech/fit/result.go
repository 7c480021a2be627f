package fit

import (
	"fmt"
	"math"
	"sync"
	"sync/atomic"

	"gonum.org/v1/gonum/stat/distuv"

	"levelsum/statmech"
	"levelsum/statmech/uncertain"
)

// Limits of the judgement of a fit. They are rules of this package, without a
// source in the literature.
const (
	hopelessP     = 1e-6 // below this probability and above hopelessRatio no absolute uncertainty is given
	hopelessRatio = 2
	doubtfulP     = 1e-3 // below this a warning
	tooGoodRatio  = 0.5  // χ² per degree of freedom below which, at tooGoodP, the data look smoothed
	tooGoodP      = 0.01
	highR         = 0.95
	illCondition  = 1e8
)

// A Result is what a fit found and how far it can be trusted.
type Result struct {
	Name        string // of the data
	Sigma       Sigma
	ChiSquared  float64 // Σ ((y-f)/u)², with the uncertainties as given
	Freedom     int     // points less free parameters
	P           float64 // probability of a larger χ² if model and uncertainties are right; 1 without given uncertainties
	Stop        Stop
	Evaluations int
	Condition   float64 // of the Jacobian with columns of unit length
	Withheld    string  // reason why no standard uncertainties are given, or ""
	Warnings    []string
	Diagnostics Diagnostics

	X, Y, U  []float64 // the points that were fitted; U in force (slope of the model included)
	Fitted   []float64
	Residual []float64 // (y-f)/u
	Leverage []float64 // diagonal of the projection matrix, sums to the number of parameters
	Minima   []float64 // χ² reached from each start

	xUnit, yUnit string

	reg      *regression
	p        []float64
	atBound  []bool
	random   [][]float64 // covariance of the parameters from random errors
	common   [][]float64 // shifts of the parameters by each common error
	quantity []uncertain.Quantity
	mu       sync.Mutex  // guards the model's fields while Function evaluates at other parameters
	trying   atomic.Bool // a function given to Function runs, and holds mu
}

func newResult(reg *regression, best *minimum, tried []float64) *Result {
	n, m := len(reg.free), len(reg.x)
	res := &Result{Sigma: reg.sigma, Freedom: m - n, Stop: best.stop, Evaluations: best.evaluations, Condition: best.factorised().condition,
		X: reg.x, Y: reg.y, Minima: tried, reg: reg, p: best.p, atBound: best.atBound, P: 1}
	res.Fitted, res.U, res.Residual = make([]float64, m), make([]float64, m), make([]float64, m)
	reg.values(best.p, res.Fitted)
	for i := range res.Fitted {
		res.U[i] = math.Sqrt(reg.weight[i]) / reg.scale[i]
		if reg.weight[i] == 0 {
			res.U[i] = reg.u[i]
		}
		res.Residual[i] = (reg.y[i] - res.Fitted[i]) / res.U[i]
		res.ChiSquared += reg.weight[i] * res.Residual[i] * res.Residual[i]
	}
	if reg.given && res.Freedom > 0 {
		res.P = distuv.ChiSquared{K: float64(res.Freedom)}.Survival(res.ChiSquared)
	}
	res.covariances(best)
	res.Diagnostics = diagnose(res)
	res.judge()
	res.makeQuantities()
	reg.last = nil
	return res
}

// Ratio returns χ² per degree of freedom, 0 without degrees of freedom.
func (r *Result) Ratio() float64 {
	if r.Freedom == 0 {
		return 0
	}
	return r.ChiSquared / float64(r.Freedom)
}

// covariances computes the covariance of the parameters from the Jacobian at
// the minimum, (JᵀJ)⁻¹ by QR, and the shift of the parameters that each common
// error causes. Parameters at a bound have none.
func (r *Result) covariances(best *minimum) {
	n, m := len(r.reg.free), len(r.reg.x)
	r.random = square(n)
	r.Leverage = make([]float64, m)
	r.common = make([][]float64, len(r.reg.common))
	for k := range r.common {
		r.common[k] = make([]float64, n)
	}
	f := best.factorised()
	free, norms, unit, k := f.free, f.norms, f.unit, f.k
	rhs := make([][]float64, len(r.common))
	inv, ok := invertUpper(f.r, m, k)
	if !ok || r.Condition > 1e15 {
		r.Condition = max(r.Condition, 1e15)
		return
	}
	factor := 1.0
	if r.Sigma != AbsoluteSigma {
		factor = r.Ratio()
	}
	for i, fi := range free {
		for j, fj := range free {
			var s float64
			for l := max(i, j); l < k; l++ {
				s += inv[i*k+l] * inv[j*k+l]
			}
			r.random[fi][fj] = factor * s / (norms[i] * norms[j])
		}
	}
	for i := range m { // rows of Q = A R⁻¹
		for l := range k {
			var q float64
			for j := 0; j <= l; j++ {
				q += unit[j*m+i] * inv[j*k+l]
			}
			r.Leverage[i] += q * q
		}
	}
	for c, shift := range r.reg.common {
		rhs[c] = make([]float64, m)
		for i, u := range shift.u {
			rhs[c][i] = u * r.reg.scale[i]
		}
		ab := clone(unit)
		householder(ab, m, k, rhs[c])
		delta := make([]float64, k)
		backSolve(ab, m, k, rhs[c], delta)
		for i, fi := range free {
			r.common[c][fi] = delta[i] / norms[i]
		}
	}
}

func square(n int) [][]float64 {
	s := make([][]float64, n)
	for i := range s {
		s[i] = make([]float64, n)
	}
	return s
}

// Covariance returns the covariance matrix of the free parameters in the order
// of Vary, random and common errors together. It panics if it was withheld.
func (r *Result) Covariance() [][]float64 {
	r.mustHave("Covariance")
	return r.covariance()
}

func (r *Result) covariance() [][]float64 {
	c := square(len(r.p))
	for i := range c {
		for j := range c {
			c[i][j] = r.random[i][j]
			for _, s := range r.common {
				c[i][j] += s[i] * s[j]
			}
		}
	}
	return c
}

// Correlation returns the correlation matrix of the free parameters.
func (r *Result) Correlation() [][]float64 {
	c := r.covariance()
	rho := square(len(c))
	for i := range c {
		for j := range c {
			if d := math.Sqrt(c[i][i] * c[j][j]); d > 0 {
				rho[i][j] = max(-1, min(1, c[i][j]/d))
			}
		}
	}
	return rho
}

func (r *Result) mustHave(fn string) {
	if r.Withheld != "" {
		panic(&statmech.DomainError{Func: "fit.Result." + fn, Arg: "standard uncertainties", Value: "withheld", Want: "a fit that describes the data: " + r.Withheld})
	}
}

// judge fills Withheld and Warnings.
func (r *Result) judge() {
	warn := func(format string, args ...any) { r.Warnings = append(r.Warnings, fmt.Sprintf(format, args...)) }
	ratio := r.Ratio()
	switch {
	case r.Stop != Converged:
		r.Withheld = "the fit stopped early: " + r.Stop.String()
	case r.Condition >= 1e15:
		r.Withheld = "the data do not determine all parameters: their derivatives are linearly dependent (condition number above 1e15)"
	case r.Sigma == AbsoluteSigma && r.P < hopelessP && ratio > hopelessRatio:
		r.Withheld = fmt.Sprintf("χ² = %.4g for %d degrees of freedom, %.3g each (p %s): the model does not describe the data within their uncertainties",
			r.ChiSquared, r.Freedom, ratio, probability(r.P))
	case r.Sigma == AbsoluteSigma && r.P < doubtfulP && r.Freedom > 0:
		warn("χ² = %.4g for %d degrees of freedom (p %s): the model or the uncertainties are doubtful", r.ChiSquared, r.Freedom, probability(r.P))
	case r.Sigma == ScaledSigma && r.reg.given && r.P < hopelessP && ratio > hopelessRatio:
		warn("χ² is %.3g per degree of freedom with the uncertainties as given (p %s); the standard uncertainties are scaled by %.3g and hold only if the misfit is random scatter",
			ratio, probability(r.P), math.Sqrt(ratio))
	}
	if r.reg.given && r.Freedom > 0 && ratio < tooGoodRatio && 1-r.P < tooGoodP {
		warn("χ² is %.2g per degree of freedom, far below 1 (p %s): the data look smoothed, or their uncertainties are common to the points and not independent (fit.CommonSigma)", ratio, probability(1-r.P))
	}
	for i, p := range r.reg.free {
		if r.atBound[i] {
			warn("%s ends at its bound %g: no symmetric standard uncertainty; the others hold with it fixed there", p.name, r.p[i])
		}
	}
	if r.Condition > illCondition {
		warn("condition number %.2g: combinations of the parameters are hardly determined", r.Condition)
	}
	rho := r.Correlation()
	for i := range rho {
		for j := range i {
			if math.Abs(rho[i][j]) > highR {
				warn("%s and %s are correlated by %s: neither means much alone", r.reg.free[j].name, r.reg.free[i].name, uncertain.CorrelationText(rho[i][j]))
			}
		}
	}
	if len(r.Minima) > 1 {
		same := 0
		for _, c := range r.Minima {
			if c <= r.ChiSquared*(1+1e-6)+1e-300 {
				same++
			}
		}
		if same == 1 {
			warn("only 1 of %d starts reached the lowest χ²: it may not be the lowest there is", len(r.Minima))
		}
	}
	r.Warnings = append(r.Warnings, r.Diagnostics.warnings(r)...)
}

func probability(p float64) string {
	if p < 1e-12 {
		return "< 1e-12"
	}
	return fmt.Sprintf("= %.2g", p)
}

// makeQuantities turns the parameters into quantities that share the random
// covariance and the common errors.
func (r *Result) makeQuantities() {
	n := len(r.p)
	r.quantity = make([]uncertain.Quantity, n)
	random, err := uncertain.Correlated(r.p, r.random)
	if err != nil && r.Withheld == "" {
		r.Withheld = "the covariance matrix is not positive: " + err.Error()
	}
	if r.Withheld != "" {
		for j, p := range r.reg.free {
			r.quantity[j] = uncertain.Exact(r.p[j]).Named(p.name).WithUnit(p.unit).Withhold(r.Withheld)
		}
		return
	}
	parts := make([][]uncertain.Quantity, n)
	for j, p := range r.reg.free {
		parts[j] = []uncertain.Quantity{random[j].Named(p.name).WithUnit(p.unit)}
	}
	for k := range r.common {
		e := r.reg.common[k].e
		for j := range parts {
			parts[j] = append(parts[j], e.Scale(r.common[k][j]))
		}
	}
	for j, p := range r.reg.free {
		q := parts[j][0]
		if len(parts[j]) > 1 {
			q = uncertain.Sum(parts[j]...)
		}
		if r.atBound[j] {
			q = q.Withhold("the parameter ends at its bound")
		}
		r.quantity[j] = q.Named(p.name).WithUnit(p.unit)
	}
}

// Parameters returns the free parameters in the order of Vary, with their
// standard uncertainties and correlations.
func (r *Result) Parameters() []uncertain.Quantity {
	return append([]uncertain.Quantity(nil), r.quantity...)
}

// Parameter returns the free parameter at the address given to Vary.
func (r *Result) Parameter(ptr any) uncertain.Quantity {
	at, err := address("Parameter", ptr)
	if err == nil {
		for j, p := range r.reg.free {
			if p.at == at {
				return r.quantity[j]
			}
		}
	}
	panic(&statmech.DomainError{Func: "fit.Result.Parameter", Arg: "ptr", Value: fmt.Sprintf("%T", ptr), Want: "the address of a number that was free in this fit"})
}
