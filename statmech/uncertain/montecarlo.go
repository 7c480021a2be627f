package uncertain

import (
	"fmt"
	"math"
	"math/rand/v2"
	"runtime"
	"slices"
	"sync"

	"levelsum/display"
	"levelsum/statmech"
)

// An Option changes how [MonteCarlo] draws.
type Option func(*drawing)

type drawing struct {
	seed     uint64
	draws    int // 0: adaptive
	most     int
	digits   int
	coverage float64
	parallel bool
}

// Seed sets the seed; 1 where none is given. The same seed gives the same
// numbers on any number of processors.
func Seed(seed uint64) Option { return func(d *drawing) { d.seed = seed } }

// Draws sets a fixed number of draws in place of the adaptive procedure.
func Draws(n int) Option { return func(d *drawing) { d.draws = n } }

// MostDraws sets where the adaptive procedure gives up; 10⁷ where it is not given.
func MostDraws(n int) Option { return func(d *drawing) { d.most = n } }

// Digits sets the number of significant digits of the standard uncertainty
// that the adaptive procedure makes stable; 2 where it is not given.
func Digits(n int) Option { return func(d *drawing) { d.digits = n } }

// Coverage sets the coverage probability of the intervals that the adaptive
// procedure makes stable; 0.95 where it is not given.
func Coverage(p float64) Option { return func(d *drawing) { d.coverage = p } }

// Parallel lets the functions given to [Function] be called from several
// goroutines at once. Without it a computation that contains such functions
// runs on one processor.
func Parallel() Option { return func(d *drawing) { d.parallel = true } }

// A Simulation is the distribution of a quantity as draws show it.
type Simulation struct {
	Quantity  Quantity
	Mean      float64 // the estimate y
	U         float64 // its standard uncertainty u(y), the standard deviation of the draws
	Draws     int     // values drawn, the non-finite ones included
	NonFinite int     // draws outside the domain of the computation; they are left out
	Seed      uint64
	Stable    bool // the adaptive procedure reached its tolerance
	Tolerance float64
	Coverage  float64
	Warnings  []string

	values []float64 // finite, in the order drawn
	sorted []float64
	mu     sync.Mutex // guards sorted
}

const blockSize = 512

// MonteCarlo draws the inputs of q and repeats its computation. Draws are
// added in batches until mean, standard uncertainty and the ends of the 95 per
// cent interval are stable to two digits of u (JCGM 101:2008, 7.9), or to
// what the options ask for.
func MonteCarlo(q Quantity, opts ...Option) (*Simulation, error) {
	j, err := MonteCarloJoint([]Quantity{q}, opts...)
	if err != nil {
		return nil, err
	}
	return j.Simulations[0], nil
}

// A Joint is the joint distribution of several quantities.
type Joint struct {
	Simulations []*Simulation
	Covariance  [][]float64
}

// Correlation returns the correlation coefficient of quantities i and j as the
// draws show it.
func (j *Joint) Correlation(a, b int) float64 {
	if d := math.Sqrt(j.Covariance[a][a] * j.Covariance[b][b]); d > 0 {
		return j.Covariance[a][b] / d
	}
	return 0
}

// MonteCarloJoint is [MonteCarlo] of several quantities with the same draws
// (JCGM 102:2011, 7): draws in which one of them is not finite are left out of
// all.
func MonteCarloJoint(qs []Quantity, opts ...Option) (*Joint, error) {
	d := drawing{seed: 1, most: 1e7, digits: 2, coverage: 0.95}
	for _, o := range opts {
		o(&d)
	}
	switch {
	case len(qs) == 0:
		return nil, fmt.Errorf("uncertain: MonteCarlo: no quantities")
	case d.draws < 0 || d.draws == 0 && d.most < 20000 || d.draws > 1e9 || d.most > 1e9:
		return nil, fmt.Errorf("uncertain: MonteCarlo: between 1 and 1e9 draws, at least 20000 for the adaptive procedure")
	case d.digits < 1 || d.digits > 6:
		return nil, fmt.Errorf("uncertain: MonteCarlo: %d digits, want 1 to 6", d.digits)
	case !(d.coverage > 0) || !(d.coverage < 1):
		return nil, fmt.Errorf("uncertain: MonteCarlo: coverage %g, want between 0 and 1", d.coverage)
	}
	outputs := make([]*node, len(qs))
	for i, q := range qs {
		if reason := q.Withheld(); reason != "" {
			return nil, fmt.Errorf("uncertain: MonteCarlo: no standard uncertainty to draw from: %s", reason)
		}
		outputs[i] = q.node()
	}
	use := "uncertain.MonteCarlo, adaptive"
	if d.draws > 0 {
		use = fmt.Sprintf("uncertain.MonteCarlo, %d draws", d.draws)
	}
	display.SeedUsed(use, d.seed)
	s := newSampler(newTape(outputs), d)
	batch := max(int(math.Ceil(100/(1-d.coverage))), 10000)
	tolerance := make([]float64, len(qs))
	var stable bool
	if d.draws > 0 {
		s.draw(d.draws)
		stable = !s.halted
	} else {
		stable = s.adapt(batch, tolerance)
	}
	return s.joint(qs, stable, tolerance)
}

