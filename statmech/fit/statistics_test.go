package fit

import (
	"math"
	"math/rand/v2"
	"strings"
	"testing"

	"levelsum/statmech/data"
	"levelsum/statmech/solid"
	"levelsum/statmech/uncertain"
	"levelsum/statmech/unit"
)

// syntheticSolid is 3R × (Debye(250 K) + Einstein(550 K)) at T = 5 × 1.05^k,
// k = 0..83, with standard uncertainties of 0.5 %.
func syntheticSolid() (ts, cs, us []float64) {
	m := solid.Sum{&solid.Debye{Theta: 250, Modes: 3}, &solid.Einstein{Theta: 550, Modes: 3}}
	for k := range 84 {
		T := 5 * math.Pow(1.05, float64(k))
		c := float64(m.HeatCapacity(unit.Temperature(T)))
		ts, cs, us = append(ts, T), append(cs, c), append(us, 0.005*c)
	}
	return ts, cs, us
}

func newTable(t testing.TB, ts, cs, us []float64) *data.Table {
	t.Helper()
	var columns []data.Column
	for _, c := range []struct {
		symbol, unit string
		values       []float64
	}{{"T", "K", ts}, {"Cp", "J K-1 mol-1", cs}, {"u(Cp)", "J K-1 mol-1", us}} {
		if c.values == nil {
			continue
		}
		col, err := data.NewColumn(c.symbol, c.unit, c.values)
		if err != nil {
			t.Fatal(err)
		}
		columns = append(columns, col)
	}
	run, err := data.New("synthetic", nil, columns...)
	if err != nil {
		t.Fatal(err)
	}
	return run
}

type debyeEinstein struct {
	deb solid.Debye
	ein solid.Einstein
}

func (m *debyeEinstein) fit(t testing.TB, run *data.Table, opts ...Option) *Result {
	t.Helper()
	m.deb, m.ein = solid.Debye{Theta: 230, Modes: 2.7}, solid.Einstein{Theta: 500, Modes: 3.2}
	all := append([]Option{Vary(&m.deb.Modes, &m.deb.Theta, &m.ein.Modes, &m.ein.Theta)}, opts...)
	res, err := HeatCapacity(solid.Sum{&m.deb, &m.ein}, run, all...)
	if err != nil {
		t.Fatal(err)
	}
	return res
}

// TestCoverage: 1000 noise sets; the 95 per cent interval of each parameter
// covers the truth in 930 to 970 of them. An independent program found
// u(θ_D) = 0.32 K, u(θ_E) = 3.5 K, r(n_D, θ_D) = 0.98, and coverages 950, 943,
// 957, 950.
func TestCoverage(t *testing.T) {
	ts, truth, us := syntheticSolid()
	want := []float64{3, 250, 3, 550}
	var m debyeEinstein
	res := m.fit(t, newTable(t, ts, truth, us), AbsoluteSigma)
	for j, q := range res.Parameters() {
		within(t, q.Name(), q.Value(), want[j], 1e-9*want[j])
	}
	within(t, "u(θ_D)", res.Parameter(&m.deb.Theta).StandardUncertainty(), 0.32, 0.005)
	within(t, "u(θ_E)", res.Parameter(&m.ein.Theta).StandardUncertainty(), 3.5, 0.05)
	within(t, "r(n_D,θ_D)", res.Correlation()[0][1], 0.98, 0.005)
	if all := strings.Join(res.Warnings, "\n"); !strings.Contains(all, "correlated by 0.98") {
		t.Errorf("no warning of the correlation in\n%s", all)
	}
	for _, sigma := range []Sigma{AbsoluteSigma, ScaledSigma} {
		covered := make([]int, 4)
		random := rand.New(rand.NewPCG(20, 6))
		cs := make([]float64, len(truth))
		k := 1.959964
		if sigma == ScaledSigma {
			k = 1.990 // t-distribution with 80 degrees of freedom
		}
		for range 1000 {
			for i := range cs {
				cs[i] = truth[i] + us[i]*random.NormFloat64()
			}
			res := m.fit(t, newTable(t, ts, cs, us), sigma)
			for j, q := range res.Parameters() {
				if math.Abs(q.Value()-want[j]) <= k*q.StandardUncertainty() {
					covered[j]++
				}
			}
		}
		t.Logf("%v: %v of 1000", sigma, covered)
		for j, n := range covered {
			if n < 930 || n > 970 {
				t.Errorf("%v: parameter %d covered in %d of 1000, want 930 to 970", sigma, j+1, n)
			}
		}
	}
}

