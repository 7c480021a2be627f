package statmech

import (
	"errors"
	"fmt"
	"math"
	"strconv"
	"strings"

	"gonum.org/v1/gonum/mat"
	"gonum.org/v1/gonum/optimize/convex/lp"
)

// ErrUnreachable is returned if no distribution has the mean values asked for.
var ErrUnreachable = errors.New("no distribution has these mean values")

// ErrRedundant is returned if a constraint follows from the others.
var ErrRedundant = errors.New("constraints are not independent")

// A MeanConstraint fixes the mean of a quantity over the states: Σ pᵢ fᵢ = Mean.
type MeanConstraint struct {
	Name   string
	Values []float64 // fᵢ, one for each state or level
	Mean   float64
}

// MaximumEntropyResult is the distribution of largest entropy under
// constraints, pᵢ = gᵢ exp(-Σ λₖ fₖᵢ)/Z.
type MaximumEntropyResult struct {
	P           []float64
	Multipliers []float64 // λₖ
	LogZ        float64   // ln Σ gᵢ exp(-Σ λₖ fₖᵢ)
	Entropy     EntropyOverK
	// Covariance is that of the quantities fₖ in the distribution, which is
	// -∂⟨fⱼ⟩/∂λₖ: small changes of the means move λ by -Covariance⁻¹ times them.
	Covariance [][]float64
	Warnings   []string
}

// MaximumEntropy returns the distribution over states or levels that has the
// given mean values and otherwise the largest entropy -Σ pᵢ ln(pᵢ/gᵢ). Nil
// degeneracies are all 1; without constraints all states are equally likely.
//
// The multipliers minimise the convex dual ln Σ gᵢ exp(-Σ λₖ(fₖᵢ - Meanₖ)) by
// Newton steps with backtracking. The means are met within 1e-12 of the range
// of each quantity (TestMaximumEntropyConstraints).
//
// Errors: a [*DomainError] if lengths differ or a number is not finite;
// [ErrUnreachable], naming the bound, if the means lie outside what
// distributions over these states can have; [ErrRedundant], naming the
// constraint, if one follows from others. On the boundary of what can be
// reached the multipliers are infinite: the limiting distribution is returned
// with a warning and with multipliers ±Inf.
//
// Reference: E. T. Jaynes, Phys. Rev. 106, 620 (1957).
func MaximumEntropy(g []float64, constraints ...MeanConstraint) (MaximumEntropyResult, error) {
	const fn = "statmech.MaximumEntropy"
	n := len(g)
	if g == nil && len(constraints) > 0 {
		n = len(constraints[0].Values)
	}
	if n == 0 {
		return MaximumEntropyResult{}, &DomainError{fn, "g", "an empty list", "at least one state"}
	}
	w := make([]float64, n)
	for i := range w {
		w[i] = 1
		if g != nil {
			w[i] = g[i]
		}
		if !(w[i] > 0) || math.IsInf(w[i], 1) {
			return MaximumEntropyResult{}, &DomainError{fn, fmt.Sprintf("g[%d]", i), fmt.Sprint(w[i]), "positive and finite"}
		}
	}
	var named []MeanConstraint
	for k, c := range constraints {
		if c.Name == "" {
			c.Name = fmt.Sprintf("constraint %d", k+1)
		}
		if len(c.Values) != n {
			return MaximumEntropyResult{}, &DomainError{fn, c.Name, fmt.Sprintf("%d values", len(c.Values)), fmt.Sprintf("%d, one for each state", n)}
		}
		for i, f := range append(c.Values[:n:n], c.Mean) {
			if f-f != 0 {
				return MaximumEntropyResult{}, &DomainError{fn, fmt.Sprintf("%s[%d]", c.Name, i), fmt.Sprint(f), "finite"}
			}
		}
		named = append(named, c)
	}
	for _, c := range named {
		lo, hi := bounds(c.Values)
		if c.Mean < lo || c.Mean > hi {
			return MaximumEntropyResult{}, fmt.Errorf("%s: the mean of %s = %s is outside its bounds %s and %s: %w",
				fn, c.Name, num(c.Mean), num(lo), num(hi), ErrUnreachable)
		}
	}
	return maximum(w, named)
}

