package uncertain

import (
	"math"
	"strings"
	"testing"
)

func simulate(t testing.TB, q Quantity, opts ...Option) *Simulation {
	t.Helper()
	s, err := MonteCarlo(q, opts...)
	if err != nil {
		t.Fatal(err)
	}
	return s
}

// TestSumOfSquares: Y = X₁² + X₂² at x = 0, u = 0.005. The first order gives
// u = 0; the exact distribution is exponential with mean and standard
// deviation 2u² = 5.0e-5, shortest 95 % interval [0, -2u² ln 0.05] (JCGM
// 101:2008, 9.4, in units where 9.4.2.2 has 50e-6).
func TestSumOfSquares(t *testing.T) {
	x1, x2 := Measured(0, 0.005), Measured(0, 0.005)
	y := x1.Times(x1).Plus(x2.Power(2))
	if y.StandardUncertainty() != 0 {
		t.Errorf("first order gives %g", y.StandardUncertainty())
	}
	l := y.Linearity()
	if !strings.Contains(l.Reason, "use MonteCarlo") {
		t.Errorf("not flagged: %+v", l)
	}
	within(t, "second order", l.Second, 5.0e-5, 1e-12)
	within(t, "bias", l.Bias, 5.0e-5, 1e-12)
	s := simulate(t, y, Draws(1000000))
	within(t, "mean", s.Mean, 5.0e-5, 0.02*5.0e-5)
	within(t, "standard deviation", s.U, 5.0e-5, 0.02*5.0e-5)
	lo, hi := s.Shortest(0.95)
	within(t, "shortest interval, low", lo, 0, 1e-7)
	within(t, "shortest interval, high", hi, -5e-5*math.Log(0.05), 1.5e-6)
	if all := strings.Join(s.Warnings, "\n"); !strings.Contains(all, "first order is not enough") {
		t.Errorf("warnings %q", all)
	}
	if text := y.Budget().View().Data["text/plain"].(string); !strings.Contains(text, "first order is not enough") {
		t.Errorf("budget\n%s", text)
	}
}

// TestProductAtZero: X₁X₂ at 0 has no pure second derivatives, only the mixed one.
func TestProductAtZero(t *testing.T) {
	l := Measured(0, 0.3).Times(Measured(0, 0.2)).Linearity()
	within(t, "second order", l.Second, 0.06, 1e-15)
	if l.Reason == "" {
		t.Error("not flagged")
	}
	if r := Measured(5, 0.1).Times(Measured(7, 0.1)).Plus(Exp(Measured(0, 0.01))).Linearity().Reason; r != "" {
		t.Errorf("an ordinary computation is flagged: %s", r)
	}
}

// TestSumOfFour: JCGM 101:2008, 9.2.2 to 9.2.4.
func TestSumOfFour(t *testing.T) {
	normal := Sum(Measured(0, 1), Measured(0, 1), Measured(0, 1), Measured(0, 1))
	r := func(u float64) Quantity { return Rectangular(0, u*math.Sqrt(3)) }
	for _, test := range []struct {
		name      string
		q         Quantity
		u, end    float64
		tolerance float64
	}{
		{"9.2.2 normal", normal, 2, 2 * 1.959964, 0.02},
		{"9.2.3 rectangular", Sum(r(1), r(1), r(1), r(1)), 2, 2 * math.Sqrt(3) * (2 - math.Pow(0.6, 0.25)), 0.02},
		{"9.2.4 one dominant", Sum(r(1), r(1), r(1), r(10)), math.Sqrt(103), 17.0, 0.1},
	} {
		s := simulate(t, test.q, Draws(1000000))
		within(t, test.name+", mean", s.Mean, 0, 4*test.u/1000)
		within(t, test.name+", u", s.U, test.u, test.u*0.003)
		lo, hi := s.Interval(0.95)
		within(t, test.name+", low", lo, -test.end, test.tolerance)
		within(t, test.name+", high", hi, test.end, test.tolerance)
		if len(s.Warnings) != 0 {
			t.Errorf("%s: %q", test.name, s.Warnings)
		}
	}
}

