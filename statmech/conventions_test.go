package statmech_test

import (
	"encoding/json"
	"errors"
	"fmt"
	"math"
	"os"
	"regexp"
	"strings"
	"testing"

	"levelsum/display"
	"levelsum/statmech"
	"levelsum/statmech/data"
	"levelsum/statmech/fit"
	"levelsum/statmech/gas"
	"levelsum/statmech/reaction"
	"levelsum/statmech/solid"
	"levelsum/statmech/uncertain"
	"levelsum/statmech/unit"
)

// The examples of this file are those of the conventions in the package
// comment, in its order.

// TestConventions: each paragraph of the conventions has its example here, and
// each example its paragraph.
func TestConventions(t *testing.T) {
	comment, err := os.ReadFile("doc.go")
	if err != nil {
		t.Fatal(err)
	}
	examples, err := os.ReadFile("conventions_test.go")
	if err != nil {
		t.Fatal(err)
	}
	_, conventions, found := strings.Cut(string(comment), "// # Conventions\n")
	if !found {
		t.Fatal("no conventions in the package comment")
	}
	var want []string
	for _, m := range regexp.MustCompile(`(?m)^//\n// ([A-Z][a-z A-Z]+)\. `).FindAllStringSubmatch(conventions, -1) {
		name := ""
		for i, word := range strings.Fields(m[1]) {
			if i == 0 {
				word = strings.ToLower(word)
			} else {
				word = strings.ToUpper(word[:1]) + word[1:]
			}
			name += word
		}
		want = append(want, name)
	}
	var got []string
	for _, m := range regexp.MustCompile(`(?m)^func Example_(\w+)\(`).FindAllStringSubmatch(string(examples), -1) {
		got = append(got, m[1])
	}
	if len(want) < 10 || strings.Join(got, " ") != strings.Join(want, " ") {
		t.Errorf("examples\n%v\nof the paragraphs\n%v", got, want)
	}
}

func Example_units() {
	T, p := unit.Celsius(25), 2*unit.Bar
	fmt.Println(T, float64(T))
	fmt.Println(float64(p), float32(p.In(unit.Atm)))
	run, err := data.Parse("run.csv", []byte("T / K, Cp / (J K-1 mol-1)\n300, 24.5\n310, 24.6\n"))
	fmt.Println(run.Readings, err)
	// Output:
	// 298.15 K 298.15
	// 200000 1.9738466
	// [temperatures taken as ITS-90: the file does not say] <nil>
}

func Example_wavenumbersAndKelvins() {
	bend := 1595 * unit.PerCm
	fmt.Printf("%.6f K\n", (1 * unit.PerCm).In(unit.KelvinEnergy))
	fmt.Println(math.Abs(float64(bend)/(159500*unit.Planck*unit.SpeedOfLight)-1) < 1e-15)
	// Output:
	// 1.438777 K
	// true
}

func Example_perParticleAndMolar() {
	barrier := 12 * unit.KJPerMol
	fmt.Printf("%.4g J, %v\n", float64(barrier), barrier.PerMole())
	fmt.Println(12*unit.MolarKJ == barrier.PerMole())
	nacl := solid.Debye{Theta: 321 * unit.K, Modes: 6}
	atoms := solid.Debye{Theta: 321 * unit.K}
	fmt.Println(float64(nacl.HeatCapacity(300*unit.K)/atoms.HeatCapacity(300*unit.K)) == 2)
	_, err := data.Parse("run.csv", []byte("T / K, Cp / (J K-1 g-1)\n300, 0.5\n310, 0.51\n"))
	fmt.Println(err != nil)
	// Output:
	// 1.993e-20 J, 12000 J/mol
	// true
	// true
	// true
}

func Example_standardStates() {
	ar, err := gas.FromLibrary("Ar")
	if err != nil {
		fmt.Println(err)
		return
	}
	atm, err := ar.At(1 * unit.Atm)
	if err != nil {
		fmt.Println(err)
		return
	}
	T := 298.15 * unit.K
	fmt.Println(float64(ar.Pressure()))
	fmt.Printf("%.5f J/(mol K)\n", (ar.Entropy(T) - atm.Entropy(T)).In(unit.JPerMolK))
	// Output:
	// 100000
	// 0.10944 J/(mol K)
}

