package statmech_test

import (
	"fmt"
	"math"

	"levelsum/statmech"
	"levelsum/statmech/unit"
)

func ExampleNewLevels() {
	// The three fine-structure levels of oxygen atoms.
	l, err := statmech.NewLevels(unit.Energies([]float64{0, 158.265, 226.977}, unit.PerCm), []float64{5, 3, 1})
	if err != nil {
		fmt.Println(err)
		return
	}
	m := statmech.Molar{Mode: l, Per: "mol of O"}
	fmt.Println(m.Entropy(298.15*unit.K), m.HeatCapacity(298.15*unit.K))
	fmt.Printf("%.4f\n", l.Populations(298.15*unit.K))
	// Output:
	// 17.6257 J/(mol K) 1.1253 J/(mol K)
	// [0.7427 0.2076 0.0497]
}

// twoLevels is a mode of one's own, with an error in its heat capacity.
type twoLevels struct{ gap unit.Energy }

func (m twoLevels) Reduced(T unit.Temperature) statmech.Reduced {
	x := m.gap.OverKT(T)
	w := math.Exp(-x)
	u := x * w / (1 + w)
	return statmech.Reduced{LogQ: math.Log1p(w), U: u, C: x * u} // C lacks 1/(1+w)
}

func ExampleAudit() {
	r := statmech.Audit(twoLevels{100 * unit.PerCm}, statmech.AuditOptions{From: 10 * unit.K, To: 1000 * unit.K})
	for _, c := range r.Checks {
		if !c.OK() {
			fmt.Println(c.Name)
		}
	}
	// Output:
	// C/k = d(T U/kT)/dT
	// S/k by integration of C/T
}

func ExampleGibbsEntropy() {
	s, err := statmech.GibbsEntropy([]float64{0.5, 0.25, 0.25})
	fmt.Println(s, s.Bits(), err)
	// Output:
	// 1.0397208 k 1.5 <nil>
}

func ExampleMaximumEntropy() {
	// A die whose mean is 4.5 (E. T. Jaynes).
	r, err := statmech.MaximumEntropy(nil, statmech.MeanConstraint{Name: "spots", Values: []float64{1, 2, 3, 4, 5, 6}, Mean: 4.5})
	fmt.Printf("%.5f %v\n", r.P, err)
	// Output:
	// [0.05435 0.07877 0.11416 0.16545 0.23977 0.34749] <nil>
}
