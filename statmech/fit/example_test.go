package fit_test

import (
	"fmt"

	"levelsum/statmech/data"
	"levelsum/statmech/fit"
	"levelsum/statmech/solid"
	"levelsum/statmech/unit"
)

// Copper below 10 K (White & Collocott 1984): electrons and a Debye lattice.
func ExampleHeatCapacity() {
	run, err := data.Read("../../testdata/white-collocott-1984/copper.csv")
	if err != nil {
		fmt.Println(err)
		return
	}
	deb := solid.Debye{Theta: 300 * unit.K}
	el := solid.Electronic{Gamma: 0.7 * unit.MilliJPerMolK2}
	res, err := fit.HeatCapacity(solid.Sum{&deb, &el}, run,
		fit.Vary(&deb.Theta, &el.Gamma), fit.Window(1*unit.K, 10*unit.K), fit.AbsoluteSigma)
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Println(res.Parameter(&deb.Theta))
	fmt.Println(res.Parameter(&el.Gamma).In("mJ/(mol K2)"))
	fmt.Println("θ is left at", deb.Theta)
	// Output:
	// 343.18(67) K
	// 0.6919(53) mJ/(mol K2)
	// θ is left at 343.184 K
}
