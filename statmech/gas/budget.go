package gas

import (
	"fmt"
	"math"

	"levelsum/statmech"
	"levelsum/statmech/unit"
)

// An input is an uncertain number of a description.
type input struct {
	name string
	u    float64 // standard uncertainty in SI
	move func(d *Description, by float64)
}

// inputs lists the numbers of the description that have an uncertainty.
func (m *Molecule) inputs() []input {
	var in []input
	add := func(name string, u float64, move func(*Description, float64)) {
		if u > 0 {
			in = append(in, input{name, u, move})
		}
	}
	d := m.d
	add("mass", float64(d.UMass), func(d *Description, by float64) { d.Mass = m.mass + unit.Mass(by) })
	for i, u := range d.UConstants {
		if i < len(d.Constants) {
			add(fmt.Sprintf("rotational constant %d", i+1), float64(u), func(d *Description, by float64) {
				d.Constants = append([]unit.Energy(nil), d.Constants...)
				d.Constants[i] += unit.Energy(by)
			})
		}
	}
	add("centrifugal ρ", d.URho, func(d *Description, by float64) { d.Rho += by })
	for i, v := range d.Vibrations {
		add(fmt.Sprintf("vibration at %.6g cm-1", v.Quantum.In(unit.PerCm)), float64(v.U), func(d *Description, by float64) {
			d.Vibrations = append([]Vibration(nil), d.Vibrations...)
			d.Torsions = append([]TorsionDescription(nil), d.Torsions...)
			old := d.Vibrations[i].Quantum
			d.Vibrations[i].Quantum += unit.Energy(by)
			for j := range d.Torsions {
				if d.Torsions[j].Replaces == old {
					d.Torsions[j].Replaces = d.Vibrations[i].Quantum
				}
			}
		})
	}
	add("scale factor", d.UScale, func(d *Description, by float64) {
		if d.Scale == 0 {
			d.Scale = 1
		}
		d.Scale += by
	})
	for i, t := range d.Torsions {
		add(fmt.Sprintf("F of torsion %d", i+1), float64(t.UF), func(d *Description, by float64) {
			d.Torsions = append([]TorsionDescription(nil), d.Torsions...)
			d.Torsions[i].F += unit.Energy(by)
		})
		add(fmt.Sprintf("potential of torsion %d", i+1), t.UPotential, func(d *Description, by float64) {
			d.Torsions = append([]TorsionDescription(nil), d.Torsions...)
			f := Fourier{append([]unit.Energy(nil), t.Potential.Cos...), append([]unit.Energy(nil), t.Potential.Sin...)}
			for k := range f.Cos {
				f.Cos[k] *= unit.Energy(1 + by)
			}
			for k := range f.Sin {
				f.Sin[k] *= unit.Energy(1 + by)
			}
			d.Torsions[i].Potential = f
		})
	}
	for i, e := range d.Electronic {
		add(fmt.Sprintf("electronic level at %.6g cm-1", e.Energy.In(unit.PerCm)), float64(e.U), func(d *Description, by float64) {
			d.Electronic = append([]ElectronicLevel(nil), d.Electronic...)
			d.Electronic[i].Energy += unit.Energy(by)
		})
	}
	if d.Diatomic != nil {
		for i, s := range d.Diatomic.States {
			state := func(name string, u unit.Energy, field func(*DiatomicState) *unit.Energy) {
				add(fmt.Sprintf("%s of state %d", name, i+1), float64(u), func(d *Description, by float64) {
					c := *d.Diatomic
					c.States = append([]DiatomicState(nil), c.States...)
					*field(&c.States[i]) += unit.Energy(by)
					d.Diatomic = &c
				})
			}
			state("ω_e", s.UOmegaE, func(s *DiatomicState) *unit.Energy { return &s.OmegaE })
			state("ω_e x_e", s.UOmegaEXE, func(s *DiatomicState) *unit.Energy { return &s.OmegaEXE })
			state("B_e", s.UBE, func(s *DiatomicState) *unit.Energy { return &s.BE })
			state("α_e", s.UAlphaE, func(s *DiatomicState) *unit.Energy { return &s.AlphaE })
			state("D_e (centrifugal)", s.UCentrif, func(s *DiatomicState) *unit.Energy { return &s.CentrifugalE })
			state("origin", s.UOrigin, func(s *DiatomicState) *unit.Energy { return &s.Origin })
		}
	}
	return in
}

