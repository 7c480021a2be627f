package gas

import (
	"errors"
	"fmt"
	"math"

	"levelsum/statmech"
	"levelsum/statmech/unit"
)

// ErrCovered is returned if conformers are added that a torsion's potential
// covers already.
var ErrCovered = errors.New("the scan of a torsion covers these conformers already")

// EnergyKind says what the energies of conformers are measured between.
type EnergyKind int

const (
	// GroundLevels: zero-point energies are in the energies.
	GroundLevels EnergyKind = iota + 1
	// PotentialMinima: energies of the potential minima; zero-point energies are
	// added from the molecules.
	PotentialMinima
)

// A Conformer is one of several forms of a molecule that turn into one another.
type Conformer struct {
	Name     string
	Molecule *Molecule
	Energy   unit.Energy // above a zero common to all
	Count    float64     // how many forms of this kind there are, mirror forms counted; 0 means 1
	// Apart says by what, other than a torsion in the descriptions, the
	// conformers differ. It is needed where a torsion has several unlike minima.
	Apart string
}

// Conformers is an equilibrium mixture of conformers,
//
//	q = Σ Count qᵢ exp(-(Eᵢ-E₀)/kT),
//
// made by [NewConformers]. It is a [statmech.Mode]; averaging Gibbs energies
// linearly, which leaves out the entropy of mixing, is not offered.
type Conformers struct {
	list   []Conformer
	offset []unit.Energy // of the ground levels above the lowest
}

// NewConformers checks the forms and returns the mixture. kind must be said.
//
// Errors: a [*statmech.DomainError] for an empty list, a missing kind, a count
// that is not positive; [ErrCovered] if a member has a torsion with several
// unlike minima and Apart does not say what else distinguishes the conformers.
func NewConformers(list []Conformer, kind EnergyKind) (*Conformers, error) {
	const fn = "gas.NewConformers"
	if len(list) == 0 {
		return nil, &statmech.DomainError{Func: fn, Arg: "list", Value: "empty", Want: "at least one conformer"}
	}
	if kind != GroundLevels && kind != PotentialMinima {
		return nil, &statmech.DomainError{Func: fn, Arg: "kind", Value: fmt.Sprint(int(kind)), Want: "GroundLevels or PotentialMinima: say whether the energies hold the zero-point energy"}
	}
	c := &Conformers{list: append([]Conformer(nil), list...)}
	lowest := unit.Energy(math.Inf(1))
	for i := range c.list {
		f := &c.list[i]
		if f.Count == 0 {
			f.Count = 1
		}
		if !(f.Count > 0) || math.IsInf(f.Count, 1) || f.Energy-f.Energy != 0 || f.Molecule == nil {
			return nil, &statmech.DomainError{Func: fn, Arg: fmt.Sprintf("list[%d]", i), Value: fmt.Sprintf("count %g, energy %s", f.Count, f.Energy), Want: "a molecule, a positive count and a finite energy"}
		}
		for _, t := range f.Molecule.d.Torsions {
			if n := unlikeMinima(t); n > 1 && f.Apart == "" && len(list) > 1 {
				return nil, fmt.Errorf("%s: torsion %q of %s has %d unlike minima: %w; leave the others out, or say in Apart what else distinguishes them", fn, t.Name, f.Molecule.Name(), n, ErrCovered)
			}
		}
		e := f.Energy
		if kind == PotentialMinima {
			e += f.Molecule.ZeroPointEnergy()
		}
		c.offset = append(c.offset, e)
		lowest = min(lowest, e)
	}
	for i := range c.offset {
		c.offset[i] -= lowest
	}
	return c, nil
}

// unlikeMinima counts the minima of a torsion's potential in 2π/σ.
func unlikeMinima(t TorsionDescription) int {
	sigma := max(t.Symmetry, 1)
	n := 720
	v := make([]float64, n)
	for i := range v {
		v[i], _, _ = t.Potential.derivatives(2 * math.Pi * float64(i) / float64(n*sigma))
	}
	count := 0
	for i := range v {
		if v[i] < v[(i+n-1)%n] && v[i] <= v[(i+1)%n] {
			count++
		}
	}
	return count
}

// weights returns the reduced functions of each form with its energy, and the
// logarithms of the weights less the largest.
func (c *Conformers) weights(T unit.Temperature) (rs []statmech.Reduced, w []float64, top, sum float64) {
	top = math.Inf(-1)
	for i, f := range c.list {
		r := f.Molecule.Reduced(T)
		x := c.offset[i].OverKT(T)
		r.U += x
		r.LogQ += math.Log(f.Count) - x
		rs = append(rs, r)
		top = math.Max(top, r.LogQ)
	}
	for _, r := range rs {
		w = append(w, math.Exp(r.LogQ-top))
		sum += w[len(w)-1]
	}
	return rs, w, top, sum
}

// Reduced returns the functions of the mixture at T.
func (c *Conformers) Reduced(T unit.Temperature) statmech.Reduced {
	statmech.CheckTemperature("gas.Conformers.Reduced", T)
	rs, w, top, sum := c.weights(T)
	r := statmech.Reduced{LogQ: top + math.Log(sum)}
	for i, x := range rs {
		r.U += w[i] / sum * x.U
	}
	for i, x := range rs {
		d := x.U - r.U
		r.C += w[i] / sum * (x.C + d*d)
	}
	return r
}

// Fractions returns the equilibrium fraction of each conformer at T.
func (c *Conformers) Fractions(T unit.Temperature) []float64 {
	statmech.CheckTemperature("gas.Conformers.Fractions", T)
	_, w, _, sum := c.weights(T)
	for i := range w {
		w[i] /= sum
	}
	return w
}

// Molar returns the molar functions with the basis of the first conformer.
func (c *Conformers) Molar() statmech.Molar {
	m := c.list[0].Molecule.Molar()
	m.Mode = c
	return m
}
