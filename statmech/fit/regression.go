package fit

import (
	"fmt"
	"math"
	"sort"

	"levelsum/statmech"
	"levelsum/statmech/uncertain"
)

// regression is one fit: data, model and settings, in plain numbers.
type regression struct {
	*settings
	model   model
	x, y, u []float64
	ux      []float64 // nil without uncertainties of x
	given   bool      // u was given by the caller
	common  []commonError
	weight  []float64 // robust weights, all 1 without a loss
	scale   []float64 // 1/u of each point in force, robust weight included
	data    uint64    // fingerprint of x, y, u
	last    *problem  // the one for y, with its arrays
}

// model evaluates what is fitted at the present values of the parameters.
type model interface {
	// values puts f(xᵢ) into out and reports whether all are finite.
	values(x, out []float64) bool
	// partials puts ∂f/∂pⱼ into jac, column by column, and reports whether the
	// model can; where it cannot, differences are taken.
	partials(x []float64, at []*float64, jac []float64) bool
}

// newRegression checks the data and keeps the points in the window.
func newRegression(m model, x, y, u []float64, set *settings) (*regression, error) {
	n := len(x)
	if len(y) != n {
		return nil, fmt.Errorf("fit: %d values of x and %d of y", n, len(y))
	}
	if u != nil && len(u) != n {
		return nil, fmt.Errorf("fit: %d points and %d standard uncertainties", n, len(u))
	}
	if set.ux != nil && len(set.ux) != n {
		return nil, fmt.Errorf("fit: %d points and %d standard uncertainties of x", n, len(set.ux))
	}
	if u == nil && set.sigma != ScaledSigma {
		return nil, fmt.Errorf("fit: %v standard uncertainties asked for, but the data have none; give them, or ask for fit.ScaledSigma", set.sigma)
	}
	r := &regression{settings: set, model: m, given: u != nil}
	for _, c := range set.common {
		if len(c.u) != n {
			return nil, fmt.Errorf("fit: %d points and %d common uncertainties", n, len(c.u))
		}
		r.common = append(r.common, commonError{e: c.e})
	}
	for i := range n {
		if math.IsNaN(x[i]) || math.IsInf(x[i], 0) || math.IsNaN(y[i]) || math.IsInf(y[i], 0) {
			return nil, fmt.Errorf("fit: point %d: x = %g, y = %g, want finite numbers", i+1, x[i], y[i])
		}
		if x[i] < set.from || x[i] > set.to {
			continue
		}
		ui := 1.0
		if u != nil {
			if ui = u[i]; !(ui >= 0) || math.IsInf(ui, 0) {
				return nil, fmt.Errorf("fit: point %d at x = %g: standard uncertainty %g, want positive and finite", i+1, x[i], ui)
			}
		}
		if ui == 0 && set.ux == nil {
			return nil, fmt.Errorf("fit: point %d at x = %g has the standard uncertainty 0, which would give it all the weight", i+1, x[i])
		}
		r.x, r.y, r.u = append(r.x, x[i]), append(r.y, y[i]), append(r.u, ui)
		if set.ux != nil {
			if !(set.ux[i] >= 0) || math.IsInf(set.ux[i], 0) || ui == 0 && set.ux[i] == 0 {
				return nil, fmt.Errorf("fit: point %d at x = %g: standard uncertainty of x %g, want not negative, and positive where that of y is 0", i+1, x[i], set.ux[i])
			}
			r.ux = append(r.ux, set.ux[i])
		}
		for k, c := range set.common {
			if !(c.u[i] >= 0) || math.IsInf(c.u[i], 0) {
				return nil, fmt.Errorf("fit: point %d at x = %g: common uncertainty %g, want not negative and finite", i+1, x[i], c.u[i])
			}
			r.common[k].u = append(r.common[k].u, c.u[i])
		}
	}
	switch got, want := len(r.x), len(set.free); {
	case got == 0 && n > 0:
		return nil, fmt.Errorf("fit: none of the %d points lies in the window %g to %g", n, set.from, set.to)
	case got < want:
		return nil, fmt.Errorf("fit: %d points cannot determine %d free parameters", got, want)
	case got == want && set.sigma != AbsoluteSigma:
		return nil, fmt.Errorf("fit: %d points for %d free parameters leave no scatter to scale by; use fit.AbsoluteSigma or fewer parameters", got, want)
	}
	if set.sigma == CommonSigma {
		e := set.shared
		if len(e.Name()) == 0 {
			e = uncertain.Common("common error of the data", 1)
		}
		r.common = append(r.common, commonError{clone(r.u), e})
	}
	r.data = fingerprint(r.x, r.y, r.u, r.ux)
	r.weight = make([]float64, len(r.x))
	r.scale = make([]float64, len(r.x))
	for i := range r.weight {
		r.weight[i] = 1
	}
	return r, nil
}

