// Package unit gives quantities a type of their own, in the manner of
// time.Duration: a quantity is a float64 in SI, made by multiplying a number
// by a unit constant (343*unit.K, 2143.27*unit.PerCm, 12*unit.KJPerMol) and
// read back by x.In(unit.PerCm). A wavenumber given where a temperature is
// wanted does not compile.
//
// A quantity prints as number and unit, "154.846 J/(mol K)", with six
// significant digits; its value keeps all of them. Every quantity is a
// [Quantity]: its SI value and its unit can be asked for without knowing its
// type.
//
// What looks alike but is not the same has different types: a temperature and
// a temperature difference, an energy per particle and a molar energy, linear
// and volume expansivity, a wavenumber and the energy hc times it. They become
// one another only by a call that says so ([Energy.PerMole],
// [Temperature.AsEnergy], [LinearExpansivity.Volume]) or by a unit constant
// that does ([PerCm] is the energy hc/cm, [KJPerMol] the energy 1 kJ/N_A per
// particle, [KelvinEnergy] the energy k·1 K).
//
// Text from files, "Cp / (J K-1 mol-1)", is read by [ParseHeader] and [Parse].
// Constants are the 2022 CODATA set, listed by [Constants]; relative atomic
// and isotopic masses are found by [ElementOf] and [IsotopeOf].
package unit

//go:generate go run generate.go

// Temperature is a thermodynamic temperature in K.
type Temperature float64

// TemperatureDifference is a difference of two temperatures in K.
type TemperatureDifference float64

// Energy is an energy per particle in J. The unit constants that spectroscopy
// and chemistry use ([PerCm], [KJPerMol], [KelvinEnergy]) carry hc, 1/N_A and k.
type Energy float64

// InverseEnergy is an inverse energy in 1/J, such as β = 1/kT.
type InverseEnergy float64

// MolarEnergy is an energy per amount of substance in J/mol.
type MolarEnergy float64

// MolarEntropy is a molar entropy or heat capacity in J/(mol K).
type MolarEntropy float64

// Entropy is the entropy or heat capacity of a body or a particle in J/K.
type Entropy float64

// SpecificEnergy is an energy per mass in J/kg.
type SpecificEnergy float64

// SpecificEntropy is an entropy or heat capacity per mass in J/(kg K).
type SpecificEntropy float64

// SommerfeldCoefficient is a coefficient γ of a molar heat capacity γT, in
// J/(mol K²).
type SommerfeldCoefficient float64

// Amount is an amount of substance in mol.
type Amount float64

// Mass is a mass in kg.
type Mass float64

// MolarMass is a mass per amount of substance in kg/mol.
type MolarMass float64

// Pressure is a pressure or an elastic modulus in Pa.
type Pressure float64

// Compressibility is an inverse pressure in 1/Pa.
type Compressibility float64

// Length is a length in m.
type Length float64

// Area is an area in m².
type Area float64

// Volume is a volume in m³.
type Volume float64

// MolarVolume is a volume per amount of substance in m³/mol.
type MolarVolume float64

// Density is a mass per volume in kg/m³.
type Density float64

// NumberDensity is a number per volume in 1/m³.
type NumberDensity float64

// Frequency is a frequency (not an angular one) in Hz.
type Frequency float64

// Wavenumber is an inverse length in 1/m.
type Wavenumber float64

// Time is a duration in s.
type Time float64

// Speed is a speed in m/s.
type Speed float64

// Power is a power or a heat flow in W.
type Power float64

// Angle is a plane angle in rad.
type Angle float64

// MomentOfInertia is a moment of inertia in kg m².
type MomentOfInertia float64

// LinearExpansivity is (1/L) ∂L/∂T in 1/K.
type LinearExpansivity float64

// VolumeExpansivity is (1/V) ∂V/∂T in 1/K.
type VolumeExpansivity float64

// DensityOfStates is a number of modes per frequency and cell, in 1/(Hz cell).
type DensityOfStates float64

// MagneticFluxDensity is a magnetic flux density in T.
type MagneticFluxDensity float64
