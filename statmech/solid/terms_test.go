package solid

import (
	"math"
	"testing"

	"levelsum/statmech"
	"levelsum/statmech/unit"
)

// referenceTerm returns the model of a row of solid_terms.csv.
func referenceTerm(t *testing.T, row []string) statmech.Mode {
	p := func(i int) float64 {
		if row[i] == "" {
			return 0
		}
		return number(t, row[i])
	}
	switch row[0] {
	case "tarasov":
		return Tarasov{Theta1: unit.Temperature(p(1)), Theta2: unit.Temperature(p(2)), Theta3: unit.Temperature(p(3)), Modes: 1}
	case "ferro":
		return FerroSpinWave{Coefficient: unit.GasConstant, Gap: unit.Temperature(p(1))}
	case "antiferro":
		return AntiferroSpinWave{Coefficient: unit.GasConstant, Gap: unit.Temperature(p(1))}
	case "expgap":
		return ExponentialGap{A: unit.R, Gap: unit.Temperature(p(1))}
	case "spin52":
		s := Schottky{}
		for i := range 6 {
			s.Energies = append(s.Energies, unit.Energy(p(1)*float64(i*i))*unit.KelvinEnergy)
		}
		return s
	}
	t.Fatalf("no model %q", row[0])
	return nil
}

var termNames = map[string]string{
	"tarasov": "Tarasov", "ferro": "FerroSpinWave", "antiferro": "AntiferroSpinWave", "expgap": "ExponentialGap", "spin52": "Schottky, 6 levels",
}

func checkTerms(t *testing.T, names map[string]float64) {
	t.Helper()
	largest := map[string]float64{}
	for _, row := range readReference(t, "mpmath", "solid_terms.csv") {
		tolerance, ok := names[row[0]]
		if !ok {
			continue
		}
		m := referenceTerm(t, row)
		T := unit.Temperature(number(t, row[4]))
		r := m.Reduced(T)
		for i, got := range []float64{r.LogQ, r.U, r.C, r.Entropy()} {
			want := number(t, row[5+i])
			// The argument E/kT itself is rounded: half an eps of x moves e^-x by x/2 eps.
			scale := tolerance + 2e-16*number(t, row[1])/float64(T)
			if e := math.Abs(got/want - 1); !(e <= scale) {
				t.Errorf("%v T=%v: column %d = %.17g, want %.17g (%.2g)", row[:4], T, i, got, want, e)
			} else {
				largest[row[0]] = max(largest[row[0]], e)
			}
		}
	}
	for name := range names {
		t.Logf("accuracy: %s | ln q, U, C, S of testdata/mpmath/solid_terms.csv | relative | %.3g | %.2g | 20 digits (mpmath)", termNames[name], largest[name], names[name])
		if largest[name] == 0 {
			t.Errorf("%s: no row was compared", name)
		}
	}
}

func TestTarasov(t *testing.T) {
	checkTerms(t, map[string]float64{"tarasov": 3e-14})
	one := Tarasov{Theta1: 343 * unit.K, Theta2: 343 * unit.K, Theta3: 343 * unit.K}
	deb := Debye{Theta: 343 * unit.K}
	for _, T := range []unit.Temperature{0.001, 1, 30, 300, 1e5} {
		near(t, "equal temperatures", float64(one.HeatCapacity(T)), float64(deb.HeatCapacity(T)), 1e-14)
		near(t, "equal temperatures, S", float64(one.Entropy(T)), float64(deb.Entropy(T)), 1e-14)
	}
	near(t, "zero-point energy", float64(one.ZeroPointEnergy()), float64(deb.ZeroPointEnergy()), 1e-14)
	chain, line := Tarasov{Theta1: 500}, Debye1D{Theta: 500}
	near(t, "chain", float64(chain.HeatCapacity(20)), float64(line.HeatCapacity(20)), 1e-14)
	near(t, "chain, zero-point", float64(chain.ZeroPointEnergy()), float64(line.ZeroPointEnergy()), 1e-14)
	layer, plane := Tarasov{Theta1: 500, Theta2: 500}, Debye2D{Theta: 500}
	near(t, "layer", float64(layer.HeatCapacity(20)), float64(plane.HeatCapacity(20)), 1e-14)
	near(t, "layer, zero-point", float64(layer.ZeroPointEnergy()), float64(plane.ZeroPointEnergy()), 1e-14)
	// The formula with its cancelling terms, where they do not cancel much.
	a := Tarasov{Theta1: 600, Theta2: 300, Theta3: 120, Modes: 3}
	c := func(d Term) float64 { return float64(d.HeatCapacity(150)) }
	want := c(Debye1D{Theta: 600}) - 0.5*(c(Debye1D{Theta: 300})-c(Debye2D{Theta: 300})) -
		120.0*120/(600*300)*(c(Debye2D{Theta: 120})-c(Debye{Theta: 120}))
	near(t, "published formula", c(a), want, 1e-14)
	// Both sides of the switch to tails.
	T := unit.Temperature(120.0 / tailFrom)
	near(t, "join", float64(a.HeatCapacity(T*(1-1e-14))), float64(a.HeatCapacity(T*(1+1e-14))), 1e-12)
}

func TestSpinWaves(t *testing.T) {
	checkTerms(t, map[string]float64{"ferro": 1e-14, "antiferro": 1e-13})
}