// set writes parameter values to their places and lets the tied ones follow.
func (r *regression) set(p []float64) {
	for j, f := range r.free {
		*f.at = p[j]
	}
	for _, t := range r.ties {
		*t.at = t.f()
	}
}

// values evaluates the model at p. A model that refuses its arguments with a
// DomainError has no value there.
func (r *regression) values(p, out []float64) (ok bool) {
	defer recoverDomain(&ok)
	r.set(p)
	if !r.model.values(r.x, out) {
		return false
	}
	return allFinite(out)
}

func recoverDomain(ok *bool) {
	switch e := recover().(type) {
	case nil:
	case *statmech.DomainError:
		*ok = false
	default:
		panic(e)
	}
}

func allFinite(x []float64) bool {
	for _, v := range x {
		if math.IsNaN(v) || math.IsInf(v, 0) {
			return false
		}
	}
	return true
}

// problem returns the least squares problem for the data and the weights in
// force.
func (r *regression) problem() *problem {
	y := r.y
	var size float64
	for i, v := range y {
		size += (v * r.scale[i]) * (v * r.scale[i])
	}
	if r.last != nil {
		r.last.size = math.Sqrt(size)
		return r.last
	}
	pr := &problem{n: len(r.free), m: len(r.x), stop: r.stop, size: math.Sqrt(size)}
	r.last = pr
	for _, f := range r.free {
		pr.lo, pr.hi = append(pr.lo, f.lo), append(pr.hi, f.hi)
	}
	pr.residuals = func(p, out []float64) bool {
		if !r.values(p, out) {
			return false
		}
		for i := range out {
			out[i] = (out[i] - y[i]) * r.scale[i]
		}
		return allFinite(out)
	}
	at := make([]*float64, len(r.free))
	for j, f := range r.free {
		at[j] = f.at
	}
	if len(r.ties) == 0 && r.partials(r.startValues(), at, make([]float64, pr.n*pr.m)) {
		pr.jacobian = func(p, _, jac []float64) bool {
			if !r.partials(p, at, jac) {
				return false
			}
			for j := range pr.n {
				col := jac[j*pr.m : (j+1)*pr.m]
				for i := range col {
					col[i] *= r.scale[i]
				}
			}
			return true
		}
	}
	return pr
}

func (r *regression) partials(p []float64, at []*float64, jac []float64) (ok bool) {
	defer recoverDomain(&ok)
	r.set(p)
	return r.model.partials(r.x, at, jac)
}

func (r *regression) startValues() []float64 {
	p := make([]float64, len(r.free))
	for j, f := range r.free {
		p[j] = f.start
	}
	return p
}

