package solid

import (
	"errors"
	"fmt"
	"math"
	"strings"
	"testing"

	"levelsum/statmech"
	"levelsum/statmech/special"
	"levelsum/statmech/unit"
)

// parabola returns a Debye-shaped table of n points from ω = 0 to the cut-off.
func parabola(n int, theta float64, u unit.Energy, integral float64) PhononTable {
	t := PhononTable{Per: u, Integral: IntegralOne, AtomsPerCell: 2, AtomsPerFormula: 1}
	end := float64(unit.Temperature(theta).AsEnergy() / u) // cut-off in the unit of the axis
	for i := range n {
		w := end * float64(i) / float64(n-1)
		t.Energies = append(t.Energies, unit.Energy(w)*u)
		t.States = append(t.States, integral*3*w*w/(end*end*end))
	}
	return t
}

func TestPhononsDebye(t *testing.T) {
	worst := 0.0
	defer func() {
		t.Logf("accuracy: Phonons, 1001 rows growing as ω² | C, S, ln q, U for T/θ from 0.02 to 2 | relative | %.3g | 1e-8 | Debye's functions", worst)
	}()
	const theta = 400.0
	d := Debye{Theta: theta * unit.K}
	for name, u := range map[string]unit.Energy{"THz": unit.THzEnergy, "meV": unit.MilliEV, "cm-1": unit.PerCm} {
		p, err := NewPhonons(parabola(1001, theta, u, 1))
		if err != nil {
			t.Fatal(err)
		}
		if len(p.Warnings()) != 0 {
			t.Errorf("%s: %q", name, p.Warnings())
		}
		largest := 0.0
		for x := 0.02; x <= 2; x *= 1.05 {
			T := unit.Temperature(x * theta)
			for i, pair := range [][2]float64{
				{float64(p.HeatCapacity(T)), float64(d.HeatCapacity(T))}, {float64(p.Entropy(T)), float64(d.Entropy(T))},
				{p.Reduced(T).LogQ, d.Reduced(T).LogQ}, {float64(p.ThermalEnergy(T)), float64(d.ThermalEnergy(T))},
			} {
				e := math.Abs(pair[0]/pair[1] - 1)
				largest = max(largest, e)
				if !(e <= 1e-8) {
					t.Errorf("%s, T = %v: function %d off by %g", name, T, i, e)
				}
			}
		}
		worst = max(worst, largest)
		near(t, "zero-point energy", float64(p.ZeroPointEnergy()), float64(d.ZeroPointEnergy()), 1e-9)
		for _, n := range []float64{-2.5, -2, -1, 0, 1, 2, 4} {
			m, err := p.MomentTheta(n)
			if err != nil {
				t.Fatal(err)
			}
			near(t, fmt.Sprintf("theta of moment %g", n), float64(m), theta, 1e-6)
		}
		// Two atoms in the cell, one in the formula unit: twice as much per cell.
		for _, T := range []unit.Temperature{3, 77, 300} {
			if a, b := p.PerCell().HeatCapacity(T), p.HeatCapacity(T); a != 2*b {
				t.Errorf("per cell %v, per formula unit %v", a, b)
			}
		}
	}
	// The first point need not be ω = 0.
	table := parabola(1001, theta, unit.THzEnergy, 1)
	table.Energies, table.States = table.Energies[20:], table.States[20:]
	p, err := NewPhonons(table)
	if err != nil {
		t.Fatal(err)
	}
	near(t, "without the lowest points", float64(p.HeatCapacity(8)), float64(d.HeatCapacity(8)), 1e-4)
}

