package unit_test

import (
	"errors"
	"fmt"

	"levelsum/statmech/unit"
)

func Example() {
	theta := 343 * unit.K
	level := 2143.27 * unit.PerCm // hc times the wavenumber, per particle
	fmt.Println(theta, float64(theta))
	fmt.Println(level.In(unit.PerCm), level.PerMole(), level.In(unit.MilliEV))
	fmt.Println(level.OverKT(unit.Celsius(25)))
	// theta + level does not compile: a temperature is no energy.
	// Output:
	// 343 K 343
	// 2143.27 25639.2 J/mol 265.73099154187
	// 10.342741148837165
}

func ExampleParseHeader() {
	name, u, err := unit.ParseHeader("Cp / (J K-1 mol-1)")
	fmt.Println(name, u, err)
	_, _, err = unit.ParseHeader("Cp / (J K-1 mol-1 furlong)")
	fmt.Println(errors.Is(err, unit.ErrUnit), err)
	// Output:
	// Cp J K-1 mol-1 <nil>
	// true unit: "Cp / (J K-1 mol-1 furlong)" has "furlong", which is no unit known here
}

func ExampleElementOf() {
	cl, err := unit.ElementOf("Cl")
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Println(cl.Name)
	for _, i := range cl.Isotopes {
		if i.Abundance > 0 {
			fmt.Printf("%v %.5f u, %.4f\n", i.Symbol, i.Mass.In(unit.U), i.Abundance)
		}
	}
	// Output:
	// chlorine
	// Cl 34.96885 u, 0.7576
	// Cl 36.96590 u, 0.2424
}
