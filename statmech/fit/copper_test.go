package fit

import (
	"math"
	"strings"
	"testing"

	"levelsum/display"
	"levelsum/statmech/data"
	"levelsum/statmech/solid"
	"levelsum/statmech/unit"
)

func copper(t testing.TB) *data.Table {
	t.Helper()
	run, err := data.Read("../../testdata/white-collocott-1984/copper.csv")
	if err != nil {
		t.Fatal(err)
	}
	return run
}

// TestCopperLow: γT + Debye in the window 1-10 K of White & Collocott 1984,
// 1 % standard uncertainties. An independent refit of the same table found
// θ = 343.2 ± 0.7 K, γ = 0.692(5) mJ/(mol K²).
func TestCopperLow(t *testing.T) {
	run := copper(t)
	for _, start := range []unit.Temperature{150, 343, 900} {
		deb, el := solid.Debye{Theta: start}, solid.Electronic{Gamma: 1e-4}
		res, err := HeatCapacity(solid.Sum{&el, &deb}, run, Vary(&deb.Theta, &el.Gamma), Window(1, 10), AbsoluteSigma)
		if err != nil {
			t.Fatal(err)
		}
		if all := strings.Join(res.Warnings, "\n"); !strings.Contains(all, "the data look smoothed") {
			t.Errorf("no word about the small χ² of a smoothed table in\n%s", all)
		}
		theta, gamma := res.Parameter(&deb.Theta), res.Parameter(&el.Gamma)
		t.Logf("%v, %v, χ²/ν %.3f, r %.3f, %d evaluations, %v", theta, gamma, res.Ratio(), res.Correlation()[0][1], res.Evaluations, res.Warnings)
		if theta.Name() != "Debye.Theta" || theta.Unit() != "K" || gamma.Name() != "Electronic.Gamma" {
			t.Errorf("names %q in %q, %q", theta.Name(), theta.Unit(), gamma.Name())
		}
		within(t, "θ/K", theta.Value(), 343.2, 0.05)
		within(t, "u(θ)/K", theta.StandardUncertainty(), 0.7, 0.05)
		within(t, "γ/(mJ mol-1 K-2)", gamma.Value()*1e3, 0.692, 0.0005)
		within(t, "u(γ)", gamma.StandardUncertainty()*1e3, 0.005, 0.0005)
	}
}

// TestCopperCommon: the 1 % are the accuracy bound of a smoothed table, common
// to all points. C ∝ θ⁻³ at these temperatures, so 1 % in C is 1/3 % in θ and
// 1 % in γ whatever the weights.
func TestCopperCommon(t *testing.T) {
	run := copper(t)
	deb, el := solid.Debye{Theta: 300}, solid.Electronic{Gamma: 1e-4}
	res, err := HeatCapacity(solid.Sum{&el, &deb}, run, Vary(&deb.Theta, &el.Gamma), Window(1, 10), CommonSigma)
	if err != nil {
		t.Fatal(err)
	}
	theta, gamma := res.Parameter(&deb.Theta), res.Parameter(&el.Gamma)
	within(t, "common part of u(θ)/θ", theta.CommonPart()/theta.Value(), 0.01/3, 1e-5)
	within(t, "common part of u(γ)/γ", gamma.CommonPart()/gamma.Value(), 0.01, 1e-6)
	if r := theta.RandomPart(); r > 0.4 || r <= 0 {
		t.Errorf("random part %g K, want that of the small scatter of a smoothed table", r)
	}
	t.Logf("%v, random %.3f common %.3f; %v", theta, theta.RandomPart(), theta.CommonPart(), gamma)
}

