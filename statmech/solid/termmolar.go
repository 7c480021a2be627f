package solid

import (
	"levelsum/statmech"
	"levelsum/statmech/unit"
)

// This file holds the molar functions that the other models with a partition
// function have. They are per mole of formula units; energies are counted from
// the ground level.

// Reduced returns ln q, U/kT and C/k of one formula unit; see [statmech.Mode].
func (e Electronic) Reduced(T unit.Temperature) statmech.Reduced {
	return reduced(e, "solid.Electronic.Reduced", T)
}

// HeatCapacity returns C_V at T.
func (e Electronic) HeatCapacity(T unit.Temperature) unit.MolarEntropy {
	return heatCapacity(e, "solid.Electronic.HeatCapacity", T)
}

// HeatCapacities returns C_V at every temperature.
func (e Electronic) HeatCapacities(ts []unit.Temperature) []unit.MolarEntropy {
	return heatCapacities(e, "solid.Electronic.HeatCapacities", ts)
}

// Entropy returns S(T).
func (e Electronic) Entropy(T unit.Temperature) unit.MolarEntropy {
	return entropy(e, "solid.Electronic.Entropy", T)
}

// Entropies returns S at every temperature.
func (e Electronic) Entropies(ts []unit.Temperature) []unit.MolarEntropy {
	return entropies(e, "solid.Electronic.Entropies", ts)
}

// EntropyIncrement returns S(to) - S(from).
func (e Electronic) EntropyIncrement(from, to unit.Temperature) unit.MolarEntropy {
	return entropyIncrement(e, "solid.Electronic.EntropyIncrement", from, to)
}

// ThermalEnergy returns U(T) - U(0).
func (e Electronic) ThermalEnergy(T unit.Temperature) unit.MolarEnergy {
	return energy(e, "solid.Electronic.ThermalEnergy", T)
}

// ThermalEnergies returns U(T) - U(0) at every temperature.
func (e Electronic) ThermalEnergies(ts []unit.Temperature) []unit.MolarEnergy {
	return energies(e, "solid.Electronic.ThermalEnergies", ts)
}

// EnthalpyIncrement returns U(to) - U(from), which is H(to) - H(from) at
// constant volume and negligible pressure.
func (e Electronic) EnthalpyIncrement(from, to unit.Temperature) unit.MolarEnergy {
	return enthalpyIncrement(e, "solid.Electronic.EnthalpyIncrement", from, to)
}

// EnthalpyIncrements returns U(ts[i]) - U(from) for every temperature.
func (e Electronic) EnthalpyIncrements(from unit.Temperature, ts []unit.Temperature) []unit.MolarEnergy {
	return enthalpyIncrements(e, "solid.Electronic.EnthalpyIncrements", from, ts)
}

// String names the fields with their units.
func (e Electronic) String() string { return describe("Electronic", e.fields()) }

// Reduced returns ln q, U/kT and C/k of one formula unit; see [statmech.Mode].
func (w FerroSpinWave) Reduced(T unit.Temperature) statmech.Reduced {
	return reduced(w, "solid.FerroSpinWave.Reduced", T)
}

// HeatCapacity returns C_V at T.
func (w FerroSpinWave) HeatCapacity(T unit.Temperature) unit.MolarEntropy {
	return heatCapacity(w, "solid.FerroSpinWave.HeatCapacity", T)
}

// HeatCapacities returns C_V at every temperature.
func (w FerroSpinWave) HeatCapacities(ts []unit.Temperature) []unit.MolarEntropy {
	return heatCapacities(w, "solid.FerroSpinWave.HeatCapacities", ts)
}

// Entropy returns S(T).
func (w FerroSpinWave) Entropy(T unit.Temperature) unit.MolarEntropy {
	return entropy(w, "solid.FerroSpinWave.Entropy", T)
}

// Entropies returns S at every temperature.
func (w FerroSpinWave) Entropies(ts []unit.Temperature) []unit.MolarEntropy {
	return entropies(w, "solid.FerroSpinWave.Entropies", ts)
}

// EntropyIncrement returns S(to) - S(from).
func (w FerroSpinWave) EntropyIncrement(from, to unit.Temperature) unit.MolarEntropy {
	return entropyIncrement(w, "solid.FerroSpinWave.EntropyIncrement", from, to)
}

// ThermalEnergy returns U(T) - U(0).
func (w FerroSpinWave) ThermalEnergy(T unit.Temperature) unit.MolarEnergy {
	return energy(w, "solid.FerroSpinWave.ThermalEnergy", T)
}

// ThermalEnergies returns U(T) - U(0) at every temperature.
func (w FerroSpinWave) ThermalEnergies(ts []unit.Temperature) []unit.MolarEnergy {
	return energies(w, "solid.FerroSpinWave.ThermalEnergies", ts)
}

