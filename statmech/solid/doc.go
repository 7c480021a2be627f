// Package solid holds models of the heat capacity of solids and what belongs
// to them: lattice models (Einstein, Debye in one to three dimensions, layered
// and chain lattices, a measured or computed density of states), conduction
// electrons, spin waves, discrete levels and their tails, the difference
// Cp - C_V, effective Debye temperatures and the Debye temperature of an
// elastic body.
//
// # Per mole of what
//
// A model describes one formula unit, and its molar functions are per mole of
// formula units. How many atoms that is, is said by the counts of modes: a
// crystal with n atoms in the formula unit has 3n vibrations in it. The field
// Modes is that count, and 0 means 3: one mole of atoms of an element. Copper
// is Debye{Theta: 343 * unit.K}, and for NaCl per mole of NaCl it is
// Debye{Theta: 321 * unit.K, Modes: 6}. [Sum.CheckModes] holds a composed
// lattice to its 3n.
//
// # Terms and modes
//
// A [Term] is anything with a molar heat capacity; the terms of a crystal add
// in a [Sum]. A term that has a canonical partition function is a
// [statmech.Mode] too, and so has an entropy, an energy and, where it has one,
// a zero-point energy as a member of its own. Energies are counted from the
// ground level; the zero-point energy is in none of the thermal functions.
//
// The models here are of constant volume. At the low pressure of the
// laboratory the enthalpy increment of a solid at constant volume is its
// energy increment, and that is what EnthalpyIncrement returns; what heating
// at constant pressure adds is [Expansion] and [NernstLindemann].
//
// # Fits
//
// Each model also implements [Differentiable]: it knows the derivatives of its
// heat capacity with respect to its own fields, named by their addresses.
//
// # Errors
//
// Evaluations panic with a [*statmech.DomainError] if T is not positive and
// finite or if a field of the model is outside its range.
package solid

//go:generate go run generate.go
