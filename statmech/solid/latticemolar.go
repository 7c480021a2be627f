package solid

import (
	"levelsum/statmech"
	"levelsum/statmech/unit"
)

// This file holds the molar functions that the lattice models have. They are
// per mole of formula units; energies are counted from the ground level.

// Reduced returns ln q, U/kT and C/k of one formula unit; see [statmech.Mode].
func (e Einstein) Reduced(T unit.Temperature) statmech.Reduced {
	return reduced(e, "solid.Einstein.Reduced", T)
}

// HeatCapacity returns C_V at T.
func (e Einstein) HeatCapacity(T unit.Temperature) unit.MolarEntropy {
	return heatCapacity(e, "solid.Einstein.HeatCapacity", T)
}

// HeatCapacities returns C_V at every temperature.
func (e Einstein) HeatCapacities(ts []unit.Temperature) []unit.MolarEntropy {
	return heatCapacities(e, "solid.Einstein.HeatCapacities", ts)
}

// Entropy returns S(T).
func (e Einstein) Entropy(T unit.Temperature) unit.MolarEntropy {
	return entropy(e, "solid.Einstein.Entropy", T)
}

// Entropies returns S at every temperature.
func (e Einstein) Entropies(ts []unit.Temperature) []unit.MolarEntropy {
	return entropies(e, "solid.Einstein.Entropies", ts)
}

// EntropyIncrement returns S(to) - S(from).
func (e Einstein) EntropyIncrement(from, to unit.Temperature) unit.MolarEntropy {
	return entropyIncrement(e, "solid.Einstein.EntropyIncrement", from, to)
}

// ThermalEnergy returns U(T) - U(0).
func (e Einstein) ThermalEnergy(T unit.Temperature) unit.MolarEnergy {
	return energy(e, "solid.Einstein.ThermalEnergy", T)
}

// ThermalEnergies returns U(T) - U(0) at every temperature.
func (e Einstein) ThermalEnergies(ts []unit.Temperature) []unit.MolarEnergy {
	return energies(e, "solid.Einstein.ThermalEnergies", ts)
}

// EnthalpyIncrement returns U(to) - U(from), which is H(to) - H(from) at
// constant volume and negligible pressure.
func (e Einstein) EnthalpyIncrement(from, to unit.Temperature) unit.MolarEnergy {
	return enthalpyIncrement(e, "solid.Einstein.EnthalpyIncrement", from, to)
}

// EnthalpyIncrements returns U(ts[i]) - U(from) for every temperature.
func (e Einstein) EnthalpyIncrements(from unit.Temperature, ts []unit.Temperature) []unit.MolarEnergy {
	return enthalpyIncrements(e, "solid.Einstein.EnthalpyIncrements", from, ts)
}

// String names the fields with their units.
func (e Einstein) String() string { return describe("Einstein", e.fields()) }

// GroundDegeneracy returns 1.
func (e Einstein) GroundDegeneracy() float64 { return 1 }

// HighTemperatureHeatCapacity returns the limit of C/k.
func (e Einstein) HighTemperatureHeatCapacity() float64 { return modes(e.Modes) }

// Reduced returns ln q, U/kT and C/k of one formula unit; see [statmech.Mode].
func (d Debye) Reduced(T unit.Temperature) statmech.Reduced {
	return reduced(d, "solid.Debye.Reduced", T)
}

// HeatCapacity returns C_V at T.
func (d Debye) HeatCapacity(T unit.Temperature) unit.MolarEntropy {
	return heatCapacity(d, "solid.Debye.HeatCapacity", T)
}

// HeatCapacities returns C_V at every temperature.
func (d Debye) HeatCapacities(ts []unit.Temperature) []unit.MolarEntropy {
	return heatCapacities(d, "solid.Debye.HeatCapacities", ts)
}

// Entropy returns S(T).
func (d Debye) Entropy(T unit.Temperature) unit.MolarEntropy {
	return entropy(d, "solid.Debye.Entropy", T)
}

// Entropies returns S at every temperature.
func (d Debye) Entropies(ts []unit.Temperature) []unit.MolarEntropy {
	return entropies(d, "solid.Debye.Entropies", ts)
}

// EntropyIncrement returns S(to) - S(from).
func (d Debye) EntropyIncrement(from, to unit.Temperature) unit.MolarEntropy {
	return entropyIncrement(d, "solid.Debye.EntropyIncrement", from, to)
}

// ThermalEnergy returns U(T) - U(0).
func (d Debye) ThermalEnergy(T unit.Temperature) unit.MolarEnergy {
	return energy(d, "solid.Debye.ThermalEnergy", T)
}

// ThermalEnergies returns U(T) - U(0) at every temperature.
func (d Debye) ThermalEnergies(ts []unit.Temperature) []unit.MolarEnergy {
	return energies(d, "solid.Debye.ThermalEnergies", ts)
}