// TestMassCalibration is JCGM 101:2008, 9.3 (model, inputs and results from
// memory): calibration of a weight by one of another density in air. The first
// order gives u = 0.0539 mg, with second-order terms 0.0750, the draws 0.0754.
func TestMassCalibration(t *testing.T) {
	mR, dR := Measured(100000, 0.050), Measured(1.234, 0.020)
	air, rhoW, rhoR := Rectangular(1.20, 0.10), Rectangular(8000, 1000), Rectangular(8000, 50)
	one := Exact(1)
	buoyancy := air.Shift(-1.2).Times(one.Over(rhoW).Minus(one.Over(rhoR)))
	dm := mR.Plus(dR).Times(buoyancy.Shift(1)).Shift(-100000)
	within(t, "first order", dm.Value(), 1.2340, 5e-5)
	within(t, "first order, u", dm.StandardUncertainty(), 0.0539, 5e-5)
	l := dm.Linearity()
	within(t, "with second order", math.Hypot(l.First, l.Second), 0.0750, 0.0005)
	if l.Reason == "" {
		t.Error("not flagged")
	}
	s := simulate(t, dm, Draws(1000000))
	within(t, "draws", s.Mean, 1.2341, 0.0002)
	within(t, "draws, u", s.U, 0.0754, 0.0002)
	lo, hi := s.Shortest(0.95)
	within(t, "shortest interval, low", lo, 1.0834, 0.004)
	within(t, "shortest interval, high", hi, 1.3825, 0.004)
	if all := strings.Join(s.Warnings, ""); !strings.Contains(all, "first order is not enough") {
		t.Errorf("warnings %q", all)
	}
}

func TestAdaptive(t *testing.T) {
	q := Measured(10, 1).Plus(Rectangular(0, 1))
	s := simulate(t, q)
	if !s.Stable || s.Draws < 20000 || s.Seed != 1 {
		t.Errorf("%d draws, stable %v, seed %d", s.Draws, s.Stable, s.Seed)
	}
	within(t, "tolerance", s.Tolerance, 0.05, 1e-12) // u = 1.2, two digits
	want := math.Sqrt(1 + 1.0/3)
	within(t, "u", s.U, want, 0.05)
	fine := simulate(t, q, Digits(3))
	if !fine.Stable || fine.Draws <= s.Draws {
		t.Errorf("%d draws for three digits, %d for two", fine.Draws, s.Draws)
	}
	within(t, "u to three digits", fine.U, want, 0.005)
	few := simulate(t, q, Digits(4), MostDraws(40000))
	if few.Stable || !strings.Contains(strings.Join(few.Warnings, ""), "not stable") {
		t.Errorf("stable %v, %q after %d draws", few.Stable, few.Warnings, few.Draws)
	}
}

// TestSeed: same seed same numbers, also through the parallel path; another
// seed others.
func TestSeed(t *testing.T) {
	q := Exp(Measured(0, 0.1)).Times(Estimated(3, 0.2, 8))
	a, b, c := simulate(t, q, Seed(7), Draws(5000)), simulate(t, q, Seed(7), Draws(5000)), simulate(t, q, Seed(8), Draws(5000))
	f := Function(func(x []float64) float64 { return x[0] }, q) // runs on one processor
	d := simulate(t, f, Seed(7), Draws(5000))
	for i, v := range a.Values() {
		if b.Values()[i] != v || d.Values()[i] != v {
			t.Fatalf("draw %d: %g, %g, %g", i, v, b.Values()[i], d.Values()[i])
		}
	}
	if c.Mean == a.Mean {
		t.Error("another seed gives the same mean")
	}
}

// TestShapes: standard deviations of the draws equal the standard uncertainties
// (JCGM 101:2008, 6.4; the t-distribution has √(ν/(ν-2)) times it).
func TestShapes(t *testing.T) {
	for _, test := range []struct {
		name string
		q    Quantity
		u    float64
	}{
		{"rectangular", Rectangular(2, 3), 3 / math.Sqrt(3)},
		{"triangular", Triangular(2, 3), 3 / math.Sqrt(6)},
		{"arc sine", Oscillating(2, 3), 3 / math.Sqrt2},
		{"t", Estimated(2, 1, 10), math.Sqrt(10.0 / 8)},
	} {
		s := simulate(t, test.q, Draws(400000))
		within(t, test.name, s.U, test.u, 0.005*test.u)
		within(t, test.name+", mean", s.Mean, 2, 0.01)
		if test.name != "t" {
			within(t, test.name+", first order", test.q.StandardUncertainty(), test.u, 1e-15)
		}
	}
}

