package gas

import (
	"fmt"
	"math"

	"levelsum/statmech"
	"levelsum/statmech/unit"
)

// WithReducedMass returns the constants of an isotopologue whose reduced mass
// is ratio times that of d, in the Born-Oppenheimer approximation: with ρ =
// 1/√ratio, ω_e goes as ρ, ω_e x_e and B_e as ρ², ω_e y_e and α_e as ρ³, γ_e and
// D_e as ρ⁴, β_e as ρ⁵, H_e as ρ⁶. The potential stays: dissociation energies and
// origins are moved by the change of the zero-point energy. Symmetry and spin
// weights are left as they are.
//
// Reference: G. Herzberg, Spectra of Diatomic Molecules (1950), section III.2g.
func (d Diatomic) WithReducedMass(ratio float64) Diatomic {
	statmech.CheckRatio("gas.Diatomic.WithReducedMass", "ratio", ratio)
	rho := 1 / math.Sqrt(ratio)
	pow := func(n int) unit.Energy { return unit.Energy(math.Pow(rho, float64(n))) }
	out := d
	out.States = append([]DiatomicState(nil), d.States...)
	var zero unit.Energy // change of the zero-point energy of the first state
	for i := range out.States {
		s := &out.States[i]
		before := s.g(0)
		s.OmegaE *= pow(1)
		s.OmegaEXE *= pow(2)
		s.OmegaEYE *= pow(3)
		s.BE *= pow(2)
		s.AlphaE *= pow(3)
		s.GammaE *= pow(4)
		s.CentrifugalE *= pow(4)
		s.BetaE *= pow(5)
		s.SexticE *= pow(6)
		change := s.g(0) - before
		if i == 0 {
			zero = change
		} else if s.OmegaE != 0 {
			s.Origin += change - zero
		}
		if s.Dissociation > 0 {
			s.Dissociation -= change
		}
	}
	return out
}

// NaturalDiatomic returns a diatomic gas of natural isotopic composition as a
// mixture of its isotopologues without the entropy of mixing, the convention of
// thermochemical tables; for two equal atoms the symmetry number is 2 for every
// isotopologue. d describes one isotopologue, with isotopes in its formula,
// "[35Cl]2" or "[1H][35Cl]", and Diatomic constants.
func NaturalDiatomic(d Description) (Frozen, error) {
	const fn = "gas.NaturalDiatomic"
	if d.Diatomic == nil {
		return Frozen{}, fmt.Errorf("%s: %s: no Diatomic constants", fn, d.Name)
	}
	f, err := ParseFormula(d.Formula)
	if err != nil {
		return Frozen{}, err
	}
	var atoms []unit.Isotope
	for _, a := range f.symbols() {
		i, err := unit.IsotopeOf(a)
		if err != nil {
			return Frozen{}, fmt.Errorf("%s: %s: write the isotopes of the constants into the formula: %w", fn, d.Formula, err)
		}
		for range f.Atoms[a] {
			atoms = append(atoms, i)
		}
	}
	if len(atoms) != 2 || f.Charge != 0 {
		return Frozen{}, fmt.Errorf("%s: %s is no neutral diatomic molecule: %w", fn, d.Formula, ErrModes)
	}
	var lists [2][]unit.Isotope
	for k, a := range atoms {
		e, err := unit.ElementOf(a.Symbol)
		if err != nil {
			return Frozen{}, err
		}
		for _, i := range e.Isotopes {
			if i.Abundance > 0 {
				lists[k] = append(lists[k], i)
			}
		}
	}
	mu := func(a, b unit.Isotope) float64 { return float64(a.Mass * b.Mass / (a.Mass + b.Mass)) }
	alike := atoms[0].Symbol == atoms[1].Symbol
	out := Frozen{WithoutMixing: true, FromMixture: true}
	sum := 0.0
	for i, a := range lists[0] {
		for j, b := range lists[1] {
			w := a.Abundance * b.Abundance
			if alike && j < i {
				continue
			} else if alike && j > i {
				w *= 2
			}
			e := d
			dia := d.Diatomic.WithReducedMass(mu(a, b) / mu(atoms[0], atoms[1]))
			e.Diatomic = &dia
			e.Mass = a.Mass + b.Mass
			e.Formula = "[" + a.String() + "][" + b.String() + "]"
			e.Name = a.String() + b.String()
			m, err := New(e)
			if err != nil {
				return Frozen{}, err
			}
			out.Species = append(out.Species, FrozenSpecies{Name: e.Name, Fraction: w, Mode: m})
			sum += w
		}
	}
	for i := range out.Species {
		out.Species[i].Fraction /= sum
	}
	return out, nil
}