func TestTails(t *testing.T) {
	checkTerms(t, map[string]float64{"expgap": 2e-14})
	n := NuclearTail{A: 2}
	near(t, "nuclear C", float64(n.HeatCapacity(0.5)), 8, 1e-15)
	near(t, "nuclear ΔS", float64(n.EntropyIncrement(0.5, 2)), 4-0.25, 1e-15)
	near(t, "nuclear ΔH", float64(n.EnthalpyIncrement(0.5, 2)), 4-1, 1e-15)
	p := PowerLaw{Coefficient: 2, Power: 3}
	near(t, "power C", float64(p.HeatCapacity(2)), 16, 1e-15)
	near(t, "power S", float64(p.Entropy(2)), 16.0/3, 1e-15)
	near(t, "power U", float64(p.ThermalEnergy(2)), 8, 1e-15)
	if got, want := message(func() { Sum{n}.Entropy(2) }), "solid.Sum.Entropy: term 1 = NuclearTail, want a term with an entropy from T = 0; EntropyIncrement needs none"; got != want {
		t.Errorf("got  %s\nwant %s", got, want)
	}
}

func TestSchottky(t *testing.T) {
	checkTerms(t, map[string]float64{"spin52": 1e-14})
	// Two levels of equal weight: maximum C/k = 0.439228839890646 at
	// x = 2.39935728052 (50 digits).
	T := 10 * unit.K
	two := Schottky{Energies: []unit.Energy{0, 23.9935728052 * unit.KelvinEnergy}}
	near(t, "maximum", two.Reduced(T).C, 0.439228839890646, 1e-14)
	// R ln(2S+1), S = 1/2 … 5/2, as the limit of S(T → ∞).
	for i, want := range []float64{5.763, 9.134, 11.526, 13.382, 14.898} {
		s := Schottky{}
		for k := range i + 2 {
			s.Energies = append(s.Energies, unit.Energy(k)*unit.KelvinEnergy)
		}
		if got := float64(s.Entropy(1e6 * unit.K)); math.Abs(got-want) > 5e-4 {
			t.Errorf("S of %d levels = %.4f, want %.3f", i+2, got, want)
		}
	}
	// Magnetic entropy of a ladder of S = 5/2 by integration of C/T from 0.01
	// to 1000 splittings: R ln 6 = 14.89752 within 1e-4.
	ladder := Schottky{}
	for k := range 6 {
		ladder.Energies = append(ladder.Energies, unit.Energy(k)*unit.KelvinEnergy)
	}
	if got := float64(Sum{OfTerm{ladder}}.EntropyIncrement(0.01, 1000)); math.Abs(got-14.89752) > 1e-4 {
		t.Errorf("integral of C/T = %.5f, want 14.89752", got)
	}
	// Order and zero of the energies do not matter.
	a := Schottky{Energies: []unit.Energy{5 * unit.MilliEV, 0, 2 * unit.MilliEV}, Degeneracies: []float64{3, 1, 2}}
	b := Schottky{Energies: []unit.Energy{-7 * unit.MilliEV, -5 * unit.MilliEV, -2 * unit.MilliEV}, Degeneracies: []float64{1, 2, 3}}
	for _, T := range []unit.Temperature{1, 9, 40, 300} {
		near(t, "shifted C", b.Reduced(T).C, a.Reduced(T).C, 1e-12)
		near(t, "shifted S", b.Reduced(T).Entropy(), a.Reduced(T).Entropy(), 1e-12)
	}
	for _, bad := range []Schottky{{}, {Energies: []unit.Energy{0, 1}, Degeneracies: []float64{1}}, {Energies: []unit.Energy{0}, Degeneracies: []float64{0}}, {Energies: []unit.Energy{0}, Sites: -1}} {
		if got := message(func() { bad.HeatCapacity(1) }); got == "no panic" {
			t.Errorf("%v was accepted", bad)
		}
	}
}

func TestTermDomain(t *testing.T) {
	for _, test := range []struct {
		want string
		f    func()
	}{
		{"solid.Tarasov.HeatCapacity: Theta2 = 600 K, want from 0 to Theta1 = 500 K", func() { Tarasov{Theta1: 500, Theta2: 600}.HeatCapacity(1) }},
		{"solid.FerroSpinWave.Entropy: Gap = -1 K, want not negative, and finite", func() { FerroSpinWave{Coefficient: 1, Gap: -1}.Entropy(1) }},
		{"solid.NuclearTail.EntropyIncrement: T = 0 K, want positive and finite", func() { NuclearTail{A: 1}.EntropyIncrement(0, 1) }},
		{"solid.ExponentialGap.HeatCapacity: Gap = 0 K, want positive and finite", func() { ExponentialGap{A: 1}.HeatCapacity(1) }},
		{"solid.PowerLaw.HeatCapacity: Power = 0, want positive and finite", func() { PowerLaw{Coefficient: 1}.HeatCapacity(1) }},
		{"solid.Sum.EntropyIncrement: from = 0 K, want positive and finite", func() { Sum{Debye{Theta: 1}}.EntropyIncrement(0, 1) }},
	} {
		if got := message(test.f); got != test.want {
			t.Errorf("got  %s\nwant %s", got, test.want)
		}
	}
}

// TestAudit runs the library's own audit, which differentiates and integrates
// by routes of its own, over every model with a partition function.
func TestAudit(t *testing.T) {
	for _, m := range models() {
		mode, ok := m.(statmech.Mode)
		if !ok {
			continue
		}
		o := statmech.AuditOptions{From: 2 * unit.K, To: 2000 * unit.K, Points: 40}
		if r := statmech.Audit(mode, o); !r.OK() {
			t.Errorf("%v: %v", m, r)
		}
	}
}
