package calorimetry

import (
	"fmt"
	"math"
	"math/rand/v2"
	"strings"
	"testing"

	"levelsum/statmech/data"
	"levelsum/statmech/fit"
	"levelsum/statmech/unit"
)

// TestAluminiumLead: entropies at 298.15 K within the CODATA key values (Cox,
// Wagman & Medvedev 1989: Al 28.30 ± 0.10, Pb 64.80 ± 0.30, both about k = 2)
// combined with the 1 % that the tables' points may be wrong in common. The
// lowest points alone give the extrapolation.
func TestAluminiumLead(t *testing.T) {
	for _, test := range []struct {
		file       string
		terms      Terms
		T          unit.Temperature
		key, u     float64
		numerical  float64 // of independent integrations
		difference float64
	}{
		{"corruccini-gniewek-1960/aluminium.csv", Terms{Linear: true, UpTo: 20}, 298.15, 28.30, 0.05, 28.304, 0.01},
		{"lead-textbook/lead.csv", Terms{UpTo: 15}, 298, 64.80, 0.15, 64.77, 0.7},
	} {
		run, err := data.Read("testdata/" + test.file)
		if err != nil {
			t.Fatal(err)
		}
		if run, err = run.AsCommon(); err != nil {
			t.Fatal(err)
		}
		low, err := LowTemperature(run, test.terms, fit.ScaledSigma)
		if err != nil {
			t.Fatal(err)
		}
		p, err := ThirdLaw(run, low)
		if err != nil {
			t.Fatal(err)
		}
		s := p.Entropy(test.T)
		t.Logf("%s: %v, common %.2g; below the first point %v; %v", test.file, s, s.CommonPart(), p.Entropy(p.First()), p.Notes(test.T))
		within(t, test.file, s.Value(), test.key, 2*math.Hypot(test.u, s.CommonPart()))
		within(t, test.file+", numerically", s.Value(), test.numerical, test.difference)
	}
}

// TestLowTemperature: γ, β and the Debye temperature come back from data that
// follow them, and the window stops where T⁵ sets in.
func TestLowTemperature(t *testing.T) {
	random := rand.New(rand.NewPCG(8, 1))
	const gamma, theta = 0.692e-3, 343.2
	beta := 12 * math.Pow(math.Pi, 4) * unit.GasConstant / (5 * theta * theta * theta)
	const delta = 3e-9 // 1 % of β at 13 K
	var ts, cs, us []float64
	for T := 1.0; T < 40; T *= 1.04 {
		c := gamma*T + beta*T*T*T + delta*math.Pow(T, 5)
		u := 0.002 * c
		ts, cs, us = append(ts, T), append(cs, c+u*random.NormFloat64()), append(us, u)
	}
	run := table(t, ts, cs, us)
	low, err := LowTemperature(run, Terms{Linear: true}, fit.AbsoluteSigma)
	if err != nil {
		t.Fatal(err)
	}
	if low.To < 5 || low.To > 14 {
		t.Errorf("window up to %v; T⁵ is 1 %% of βT³ at 13 K", low.To)
	}
	g, th := low.Result.Parameter(&low.Powers.Gamma), low.DebyeTemperature(1)
	within(t, "γ", g.Value(), gamma, 3*g.StandardUncertainty())
	within(t, "θ", th.Value(), theta, 4*th.StandardUncertainty())
	wide, err := LowTemperature(run, Terms{Linear: true, Fifth: true}, fit.AbsoluteSigma)
	if err != nil {
		t.Fatal(err)
	}
	d := wide.Result.Parameter(&wide.Powers.Delta)
	within(t, "δ", d.Value(), delta, 4*d.StandardUncertainty())
	if wide.To < 30 {
		t.Errorf("window with T⁵ up to %v", wide.To)
	}
	t.Logf("γT + βT³ to %v: γ %v, θ %v; with δT⁵ to %v: θ %v", low.To, g, th, wide.To, wide.DebyeTemperature(1))
	// ∫ Cp/T of the powers by quadrature.
	q := fromZero(func(t float64) float64 { return float64(wide.Powers.HeatCapacity(unit.Temperature(t))) / t }, 10)
	within(t, "S(10 K)", float64(wide.Powers.Entropy(10)), q, 1e-12)
}