// TestDerivedEntropy: dropping the covariances of a Debye + Einstein fit makes
// u(S(298.15 K)) too large, by a factor of 4.7 in an independent computation.
func TestDerivedEntropy(t *testing.T) {
	ts, cs, us := syntheticSolid()
	var m debyeEinstein
	res := m.fit(t, newTable(t, ts, cs, us), AbsoluteSigma)
	s := res.Function(func() float64 { return float64(m.deb.Entropy(298.15) + m.ein.Entropy(298.15)) })
	var alone float64
	for _, c := range s.Budget().Inputs {
		alone += c.Part * c.Part
	}
	within(t, "ratio", math.Sqrt(alone)/s.StandardUncertainty(), 4.7, 0.1)
	two := res.Functions(func() []float64 { return []float64{float64(m.deb.Entropy(298.15)), float64(m.ein.Entropy(298.15))} })
	within(t, "u of the sum of two results", two[0].Plus(two[1]).StandardUncertainty(), s.StandardUncertainty(), 1e-6*s.StandardUncertainty())
	// The same by drawing: the covariance goes into Monte Carlo too.
	sim, err := uncertain.MonteCarlo(s, uncertain.Draws(4000))
	if err != nil {
		t.Fatal(err)
	}
	within(t, "u by Monte Carlo", sim.U, s.StandardUncertainty(), 4*s.StandardUncertainty()/math.Sqrt(8000))
	if float64(m.deb.Theta) != res.Parameter(&m.deb.Theta).Value() {
		t.Errorf("θ was left at %v", m.deb.Theta)
	}
}

// sliceOnly is a model that takes all temperatures at once.
type sliceOnly struct{ A, B float64 }

func (s *sliceOnly) HeatCapacities(ts []unit.Temperature) []unit.MolarEntropy {
	out := make([]unit.MolarEntropy, len(ts))
	for i, T := range ts {
		out[i] = unit.MolarEntropy(s.A + s.B*float64(T))
	}
	return out
}

// TestUserModel: a model of the user's own, by slices, named by its fields.
func TestUserModel(t *testing.T) {
	m := &sliceOnly{A: 1, B: 1}
	res, err := HeatCapacity(m, newTable(t, []float64{10, 20, 30, 40}, []float64{3.01, 4.98, 7.02, 8.99}, nil), Vary(&m.A, &m.B), ScaledSigma)
	if err != nil {
		t.Fatal(err)
	}
	if q := res.Parameter(&m.B); q.Name() != "sliceOnly.B" || math.Abs(q.Value()-0.2) > 0.01 {
		t.Errorf("%v %v", q.Name(), q)
	}
}

