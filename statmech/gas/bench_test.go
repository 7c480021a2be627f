package gas

import (
	"testing"

	"levelsum/statmech/unit"
)

func BenchmarkSpeciesTable(b *testing.B) {
	ts := make([]unit.Temperature, 60)
	for i := range ts {
		ts[i] = unit.Temperature(100 + 100*i)
	}
	for _, name := range []string{"N2", "H2O", "C2H6"} {
		b.Run(name, func(b *testing.B) {
			d, err := Find(name)
			if err != nil {
				b.Fatal(err)
			}
			for b.Loop() {
				m := molecule(b, d)
				m.Entropies(ts)
				m.HeatCapacities(ts)
				m.EnthalpyIncrements(ts)
				m.GibbsFunctions(ts)
			}
		})
	}
}