// sampler collects draws of the outputs of a tape.
type sampler struct {
	*tape
	d      drawing
	next   uint64 // number of the next block, which is its stream of random numbers
	drawn  int
	bad    int
	halted bool
	values [][]float64 // of each output, finite draws only
	l      map[*source][]float64
}

func newSampler(t *tape, d drawing) *sampler {
	s := &sampler{tape: t, d: d, values: make([][]float64, len(t.outputs)), l: map[*source][]float64{}}
	for _, src := range t.sources {
		s.l[src], _ = factor(src.cov, len(src.value))
	}
	return s
}

// draw adds n draws. Block i always uses random stream i of the seed, so that
// the result does not depend on how many processors share the work.
func (s *sampler) draw(n int) {
	blocks := (n + blockSize - 1) / blockSize
	out := make([][]float64, len(s.outputs))
	for i := range out {
		out[i] = make([]float64, n)
	}
	workers := min(runtime.GOMAXPROCS(0), blocks)
	if s.hasFunc && !s.d.parallel {
		workers = 1
	}
	var wg sync.WaitGroup
	panics := make(chan any, workers)
	done := make([]bool, blocks)
	progress := display.NewProgress("Monte Carlo draws", n)
	defer progress.Done()
	for w := range workers {
		wg.Go(func() {
			defer func() {
				if e := recover(); e != nil {
					panics <- e
				}
			}()
			b := s.newBlock(blockSize)
			pcg := rand.NewPCG(0, 0)
			for k := w; k < blocks; k += workers {
				pcg.Seed(s.d.seed, s.next+uint64(k))
				from := k * blockSize
				m := min(blockSize, n-from)
				if display.Interrupted() {
					return
				}
				s.inputs(b, pcg, m)
				s.run(b, m)
				for i, slot := range s.outputs {
					copy(out[i][from:from+m], b.values[slot][:m])
				}
				done[k] = true
				progress.Step(m)
			}
		})
	}
	wg.Wait()
	select {
	case e := <-panics:
		panic(e)
	default:
	}
	display.Checkpoint()
	s.next += uint64(blocks)
	for i := range s.values {
		s.values[i] = slices.Grow(s.values[i], n)
	}
	for k := range n {
		if !done[k/blockSize] {
			s.halted = true
			continue
		}
		s.drawn++
		ok := true
		for i := range out {
			ok = ok && !math.IsNaN(out[i][k]) && !math.IsInf(out[i][k], 0)
		}
		if !ok {
			s.bad++
			continue
		}
		for i := range out {
			s.values[i] = append(s.values[i], out[i][k])
		}
	}
}

// inputs draws the values of every source (JCGM 101:2008, 6.4).
func (s *sampler) inputs(b *block, source *rand.PCG, m int) {
	r := rand.New(source)
	for _, src := range s.sources {
		rows := b.draws[src]
		if len(rows) == 1 {
			s.single(src, rows[0][:m], r, source)
			continue
		}
		n := len(rows)
		l := s.l[src]
		z := make([]float64, n)
		for k := range m {
			normals(z, 0, 1, source)
			f := tFactor(src.dof, r)
			for i := range rows {
				v := 0.0
				for j := 0; j <= i; j++ {
					v += float64(l[i*n+j] * z[j])
				}
				rows[i][k] = src.value[i] + float64(f*v)
			}
		}
	}
}

func (s *sampler) single(src *source, out []float64, r *rand.Rand, source *rand.PCG) {
	x, u := src.value[0], math.Sqrt(src.cov[0])
	switch src.shape {
	case Uniform:
		a := u * math.Sqrt(3)
		for k := range out {
			out[k] = x + a*(2*r.Float64()-1)
		}
	case Triangle:
		a := u * math.Sqrt(6)
		for k := range out {
			out[k] = x + a*(r.Float64()+r.Float64()-1)
		}
	case Arcsine:
		a := u * math.Sqrt2
		for k := range out {
			out[k] = x + a*math.Sin(2*math.Pi*r.Float64())
		}
	default:
		if math.IsInf(src.dof, 1) {
			normals(out, x, u, source)
			return
		}
		normals(out, 0, u, source)
		for k := range out {
			out[k] = x + float64(out[k]*tFactor(src.dof, r))
		}
	}
}

// tFactor returns √(ν/χ²ν), which makes a normal draw one of the t-distribution.
func tFactor(nu float64, r *rand.Rand) float64 {
	if math.IsInf(nu, 1) {
		return 1
	}
	return math.Sqrt(nu / (2 * gamma(nu/2, r)))
}