// TestStraightLine compares with the closed form of the weighted straight line
// (both standard uncertainties and the covariance), absolute and scaled.
func TestStraightLine(t *testing.T) {
	x := []float64{0, 1, 2.5, 4, 7}
	y := []float64{1.1, 2.9, 6.2, 8.7, 15.3}
	u := []float64{0.1, 0.2, 0.1, 0.3, 0.2}
	var s, sx, sy, sxx, sxy float64
	for i := range x {
		w := 1 / (u[i] * u[i])
		s, sx, sy, sxx, sxy = s+w, sx+w*x[i], sy+w*y[i], sxx+w*x[i]*x[i], sxy+w*x[i]*y[i]
	}
	d := s*sxx - sx*sx
	wantA, wantB := (sxx*sy-sx*sxy)/d, (s*sxy-sx*sy)/d
	var chi2 float64
	for i := range x {
		z := (y[i] - wantA - wantB*x[i]) / u[i]
		chi2 += z * z
	}
	for _, sigma := range []Sigma{AbsoluteSigma, ScaledSigma} {
		a, b := 0.3, 5.0
		res, err := Curve(func(x float64) float64 { return a + b*x }, x, y, u, Vary(&a, &b), Name(&a, "a"), sigma)
		if err != nil {
			t.Fatal(err)
		}
		f := 1.0
		if sigma == ScaledSigma {
			f = chi2 / 3
		}
		c := res.Covariance()
		within(t, "a", a, wantA, 1e-10*wantA)
		within(t, "b", b, wantB, 1e-10*wantB)
		within(t, "χ²", res.ChiSquared, chi2, 1e-10*chi2)
		within(t, "var a", c[0][0], f*sxx/d, 1e-10*f*sxx/d)
		within(t, "var b", c[1][1], f*s/d, 1e-10*f*s/d)
		within(t, "cov", c[0][1], -f*sx/d, 1e-10*f*sx/d)
		// The fitted line at 3 with the covariance, in closed form.
		want := math.Sqrt(f * (sxx - 2*3*sx + 9*s) / d)
		within(t, "u of the line at 3", res.At(3).StandardUncertainty(), want, 1e-8*want)
		within(t, "u of the line at 3, slice", res.StandardUncertainties([]float64{3})[0], want, 1e-8*want)
		inside := res.Function(func() float64 { return res.Curve().At(3) })
		within(t, "u of the line at 3, from inside", inside.StandardUncertainty(), want, 1e-8*want)
		var sum float64
		for _, h := range res.Leverage {
			sum += h
		}
		within(t, "sum of leverages", sum, 2, 1e-12)
		// The profile of a linear model is the parabola of the covariance (which
		// for the scaled case holds by the same factor).
		p, err := res.Profile(&b, 1)
		if err != nil {
			t.Fatal(err)
		}
		within(t, "profile, low", p.Lo, wantB-math.Sqrt(f*s/d), 1e-6)
		within(t, "profile, high", p.Hi, wantB+math.Sqrt(f*s/d), 1e-6)
		if !p.Symmetric() || a != wantA && math.Abs(a-wantA) > 1e-9 {
			t.Errorf("profile %v leaves a = %g", p, a)
		}
	}
}

// TestCalibrationLine is the thermometer calibration of JCGM 100:2008, H.3
// (readings and results from memory): intercept -0.1712(29), slope 0.00218(67),
// r = -0.930, s = 0.0035, and -0.1494 with u = 0.0041 predicted at 30 °C.
func TestCalibrationLine(t *testing.T) {
	temperature := []float64{21.521, 22.012, 22.512, 23.003, 23.507, 23.999, 24.513, 25.002, 25.503, 26.010, 26.511}
	correction := []float64{-0.171, -0.169, -0.166, -0.159, -0.164, -0.165, -0.156, -0.157, -0.159, -0.161, -0.160}
	var y1, y2 float64
	res, err := Curve(func(x float64) float64 { return y1 + y2*(x-20) }, temperature, correction, nil, Vary(&y1, &y2), ScaledSigma)
	if err != nil {
		t.Fatal(err)
	}
	within(t, "y1", y1, -0.1712, 0.00005)
	within(t, "u(y1)", res.Parameter(&y1).StandardUncertainty(), 0.0029, 0.00005)
	within(t, "y2", y2, 0.00218, 0.000005)
	within(t, "u(y2)", res.Parameter(&y2).StandardUncertainty(), 0.00067, 0.000005)
	within(t, "r", res.Correlation()[0][1], -0.930, 0.0005)
	within(t, "s", math.Sqrt(res.Ratio()), 0.0035, 0.00005)
	b := res.At(30)
	within(t, "b(30 °C)", b.Value(), -0.1494, 0.00005)
	within(t, "u", b.StandardUncertainty(), 0.0041, 0.00005)
}

