package calorimetry

import (
	"fmt"
	"math"

	"levelsum/statmech/data"
	"levelsum/statmech/uncertain"
)

// mostKnots bounds the search of the number of knots.
const mostKnots = 32

// outlierLimit is the deviation in standard uncertainties above which a point
// is named. A rule of this package.
const outlierLimit = 5

// smoothed is a least-squares spline: its values at the knots are linear in the
// points, v = gain·y.
type smoothed struct {
	knots *spline
	gain  [][]float64 // [knot][point]
	press float64     // Σ w (leave-one-out residual)²
	q, r  [][]float64 // factors of the weighted design
}

// pull turns weights of the knots into weights of the points.
func (s *smoothed) pull(w []float64) []float64 {
	out := make([]float64, len(s.gain[0]))
	for k, wk := range w {
		if wk == 0 {
			continue
		}
		for i, g := range s.gain[k] {
			out[i] += float64(wk * g)
		}
	}
	return out
}

func (s *smoothed) at(x float64) []float64    { return s.pull(s.knots.at(x)) }
func (s *smoothed) slope(x float64) []float64 { return s.pull(s.knots.slope(x)) }
func (s *smoothed) integral(a, b float64, f func(x float64) float64) []float64 {
	return s.pull(s.knots.integral(a, b, f))
}

// smooth finds the spline of the piece.
func (pc *piece) smooth(run *data.Table, rows []int) error {
	weight := make([]float64, len(rows))
	random := run.URandom
	if random == nil {
		random = run.U
	}
	for k, i := range rows {
		u := pc.cp[k]
		if random != nil {
			u = float64(random[i])
		}
		if !(u > 0) {
			return fmt.Errorf("calorimetry: Smooth: row %d has the standard uncertainty 0, which would give it all the weight", i+1)
		}
		weight[k] = 1 / (u * u)
	}
	distinct := 1
	for i := 1; i < len(pc.x); i++ {
		if pc.x[i] > pc.x[i-1] {
			distinct++
		}
	}
	if distinct < 4 {
		return fmt.Errorf("calorimetry: Smooth: %s has %d different temperatures, want at least four", pc.name, distinct)
	}
	var all []*smoothed
	best := math.Inf(1)
	for k := 2; k <= min(mostKnots, distinct-1); k++ {
		s := fitSpline(knotsAt(pc.x, k), pc.x, pc.cp, weight)
		if s == nil {
			continue
		}
		all = append(all, s)
		best = min(best, s.press)
		if n := len(all); n > 6 && all[n-1].press > 1.2*best && all[n-2].press > 1.2*best && all[n-3].press > 1.2*best && best < all[0].press {
			break // more knots only follow the noise
		}
	}
	if len(all) == 0 {
		return fmt.Errorf("calorimetry: Smooth: no spline fits %s", pc.name)
	}
	// The fewest knots that predict nearly as well as the best number: the sum
	// of n squared normal errors scatters by √(2/n).
	limit := best * (1 + 0.5*math.Sqrt(2/float64(len(pc.x))))
	for _, s := range all {
		if s.press > limit {
			continue
		}
		s.solve(weight)
		pc.s = s
		var sum, relative float64
		for i, x := range pc.x {
			d := pc.cp[i] - dotted(s.at(x), pc.cp)
			sum += d * d * weight[i]
			relative += (d / pc.cp[i]) * (d / pc.cp[i])
		}
		n, k := float64(len(pc.x)), float64(len(s.knots.x))
		pc.note = fmt.Sprintf("%s: smoothed with %d knots, root-mean-square deviation %.2g %%", pc.name, len(s.knots.x), 100*math.Sqrt(relative/n))
		if run.URandom == nil && (run.U == nil || run.UCommon != nil) {
			pc.scatter(math.Sqrt(relative / (n - k)))
			return nil
		}
		pc.note += fmt.Sprintf(", %.2g u", math.Sqrt(sum/(n-k)))
		return nil
	}
	return nil
}

// scatter gives the points a random relative uncertainty found from their
// deviations, where the table has none.
func (pc *piece) scatter(relative float64) {
	for i, c := range pc.c {
		if c.Withheld() != "" {
			c = uncertain.Exact(pc.cp[i])
		}
		pc.c[i] = c.Plus(uncertain.Measured(0, relative*pc.cp[i]).Named(fmt.Sprintf("Cp(%.6g K)", pc.t[i])))
	}
	pc.note += fmt.Sprintf("; the random uncertainty of a point, %.2g %%, was found from the deviations", 100*relative)
}

// knotsAt places k knots so that as many points lie in each interval.
func knotsAt(x []float64, k int) []float64 {
	knots := make([]float64, 0, k)
	n := len(x)
	for j := range k {
		p := float64(j) / float64(k-1) * float64(n-1)
		i := min(n-2, int(p))
		v := x[i] + (p-float64(i))*(x[i+1]-x[i])
		if len(knots) == 0 || v > knots[len(knots)-1] {
			knots = append(knots, v)
		}
	}
	return knots
}

