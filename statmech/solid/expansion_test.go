package solid

import (
	"math"
	"strings"
	"testing"

	"levelsum/statmech/unit"
)

func TestExpansion(t *testing.T) {
	// Copper at 298.15 K: V = 7.11e-6 m³/mol, volume expansivity 4.95e-5 per
	// kelvin, B_T = 133 GPa; the product is 0.6908 J/(mol K).
	e := Expansion{Volume: 7.11e-6, Expansivity: 4.95e-5, BulkModulus: 133 * unit.GPa}
	T := 298.15 * unit.K
	near(t, "Cp - C_V", float64(e.Difference(T)), 0.6908, 1e-4)
	near(t, "from the linear expansivity", float64(Expansion{7.11e-6, unit.LinearExpansivity(1.65e-5).Volume(), 133 * unit.GPa}.Difference(T)), 0.6908, 1e-4)
	cp := 24.44 * unit.JPerMolK
	// B_S/B_T = Cp/C_V
	bs := e.BulkModulus * unit.Pressure(cp/(cp-e.Difference(T)))
	near(t, "B_T from B_S", float64(IsothermalBulkModulus(bs, T, e.Volume, e.Expansivity, cp)), 133e9, 1e-14)
	near(t, "gamma", e.GrueneisenParameter(cp-e.Difference(T)), 7.11e-6*4.95e-5*133e9/23.7492, 1e-5)
	n := NernstLindemannFromExpansion(e, T, cp)
	near(t, "estimate at its own temperature", float64(n.Difference(T, cp)), float64(e.Difference(T)), 1e-15)
	cv := n.ConstantVolume(T, cp)
	near(t, "there and back", float64(n.ConstantPressure(T, cv)), float64(cp), 1e-14)
	near(t, "slices", float64(n.ConstantPressures([]unit.Temperature{T}, n.ConstantVolumes([]unit.Temperature{T}, []unit.MolarEntropy{cp}))[0]), float64(cp), 1e-14)
	// 0.00512/1357.77 per mole of atoms; two atoms at the same C per atom give
	// the same difference per atom.
	one, two := NernstLindemannFromMelting(1357.77*unit.K, 1), NernstLindemannFromMelting(1357.77*unit.K, 2)
	near(t, "per atom", float64(two.Difference(T, 2*cp)), 2*float64(one.Difference(T, cp)), 1e-14)
	for _, test := range []struct {
		want string
		f    func()
	}{
		{"solid.Expansion.Difference: BulkModulus = 0 Pa, want positive and finite", func() { Expansion{Volume: 1}.Difference(1) }},
		{"solid.Expansion.Difference: T = -1 K, want positive and finite", func() { e.Difference(-1) }},
		{"solid.NernstLindemannFromMelting: atoms = 0, want the number of atoms in the formula unit, at least 1", func() { NernstLindemannFromMelting(1000, 0) }},
		{"solid.NernstLindemann.ConstantPressures: cv = 1 values, want one for each of 2 temperatures", func() { n.ConstantPressures(make([]unit.Temperature, 2), make([]unit.MolarEntropy, 1)) }},
	} {
		if got := message(test.f); got != test.want {
			t.Errorf("got  %s\nwant %s", got, test.want)
		}
	}
	if got := message(func() { NernstLindemann{1}.ConstantPressure(300, 25) }); !strings.Contains(got, "has no Cp") {
		t.Errorf("a C_V without Cp: %s", got)
	}
}

