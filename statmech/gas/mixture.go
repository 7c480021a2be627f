package gas

import (
	"fmt"
	"math"

	"levelsum/statmech"
	"levelsum/statmech/unit"
)

// A FrozenSpecies is one component of a [Frozen] mixture: its fraction, its
// mode, and the energy of its ground level above a zero common to all.
type FrozenSpecies struct {
	Name     string
	Fraction float64
	Mode     statmech.Mode
	Ground   unit.Energy
}

// Frozen is a mixture of species that do not convert into one another, such as
// normal hydrogen, one quarter para and three quarters ortho. With fractions w
//
//	S/k = Σ w (S/k - ln w),   U = Σ w (U + Ground),   C = Σ w C.
//
// FromMixture says which zero the energy has: false, the common zero (for
// hydrogen the para ground level, so that the mixture keeps the energy of the
// frozen ortho as T → 0); true, the mixture's own energy at T → 0. WithoutMixing
// leaves out the entropy of mixing, -Σ w ln w.
type Frozen struct {
	Species       []FrozenSpecies
	FromMixture   bool
	WithoutMixing bool
}

// Reduced returns the functions at T. It panics with a [*statmech.DomainError]
// if fractions are negative or do not add up to 1 within 1e-9.
func (f Frozen) Reduced(T unit.Temperature) statmech.Reduced {
	const fn = "gas.Frozen.Reduced"
	statmech.CheckTemperature(fn, T)
	var r statmech.Reduced
	sum := 0.0
	for i, s := range f.Species {
		if !(s.Fraction >= 0) {
			panic(&statmech.DomainError{Func: fn, Arg: fmt.Sprintf("Species[%d].Fraction", i), Value: fmt.Sprint(s.Fraction), Want: "not negative"})
		}
		sum += s.Fraction
		if s.Fraction == 0 {
			continue
		}
		x := s.Mode.Reduced(T)
		if !f.FromMixture {
			e := s.Ground.OverKT(T)
			x.U += e
			x.LogQ -= e
		}
		if !f.WithoutMixing {
			x.LogQ -= math.Log(s.Fraction)
		}
		r = r.Add(x.Scale(s.Fraction))
	}
	if math.Abs(sum-1) > 1e-9 {
		panic(&statmech.DomainError{Func: fn, Arg: "the sum of fractions", Value: fmt.Sprint(sum), Want: "1"})
	}
	return r
}

// SpinIsomers returns the two species of a molecule with identical nuclei
// whose rotor has spin weights, as separate molecules: even and odd J of a
// linear or diatomic one (para and ortho of H2, ortho and para of D2), Ka+Kc
// even and odd or Ka even and odd of an asymmetric top, whichever way its weights
// go together, A, E and F of a spherical top. Their grounds are the energies of
// their lowest levels above the lowest of all; their fractions are the normal ones,
// those of high temperature. Spin degeneracies are counted in
// each: what is left out of the mixture is said by Total of the description.
//
// It returns an error if the description has no spin weights.
func SpinIsomers(d Description) ([]FrozenSpecies, error) {
	if d.Spin == nil && (d.Diatomic == nil || d.Diatomic.Spin == nil) {
		return nil, fmt.Errorf("gas.SpinIsomers: %s: no spin weights in the description", d.Name)
	}
	if d.Diatomic != nil && d.Diatomic.Spin != nil {
		dia := *d.Diatomic
		d.Spin, dia.Spin = dia.Spin, nil
		d.Diatomic = &dia
	}
	all := d.Spin
	type group struct {
		name string
		keep func(i int) bool
	}
	var groups []group
	switch {
	case len(all.Weights) == 2:
		groups = []group{{"even J", func(i int) bool { return i == 0 }}, {"odd J", func(i int) bool { return i == 1 }}}
	case len(all.Weights) == 4 && all.Weights[0] == all.Weights[3] && all.Weights[1] == all.Weights[2]:
		groups = []group{{"Ka+Kc even", func(i int) bool { return i == 0 || i == 3 }}, {"Ka+Kc odd", func(i int) bool { return i == 1 || i == 2 }}}
	case len(all.Weights) == 4 && all.Weights[0] == all.Weights[1] && all.Weights[2] == all.Weights[3]:
		groups = []group{{"Ka even", func(i int) bool { return i < 2 }}, {"Ka odd", func(i int) bool { return i > 1 }}}
	case len(all.Weights) == 4:
		groups = []group{{"Kc even", func(i int) bool { return i%2 == 0 }}, {"Kc odd", func(i int) bool { return i%2 == 1 }}}
	case len(d.Constants) == 3 && len(all.Weights) == 3 && d.Constants[0] == d.Constants[1] && d.Constants[1] == d.Constants[2]:
		groups = []group{{"A", func(i int) bool { return i == 0 }}, {"E", func(i int) bool { return i == 1 }}, {"F", func(i int) bool { return i == 2 }}}
	default:
		groups = []group{{"K = 0 modulo the axis", func(i int) bool { return i == 0 }}, {"other K", func(i int) bool { return i != 0 }}}
	}
	share := func(i int) float64 { return 1 }
	if groups[0].name == "A" {
		share = func(i int) float64 { return []float64{1, 1, 3}[i] } // of the 2J+1 states of K
	}
	var out []FrozenSpecies
	var zero unit.Energy
	sum := 0.0
	for _, g := range groups {
		s := &SpinWeights{Total: 1, Include: true}
		fraction := 0.0
		for i, w := range all.Weights {
			if !g.keep(i) {
				w = 0
			}
			s.Weights = append(s.Weights, w)
			fraction += w * share(i)
		}
		e := d
		e.Spin = s
		e.Name = d.Name + ", " + g.name
		m, err := New(e)
		if err != nil {
			continue // no level of this kind has a weight
		}
		ground := m.ZeroPointEnergy()
		if len(out) == 0 || ground < zero {
			zero = ground
		}
		out = append(out, FrozenSpecies{Name: g.name, Mode: m, Ground: ground, Fraction: fraction})
		sum += fraction
	}
	if len(out) == 0 {
		return nil, fmt.Errorf("gas.SpinIsomers: %s: no species has levels", d.Name)
	}
	for i := range out {
		out[i].Ground -= zero
		out[i].Fraction /= sum
	}
	return out, nil
}

// EquilibriumFractions returns the fractions of the species at equilibrium.
func EquilibriumFractions(species []FrozenSpecies, T unit.Temperature) []float64 {
	statmech.CheckTemperature("gas.EquilibriumFractions", T)
	lnq := make([]float64, len(species))
	top := math.Inf(-1)
	for i, s := range species {
		lnq[i] = s.Mode.Reduced(T).LogQ - s.Ground.OverKT(T)
		top = math.Max(top, lnq[i])
	}
	sum := 0.0
	for i := range lnq {
		lnq[i] = math.Exp(lnq[i] - top)
		sum += lnq[i]
	}
	for i := range lnq {
		lnq[i] /= sum
	}
	return lnq
}

// ConversionEnthalpy returns the molar enthalpy of species j less that of
// species i at T: what is taken up when i turns into j. For hydrogen, ortho less
// para. Uncatalysed, normal hydrogen that is liquefied turns slowly to para and
// gives off more heat than its heat of vaporisation: storage has to allow for it.
func ConversionEnthalpy(species []FrozenSpecies, i, j int, T unit.Temperature) unit.MolarEnergy {
	h := func(s FrozenSpecies) unit.Energy {
		return s.Ground + unit.Energy(s.Mode.Reduced(T).U)*T.AsEnergy()
	}
	return (h(species[j]) - h(species[i])).PerMole()
}
