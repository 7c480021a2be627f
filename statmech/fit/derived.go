package fit

import (
	"math"

	"levelsum/display"
	"levelsum/statmech/uncertain"
)

// Function returns f(), a number computed from the model's present fields, as
// a quantity that carries the covariance of the fit:
//
//	s := res.Function(func() float64 { return float64(deb.Entropy(298.15 * unit.K)) })
//
// f is evaluated with the free parameters at the values found and near them;
// what they hold now is put back.
func (r *Result) Function(f func() float64) uncertain.Quantity {
	return uncertain.Function(func(p []float64) (y float64) {
		r.with(p, func() { y = f() })
		return y
	}, r.quantity...)
}

// Functions is [Result.Function] for several numbers computed at once, such as
// the entropies of a table.
func (r *Result) Functions(f func() []float64) []uncertain.Quantity {
	return uncertain.Functions(func(p []float64) (ys []float64) {
		r.with(p, func() { ys = f() })
		return ys
	}, r.quantity...)
}

// with runs f with the free parameters at p and puts back what they hold now.
func (r *Result) with(p []float64, f func()) {
	r.mu.Lock()
	defer r.mu.Unlock()
	defer r.reg.set(r.current())
	r.reg.set(p)
	r.trying.Store(true)
	defer r.trying.Store(false)
	f()
}

// At returns the fitted curve at x with the standard uncertainty that follows
// from the covariance of the parameters. It does not contain the error of the
// model, and grows outside the range of the data.
func (r *Result) At(x float64) uncertain.Quantity {
	return r.Function(func() float64 {
		out := []float64{0}
		if !r.reg.model.values([]float64{x}, out) {
			return math.NaN()
		}
		return out[0]
	}).WithUnit(r.yUnit)
}

// Values returns the fitted curve at every x. Inside a function given to
// [Result.Function] it is the curve with the parameters being tried.
func (r *Result) Values(x []float64) []float64 {
	if r.trying.Load() {
		return r.valuesWith(r.current(), x)
	}
	r.mu.Lock()
	defer r.mu.Unlock()
	defer r.reg.set(r.current())
	return r.valuesWith(r.p, x)
}

func (r *Result) valuesWith(p, x []float64) []float64 {
	r.reg.set(p)
	out := make([]float64, len(x))
	if !r.reg.model.values(x, out) {
		for i := range out {
			out[i] = math.NaN()
		}
	}
	return out
}

// StandardUncertainties returns the standard uncertainty of the fitted curve at
// every x, to first order in the parameters. It panics if the standard
// uncertainties were withheld.
func (r *Result) StandardUncertainties(x []float64) []float64 {
	c := r.Covariance()
	r.mu.Lock()
	defer r.mu.Unlock()
	defer r.reg.set(r.current())
	slopes := make([][]float64, len(r.p))
	for j, v := range r.p {
		h := math.Cbrt(0x1p-52) * math.Abs(v)
		if u := math.Sqrt(c[j][j]); h == 0 || h < 1e-4*u {
			h = 1e-4 * u
		}
		if h == 0 {
			continue // at a bound of 0, held there
		}
		p := clone(r.p)
		p[j] = v + h
		up := r.valuesWith(p, x)
		p[j] = v - h
		down := r.valuesWith(p, x)
		slopes[j] = make([]float64, len(x))
		for i := range x {
			slopes[j][i] = (up[i] - down[i]) / (2 * h)
		}
	}
	out := make([]float64, len(x))
	for i := range x {
		var s float64
		for j := range slopes {
			for k := range slopes {
				if slopes[j] != nil && slopes[k] != nil {
					s += slopes[j][i] * slopes[k][i] * c[j][k]
				}
			}
		}
		out[i] = math.Sqrt(max(0, s))
	}
	return out
}

// current returns the values that the free parameters hold now: the caller may
// have changed them after the fit.
func (r *Result) current() []float64 {
	p := make([]float64, len(r.reg.free))
	for j, f := range r.reg.free {
		p[j] = *f.at
	}
	return p
}

// A FittedCurve is the function that a fit found, for a figure.
type FittedCurve struct{ res *Result }

// Curve returns the fitted curve for a figure, which can tell whether residuals
// from it belong to the figure's data.
func (r *Result) Curve() FittedCurve { return FittedCurve{r} }

// Curve returns the function with its standard uncertainty, which a figure
// draws as a band; no band if the standard uncertainties were withheld.
func (c FittedCurve) Curve() display.Curve {
	curve := display.Curve{Name: "fit", F: c.res.Values}
	if c.res.Withheld == "" {
		curve.U = c.res.StandardUncertainties
	}
	return curve
}

// At returns the value at x.
func (c FittedCurve) At(x float64) float64 { return c.res.Values([]float64{x})[0] }

// FittedTo reports whether all points of the fit are among the points (x, y).
func (c FittedCurve) FittedTo(x, y []float64) bool {
	if len(x) != len(y) {
		return false
	}
	points := make(map[[2]float64]bool, len(x))
	for i := range x {
		points[[2]float64{x[i], y[i]}] = true
	}
	for i, v := range c.res.X {
		if !points[[2]float64{v, c.res.Y[i]}] {
			return false
		}
	}
	return true
}
