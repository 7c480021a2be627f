package gas

import (
	"levelsum/statmech"
	"levelsum/statmech/unit"
)

// A Description is a molecule as people have it: constants from spectroscopy
// or calculation. [New] checks it and makes a [Molecule]. Fields that do not
// apply stay zero.
type Description struct {
	Name    string
	Formula string // "H2O", "[35Cl]2", "NO2"; for masses, atom count and electron count

	// Mass is that of one molecule; 0 for the mean mass from Formula.
	Mass  unit.Mass
	UMass unit.Mass

	// Constants are the rotational constants as energies: none for an atom, one
	// for a linear molecule, three in any order otherwise. Moments may be given
	// in their place, or Atoms, from which both follow.
	Constants         []unit.Energy
	UConstants        []unit.Energy
	Moments           []unit.MomentOfInertia
	Distortion        unit.Energy // D of a linear molecule
	Rho               float64     // ρ in 1/K: centrifugal stretching of a non-linear molecule, q = q_rigid (1 + ρT)
	URho              float64
	Atoms             []Atom
	Symmetry          int          // symmetry number; 0 to find it from Atoms
	Spin              *SpinWeights // in place of Symmetry
	ClassicalRotation bool

	// Vibrations are the fundamentals, or harmonic quanta where X is given.
	// Scale multiplies all quanta (0 means 1), ZeroPointScale those of the
	// zero-point energy (0 means Scale).
	Vibrations     []Vibration
	Scale          float64
	UScale         float64
	ZeroPointScale float64
	X              [][]unit.Energy // anharmonic constants x_ij, in the order of Vibrations

	Torsions []TorsionDescription

	// Diatomic takes the place of Constants, Vibrations and Electronic.
	Diatomic *Diatomic

	Electronic []ElectronicLevel // none means one level, g = 1

	MirrorForms bool // the molecule is chiral and both forms are meant: + R ln 2
	Saddle      bool // a transition state: exactly one imaginary quantum, left out

	// Formation is ΔfH°(0 K) and AtomisationD0 the energy to separate the
	// molecule in its ground level into atoms in theirs; for reactions. At most
	// one of the two is needed.
	Formation      *unit.MolarEnergy
	UFormation     unit.MolarEnergy
	AtomisationD0  *unit.MolarEnergy
	UAtomisationD0 unit.MolarEnergy

	Pressure  unit.Pressure    // p°; 0 means 1 bar
	Reference unit.Temperature // T_ref; 0 means 298.15 K

	Sources []string
}

// A Vibration is a normal mode. Quantum is its energy, hc times the wavenumber;
// an imaginary one, of a saddle point, is given as negative.
type Vibration struct {
	Quantum     unit.Energy
	Degeneracy  int // 0 means 1
	U           unit.Energy
	Treatment   LowFrequency
	Cutoff      unit.Energy          // of the treatment, see SoftOscillator
	MeanInertia unit.MomentOfInertia // of the treatment, see SoftOscillator
}

func (v Vibration) degeneracy() int {
	if v.Degeneracy == 0 {
		return 1
	}
	return v.Degeneracy
}

// An ElectronicLevel is an electronic level above the lowest, with its
// degeneracy.
type ElectronicLevel struct {
	Energy     unit.Energy
	Degeneracy float64
	U          unit.Energy
}

// A TorsionDescription is an internal rotation. Replaces is the quantum of the
// listed vibration that it takes the place of.
type TorsionDescription struct {
	Name       string
	F          unit.Energy
	UF         unit.Energy
	Potential  Fourier
	UPotential float64 // relative standard uncertainty of the potential as a whole
	Symmetry   int
	Method     TorsionMethod
	Replaces   unit.Energy
}

// electronicLevels returns the levels of the description, nil for none.
func electronicLevels(list []ElectronicLevel) (*statmech.Levels, error) {
	if len(list) == 0 {
		return nil, nil
	}
	e, g := make([]unit.Energy, len(list)), make([]float64, len(list))
	for i, l := range list {
		e[i], g[i] = l.Energy, l.Degeneracy
	}
	return statmech.NewLevels(e, g)
}