// TestCopperWholeRange: one Debye temperature cannot serve 1-300 K, Cp is not
// C_V: the fit must come out bad, with χ² of hundreds per degree of freedom
// without the electrons and still far too much with them, and give no standard
// uncertainty.
func TestCopperWholeRange(t *testing.T) {
	run := copper(t)
	deb, el := solid.Debye{Theta: 343}, solid.Electronic{Gamma: 7e-4}
	for _, test := range []struct {
		model solid.Sum
		vary  Option
		ratio float64
	}{
		{solid.Sum{&deb}, Vary(&deb.Theta), 100},
		{solid.Sum{&el, &deb}, Vary(&deb.Theta, &el.Gamma), 50},
	} {
		res, err := HeatCapacity(test.model, run, test.vary, AbsoluteSigma)
		if err != nil {
			t.Fatal(err)
		}
		if res.Ratio() < test.ratio {
			t.Errorf("χ² per degree of freedom %g, want above %g", res.Ratio(), test.ratio)
		}
		theta := res.Parameter(&deb.Theta)
		if theta.Withheld() == "" || !strings.Contains(res.Withheld, "does not describe the data") {
			t.Errorf("uncertainty given: %v", theta)
		}
		if s := theta.String(); !strings.Contains(s, "no standard uncertainty") {
			t.Errorf("printed %q", s)
		}
		if all := strings.Join(res.Warnings, "\n"); !strings.Contains(all, "C_V") {
			t.Errorf("no warning that Cp is not C_V in\n%s", all)
		}
		t.Logf("χ²/ν %.1f, %v\n%s", res.Ratio(), theta, strings.Join(res.Warnings, "\n"))
	}
}

func within(t testing.TB, what string, got, want, tol float64) {
	t.Helper()
	if !(math.Abs(got-want) <= tol) {
		t.Errorf("%s = %.6g, want %g ± %g", what, got, want, tol)
	}
}

// TestFigure: a result can stand in a figure with its band, and residuals from
// another data set are refused.
func TestFigure(t *testing.T) {
	run := copper(t).Within(1, 10)
	deb, el := solid.Debye{Theta: 300}, solid.Electronic{Gamma: 1e-4}
	res, err := HeatCapacity(solid.Sum{&el, &deb}, run, Vary(&deb.Theta, &el.Gamma), AbsoluteSigma)
	if err != nil {
		t.Fatal(err)
	}
	if err := (display.Figure{X: run.T, Y: run.Cp, Err: run.U, Curve: res.Curve(), Residuals: true}).Check(); err != nil {
		t.Error(err)
	}
	other := copper(t).Within(20, 100)
	if err := (display.Figure{X: other.T, Y: other.Cp, Curve: res.Curve(), Residuals: true}).Check(); err == nil || !strings.Contains(err.Error(), "another data set") {
		t.Errorf("residuals of other data: %v", err)
	}
	if u := res.StandardUncertainties([]float64{5}); math.Abs(u[0]-res.At(5).StandardUncertainty()) > 1e-6*u[0] {
		t.Errorf("u of the curve %g, %g by At", u[0], res.At(5).StandardUncertainty())
	}
}

// TestCopperDilated: electrons, one Debye and one Einstein term and the heat of
// thermal expansion do describe copper from 1 K to 300 K. The fitted Cp - C_V
// at 298.15 K agrees with T V α² B_T = 0.6908 J/(mol K) from V = 7.11e-6 m³/mol,
// α = 4.95e-5 /K and B_T = 133 GPa, which the fit does not know.
func TestCopperDilated(t *testing.T) {
	run := copper(t)
	deb, ein, el := solid.Debye{Theta: 320, Modes: 2}, solid.Einstein{Theta: 220, Modes: 1}, solid.Electronic{Gamma: 6.92e-4}
	lattice := solid.Dilated{Lattice: solid.Sum{&deb, &ein}, A: 1e-6}
	res, err := HeatCapacity(solid.Sum{&el, &lattice}, run, Vary(&deb.Theta, &ein.Theta, &deb.Modes, &lattice.A),
		Tie(&ein.Modes, func() float64 { return 3 - deb.Modes }), AbsoluteSigma)
	if err != nil {
		t.Fatal(err)
	}
	if res.Withheld != "" || res.Ratio() > 1 {
		t.Errorf("χ² per degree of freedom %g, %s", res.Ratio(), res.Withheld)
	}
	difference := res.Function(func() float64 {
		return float64(lattice.HeatCapacity(298.15) - solid.Sum{&deb, &ein}.HeatCapacity(298.15))
	})
	t.Logf("Cp - C_V = %v; θ_D %v, θ_E %v", difference, res.Parameter(&deb.Theta), res.Parameter(&ein.Theta))
	within(t, "Cp - C_V at 298.15 K", difference.Value(), 0.6908, 2*difference.StandardUncertainty())
	if u := difference.StandardUncertainty(); u > 0.06 {
		t.Errorf("u(Cp - C_V) = %g says nothing", u)
	}
	if all := strings.Join(res.Warnings, "\n"); strings.Contains(all, "the model gives C_V") {
		t.Errorf("a model with expansion is warned of its lack\n%s", all)
	}
}