func Example_referenceTemperatures() {
	n2, err := gas.FromLibrary("N2")
	if err != nil {
		fmt.Println(err)
		return
	}
	T, ref := 1000*unit.K, 298.15*unit.K
	fmt.Println(n2.EnthalpyFromReference(ref))
	fmt.Println(math.Abs(float64(n2.EnthalpyIncrement(T)-n2.EnthalpyIncrement(ref)-n2.EnthalpyFromReference(T))) < 1e-9)
	fmt.Println(math.Abs(float64(n2.Entropy(T))-float64(n2.EnthalpyFromReference(T))/1000-float64(n2.GibbsFunction(T))) < 1e-9)
	// Output:
	// 0 J/mol
	// true
	// true
}

func Example_zeroOfEnergy() {
	levels, err := statmech.NewLevels([]unit.Energy{700 * unit.PerCm, 500 * unit.PerCm}, []float64{1, 3})
	if err != nil {
		fmt.Println(err)
		return
	}
	cold := levels.Reduced(1 * unit.K)
	fmt.Println(cold.LogQ == math.Log(3), float32(cold.U), levels.ZeroPointEnergy().In(unit.PerCm))
	oscillator := gas.Oscillator{Quantum: 1000 * unit.PerCm}
	fmt.Println(oscillator.Reduced(1*unit.K).U, oscillator.ZeroPointEnergy().In(unit.PerCm))
	for _, kind := range []reaction.EnergyKind{reaction.AtomisationD0, reaction.FormationAt0K} {
		r, err := reaction.New("H2 = 2 H", kind)
		if err != nil {
			fmt.Println(err)
			return
		}
		fmt.Printf("%v: %.2f kJ/mol\n", kind, r.EnthalpyAtZero().In(unit.MolarKJ))
	}
	// Output:
	// true 0 500
	// 0 500
	// atomisation energies D0: 432.07 kJ/mol
	// enthalpies of formation at 0 K: 432.07 kJ/mol
}

func Example_symmetryAndSpin() {
	one := gas.LinearRotor{B: 0.1 * unit.PerCm, Symmetry: 1}
	two := gas.LinearRotor{B: 0.1 * unit.PerCm, Symmetry: 2}
	spin := gas.LinearRotor{B: 0.1 * unit.PerCm, Spin: &gas.SpinWeights{Weights: []float64{1, 3}, Total: 4}}
	counted := gas.LinearRotor{B: 0.1 * unit.PerCm, Spin: &gas.SpinWeights{Weights: []float64{1, 3}, Total: 4, Include: true}}
	T := 500 * unit.K
	q := func(r gas.LinearRotor) float64 { return math.Exp(r.Reduced(T).LogQ) }
	fmt.Printf("%.4f %.4f %.4f\n", q(two)/q(one), q(spin)/q(one), q(counted)/q(one))
	_, err := gas.New(gas.Description{Formula: "N2", Constants: []unit.Energy{2 * unit.PerCm}, Symmetry: 2,
		Spin: &gas.SpinWeights{Weights: []float64{6, 3}, Total: 9}, Vibrations: []gas.Vibration{{Quantum: 2330 * unit.PerCm}}})
	fmt.Println(errors.Is(err, gas.ErrDouble))
	// Output:
	// 0.5000 0.5000 2.0000
	// true
}

func Example_degeneracies() {
	levels, err := statmech.NewLevels([]unit.Energy{0, 100 * unit.PerCm}, []float64{2, 4})
	if err != nil {
		fmt.Println(err)
		return
	}
	T := 150 * unit.K
	p := levels.Populations(T)
	s, err := statmech.GibbsEntropyOfLevels(p, []float64{2, 4})
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Println(math.Abs(p[0]+p[1]-1) < 1e-15)
	fmt.Println(math.Abs(s.Nats()-levels.Reduced(T).Entropy()) < 1e-14)
	fmt.Printf("%.4f k at 1 K\n", levels.Reduced(1*unit.K).Entropy())
	// Output:
	// true
	// true
	// 0.6931 k at 1 K
}

