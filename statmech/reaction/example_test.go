package reaction_test

import (
	"fmt"

	"levelsum/statmech/reaction"
	"levelsum/statmech/unit"
)

// The dissociation of iodine, from the library's molecules.
func Example() {
	r, err := reaction.New("I2 = 2 I", reaction.AtomisationD0)
	if err != nil {
		fmt.Println(err)
		return
	}
	T := 1000 * unit.K
	fmt.Printf("ΔrH(0) = %.2f kJ/mol, ΔrS° = %.3f J/(mol K)\n", r.EnthalpyAtZero().In(unit.MolarKJ), r.Entropy(T).In(unit.JPerMolK))
	fmt.Printf("K = %.3e, ln K_c = %.4f\n", r.K(T), r.LogKc(T))
	// Output:
	// ΔrH(0) = 148.82 kJ/mol, ΔrS° = 105.828 J/(mol K)
	// K = 3.086e-03, ln K_c = -10.2015
}

func ExampleNew() {
	_, err := reaction.New("CO + O2 = CO2", reaction.FormationAt0K)
	fmt.Println(err)
	// Output:
	// reaction: "CO + O2 = CO2": products less reactants: O -1: the equation does not balance
}