func bounds(f []float64) (lo, hi float64) {
	lo, hi = f[0], f[0]
	for _, x := range f {
		lo, hi = min(lo, x), max(hi, x)
	}
	return lo, hi
}

func num(x float64) string { return strconv.FormatFloat(x, 'g', 8, 64) }

// maximum solves for weights w, which may contain zeros for excluded states.
func maximum(w []float64, cs []MeanConstraint) (MaximumEntropyResult, error) {
	const fn = "statmech.MaximumEntropy"
	if err := independent(w, cs); err != nil {
		return MaximumEntropyResult{}, fmt.Errorf("%s: %w", fn, err)
	}
	d := newDual(w, cs)
	if d.solve() {
		return d.result(), nil
	}
	// No interior solution: outside or on the boundary.
	if err := reachable(w, cs); err != nil {
		return MaximumEntropyResult{}, fmt.Errorf("%s: %w", fn, err)
	}
	face := d.face()
	if face == nil {
		return MaximumEntropyResult{}, fmt.Errorf("%s: the means of %s lie on or too near the boundary of what the states can have: %w",
			fn, names(cs), ErrUnreachable)
	}
	// The states of the face alone carry the limit; constraints that are
	// constant on it are met by all of them.
	var kept []MeanConstraint
	for _, c := range cs {
		var on []float64
		for i, f := range c.Values {
			if face[i] > 0 {
				on = append(on, f)
			}
		}
		if lo, hi := bounds(on); hi-lo > 1e-12*(math.Abs(lo)+math.Abs(hi)) {
			kept = append(kept, c)
		}
	}
	for len(kept) > 0 && independent(face, kept) != nil {
		kept = kept[:len(kept)-1]
	}
	r, err := maximum(face, kept)
	if err != nil {
		return r, err
	}
	r.Multipliers = make([]float64, len(cs))
	for k := range cs {
		if d.lambda[k] != 0 {
			r.Multipliers[k] = math.Inf(int(math.Copysign(1, d.lambda[k])))
		}
	}
	r.Covariance = nil
	r.Warnings = append(r.Warnings, "the means of "+names(cs)+" lie on the boundary: the multipliers are infinite and some states have no weight")
	return r, nil
}

func names(cs []MeanConstraint) string {
	var s []string
	for _, c := range cs {
		s = append(s, c.Name)
	}
	return strings.Join(s, ", ")
}

// independent checks that no constraint is a combination of 1 and the others
// on the states with weight, by Gram-Schmidt.
func independent(w []float64, cs []MeanConstraint) error {
	var basis [][]float64
	one := make([]float64, 0, len(w))
	for _, x := range w {
		if x > 0 {
			one = append(one, 1)
		}
	}
	basis = append(basis, one)
	for _, c := range cs {
		var v []float64
		for i, f := range c.Values {
			if w[i] > 0 {
				v = append(v, f)
			}
		}
		size := math.Sqrt(dot(v, v))
		for range 2 { // twice is enough
			for _, b := range basis {
				p := dot(v, b) / dot(b, b)
				for i := range v {
					v[i] -= p * b[i]
				}
			}
		}
		if math.Sqrt(dot(v, v)) <= 1e-11*size {
			return fmt.Errorf("%s is constant or follows from the constraints before it: %w", c.Name, ErrRedundant)
		}
		basis = append(basis, v)
	}
	return nil
}

func dot(a, b []float64) float64 {
	s := 0.0
	for i := range a {
		s += a[i] * b[i]
	}
	return s
}

// A dual is the convex function ln Σ w exp(-μ·φ) of scaled multipliers μ, with
// φ = (f - Mean)/range.
type dual struct {
	w      []float64
	cs     []MeanConstraint
	phi    [][]float64
	size   []float64
	mu     []float64
	lambda []float64
}

