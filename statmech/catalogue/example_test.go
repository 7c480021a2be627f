package catalogue_test

import (
	"fmt"

	"levelsum/statmech/catalogue"
)

func ExampleAll() {
	for _, part := range catalogue.All() {
		fmt.Println(part.Title)
	}
	// Output:
	// Models
	// Calculations
	// Units, by the quantity they measure
	// Data of the library
	// Files of data, in Levelsum's source
	// Worked notebooks, in Levelsum's source
}
