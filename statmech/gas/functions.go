package gas

import (
	"levelsum/statmech"
	"levelsum/statmech/unit"
)

// Reduced returns the functions of the molecule at T and its pressure: the sum
// of its parts. It panics with a [*statmech.DomainError] if T is not positive and
// finite, or so low that nΛ³ > 1: there the classical ideal gas does not exist.
func (m *Molecule) Reduced(T unit.Temperature) statmech.Reduced {
	m.check("gas.Molecule.Reduced", T)
	var r statmech.Reduced
	for _, p := range m.parts {
		r = r.Add(p.Mode.Reduced(T))
	}
	return r
}

// check refuses temperatures at which the gas is degenerate.
func (m *Molecule) check(fn string, T unit.Temperature) {
	statmech.CheckTemperature(fn, T)
	if d := (Translation{Mass: m.mass, Pressure: m.pressure}).Degeneracy(T); d > 1 {
		panic(&statmech.DomainError{Func: fn, Arg: "T", Value: T.String(),
			Want: "higher: at " + m.pressure.String() + " the gas of " + m.Name() + " is degenerate there (nΛ³ = " + short(d) + " > 1); use a quantum gas"})
	}
}

// ReducedAt is Reduced at each temperature.
func (m *Molecule) ReducedAt(ts []unit.Temperature) []statmech.Reduced {
	rs := make([]statmech.Reduced, len(ts))
	for _, T := range ts {
		m.check("gas.Molecule.ReducedAt", T)
	}
	for _, p := range m.parts {
		for i, r := range statmech.ReducedAt(p.Mode, ts) {
			rs[i] = rs[i].Add(r)
		}
	}
	return rs
}

// ZeroPointEnergy returns the energy of the ground level above the minimum of
// the potential, with the vibrations scaled by ZeroPointScale.
func (m *Molecule) ZeroPointEnergy() unit.Energy {
	var e unit.Energy
	for _, p := range m.parts {
		z, ok := p.Mode.(statmech.ZeroPointer)
		if !ok || p.Name == "electronic" {
			continue
		}
		x := z.ZeroPointEnergy()
		if s := m.d.ZeroPointScale; s > 0 && p.Name == "vibration" {
			scale := m.d.Scale
			if scale == 0 {
				scale = 1
			}
			x *= unit.Energy(s / scale)
		}
		e += x
	}
	return e
}

// Molar returns the molar functions with basis, p° and T_ref.
func (m *Molecule) Molar() statmech.Molar {
	return statmech.Molar{Mode: m, Per: "mol of " + m.Name(), Pressure: m.pressure, Reference: m.reference}
}

// HeatCapacity returns Cp° at T.
func (m *Molecule) HeatCapacity(T unit.Temperature) unit.MolarEntropy {
	return m.Molar().HeatCapacity(T)
}

// HeatCapacities returns Cp° at each temperature.
func (m *Molecule) HeatCapacities(ts []unit.Temperature) []unit.MolarEntropy {
	return m.Molar().HeatCapacities(ts)
}

// Entropy returns S° at T.
func (m *Molecule) Entropy(T unit.Temperature) unit.MolarEntropy { return m.Molar().Entropy(T) }

// Entropies returns S° at each temperature.
func (m *Molecule) Entropies(ts []unit.Temperature) []unit.MolarEntropy {
	return m.Molar().Entropies(ts)
}

// EnthalpyIncrement returns H°(T)-H°(0).
func (m *Molecule) EnthalpyIncrement(T unit.Temperature) unit.MolarEnergy {
	return m.Molar().Increment(T)
}

// EnthalpyIncrements returns H°(T)-H°(0) at each temperature.
func (m *Molecule) EnthalpyIncrements(ts []unit.Temperature) []unit.MolarEnergy {
	return m.Molar().Increments(ts)
}

// EnthalpyFromReference returns H°(T)-H°(T_ref).
func (m *Molecule) EnthalpyFromReference(T unit.Temperature) unit.MolarEnergy {
	return m.Molar().IncrementFromReference(T)
}

// EnthalpiesFromReference returns H°(T)-H°(T_ref) at each temperature.
func (m *Molecule) EnthalpiesFromReference(ts []unit.Temperature) []unit.MolarEnergy {
	return m.Molar().IncrementsFromReference(ts)
}

// GibbsFunction returns -(G°(T)-H°(T_ref))/T.
func (m *Molecule) GibbsFunction(T unit.Temperature) unit.MolarEntropy {
	return m.Molar().GibbsFunctionFromReference(T)
}

// GibbsFunctions returns -(G°(T)-H°(T_ref))/T at each temperature.
func (m *Molecule) GibbsFunctions(ts []unit.Temperature) []unit.MolarEntropy {
	return m.Molar().GibbsFunctionsFromReference(ts)
}

// GibbsFunctionFromZero returns -(G°(T)-H°(0))/T.
func (m *Molecule) GibbsFunctionFromZero(T unit.Temperature) unit.MolarEntropy {
	return m.Molar().GibbsFunctionFromZero(T)
}

// GibbsFunctionsFromZero returns -(G°(T)-H°(0))/T at each temperature.
func (m *Molecule) GibbsFunctionsFromZero(ts []unit.Temperature) []unit.MolarEntropy {
	return m.Molar().GibbsFunctionsFromZero(ts)
}

// A Contribution is one part's share of the standard functions.
type Contribution struct {
	Name, Method string
	Entropy      unit.MolarEntropy
	HeatCapacity unit.MolarEntropy
	Enthalpy     unit.MolarEnergy // H(T)-H(0)
}

// Contributions returns the shares of the parts at T; they add up to the
// standard functions.
func (m *Molecule) Contributions(T unit.Temperature) []Contribution {
	out := make([]Contribution, len(m.parts))
	for i, p := range m.parts {
		r := p.Mode.Reduced(T)
		out[i] = Contribution{p.Name, p.Method, unit.MolarEntropy(r.Entropy()) * unit.R, unit.MolarEntropy(r.C) * unit.R,
			(unit.MolarEntropy(r.U) * unit.R).Times(T)}
	}
	return out
}

// SpinCounted reports whether nuclear-spin degeneracy is in the functions.
func (m *Molecule) SpinCounted() bool {
	return m.d.Spin != nil && m.d.Spin.Include || m.d.Diatomic != nil && m.d.Diatomic.Spin != nil && m.d.Diatomic.Spin.Include
}
