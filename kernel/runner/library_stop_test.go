package runner_test

import (
	"testing"
)

// TestInterruptReachesLibraries interrupts calls of the physics library that
// would take minutes.
func TestInterruptReachesLibraries(t *testing.T) {
	e := start(t)
	const ramp = "ts := make([]unit.Temperature, 2_000_000)\nfor i := range ts { ts[i] = unit.Temperature(100 + 1e-3*float64(i)) }\n"
	const twice = "m := solid.Sum{&solid.Debye{Theta: 343 * unit.K}, &solid.Electronic{Gamma: 0.7 * unit.MilliJPerMolK2}}\n" +
		"n := 500\nT, C, U := make([]float64, n), make([]float64, n), make([]float64, n)\n" +
		"for i := range T { T[i] = 2 + 0.6*float64(i); C[i] = float64(m.HeatCapacity(unit.Temperature(T[i])))*(1 + 1e-3*math.Sin(13*float64(i))); U[i] = 1e-3*C[i] }\n" +
		"a, err := data.NewColumn(\"T\", \"K\", T)\nif err != nil { panic(err) }\nb, err := data.NewColumn(\"Cp\", \"J K-1 mol-1\", C)\nif err != nil { panic(err) }\nc, err := data.NewColumn(\"u(Cp)\", \"J K-1 mol-1\", U)\nif err != nil { panic(err) }\n" +
		"run, err := data.New(\"invented\", nil, a, b, c)\nif err != nil { panic(err) }\ndeb, el := solid.Debye{Theta: 300 * unit.K}, solid.Electronic{Gamma: 0.5 * unit.MilliJPerMolK2}\n"
	for _, test := range []struct{ name, src string }{
		{"level sums at many temperatures", ramp + "es, gs := make([]unit.Energy, 100_000), make([]float64, 100_000)\nfor i := range es { es[i], gs[i] = unit.Energy(i)*unit.KelvinEnergy, 1 }\nl, err := statmech.NewLevels(es, gs)\nif err != nil { panic(err) }\nfmt.Println(\"go\")\nrs := l.ReducedAt(ts)\nlen(rs)"},
		{"many levels", "es, gs := make([]unit.Energy, 50_000_000), make([]float64, 50_000_000)\nfor i := range es { es[i], gs[i] = unit.Energy(1e-4*float64(i))*unit.KelvinEnergy, 1 }\nfmt.Println(\"go\")\nfor {\nl, err := statmech.NewLevels(es, gs)\nif err != nil { panic(err) }\nl.Reduced(300*unit.K)\n}"},
		{"Monte Carlo", "q := uncertain.Exp(uncertain.Measured(1, 0.1))\nfmt.Println(\"go\")\nr, err := uncertain.MonteCarlo(q, uncertain.Draws(300_000_000))\nif err != nil { panic(err) }\nr.Mean"},
		{"joint Monte Carlo", "q := uncertain.Exp(uncertain.Measured(1, 0.1))\nfmt.Println(\"go\")\nr, err := uncertain.MonteCarloJoint([]uncertain.Quantity{q, q.Scale(2)}, uncertain.Draws(100_000_000))\nif err != nil { panic(err) }\nr"},
		{"bootstrap", twice + "res, err := fit.HeatCapacity(solid.Sum{&deb, &el}, run, fit.Vary(&deb.Theta, &el.Gamma), fit.AbsoluteSigma)\nif err != nil { panic(err) }\nfmt.Println(\"go\")\nbs, err := res.Bootstrap(10_000_000, 1)\nif err != nil { panic(err) }\nbs"},
		{"fit from many starts", twice + "fmt.Println(\"go\")\nres, err := fit.HeatCapacity(solid.Sum{&deb, &el}, run, fit.Vary(&deb.Theta, &el.Gamma), fit.AbsoluteSigma, fit.Between(&deb.Theta, 100*unit.K, 900*unit.K), fit.Between(&el.Gamma, 0.0, 1e-2), fit.Starts(1_000_000, 1))\nif err != nil { panic(err) }\nres"},
		{"bootstrap of a user's model", "x := []float64{1, 2, 3, 4, 5, 6}\np, k := 1.0, 2.0\nres, err := fit.Curve(func(x float64) float64 { s := 0.0; for range 100 { s += p*math.Exp(-x/k)/100 }; return s }, x, []float64{1, .7, .4, .3, .2, .1}, []float64{.1, .1, .1, .1, .1, .1}, fit.Vary(&p, &k), fit.AbsoluteSigma)\nif err != nil { panic(err) }\nfmt.Println(\"go\")\nbs, err := res.Bootstrap(10_000_000, 1)\nif err != nil { panic(err) }\nbs"},
		{"Monte Carlo of a user's function", "q := uncertain.Function(func(x []float64) float64 { s := 0.0; for range 100 { s += math.Exp(x[0])/100 }; return s }, uncertain.Measured(1, 0.1))\nfmt.Println(\"go\")\nr, err := uncertain.MonteCarlo(q, uncertain.Draws(100_000_000))\nif err != nil { panic(err) }\nr.Mean"},
		{"Ising model", "s, err := lattice.NewSimulation(lattice.Torus{Rows: 512, Columns: 512, J: unit.KelvinEnergy}, 2*unit.K, 1)\nif err != nil { panic(err) }\nfmt.Println(\"go\")\ny := s.Sample(1_000_000)\nlen(y.Energies)"},
		{"a user's mode at many temperatures", ramp + "type two struct{}\nfunc (two) Reduced(T unit.Temperature) statmech.Reduced { x := 300/float64(T); s := 0.0; for i := range 1000 { s += math.Exp(-x*float64(i)) }; return statmech.Reduced{LogQ: math.Log(s)} }\nfmt.Println(\"go\")\nr := statmech.ReducedAt(two{}, ts)\nlen(r)"},
		{"fit of a slow model", "x := []float64{1, 2, 3, 4, 5, 6}\np, k := 1.0, 2.0\nfmt.Println(\"go\")\nres, err := fit.Curve(func(x float64) float64 { time.Sleep(50*time.Millisecond); return p*math.Exp(-x/k) }, x, []float64{1, .7, .4, .3, .2, .1}, []float64{.1, .1, .1, .1, .1, .1}, fit.Vary(&p, &k), fit.AbsoluteSigma)\nif err != nil { panic(err) }\nres"},
		{"density of states", ramp + "table := solid.PhononTable{Per: unit.THzEnergy, Integral: solid.IntegralOne, AtomsPerCell: 1, AtomsPerFormula: 1}\nfor i := range 20_000 { w := 8*float64(i)/19_999; table.Energies = append(table.Energies, unit.Energy(w)*unit.THzEnergy); table.States = append(table.States, 3*w*w/512) }\np, err := solid.NewPhonons(table)\nif err != nil { panic(err) }\nfmt.Println(\"go\")\nc := p.HeatCapacities(ts)\nlen(c)"},
		{"Debye functions", ramp + "d := solid.Debye2D{Theta: 343*unit.K}\nfmt.Println(\"go\")\nfor { d.HeatCapacities(ts) }"},
		{"asymmetric top to high J", "fmt.Println(\"go\")\ntop, err := gas.NewAsymmetricTop(0.02788*unit.PerCm, 0.01452*unit.PerCm, 0.00928*unit.PerCm, 1, nil)\nif err != nil { panic(err) }\ntop.Reduced(6000*unit.K).LogQ"},
		{"torsion at many temperatures", ramp + "V := gas.Barrier(800*unit.PerCm, 3).Plus(gas.Barrier(100*unit.PerCm, 1))\nfmt.Println(\"go\")\ntor, err := gas.NewTorsion(10*unit.PerCm, V, 1, gas.Diagonalised)\nif err != nil { panic(err) }\nr := tor.ReducedAt(ts)\nlen(r)"},
		{"stiff torsions", "V := gas.Barrier(80000*unit.PerCm, 3).Plus(gas.Barrier(100*unit.PerCm, 1))\nfmt.Println(\"go\")\nfor {\ntor, err := gas.NewTorsion(0.1*unit.PerCm, V, 1, gas.Diagonalised)\nif err != nil { panic(err) }\ntor.Reduced(300*unit.K)\n}"},
		{"molecule's table", ramp + "m, err := gas.FromLibrary(\"H2O\")\nif err != nil { panic(err) }\nfmt.Println(\"go\")\nc := m.HeatCapacities(ts)\nlen(c)"},
	} {
		t.Run(test.name, func(t *testing.T) {
			o, took, c := interrupted(t, e, test.src)
			if o.Fault == nil || o.Fault.Name != "interrupted" || o.Restarted {
				t.Errorf("ended with %+v, want interrupted", o.Fault)
			}
			t.Logf("after %v %s", took, c.err())
		})
	}
}