// TestJoint: the correlation of H.2 by drawing.
func TestJoint(t *testing.T) {
	q, err := Correlated([]float64{5, 0.02, 1}, [][]float64{{1e-5, -1e-8, 0}, {-1e-8, 1e-10, 0}, {0, 0, 1e-6}})
	if err != nil {
		t.Fatal(err)
	}
	R, X := q[0].Over(q[1]).Times(Cos(q[2])), q[0].Over(q[1]).Times(Sin(q[2]))
	j, err := MonteCarloJoint([]Quantity{R, X}, Draws(200000))
	if err != nil {
		t.Fatal(err)
	}
	within(t, "r(R,X)", j.Correlation(0, 1), Correlation(R, X), 0.006)
	within(t, "u(R)", j.Simulations[0].U, R.StandardUncertainty(), 0.01*R.StandardUncertainty())
	within(t, "covariance", j.Covariance[0][1], Covariance(R, X), 4*R.StandardUncertainty()*X.StandardUncertainty()/math.Sqrt(200000))
}

// TestFunctions: several results of one computation keep their correlation, to
// first order and in the draws, and cost one call each time.
func TestFunctions(t *testing.T) {
	a, b := Measured(5, 0.1), Measured(2, 0.05)
	calls := 0
	qs := Functions(func(x []float64) []float64 { calls++; return []float64{x[0] + x[1], x[0] * x[1], x[0]} }, a, b)
	if len(qs) != 3 || calls != 5 {
		t.Fatalf("%d results, %d calls", len(qs), calls)
	}
	within(t, "product", qs[1].Value(), 10, 0)
	within(t, "u(product)", qs[1].StandardUncertainty(), a.Times(b).StandardUncertainty(), 1e-9)
	within(t, "r(sum, product)", Correlation(qs[0], qs[1]), Correlation(a.Plus(b), a.Times(b)), 1e-9)
	within(t, "third result less its input", qs[2].Minus(a).StandardUncertainty(), 0, 1e-10)
	calls = 0
	j, err := MonteCarloJoint(qs, Draws(50000))
	if err != nil {
		t.Fatal(err)
	}
	if calls != 50000 {
		t.Errorf("%d calls for 50000 draws", calls)
	}
	within(t, "r(sum, product) in the draws", j.Correlation(0, 1), Correlation(qs[0], qs[1]), 0.006)
	within(t, "u(product) in the draws", j.Simulations[1].U, qs[1].StandardUncertainty(), 0.01*qs[1].StandardUncertainty())
}

func TestNonFinite(t *testing.T) {
	s := simulate(t, Log(Measured(1, 0.5)), Draws(100000))
	share := float64(s.NonFinite) / 100000
	within(t, "share of logarithms of negative numbers", share, 0.02275, 0.002) // Φ(-2)
	if all := strings.Join(s.Warnings, "\n"); !strings.Contains(all, "gave no finite value") {
		t.Errorf("warnings %q", all)
	}
	if _, err := MonteCarlo(Measured(1, 1).Withhold("for a reason")); err == nil || !strings.Contains(err.Error(), "for a reason") {
		t.Errorf("withheld: %v", err)
	}
}

// TestCoverageOfIntervals: 95 % intervals of simulated experiments cover.
func TestCoverageOfIntervals(t *testing.T) {
	s := simulate(t, Measured(3, 0.2).Plus(Measured(1, 0.1)), Draws(20000))
	lo, hi := s.Interval(0.95)
	inside := 0
	check := simulate(t, Measured(4, math.Hypot(0.2, 0.1)), Draws(20000), Seed(99))
	for _, v := range check.Values() {
		if v >= lo && v <= hi {
			inside++
		}
	}
	within(t, "coverage", float64(inside)/20000, 0.95, 0.006)
}

// BenchmarkPropagation: 1e6 draws of 11 inputs, mean, deviation and the ends
// of the 95 % interval: entropy of a diatomic gas from its constants.
func BenchmarkPropagation(b *testing.B) {
	in := make([]Quantity, 11)
	for i := range in {
		in[i] = Measured(1+0.1*float64(i), 0.01)
	}
	prod := in[0]
	for _, q := range in[1:6] {
		prod = prod.Times(q)
	}
	q := Log(prod).Scale(8.314462618)
	for _, x := range in[6:] {
		q = q.Plus(x.Over(Exp(x).Shift(-1)))
	}
	for b.Loop() {
		s, err := MonteCarlo(q, Draws(1000000))
		if err != nil {
			b.Fatal(err)
		}
		v := s.Values()
		lo, hi := interval(v, 0.95)
		sink = lo + hi
	}
}

var sink float64
