// Package heats holds the tables of the heat capacity per mode of a Debye
// spectrum and of a harmonic mode, as functions of x = θ/T. Package special
// looks single numbers up in them and documents what they are; package solid
// runs over whole lists of temperatures.
package heats

import "levelsum/statmech/internal/lanes"

// Debye holds C/k per mode of a Debye spectrum in 1, 2 and 3 dimensions.
var Debye = [...]lanes.Table8{
	{Rows: debyeC1[:], End: float64(len(debyeC1)) / 4},
	{Rows: debyeC2[:], End: float64(len(debyeC2)) / 4},
	{Rows: debyeC3[:], End: float64(len(debyeC3)) / 4},
}

// Einstein holds C/k of a harmonic mode.
var Einstein = lanes.Table8{Rows: einsteinTable[:], End: EinsteinEnd}

// EinsteinEnd is the end of Einstein.
const EinsteinEnd = float64(len(einsteinTable)) / 4
