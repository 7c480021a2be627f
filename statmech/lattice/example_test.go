package lattice_test

import (
	"fmt"
	"log"

	"levelsum/statmech/lattice"
	"levelsum/statmech/unit"
)

func Example() {
	J := 1 * unit.KelvinEnergy
	infinite := lattice.Onsager{J: J}
	fmt.Printf("kTc/J = %.6f\n", infinite.CriticalTemperature().AsEnergy().In(J))

	square := lattice.Torus{J: J, Rows: 16, Columns: 16}
	T := 2.4 * unit.K
	fmt.Printf("exact: E/NJ = %.6f, C/Nk = %.4f\n", square.Energy(T).In(J), square.HeatCapacity(T))

	s, err := lattice.NewSimulation(square, T, 1)
	if err != nil {
		log.Fatal(err)
	}
	s.Sweep(1000) // until the beginning is forgotten
	e, err := s.Sample(200000).Estimates()
	if err != nil {
		log.Fatal(err)
	}
	fmt.Println("drawn: E/NJ =", e.Energy, "C/Nk =", e.HeatCapacity)
	// Output:
	// kTc/J = 2.269185
	// exact: E/NJ = -1.255043, C/Nk = 1.4082
	// drawn: E/NJ = -1.2552(13) C/Nk = 1.4048(69)
}
