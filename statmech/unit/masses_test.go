package unit

import (
	"math"
	"testing"
)

// The mean of the isotopic masses is the standard atomic weight within what is
// stated for both, and the abundances add up to 1: two tables check each other.
func TestElementsConsistent(t *testing.T) {
	for _, e := range Elements() {
		sum, mean, v := 0.0, 0.0, 0.0
		for _, i := range e.Isotopes {
			sum += i.Abundance
			mean += i.Abundance * i.Mass.In(U)
		}
		for _, i := range e.Isotopes {
			d := (i.Mass.In(U) - mean) * i.AbundanceUncertainty
			v += d * d
		}
		if math.Abs(sum-1) > 2.1e-4 {
			t.Errorf("%s: abundances add up to %.6f", e.Symbol, sum)
		}
		mean /= sum
		// Half a unit of the last printed digit of the abridged weight is inside its u.
		if d := math.Abs(mean - e.Mass.In(U)); d > e.StandardUncertainty.In(U)+2*math.Sqrt(v) {
			t.Errorf("%s: mean isotopic mass %.6f, atomic weight %.6f ± %.6f (isotopes ± %.6f)", e.Symbol, mean, e.Mass.In(U), e.StandardUncertainty.In(U), math.Sqrt(v))
		}
	}
}

func TestIsotopeOf(t *testing.T) {
	// NIST, Atomic Weights and Isotopic Compositions 4.1: masses of AME 2012
	// (iodine ± 3e-8 of itself; the table here is AME 2020).
	for name, want := range map[string]float64{
		"1H": 1.00782503223, "D": 2.01410177812, "H-2": 2.01410177812, "12C": 12, "14N": 14.00307400443, "16O": 15.99491461957,
		"35Cl": 34.968852682, "127I": 126.9044719, "32S": 31.9720711744, "19F": 18.99840316273,
	} {
		i, err := IsotopeOf(name)
		if err != nil || !near(i.Mass.In(U), want, 1e-8) {
			t.Errorf("IsotopeOf(%q) = %.11f, %v; want %.11f", name, i.Mass.In(U), err, want)
		}
	}
	for _, name := range []string{"", "Cl", "36Cl", "3", "Xx-3", "35"} {
		if i, err := IsotopeOf(name); err == nil {
			t.Errorf("IsotopeOf(%q) = %v", name, i)
		}
	}
	if _, err := ElementOf("Tc"); err == nil {
		t.Error("technetium has a standard atomic weight")
	}
	if e, err := ElementOf("Cl"); err != nil || e.MostAbundant().String() != "35Cl" || !near(e.Mass.In(U), 35.45, 1e-12) {
		t.Errorf("chlorine: %+v, %v", e, err)
	}
}
