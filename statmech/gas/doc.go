// Package gas computes ideal gases from molecular constants.
//
// A molecule is a [Description]: rotational constants or a geometry,
// wavenumbers, electronic levels, torsions, or the spectroscopic constants of a
// diatomic. It is written as a Go literal, read from a table file ([Open],
// [ReadMolecule]) or taken from the library of real molecules that ships with
// the package ([FromLibrary], [Library]). [New] checks it and makes a
// [Molecule], which has the standard functions Cp°, S°, H°(T)-H°(0),
// H°(T)-H°(T_ref) and -(G°-H°(T_ref))/T, its contributions, its uncertainty and
// a table of all of them.
//
// Every contribution is a [statmech.Mode] of its own and can be used alone:
// [Translation] and [Monatomic], [LinearRotor] and [Top], [Oscillator],
// [SoftOscillator], [Anharmonic], [Diatomic], [Torsion], and the mixtures
// [Frozen] (ortho and para, isotopologues) and [Conformers].
//
// # Conventions
//
// Functions are per mole of molecules at the pressure p° of the description, 1
// bar unless it says otherwise; energies are counted from the ground level.
// Nuclear spin is not counted unless [SpinWeights.Include] is set, as in
// thermochemical tables; the symmetry number, or the spin weights in its place,
// is always named in [Molecule.Notes]. A wavenumber is the energy hc times it:
// 1595*unit.PerCm. ω_e and the fundamental ν, D0 and D_e, standard atomic
// weights and isotopic masses have different names and are never taken for one
// another.
//
// # Limits
//
// Ideal gases only. Polyatomic molecules are rigid rotors with harmonic
// vibrations unless anharmonic constants, torsions or the stretching coefficient
// Rho are given: their S° at 298.15 K is commonly within 0.12 J/(mol K) of
// measured values, and low by more at high temperature. Above about D0/30k
// levels near dissociation, which no set of constants here describes, begin to
// matter. [Molecule.Warnings] speaks where a model is used outside its range.
package gas
