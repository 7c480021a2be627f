package data_test

import (
	"fmt"

	"levelsum/statmech/data"
)

// The run is invented, to show the form of a file.
func ExampleParse() {
	run, err := data.Parse("run-07.csv", []byte(`# substance: X2Y (cr), M/(g mol-1): 150.23, per: mole of formula units
# temperature scale: ITS-90, coverage of u: k=1
T / K, Cp / (J K-1 mol-1), u_r(Cp) / %, u_c(Cp) / %
5.102, 0.0315, 1.0, 0.2
5.405, 0.0374, 1.0, 0.2
`))
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Println(run.Len(), run.T[0], run.Cp[0], run.Note("per"))

	_, err = data.Parse("run-08.csv", []byte("T / K, Cp / (J K-1 mol-1)\n5.102, 0.0315\n-5.4, 0.0374\n"))
	fmt.Println(err)
	// Output:
	// 2 5.102 K 0.0315 J/(mol K) mole of formula units
	// data: run-08.csv: line 3 (row 2), column "T": -5.4 K is not a positive temperature on the Kelvin scale
}
