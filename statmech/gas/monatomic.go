package gas

import (
	"strconv"

	"levelsum/statmech"
	"levelsum/statmech/unit"
)

// Monatomic is an ideal gas of atoms: translation, and the electronic levels
// if they are given (nil means one non-degenerate level; nuclear spin is not
// counted). It is a [statmech.Mode].
//
// Mass is that of one atom: 39.95*unit.U, or a standard atomic weight. Pressure
// is that of the gas, usually the standard pressure 1 bar ([unit.Bar]); at 1 atm
// the entropy is R ln 1.01325 = 0.10944 J/(mol K) less.
type Monatomic struct {
	Mass     unit.Mass
	Pressure unit.Pressure
	Levels   *statmech.Levels
}

// Reduced returns the functions at fixed pressure: U is the enthalpy above the
// ground level over kT, C is Cp/k. It panics with a [*statmech.DomainError] if
// T, Mass or Pressure is not positive and finite.
func (g Monatomic) Reduced(T unit.Temperature) statmech.Reduced {
	r := g.translation().Reduced(T)
	if g.Levels != nil {
		r = r.Add(g.Levels.Reduced(T))
	}
	return r
}

func (g Monatomic) translation() Translation {
	return Translation{Mass: g.Mass, Pressure: g.Pressure}
}

// Entropy returns the molar entropy at T and the gas's pressure.
func (g Monatomic) Entropy(T unit.Temperature) unit.MolarEntropy { return g.molar().Entropy(T) }

// Entropies returns the molar entropy at each temperature.
func (g Monatomic) Entropies(ts []unit.Temperature) []unit.MolarEntropy {
	return g.molar().Entropies(ts)
}

// HeatCapacity returns the molar heat capacity at constant pressure.
func (g Monatomic) HeatCapacity(T unit.Temperature) unit.MolarEntropy {
	return g.molar().HeatCapacity(T)
}

// HeatCapacities returns the molar heat capacity at constant pressure at each
// temperature.
func (g Monatomic) HeatCapacities(ts []unit.Temperature) []unit.MolarEntropy {
	return g.molar().HeatCapacities(ts)
}

// EnthalpyIncrement returns H(T)-H(0).
func (g Monatomic) EnthalpyIncrement(T unit.Temperature) unit.MolarEnergy {
	return g.molar().Increment(T)
}

// EnthalpyIncrements returns H(T)-H(0) at each temperature.
func (g Monatomic) EnthalpyIncrements(ts []unit.Temperature) []unit.MolarEnergy {
	return g.molar().Increments(ts)
}

// GibbsFunction returns -(G(T)-H(0))/T.
func (g Monatomic) GibbsFunction(T unit.Temperature) unit.MolarEntropy {
	return g.molar().GibbsFunctionFromZero(T)
}

// GibbsFunctions returns -(G(T)-H(0))/T at each temperature.
func (g Monatomic) GibbsFunctions(ts []unit.Temperature) []unit.MolarEntropy {
	return g.molar().GibbsFunctionsFromZero(ts)
}

// Warnings returns what a reader of results at T must know, nil if nothing.
func (g Monatomic) Warnings(T unit.Temperature) []string {
	w := g.translation().Warnings(T)
	if s := g.Entropy(T); s < 0 {
		w = append(w, "the entropy "+s.String()+" is negative: the model does not hold there")
	}
	if g.Levels != nil {
		w = append(w, g.Levels.Warnings(T)...)
	}
	return w
}

func (g Monatomic) molar() statmech.Molar {
	return statmech.Molar{Mode: g, Per: "mol of atoms", Pressure: g.Pressure}
}

// short formats a number for a message.
func short(x float64) string { return strconv.FormatFloat(x, 'g', 3, 64) }
