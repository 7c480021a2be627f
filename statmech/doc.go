// Package statmech is the core of a statistical-thermodynamics library: modes
// and their reduced functions, discrete levels, distributions and their
// entropy, composition of independent modes into molar functions.
//
// Everything with a canonical partition function q(T) is a [Mode]: a
// translation, a rotor, an oscillator, a list of levels, a Debye solid, a type
// of the user's own. A Mode gives three dimensionless numbers at one
// temperature, [Reduced]; independent modes add; molar functions, tables,
// audits and fits are written once on top.
//
// The packages beside it: unit (quantities), special (functions of one
// dimensionless variable), uncertain (values with their uncertainty), data
// (tables from files), gas, solid and lattice (models), reaction, fit,
// calorimetry, derive, and catalogue, which lists them all.
//
// # Conventions
//
// These hold in all those packages, and in package display. Each paragraph has
// an example that runs, in conventions_test.go.
//
// Units. A quantity has a type of its own and is a float64 in SI without
// prefix: 343*unit.K, 2*unit.Bar, unit.Celsius(25). x.In(unit.Bar) gives a plain
// number. Where a plain float64 is a physical value, its comment says the unit.
// Temperatures are thermodynamic ones in K; those of a file are taken as ITS-90
// unless it says IPTS-68.
//
// Wavenumbers and kelvins. A wavenumber that stands for a level is the energy
// hc times it, per particle: 1595*unit.PerCm. In kelvins that is E/k:
// 1 cm⁻¹ is 1.438777 K. A wavenumber that is an inverse length is the type
// unit.Wavenumber.
//
// Per particle and molar. unit.Energy and unit.Entropy are those of one
// particle or one body, unit.MolarEnergy and unit.MolarEntropy are per mole.
// 12*unit.KJPerMol is an energy per particle, 12*unit.MolarKJ a molar one;
// they become one another by PerMole and PerParticle only. What the mole is of
// is always said: for a gas the molecule, for a solid the formula unit whose
// vibrations the field Modes counts (0 stands for 3, one atom). A heat capacity
// per gram is refused where a file does not give the molar mass.
//
// Standard states. The functions of a gas are those of the ideal gas at the
// standard pressure p° = 1 bar = 100 kPa, unless its description has another
// Pressure; at 1 atm S° is lower by R ln 1.01325 = 0.10944 J/(mol K).
// Those of a solid model are of constant volume; measured ones of a condensed
// phase are those at the pressure of the measurement. Equilibrium constants are
// for pressures relative to p°.
//
// Reference temperatures. T_ref is 298.15 K unless a description says
// otherwise. The name says what an increment is counted from: for a gas
// EnthalpyIncrement(T) is H(T)-H(0), EnthalpyFromReference(T) H(T)-H(T_ref), and
// so for the Gibbs energy functions -(G-H(0))/T and -(G-H(T_ref))/T; for a solid
// both ends are arguments.
//
// Zero of energy. Every Mode counts energies from its own ground level: ln
// q tends to ln g₀ as T → 0. The energy of that level above the minimum of the
// potential is in no thermal function; a [ZeroPointer] gives it. In reactions
// the energies between species are either atomisation energies D0, from ground
// level to ground level, or enthalpies of formation at 0 K, never both.
//
// Symmetry and spin. A rotor's q is divided by the symmetry number once, or
// summed with nuclear-spin weights in its place; both together are refused.
// The spin degeneracy is divided out, as in thermochemical tables, unless
// SpinWeights.Include is set, and the entropy of mixing of isotopes is left out.
// A torsion has its own, internal, symmetry number. Both mirror forms of a
// chiral molecule are counted only where the description asks for it.
//
// Degeneracies. gᵢ is the number of states of a level, populations pᵢ of levels
// add up to 1, and the entropy is -k Σ pᵢ ln(pᵢ/gᵢ). The third law is taken as
// S = k ln g₀ at T = 0 for models and as S = 0 for integrated heat capacities:
// what is left over in the crystal is to be found by comparison.
//
// Uncertainty. u is a standard uncertainty, one standard deviation, k = 1. A
// file with another coverage says so ("coverage of u: k=2") and is converted.
// An expanded uncertainty is printed only together with its k.
//
// Correlation. A value remembers its inputs, so that a shared one counts once
// and a-a is exactly 0. Errors that all points of a table share, such as a
// calibration, are one input, kept apart as the common part. A fit passes its
// covariance on to all that is computed from it.
//
// Rounding. It happens in print only. With an uncertainty, u gets two digits
// and the value the same place, 343.2(1.2) K, half to even; without one, six
// digits for a quantity. Files, results and the media type of a notebook's
// results hold full precision.
//
// Constants. They are those of CODATA 2022; h, k, e, N_A and c are exact, and
// so is R = k N_A. Masses of atoms are standard atomic weights (IUPAC 2021) for an
// element and isotopic masses (AME 2020) where an isotope is named.
//
// Named results. display.Result stores name, value, standard uncertainty and
// unit. "levelsum check" calls the value of a later run identical, at rounding
// level (1e-9 relative, or 1e-12 of the scale), inside u, or moved.
//
// Withheld values. What would be a false statement is not made: the standard
// uncertainties of a fit whose χ² says that the model does not describe the
// data (p < 1e-6 and more than 2 per degree of freedom), or that did not
// converge, or whose parameters the data do not determine; a parameter at its
// bound. The value is shown with the reason, and the reason passes to all that
// is computed from it.
//
// Bad arguments. An evaluation panics with a [*DomainError] that names
// function, argument, value with unit and what was wanted; what comes from
// outside (files, fits, descriptions) returns an error. Nothing returns NaN for
// an argument outside its domain, except the functions of package special,
// which say so.
package statmech

//go:generate go run accuracy.go