func newDual(w []float64, cs []MeanConstraint) *dual {
	d := &dual{w: w, cs: cs, mu: make([]float64, len(cs)), lambda: make([]float64, len(cs))}
	for _, c := range cs {
		lo, hi := bounds(c.Values)
		phi := make([]float64, len(w))
		for i, f := range c.Values {
			phi[i] = (f - c.Mean) / (hi - lo)
		}
		d.phi, d.size = append(d.phi, phi), append(d.size, hi-lo)
	}
	return d
}

// at returns the value, the probabilities and the mean of φ at μ.
func (d *dual) at(mu []float64) (value float64, p, mean []float64) {
	p = make([]float64, len(d.w))
	top := math.Inf(-1)
	for i, w := range d.w {
		p[i] = math.Inf(-1)
		if w > 0 {
			p[i] = math.Log(w)
			for k := range mu {
				p[i] -= mu[k] * d.phi[k][i]
			}
			top = math.Max(top, p[i])
		}
	}
	z := 0.0
	for i := range p {
		p[i] = math.Exp(p[i] - top)
		z += p[i]
	}
	mean = make([]float64, len(mu))
	for i := range p {
		p[i] /= z
		for k := range mu {
			mean[k] += p[i] * d.phi[k][i]
		}
	}
	return top + math.Log(z), p, mean
}

func (d *dual) covariance(p, mean []float64) *mat.SymDense {
	m := len(mean)
	c := mat.NewSymDense(m, nil)
	for j := range m {
		for k := j; k < m; k++ {
			s := 0.0
			for i := range p {
				s += p[i] * (d.phi[j][i] - mean[j]) * (d.phi[k][i] - mean[k])
			}
			c.SetSym(j, k, s)
		}
	}
	return c
}

// solve reports whether an interior minimum was found.
func (d *dual) solve() bool {
	m := len(d.cs)
	if m == 0 {
		return true
	}
	value, p, mean := d.at(d.mu)
	for range 200 {
		worst := 0.0
		for _, x := range mean {
			worst = math.Max(worst, math.Abs(x))
		}
		c := d.covariance(p, mean)
		var chol mat.Cholesky
		if !chol.Factorize(c) {
			break
		}
		step := mat.NewVecDense(m, nil)
		if chol.SolveVecTo(step, mat.NewVecDense(m, mean)) != nil && chol.Cond() > 1e15 {
			break
		}
		decrement := mat.Dot(step, mat.NewVecDense(m, mean))
		if worst < 1e-13 || decrement < 1e-28 {
			// Near the boundary the multipliers grow without end while the means
			// are met to rounding: that is no interior solution.
			for k := range d.mu {
				d.lambda[k] = d.mu[k] / d.size[k]
			}
			for i := range p {
				if d.w[i] > 0 && p[i] < 1e-13 {
					return d.interior()
				}
			}
			return true
		}
		t := 1.0
		for {
			next := make([]float64, m)
			for k := range next {
				next[k] = d.mu[k] + t*step.AtVec(k)
			}
			v, q, mu := d.at(next)
			if v <= value-1e-4*t*decrement || t < 1e-10 || decrement < 1e-10 && v <= value+1e-14*(1+math.Abs(value)) {
				d.mu, value, p, mean = next, v, q, mu
				break
			}
			t /= 2
		}
		if norm(d.mu) > 1e6 {
			break
		}
	}
	for k := range d.mu {
		d.lambda[k] = d.mu[k] / d.size[k]
	}
	return false
}

func norm(v []float64) float64 { return math.Sqrt(dot(v, v)) }

// interior reports whether the means can be had with weight on every state.
func (d *dual) interior() bool {
	s, ok := leastWeight(d.w, d.cs)
	return ok && s > 1e-13
}

func (d *dual) result() MaximumEntropyResult {
	m := len(d.cs)
	value, p, mean := d.at(d.mu)
	r := MaximumEntropyResult{P: p, Multipliers: d.lambda, LogZ: value}
	for k, c := range d.cs {
		r.LogZ -= d.lambda[k] * c.Mean
	}
	s := 0.0
	for i, x := range p {
		if x > 0 {
			s -= x * math.Log(x/d.w[i])
		}
	}
	r.Entropy = EntropyOverK(s)
	if m == 0 {
		return r
	}
	cov := d.covariance(p, mean)
	for j := range m {
		row := make([]float64, m)
		for k := range m {
			row[k] = cov.At(j, k) * d.size[j] * d.size[k]
		}
		r.Covariance = append(r.Covariance, row)
	}
	return r
}

