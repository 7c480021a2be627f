package fit

import (
	"math"
)

// problem is a nonlinear least squares problem in plain numbers: minimise
// Σ rᵢ(p)² over p between lo and hi.
type problem struct {
	n, m   int
	lo, hi []float64 // ±Inf where there is no bound
	// residuals puts r(p) into out and reports whether all are finite.
	residuals func(p, out []float64) bool
	// jacobian puts ∂rᵢ/∂pⱼ into jac, column by column; r holds r(p). Nil
	// means central differences of residuals.
	jacobian func(p, r, jac []float64) bool
	stop     func() bool // asked at every step; nil means never
	size     float64     // norm of the weighted data, which rounding is relative to
	work     *work
}

// work are the arrays of the steps, kept from one run to the next.
type work struct {
	a, qtr, rTrial                []float64 // m×n, m, m
	small                         []float64 // 2n×n
	rhs, delta                    []float64 // 2n, n
	scale, trial, gradient, norms []float64 // n
	normal                        normal
}

func (pr *problem) arrays() *work {
	if w := pr.work; w != nil {
		return w
	}
	n, m := pr.n, pr.m
	w := &work{a: make([]float64, m*n), qtr: make([]float64, m), rTrial: make([]float64, m),
		small: make([]float64, 2*n*n), rhs: make([]float64, 2*n), delta: make([]float64, n),
		scale: make([]float64, n), trial: make([]float64, n), gradient: make([]float64, n), norms: make([]float64, n)}
	w.normal.reserve(n)
	pr.work = w
	return w
}

// dampedStep puts the smallest |(R; √λ D) δ + (Qᵀr; 0)| into delta.
func (w *work) dampedStep(m int, lambda float64, free []int) {
	k := len(free)
	small, rhs := w.small[:2*k*k], w.rhs[:2*k]
	clear(small)
	clear(rhs)
	root := math.Sqrt(lambda)
	for i, j := range free {
		copy(small[i*2*k:i*2*k+i+1], w.a[i*m:i*m+i+1])
		small[i*2*k+k+i] = root * w.scale[j]
		rhs[i] = -w.qtr[i]
	}
	householder(small, 2*k, k, rhs)
	backSolve(small, 2*k, k, rhs, w.delta)
}

// Stop says why a fit ended.
type Stop int

// The reasons of stopping.
const (
	Converged  Stop = iota // the residuals are orthogonal to every derivative, or the step is below the resolution
	NoProgress             // no step lowers χ² any more, and the gradient is not zero
	TooManySteps
	NotFinite // the model is not finite at the starting values
	Interrupted
)

func (s Stop) String() string {
	switch s {
	case Converged:
		return "converged"
	case NoProgress:
		return "no step lowers χ² any more although the gradient is not zero"
	case TooManySteps:
		return "too many steps"
	case NotFinite:
		return "the model has no finite value at the starting parameters"
	case Interrupted:
		return "interrupted"
	}
	return "unknown"
}

// damping is the matrix D of the step (JᵀJ + λDᵀD)δ = -Jᵀr.
type damping int

const (
	largest  damping = iota // Dⱼ is the largest norm of column j so far (Moré 1978)
	current                 // Dⱼ is the norm of column j now (Marquardt 1963)
	constant                // Dⱼ = 1/max(|pⱼ| at the start, tiny) (Levenberg 1944, in relative steps)
)

// minimum is where a run of the minimiser ended.
type minimum struct {
	p, r        []float64
	jac         []float64 // at p
	chi2        float64
	stop        Stop
	steps       int
	evaluations int
	cosine      float64 // largest |cos| between r and a free column of jac
	atBound     []bool
	regular     bool    // jac is known to have full rank
	qr          *factor // of jac, once it was asked for
}

const (
	maxSteps     = 400
	cosineEnough = 1e-11
	stepEnough   = 1e-11
)

