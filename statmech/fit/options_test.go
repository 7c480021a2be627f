package fit

import (
	"math"
	"math/rand/v2"
	"strings"
	"testing"

	"levelsum/statmech/solid"
	"levelsum/statmech/unit"
)

func TestBoundsTiesStarts(t *testing.T) {
	ts, cs, us := syntheticSolid()
	run := newTable(t, ts, cs, us)
	// A bound that the minimum violates holds, is reported, and gives no
	// symmetric uncertainty.
	deb, ein := solid.Debye{Theta: 230, Modes: 3}, solid.Einstein{Theta: 500, Modes: 3}
	res, err := HeatCapacity(solid.Sum{&deb, &ein}, run, Vary(&deb.Theta, &ein.Theta), Between(&deb.Theta, 200*unit.K, 240*unit.K), ScaledSigma)
	if err != nil {
		t.Fatal(err)
	}
	if deb.Theta != 240 || res.Parameter(&deb.Theta).Withheld() == "" || !strings.Contains(strings.Join(res.Warnings, "\n"), "Debye.Theta ends at its bound 240") {
		t.Errorf("θ = %v, %v, %q", deb.Theta, res.Parameter(&deb.Theta), res.Warnings)
	}
	if res.Parameter(&ein.Theta).Withheld() != "" {
		t.Errorf("%v: the other parameter has an uncertainty", res.Parameter(&ein.Theta))
	}
	// A tied count of modes.
	deb, ein = solid.Debye{Theta: 230, Modes: 2}, solid.Einstein{Theta: 500, Modes: 1}
	res, err = HeatCapacity(solid.Sum{&deb, &ein}, run, Vary(&deb.Theta, &ein.Theta, &deb.Modes), Tie(&ein.Modes, func() float64 { return 6 - deb.Modes }), AbsoluteSigma)
	if err != nil {
		t.Fatal(err)
	}
	within(t, "n_D", deb.Modes, 3, 1e-7)
	within(t, "n_E", ein.Modes, 3, 1e-7)
	within(t, "θ_E", float64(ein.Theta), 550, 1e-5)
	var free debyeEinstein
	if u, all := res.Parameter(&deb.Theta).StandardUncertainty(), free.fit(t, run, AbsoluteSigma).Parameter(&free.deb.Theta).StandardUncertainty(); u >= all {
		t.Errorf("u(θ_D) = %g with a tied count, %g with a free one", u, all)
	}
	// sin(b x) has many minima in b; several starts find the lowest.
	var x, y []float64
	for i := range 60 {
		x = append(x, float64(i)*0.1)
		y = append(y, math.Sin(3.7*x[i])+0.01*math.Cos(float64(17*i)))
	}
	b := 0.4
	sine := func(x float64) float64 { return math.Sin(b * x) }
	one, err := Curve(sine, x, y, nil, Vary(&b), Between(&b, 0.1, 12.0), ScaledSigma)
	if err != nil {
		t.Fatal(err)
	}
	b = 0.4
	many, err := Curve(sine, x, y, nil, Vary(&b), Between(&b, 0.1, 12.0), ScaledSigma, Starts(30, 3))
	if err != nil {
		t.Fatal(err)
	}
	if math.Abs(b-3.7) > 0.01 || many.ChiSquared > one.ChiSquared/10 || len(many.Minima) != 30 {
		t.Errorf("b = %g, χ² %g from 30 starts, %g from one", b, many.ChiSquared, one.ChiSquared)
	}
}

// TestRobust: one gross outlier moves the plain fit by many u, the robust ones
// hardly.
func TestRobust(t *testing.T) {
	random := rand.New(rand.NewPCG(3, 4))
	var x, y, u []float64
	for i := range 40 {
		x = append(x, float64(i))
		y = append(y, 2+0.5*x[i]+0.1*random.NormFloat64())
		u = append(u, 0.1)
	}
	y[30] += 20
	fitWith := func(o ...Option) (float64, *Result) {
		a, b := 1.0, 1.0
		res, err := Curve(func(x float64) float64 { return a + b*x }, x, y, u, append(o, Vary(&a, &b))...)
		if err != nil {
			t.Fatal(err)
		}
		return b, res
	}
	plainB, res := fitWith(AbsoluteSigma)
	if res.Withheld == "" || math.Abs(plainB-0.5) < 0.02 {
		t.Errorf("plain fit b = %g, withheld %q", plainB, res.Withheld)
	}
	if d := res.Diagnostics; d.LargestAt != 30 || d.NormalityP > 1e-3 {
		t.Errorf("diagnostics %+v do not point at the outlier", d)
	}
	for name, o := range map[string]Option{"Huber": Huber(1.345), "Bisquare": Bisquare(4.685)} {
		b, res := fitWith(o, ScaledSigma)
		within(t, name+" slope", b, 0.5, 0.005)
		if !strings.Contains(res.String(), "robust loss: ") {
			t.Errorf("%s is not shown in\n%v", name, res)
		}
	}
}

