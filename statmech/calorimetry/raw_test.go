package calorimetry

import (
	"math"
	"math/rand/v2"
	"strings"
	"testing"

	"levelsum/statmech/data"
	"levelsum/statmech/fit"
	"levelsum/statmech/unit"
)

func columns(t testing.TB, notes []data.Note, cs ...any) *data.Table {
	t.Helper()
	var cols []data.Column
	for i := 0; i < len(cs); i += 3 {
		c, err := data.NewColumn(cs[i].(string), cs[i+1].(string), cs[i+2].([]float64))
		if err != nil {
			t.Fatal(err)
		}
		cols = append(cols, c)
	}
	run, err := data.New("made-up", notes, cols...)
	if err != nil {
		t.Fatal(err)
	}
	return run
}

// TestAddenda: a holder of known heat capacity and 0.05 mol of sample.
func TestAddenda(t *testing.T) {
	m := synthetic()
	holder := func(T float64) float64 { return 4 * T * T / (T*T + 150*150) }
	var at, ac, au, ts, cs, us []float64
	for T := 4.0; T < 320; T *= 1.05 {
		at, ac, au = append(at, T), append(ac, holder(T)), append(au, 0.001*holder(T))
	}
	for T := 5.0; T < 300; T *= 1.09 {
		total := holder(T) + 0.05*float64(m.HeatCapacity(unit.Temperature(T)))
		ts, cs, us = append(ts, T), append(cs, total), append(us, 0.002*total)
	}
	addenda := columns(t, nil, "T", "K", at, "C", "J K-1", ac, "u(C)", "J K-1", au)
	total := columns(t, nil, "T", "K", ts, "C", "J K-1", cs, "u(C)", "J K-1", us)
	run, err := MolarFromTotal(total, addenda, 0.05, 0.0001)
	if err != nil {
		t.Fatal(err)
	}
	for i, T := range ts {
		want := float64(m.HeatCapacity(unit.Temperature(T)))
		within(t, "Cp", float64(run.Cp[i]), want, 2e-4*want+2e-6)
		within(t, "u_r", float64(run.URandom[i]), 0.002*cs[i]/0.05, 1e-12)
		// One addenda point's error at a time, so at most 0.1 % of the holder, and 1e-4 of the amount.
		most := math.Hypot(0.001*holder(T)/0.05*1.02, 1e-4*want)
		if u := float64(run.UCommon[i]); u > most || u < 0.4*most {
			t.Errorf("u_c at %g K %g, want at most %g", T, u, most)
		}
	}
	if _, err := MolarFromTotal(total, columns(t, nil, "T", "K", []float64{10, 20}, "C", "J K-1", []float64{1, 2}), 0.05, 0); err == nil || !strings.Contains(err.Error(), "row 1 of made-up: 5 K is outside the addenda, 10 K to 20 K") {
		t.Errorf("short addenda: %v", err)
	}
	if _, err := MolarFromTotal(addenda, addenda, 0.05, 0); err == nil || !strings.Contains(err.Error(), "is not above the addenda") {
		t.Errorf("no sample: %v", err)
	}
}

// TestCurvature: means over steps of 10 % in T of a heat capacity are corrected
// to its value in the middle.
func TestCurvature(t *testing.T) {
	m := synthetic()
	var ts, cs, ds []float64
	for T := 6.0; T < 200; T *= 1.05 {
		d := 0.1 * T
		h := m.EnthalpyIncrement(unit.Temperature(T-d/2), unit.Temperature(T+d/2))
		ts, cs, ds = append(ts, T), append(cs, float64(h)/d), append(ds, d)
	}
	run := columns(t, nil, "T", "K", ts, "Cp", "J K-1 mol-1", cs, "dT", "K", ds)
	out, largest, err := CorrectCurvature(run)
	if err != nil {
		t.Fatal(err)
	}
	var before, after float64
	for i, T := range ts {
		want := float64(m.HeatCapacity(unit.Temperature(T)))
		before = max(before, math.Abs(cs[i]/want-1))
		after = max(after, math.Abs(float64(out.Cp[i])/want-1))
	}
	// T³ over a step of 10 %: 3·2·0.01/24 = 0.25 %.
	within(t, "error before", before, 0.0025, 0.0003)
	within(t, "largest correction / %", largest, 0.25, 0.04)
	if after > 0.0004 {
		t.Errorf("error after the correction %.2g, before %.2g", after, before)
	}
	wide := append([]float64(nil), ds...)
	for i := range wide {
		wide[i] *= 6
	}
	if _, _, err := CorrectCurvature(columns(t, nil, "T", "K", ts, "Cp", "J K-1 mol-1", cs, "dT", "K", wide)); err == nil || !strings.Contains(err.Error(), "too wide for a curvature correction") {
		t.Errorf("steps of 60 %%: %v", err)
	}
}