// marquardt minimises by damped Gauss-Newton steps from start. A step comes from
// the normal equations where these lose no more than half of the digits; else
// from a QR factorisation of the Jacobian and one of a small matrix for every λ,
// so that nothing is squared. λ follows the gain ratio.
//
// References: K. Levenberg, Q. Appl. Math. 2, 164 (1944); D. W. Marquardt, J.
// SIAM 11, 431 (1963); J. J. Moré in Numerical Analysis, ed. G. A. Watson,
// Springer (1978), p. 105; H. B. Nielsen, report IMM-REP-1999-05 (1999), equation 2.20, for λ.
func marquardt(pr *problem, start []float64, d damping, lambda float64) *minimum {
	n, m := pr.n, pr.m
	out := &minimum{p: clone(start), r: make([]float64, m), jac: make([]float64, m*n), atBound: make([]bool, n), stop: TooManySteps, cosine: math.Inf(1)}
	clip(out.p, pr)
	out.evaluations++
	if !pr.residuals(out.p, out.r) {
		out.stop = NotFinite
		out.chi2 = math.Inf(1)
		return out
	}
	out.chi2 = sumOfSquares(out.r)
	var (
		w        = pr.arrays()
		scale    = w.scale
		free     = make([]int, 0, n)
		nu       = 2.0
		failed   = 0
		rTrial   = w.rTrial
		trial    = w.trial
		delta    = w.delta
		gradient = w.gradient
		norms    = w.norms
	)
	clear(scale)
	if d == constant {
		for j, p := range start {
			scale[j] = 1 / max(math.Abs(p), 1e-8)
		}
	}
	if !pr.derivatives(out) {
		out.stop = NotFinite
		return out
	}
	for out.steps = 0; out.steps < maxSteps; out.steps++ {
		if pr.stop != nil && pr.stop() {
			out.stop = Interrupted
			return out
		}
		// Free columns: those not held by a bound that the gradient pushes against.
		free = free[:0]
		out.cosine = 0
		rNorm := math.Sqrt(out.chi2)
		for j := range n {
			col := out.jac[j*m : (j+1)*m]
			g := dot(col, out.r)
			out.atBound[j] = out.p[j] <= pr.lo[j] && g > 0 || out.p[j] >= pr.hi[j] && g < 0
			norm := norm2(col)
			gradient[j], norms[j] = g, norm
			if d != constant {
				if d == current {
					scale[j] = norm
				} else {
					scale[j] = max(scale[j], norm)
				}
				if scale[j] == 0 {
					scale[j] = 1
				}
			}
			if out.atBound[j] {
				continue
			}
			free = append(free, j)
			if norm > 0 && rNorm > 0 {
				out.cosine = max(out.cosine, math.Abs(g)/(norm*rNorm))
			}
		}
		out.regular = w.normal.form(out.jac, m, free, gradient, norms)
		if len(free) == 0 || out.chi2 == 0 || out.cosine <= cosineEnough {
			out.stop = Converged
			return out
		}
		k := len(free)
		if !out.regular {
			for i, j := range free {
				copy(w.a[i*m:(i+1)*m], out.jac[j*m:(j+1)*m])
			}
			copy(w.qtr, out.r)
			householder(w.a[:k*m], m, k, w.qtr)
		}
		accepted := false
		for !accepted {
			if !out.regular || !w.normal.step(lambda, scale, free, w.rhs, delta) {
				w.dampedStep(m, lambda, free)
			}
			copy(trial, out.p)
			for i, j := range free {
				trial[j] += delta[i]
			}
			clip(trial, pr)
			relative := 0.0
			for i, j := range free {
				delta[i] = trial[j] - out.p[j]
				if delta[i] != 0 {
					relative = max(relative, math.Abs(delta[i])/max(math.Abs(out.p[j]), math.Abs(trial[j])))
				}
			}
			// Reduction that the linear model promises for the clipped step.
			var predicted float64
			if out.regular {
				predicted = w.normal.reduction(delta)
			} else {
				copy(rTrial, out.r)
				for i, j := range free {
					axpy(delta[i], out.jac[j*m:(j+1)*m], rTrial)
				}
				predicted = out.chi2 - sumOfSquares(rTrial)
			}
			last := predicted <= 1e-16*out.chi2 && lambda < 1.5e-5
			if relative <= stepEnough*1e-4 || relative <= stepEnough && failed > 3 || last {
				out.stop = pr.endReason(out, predicted)
				if last && out.regular && out.stop == Converged {
					pr.polish(out, trial, rTrial)
				}
				return out
			}
			out.evaluations++
			ok := pr.residuals(trial, rTrial)
			chi2 := math.Inf(1)
			if ok {
				chi2 = sumOfSquares(rTrial)
			}
			gain := (out.chi2 - chi2) / max(predicted, 1e-300)
			if ok && chi2 < out.chi2 && gain > 1e-4 {
				copy(out.p, trial)
				copy(out.r, rTrial)
				out.chi2 = chi2
				g := 2*gain - 1
				lambda = max(lambda*max(0.1, 1-g*g*g), 1e-18)
				nu = 2
				accepted = true
				failed = 0
				break
			}
			failed++
			lambda *= nu
			nu = min(2*nu, 1e6)
			if lambda > 1e30 || failed > 60 || failed > 3 && predicted <= pr.resolution(out.chi2) {
				out.stop = pr.endReason(out, predicted)
				return out
			}
		}
		if !pr.derivatives(out) {
			out.stop = NotFinite
			return out
		}
	}
	return out
}

// polish takes a last step, which is too small to be seen in χ² but doubles the
// digits of the parameters, unless χ² rises with it.
func (pr *problem) polish(out *minimum, trial, rTrial []float64) {
	out.evaluations++
	if !pr.residuals(trial, rTrial) {
		return
	}
	chi2 := sumOfSquares(rTrial)
	if chi2 > out.chi2+pr.resolution(out.chi2) {
		return
	}
	copy(out.p, trial)
	copy(out.r, rTrial)
	out.chi2 = chi2
	if !pr.derivatives(out) {
		out.stop = NotFinite
	}
}