// TestUncertainX: with the same relative errors everywhere, weights from
// uncertainties of x alone equal those of y = slope × u(x).
func TestUncertainX(t *testing.T) {
	x := []float64{1, 2, 3, 4, 5, 6}
	y := []float64{2.1, 3.9, 6.2, 7.8, 10.1, 11.9}
	ux := []float64{0.1, 0.2, 0.1, 0.2, 0.1, 0.2}
	a, b := 0.1, 1.0
	res, err := Curve(func(x float64) float64 { return a + b*x }, x, y, make([]float64, 6), Vary(&a, &b), XUncertainty(ux), AbsoluteSigma)
	if err != nil {
		t.Fatal(err)
	}
	uy := make([]float64, 6)
	for i := range uy {
		uy[i] = b * ux[i]
	}
	c, d := 0.1, 1.0
	ref, err := Curve(func(x float64) float64 { return c + d*x }, x, y, uy, Vary(&c, &d), AbsoluteSigma)
	if err != nil {
		t.Fatal(err)
	}
	within(t, "a", a, c, 1e-8)
	within(t, "b", b, d, 1e-8)
	within(t, "u(b)", res.Parameter(&b).StandardUncertainty(), ref.Parameter(&d).StandardUncertainty(), 1e-8)
}

// TestBootstrap: refits agree with the covariance of the fit, in parallel on
// copies of the model, and the same seed gives the same refits.
func TestBootstrap(t *testing.T) {
	ts, cs, us := syntheticSolid()
	var m debyeEinstein
	res := m.fit(t, newTable(t, ts, cs, us), AbsoluteSigma)
	b, err := res.Bootstrap(600, 11)
	if err != nil {
		t.Fatal(err)
	}
	if b.Serial || b.Failed != 0 || len(b.Values) != 600 {
		t.Errorf("serial %v, %d failed, %d refits", b.Serial, b.Failed, len(b.Values))
	}
	for j, q := range res.Parameters() {
		u := q.StandardUncertainty()
		within(t, q.Name()+": standard deviation of refits", b.StandardDeviation(j), u, 4*u/math.Sqrt(2*600))
		lo, hi := b.Interval(j, 0.95)
		within(t, q.Name()+": width of the interval", hi-lo, 2*1.96*u, 0.15*2*1.96*u)
	}
	if m.deb.Theta != unit.Temperature(res.Parameter(&m.deb.Theta).Value()) {
		t.Errorf("the model was left at θ = %v", m.deb.Theta)
	}
	again, err := res.Bootstrap(600, 11)
	if err != nil {
		t.Fatal(err)
	}
	for k := range b.Values {
		for j := range b.Values[k] {
			if b.Values[k][j] != again.Values[k][j] {
				t.Fatal("the same seed gives other refits")
			}
		}
	}
	// A closure cannot be copied: the refits run one after the other.
	a := 1.0
	line, err := Curve(func(x float64) float64 { return a * x }, []float64{1, 2, 3}, []float64{1.1, 1.9, 3.1}, nil, Vary(&a), ScaledSigma)
	if err != nil {
		t.Fatal(err)
	}
	if bs, err := line.Bootstrap(50, 1); err != nil || !bs.Serial {
		t.Errorf("%+v, %v", bs, err)
	}
}