// TestReference: a run 0.4 % too high against certified values.
func TestReference(t *testing.T) {
	run, err := data.Read("../../testdata/white-collocott-1984/copper.csv")
	if err != nil {
		t.Fatal(err)
	}
	p, err := ThirdLaw(run, nil)
	if err != nil {
		t.Fatal(err)
	}
	var ts, cs, us []float64
	for T := 21.0; T < 290; T += 11 {
		c := 1.004 * p.HeatCapacity(unit.Temperature(T)).Value()
		ts, cs, us = append(ts, T), append(cs, c), append(us, 0.0005*c)
	}
	mine := columns(t, nil, "T", "K", ts, "Cp", "J K-1 mol-1", cs, "u_r(Cp)", "J K-1 mol-1", us)
	tiny := make([]float64, run.Len())
	for i := range tiny {
		tiny[i] = 1e-12
	}
	exact := columns(t, nil, "T", "K", plain(run.T), "Cp", "J K-1 mol-1", plain(run.Cp), "u(Cp)", "J K-1 mol-1", tiny)
	r, err := CompareReference(mine, exact)
	if err != nil {
		t.Fatal(err)
	}
	within(t, "mean deviation / %", r.Mean.Value(), 0.4, 1e-9)
	within(t, "u", r.Mean.StandardUncertainty(), 0.05*1.004/math.Sqrt(float64(len(ts))), 1e-6)
	if r.Outside != len(ts) || !strings.Contains(r.String(), "more than chance allows") {
		t.Errorf("%v", r)
	}
	if r, err = CompareReference(mine, run); err != nil || r.Outside != 0 {
		t.Errorf("with the table's own uncertainty: %v, %v", r, err)
	}
}

func plain[Q ~float64](qs []Q) []float64 {
	out := make([]float64, len(qs))
	for i, q := range qs {
		out[i] = float64(q)
	}
	return out
}

// TestExcess: a Gaussian anomaly of known area on a lattice baseline.
func TestExcess(t *testing.T) {
	m := synthetic()
	const area, width, centre = 200.0, 1.5, 90.0
	var ts, cs, us []float64
	for T := 40.0; T <= 140; T += 0.5 {
		z := (T - centre) / width
		c := float64(m.HeatCapacity(unit.Temperature(T))) + area/(width*math.Sqrt(2*math.Pi))*math.Exp(-z*z/2)
		ts, cs, us = append(ts, T), append(cs, c), append(us, 0.05)
	}
	run := columns(t, nil, "T", "K", ts, "Cp", "J K-1 mol-1", cs, "u_r(Cp)", "J K-1 mol-1", us)
	exact, err := ExcessOver(run, 80, 100, m.HeatCapacity)
	if err != nil {
		t.Fatal(err)
	}
	within(t, "ΔH", exact.Enthalpy.Value(), area, 0.02)
	pulses, err := ExcessOver(run.WithNote("method", "relaxation"), 80, 100, m.HeatCapacity)
	if err != nil || len(exact.Warnings) != 0 || len(pulses.Warnings) != 1 || !strings.Contains(pulses.Warnings[0], "underestimates a sharp peak") {
		t.Errorf("%v, warnings %q and %q", err, exact.Warnings, pulses.Warnings)
	}
	within(t, "ΔS", exact.Entropy.Value(), area/centre*(1+width*width/(centre*centre)), 2e-3)
	within(t, "peak", float64(exact.Peak), centre, 0)
	within(t, "u(ΔH)", exact.Enthalpy.StandardUncertainty(), 0.05*0.5*math.Sqrt(40), 0.01)
	base, err := Baseline(run, 80, 100)
	if err != nil {
		t.Fatal(err)
	}
	drawn, err := ExcessOver(run, 80, 100, base)
	if err != nil {
		t.Fatal(err)
	}
	within(t, "ΔH over the drawn baseline", drawn.Enthalpy.Value(), area, 0.2)
	line := func(T unit.Temperature) unit.MolarEntropy {
		a, b := m.HeatCapacity(80), m.HeatCapacity(100)
		return a + (b-a)*unit.MolarEntropy((float64(T)-80)/20)
	}
	straight, err := ExcessOver(run, 80, 100, line)
	if err != nil {
		t.Fatal(err)
	}
	_, h, err := BaselineSpread(exact, drawn, straight)
	if err != nil {
		t.Fatal(err)
	}
	spread := math.Abs(straight.Enthalpy.Value() - exact.Enthalpy.Value())
	if u := h.StandardUncertainty(); u < spread/2/math.Sqrt(3)*0.9 || u > 0.3+spread {
		t.Errorf("u(ΔH) = %g with baselines that differ by %g", u, spread)
	}
	if _, err := ExcessOver(run, 20, 100, base); err == nil || !strings.Contains(err.Error(), "is not covered by the points") {
		t.Errorf("outside: %v", err)
	}
}