// EnthalpyIncrement returns U(to) - U(from), which is H(to) - H(from) at
// constant volume and negligible pressure.
func (w FerroSpinWave) EnthalpyIncrement(from, to unit.Temperature) unit.MolarEnergy {
	return enthalpyIncrement(w, "solid.FerroSpinWave.EnthalpyIncrement", from, to)
}

// EnthalpyIncrements returns U(ts[i]) - U(from) for every temperature.
func (w FerroSpinWave) EnthalpyIncrements(from unit.Temperature, ts []unit.Temperature) []unit.MolarEnergy {
	return enthalpyIncrements(w, "solid.FerroSpinWave.EnthalpyIncrements", from, ts)
}

// String names the fields with their units.
func (w FerroSpinWave) String() string { return describe("FerroSpinWave", w.fields()) }

// Reduced returns ln q, U/kT and C/k of one formula unit; see [statmech.Mode].
func (w AntiferroSpinWave) Reduced(T unit.Temperature) statmech.Reduced {
	return reduced(w, "solid.AntiferroSpinWave.Reduced", T)
}

// HeatCapacity returns C_V at T.
func (w AntiferroSpinWave) HeatCapacity(T unit.Temperature) unit.MolarEntropy {
	return heatCapacity(w, "solid.AntiferroSpinWave.HeatCapacity", T)
}

// HeatCapacities returns C_V at every temperature.
func (w AntiferroSpinWave) HeatCapacities(ts []unit.Temperature) []unit.MolarEntropy {
	return heatCapacities(w, "solid.AntiferroSpinWave.HeatCapacities", ts)
}

// Entropy returns S(T).
func (w AntiferroSpinWave) Entropy(T unit.Temperature) unit.MolarEntropy {
	return entropy(w, "solid.AntiferroSpinWave.Entropy", T)
}

// Entropies returns S at every temperature.
func (w AntiferroSpinWave) Entropies(ts []unit.Temperature) []unit.MolarEntropy {
	return entropies(w, "solid.AntiferroSpinWave.Entropies", ts)
}

// EntropyIncrement returns S(to) - S(from).
func (w AntiferroSpinWave) EntropyIncrement(from, to unit.Temperature) unit.MolarEntropy {
	return entropyIncrement(w, "solid.AntiferroSpinWave.EntropyIncrement", from, to)
}

// ThermalEnergy returns U(T) - U(0).
func (w AntiferroSpinWave) ThermalEnergy(T unit.Temperature) unit.MolarEnergy {
	return energy(w, "solid.AntiferroSpinWave.ThermalEnergy", T)
}

// ThermalEnergies returns U(T) - U(0) at every temperature.
func (w AntiferroSpinWave) ThermalEnergies(ts []unit.Temperature) []unit.MolarEnergy {
	return energies(w, "solid.AntiferroSpinWave.ThermalEnergies", ts)
}

// EnthalpyIncrement returns U(to) - U(from), which is H(to) - H(from) at
// constant volume and negligible pressure.
func (w AntiferroSpinWave) EnthalpyIncrement(from, to unit.Temperature) unit.MolarEnergy {
	return enthalpyIncrement(w, "solid.AntiferroSpinWave.EnthalpyIncrement", from, to)
}

// EnthalpyIncrements returns U(ts[i]) - U(from) for every temperature.
func (w AntiferroSpinWave) EnthalpyIncrements(from unit.Temperature, ts []unit.Temperature) []unit.MolarEnergy {
	return enthalpyIncrements(w, "solid.AntiferroSpinWave.EnthalpyIncrements", from, ts)
}

// String names the fields with their units.
func (w AntiferroSpinWave) String() string { return describe("AntiferroSpinWave", w.fields()) }

// Reduced returns ln q, U/kT and C/k of one formula unit; see [statmech.Mode].
func (s Schottky) Reduced(T unit.Temperature) statmech.Reduced {
	return reduced(s, "solid.Schottky.Reduced", T)
}

// HeatCapacity returns C_V at T.
func (s Schottky) HeatCapacity(T unit.Temperature) unit.MolarEntropy {
	return heatCapacity(s, "solid.Schottky.HeatCapacity", T)
}

// HeatCapacities returns C_V at every temperature.
func (s Schottky) HeatCapacities(ts []unit.Temperature) []unit.MolarEntropy {
	return heatCapacities(s, "solid.Schottky.HeatCapacities", ts)
}

// Entropy returns S(T).
func (s Schottky) Entropy(T unit.Temperature) unit.MolarEntropy {
	return entropy(s, "solid.Schottky.Entropy", T)
}

// Entropies returns S at every temperature.
func (s Schottky) Entropies(ts []unit.Temperature) []unit.MolarEntropy {
	return entropies(s, "solid.Schottky.Entropies", ts)
}

