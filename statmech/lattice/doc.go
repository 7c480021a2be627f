// Package lattice holds the Ising model on the square lattice: exact results
// for the infinite lattice and for a torus, and a Monte Carlo simulation with
// standard uncertainties that know of the correlation of its sweeps.
//
// # Convention
//
// Spins are s = ±1 and the energy is
//
//	E = -J Σ s s′,
//
// each pair of nearest neighbours counted once, J > 0, no magnetic field. So the
// lowest energy is -2J for each spin, and the energy is 0 on the average where
// the directions are random. K stands for J/kT.
//
// # What there is
//
//   - [Onsager] is the infinite lattice: a [statmech.Mode] for one spin, its
//     energy, its spontaneous magnetisation, its critical temperature.
//   - [Torus] is a lattice of rows and columns with periodic boundaries: a
//     [statmech.Mode] for the whole lattice, by Kaufman's formula; the list of
//     its levels by enumeration if it is small.
//   - [Simulation] draws states of a torus by Metropolis' rule, [Series] are
//     the energies and magnetisations of its sweeps, [Estimates] what follows.
//
// # Errors
//
// Constructors return and evaluations panic with a [*statmech.DomainError] if a
// temperature or J is not positive and finite or a size is out of range.
package lattice
