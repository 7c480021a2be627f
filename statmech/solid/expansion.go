package solid

import (
	"fmt"
	"math"

	"levelsum/statmech"
	"levelsum/statmech/unit"
)

// Expansion gives the exact difference between the heat capacities at constant
// pressure and at constant volume,
//
//	Cp - C_V = T V α² B_T,
//
// from the molar volume V, the volume expansivity α (three times the linear
// one of a cubic crystal; confusing the two costs a factor 9, so they are
// different types) and the isothermal bulk modulus B_T, all at T and per mole
// of the formula units that C is per mole of.
//
// Accuracy: 6 × 2⁻⁵² (TestExpansion). Errors: a panic with a
// [*statmech.DomainError] if T, Volume or BulkModulus is not positive and
// finite or Expansivity is not finite.
type Expansion struct {
	Volume      unit.MolarVolume
	Expansivity unit.VolumeExpansivity
	BulkModulus unit.Pressure // isothermal; see [IsothermalBulkModulus]
}

func (e Expansion) bad() *statmech.DomainError {
	switch {
	case !positive(float64(e.Volume)):
		return field("Volume", e.Volume, wantPositive)
	case math.IsNaN(float64(e.Expansivity)) || math.IsInf(float64(e.Expansivity), 0):
		return field("Expansivity", e.Expansivity, "finite")
	case !positive(float64(e.BulkModulus)):
		return field("BulkModulus", e.BulkModulus, wantPositive)
	}
	return nil
}

// Difference returns Cp - C_V at T.
func (e Expansion) Difference(T unit.Temperature) unit.MolarEntropy {
	const fn = "solid.Expansion.Difference"
	if err := e.bad(); err != nil {
		err.Func = fn
		panic(err)
	}
	statmech.CheckTemperature(fn, T)
	a := float64(e.Expansivity)
	return unit.MolarEntropy(float64(T) * float64(e.Volume) * a * a * float64(e.BulkModulus))
}

// Differences returns Cp - C_V at every temperature, with the same V, α and
// B_T: right near the temperature they belong to. An expansivity falls with
// the heat capacity; [NernstLindemann] follows that.
func (e Expansion) Differences(ts []unit.Temperature) []unit.MolarEntropy {
	out := make([]unit.MolarEntropy, len(ts))
	for i, T := range ts {
		out[i] = e.Difference(T)
	}
	return out
}

// GrueneisenParameter returns γ = V α B_T/C_V at the heat capacity cv.
func (e Expansion) GrueneisenParameter(cv unit.MolarEntropy) float64 {
	const fn = "solid.Expansion.GrueneisenParameter"
	if err := e.bad(); err != nil {
		err.Func = fn
		panic(err)
	}
	statmech.CheckPositive(fn, "cv", cv)
	return float64(e.Volume) * float64(e.Expansivity) * float64(e.BulkModulus) / float64(cv)
}

// IsothermalBulkModulus returns B_T = B_S/(1 + T V α² B_S/Cp) from the
// adiabatic bulk modulus B_S, which is what sound velocities give.
func IsothermalBulkModulus(adiabatic unit.Pressure, T unit.Temperature, V unit.MolarVolume, alpha unit.VolumeExpansivity, cp unit.MolarEntropy) unit.Pressure {
	const fn = "solid.IsothermalBulkModulus"
	e := Expansion{V, alpha, adiabatic}
	if err := e.bad(); err != nil {
		if err.Arg == "BulkModulus" {
			err.Arg = "adiabatic"
		}
		err.Func = fn
		panic(err)
	}
	statmech.CheckTemperature(fn, T)
	statmech.CheckPositive(fn, "cp", cp)
	return adiabatic / unit.Pressure(1+float64(e.Difference(T)/cp))
}

// NernstLindemann estimates the difference between the heat capacities as
//
//	Cp - C_V = A Cp² T
//
// with one constant A for a substance. It rests on an expansivity proportional
// to the heat capacity and on V/B_T being constant, which holds to some
// per cent of the difference over a range where A was determined; where no
// expansivity is known, A is a guess with an error of tens of per cent.
//
// Errors: a panic with a [*statmech.DomainError] if T or a heat capacity is
// not positive and finite, A is negative or not finite, or a C_V has no Cp.
//
// Reference: W. Nernst and F. A. Lindemann, Z. Elektrochem. 17, 817 (1911).
type NernstLindemann struct {
	A float64 // mol/J, for heat capacities per mole of formula units
}

