package derive_test

import (
	"fmt"

	"levelsum/statmech/derive"
	"levelsum/statmech/gas"
	"levelsum/statmech/unit"
)

// In a notebook the derivation is shown with typeset formulas; here as text.
func ExampleSackurTetrode() {
	argon := gas.Monatomic{Mass: 39.95 * unit.U, Pressure: unit.Bar}
	fmt.Println(derive.SackurTetrode(argon, 298.15*unit.K).View().Data["text/plain"])
	// Output:
	// Entropy of a monatomic ideal gas
	//   Λ = h/√(2 π m k T)
	//     Λ: thermal wavelength
	//     h: Planck constant (exact) = 6.62607015×10⁻³⁴ J s
	//     m: mass of one atom = 6.633854×10⁻²⁶ kg
	//     k: Boltzmann constant (exact) = 1.380649×10⁻²³ J/K
	//     T: temperature = 298.15 K
	//   Λ = 1.599647×10⁻¹¹ m
	// Each atom has the volume kT/p; with Stirling's formula for N!
	//   S_tr = R [ln (k T)/(p Λ³) + 5/2]
	//     S_tr: molar entropy of translation
	//     R: molar gas constant (exact) = 8.314463 J/(mol K)
	//     k: Boltzmann constant (exact) = 1.380649×10⁻²³ J/K
	//     T: temperature = 298.15 K
	//     p: pressure = 100000 Pa
	//     Λ: thermal wavelength = 1.599647×10⁻¹¹ m
	//   S_tr = 154.8463 J/(mol K)
	//   Source: H. Tetrode, Annalen der Physik 343, 434 (1912); O. Sackur, Annalen der Physik 345, 67 (1913)
	// Constants: CODATA 2022. Ideal gas, classical translation; nuclear spin not counted.
}