// resolution is how finely χ² can be told apart: every residual is known to
// about ε of the weighted datum that it is the rest of.
func (pr *problem) resolution(chi2 float64) float64 {
	const eps = 0x1p-52
	return 8 * eps * pr.size * (math.Sqrt(chi2) + eps*pr.size)
}

// endReason distinguishes a minimum at the resolution of the arithmetic from a
// run that is stuck. predicted is the fall of χ² that the last step promised.
func (pr *problem) endReason(out *minimum, predicted float64) Stop {
	if out.cosine < 1e-6 || predicted <= pr.resolution(out.chi2) {
		return Converged
	}
	return NoProgress
}

// derivatives fills the Jacobian at out.p.
func (pr *problem) derivatives(out *minimum) bool {
	if pr.jacobian != nil {
		out.evaluations++
		if !pr.jacobian(out.p, out.r, out.jac) {
			return false
		}
	} else if !pr.differences(out) {
		return false
	}
	for _, v := range out.jac {
		if math.IsNaN(v) || math.IsInf(v, 0) {
			return false
		}
	}
	return true
}

// differences fills the Jacobian by central differences with one Richardson
// extrapolation: error about h⁴, step cbrt(ε) of the parameter.
func (pr *problem) differences(out *minimum) bool {
	m := pr.m
	p := clone(out.p)
	up, down := make([]float64, m), make([]float64, m)
	for j := range pr.n {
		col := out.jac[j*m : (j+1)*m]
		h := 4e-4 * math.Abs(p[j])
		if h == 0 {
			h = 1e-8
		}
		if !pr.difference(p, j, h, up, down, col) {
			h = 1e-3 * h
			if !pr.difference(p, j, h, up, down, col) {
				return false
			}
		}
		coarse := clone(col)
		if !pr.difference(p, j, h/2, up, down, col) {
			return false
		}
		for i := range col {
			col[i] += (col[i] - coarse[i]) / 3
		}
		out.evaluations += 4
	}
	return true
}

// difference puts (r(p+h) - r(p-h))/2h into col, one-sided at a bound.
func (pr *problem) difference(p []float64, j int, h float64, up, down, col []float64) bool {
	centre := p[j]
	defer func() { p[j] = centre }()
	high, low := centre+h, centre-h
	if high > pr.hi[j] {
		high = centre
	}
	if low < pr.lo[j] {
		low = centre
	}
	if high == low {
		return false
	}
	p[j] = high
	if !pr.residuals(p, up) {
		return false
	}
	p[j] = low
	if !pr.residuals(p, down) {
		return false
	}
	for i := range col {
		col[i] = (up[i] - down[i]) / (high - low)
	}
	return true
}

// minimise runs marquardt with one form of damping after the other until a run
// ends at a clean minimum, and keeps the lowest.
func minimise(pr *problem, start []float64) *minimum {
	var best *minimum
	evaluations := 0
	for _, way := range []struct {
		d      damping
		lambda float64
	}{{largest, 1e-3}, {current, 1e-2}, {constant, 1}, {largest, 1e3}} {
		run := marquardt(pr, start, way.d, way.lambda)
		evaluations += run.evaluations
		if best == nil || run.chi2 < best.chi2*(1-1e-12) || best.stop != Converged && run.stop == Converged && run.chi2 <= best.chi2*(1+1e-12) {
			best = run
		}
		if run.stop == Converged && run.fullRank() || run.stop == NotFinite || run.stop == Interrupted {
			break
		}
	}
	best.evaluations = evaluations
	return best
}

// fullRank reports whether the derivatives at the minimum determine every free
// parameter. A run that ended where they do not has drifted onto a plateau.
func (out *minimum) fullRank() bool { return out.regular || out.factorised().condition < 1e14 }

func clip(p []float64, pr *problem) {
	for j := range p {
		p[j] = max(pr.lo[j], min(pr.hi[j], p[j]))
	}
}

func clone(x []float64) []float64 { return append([]float64(nil), x...) }

// dot returns Σ xᵢyᵢ in four sums.
func dot(x, y []float64) float64 {
	var a, b, c, d float64
	y = y[:len(x)]
	for len(x) >= 4 && len(y) >= 4 {
		a += float64(x[0] * y[0])
		b += float64(x[1] * y[1])
		c += float64(x[2] * y[2])
		d += float64(x[3] * y[3])
		x, y = x[4:], y[4:]
	}
	for i, v := range x {
		a += float64(v * y[i])
	}
	return (a + b) + (c + d)
}

func sumOfSquares(x []float64) float64 { return dot(x, x) }

func axpy(a float64, x, y []float64) {
	for i, v := range x {
		y[i] += float64(a * v)
	}
}
