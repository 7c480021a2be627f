package fit

import (
	"fmt"
	"math"
)

// A Profile is χ² as a function of one parameter, the others being fitted
// again at every value.
type Profile struct {
	Parameter string
	Value     float64 // of the fit
	Lo, Hi    float64 // where χ² is higher by Rise; ±Inf if it never is
	Rise      float64 // of χ², 1 for one standard uncertainty
	X         []float64
	ChiSquare []float64 // at X, scaled like the standard uncertainties of the fit
}

// Profile finds where χ² is higher than at the minimum by rise (1 for the
// range of one standard uncertainty, 3.84 for 95 per cent), going both ways
// from the value found for the parameter at the address. For a model linear in
// its parameters Lo and Hi are value ± √rise·u; where they are not symmetric, a
// symmetric uncertainty misleads. With [ScaledSigma] χ² is scaled to its
// degrees of freedom. Common errors are not part of it.
//
// Reference: D. M. Bates, D. G. Watts, Nonlinear Regression Analysis and Its
// Applications, Wiley (1988), 6.1.
func (r *Result) Profile(ptr any, rise float64) (*Profile, error) {
	at, err := address("Profile", ptr)
	if err != nil {
		return nil, err
	}
	if !(rise > 0) {
		return nil, fmt.Errorf("fit: Profile: rise %g, want positive", rise)
	}
	j := -1
	for k, p := range r.reg.free {
		if p.at == at {
			j = k
		}
	}
	if j < 0 {
		return nil, fmt.Errorf("fit: Profile: %T was not free in this fit", ptr)
	}
	factor := 1.0
	if r.Sigma != AbsoluteSigma {
		factor = r.Ratio()
	}
	u := math.Sqrt(r.random[j][j])
	if !(u > 0) || !(factor > 0) {
		return nil, fmt.Errorf("fit: Profile: %s has no standard uncertainty to start from", r.reg.free[j].name)
	}
	r.mu.Lock()
	defer r.mu.Unlock()
	defer r.reg.set(r.current())
	reg := r.reg.shallow()
	out := &Profile{Parameter: r.reg.free[j].name, Value: r.p[j], Rise: rise}
	set := *reg.settings
	set.free = append(append([]*parameter(nil), r.reg.free[:j]...), r.reg.free[j+1:]...)
	reg.settings = &set
	rest := append(clone(r.p[:j]), r.p[j+1:]...)
	minimum := r.ChiSquared
	chi2 := func(x float64, start []float64) (float64, []float64) {
		*r.reg.free[j].at = x
		if len(start) == 0 {
			out := make([]float64, len(reg.x))
			if !reg.values(nil, out) {
				return math.Inf(1), nil
			}
			var s float64
			for i := range out {
				d := (out[i] - reg.y[i]) * reg.scale[i]
				s += d * d
			}
			return s, nil
		}
		m := minimise(reg.problem(), start)
		return m.chi2, m.p
	}
	end := func(sign float64) float64 {
		limit := r.reg.free[j].hi
		if sign < 0 {
			limit = r.reg.free[j].lo
		}
		start := rest
		x0, d0 := r.p[j], 0.0
		step := u * math.Sqrt(rise) / 2
		for range 60 {
			x1 := x0 + sign*step
			if sign*(x1-limit) >= 0 {
				x1 = limit
			}
			c, p := chi2(x1, start)
			out.X, out.ChiSquare = append(out.X, x1), append(out.ChiSquare, c/factor)
			d1 := (c - minimum) / factor
			if d1 >= rise {
				// √Δχ² is nearly linear: regula falsi on it.
				for range 50 {
					s0, s1, s := math.Sqrt(max(0, d0)), math.Sqrt(d1), math.Sqrt(rise)
					x := x0 + (x1-x0)*(s-s0)/(s1-s0)
					c, p = chi2(x, start)
					d := (c - minimum) / factor
					out.X, out.ChiSquare = append(out.X, x), append(out.ChiSquare, c/factor)
					if math.Abs(d-rise) < 1e-6*rise {
						return x
					}
					if d < rise {
						x0, d0, start = x, d, p
					} else {
						x1, d1 = x, d
					}
				}
				return x0
			}
			if x1 == limit {
				return math.Inf(int(sign))
			}
			if p != nil {
				start = p
			}
			x0, d0 = x1, max(d0, d1)
			step *= 1.3
		}
		return math.Inf(int(sign))
	}
	out.Lo, out.Hi = end(-1), end(1)
	return out, nil
}

// Symmetric reports whether the two sides of the profile differ by less than a
// tenth.
func (p *Profile) Symmetric() bool {
	a, b := p.Value-p.Lo, p.Hi-p.Value
	return !math.IsInf(a, 0) && !math.IsInf(b, 0) && math.Abs(a-b) < 0.1*(a+b)/2
}

// String writes value and the ends of the range.
func (p *Profile) String() string {
	return fmt.Sprintf("%s = %.6g, χ² rises by %g at %.6g and %.6g", p.Parameter, p.Value, p.Rise, p.Lo, p.Hi)
}
