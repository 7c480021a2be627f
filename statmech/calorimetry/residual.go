package calorimetry

import (
	"fmt"
	"math"

	"levelsum/display"
	"levelsum/statmech"
	"levelsum/statmech/uncertain"
	"levelsum/statmech/unit"
)

// significant is the ratio to its standard uncertainty below which a residual
// entropy is called not significant. A rule of this package.
const significant = 2

// A ResidualEntropy is what an entropy computed from molecular constants has
// over the calorimetric one: disorder that froze in.
type ResidualEntropy struct {
	Difference  uncertain.Quantity // S(spectroscopic) - S(calorimetric), J/(mol K)
	Ratio       uncertain.Quantity // Difference / (R ln W)
	Model       unit.MolarEntropy  // R ln W
	W           float64
	Significant bool // Difference exceeds twice its standard uncertainty
}

// Residual compares a spectroscopic entropy with a calorimetric one, both in
// J/(mol K) for the same state (temperature, pressure, ideal gas, nuclear spin
// and isotope mixing left out on both sides), and with the disorder of W equal
// orientations of each molecule, R ln W: 5.763 J/(mol K) for W = 2 (CO), 3.371
// for 3/2 (ice, L. Pauling, J. Am. Chem. Soc. 57, 2680 (1935)).
func Residual(spectroscopic, calorimetric uncertain.Quantity, W float64) ResidualEntropy {
	if !(W > 1) || math.IsInf(W, 1) {
		panic(&statmech.DomainError{Func: "calorimetry.Residual", Arg: "W", Value: fmt.Sprint(W), Want: "a number of equal orientations above 1"})
	}
	r := ResidualEntropy{W: W, Model: unit.MolarEntropy(unit.GasConstant * math.Log(W))}
	r.Difference = spectroscopic.Minus(calorimetric).WithUnit("J/(mol K)").Named("residual entropy")
	r.Ratio = r.Difference.Scale(1 / float64(r.Model)).WithUnit("").Named("residual entropy / R ln W")
	r.Significant = r.Difference.Withheld() == "" && math.Abs(r.Difference.Value()) > significant*r.Difference.StandardUncertainty()
	return r
}

// String writes the difference, its significance and its ratio to R ln W.
func (r ResidualEntropy) String() string {
	s := fmt.Sprintf("residual entropy %v", r.Difference)
	if r.Difference.Withheld() != "" {
		return s
	}
	u := r.Difference.StandardUncertainty()
	switch {
	case u == 0:
		s += ", no uncertainty known"
	case r.Significant:
		s += fmt.Sprintf(", %.1f times its standard uncertainty", math.Abs(r.Difference.Value())/u)
	default:
		s += fmt.Sprintf(", %.1f times its standard uncertainty: not significant", math.Abs(r.Difference.Value())/u)
	}
	return s + fmt.Sprintf("; %v of R ln %.6g = %.3f J/(mol K)", r.Ratio, r.W, float64(r.Model))
}

// View shows the same.
func (r ResidualEntropy) View() display.View { return display.Text(r.String()) }
