package special_test

import (
	"fmt"

	"levelsum/statmech/special"
)

// Copper at a third of its Debye temperature, x = θ/T = 3: functions of one
// vibration over k; 3R times them per mole.
func ExampleDebyeThermal() {
	lnq, u, c := special.DebyeThermal(3, 3)
	fmt.Printf("ln q = %.6f, U/kT = %.6f, C/k = %.6f, S/k = %.6f\n", lnq, u, c, lnq+u)
	fmt.Printf("C_V = %.4f J/(mol K)\n", 3*8.31446261815324*c)
	// Output:
	// ln q = 0.145596, U/kT = 0.283580, C/k = 0.662758, S/k = 0.429176
	// C_V = 16.5314 J/(mol K)
}

// Many arguments at once: a nil destination is allocated.
func ExampleEinsteinCs() {
	for _, c := range special.EinsteinCs(nil, []float64{0, 1, 5, 20}) {
		fmt.Printf("%.6g\n", c)
	}
	// Output:
	// 1
	// 0.920674
	// 0.170742
	// 8.24461e-07
}

// The chemical potential of free electrons from their number and back.
func ExampleFermiDiracHalfInverse() {
	eta := special.FermiDiracHalfInverse(10)
	fmt.Printf("η = %.10f, F_1/2(η) = %.10f\n", eta, special.FermiDirac(0.5, eta))
	// Output:
	// η = 5.4562519145, F_1/2(η) = 10.0000000000
}

// A sum of Boltzmann factors whose terms are outside the range of float64.
func ExampleLogSumExp() {
	fmt.Printf("%.10f\n", special.LogSumExp([]float64{-1000, -1001, -1002}))
	// Output:
	// -999.5923940356
}
