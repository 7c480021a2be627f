package solid

import (
	"levelsum/statmech"
	"levelsum/statmech/unit"
)

// This file holds the molar functions of a crystal of given density of states.
// They are per mole of formula units; energies are counted from the ground
// level.

// Reduced returns ln q, U/kT and C/k of one formula unit; see [statmech.Mode].
func (p *Phonons) Reduced(T unit.Temperature) statmech.Reduced {
	return reduced(p, "solid.Phonons.Reduced", T)
}

// HeatCapacity returns C_V at T.
func (p *Phonons) HeatCapacity(T unit.Temperature) unit.MolarEntropy {
	return heatCapacity(p, "solid.Phonons.HeatCapacity", T)
}

// HeatCapacities returns C_V at every temperature.
func (p *Phonons) HeatCapacities(ts []unit.Temperature) []unit.MolarEntropy {
	return heatCapacities(p, "solid.Phonons.HeatCapacities", ts)
}

// Entropy returns S(T).
func (p *Phonons) Entropy(T unit.Temperature) unit.MolarEntropy {
	return entropy(p, "solid.Phonons.Entropy", T)
}

// Entropies returns S at every temperature.
func (p *Phonons) Entropies(ts []unit.Temperature) []unit.MolarEntropy {
	return entropies(p, "solid.Phonons.Entropies", ts)
}

// EntropyIncrement returns S(to) - S(from).
func (p *Phonons) EntropyIncrement(from, to unit.Temperature) unit.MolarEntropy {
	return entropyIncrement(p, "solid.Phonons.EntropyIncrement", from, to)
}

// ThermalEnergy returns U(T) - U(0).
func (p *Phonons) ThermalEnergy(T unit.Temperature) unit.MolarEnergy {
	return energy(p, "solid.Phonons.ThermalEnergy", T)
}

// ThermalEnergies returns U(T) - U(0) at every temperature.
func (p *Phonons) ThermalEnergies(ts []unit.Temperature) []unit.MolarEnergy {
	return energies(p, "solid.Phonons.ThermalEnergies", ts)
}

// EnthalpyIncrement returns U(to) - U(from), which is H(to) - H(from) at
// constant volume and negligible pressure.
func (p *Phonons) EnthalpyIncrement(from, to unit.Temperature) unit.MolarEnergy {
	return enthalpyIncrement(p, "solid.Phonons.EnthalpyIncrement", from, to)
}

// EnthalpyIncrements returns U(ts[i]) - U(from) for every temperature.
func (p *Phonons) EnthalpyIncrements(from unit.Temperature, ts []unit.Temperature) []unit.MolarEnergy {
	return enthalpyIncrements(p, "solid.Phonons.EnthalpyIncrements", from, ts)
}
