package solid

import (
	"math"
	"testing"

	"levelsum/statmech/unit"
)

func TestSuperconductor(t *testing.T) {
	gamma := 7.8 * unit.MilliJPerMolK2
	largest := 0.0
	for _, row := range readReference(t, "mpmath", "superconductor.csv") {
		s := Superconductor{Gamma: gamma, Tc: 9.25 * unit.K}
		if row[0] != "weak" {
			s.GapRatio = number(t, row[0])
		}
		x := number(t, row[1])
		T := unit.Temperature(x) * s.Tc
		for i, got := range []float64{float64(s.HeatCapacity(T)), float64(s.Entropy(T))} {
			e := math.Abs(got/(float64(gamma)*float64(T))/number(t, row[2+i]) - 1)
			largest = max(largest, e)
			// Half an eps of t moves the exponent Δ/kT by up to 40 half eps.
			if !(e <= 1e-11) {
				t.Errorf("gap %s, t = %s: column %d = %.16g, off by %.2g", row[0], row[1], i, got/(float64(gamma)*float64(T)), e)
			}
		}
	}
	t.Logf("accuracy: Superconductor | C and S from 0.06 to 0.97 Tc | relative | %.3g | 1e-11 | 15 digits (mpmath)", largest)
	// The jump of weak coupling, 12/(7ζ(3)) = 1.42613 γTc, ζ(3) = 1.2020569.
	s := Superconductor{Gamma: gamma, Tc: 9.25 * unit.K}
	jump := float64(s.HeatCapacity(s.Tc*(1-1e-9))/s.HeatCapacity(s.Tc)) - 1
	near(t, "jump", jump, 12/(7*1.2020569031595942), 1e-7)
	// It grows as the square of the gap.
	s.GapRatio = 2
	near(t, "jump of a larger gap", float64(s.HeatCapacity(s.Tc*(1-1e-9))/s.HeatCapacity(s.Tc))-1, jump*4/(weakCoupling*weakCoupling), 1e-6)
	// The entropy is continuous at Tc and is the normal one there.
	for _, ratio := range []float64{0, 1.2, 2.5} {
		s.GapRatio = ratio
		near(t, "S(Tc)", float64(s.Entropy(s.Tc*(1-1e-12))), float64(Electronic{Gamma: gamma}.Entropy(s.Tc)), 1e-9)
		near(t, "integral of C/T", float64(Sum{OfTerm{s}}.EntropyIncrement(0.05, s.Tc*(1-1e-12))), float64(s.Entropy(s.Tc)), 1e-7)
		near(t, "above Tc", float64(s.HeatCapacity(20)), float64(gamma)*20, 1e-14)
		near(t, "ΔH above Tc", float64(s.EnthalpyIncrement(10, 20)), float64(gamma)*150, 1e-8)
	}
	// Condensation energy of weak coupling: F_n - F_s at 0 K is
	// (3/4π²)(Δ/kTc)² γTc² = 0.2364 γTc²; U(T) - U(0) carries it above Tc.
	s.GapRatio = 0
	u := float64(s.ThermalEnergy(20))/(float64(gamma)*9.25*9.25) - 0.5*20*20/(9.25*9.25)
	near(t, "condensation energy", u, 3/(4*math.Pi*math.Pi)*weakCoupling*weakCoupling, 1e-8)
	// Both sides of the change of series.
	lo, _ := gapEquation(1 - 1e-12)
	hi, _ := gapEquation(1)
	near(t, "join of the gap equation", lo, hi, 1e-11)
}