// Effect is what one standard uncertainty of an input does to the standard
// functions.
type Effect struct {
	Input         string
	HeatCapacity  unit.MolarEntropy
	Entropy       unit.MolarEntropy
	Increment     unit.MolarEnergy  // H(T)-H(0)
	FromReference unit.MolarEnergy  // H(T)-H(T_ref)
	GibbsFunction unit.MolarEntropy // -(G-H(T_ref))/T
}

// Uncertainty is the standard uncertainty of the standard functions at one
// temperature from the uncertainties of the molecular constants, which are taken
// as independent, with the effect of each. It does not hold the error of the
// model (rigid rotor, harmonic vibration).
type Uncertainty struct {
	T       unit.Temperature
	Total   Effect
	Effects []Effect
}

// Uncertainties returns the uncertainty at each temperature, from central
// differences over one standard uncertainty of each constant. It is nil if the
// description has no uncertainties.
func (m *Molecule) Uncertainties(ts []unit.Temperature) ([]Uncertainty, error) {
	in := m.inputs()
	if len(in) == 0 {
		return nil, nil
	}
	out := make([]Uncertainty, len(ts))
	for i, T := range ts {
		statmech.CheckTemperature("gas.Molecule.Uncertainties", T)
		out[i].T = T
	}
	for _, x := range in {
		var side [2][]Effect
		for k, sign := range []float64{1, -1} {
			d := m.d
			x.move(&d, sign*x.u)
			other, err := New(d)
			if err != nil {
				return nil, fmt.Errorf("gas.Molecule.Uncertainties: %s moved by its uncertainty: %w", x.name, err)
			}
			side[k] = other.effects(ts)
		}
		for i := range ts {
			p, n := side[0][i], side[1][i]
			out[i].Effects = append(out[i].Effects, Effect{x.name, (p.HeatCapacity - n.HeatCapacity) / 2, (p.Entropy - n.Entropy) / 2,
				(p.Increment - n.Increment) / 2, (p.FromReference - n.FromReference) / 2, (p.GibbsFunction - n.GibbsFunction) / 2})
		}
	}
	for i := range out {
		t := &out[i].Total
		t.Input = "all"
		for _, e := range out[i].Effects {
			t.HeatCapacity = unit.MolarEntropy(math.Hypot(float64(t.HeatCapacity), float64(e.HeatCapacity)))
			t.Entropy = unit.MolarEntropy(math.Hypot(float64(t.Entropy), float64(e.Entropy)))
			t.Increment = unit.MolarEnergy(math.Hypot(float64(t.Increment), float64(e.Increment)))
			t.FromReference = unit.MolarEnergy(math.Hypot(float64(t.FromReference), float64(e.FromReference)))
			t.GibbsFunction = unit.MolarEntropy(math.Hypot(float64(t.GibbsFunction), float64(e.GibbsFunction)))
		}
	}
	return out, nil
}

// effects returns the standard functions themselves in the form of effects.
func (m *Molecule) effects(ts []unit.Temperature) []Effect {
	out := make([]Effect, len(ts))
	ref := m.EnthalpyIncrement(m.reference)
	for i, r := range m.ReducedAt(ts) {
		h := (unit.MolarEntropy(r.U) * unit.R).Times(ts[i])
		out[i] = Effect{HeatCapacity: unit.MolarEntropy(r.C) * unit.R, Entropy: unit.MolarEntropy(r.Entropy()) * unit.R,
			Increment: h, FromReference: h - ref, GibbsFunction: unit.MolarEntropy(r.LogQ)*unit.R + ref.Over(ts[i])}
	}
	return out
}