// NernstLindemannFromExpansion returns the estimate that is exact at T, where
// V, α and B_T are known and the heat capacity is cp.
func NernstLindemannFromExpansion(e Expansion, T unit.Temperature, cp unit.MolarEntropy) NernstLindemann {
	statmech.CheckPositive("solid.NernstLindemannFromExpansion", "cp", cp)
	return NernstLindemann{float64(e.Difference(T)) / (float64(cp) * float64(cp) * float64(T))}
}

// NernstLindemannFromMelting returns the universal estimate A = A₀/(n T_m),
// A₀ = 5.12e-3 K mol/J, for n atoms in the formula unit and the melting
// temperature T_m. It is an order of magnitude, not a measurement.
func NernstLindemannFromMelting(melting unit.Temperature, atoms int) NernstLindemann {
	const fn = "solid.NernstLindemannFromMelting"
	if _, err := temperature(fn, "melting", melting); err != nil {
		panic(err)
	}
	if atoms < 1 {
		panic(&statmech.DomainError{Func: fn, Arg: "atoms", Value: fmt.Sprint(atoms), Want: "the number of atoms in the formula unit, at least 1"})
	}
	return NernstLindemann{5.12e-3 / (float64(atoms) * float64(melting))}
}

func (n NernstLindemann) check(fn string, T unit.Temperature, arg string, c unit.MolarEntropy) {
	if !notNegative(n.A) {
		panic(&statmech.DomainError{Func: fn, Arg: "A", Value: fmt.Sprintf("%g mol/J", n.A), Want: wantNotNegative})
	}
	statmech.CheckTemperature(fn, T)
	statmech.CheckPositive(fn, arg, c)
}

// Difference returns Cp - C_V where Cp is known.
func (n NernstLindemann) Difference(T unit.Temperature, cp unit.MolarEntropy) unit.MolarEntropy {
	n.check("solid.NernstLindemann.Difference", T, "cp", cp)
	return unit.MolarEntropy(n.A * float64(cp) * float64(cp) * float64(T))
}

// ConstantVolume returns C_V from Cp.
func (n NernstLindemann) ConstantVolume(T unit.Temperature, cp unit.MolarEntropy) unit.MolarEntropy {
	const fn = "solid.NernstLindemann.ConstantVolume"
	n.check(fn, T, "cp", cp)
	cv := cp - n.Difference(T, cp)
	if !(cv > 0) {
		panic(&statmech.DomainError{Func: fn, Arg: "cp", Value: cp.String() + " at " + T.String(), Want: "less than 1/(A T), beyond which no C_V is left"})
	}
	return cv
}

// ConstantVolumes returns C_V from Cp at every temperature.
func (n NernstLindemann) ConstantVolumes(ts []unit.Temperature, cp []unit.MolarEntropy) []unit.MolarEntropy {
	const fn = "solid.NernstLindemann.ConstantVolumes"
	sameLength(fn, "cp", len(cp), len(ts))
	out := make([]unit.MolarEntropy, len(ts))
	for i, T := range ts {
		out[i] = n.ConstantVolume(T, cp[i])
	}
	return out
}

// ConstantPressure returns Cp from C_V, the smaller root of
// Cp = C_V + A Cp² T.
func (n NernstLindemann) ConstantPressure(T unit.Temperature, cv unit.MolarEntropy) unit.MolarEntropy {
	const fn = "solid.NernstLindemann.ConstantPressure"
	n.check(fn, T, "cv", cv)
	d := 1 - 4*n.A*float64(T)*float64(cv)
	if d < 0 {
		panic(&statmech.DomainError{Func: fn, Arg: "cv", Value: cv.String() + " at " + T.String(), Want: "at most 1/(4 A T), beyond which the estimate has no Cp"})
	}
	return 2 * cv / unit.MolarEntropy(1+math.Sqrt(d))
}