// simplexRows returns the equations Σp = 1, Σ p φ = 0 for the states with weight.
func simplexRows(w []float64, cs []MeanConstraint) (states []int, a [][]float64) {
	for i, x := range w {
		if x > 0 {
			states = append(states, i)
		}
	}
	a = make([][]float64, 1+len(cs))
	for k := range a {
		a[k] = make([]float64, len(states))
		for j, i := range states {
			a[k][j] = 1
			if k > 0 {
				lo, hi := bounds(cs[k-1].Values)
				a[k][j] = (cs[k-1].Values[i] - cs[k-1].Mean) / (hi - lo)
			}
		}
	}
	return states, a
}

// leastWeight returns the largest s such that some distribution with the means
// gives every state at least s; ok is false if there is no distribution at all.
func leastWeight(w []float64, cs []MeanConstraint) (s float64, ok bool) {
	states, a := simplexRows(w, cs)
	n := len(states)
	m := mat.NewDense(len(a), n+1, nil)
	for k, row := range a {
		sum := 0.0
		for j, x := range row {
			m.Set(k, j, x)
			sum += x
		}
		m.Set(k, n, sum)
	}
	b := make([]float64, len(a))
	b[0] = 1
	c := make([]float64, n+1)
	c[n] = -1
	opt, _, err := simplex(c, m, b)
	if err != nil {
		return 0, false
	}
	return -opt, true
}

// simplex is lp.Simplex with its panics as errors.
func simplex(c []float64, a mat.Matrix, b []float64) (opt float64, x []float64, err error) {
	defer func() {
		if e := recover(); e != nil {
			err = fmt.Errorf("linear programme: %v", e)
		}
	}()
	return lp.Simplex(c, a, b, 1e-12, nil)
}

// reachable returns an error that names a bound if no distribution has the means.
func reachable(w []float64, cs []MeanConstraint) error {
	for k, c := range cs {
		// The range of fₖ when the constraints before it are kept.
		states, a := simplexRows(w, cs[:k])
		m := mat.NewDense(len(a), len(states), nil)
		for r, row := range a {
			m.SetRow(r, row)
		}
		b := make([]float64, len(a))
		b[0] = 1
		f := make([]float64, len(states))
		minus := make([]float64, len(states))
		for j, i := range states {
			f[j], minus[j] = c.Values[i], -c.Values[i]
		}
		lo, _, errLo := simplex(f, m, b)
		hi, _, errHi := simplex(minus, m, b)
		hi = -hi
		if errLo != nil || errHi != nil {
			continue
		}
		lowest, highest := bounds(c.Values)
		slack := 1e-11 * (highest - lowest)
		if c.Mean < lo-slack || c.Mean > hi+slack {
			with := ""
			if k > 0 {
				with = " when the means of " + names(cs[:k]) + " are kept"
			}
			return fmt.Errorf("the mean of %s = %s is outside its bounds %s and %s%s: %w", c.Name, num(c.Mean), num(lo), num(hi), with, ErrUnreachable)
		}
	}
	return nil
}

// face returns the weights with the states set to zero that no distribution
// with the means can use, nil if there are none.
func (d *dual) face() []float64 {
	states, a := simplexRows(d.w, d.cs)
	m := mat.NewDense(len(a), len(states), nil)
	for r, row := range a {
		m.SetRow(r, row)
	}
	b := make([]float64, len(a))
	b[0] = 1
	face := append([]float64(nil), d.w...)
	removed := false
	for j, i := range states {
		c := make([]float64, len(states))
		c[j] = -1
		opt, _, err := simplex(c, m, b)
		if err == nil && -opt < 1e-11 {
			face[i] = 0
			removed = true
		}
	}
	if !removed {
		return nil
	}
	return face
}
