package fit

import (
	"fmt"
	"math"
	"math/rand/v2"

	"levelsum/display"
	"levelsum/statmech"
)

// Curve fits a function of one variable to points (x, y) with standard
// uncertainties u, which may be nil with [ScaledSigma]. f is evaluated with the
// present values of the free parameters, as a function literal that reads them:
//
//	a, b := 200.0, 5e-4
//	res, err := fit.Curve(func(x float64) float64 { return a * (1 - math.Exp(-b*x)) }, x, y, nil, fit.Vary(&a, &b), fit.ScaledSigma)
//
// A fit that stops early returns the best result and an error.
func Curve(f func(x float64) float64, x, y, u []float64, opts ...Option) (*Result, error) {
	if f == nil {
		return nil, fmt.Errorf("fit: Curve: no function")
	}
	return fitModel(scalarModel(f), x, y, u, opts)
}

// Curves is [Curve] for a function that takes all x at once and returns as
// many values; for a function written in a notebook cell it is several times
// faster.
func Curves(f func(x []float64) []float64, x, y, u []float64, opts ...Option) (*Result, error) {
	if f == nil {
		return nil, fmt.Errorf("fit: Curves: no function")
	}
	return fitModel(sliceModel(f), x, y, u, opts)
}

// CurveWith is [Curve] with the derivatives of the model: partials returns
// ∂f/∂p at x in the order of Vary.
func CurveWith(f func(x float64) float64, partials func(x float64) []float64, x, y, u []float64, opts ...Option) (*Result, error) {
	if f == nil || partials == nil {
		return nil, fmt.Errorf("fit: CurveWith: no function")
	}
	return fitModel(derivedModel{f, partials}, x, y, u, opts)
}

type scalarModel func(float64) float64

func (f scalarModel) values(x, out []float64) bool {
	for i, v := range x {
		out[i] = f(v)
	}
	return true
}

func (f scalarModel) partials([]float64, []*float64, []float64) bool { return false }

type sliceModel func([]float64) []float64

func (f sliceModel) values(x, out []float64) bool {
	ys := f(clone(x))
	if len(ys) != len(x) {
		panic(&statmech.DomainError{Func: "fit.Curves", Arg: "f(x)", Value: fmt.Sprintf("%d values", len(ys)), Want: fmt.Sprintf("%d, one for each x", len(x))})
	}
	copy(out, ys)
	return true
}

func (f sliceModel) partials([]float64, []*float64, []float64) bool { return false }

type derivedModel struct {
	f func(float64) float64
	d func(float64) []float64
}

func (m derivedModel) values(x, out []float64) bool { return scalarModel(m.f).values(x, out) }

func (m derivedModel) partials(x []float64, at []*float64, jac []float64) bool {
	for i, v := range x {
		d := m.d(v)
		if len(d) != len(at) {
			panic(&statmech.DomainError{Func: "fit.CurveWith", Arg: "partials(x)", Value: fmt.Sprintf("%d values", len(d)), Want: fmt.Sprintf("%d, one for each free parameter", len(at))})
		}
		for j, dj := range d {
			jac[j*len(x)+i] = dj
		}
	}
	return true
}

// fitModel fits and judges.
func fitModel(m model, x, y, u []float64, opts []Option) (*Result, error) {
	set, err := newSettings(opts)
	if err != nil {
		return nil, err
	}
	reg, err := newRegression(m, x, y, u, set)
	if err != nil {
		return nil, err
	}
	best := reg.solve(reg.startValues())
	tried := []float64{best.chi2}
	if reg.starts > 1 {
		display.SeedUsed(fmt.Sprintf("fit.Starts, %d starts", reg.starts), reg.seed)
		random := rand.New(rand.NewPCG(reg.seed, 0x5f17))
		for range reg.starts - 1 {
			if best.stop == Interrupted || reg.stop != nil && reg.stop() {
				best.stop = Interrupted
				break
			}
			next := reg.solve(reg.randomStart(random))
			tried = append(tried, next.chi2)
			next.evaluations += best.evaluations
			if next.chi2 < best.chi2*(1-1e-12) {
				best = next
			} else {
				best.evaluations = next.evaluations
			}
		}
	}
	if best.stop == NotFinite && math.IsInf(best.chi2, 1) {
		reg.set(reg.startValues())
		return nil, fmt.Errorf("fit: %v: %s", best.stop, reg.describe(reg.startValues()))
	}
	if reg.ux != nil || reg.loss.weight != nil { // weights of another start may be in force
		best = reg.solve(best.p)
	}
	reg.set(best.p)
	res := newResult(reg, best, tried)
	switch best.stop {
	case Converged:
		return res, nil
	default:
		return res, fmt.Errorf("fit: stopped early: %v, after %d evaluations; the best values so far are in the result", best.stop, best.evaluations)
	}
}

func (r *regression) describe(p []float64) string {
	s := ""
	for j, f := range r.free {
		if j > 0 {
			s += ", "
		}
		s += fmt.Sprintf("%s = %g %s", f.name, p[j], f.unit)
	}
	return s
}

func (r *regression) randomStart(random *rand.Rand) []float64 {
	p := make([]float64, len(r.free))
	for j, f := range r.free {
		t := random.Float64()
		switch {
		case f.lo > 0 && !math.IsInf(f.hi, 1):
			p[j] = f.lo * math.Pow(f.hi/f.lo, t)
		case !math.IsInf(f.lo, -1) && !math.IsInf(f.hi, 1):
			p[j] = f.lo + t*(f.hi-f.lo)
		default:
			p[j] = f.start * math.Exp(4*t-2)
			if f.start == 0 {
				p[j] = 2*t - 1
			}
		}
		p[j] = max(f.lo, min(f.hi, p[j]))
	}
	return p
}
