package gas

import (
	"math"

	"levelsum/statmech"
	"levelsum/statmech/unit"
)

// Translation is the motion of the molecules of an ideal gas as a whole, with
// the 1/N! of identical particles shared out, so that one molecule's share is
//
//	at fixed pressure:  {ln(q/N), 5/2, 5/2},      q/N = kT/(pΛ³)
//	at fixed volume:    {ln(q/N)+1, 3/2, 3/2},    q/N = v/Λ³
//
// with Λ = h/√(2πmkT), m the mass of the molecule, v the volume per molecule.
// At fixed pressure the energy functions of a molecule that contains it are
// enthalpies and its heat capacity is Cp; at fixed volume they are internal
// energies and C_V. The entropy is the same for both: the Sackur-Tetrode
// equation S/k = ln(q/N) + 5/2.
//
// Exactly one of Pressure and VolumePerParticle is set.
//
// Range: pΛ³/kT ≪ 1, see [Translation.Degeneracy] and [Translation.Warnings].
//
// Accuracy: rounding 1e-15 of S; against CODATA key values in
// TestMonatomicPublished.
//
// Reference: O. Sackur, Ann. Phys. 345, 67 (1913); H. Tetrode, Ann. Phys. 343,
// 434 (1912).
type Translation struct {
	Mass              unit.Mass
	Pressure          unit.Pressure
	VolumePerParticle unit.Volume
}

// Reduced returns the functions at temperature T. It panics with a
// [*statmech.DomainError] if T, Mass or the pressure or volume is not positive
// and finite, or if both or none of the two are set.
func (t Translation) Reduced(T unit.Temperature) statmech.Reduced {
	lq := t.logQOverN("gas.Translation.Reduced", T)
	if t.Pressure != 0 {
		return statmech.Reduced{LogQ: lq, U: 2.5, C: 2.5}
	}
	return statmech.Reduced{LogQ: lq + 1, U: 1.5, C: 1.5}
}

// logQOverN returns ln(v/Λ³).
func (t Translation) logQOverN(fn string, T unit.Temperature) float64 {
	statmech.CheckTemperature(fn, T)
	statmech.CheckPositive(fn, "Mass", t.Mass)
	if t.Pressure != 0 && t.VolumePerParticle != 0 {
		panic(&statmech.DomainError{Func: fn, Arg: "Pressure", Value: t.Pressure.String(), Want: "either a pressure or a volume per particle, not both"})
	}
	kt := unit.Boltzmann * float64(T)
	var v float64
	if t.VolumePerParticle != 0 {
		statmech.CheckPositive(fn, "VolumePerParticle", t.VolumePerParticle)
		v = float64(t.VolumePerParticle)
	} else {
		statmech.CheckPositive(fn, "Pressure", t.Pressure)
		v = kt / float64(t.Pressure)
	}
	// 2πmkT/h² in two steps, each inside the range of float64.
	x := 2 * math.Pi * (float64(t.Mass) / unit.Planck) * (kt / unit.Planck) // Λ⁻², m⁻²
	return math.Log(x * math.Sqrt(x) * v)
}

// ThermalWavelength returns Λ = h/√(2πmkT).
func (t Translation) ThermalWavelength(T unit.Temperature) unit.Length {
	const fn = "gas.Translation.ThermalWavelength"
	statmech.CheckTemperature(fn, T)
	statmech.CheckPositive(fn, "Mass", t.Mass)
	return unit.Length(1 / math.Sqrt(2*math.Pi*(float64(t.Mass)/unit.Planck)*(unit.Boltzmann*float64(T)/unit.Planck)))
}

// Degeneracy returns nΛ³, the number of molecules in the cube of the thermal
// wavelength. The classical gas needs it to be much less than 1.
func (t Translation) Degeneracy(T unit.Temperature) float64 {
	return math.Exp(-t.logQOverN("gas.Translation.Degeneracy", T))
}

// Warnings returns what a reader of results at T must know, nil if nothing.
func (t Translation) Warnings(T unit.Temperature) []string {
	d := t.Degeneracy(T)
	switch {
	case d > 1:
		return []string{"at " + T.String() + " the gas is degenerate, nΛ³ = " + short(d) + " > 1: the classical ideal gas does not exist there; use a quantum gas"}
	case d > 0.01:
		return []string{"at " + T.String() + " the gas is nearly degenerate, nΛ³ = " + short(d) + ": quantum statistics changes its functions by a few per cent of R"}
	}
	return nil
}
