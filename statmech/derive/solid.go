package derive

import (
	"fmt"
	"math"

	"levelsum/display"
	"levelsum/statmech"
	"levelsum/statmech/calorimetry"
	"levelsum/statmech/solid"
	"levelsum/statmech/special"
	"levelsum/statmech/uncertain"
	"levelsum/statmech/unit"
)

// Debye derives the heat capacity of a Debye lattice at T, and beside it the
// T³ law with the part by which that is off there.
//
// Reference: P. Debye, Annalen der Physik 344, 789 (1912).
func Debye(d solid.Debye, T unit.Temperature) display.Derivation {
	statmech.CheckTemperature("derive.Debye", T)
	r := solid.Sum{&d}.Reduced(T)
	_, _, f := special.DebyeThermal(3, float64(d.Theta/T))
	n := d.ModeCount()
	c := unit.MolarEntropy(r.C) * unit.R
	x := display.Symbol{Name: "x", Meaning: "upper end of the integral", Value: float64(d.Theta / T), Unit: "1"}
	theta := display.Symbol{Name: "θ", LaTeX: `\theta_\mathrm{D}`, Meaning: "Debye temperature", Value: d.Theta}
	modes := display.Symbol{Name: "n", Meaning: "vibrations in the formula unit", Value: n, Unit: "1"}
	ratio := float64(T / d.Theta)
	cube := unit.MolarEntropy(n*4*math.Pow(math.Pi, 4)/5*ratio*ratio*ratio) * unit.R
	return display.Derivation{Title: "Heat capacity of a Debye lattice", Steps: []display.Step{
		{
			Formula: `[[x]] = \frac{[[θ]]}{[[T]]}`,
			Symbols: []display.Symbol{x, theta, temperature(T)},
			Result:  "x",
			Compute: func(v map[string]float64) float64 { return v["θ"] / v["T"] },
		},
		{
			Text:    "The density of states $9N\\omega^2/\\omega_\\mathrm{D}^3$ of a continuum, cut off at $\\omega_\\mathrm{D} = k\\theta_\\mathrm{D}/\\hbar$, gives for one vibration the part",
			Formula: `[[f]] = \frac{3}{[[x]]^3} \int_0^{[[x]]} \frac{t^4 \mathrm{e}^t}{(\mathrm{e}^t - 1)^2}\, \mathrm{d}t`,
			Symbols: []display.Symbol{{Name: "f", Meaning: "heat capacity of one vibration over its classical value k", Value: f, Unit: "1"}, x},
			Result:  "f",
			Compute: func(v map[string]float64) float64 { _, _, c := special.DebyeThermal(3, v["x"]); return c },
			Source:  "P. Debye, Annalen der Physik 344, 789 (1912)",
		},
		{
			Formula: `[[C]] = [[n]]\, [[R]]\, [[f]]`,
			Symbols: []display.Symbol{{Name: "C", LaTeX: "C_V", Meaning: "molar heat capacity at constant volume", Value: c}, modes, molarGas,
				{Name: "f", Meaning: "as above", Value: f, Unit: "1"}},
			Result:  "C",
			Compute: func(v map[string]float64) float64 { return v["n"] * v["R"] * v["f"] },
		},
		{
			Text:    "At low temperature the integral tends to $4\\pi^4/15$, which is the $T^3$ law:",
			Formula: `[[C]] \to [[n]] \frac{4\pi^4}{5} [[R]] \left(\frac{[[T]]}{[[θ]]}\right)^3`,
			Symbols: []display.Symbol{{Name: "C", LaTeX: "C_V", Meaning: "the limit of the molar heat capacity", Value: cube}, modes, molarGas, temperature(T), theta},
			Result:  "C",
			Compute: func(v map[string]float64) float64 {
				return v["n"] * 4 * math.Pow(math.Pi, 4) / 5 * v["R"] * math.Pow(v["T"]/v["θ"], 3)
			},
		},
	}, Notes: display.Notes(limitNote(float64(cube), float64(c)))}
}

func limitNote(cube, c float64) string {
	if c == 0 {
		return ""
	}
	if off := 100 * (cube - c) / c; math.Abs(off) >= 1e-4 {
		return fmt.Sprintf("At this temperature the T³ law is off by %.2g %%.", off)
	}
	return "At this temperature the T³ law holds to better than 1e-6 of the value."
}

// ThirdLaw derives the entropy at T as the sum of its parts from 0 K upwards:
// extrapolation, phases, transitions.
func ThirdLaw(p *calorimetry.Path, T unit.Temperature) display.Derivation {
	parts := p.Contributions(T)
	step := display.Step{
		Text: "Each phase adds $\\int C_p/T\\,\\mathrm{d}T$, each transition $\\Delta H/T$; $S(0) = 0$ is taken. " +
			"The uncertainty of the sum holds what its parts have in common.",
		Formula: `[[S]] = `,
		Result:  "S",
		Symbols: []display.Symbol{{Name: "S", LaTeX: fmt.Sprintf(`S(%.6g\,\mathrm{K})`, float64(T)), Meaning: "molar entropy", Value: sumOf(parts).WithUnit("J/(mol K)").Named(fmt.Sprintf("S(%.6g K)", float64(T)))}},
		Compute: func(x map[string]float64) float64 {
			sum := 0.0
			for _, v := range x {
				sum += v
			}
			return sum
		},
	}
	for i, c := range parts {
		name := fmt.Sprintf("ΔS_%d", i+1)
		if i > 0 {
			step.Formula += " + "
		}
		step.Formula += "[[" + name + "]]"
		what := fmt.Sprintf("%s, %.6g K to %.6g K", c.Name, float64(c.From), float64(c.To))
		if c.From == c.To {
			what = fmt.Sprintf("%s, at %.6g K", c.Name, float64(c.To))
		}
		step.Symbols = append(step.Symbols, display.Symbol{Name: name, LaTeX: fmt.Sprintf(`\Delta S_{%d}`, i+1), Meaning: what, Value: c.Entropy.Named(name)})
	}
	return display.Derivation{Title: "Entropy by the third law", Steps: []display.Step{step}}
}

func sumOf(parts []calorimetry.Contribution) uncertain.Quantity {
	qs := make([]uncertain.Quantity, len(parts))
	for i := range parts {
		qs[i] = parts[i].Entropy
	}
	return uncertain.Sum(qs...)
}