// fitSpline returns the least-squares spline with these knots, or nil if the
// points do not determine it.
func fitSpline(knots, x, y, weight []float64) *smoothed {
	k, n := len(knots), len(x)
	if k < 2 || n < k {
		return nil
	}
	sp := newSpline(knots)
	rows := make([][]float64, n)
	for i, v := range x {
		rows[i] = sp.at(v)
		root := math.Sqrt(weight[i])
		for j := range rows[i] {
			rows[i][j] *= root
		}
	}
	q, r, ok := gramSchmidt(rows)
	if !ok {
		return nil
	}
	s := &smoothed{knots: sp, q: q, r: r}
	c := make([]float64, k) // Qᵀ √W y
	for i := range n {
		v := math.Sqrt(weight[i]) * y[i]
		for j := range k {
			c[j] += float64(q[i][j] * v)
		}
	}
	for i := range n {
		h := 0.0
		for j := range k {
			h += q[i][j] * q[i][j]
		}
		if h > 1-1e-9 {
			return nil // a point that a coefficient of its own follows
		}
		d := (y[i]*math.Sqrt(weight[i]) - dotted(q[i], c)) / (1 - h)
		s.press += d * d
	}
	return s
}

// solve fills the gain, R⁻¹ Qᵀ √W.
func (s *smoothed) solve(weight []float64) {
	k, n := len(s.r), len(s.q)
	s.gain = make([][]float64, k)
	for j := range s.gain {
		s.gain[j] = make([]float64, n)
	}
	for i := range n {
		root := math.Sqrt(weight[i])
		for j := k - 1; j >= 0; j-- {
			v := s.q[i][j] * root
			for l := j + 1; l < k; l++ {
				v -= float64(s.r[j][l] * s.gain[l][i])
			}
			s.gain[j][i] = v / s.r[j][j]
		}
	}
	s.q, s.r = nil, nil
}

// gramSchmidt factors rows = Q R, orthogonalising twice.
func gramSchmidt(rows [][]float64) (q, r [][]float64, ok bool) {
	n, k := len(rows), len(rows[0])
	q, r = make([][]float64, n), make([][]float64, k)
	for i := range rows {
		q[i] = append([]float64(nil), rows[i]...)
	}
	for j := range r {
		r[j] = make([]float64, k)
	}
	for j := range k {
		before := 0.0
		for i := range n {
			before += q[i][j] * q[i][j]
		}
		for range 2 {
			for l := range j {
				var s float64
				for i := range n {
					s += float64(q[i][l] * q[i][j])
				}
				r[l][j] += s
				for i := range n {
					q[i][j] -= float64(s * q[i][l])
				}
			}
		}
		var norm float64
		for i := range n {
			norm += float64(q[i][j] * q[i][j])
		}
		if norm <= 1e-20*before {
			return nil, nil, false
		}
		r[j][j] = math.Sqrt(norm)
		for i := range n {
			q[i][j] /= r[j][j]
		}
	}
	return q, r, true
}

// outliers names the points that deviate by many standard uncertainties.
func (pc *piece) outliers() []string {
	var out []string
	d := make([]float64, len(pc.x))
	for i, x := range pc.x {
		d[i] = pc.cp[i]/dotted(pc.s.at(x), pc.cp) - 1
	}
	usual := medianSize(d) / 0.6745
	type cluster struct{ first, last, count int }
	var clusters []cluster
	for i, v := range d {
		u := math.Max(usual, pc.c[i].StandardUncertainty()/pc.cp[i])
		if math.Abs(v) <= outlierLimit*u || usual == 0 {
			continue
		}
		out = append(out, fmt.Sprintf("%s: the point at %.6g K deviates by %.2g %%, %.1f times the usual", pc.name, pc.t[i], 100*v, math.Abs(v)/u))
		// One good point between two bad ones does not part them.
		if n := len(clusters); n > 0 && i-clusters[n-1].last <= 2 {
			clusters[n-1].last = i
			clusters[n-1].count++
		} else {
			clusters = append(clusters, cluster{i, i, 1})
		}
	}
	if len(out) > 5 {
		out = append(out[:5], fmt.Sprintf("%s: and %d more points that deviate", pc.name, len(out)-5))
	}
	for _, c := range clusters {
		if c.count >= 3 {
			out = append(out, fmt.Sprintf("%s: neighbouring points from %.4g K to %.4g K deviate together: a transition hidden in the phase?", pc.name, pc.t[c.first], pc.t[c.last]))
		}
	}
	return out
}

// A Deviation is how far a point lies from the curve of its phase.
type Deviation struct {
	T       float64 // K
	Percent float64 // 100 (Cp - curve)/curve
	Phase   string
}

// Deviations returns the deviations of all points from the path, in rising
// temperature: zero for an interpolated path.
func (p *Path) Deviations() []Deviation {
	var out []Deviation
	for _, pc := range p.pieces {
		for i, x := range pc.x {
			out = append(out, Deviation{pc.t[i], 100 * (pc.cp[i]/dotted(pc.s.at(x), pc.cp) - 1), pc.name})
		}
	}
	return out
}