// EnthalpyIncrement returns U(to) - U(from), which is H(to) - H(from) at
// constant volume and negligible pressure.
func (d Debye) EnthalpyIncrement(from, to unit.Temperature) unit.MolarEnergy {
	return enthalpyIncrement(d, "solid.Debye.EnthalpyIncrement", from, to)
}

// EnthalpyIncrements returns U(ts[i]) - U(from) for every temperature.
func (d Debye) EnthalpyIncrements(from unit.Temperature, ts []unit.Temperature) []unit.MolarEnergy {
	return enthalpyIncrements(d, "solid.Debye.EnthalpyIncrements", from, ts)
}

// String names the fields with their units.
func (d Debye) String() string { return describe("Debye", d.fields()) }

// GroundDegeneracy returns 1.
func (d Debye) GroundDegeneracy() float64 { return 1 }

// HighTemperatureHeatCapacity returns the limit of C/k.
func (d Debye) HighTemperatureHeatCapacity() float64 { return modes(d.Modes) }

// Reduced returns ln q, U/kT and C/k of one formula unit; see [statmech.Mode].
func (d Debye2D) Reduced(T unit.Temperature) statmech.Reduced {
	return reduced(d, "solid.Debye2D.Reduced", T)
}

// HeatCapacity returns C_V at T.
func (d Debye2D) HeatCapacity(T unit.Temperature) unit.MolarEntropy {
	return heatCapacity(d, "solid.Debye2D.HeatCapacity", T)
}

// HeatCapacities returns C_V at every temperature.
func (d Debye2D) HeatCapacities(ts []unit.Temperature) []unit.MolarEntropy {
	return heatCapacities(d, "solid.Debye2D.HeatCapacities", ts)
}

// Entropy returns S(T).
func (d Debye2D) Entropy(T unit.Temperature) unit.MolarEntropy {
	return entropy(d, "solid.Debye2D.Entropy", T)
}

// Entropies returns S at every temperature.
func (d Debye2D) Entropies(ts []unit.Temperature) []unit.MolarEntropy {
	return entropies(d, "solid.Debye2D.Entropies", ts)
}

// EntropyIncrement returns S(to) - S(from).
func (d Debye2D) EntropyIncrement(from, to unit.Temperature) unit.MolarEntropy {
	return entropyIncrement(d, "solid.Debye2D.EntropyIncrement", from, to)
}

// ThermalEnergy returns U(T) - U(0).
func (d Debye2D) ThermalEnergy(T unit.Temperature) unit.MolarEnergy {
	return energy(d, "solid.Debye2D.ThermalEnergy", T)
}

// ThermalEnergies returns U(T) - U(0) at every temperature.
func (d Debye2D) ThermalEnergies(ts []unit.Temperature) []unit.MolarEnergy {
	return energies(d, "solid.Debye2D.ThermalEnergies", ts)
}

// EnthalpyIncrement returns U(to) - U(from), which is H(to) - H(from) at
// constant volume and negligible pressure.
func (d Debye2D) EnthalpyIncrement(from, to unit.Temperature) unit.MolarEnergy {
	return enthalpyIncrement(d, "solid.Debye2D.EnthalpyIncrement", from, to)
}

// EnthalpyIncrements returns U(ts[i]) - U(from) for every temperature.
func (d Debye2D) EnthalpyIncrements(from unit.Temperature, ts []unit.Temperature) []unit.MolarEnergy {
	return enthalpyIncrements(d, "solid.Debye2D.EnthalpyIncrements", from, ts)
}

// String names the fields with their units.
func (d Debye2D) String() string { return describe("Debye2D", d.fields()) }

// GroundDegeneracy returns 1.
func (d Debye2D) GroundDegeneracy() float64 { return 1 }

// HighTemperatureHeatCapacity returns the limit of C/k.
func (d Debye2D) HighTemperatureHeatCapacity() float64 { return modes(d.Modes) }

// Reduced returns ln q, U/kT and C/k of one formula unit; see [statmech.Mode].
func (d Debye1D) Reduced(T unit.Temperature) statmech.Reduced {
	return reduced(d, "solid.Debye1D.Reduced", T)
}

// HeatCapacity returns C_V at T.
func (d Debye1D) HeatCapacity(T unit.Temperature) unit.MolarEntropy {
	return heatCapacity(d, "solid.Debye1D.HeatCapacity", T)
}

// HeatCapacities returns C_V at every temperature.
func (d Debye1D) HeatCapacities(ts []unit.Temperature) []unit.MolarEntropy {
	return heatCapacities(d, "solid.Debye1D.HeatCapacities", ts)
}

