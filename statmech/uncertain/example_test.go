package uncertain_test

import (
	"fmt"

	"levelsum/statmech/uncertain"
)

// A balance weighs a sample in its crucible and the crucible alone; its scale
// error is common to both. The numbers are invented.
func Example() {
	scale := uncertain.Common("scale of the balance", 2e-5).Shift(1)
	full := uncertain.Measured(25.36182, 0.00005).Times(scale)
	empty := uncertain.Measured(13.01547, 0.00005).Times(scale)
	sample := full.Minus(empty).WithUnit("g")
	fmt.Println(sample)
	fmt.Printf("random %.1g g, common %.2g g\n", sample.RandomPart(), sample.CommonPart())
	fmt.Println(sample.Expanded(2))
	fmt.Println(full.Minus(full))
	// Output:
	// 12.34635(26) g
	// random 7e-05 g, common 0.00025 g
	// (12.34635 ± 0.00051) g (k = 2)
	// 0
}
