package gas_test

import (
	"fmt"

	"levelsum/statmech/gas"
	"levelsum/statmech/unit"
)

func Example() {
	n2, err := gas.FromLibrary("N2")
	if err != nil {
		fmt.Println(err)
		return
	}
	T := 298.15 * unit.K
	fmt.Println(n2.Entropy(T), n2.HeatCapacity(T))
	fmt.Printf("H(T)-H(0) = %.5f kJ/mol\n", n2.EnthalpyIncrement(T).In(unit.MolarKJ))
	// Output:
	// 191.61 J/(mol K) 29.1246 J/(mol K)
	// H(T)-H(0) = 8.67028 kJ/mol
}

func ExampleNew() {
	water, err := gas.New(gas.Description{
		Formula:    "H2O",
		Constants:  []unit.Energy{27.8806 * unit.PerCm, 14.5216 * unit.PerCm, 9.2778 * unit.PerCm},
		Symmetry:   2,
		Vibrations: []gas.Vibration{{Quantum: 3657 * unit.PerCm}, {Quantum: 1595 * unit.PerCm}, {Quantum: 3756 * unit.PerCm}},
	})
	if err != nil {
		fmt.Println(err)
		return
	}
	for _, c := range water.Contributions(298.15 * unit.K) {
		fmt.Printf("%-12s %8.3f J/(mol K)  %s\n", c.Name, c.Entropy.In(unit.JPerMolK), c.Method)
	}
	// Output:
	// translation   144.914 J/(mol K)  Sackur-Tetrode
	// rotation       43.769 J/(mol K)  asymmetric top, Wang blocks diagonalised
	// vibration       0.033 J/(mol K)  harmonic
}