// EntropyIncrement returns S(to) - S(from).
func (s Schottky) EntropyIncrement(from, to unit.Temperature) unit.MolarEntropy {
	return entropyIncrement(s, "solid.Schottky.EntropyIncrement", from, to)
}

// ThermalEnergy returns U(T) - U(0).
func (s Schottky) ThermalEnergy(T unit.Temperature) unit.MolarEnergy {
	return energy(s, "solid.Schottky.ThermalEnergy", T)
}

// ThermalEnergies returns U(T) - U(0) at every temperature.
func (s Schottky) ThermalEnergies(ts []unit.Temperature) []unit.MolarEnergy {
	return energies(s, "solid.Schottky.ThermalEnergies", ts)
}

// EnthalpyIncrement returns U(to) - U(from), which is H(to) - H(from) at
// constant volume and negligible pressure.
func (s Schottky) EnthalpyIncrement(from, to unit.Temperature) unit.MolarEnergy {
	return enthalpyIncrement(s, "solid.Schottky.EnthalpyIncrement", from, to)
}

// EnthalpyIncrements returns U(ts[i]) - U(from) for every temperature.
func (s Schottky) EnthalpyIncrements(from unit.Temperature, ts []unit.Temperature) []unit.MolarEnergy {
	return enthalpyIncrements(s, "solid.Schottky.EnthalpyIncrements", from, ts)
}

// String names the fields with their units.
func (s Schottky) String() string { return describe("Schottky", s.fields()) }

// Reduced returns ln q, U/kT and C/k of one formula unit; see [statmech.Mode].
func (e ExponentialGap) Reduced(T unit.Temperature) statmech.Reduced {
	return reduced(e, "solid.ExponentialGap.Reduced", T)
}

// HeatCapacity returns C_V at T.
func (e ExponentialGap) HeatCapacity(T unit.Temperature) unit.MolarEntropy {
	return heatCapacity(e, "solid.ExponentialGap.HeatCapacity", T)
}

// HeatCapacities returns C_V at every temperature.
func (e ExponentialGap) HeatCapacities(ts []unit.Temperature) []unit.MolarEntropy {
	return heatCapacities(e, "solid.ExponentialGap.HeatCapacities", ts)
}

// Entropy returns S(T).
func (e ExponentialGap) Entropy(T unit.Temperature) unit.MolarEntropy {
	return entropy(e, "solid.ExponentialGap.Entropy", T)
}

// Entropies returns S at every temperature.
func (e ExponentialGap) Entropies(ts []unit.Temperature) []unit.MolarEntropy {
	return entropies(e, "solid.ExponentialGap.Entropies", ts)
}

// EntropyIncrement returns S(to) - S(from).
func (e ExponentialGap) EntropyIncrement(from, to unit.Temperature) unit.MolarEntropy {
	return entropyIncrement(e, "solid.ExponentialGap.EntropyIncrement", from, to)
}

// ThermalEnergy returns U(T) - U(0).
func (e ExponentialGap) ThermalEnergy(T unit.Temperature) unit.MolarEnergy {
	return energy(e, "solid.ExponentialGap.ThermalEnergy", T)
}

// ThermalEnergies returns U(T) - U(0) at every temperature.
func (e ExponentialGap) ThermalEnergies(ts []unit.Temperature) []unit.MolarEnergy {
	return energies(e, "solid.ExponentialGap.ThermalEnergies", ts)
}

// EnthalpyIncrement returns U(to) - U(from), which is H(to) - H(from) at
// constant volume and negligible pressure.
func (e ExponentialGap) EnthalpyIncrement(from, to unit.Temperature) unit.MolarEnergy {
	return enthalpyIncrement(e, "solid.ExponentialGap.EnthalpyIncrement", from, to)
}

// EnthalpyIncrements returns U(ts[i]) - U(from) for every temperature.
func (e ExponentialGap) EnthalpyIncrements(from unit.Temperature, ts []unit.Temperature) []unit.MolarEnergy {
	return enthalpyIncrements(e, "solid.ExponentialGap.EnthalpyIncrements", from, ts)
}

// String names the fields with their units.
func (e ExponentialGap) String() string { return describe("ExponentialGap", e.fields()) }

// Reduced returns ln q, U/kT and C/k of one formula unit; see [statmech.Mode].
func (p PowerLaw) Reduced(T unit.Temperature) statmech.Reduced {
	return reduced(p, "solid.PowerLaw.Reduced", T)
}

// HeatCapacity returns C_V at T.
func (p PowerLaw) HeatCapacity(T unit.Temperature) unit.MolarEntropy {
	return heatCapacity(p, "solid.PowerLaw.HeatCapacity", T)
}