// gamma draws from the gamma distribution of shape a by the method of G.
// Marsaglia and W. W. Tsang, ACM Trans. Math. Softw. 26, 363 (2000).
func gamma(a float64, r *rand.Rand) float64 {
	if a < 1 {
		return gamma(a+1, r) * math.Pow(1-r.Float64(), 1/a)
	}
	d := a - 1.0/3
	c := 1 / math.Sqrt(9*d)
	for {
		x := r.NormFloat64()
		v := 1 + c*x
		if v <= 0 {
			continue
		}
		v = v * v * v
		if u := 1 - r.Float64(); math.Log(u) < 0.5*x*x+d-d*v+d*math.Log(v) {
			return d * v
		}
	}
}

// adapt draws batches until twice the standard deviation of the batch averages
// is below the tolerance for mean, standard uncertainty and interval ends of
// every output (JCGM 101:2008, 7.9.4).
func (s *sampler) adapt(batch int, tolerance []float64) bool {
	n := len(s.outputs)
	stats := make([][4][]float64, n)
	for s.drawn+batch <= s.d.most {
		before := len(s.values[0])
		s.draw(batch)
		if s.halted {
			return false
		}
		if len(s.values[0])-before < batch/2 {
			return false // most draws are not finite: the report says so
		}
		stable := s.drawn >= 2*batch
		for i := range n {
			part := append([]float64(nil), s.values[i][before:]...)
			mean, u := meanAndDeviation(part)
			lo, hi := interval(part, s.d.coverage)
			for k, v := range [4]float64{mean, u, lo, hi} {
				stats[i][k] = append(stats[i][k], v)
			}
			_, all := meanAndDeviation(s.values[i])
			tolerance[i] = toleranceOf(all, s.d.digits)
			for k := range stats[i] {
				_, sd := meanAndDeviation(stats[i][k])
				if h := float64(len(stats[i][k])); h < 2 || 2*sd/math.Sqrt(h) >= tolerance[i] && all > 0 {
					stable = false
				}
			}
		}
		if stable {
			return true
		}
	}
	return false
}

// toleranceOf returns half a unit of the last of n significant digits of u.
func toleranceOf(u float64, n int) float64 {
	if u == 0 {
		return 0
	}
	_, exp := scientific(u, n)
	return 0.5 * math.Pow10(exp-n+1)
}

func meanAndDeviation(x []float64) (mean, sd float64) {
	if len(x) == 0 {
		return 0, 0
	}
	for _, v := range x {
		mean += v
	}
	mean /= float64(len(x))
	var s, c float64
	for _, v := range x {
		d := v - mean
		s += float64(d * d)
		c += d
	}
	n := float64(len(x))
	if n > 1 {
		sd = math.Sqrt(max(0, s-c*c/n) / (n - 1))
	}
	return mean, sd
}

// joint makes the report.
func (s *sampler) joint(qs []Quantity, stable bool, tolerance []float64) (*Joint, error) {
	n := len(s.values[0])
	if n < 2 {
		return nil, &statmech.DomainError{Func: "uncertain.MonteCarlo", Arg: "draws", Value: fmt.Sprintf("%d of %d finite", n, s.drawn), Want: "a computation that is finite for most values of its inputs"}
	}
	j := &Joint{Covariance: make([][]float64, len(qs))}
	means := make([]float64, len(qs))
	for i, q := range qs {
		mean, u := meanAndDeviation(s.values[i])
		means[i] = mean
		sim := &Simulation{Quantity: q, Mean: mean, U: u, Draws: s.drawn, NonFinite: s.bad, Seed: s.d.seed, Stable: stable,
			Tolerance: tolerance[i], Coverage: s.d.coverage, values: s.values[i]}
		sim.judge()
		j.Simulations = append(j.Simulations, sim)
	}
	for a := range qs {
		j.Covariance[a] = make([]float64, len(qs))
		for b := 0; b <= a; b++ {
			var c float64
			for k := range s.values[a] {
				c += float64((s.values[a][k] - means[a]) * (s.values[b][k] - means[b]))
			}
			c /= float64(n - 1)
			j.Covariance[a][b], j.Covariance[b][a] = c, c
		}
	}
	return j, nil
}

// judge compares with the first order (JCGM 101:2008, clause 8) and warns.
func (s *Simulation) judge() {
	warn := func(format string, args ...any) { s.Warnings = append(s.Warnings, fmt.Sprintf(format, args...)) }
	if s.NonFinite > 0 {
		warn("%d of %d draws gave no finite value and were left out", s.NonFinite, s.Draws)
	}
	if !s.Stable {
		warn("not stable to the digits asked for after %d draws", s.Draws)
	}
	u := s.Quantity.StandardUncertainty()
	delta := max(toleranceOf(s.U, 2), 3*s.U/math.Sqrt(float64(s.Draws)))
	if math.Abs(u-s.U) > max(delta, 0.05*s.U) || math.Abs(s.Quantity.Value()-s.Mean) > max(delta, 0.1*s.U) {
		warn("the first order is not enough: it gives %.4g with u = %.2g, the draws %.4g with u = %.2g", s.Quantity.Value(), u, s.Mean, s.U)
	}
}