func TestEffectiveThetas(t *testing.T) {
	// The Debye model returns its own temperature, within 0.01 K for T from
	// 0.02 to 0.5 of it and as far as the amplification of rounding allows
	// beyond.
	d := Debye{Theta: 343.2 * unit.K}
	var ts []unit.Temperature
	var cv, u []unit.MolarEntropy
	for x := 0.002; x < 50; x *= 1.1 {
		T := unit.Temperature(x) * d.Theta
		ts, cv = append(ts, T), append(cv, d.HeatCapacity(T))
		u = append(u, 0.01*d.HeatCapacity(T))
	}
	curve, err := EffectiveThetas(ts, cv, u, 3)
	if err != nil {
		t.Fatal(err)
	}
	largest := 0.0
	for _, e := range curve {
		largest = max(largest, math.Abs(float64(e.Theta/d.Theta-1))/max(1, e.Amplification))
		if diff := math.Abs(float64(e.Theta - d.Theta)); diff > 343.2*1e-14*max(1, e.Amplification) || e.T < d.Theta/2 && diff > 0.01 {
			t.Errorf("at %v: %v, off by %g (amplification %g)", e.T, e.Theta, diff, e.Amplification)
		}
		if !(e.Low <= e.Theta && e.Theta <= e.High) || e.Amplification < 1 && math.Abs(float64((e.High-e.Low)/2/e.U)-1) > 1e-3 {
			t.Errorf("at %v: %v in %v … %v, u %v", e.T, e.Theta, e.Low, e.High, e.U)
		}
	}
	t.Logf("accuracy: EffectiveThetas | T/θ from 0.002 to 50 | relative, over the amplification | %.3g | 1e-14 | the model inverted", largest)
	// |d ln θ/d ln C| = 0.33 (T << θ), 0.84 (θ/4), 2.7 (θ/2), 10.2 (θ), 40 (2θ),
	// computed with 50 digits.
	for _, test := range []struct{ ratio, want, half float64 }{{0.01, 1.0 / 3, 1e-6}, {0.25, 0.84, 0.005}, {0.5, 2.7, 0.05}, {1, 10.2, 0.05}, {2, 40, 0.5}} {
		T := unit.Temperature(test.ratio) * d.Theta
		e, err := EffectiveThetas([]unit.Temperature{T}, []unit.MolarEntropy{d.HeatCapacity(T)}, []unit.MolarEntropy{0}, 0+3)
		if err != nil {
			t.Fatal(err)
		}
		if math.Abs(e[0].Amplification-test.want) > test.half {
			t.Errorf("amplification at %g θ = %g, want %g", test.ratio, e[0].Amplification, test.want)
		}
	}
	// No solution above n R or below 0: a gap with words, not a number.
	gap, err := EffectiveThetas([]unit.Temperature{300, 300, 300}, []unit.MolarEntropy{25, -1, 24.9}, []unit.MolarEntropy{0.1, 0.1, 0.1}, 3)
	if err != nil {
		t.Fatal(err)
	}
	if gap[0].Theta != 0 || gap[0].Problem == "" || gap[1].Problem == "" || gap[2].Problem != "" || gap[2].Low != 0 {
		t.Errorf("%v", gap)
	}
	for _, bad := range []func() ([]EffectiveTheta, error){
		func() ([]EffectiveTheta, error) {
			return EffectiveThetas([]unit.Temperature{1}, nil, nil, 3)
		},
		func() ([]EffectiveTheta, error) {
			return EffectiveThetas([]unit.Temperature{1}, []unit.MolarEntropy{1}, nil, 3)
		},
		func() ([]EffectiveTheta, error) {
			return EffectiveThetas([]unit.Temperature{0}, []unit.MolarEntropy{1}, []unit.MolarEntropy{1}, 3)
		},
		func() ([]EffectiveTheta, error) {
			return EffectiveThetas([]unit.Temperature{1}, []unit.MolarEntropy{1}, []unit.MolarEntropy{-1}, 3)
		},
		func() ([]EffectiveTheta, error) {
			return EffectiveThetas([]unit.Temperature{1}, []unit.MolarEntropy{1}, []unit.MolarEntropy{1}, 0)
		},
	} {
		if _, err := bad(); err == nil {
			t.Error("bad input was accepted")
		}
	}
}

func TestEffectiveThetasMeasured(t *testing.T) {
	// Copper, White & Collocott 1984 (see the file), up to θ/50, beyond which
	// real lattices leave their T³ law, less the electrons' γT: 344.3 K and γ = 0.691 mJ/(mol K²), D. L. Martin, Phys.
	// Rev. B 8, 5357 (1973). The table's 1 % is the tolerance.
	gamma := Electronic{Gamma: 0.691 * unit.MilliJPerMolK2}
	var ts []unit.Temperature
	var cv, u []unit.MolarEntropy
	for _, row := range readReference(t, "white-collocott-1984", "copper.csv") {
		T := unit.Temperature(number(t, row[0]))
		if T > 344.3/50 {
			break
		}
		cp := unit.MolarEntropy(number(t, row[1]))
		ts, cv, u = append(ts, T), append(cv, cp-gamma.HeatCapacity(T)), append(u, 0.01*cp)
	}
	curve, err := EffectiveThetas(ts, cv, u, 3)
	if err != nil {
		t.Fatal(err)
	}
	if len(curve) < 5 {
		t.Fatalf("%d points of copper up to θ/50", len(curve))
	}
	for _, e := range curve {
		if d := e.Theta - 344.3*unit.K; math.Abs(float64(d)) > float64(e.U) {
			t.Errorf("copper at %v: %v ± %v, want 344.3 K", e.T, e.Theta, e.U)
		}
	}
	// Aluminium at 10 K: Cp 0.0378 J/(mol K) (R. J. Corruccini and J. J.
	// Gniewek, NBS Monograph 21, 1960), γ = 1.35 mJ/(mol K²) and θ = 428 K
	// (C. Kittel, Introduction to Solid State Physics, tables of chapters 5 and
	// 6), all from memory; 1 %. Lead at 10 K: 2.8 J/(mol K) (textbook table,
	// from memory, two digits), γ = 2.98 mJ/(mol K²): 87 K, and not the 105 K of
	// the elastic limit, which lead has left at θ/10.
	for _, test := range []struct {
		name       string
		cp, gamma  float64
		want, half float64
	}{{"aluminium", 0.0378, 1.35e-3, 428, 4.3}, {"lead", 2.8, 2.98e-3, 87, 1}} {
		c := unit.MolarEntropy(test.cp - test.gamma*10)
		e, err := EffectiveThetas([]unit.Temperature{10}, []unit.MolarEntropy{c}, []unit.MolarEntropy{0.01 * c}, 3)
		if err != nil {
			t.Fatal(err)
		}
		if math.Abs(float64(e[0].Theta)-test.want) > test.half {
			t.Errorf("%s at 10 K: %v, want %g", test.name, e[0], test.want)
		}
	}
}
