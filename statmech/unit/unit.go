// Package unit gives quantities a type of their own, in the manner of
// time.Duration: a quantity is a float64 in SI, made by multiplying a number
// by a unit constant (343*unit.K, 2143.27*unit.PerCm, 12*unit.KJPerMol) and
// read back by x.In(unit.PerCm). A wavenumber given where a temperature is
// wanted does not compile.
package unit

// Temperature is a thermodynamic temperature in K.
type Temperature float64

// Energy is an energy per particle in J. The unit constants that spectroscopy
// and chemistry use (PerCm, KJPerMol, Kelvin as energy) carry hc, 1/N_A and k.
type Energy float64

// MolarEnergy is an energy per amount of substance in J/mol.
type MolarEnergy float64

// MolarEntropy is a molar entropy or heat capacity in J/(mol K).
type MolarEntropy float64

// Mass is a mass in kg.
type Mass float64

// Pressure is a pressure in Pa.
type Pressure float64

// Length is a length in m.
type Length float64
