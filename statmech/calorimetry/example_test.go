package calorimetry_test

import (
	"fmt"

	"levelsum/statmech/calorimetry"
	"levelsum/statmech/data"
	"levelsum/statmech/fit"
	"levelsum/statmech/unit"
)

// The entropy of copper at 298.15 K from the table of White & Collocott (1984);
// the CODATA key value is 33.15 ± 0.08 J/(mol K).
func ExampleThirdLaw() {
	run, err := data.Read("../../testdata/white-collocott-1984/copper.csv")
	if err != nil {
		fmt.Println(err)
		return
	}
	if run, err = run.AsCommon(); err != nil { // accuracy bounds of a smoothed table
		fmt.Println(err)
		return
	}
	low, err := calorimetry.LowTemperature(run, calorimetry.Terms{Linear: true, UpTo: 6 * unit.K}, fit.ScaledSigma)
	if err != nil {
		fmt.Println(err)
		return
	}
	path, err := calorimetry.ThirdLaw(run, low)
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Println(path.Entropy(298.15 * unit.K))
	fmt.Println(low.DebyeTemperature(1))
	// Output:
	// 33.15(16) J/(mol K)
	// 344.1(1.2) K
}