// solve finds the minimum, with the weights repeated where they depend on the
// solution (uncertainties of x, robust loss).
func (r *regression) solve(start []float64) *minimum {
	for i := range r.weight {
		r.weight[i] = 1
	}
	if !r.weigh(start, nil) {
		return &minimum{p: clone(start), stop: NotFinite, chi2: math.Inf(1), cosine: math.Inf(1),
			r: make([]float64, len(r.x)), jac: make([]float64, len(r.x)*len(r.free)), atBound: make([]bool, len(r.free))}
	}
	pr := r.problem()
	best := minimise(pr, start)
	if r.ux == nil && r.loss.weight == nil || best.stop == NotFinite {
		return best
	}
	evaluations := best.evaluations
	for range 100 {
		before := clone(best.p)
		residuals := make([]float64, len(r.x))
		if !r.values(best.p, residuals) {
			break
		}
		for i := range residuals {
			residuals[i] -= r.y[i]
		}
		r.weigh(best.p, residuals)
		next := minimise(pr, best.p)
		evaluations += next.evaluations
		best = next
		if best.stop == Interrupted || converged(before, best.p, 1e-9) {
			break
		}
	}
	best.evaluations = evaluations
	return best
}

func converged(a, b []float64, tol float64) bool {
	for i := range a {
		if math.Abs(a[i]-b[i]) > tol*max(math.Abs(a[i]), math.Abs(b[i])) {
			return false
		}
	}
	return true
}

// weigh sets the weights in force for parameters p; residuals (model minus
// data) feed the robust loss and may be nil.
func (r *regression) weigh(p, residuals []float64) bool {
	sigma := clone(r.u)
	if r.ux != nil {
		slope, ok := r.slope(p)
		if !ok {
			return false
		}
		for i := range sigma {
			sigma[i] = math.Hypot(r.u[i], slope[i]*r.ux[i])
			if sigma[i] == 0 {
				sigma[i] = r.ux[i] // flat model and no uncertainty of y: any finite weight
			}
		}
	}
	if r.loss.weight != nil && residuals != nil {
		z := make([]float64, len(residuals))
		for i := range z {
			z[i] = residuals[i] / sigma[i]
		}
		s := 1.0
		if r.sigma != AbsoluteSigma {
			s = medianAbsolute(z) / 0.6744897501960817
		}
		for i := range z {
			r.weight[i] = 1
			if s > 0 {
				r.weight[i] = r.loss.weight(z[i] / s)
			}
		}
	}
	for i := range sigma {
		r.scale[i] = math.Sqrt(r.weight[i]) / sigma[i]
	}
	return true
}

// slope returns df/dx at every point by central differences.
func (r *regression) slope(p []float64) (slope []float64, ok bool) {
	defer recoverDomain(&ok)
	r.set(p)
	n := len(r.x)
	up, down := make([]float64, n), make([]float64, n)
	fUp, fDown := make([]float64, n), make([]float64, n)
	for i, x := range r.x {
		h := 1e-5 * math.Abs(x)
		if h == 0 {
			h = 1e-8
		}
		up[i], down[i] = x+h, x-h
	}
	if !r.model.values(up, fUp) || !r.model.values(down, fDown) {
		return nil, false
	}
	for i := range up {
		fUp[i] = (fUp[i] - fDown[i]) / (up[i] - down[i])
	}
	return fUp, allFinite(fUp)
}

func medianAbsolute(z []float64) float64 {
	a := make([]float64, len(z))
	for i, v := range z {
		a[i] = math.Abs(v)
	}
	sort.Float64s(a)
	n := len(a)
	if n%2 == 1 {
		return a[n/2]
	}
	return (a[n/2-1] + a[n/2]) / 2
}

// fingerprint tells data sets apart.
func fingerprint(columns ...[]float64) uint64 {
	h := uint64(14695981039346656037)
	for _, c := range columns {
		h = mix(h, uint64(len(c)))
		for _, v := range c {
			h = mix(h, math.Float64bits(v))
		}
	}
	return h
}

// mix is a step of FNV-1a over a word, with the high bits brought down, which a
// product never does.
func mix(h, word uint64) uint64 {
	h = (h ^ word) * 1099511628211
	return h ^ h>>32
}