// TestModelOrder: AICc picks the order of a polynomial among 1 to 5 in at least
// 90 of 100 data sets of 20 points at a signal-to-noise ratio of 50. (For many
// points AICc takes a superfluous term with probability 0.16, whatever the
// noise; its correction for few points makes that rarer.)
func TestModelOrder(t *testing.T) {
	right := 0
	var kept [][]*Result
	for seed := range 100 {
		random := rand.New(rand.NewPCG(uint64(seed), 5))
		var x, y []float64
		for i := range 20 {
			v := float64(i)/9.5 - 1
			x = append(x, v)
			y = append(y, 1+0.8*v-1.1*v*v+0.9*v*v*v+random.NormFloat64()/50)
		}
		var fits []*Result
		for order := 1; order <= 5; order++ {
			c := make([]float64, order+1)
			ptrs := make([]any, len(c))
			for i := range c {
				ptrs[i] = &c[i]
			}
			res, err := Curve(func(x float64) (s float64) {
				for i := len(c) - 1; i >= 0; i-- {
					s = s*x + c[i]
				}
				return s
			}, x, y, nil, Vary(ptrs...), ScaledSigma)
			if err != nil {
				t.Fatal(err)
			}
			fits = append(fits, res)
		}
		cmp, err := Compare(fits...)
		if err != nil {
			t.Fatal(err)
		}
		if b := cmp.Best(); b < 2 {
			t.Errorf("seed %d: order %d", seed, b+1)
		} else if b == 2 {
			right++
		}
		kept = append(kept, fits)
	}
	t.Logf("order 3 in %d of 100", right)
	if right < 90 {
		t.Errorf("the true order in %d of 100", right)
	}
	if _, err := Compare(kept[0][0], kept[1][0]); err == nil || !strings.Contains(err.Error(), "different data") {
		t.Errorf("comparing different data: %v", err)
	}
	f, p, err := FTest(kept[0][1], kept[0][2])
	if err != nil || p > 1e-10 || f < 100 {
		t.Errorf("F = %g, p = %g, %v for a needed term", f, p, err)
	}
	if _, p, err := FTest(kept[0][2], kept[0][3]); err != nil || p < 1e-3 {
		t.Errorf("p = %g, %v for a term that is not needed", p, err)
	}
	if _, _, err := FTest(kept[0][2], kept[0][1]); err == nil {
		t.Error("a larger model before the smaller one is accepted")
	}
}

func BenchmarkFit(b *testing.B) {
	m := solid.Sum{&solid.Electronic{Gamma: 7e-4}, &solid.Debye{Theta: 250, Modes: 3}, &solid.Einstein{Theta: 550, Modes: 3}}
	random := rand.New(rand.NewPCG(1, 1))
	var ts, cs, us []float64
	for i := range 500 {
		T := 2 + 0.6*float64(i)
		c := float64(m.HeatCapacity(unit.Temperature(T)))
		ts, us = append(ts, T), append(us, 0.005*c)
		cs = append(cs, c*(1+0.005*random.NormFloat64()))
	}
	run := newTable(b, ts, cs, us)
	fitted := func() *Result {
		el, deb, ein := solid.Electronic{Gamma: 5e-4}, solid.Debye{Theta: 230, Modes: 2.7}, solid.Einstein{Theta: 500, Modes: 3.2}
		res, err := HeatCapacity(solid.Sum{&el, &deb, &ein}, run, Vary(&el.Gamma, &deb.Theta, &deb.Modes, &ein.Theta, &ein.Modes), AbsoluteSigma)
		if err != nil {
			b.Fatal(err)
		}
		return res
	}
	b.Run("one", func(b *testing.B) {
		for b.Loop() {
			sink = fitted()
		}
		b.ReportMetric(float64(sink.Evaluations), "evaluations")
	})
	b.Run("bootstrap of 1000", func(b *testing.B) {
		res := fitted()
		for b.Loop() {
			if _, err := res.Bootstrap(1000, 1); err != nil {
				b.Fatal(err)
			}
		}
	})
}

var sink *Result

// TestFTail compares the upper tail of the F distribution for two added
// parameters with its closed form (1 + 2f/d)^(-d/2), far below the 1e-16 at
// which 1 less the distribution function ends.
func TestFTail(t *testing.T) {
	for _, c := range []struct{ f, d, want float64 }{
		{1, 4, 4. / 9},
		{100, 50, 3.3554432e-18}, // 5^-25
		{24, 48, 1. / (1 << 24)}, // 2^-24
		{450, 100, 1e-50},        // 10^-50
	} {
		if p := fTail(c.f, 2, c.d); math.Abs(p/c.want-1) > 1e-12 {
			t.Errorf("fTail(%g, 2, %g) = %g, want %g", c.f, c.d, p, c.want)
		}
	}
}