// Entropy returns S(T).
func (d Debye1D) Entropy(T unit.Temperature) unit.MolarEntropy {
	return entropy(d, "solid.Debye1D.Entropy", T)
}

// Entropies returns S at every temperature.
func (d Debye1D) Entropies(ts []unit.Temperature) []unit.MolarEntropy {
	return entropies(d, "solid.Debye1D.Entropies", ts)
}

// EntropyIncrement returns S(to) - S(from).
func (d Debye1D) EntropyIncrement(from, to unit.Temperature) unit.MolarEntropy {
	return entropyIncrement(d, "solid.Debye1D.EntropyIncrement", from, to)
}

// ThermalEnergy returns U(T) - U(0).
func (d Debye1D) ThermalEnergy(T unit.Temperature) unit.MolarEnergy {
	return energy(d, "solid.Debye1D.ThermalEnergy", T)
}

// ThermalEnergies returns U(T) - U(0) at every temperature.
func (d Debye1D) ThermalEnergies(ts []unit.Temperature) []unit.MolarEnergy {
	return energies(d, "solid.Debye1D.ThermalEnergies", ts)
}

// EnthalpyIncrement returns U(to) - U(from), which is H(to) - H(from) at
// constant volume and negligible pressure.
func (d Debye1D) EnthalpyIncrement(from, to unit.Temperature) unit.MolarEnergy {
	return enthalpyIncrement(d, "solid.Debye1D.EnthalpyIncrement", from, to)
}

// EnthalpyIncrements returns U(ts[i]) - U(from) for every temperature.
func (d Debye1D) EnthalpyIncrements(from unit.Temperature, ts []unit.Temperature) []unit.MolarEnergy {
	return enthalpyIncrements(d, "solid.Debye1D.EnthalpyIncrements", from, ts)
}

// String names the fields with their units.
func (d Debye1D) String() string { return describe("Debye1D", d.fields()) }

// GroundDegeneracy returns 1.
func (d Debye1D) GroundDegeneracy() float64 { return 1 }

// HighTemperatureHeatCapacity returns the limit of C/k.
func (d Debye1D) HighTemperatureHeatCapacity() float64 { return modes(d.Modes) }

// Reduced returns ln q, U/kT and C/k of one formula unit; see [statmech.Mode].
func (t Tarasov) Reduced(T unit.Temperature) statmech.Reduced {
	return reduced(t, "solid.Tarasov.Reduced", T)
}

// HeatCapacity returns C_V at T.
func (t Tarasov) HeatCapacity(T unit.Temperature) unit.MolarEntropy {
	return heatCapacity(t, "solid.Tarasov.HeatCapacity", T)
}

// HeatCapacities returns C_V at every temperature.
func (t Tarasov) HeatCapacities(ts []unit.Temperature) []unit.MolarEntropy {
	return heatCapacities(t, "solid.Tarasov.HeatCapacities", ts)
}

// Entropy returns S(T).
func (t Tarasov) Entropy(T unit.Temperature) unit.MolarEntropy {
	return entropy(t, "solid.Tarasov.Entropy", T)
}

// Entropies returns S at every temperature.
func (t Tarasov) Entropies(ts []unit.Temperature) []unit.MolarEntropy {
	return entropies(t, "solid.Tarasov.Entropies", ts)
}

// EntropyIncrement returns S(to) - S(from).
func (t Tarasov) EntropyIncrement(from, to unit.Temperature) unit.MolarEntropy {
	return entropyIncrement(t, "solid.Tarasov.EntropyIncrement", from, to)
}

// ThermalEnergy returns U(T) - U(0).
func (t Tarasov) ThermalEnergy(T unit.Temperature) unit.MolarEnergy {
	return energy(t, "solid.Tarasov.ThermalEnergy", T)
}

// ThermalEnergies returns U(T) - U(0) at every temperature.
func (t Tarasov) ThermalEnergies(ts []unit.Temperature) []unit.MolarEnergy {
	return energies(t, "solid.Tarasov.ThermalEnergies", ts)
}

// EnthalpyIncrement returns U(to) - U(from), which is H(to) - H(from) at
// constant volume and negligible pressure.
func (t Tarasov) EnthalpyIncrement(from, to unit.Temperature) unit.MolarEnergy {
	return enthalpyIncrement(t, "solid.Tarasov.EnthalpyIncrement", from, to)
}

// EnthalpyIncrements returns U(ts[i]) - U(from) for every temperature.
func (t Tarasov) EnthalpyIncrements(from unit.Temperature, ts []unit.Temperature) []unit.MolarEnergy {
	return enthalpyIncrements(t, "solid.Tarasov.EnthalpyIncrements", from, ts)
}

// String names the fields with their units.
func (t Tarasov) String() string { return describe("Tarasov", t.fields()) }