// ConstantPressures returns Cp from C_V at every temperature.
func (n NernstLindemann) ConstantPressures(ts []unit.Temperature, cv []unit.MolarEntropy) []unit.MolarEntropy {
	const fn = "solid.NernstLindemann.ConstantPressures"
	sameLength(fn, "cv", len(cv), len(ts))
	out := make([]unit.MolarEntropy, len(ts))
	for i, T := range ts {
		out[i] = n.ConstantPressure(T, cv[i])
	}
	return out
}

func sameLength(fn, arg string, got, want int) {
	if got != want {
		panic(&statmech.DomainError{Func: fn, Arg: arg, Value: fmt.Sprintf("%d values", got), Want: fmt.Sprintf("one for each of %d temperatures", want)})
	}
}

// Dilated is the heat capacity at constant pressure of a lattice whose C_V is
// Lattice, by the estimate of [NernstLindemann]: the term with which a lattice
// model is fitted to Cp above a third of its Debye temperature, where Cp is
// not C_V. A may be free in the fit.
type Dilated struct {
	Lattice Term
	A       float64 // mol/J, for heat capacities per mole of formula units
}

// HeatCapacity returns Cp at T.
func (d Dilated) HeatCapacity(T unit.Temperature) unit.MolarEntropy {
	return NernstLindemann{d.A}.ConstantPressure(T, d.Lattice.HeatCapacity(T))
}

// HeatCapacities returns Cp at every temperature.
func (d Dilated) HeatCapacities(ts []unit.Temperature) []unit.MolarEntropy {
	return NernstLindemann{d.A}.ConstantPressures(ts, HeatCapacities(d.Lattice, ts))
}

// ModeCount returns the number of vibrations in the formula unit.
func (d Dilated) ModeCount() float64 { return Sum{d.Lattice}.ModeCount() }

// String names the lattice and A.
func (d Dilated) String() string {
	return fmt.Sprintf("Dilated{Lattice: %v, A: %.6g mol/J}", d.Lattice, d.A)
}

// Owns implements [Differentiable]. The lattice's own fields keep their names,
// with a note that they are those of C_V.
func (d *Dilated) Owns(p *float64) (string, bool) {
	if p == &d.A {
		return "A", true
	}
	if inner, ok := d.Lattice.(Differentiable); ok {
		if name, ok := inner.Owns(p); ok {
			return name + " (C_V)", true
		}
	}
	return "", false
}

// Accumulate implements [Differentiable] for A and the lattice's fields:
// ∂Cp/∂C_V = 1/(1-2ATCp), ∂Cp/∂A = T Cp²/(1-2ATCp).
func (d *Dilated) Accumulate(ts []unit.Temperature, at []*float64, c []float64, partials [][]float64) error {
	const fn = "solid.Dilated.Accumulate"
	if !notNegative(d.A) {
		return &statmech.DomainError{Func: fn, Arg: "A", Value: fmt.Sprintf("%g mol/J", d.A), Want: wantNotNegative}
	}
	cv := make([]float64, len(ts))
	inner := make([][]float64, len(at))
	for j := range inner {
		inner[j] = make([]float64, len(ts))
	}
	if err := (Sum{d.Lattice}).Accumulate(ts, at, cv, inner); err != nil {
		return err
	}
	for i, T := range ts {
		disc := 1 - 4*d.A*float64(T)*cv[i]
		if !(disc > 0) {
			return &statmech.DomainError{Func: fn, Arg: "A", Value: fmt.Sprintf("%g mol/J", d.A),
				Want: fmt.Sprintf("less than 1/(4 T C_V) = %.3g mol/J at %v", 1/(4*float64(T)*cv[i]), T)}
		}
		root := math.Sqrt(disc) // 1 - 2ATCp
		cp := 2 * cv[i] / (1 + root)
		if c != nil {
			c[i] += cp
		}
		for j, p := range at {
			partials[j][i] += inner[j][i] / root
			if p == &d.A {
				partials[j][i] += float64(T) * cp * cp / root
			}
		}
	}
	return nil
}