// TestLowTemperatureCopper: the window that is found for copper (White &
// Collocott 1984, 1 %) gives the Debye temperature of calorimetry at the
// lowest temperatures, 344.3 K (D. L. Martin, Phys. Rev. B 8, 5357 (1973)).
func TestLowTemperatureCopper(t *testing.T) {
	run, err := data.Read("../../testdata/white-collocott-1984/copper.csv")
	if err != nil {
		t.Fatal(err)
	}
	low, err := LowTemperature(run, Terms{Linear: true}, fit.AbsoluteSigma)
	if err != nil {
		t.Fatal(err)
	}
	theta := low.DebyeTemperature(1)
	t.Logf("to %v: %v, %v", low.To, theta, low.Result.Parameter(&low.Powers.Gamma))
	within(t, "θ", theta.Value(), 344.3, 2*theta.StandardUncertainty())
	if low.To < 5 || low.To > 12 {
		t.Errorf("window to %v", low.To)
	}
}

// TestLowTemperatureCorrelation: a metal measured at 2 to 10 K with 1 % has
// r(γ, β) near -0.70 (independent computation; the number of points there is
// not recorded, and r hardly depends on it).
func TestLowTemperatureCorrelation(t *testing.T) {
	var ts, cs, us []float64
	for T := 2.0; T <= 10; T += 0.5 {
		c := 0.692e-3*T + 4.8e-5*T*T*T
		ts, cs, us = append(ts, T), append(cs, c), append(us, 0.01*c)
	}
	low, err := LowTemperature(table(t, ts, cs, us), Terms{Linear: true, UpTo: 10}, fit.AbsoluteSigma)
	if err != nil {
		t.Fatal(err)
	}
	within(t, "r(γ,β)", low.Result.Correlation()[0][1], -0.70, 0.05)
}

// TestSmoothNoise: noisy points in two overlapping series. The error of the
// entropy in units of its own standard uncertainty has mean 0 and standard
// deviation 1 over 200 noise sets.
func TestSmoothNoise(t *testing.T) {
	m := synthetic()
	random := rand.New(rand.NewPCG(5, 9))
	const exact = 62.88911
	var sum, squares float64
	const n = 200
	for range n {
		var ts, cs, us []float64
		for _, ratio := range []float64{1.05, 1.0413} {
			for T := 5.0; T < 298.15; T *= ratio {
				c := float64(m.HeatCapacity(unit.Temperature(T)))
				u := 0.005 * c
				ts, cs, us = append(ts, T), append(cs, c+u*random.NormFloat64()), append(us, u)
			}
		}
		c := float64(m.HeatCapacity(298.15))
		ts, cs, us = append(ts, 298.15), append(cs, c*(1+0.005*random.NormFloat64())), append(us, 0.005*c)
		p, err := Smooth(table(t, ts, cs, us), nil)
		if err != nil {
			t.Fatal(err)
		}
		s := p.Entropy(298.15)
		z := (s.Value() - exact) / s.StandardUncertainty()
		sum += z
		squares += z * z
	}
	mean, sd := sum/n, math.Sqrt(squares/n-sum*sum/n/n)
	t.Logf("error of S over its u: mean %.2f, standard deviation %.2f", mean, sd)
	within(t, "mean", mean, 0, 3/math.Sqrt(n))
	within(t, "standard deviation", sd, 1, 0.15)
}

// TestSmoothExact: without noise the smoothed entropy is that of the solid.
func TestSmoothExact(t *testing.T) {
	m := synthetic()
	var ts, cs, us []float64
	for T := 5.0; T < 298.15; T *= 1.02 {
		c := float64(m.HeatCapacity(unit.Temperature(T)))
		ts, cs, us = append(ts, T), append(cs, c), append(us, 0.01*c)
	}
	ts, cs, us = append(ts, 298.15), append(cs, float64(m.HeatCapacity(298.15))), append(us, 0.5)
	cs[100] *= 1.2
	p, err := Smooth(table(t, ts, cs, us), nil)
	if err != nil {
		t.Fatal(err)
	}
	if all := strings.Join(p.Warnings, "\n"); !strings.Contains(all, "the point at 36.22") {
		t.Errorf("the outlier is not named in\n%s", all)
	}
	cs[100] /= 1.2
	if p, err = Smooth(table(t, ts, cs, us), nil); err != nil {
		t.Fatal(err)
	}
	within(t, "S", p.Entropy(298.15).Value(), 62.88911, 2e-3)
	for _, d := range p.Deviations() {
		if math.Abs(d.Percent) > 0.3 {
			t.Errorf("deviation %.2f %% at %g K", d.Percent, d.T)
		}
	}
}

