// Package derive shows how the main functions of statistical thermodynamics
// come to their values: formula, symbols with meaning and unit, the numbers put
// in, result and source, as a [display.Derivation].
//
//	derive.SackurTetrode(argon, 298.15*unit.K)
//
// The result of each step is the one that the model gives; the formula is
// worked out again from the numbers shown, and a step whose two results differ
// is not shown. Arguments outside the range of a model panic with a
// [*statmech.DomainError], as in the model itself.
package derive

import (
	"fmt"
	"math"

	"levelsum/display"
	"levelsum/statmech"
	"levelsum/statmech/unit"
)

// Symbols that several derivations need.
var (
	boltzmann = display.Symbol{Name: "k", Meaning: "Boltzmann constant (exact)", Value: unit.Entropy(unit.Boltzmann)}
	planck    = display.Symbol{Name: "h", Meaning: "Planck constant (exact)", Value: unit.Planck, Unit: "J s"}
	molarGas  = display.Symbol{Name: "R", Meaning: "molar gas constant (exact)", Value: unit.R}
)

func temperature(T unit.Temperature) display.Symbol {
	return display.Symbol{Name: "T", Meaning: "temperature", Value: T}
}

// mostStates is the number of probabilities that are written out one by one.
const mostStates = 6

// GibbsEntropy derives the entropy of probabilities pᵢ of states,
// S = -k Σ pᵢ ln pᵢ.
//
// Errors: as [statmech.GibbsEntropy].
//
// Reference: J. W. Gibbs, Elementary Principles in Statistical Mechanics (1902).
func GibbsEntropy(p []float64) (display.Derivation, error) {
	s, err := statmech.GibbsEntropy(p)
	if err != nil {
		return display.Derivation{}, err
	}
	step := display.Step{
		Text:   "The entropy of a distribution over states is the mean of $-k\\ln p_i$; a state with $p_i = 0$ adds nothing.",
		Result: "S",
		Source: "J. W. Gibbs, Elementary Principles in Statistical Mechanics (1902)",
		Symbols: []display.Symbol{
			{Name: "S", Meaning: "entropy per system", Value: s.PerParticle()},
			boltzmann,
		},
	}
	if len(p) > mostStates {
		sum := 0.0
		for _, x := range p {
			if x > 0 {
				sum += x * math.Log(x)
			}
		}
		step.Formula = `[[S]] = -[[k]] [[Σ]]`
		step.Symbols = append(step.Symbols, display.Symbol{Name: "Σ", LaTeX: `\sum_i p_i \ln p_i`,
			Meaning: fmt.Sprintf("Σ pᵢ ln pᵢ over the %d states", len(p)), Value: sum, Unit: "1"})
		step.Compute = func(x map[string]float64) float64 { return -x["k"] * x["Σ"] }
		return display.Derivation{Title: "Gibbs entropy", Steps: []display.Step{step}}, nil
	}
	terms := ""
	for i, x := range p {
		if x == 0 {
			continue
		}
		name := fmt.Sprintf("p_%d", i+1)
		if terms != "" {
			terms += " + "
		}
		terms += fmt.Sprintf(`[[%s]] \ln [[%s]]`, name, name)
		step.Symbols = append(step.Symbols, display.Symbol{Name: name, Meaning: fmt.Sprintf("probability of state %d", i+1), Value: x, Unit: "1"})
	}
	step.Formula = `[[S]] = -[[k]] \left( ` + terms + ` \right)`
	step.Compute = func(x map[string]float64) float64 {
		sum := 0.0
		for name, p := range x {
			if name != "k" {
				sum += p * math.Log(p)
			}
		}
		return -x["k"] * sum
	}
	return display.Derivation{Title: "Gibbs entropy", Steps: []display.Step{step}}, nil
}

