package display_test

import (
	"levelsum/display"
	"levelsum/statmech/unit"
)

func ExampleTable() {
	display.Show(display.Table{
		Caption: "Invented: heat capacity of an alloy",
		Columns: []display.Column{
			{Quantity: "T", Values: []unit.Temperature{10, 50, 298.15}},
			{Quantity: "C_p", Values: []unit.MolarEntropy{0.1432, 7.462, 24.4423}, U: []unit.MolarEntropy{0.002, 0.022, 0.073}},
		},
		Notes: display.Notes("p° = 100 kPa"),
	})
	// Output:
	// Invented: heat capacity of an alloy
	//  T / K  C_p / (J mol⁻¹ K⁻¹)
	// ------  -------------------
	//  10.00           0.1432(20)
	//  50.00           7.462(22)
	// 298.15          24.442(73)
	// p° = 100 kPa
	// In parentheses: standard uncertainty (k = 1) in the last digits.
}

func ExampleResult() {
	display.Result("θ_D", 343.21*unit.K, 0.7*unit.K)
	display.Result("γ", 0.692, 0.005, "mJ/(mol K2)")
	// Output:
	// θ_D = 343.21(70) K
	// γ = 0.6920(50) mJ/(mol K²)
}

func ExampleParagraph() {
	display.Show(display.Paragraph{
		Text:   "The fit gives [[θ]]; half of $3R$ is reached at [[T]].",
		Values: display.Values{"θ": display.Number{Name: "θ_D", Value: 343.21, U: 0.7, Unit: "K"}, "T": 81.5 * unit.K},
	})
	// Output:
	// The fit gives 343.21(70) K; half of 3R is reached at 81.5 K.
}
