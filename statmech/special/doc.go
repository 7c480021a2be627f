// Package special evaluates the functions that statistical thermodynamics
// needs and that math does not have: Debye's functions and the thermal
// functions made of them, the harmonic (Einstein) mode, Fermi-Dirac and
// Bose-Einstein integrals, the complete elliptic integrals, the exponential
// integral, log-sum-exp.
//
// # How the pieces fit
//
// Everything here is a number without unit: arguments are ratios such as
// x = θ/T or η = μ/kT, energies come back divided by kT, heat capacities and
// entropies by k and for one mode. Packages above multiply by R and by counts
// of modes, and refuse temperatures that are not positive. Each function has a
// scalar form and a slice form with a plural name that writes into dst and
// returns it; a nil dst is allocated, a dst of another length than the
// argument panics (a slip of the program, not of its data). dst may be the
// argument itself.
//
// Outside its domain a function returns NaN, and NaN for NaN: its doc comment
// lists the special cases. No function panics on a number.
//
// # Accuracy
//
// An accuracy in eps is a bound on |computed - exact| / |exact| in units of
// 2⁻⁵², for the argument exactly as given. A test, named in each comment,
// compares with values of 30 digits over the whole range and logs the worst.
// Kernels write float64(a*b)+c so that a compiler may not fuse the two
// operations: the same bits come out on every platform whose math.Exp,
// math.Log and math.Sqrt give the same bits.
//
// # Tables
//
// The files table_*.go hold polynomial coefficients made by gen from
// definitions and convergent series at 320 bits with math/big; go generate
// makes them again, bit for bit.
package special

//go:generate go run ./gen