func TestRefusals(t *testing.T) {
	run := copper(t)
	deb := solid.Debye{Theta: 343}
	var none *float64
	x, y := []float64{1, 2, 3}, []float64{1, 2, 3}
	a, b, c := 1.0, 1.0, 1.0
	line := func(x float64) float64 { return a + b*x + c*x*x }
	for _, test := range []struct {
		name, want string
		f          func() error
	}{
		{"no sigma", "fit.AbsoluteSigma, fit.ScaledSigma or fit.CommonSigma", func() error { _, err := HeatCapacity(&deb, run, Vary(&deb.Theta)); return err }},
		{"nothing free", "name the free parameters", func() error { _, err := HeatCapacity(&deb, run, AbsoluteSigma); return err }},
		{"no address", "unit.Temperature, want the address", func() error { _, err := HeatCapacity(&deb, run, Vary(deb.Theta), AbsoluteSigma); return err }},
		{"nil", "a nil pointer", func() error { _, err := HeatCapacity(&deb, run, Vary(none), AbsoluteSigma); return err }},
		{"twice", "at the same address twice", func() error {
			_, err := HeatCapacity(&deb, run, Vary(&deb.Theta, &deb.Theta), AbsoluteSigma)
			return err
		}},
		{"both sigmas", "want one of them", func() error {
			_, err := HeatCapacity(&deb, run, Vary(&deb.Theta), AbsoluteSigma, ScaledSigma)
			return err
		}},
		{"no model", "has no method HeatCapacity", func() error { _, err := HeatCapacity(3, run, Vary(&deb.Theta), AbsoluteSigma); return err }},
		{"empty window", "none of the 35 points lies in the window", func() error {
			_, err := HeatCapacity(&deb, run, Vary(&deb.Theta), AbsoluteSigma, Window(400, 500))
			return err
		}},
		{"window backwards", "want the lower end first", func() error {
			_, err := HeatCapacity(&deb, run, Vary(&deb.Theta), AbsoluteSigma, Window(10, 1))
			return err
		}},
		{"outside bounds", "outside its bounds", func() error {
			_, err := HeatCapacity(&deb, run, Vary(&deb.Theta), AbsoluteSigma, Between(&deb.Theta, 400*unit.K, 500*unit.K))
			return err
		}},
		{"absolute without u", "but the data have none", func() error { _, err := Curve(line, x, y, nil, Vary(&a), AbsoluteSigma); return err }},
		{"more parameters than points", "2 points cannot determine 3 free parameters", func() error { _, err := Curve(line, x[:2], y[:2], nil, Vary(&a, &b, &c), ScaledSigma); return err }},
		{"no scatter left", "leave no scatter to scale by", func() error { _, err := Curve(line, x, y, nil, Vary(&a, &b, &c), ScaledSigma); return err }},
		{"zero u", "which would give it all the weight", func() error { _, err := Curve(line, x, y, []float64{1, 0, 1}, Vary(&a), AbsoluteSigma); return err }},
		{"negative u", "standard uncertainty -1", func() error { _, err := Curve(line, x, y, []float64{1, -1, 1}, Vary(&a), AbsoluteSigma); return err }},
		{"NaN", "point 2: x = 2, y = NaN", func() error {
			_, err := Curve(line, x, []float64{1, math.NaN(), 1}, nil, Vary(&a), ScaledSigma)
			return err
		}},
		{"model not finite", "no finite value at the starting parameters", func() error {
			_, err := Curve(func(x float64) float64 { return math.Log(-a * x) }, x, y, nil, Vary(&a), ScaledSigma)
			return err
		}},
		{"model refuses its start", "no finite value at the starting parameters: Theta = -5 K", func() error {
			bad := solid.Debye{Theta: -5}
			_, err := HeatCapacity(&bad, run, Vary(&bad.Theta), AbsoluteSigma)
			return err
		}},
	} {
		t.Run(test.name, func(t *testing.T) {
			if err := test.f(); err == nil || !strings.Contains(err.Error(), test.want) {
				t.Errorf("error %v\nwant … %s", err, test.want)
			}
		})
	}
}

// TestUndetermined: two parameters of which only the product matters.
func TestUndetermined(t *testing.T) {
	a, b := 1.0, 2.0
	res, err := Curve(func(x float64) float64 { return a * b * x }, []float64{1, 2, 3, 4}, []float64{2.1, 3.9, 6.1, 8}, nil, Vary(&a, &b), ScaledSigma)
	if err != nil {
		t.Fatal(err)
	}
	if !strings.Contains(res.Withheld, "do not determine all parameters") {
		t.Errorf("withheld %q, condition %g", res.Withheld, res.Condition)
	}
}

// TestSmoothed: far too small a χ² is pointed at.
func TestSmoothed(t *testing.T) {
	ts, cs, us := syntheticSolid()
	var m debyeEinstein
	res := m.fit(t, newTable(t, ts, cs, us), AbsoluteSigma)
	if all := strings.Join(res.Warnings, "\n"); !strings.Contains(all, "far below 1") {
		t.Errorf("warnings\n%s", all)
	}
}
