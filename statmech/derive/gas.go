package derive

import (
	"fmt"
	"math"

	"levelsum/display"
	"levelsum/statmech/gas"
	"levelsum/statmech/reaction"
	"levelsum/statmech/unit"
)

// SackurTetrode derives the molar entropy of a monatomic ideal gas from the
// mass of its atom, temperature and pressure; electronic levels are added where
// the gas has some.
//
// Reference: H. Tetrode, Annalen der Physik 343, 434 (1912); O. Sackur, Annalen
// der Physik 345, 67 (1913).
func SackurTetrode(g gas.Monatomic, T unit.Temperature) display.Derivation {
	t := gas.Translation{Mass: g.Mass, Pressure: g.Pressure}
	total := g.Entropy(T)
	wave := display.Symbol{Name: "Λ", LaTeX: `\Lambda`, Meaning: "thermal wavelength", Value: t.ThermalWavelength(T)}
	trans := display.Symbol{Name: "S_tr", LaTeX: `S_{\mathrm{tr}}`, Meaning: "molar entropy of translation", Value: gas.Monatomic{Mass: g.Mass, Pressure: g.Pressure}.Entropy(T)}
	d := display.Derivation{Title: "Entropy of a monatomic ideal gas", Steps: []display.Step{
		{
			Formula: `[[Λ]] = \frac{[[h]]}{\sqrt{2 \pi\, [[m]]\, [[k]]\, [[T]]}}`,
			Symbols: []display.Symbol{wave, planck, {Name: "m", Meaning: "mass of one atom", Value: g.Mass}, boltzmann, temperature(T)},
			Result:  "Λ",
			Compute: func(x map[string]float64) float64 {
				return x["h"] / math.Sqrt(2*math.Pi*x["m"]*x["k"]*x["T"])
			},
		},
		{
			Text:    "Each atom has the volume $kT/p$; with Stirling's formula for $N!$",
			Formula: `[[S_tr]] = [[R]] \left[ \ln \frac{[[k]]\, [[T]]}{[[p]]\, [[Λ]]^3} + \frac{5}{2} \right]`,
			Symbols: []display.Symbol{trans, molarGas, boltzmann, temperature(T), {Name: "p", Meaning: "pressure", Value: g.Pressure}, wave},
			Result:  "S_tr",
			Compute: func(x map[string]float64) float64 {
				return x["R"] * (math.Log(x["k"]*x["T"]/(x["p"]*x["Λ"]*x["Λ"]*x["Λ"])) + 2.5)
			},
			Source: "H. Tetrode, Annalen der Physik 343, 434 (1912); O. Sackur, Annalen der Physik 345, 67 (1913)",
		},
	}, Notes: display.Notes(append([]string{fmt.Sprintf("Constants: %s. Ideal gas, classical translation; nuclear spin not counted.", unit.ConstantsSource)}, g.Warnings(T)...)...)}
	if g.Levels == nil {
		return d
	}
	r := g.Levels.Reduced(T)
	d.Steps = append(d.Steps, display.Step{
		Text:    "The electronic levels add $R(\\ln q_\\mathrm{el} + u_\\mathrm{el})$:",
		Formula: `[[S]] = [[S_tr]] + [[R]] \left( [[ln q]] + [[u]] \right)`,
		Symbols: []display.Symbol{{Name: "S", Meaning: "molar entropy", Value: total}, trans, molarGas,
			{Name: "ln q", LaTeX: `\ln q_{\mathrm{el}}`, Meaning: "logarithm of the electronic partition function", Value: r.LogQ, Unit: "1"},
			{Name: "u", LaTeX: `u_{\mathrm{el}}`, Meaning: "mean electronic energy over kT", Value: r.U, Unit: "1"}},
		Result:  "S",
		Compute: func(x map[string]float64) float64 { return x["S_tr"] + x["R"]*(x["ln q"]+x["u"]) },
	})
	return d
}

// EquilibriumConstant derives K of a gas reaction at T from its enthalpy and
// entropy, ln K = -ΔrG°/RT.
func EquilibriumConstant(r *reaction.Reaction, T unit.Temperature) display.Derivation {
	g := display.Symbol{Name: "ΔG", LaTeX: `\Delta_\mathrm{r} G^\circ`, Meaning: "standard Gibbs energy of the reaction", Value: r.GibbsEnergy(T)}
	return display.Derivation{Title: "Equilibrium constant of " + r.Equation, Steps: []display.Step{
		{
			Formula: `[[ΔG]] = [[ΔH]] - [[T]]\, [[ΔS]]`,
			Symbols: []display.Symbol{g,
				{Name: "ΔH", LaTeX: `\Delta_\mathrm{r} H^\circ`, Meaning: "standard enthalpy of the reaction", Value: r.Enthalpy(T)},
				temperature(T),
				{Name: "ΔS", LaTeX: `\Delta_\mathrm{r} S^\circ`, Meaning: "standard entropy of the reaction", Value: r.Entropy(T)}},
			Result:  "ΔG",
			Compute: func(x map[string]float64) float64 { return x["ΔH"] - x["T"]*x["ΔS"] },
		},
		{
			Formula: `[[ln K]] = -\frac{[[ΔG]]}{[[R]]\, [[T]]}`,
			Symbols: []display.Symbol{{Name: "ln K", LaTeX: `\ln K`, Meaning: "logarithm of the equilibrium constant, pressures over p°", Value: r.LogK(T), Unit: "1"}, g, molarGas, temperature(T)},
			Result:  "ln K",
			Compute: func(x map[string]float64) float64 { return -x["ΔG"] / (x["R"] * x["T"]) },
		},
	}, Notes: display.Notes("Ideal gases at equilibrium with the listed species only; not a safety case. Do not size relief, containment, ventilation or interlocks from it.")}
}
