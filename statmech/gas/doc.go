// Package gas computes ideal gases from molecular constants: translation,
// rotation, vibration, internal rotation, electronic levels and conformers,
// each a [statmech.Mode], and molecules made of them.
package gas