// TestTransition: two phases and a transition between them; the entropy of
// transition is ΔH/T, and the table's own identities hold.
func TestTransition(t *testing.T) {
	m := synthetic()
	var ts, cs, us []float64
	for T := 5.0; T < 320; T *= 1.04 {
		c := float64(m.HeatCapacity(unit.Temperature(T)))
		if T > 120 {
			c *= 1.1
		}
		ts, cs, us = append(ts, T), append(cs, c), append(us, 0.002*c)
	}
	run := table(t, ts, cs, us)
	melt := Transition{Name: "α-β", T: 120, UT: 0.01, Enthalpy: 1500, U: 2}
	p, err := ThirdLaw(run, nil, melt)
	if err != nil {
		t.Fatal(err)
	}
	end := p.Last()
	want := m.EntropyIncrement(5, 120) + 1.1*m.EntropyIncrement(120, end) + 1500.0/120
	within(t, "S", p.Entropy(end).Value(), float64(want), 2e-3)
	h := m.EnthalpyIncrement(5, 120) + 1.1*m.EnthalpyIncrement(120, end) + 1500
	within(t, "H", p.Enthalpy(end).Value(), float64(h), 0.3)
	s := melt.Entropy()
	within(t, "ΔS", s.Value(), 12.5, 1e-12)
	within(t, "u(ΔS)", s.StandardUncertainty(), 12.5*math.Hypot(2.0/1500, 0.01/120), 1e-9)
	within(t, "S at the transition is that of the phase below", p.Entropy(120).Value(), float64(m.EntropyIncrement(5, 120)), 1e-3)
	// The parts add to the whole, and G = H - TS.
	var sum float64
	for _, c := range p.Contributions(end) {
		sum += c.Entropy.Value()
	}
	within(t, "sum of contributions", sum, p.Entropy(end).Value(), 1e-12)
	r := p.RoundTable()
	for i, T := range r.T {
		g := r.Entropy[i].Value() - r.Enthalpy[i].Value()/float64(T)
		within(t, "-(G-H)/T", r.GibbsFunction[i].Value(), g, 1e-12)
	}
	if text := r.View().Data["text/plain"].(string); !strings.Contains(text, "298.15") || !strings.Contains(text, "counted from 5 K") {
		t.Errorf("round table\n%s", text)
	}
	// The transition's place does not change the entropy by more than what the
	// heat capacities differ by.
	moved := melt
	moved.T, moved.Enthalpy = 121, 1500+unit.MolarEnergy(0.1*float64(m.HeatCapacity(120)))
	if p, err = ThirdLaw(run, nil, moved); err != nil {
		t.Fatal(err)
	}
	within(t, "S with another place of the transition", p.Entropy(end).Value(), float64(want), 0.15)
	// A path that ends with vaporisation.
	boil := Transition{Name: "vaporisation", T: 330, Enthalpy: 30000}
	if p, err = ThirdLaw(run, nil, melt, boil); err != nil {
		t.Fatal(err)
	}
	if s := p.Entropy(330).Value() - p.Entropy(329.9).Value(); s < 30000.0/330 || s > 30000.0/330+0.1 {
		t.Errorf("vaporisation adds %g", s)
	}
	if all := strings.Join(p.Notes(330), "\n"); !strings.Contains(all, "carried on from its last point") {
		t.Errorf("notes\n%s", all)
	}
}

// TestPhases: a column "phase" must agree with the transitions given.
func TestPhases(t *testing.T) {
	read := func(rows string) *data.Table {
		run, err := data.Parse("x.csv", []byte("T / K, Cp / (J K-1 mol-1), phase\n"+rows))
		if err != nil {
			t.Fatal(err)
		}
		return run
	}
	run := read("10, 1, a\n20, 2, a\n30, 3, a\n30, 4, b\n40, 5, b\n50, 6, b\n")
	p, err := ThirdLaw(run, nil, Transition{Name: "a-b", T: 30, Enthalpy: 100})
	if err != nil {
		t.Fatal(err)
	}
	if c := p.Contributions(50); len(c) != 3 || c[0].Name != "a" || c[2].Name != "b" {
		t.Errorf("contributions %v", c)
	}
	if _, err := ThirdLaw(run, nil); err == nil || !strings.Contains(err.Error(), `phase "b", the rows before it of "a", and no transition`) {
		t.Errorf("no transition: %v", err)
	}
}

// TestLargeExtrapolation: more than 2 % of the entropy below the first point
// is pointed at.
func TestLargeExtrapolation(t *testing.T) {
	run, err := data.Read("testdata/lead-textbook/lead.csv")
	if err != nil {
		t.Fatal(err)
	}
	low, err := LowTemperature(run, Terms{UpTo: 15}, fit.ScaledSigma)
	if err != nil {
		t.Fatal(err)
	}
	p, err := ThirdLaw(run, low)
	if err != nil {
		t.Fatal(err)
	}
	if all := strings.Join(p.Notes(25), "\n"); !strings.Contains(all, "of the entropy lies below the first point, 10 K") {
		t.Errorf("notes %q", all)
	}
}

