package solid_test

import (
	"fmt"

	"levelsum/statmech/solid"
	"levelsum/statmech/unit"
)

// The harmonic heat capacity and the entropy of an element, per mole of atoms.
func ExampleDebye() {
	cu := solid.Debye{Theta: 343 * unit.K}
	fmt.Println(cu)
	fmt.Printf("%.4f J/(mol K)\n", cu.HeatCapacity(298.15*unit.K).In(unit.JPerMolK))
	fmt.Printf("%.4f J/(mol K)\n", cu.Entropy(298.15*unit.K).In(unit.JPerMolK))
	// Output:
	// Debye{Theta: 343 K, Modes: 3 per formula unit}
	// 23.3677 J/(mol K)
	// 30.5688 J/(mol K)
}

// A crystal of two atoms in the formula unit: three acoustic and three optical
// branches.
func ExampleSum_CheckModes() {
	crystal := solid.Sum{solid.Debye{Theta: 210 * unit.K}, solid.Einstein{Theta: 260 * unit.K}}
	fmt.Println(crystal.CheckModes(2))
	fmt.Println(crystal.CheckModes(3))
	// Output:
	// <nil>
	// solid.Sum.CheckModes: modes of all terms = 6, want 9, three for each of 3 atoms in the formula unit
}
