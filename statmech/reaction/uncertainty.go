package reaction

import (
	"fmt"
	"math"

	"levelsum/display"
	"levelsum/statmech/gas"
	"levelsum/statmech/unit"
)

// A source is an uncertain input: a number of one species, or the given
// enthalpy of one reaction.
type source struct {
	species *gas.Molecule
	owner   *Reaction
	name    string
}

// A Sensitivity is what one standard uncertainty of an input does to ln K, ΔrH°
// and ΔrS°.
type Sensitivity struct {
	Input    string
	LogK     float64
	Enthalpy unit.MolarEnergy
	Entropy  unit.MolarEntropy

	from source
}

// Sensitivities returns the effects of all uncertain inputs at T: energies and
// molecular constants of the species, taken as independent of one another. A
// species on both sides enters with its net number, so that it cancels.
func (r *Reaction) Sensitivities(T unit.Temperature) ([]Sensitivity, error) {
	r.need("Sensitivities", T)
	var out []Sensitivity
	if r.kind == Given && r.u0 > 0 {
		out = append(out, Sensitivity{"reaction enthalpy", -r.u0.Over(T).In(unit.R), r.u0, 0, source{owner: r, name: "enthalpy"}})
	}
	for _, t := range r.terms {
		if _, u, ok := energyOf(t.Species, r.kind); r.kind != Given && ok && u > 0 {
			e := unit.MolarEnergy(t.Nu) * u
			if r.kind == AtomisationD0 {
				e = -e
			}
			out = append(out, Sensitivity{t.Species.Name() + ": " + r.kind.String(), -e.Over(T).In(unit.R), e, 0, source{species: t.Species, name: r.kind.String()}})
		}
		us, err := t.Species.Uncertainties([]unit.Temperature{T})
		if err != nil {
			return nil, fmt.Errorf("reaction: %s: %w", r.Equation, err)
		}
		if us == nil {
			continue
		}
		for _, e := range us[0].Effects {
			g := e.Entropy - e.Increment.Over(T)
			out = append(out, Sensitivity{t.Species.Name() + ": " + e.Input, t.Nu * g.In(unit.R), unit.MolarEnergy(t.Nu) * e.Increment,
				unit.MolarEntropy(t.Nu) * e.Entropy, source{species: t.Species, name: e.Input}})
		}
	}
	return out, nil
}

// UncertaintyOfLogK returns the standard uncertainty of ln K at T.
func (r *Reaction) UncertaintyOfLogK(T unit.Temperature) (float64, error) {
	c, err := CovarianceOfLogK(r, r, T)
	return math.Sqrt(c), err
}

// CovarianceOfLogK returns the covariance of ln K of two reactions at T: inputs
// that both use (the same *gas.Molecule) are correlated, so that a difference of
// reactions does not count them twice.
func CovarianceOfLogK(a, b *Reaction, T unit.Temperature) (float64, error) {
	x, err := a.Sensitivities(T)
	if err != nil {
		return 0, err
	}
	y, err := b.Sensitivities(T)
	if err != nil {
		return 0, err
	}
	c := 0.0
	for _, p := range x {
		for _, q := range y {
			if p.from == q.from {
				c += float64(p.LogK * q.LogK)
			}
		}
	}
	return c, nil
}

// Table returns ln K, log10 K, ΔrG°, ΔrH° and ΔrS° on a grid with standard
// uncertainties where there are any.
func (r *Reaction) Table(ts []unit.Temperature) (display.Table, error) {
	n := len(ts)
	lnK, log10 := make([]float64, n), make([]float64, n)
	G, H := make([]unit.MolarEnergy, n), make([]unit.MolarEnergy, n)
	S := make([]unit.MolarEntropy, n)
	uK, uL := make([]float64, n), make([]float64, n)
	uG, uH := make([]unit.MolarEnergy, n), make([]unit.MolarEnergy, n)
	uS := make([]unit.MolarEntropy, n)
	uncertain := false
	for i, T := range ts {
		lnK[i], G[i], H[i], S[i] = r.LogK(T), r.GibbsEnergy(T), r.Enthalpy(T), r.Entropy(T)
		log10[i] = lnK[i] / math.Ln10
		list, err := r.Sensitivities(T)
		if err != nil {
			return display.Table{}, err
		}
		for _, s := range list {
			uncertain = true
			uK[i] = math.Hypot(uK[i], s.LogK)
			uH[i] = unit.MolarEnergy(math.Hypot(float64(uH[i]), float64(s.Enthalpy)))
			uS[i] = unit.MolarEntropy(math.Hypot(float64(uS[i]), float64(s.Entropy)))
		}
		uL[i] = uK[i] / math.Ln10
		uG[i] = unit.MolarEnergy(uK[i] * unit.GasConstant * float64(T))
	}
	columns := []display.Column{
		{Quantity: "T", Values: ts}, {Quantity: "ln K", Values: lnK}, {Quantity: "log10 K", Values: log10},
		{Quantity: "ΔrG°", Unit: "kJ/mol", In: unit.MolarKJ, Values: G}, {Quantity: "ΔrH°", Unit: "kJ/mol", In: unit.MolarKJ, Values: H}, {Quantity: "ΔrS°", Values: S},
	}
	if uncertain {
		for i, u := range []any{uK, uL, uG, uH, uS} {
			columns[i+1].U = u
		}
	}
	return display.Table{Caption: r.Equation, Columns: columns, Notes: []string{
		"p° = " + r.pressure.String() + "; ΔrH(0 K) from " + r.kind.String() + "; constants: " + unit.ConstantsSource,
		"Ideal-gas equilibrium with the listed species only; not a safety case. Do not size relief, containment, ventilation or interlocks from it; local codes and licensed practice decide.",
	}}, nil
}