// TestTransitionFile reads the transition of nitrogen (54.71 cal/mol, Giauque
// & Clayton 1933, from memory) from a file.
func TestTransitionFile(t *testing.T) {
	const head = "name, kind, T / K, u(T) / K, dH / (J mol-1), u(dH) / (J mol-1)\n"
	run, err := data.Parse("transitions.csv", []byte(head+"alpha-beta, first-order, 35.61, 0.01, 228.9, 0.5\n"))
	if err != nil {
		t.Fatal(err)
	}
	ts, err := Transitions(run)
	if err != nil || len(ts) != 1 {
		t.Fatal(ts, err)
	}
	s := ts[0].Entropy()
	within(t, "ΔS", s.Value(), 228.9/35.61, 1e-12)
	within(t, "u(ΔS)", s.StandardUncertainty(), 228.9/35.61*math.Hypot(0.5/228.9, 0.01/35.61), 1e-9)
	if run, err = data.Parse("transitions.csv", []byte(head+"Tc, lambda, 35.61, 0.01, 228.9, 0.5\n")); err != nil {
		t.Fatal(err)
	}
	if _, err := Transitions(run); err == nil || !strings.Contains(err.Error(), "has no heat at one temperature") {
		t.Errorf("a lambda transition: %v", err)
	}
}

// TestGap: the share of the entropy in a gap is said.
func TestGap(t *testing.T) {
	m := synthetic()
	var ts, cs []float64
	for T := 20.0; T < 300; T += 4 {
		if T > 100 && T < 160 {
			continue
		}
		ts, cs = append(ts, T), append(cs, float64(m.HeatCapacity(unit.Temperature(T))))
	}
	p, err := ThirdLaw(table(t, ts, cs, nil), nil)
	if err != nil {
		t.Fatal(err)
	}
	want := 100 * float64(m.EntropyIncrement(100, 160)/m.EntropyIncrement(20, 296))
	if all := strings.Join(p.Notes(296), "\n"); !strings.Contains(all, fmt.Sprintf("%.1f %% of the entropy lies in a gap of the points between 100 K and 160 K", want)) {
		t.Errorf("notes %q, want a share of %.1f %%", all, want)
	}
}

// TestSmoothedPeak: a broad peak inside a phase that is smoothed does not pass
// unseen.
func TestSmoothedPeak(t *testing.T) {
	m := synthetic()
	random := rand.New(rand.NewPCG(4, 4))
	var ts, cs, us []float64
	for T := 20.0; T < 300; T *= 1.02 {
		c := float64(m.HeatCapacity(unit.Temperature(T)))
		if z := (T - 95) / 3; z < 0 {
			c *= 1 + 0.5*math.Exp(z) // a λ: slow rise, sudden fall
		}
		ts, cs, us = append(ts, T), append(cs, c*(1+0.002*random.NormFloat64())), append(us, 0.002*c)
	}
	p, err := Smooth(table(t, ts, cs, us), nil)
	if err != nil {
		t.Fatal(err)
	}
	if all := strings.Join(p.Warnings, "\n"); !strings.Contains(all, "deviate together: a transition hidden in the phase?") {
		t.Errorf("warnings\n%s", all)
	}
}

// TestNoUncertainty: a table without uncertainties gives an entropy without one,
// not one of 0; smoothing finds the scatter.
func TestNoUncertainty(t *testing.T) {
	m := synthetic()
	random := rand.New(rand.NewPCG(1, 7))
	var ts, cs []float64
	for T := 5.0; T < 300; T *= 1.02 {
		ts, cs = append(ts, T), append(cs, float64(m.HeatCapacity(unit.Temperature(T)))*(1+0.004*random.NormFloat64()))
	}
	run := table(t, ts, cs, nil)
	p, err := ThirdLaw(run, nil)
	if err != nil {
		t.Fatal(err)
	}
	if s := p.Entropy(290); !strings.Contains(s.Withheld(), "no uncertainties") {
		t.Errorf("S = %v", s)
	}
	p.RoundTable(50, 100).View()
	if p, err = Smooth(run, nil); err != nil {
		t.Fatal(err)
	}
	s := p.Entropy(290)
	// 0.4 % at steps of 2 %: u² = Σ (Cp Δln T · 0.004)².
	var u2 float64
	for _, c := range cs {
		u2 += math.Pow(0.004*c*math.Log(1.02), 2)
	}
	within(t, "u(S)", s.StandardUncertainty(), math.Sqrt(u2), 0.2*math.Sqrt(u2))
	if all := strings.Join(p.RoundTable(100).notes, "\n"); !strings.Contains(all, "was found from the deviations") {
		t.Errorf("notes %s", all)
	}
}
