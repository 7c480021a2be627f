package calorimetry

import (
	"fmt"
	"math"

	"levelsum/statmech"
	"levelsum/statmech/uncertain"
	"levelsum/statmech/unit"
)

// StandardPressure is the pressure of the standard state here, 1 bar. Older
// tables have 1 atm.
const StandardPressure = 1e5 * unit.Pressure(1)

// A Stage is one part of an entropy that was summed from the literature or by
// hand, in J/(mol K).
type Stage struct {
	Name    string
	Entropy uncertain.Quantity
}

// TotalEntropy returns the sum of the stages, in J/(mol K).
func TotalEntropy(stages ...Stage) uncertain.Quantity {
	qs := make([]uncertain.Quantity, len(stages))
	for i, s := range stages {
		qs[i] = s.Entropy
	}
	return uncertain.Sum(qs...).WithUnit("J/(mol K)")
}

func positive(fn, arg string, x float64, text string) {
	if !(x > 0) || math.IsInf(x, 1) {
		panic(&statmech.DomainError{Func: "calorimetry." + fn, Arg: arg, Value: text, Want: "positive and finite"})
	}
}

// Imperfection returns the entropy of the ideal gas less that of the real one
// at temperature T and pressure p, from Berthelot's equation of state,
//
//	S(ideal) - S(real) = 27 R T_c³ p / (32 p_c T³)
//
// where T_c and p_c are the critical temperature and pressure. It is an
// estimate for gases well below their critical pressure; a panic with a
// [*statmech.DomainError] tells where it is more than a fifth of R.
//
// Reference: D. Berthelot, Trav. Mém. Bur. Int. Poids Mes. 13, 113 (1907), in
// the form used by W. F. Giauque and co-workers.
func Imperfection(Tc unit.Temperature, pc unit.Pressure, T unit.Temperature, p unit.Pressure) unit.MolarEntropy {
	const fn = "Imperfection"
	positive(fn, "Tc", float64(Tc), Tc.String())
	positive(fn, "pc", float64(pc), pc.String())
	positive(fn, "T", float64(T), T.String())
	positive(fn, "p", float64(p), p.String())
	r := float64(Tc) / float64(T)
	s := 27.0 / 32 * unit.GasConstant * r * r * r * float64(p) / float64(pc)
	if limit := 0.2 * unit.GasConstant; s > limit {
		panic(&statmech.DomainError{Func: "calorimetry." + fn, Arg: "T_c, p_c, T, p", Value: fmt.Sprintf("a correction of %.3g J/(mol K)", s),
			Want: fmt.Sprintf("one below %.3g J/(mol K), where the first term of the virial series is enough", limit)})
	}
	return unit.MolarEntropy(s)
}

// ImperfectionFromVirial returns the entropy of the ideal gas less that of the
// real one from the slope of the second virial coefficient,
//
//	S(ideal) - S(real) = p dB/dT
//
// with dB/dT in m³/(mol K).
func ImperfectionFromVirial(slopeOfB float64, p unit.Pressure) unit.MolarEntropy {
	positive("ImperfectionFromVirial", "p", float64(p), p.String())
	if math.IsNaN(slopeOfB) || math.IsInf(slopeOfB, 0) {
		panic(&statmech.DomainError{Func: "calorimetry.ImperfectionFromVirial", Arg: "slopeOfB", Value: fmt.Sprint(slopeOfB), Want: "finite"})
	}
	return unit.MolarEntropy(slopeOfB * float64(p))
}

// PressureChange returns the entropy of an ideal gas at pressure to less that
// at pressure from, R ln(from/to): 0.10944 J/(mol K) from 1 atm to 1 bar.
func PressureChange(from, to unit.Pressure) unit.MolarEntropy {
	positive("PressureChange", "from", float64(from), from.String())
	positive("PressureChange", "to", float64(to), to.String())
	return unit.MolarEntropy(unit.GasConstant * math.Log(float64(from)/float64(to)))
}

// Berthelot makes a stage of [Imperfection] with an uncertainty that is a
// fraction of it (the estimate is seldom better than a tenth).
func Berthelot(Tc unit.Temperature, pc unit.Pressure, T unit.Temperature, p unit.Pressure, relative float64) Stage {
	s := float64(Imperfection(Tc, pc, T, p))
	return Stage{"gas imperfection (Berthelot)", uncertain.Measured(s, math.Abs(relative)*s).Named("gas imperfection").WithUnit("J/(mol K)")}
}

// ToStandardPressure makes a stage that takes the ideal gas from p to 1 bar.
func ToStandardPressure(p unit.Pressure) Stage {
	return Stage{fmt.Sprintf("ideal gas from %v to 1 bar", p), uncertain.Exact(float64(PressureChange(p, StandardPressure))).WithUnit("J/(mol K)")}
}

// ConstantPressure returns Cp of a condensed phase from its heat capacity along
// the saturation line,
//
//	Cp = C_sat + T (∂V/∂T)_p (dp/dT)_sat
//
// with ∂V/∂T in m³/(mol K) and dp/dT in Pa/K.
func ConstantPressure(saturation unit.MolarEntropy, T unit.Temperature, slopeOfV, slopeOfP float64) unit.MolarEntropy {
	positive("ConstantPressure", "T", float64(T), T.String())
	c := float64(saturation) + float64(T)*slopeOfV*slopeOfP
	if math.IsNaN(c) || math.IsInf(c, 0) {
		panic(&statmech.DomainError{Func: "calorimetry.ConstantPressure", Arg: "slopes", Value: fmt.Sprint(slopeOfV, ", ", slopeOfP), Want: "finite"})
	}
	return unit.MolarEntropy(c)
}