// EqualStates derives the entropy of W states of equal probability, S = k ln W,
// as the case pᵢ = 1/W of the Gibbs entropy. It panics with a
// [*statmech.DomainError] if W is not finite and at least 1.
//
// Reference: M. Planck, Annalen der Physik 309, 553 (1901), after L. Boltzmann (1877).
func EqualStates(W float64) display.Derivation {
	if !(W >= 1) || math.IsInf(W, 0) {
		panic(&statmech.DomainError{Func: "derive.EqualStates", Arg: "W", Value: fmt.Sprint(W), Want: "a finite number of states, at least 1"})
	}
	w := display.Symbol{Name: "W", Meaning: "number of states, each of probability 1/W", Value: W, Unit: "1"}
	return display.Derivation{Title: "Entropy of equally probable states", Steps: []display.Step{
		{
			Text:    "Gibbs entropy with $W$ equal probabilities: all terms of the sum are the same.",
			Formula: `S = -k \sum_{i=1}^{W} p_i \ln p_i = -k\, W \frac{1}{W} \ln \frac{1}{W} = k \ln W`,
		},
		{
			Formula: `[[S]] = [[k]] \ln [[W]]`,
			Symbols: []display.Symbol{{Name: "S", Meaning: "entropy per system", Value: unit.Entropy(unit.Boltzmann * math.Log(W))}, boltzmann, w},
			Result:  "S",
			Compute: func(x map[string]float64) float64 { return x["k"] * math.Log(x["W"]) },
			Source:  "M. Planck, Annalen der Physik 309, 553 (1901), after L. Boltzmann (1877)",
		},
	}}
}

// FromPartitionFunction derives the molar entropy and heat capacity of a mode
// from its reduced functions, S = R (ln q + T ∂ln q/∂T).
//
// Reference: any text on statistical thermodynamics; the form is that of
// [statmech.Reduced].
func FromPartitionFunction(m statmech.Mode, T unit.Temperature) display.Derivation {
	r := m.Reduced(T)
	s := unit.MolarEntropy(r.Entropy()) * unit.R
	return display.Derivation{Title: "Molar entropy from the partition function", Steps: []display.Step{{
		Text:    "Energies are counted from the ground level, so that $q$ has no zero-point factor.",
		Formula: `[[S]] = [[R]] \left( [[ln q]] + [[u]] \right)`,
		Symbols: []display.Symbol{
			{Name: "S", Meaning: "molar entropy", Value: s},
			molarGas,
			{Name: "ln q", LaTeX: `\ln q`, Meaning: fmt.Sprintf("logarithm of the partition function at %v", T), Value: r.LogQ, Unit: "1"},
			{Name: "u", LaTeX: `\frac{\langle E \rangle - E_0}{kT}`, Meaning: "mean energy above the ground level, over kT: T ∂ln q/∂T", Value: r.U, Unit: "1"},
		},
		Result:  "S",
		Compute: func(x map[string]float64) float64 { return x["R"] * (x["ln q"] + x["u"]) },
	}}}
}

// Schottky derives the molar heat capacity of a system of two levels.
//
// Reference: W. Schottky, Physikalische Zeitschrift 23, 448 (1922).
func Schottky(s statmech.Schottky, T unit.Temperature) display.Derivation {
	r := s.Reduced(T)
	x := s.Splitting.OverKT(T)
	xs := display.Symbol{Name: "x", Meaning: "splitting over kT", Value: x, Unit: "1"}
	return display.Derivation{Title: "Heat capacity of two levels", Steps: []display.Step{
		{
			Formula: `[[x]] = \frac{[[Δ]]}{[[k]] [[T]]}`,
			Symbols: []display.Symbol{xs,
				{Name: "Δ", LaTeX: `\Delta`, Meaning: "splitting, energy per particle", Value: s.Splitting},
				boltzmann, temperature(T)},
			Result:  "x",
			Compute: func(v map[string]float64) float64 { return v["Δ"] / (v["k"] * v["T"]) },
		},
		{
			Text:    "The variance of the energy over $(kT)^2$ gives",
			Formula: `[[C]] = [[R]] \frac{[[r]] [[x]]^2 \mathrm{e}^{-[[x]]}}{\left(1 + [[r]] \mathrm{e}^{-[[x]]}\right)^2}`,
			Symbols: []display.Symbol{{Name: "C", Meaning: "molar heat capacity", Value: unit.MolarEntropy(r.C) * unit.R}, molarGas, xs,
				{Name: "r", Meaning: "ratio of the degeneracies, upper over lower", Value: s.Ratio, Unit: "1"}},
			Result: "C",
			Compute: func(v map[string]float64) float64 {
				w := v["r"] * math.Exp(-v["x"])
				return v["R"] * v["x"] * v["x"] * w / ((1 + w) * (1 + w))
			},
			Source: "W. Schottky, Physikalische Zeitschrift 23, 448 (1922)",
		},
	}}
}
