package solid

import (
	"fmt"
	"math"
	"strings"
	"testing"

	"levelsum/statmech/data"
	"levelsum/statmech/unit"
)

func TestPhononsFrom(t *testing.T) {
	want := Debye{Theta: 400 * unit.K, Modes: 3}.HeatCapacity(60 * unit.K)
	for head, test := range map[string]struct {
		per      unit.Energy
		integral Normalisation
		modes    float64
	}{
		"nu / THz, g / (THz-1 cell-1)":         {unit.THzEnergy, IntegralCellModes, 6},
		"nu / THz, g / THz-1":                  {unit.THzEnergy, IntegralOne, 1},
		"nu / cm-1, g / cm":                    {unit.PerCm, IntegralThree, 3},
		"nu / meV, g / meV-1":                  {unit.MilliEV, IntegralOne, 1},
		"nu / (rad ps-1), g / (rad-1 ps)":      {unit.THzEnergy / (2 * math.Pi), IntegralOne, 1},
		"nu / (rad ps-1), g / (ps rad-1/cell)": {unit.THzEnergy / (2 * math.Pi), IntegralCellModes, 6},
	} {
		var b strings.Builder
		fmt.Fprintln(&b, head)
		table := parabola(801, 400, test.per, test.modes)
		for i, e := range table.Energies {
			fmt.Fprintf(&b, "%.9g, %.12g\n", float64(e/test.per), table.States[i])
		}
		read, err := data.Parse("dos.csv", []byte(b.String()))
		if err != nil {
			t.Errorf("%s: %v", head, err)
			continue
		}
		p, err := PhononsFrom(read, "nu", "g", test.integral, 2, 1)
		if err != nil {
			t.Errorf("%s: %v", head, err)
			continue
		}
		near(t, head, float64(p.HeatCapacity(60*unit.K)), float64(want), 1e-6)
	}
	for head, wanted := range map[string]string{
		"nu / K, g / THz-1":            "want a frequency",
		"nu / THz, g / meV-1":          "want states per THz",
		"nu / THz, g / (THz-1 cell-1)": "is per cell, want IntegralCellModes",
		"w / THz, g / THz-1":           "no column \"nu\"",
	} {
		read, err := data.Parse("dos.csv", []byte(head+"\n1, 0.1\n2, 0.2\n3, 0.2\n4, 0.1\n"))
		if err != nil {
			t.Errorf("%s: %v", head, err)
			continue
		}
		if _, err := PhononsFrom(read, "nu", "g", IntegralOne, 2, 1); err == nil || !strings.Contains(err.Error(), wanted) {
			t.Errorf("%s: %v, want %q", head, err, wanted)
		}
	}
}