// TestFictiveTemperature: a heat capacity that steps from the glass to the
// liquid at 250 K has the fictive temperature 250 K.
func TestFictiveTemperature(t *testing.T) {
	glass := func(T unit.Temperature) unit.MolarEntropy { return unit.MolarEntropy(40 + 0.1*float64(T)) }
	liquid := func(T unit.Temperature) unit.MolarEntropy { return unit.MolarEntropy(80 + 0.12*float64(T)) }
	var ts, cs []float64
	for T := 200.25; T < 300; T += 0.5 {
		c := glass(unit.Temperature(T))
		if T > 250 {
			c = liquid(unit.Temperature(T))
		}
		ts, cs = append(ts, T), append(cs, float64(c))
	}
	run := columns(t, nil, "T", "K", ts, "Cp", "J K-1 mol-1", cs)
	Tf, err := FictiveTemperature(run, 210, 290, glass, liquid)
	if err != nil {
		t.Fatal(err)
	}
	within(t, "T_f", float64(Tf), 250, 0.01)
}

// TestDrop: enthalpies from 273.15 K and heat capacities of one substance with
// Cp = 24 + 6τ - 2τ⁻² come back together, and H is 0 at the reference.
func TestDrop(t *testing.T) {
	truth := &HighTemperature{Powers: []float64{0, 1, -2}, Coefficients: []float64{24, 6, -2}, fixed: math.NaN()}
	random := rand.New(rand.NewPCG(2, 3))
	var hs, ht, hu, ct, cs, cu []float64
	for T := 400.0; T <= 1200; T += 50 {
		h := truth.enthalpy(T) - truth.enthalpy(273.15)
		ht, hs, hu = append(ht, T), append(hs, h+20*random.NormFloat64()), append(hu, 20)
	}
	for T := 300.0; T < 700; T += 20 {
		ct, cs, cu = append(ct, T), append(cs, truth.heatCapacity(T)+0.05*random.NormFloat64()), append(cu, 0.05)
	}
	drop := columns(t, []data.Note{{Key: "reference temperature/K", Value: "273.15"}}, "T", "K", ht, "dH", "J mol-1", hs, "u(dH)", "J mol-1", hu)
	cp := columns(t, nil, "T", "K", ct, "Cp", "J K-1 mol-1", cs, "u(Cp)", "J K-1 mol-1", cu)
	m, err := FitDrop(drop, cp, []float64{0, 1, -2}, 0, fit.AbsoluteSigma)
	if err != nil {
		t.Fatal(err)
	}
	for _, T := range []unit.Temperature{298.15, 600, 1200} {
		c := m.HeatCapacity(T)
		within(t, "Cp", c.Value(), truth.heatCapacity(float64(T)), 4*c.StandardUncertainty())
	}
	h := m.Enthalpy(1000)
	within(t, "H", h.Value(), truth.enthalpy(1000), 4*h.StandardUncertainty())
	if z := m.Enthalpy(298.15); z.Value() != 0 || z.StandardUncertainty() != 0 {
		t.Errorf("H at the reference %v", z)
	}
	alone, err := FitDrop(drop, nil, []float64{0, 1, -2}, 0, fit.AbsoluteSigma)
	if err != nil {
		t.Fatal(err)
	}
	if a, b := m.HeatCapacity(500).StandardUncertainty(), alone.HeatCapacity(500).StandardUncertainty(); a >= b {
		t.Errorf("u(Cp) %g from both, %g from enthalpies alone", a, b)
	}
	held, err := FitDrop(drop, nil, []float64{0, 1, -2}, 28, fit.AbsoluteSigma)
	if err != nil {
		t.Fatal(err)
	}
	if c := held.HeatCapacity(298.15); math.Abs(c.Value()-28) > 1e-12 || c.StandardUncertainty() > 1e-9 {
		t.Errorf("held Cp(298.15 K) %v ± %g", c, c.StandardUncertainty())
	}
	mean := columns(t, nil, "T", "K", ht, "dH", "J K-1 mol-1", hs)
	if _, err := FitDrop(mean, nil, []float64{0, 1}, 0, fit.ScaledSigma); err == nil || !strings.Contains(err.Error(), "is a mean over the range, not Cp at T") {
		t.Errorf("mean heat capacities: %v", err)
	}
}