// TestPhononsQuadrature compares with sums over so many points that they stand
// for the integral, on a density with edges and a gap, and takes limits.
func TestPhononsQuadrature(t *testing.T) {
	table := PhononTable{Per: unit.THzEnergy, Integral: IntegralThree, AtomsPerCell: 1, AtomsPerFormula: 2}
	var whole float64
	for i := range 161 {
		w := float64(i) / 10
		g := 0.01 * w * w
		if w > 5 {
			g = 0.25 * math.Exp(-(w-5)*2)
		}
		if w > 9 && w < 10 {
			g = 0
		}
		if w >= 10 {
			g = 0.3 * math.Sqrt(max(0, 16-w))
		}
		table.Energies = append(table.Energies, unit.Energy(w)*unit.THzEnergy)
		table.States = append(table.States, g)
	}
	for i := 1; i < len(table.States); i++ {
		whole += 0.05 * (table.States[i] + table.States[i-1])
	}
	for i := range table.States {
		table.States[i] *= 3 / whole
	}
	p, err := NewPhonons(table)
	if err != nil {
		t.Fatal(err)
	}
	for _, T := range []float64{0.3, 2, 11, 40, 250, 3000, 1e6} {
		var want statmech.Reduced
		for i := range len(p.knots) - 1 {
			a, b := p.knots[i].w, p.knots[i+1].w
			// Dyadic cuts towards ω = 0 and cuts of at most T/2, 6 Gauss points each.
			edges := []float64{a}
			if a == 0 {
				edges = append(edges, b*0x1p-40)
			}
			for edges[len(edges)-1] < b {
				last := edges[len(edges)-1]
				edges = append(edges, min(b, last+min(T/2, max(last, b*0x1p-40)/4)))
				if last > 60*T && last > a {
					edges[len(edges)-1] = b
				}
			}
			for k := range len(edges) - 1 {
				h := edges[k+1] - edges[k]
				for j, x := range gauss6Nodes {
					w := edges[k] + h/2*(1+x)
					lnq, u, c := special.EinsteinThermal(w / T)
					want = want.Add(statmech.Reduced{LogQ: lnq, U: u, C: c}.Scale(h / 2 * gauss6Weights[j] * p.density(i, w)))
				}
			}
		}
		want = want.Scale(p.count)
		got := p.Reduced(unit.Temperature(T))
		for i, pair := range [][2]float64{{got.LogQ, want.LogQ}, {got.U, want.U}, {got.C, want.C}} {
			if e := math.Abs(pair[0]/pair[1] - 1); !(e < 1e-12) {
				t.Errorf("T = %g: function %d = %.17g, fine sum %.17g (%.2g)", T, i, pair[0], pair[1], e)
			}
		}
	}
	near(t, "high T", float64(p.HeatCapacity(1e6)), 6*unit.GasConstant, 1e-6)
	// A rule made for a low temperature serves higher ones.
	ts := []unit.Temperature{0.3, 2, 11, 40, 250, 3000}
	for i, c := range p.HeatCapacities(ts) {
		near(t, fmt.Sprintf("slice at %v", ts[i]), float64(c), float64(p.HeatCapacity(ts[i])), 1e-12)
	}
	c := make([]float64, len(ts))
	if err := (Sum{p}).Accumulate(ts, nil, c, nil); err != nil {
		t.Fatal(err)
	}
	near(t, "Accumulate", c[3], float64(p.HeatCapacity(40)), 1e-12)
	near(t, "mean energy at high T", float64(p.ThermalEnergy(1e6))/1e6/unit.GasConstant, 6-0.5*6*p.average(func(w float64) float64 { return w })/1e6, 1e-6)
}