func Example_uncertainty() {
	run, err := data.Parse("run.csv", []byte("# coverage of u: k=2\nT / K, Cp / (J K-1 mol-1), u(Cp) / (J K-1 mol-1)\n300, 24.5, 0.2\n310, 24.6, 0.2\n"))
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Println(run.U[0])
	fmt.Println(uncertain.Measured(24.5, 0.1).Expanded(2))
	// Output:
	// 0.1 J/(mol K)
	// 24.50 ± 0.20 (k = 2)
}

func Example_correlation() {
	a := uncertain.Measured(5, 0.1)
	b := uncertain.Measured(5, 0.1)
	fmt.Println(a.Minus(a), a.Minus(b))
	scale := uncertain.Common("calibration", 0.01).Shift(1)
	sum := a.Times(scale).Plus(b.Times(scale))
	fmt.Printf("random %.3f, common %.3f\n", sum.RandomPart(), sum.CommonPart())
	// Output:
	// 0 0.00(14)
	// random 0.141, common 0.100
}

func Example_rounding() {
	fmt.Println(uncertain.Of(343.184*unit.K, 1.243*unit.K))
	fmt.Println(33.151234567 * unit.JPerMolK)
	n, err := display.NumberOf("θ_D", 343.1841234*unit.K, 1.243*unit.K)
	fmt.Println(n, n.Value, err)
	// Output:
	// 343.2(1.2) K
	// 33.1512 J/(mol K)
	// θ_D = 343.2(1.2) K 343.1841234 <nil>
}

func Example_constants() {
	fmt.Println(unit.ConstantsSource)
	for _, c := range unit.Constants() {
		switch c.Symbol {
		case "h", "k", "e", "N_A", "c":
			fmt.Println(c.Symbol, c.Exact)
		}
	}
	fmt.Println(unit.GasConstant == unit.Boltzmann*unit.Avogadro)
	cl, err := gas.ParseFormula("Cl2")
	if err != nil {
		fmt.Println(err)
		return
	}
	cl35, err := gas.ParseFormula("[35Cl]2")
	if err != nil {
		fmt.Println(err)
		return
	}
	for _, f := range []gas.Formula{cl, cl35} {
		m, _, err := f.Mass()
		fmt.Printf("%.4f u %v\n", m.In(unit.U), err)
	}
	// Output:
	// CODATA 2022
	// k true
	// h true
	// N_A true
	// e true
	// c true
	// true
	// 70.9000 u <nil>
	// 69.9377 u <nil>
}

func Example_namedResults() {
	n, err := display.NumberOf("S°(298.15 K)", uncertain.Measured(33.1512, 0.16).WithUnit("J/(mol K)"))
	if err != nil {
		fmt.Println(err)
		return
	}
	stored, err := json.Marshal(n.View().Data[display.ResultMediaType])
	fmt.Println(n)
	fmt.Println(string(stored), err)
	// Output:
	// S°(298.15 K) = 33.15(16) J/(mol K)
	// {"name":"S°(298.15 K)","u":0.16,"unit":"J/(mol K)","value":33.1512} <nil>
}

func Example_withheldValues() {
	run, err := data.Parse("run.csv", []byte("T / K, Cp / (J K-1 mol-1), u(Cp) / (J K-1 mol-1)\n10, 0.055, 0.001\n20, 0.462, 0.005\n30, 1.69, 0.02\n40, 3.75, 0.04\n"))
	if err != nil {
		fmt.Println(err)
		return
	}
	debye := solid.Debye{Theta: 250 * unit.K}
	res, err := fit.HeatCapacity(&debye, run, fit.Vary(&debye.Theta), fit.AbsoluteSigma)
	if err != nil {
		fmt.Println(err)
		return
	}
	theta := res.Parameter(&debye.Theta)
	fmt.Println(theta.Withheld())
	fmt.Println(theta.Scale(2).Withheld() == theta.Withheld())
	// Output:
	// χ² = 105.5 for 3 degrees of freedom, 35.2 each (p < 1e-12): the model does not describe the data within their uncertainties
	// true
}

func Example_badArguments() {
	defer func() {
		err, ok := recover().(error)
		fmt.Println(ok, errors.Is(err, statmech.ErrDomain))
		fmt.Println(err)
	}()
	solid.Debye{Theta: 343 * unit.K}.HeatCapacity(-3 * unit.K)
	// Output:
	// true true
	// solid.Debye.HeatCapacity: T = -3 K, want positive and finite
}