// HeatCapacities returns C_V at every temperature.
func (p PowerLaw) HeatCapacities(ts []unit.Temperature) []unit.MolarEntropy {
	return heatCapacities(p, "solid.PowerLaw.HeatCapacities", ts)
}

// Entropy returns S(T).
func (p PowerLaw) Entropy(T unit.Temperature) unit.MolarEntropy {
	return entropy(p, "solid.PowerLaw.Entropy", T)
}

// Entropies returns S at every temperature.
func (p PowerLaw) Entropies(ts []unit.Temperature) []unit.MolarEntropy {
	return entropies(p, "solid.PowerLaw.Entropies", ts)
}

// EntropyIncrement returns S(to) - S(from).
func (p PowerLaw) EntropyIncrement(from, to unit.Temperature) unit.MolarEntropy {
	return entropyIncrement(p, "solid.PowerLaw.EntropyIncrement", from, to)
}

// ThermalEnergy returns U(T) - U(0).
func (p PowerLaw) ThermalEnergy(T unit.Temperature) unit.MolarEnergy {
	return energy(p, "solid.PowerLaw.ThermalEnergy", T)
}

// ThermalEnergies returns U(T) - U(0) at every temperature.
func (p PowerLaw) ThermalEnergies(ts []unit.Temperature) []unit.MolarEnergy {
	return energies(p, "solid.PowerLaw.ThermalEnergies", ts)
}

// EnthalpyIncrement returns U(to) - U(from), which is H(to) - H(from) at
// constant volume and negligible pressure.
func (p PowerLaw) EnthalpyIncrement(from, to unit.Temperature) unit.MolarEnergy {
	return enthalpyIncrement(p, "solid.PowerLaw.EnthalpyIncrement", from, to)
}

// EnthalpyIncrements returns U(ts[i]) - U(from) for every temperature.
func (p PowerLaw) EnthalpyIncrements(from unit.Temperature, ts []unit.Temperature) []unit.MolarEnergy {
	return enthalpyIncrements(p, "solid.PowerLaw.EnthalpyIncrements", from, ts)
}

// String names the fields with their units.
func (p PowerLaw) String() string { return describe("PowerLaw", p.fields()) }

// Reduced returns ln q, U/kT and C/k of one formula unit; see [statmech.Mode].
func (s Superconductor) Reduced(T unit.Temperature) statmech.Reduced {
	return reduced(s, "solid.Superconductor.Reduced", T)
}

// HeatCapacity returns C_V at T.
func (s Superconductor) HeatCapacity(T unit.Temperature) unit.MolarEntropy {
	return heatCapacity(s, "solid.Superconductor.HeatCapacity", T)
}

// HeatCapacities returns C_V at every temperature.
func (s Superconductor) HeatCapacities(ts []unit.Temperature) []unit.MolarEntropy {
	return heatCapacities(s, "solid.Superconductor.HeatCapacities", ts)
}

// Entropy returns S(T).
func (s Superconductor) Entropy(T unit.Temperature) unit.MolarEntropy {
	return entropy(s, "solid.Superconductor.Entropy", T)
}

// Entropies returns S at every temperature.
func (s Superconductor) Entropies(ts []unit.Temperature) []unit.MolarEntropy {
	return entropies(s, "solid.Superconductor.Entropies", ts)
}

// EntropyIncrement returns S(to) - S(from).
func (s Superconductor) EntropyIncrement(from, to unit.Temperature) unit.MolarEntropy {
	return entropyIncrement(s, "solid.Superconductor.EntropyIncrement", from, to)
}

// ThermalEnergy returns U(T) - U(0).
func (s Superconductor) ThermalEnergy(T unit.Temperature) unit.MolarEnergy {
	return energy(s, "solid.Superconductor.ThermalEnergy", T)
}

// ThermalEnergies returns U(T) - U(0) at every temperature.
func (s Superconductor) ThermalEnergies(ts []unit.Temperature) []unit.MolarEnergy {
	return energies(s, "solid.Superconductor.ThermalEnergies", ts)
}

// EnthalpyIncrement returns U(to) - U(from), which is H(to) - H(from) at
// constant volume and negligible pressure.
func (s Superconductor) EnthalpyIncrement(from, to unit.Temperature) unit.MolarEnergy {
	return enthalpyIncrement(s, "solid.Superconductor.EnthalpyIncrement", from, to)
}

// EnthalpyIncrements returns U(ts[i]) - U(from) for every temperature.
func (s Superconductor) EnthalpyIncrements(from unit.Temperature, ts []unit.Temperature) []unit.MolarEnergy {
	return enthalpyIncrements(s, "solid.Superconductor.EnthalpyIncrements", from, ts)
}

// String names the fields with their units.
func (s Superconductor) String() string { return describe("Superconductor", s.fields()) }