func TestPhononsRefusals(t *testing.T) {
	good := func() PhononTable { return parabola(101, 400, unit.THzEnergy, 1) }
	for name, test := range map[string]struct {
		change func(*PhononTable)
		want   string
	}{
		"integral off by 2 %": {func(p *PhononTable) {
			for i := range p.States {
				p.States[i] *= 1.02
			}
		}, "integral of the table = 1.02, want 1 within 1 %"},
		"wrong unit of the axis": {func(p *PhononTable) { p.Per = unit.MilliEV }, "integral of the table"},
		"wrong normalisation":    {func(p *PhononTable) { p.Integral = IntegralThree }, "want 3 within 1 %"},
		"no normalisation":       {func(p *PhononTable) { p.Integral = 0 }, "Integral = not chosen"},
		"no unit":                {func(p *PhononTable) { p.Per = 0 }, "Per = 0 J"},
		"no atoms":               {func(p *PhononTable) { p.AtomsPerCell = 0 }, "AtomsPerCell = 0"},
		"order":                  {func(p *PhononTable) { p.Energies[7] = p.Energies[6] }, "Energies[7]"},
		"negative":               {func(p *PhononTable) { p.States[50] = -0.1 }, "States[50]"},
		"NaN":                    {func(p *PhononTable) { p.States[50] = math.NaN() }, "row 51"},
		"lengths":                {func(p *PhononTable) { p.States = p.States[:50] }, "50 values"},
		"imaginary": {func(p *PhononTable) {
			p.Energies = append([]unit.Energy{-2 * unit.THzEnergy, -1 * unit.THzEnergy, -0.5 * unit.THzEnergy}, p.Energies...)
			p.States = append([]float64{0, 0.008, 0.003}, p.States...)
		}, "imaginary frequencies"},
	} {
		p := good()
		test.change(&p)
		if _, err := NewPhonons(p); !errors.Is(err, statmech.ErrDomain) || !strings.Contains(err.Error(), test.want) {
			t.Errorf("%s: %v, want %q", name, err, test.want)
		}
	}
	// Smaller flaws are set right and named.
	for name, test := range map[string]struct {
		change func(*PhononTable)
		want   string
	}{
		"scaled": {func(p *PhononTable) {
			for i := range p.States {
				p.States[i] *= 1.004
			}
		}, "the integral is 1.004"},
		"imaginary": {func(p *PhononTable) {
			p.Energies = append([]unit.Energy{-2 * unit.THzEnergy, -1 * unit.THzEnergy, -0.5 * unit.THzEnergy}, p.Energies...)
			p.States = append([]float64{0, 0.002, 0.001}, p.States...)
		}, "imaginary frequencies have 0.2"},
		"clipped": {func(p *PhononTable) { p.States[1] = -1e-5 }, "1 negative densities"},
		"at zero": {func(p *PhononTable) { p.States[0] = p.States[3] * 2 }, "density at ω = 0"},
	} {
		p := good()
		test.change(&p)
		ph, err := NewPhonons(p)
		if err != nil {
			t.Errorf("%s: %v", name, err)
			continue
		}
		if !strings.Contains(strings.Join(ph.Warnings(), "\n"), test.want) {
			t.Errorf("%s: %q, want %q", name, ph.Warnings(), test.want)
		}
		for _, T := range []unit.Temperature{0.001, 1, 1e5} {
			if r := ph.Reduced(T); math.IsNaN(r.LogQ+r.U+r.C) || math.IsInf(r.LogQ, 0) || r.C < 0 || r.C > 3+1e-9 {
				t.Errorf("%s at %v: %v", name, T, r)
			}
		}
	}
	p, err := NewPhonons(good())
	if err != nil {
		t.Fatal(err)
	}
	if _, err := p.Moment(-3); !errors.Is(err, ErrMoment) {
		t.Errorf("moment -3: %v", err)
	}
	if got, want := message(func() { p.HeatCapacity(0) }), "solid.Phonons.HeatCapacity: T = 0 K, want positive and finite"; got != want {
		t.Errorf("got  %s\nwant %s", got, want)
	}
}

// BenchmarkPhonons: a density of 20,000 points at 500 temperatures, from the
// table to the heat capacities, and with the rule at hand.
func BenchmarkPhonons(b *testing.B) {
	p, err := NewPhonons(parabola(20_001, 400, unit.THzEnergy, 1))
	if err != nil {
		b.Fatal(err)
	}
	ts := make([]unit.Temperature, 500)
	for i := range ts {
		ts[i] = unit.Temperature(5 + 2*float64(i))
	}
	b.Run("C with a new rule", func(b *testing.B) {
		for b.Loop() {
			p.rules = nil
			p.HeatCapacities(ts)
		}
	})
	b.Run("C", func(b *testing.B) {
		for b.Loop() {
			p.HeatCapacities(ts)
		}
	})
	b.Run("ln q, U and C", func(b *testing.B) {
		for b.Loop() {
			p.ReducedAt(ts)
		}
	})
	b.Run("from the table", func(b *testing.B) {
		table := parabola(20_001, 400, unit.THzEnergy, 1)
		for b.Loop() {
			if _, err := NewPhonons(table); err != nil {
				b.Fatal(err)
			}
		}
	})
}
