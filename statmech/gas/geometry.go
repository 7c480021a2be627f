package gas

import (
	"fmt"
	"math"
	"sort"

	"gonum.org/v1/gonum/mat"

	"levelsum/statmech"
	"levelsum/statmech/unit"
)

// An Atom is an atom of a geometry. Isotope is "H", "35Cl" or "D": an element
// without a mass number stands for its most abundant isotope, since a rotor is
// one isotopologue. Mass overrides it.
type Atom struct {
	Isotope string
	X, Y, Z unit.Length
	Mass    unit.Mass
}

// A Geometry is a rigid arrangement of atoms with its principal moments of
// inertia, I_a <= I_b <= I_c. For a linear molecule I_a is 0.
type Geometry struct {
	Atoms         []Atom
	Masses        []unit.Mass
	Moments       [3]unit.MomentOfInertia
	Linear        bool
	elements      []string // what must map onto what: symbol and mass
	x             [][3]float64
	smallestRatio float64
}

// SymmetryTolerance is how far, by default, an atom may be from its image under
// a rotation that counts as a symmetry: 0.01 Å.
const SymmetryTolerance = 0.01 * unit.Angstrom

// idealised is the tolerance at which a near symmetry is reported.
const idealised = 0.1 * unit.Angstrom

// linearMoment is the ratio of the smallest to the largest moment of inertia
// below which a geometry is linear.
const linearMoment = 1e-6

// NewGeometry returns the geometry of atoms. It returns an error if an isotope
// is not known, fewer than two atoms are given, or two are closer than 0.2 Å.
func NewGeometry(atoms []Atom) (*Geometry, error) {
	if len(atoms) < 2 {
		return nil, fmt.Errorf("gas.NewGeometry: %d atoms, want two or more", len(atoms))
	}
	g := &Geometry{Atoms: append([]Atom(nil), atoms...)}
	var total float64
	var centre [3]float64
	for i, a := range atoms {
		mass, label := a.Mass, a.Isotope
		if e, err := unit.ElementOf(a.Isotope); err == nil && mass == 0 {
			mass, label = e.MostAbundant().Mass, e.MostAbundant().String()
		} else if err != nil || mass == 0 {
			iso, err := unit.IsotopeOf(a.Isotope)
			if err != nil && mass == 0 {
				return nil, fmt.Errorf("gas.NewGeometry: atom %d: %w", i+1, err)
			}
			if err == nil {
				label = iso.String()
				if mass == 0 {
					mass = iso.Mass
				}
			}
		}
		if !(mass > 0) || math.IsInf(float64(mass), 1) {
			return nil, &statmech.DomainError{Func: "gas.NewGeometry", Arg: fmt.Sprintf("Atoms[%d].Mass", i), Value: mass.String(), Want: "positive and finite"}
		}
		p := [3]float64{float64(a.X), float64(a.Y), float64(a.Z)}
		for k, c := range p {
			if c-c != 0 {
				return nil, &statmech.DomainError{Func: "gas.NewGeometry", Arg: fmt.Sprintf("coordinates of atom %d", i+1), Value: fmt.Sprint(c), Want: "finite"}
			}
			centre[k] += float64(mass) * c
		}
		total += float64(mass)
		g.Masses = append(g.Masses, mass)
		g.elements = append(g.elements, fmt.Sprintf("%s %.6g", label, mass.In(unit.U)))
		g.x = append(g.x, p)
	}
	for i := range g.x {
		for k := range centre {
			g.x[i][k] -= centre[k] / total
		}
		for j := range i {
			if d := distance(g.x[i], g.x[j]); d < 0.2e-10 {
				return nil, fmt.Errorf("gas.NewGeometry: atoms %d and %d are %.3g Å apart: coordinates may be in another unit", j+1, i+1, d*1e10)
			}
		}
	}
	var I [3][3]float64
	for i, p := range g.x {
		m := float64(g.Masses[i])
		r2 := p[0]*p[0] + p[1]*p[1] + p[2]*p[2]
		for a := range 3 {
			I[a][a] += m * r2
			for b := range 3 {
				I[a][b] -= m * p[a] * p[b]
			}
		}
	}
	const scale = 1e46 // into the range of the eigenvalue routine
	s := mat.NewSymDense(3, nil)
	for a := range 3 {
		for b := a; b < 3; b++ {
			s.SetSym(a, b, I[a][b]*scale)
		}
	}
	var e mat.EigenSym
	if !e.Factorize(s, false) {
		return nil, fmt.Errorf("gas.NewGeometry: the moments of inertia were not found")
	}
	v := e.Values(nil)
	sort.Float64s(v)
	for a := range 3 {
		g.Moments[a] = unit.MomentOfInertia(math.Max(v[a], 0) / scale)
	}
	g.smallestRatio = float64(g.Moments[0] / g.Moments[2])
	if g.smallestRatio < linearMoment {
		g.Linear, g.Moments[0] = true, 0
	}
	return g, nil
}

// String says what shape it has.
func (g *Geometry) String() string {
	shape := "bent"
	if g.Linear {
		shape = "linear"
	}
	return fmt.Sprintf("%d atoms, %s, moments %.6g, %.6g, %.6g u Å2, symmetry number %d", len(g.Atoms), shape,
		g.Moments[0].In(unit.UAngstrom2), g.Moments[1].In(unit.UAngstrom2), g.Moments[2].In(unit.UAngstrom2), g.SymmetryNumber(SymmetryTolerance))
}

func distance(a, b [3]float64) float64 {
	return math.Sqrt((a[0]-b[0])*(a[0]-b[0]) + (a[1]-b[1])*(a[1]-b[1]) + (a[2]-b[2])*(a[2]-b[2]))
}

// Constants returns the rotational constants as energies, A >= B >= C; one for
// a linear geometry.
func (g *Geometry) Constants() []unit.Energy {
	if g.Linear {
		return []unit.Energy{g.Moments[2].RotationalConstant()}
	}
	return []unit.Energy{g.Moments[0].RotationalConstant(), g.Moments[1].RotationalConstant(), g.Moments[2].RotationalConstant()}
}

// SymmetryNumber returns the number of proper rotations that bring every atom
// within tolerance of an atom of the same kind, the identity counted; for a
// linear molecule 2 if its ends are the same, else 1.
func (g *Geometry) SymmetryNumber(tolerance unit.Length) int {
	tol := float64(tolerance)
	if g.Linear {
		if g.maps(func(p [3]float64) [3]float64 { return [3]float64{-p[0], -p[1], -p[2]} }, tol) {
			return 2
		}
		return 1
	}
	a, b := g.reference(tol)
	frame := newFrame(g.x[a], g.x[b])
	var found [][3][3]float64
	for i := range g.x {
		if g.elements[i] != g.elements[a] || math.Abs(length(g.x[i])-length(g.x[a])) > tol {
			continue
		}
		for j := range g.x {
			if j == i || g.elements[j] != g.elements[b] || math.Abs(length(g.x[j])-length(g.x[b])) > tol ||
				math.Abs(distance(g.x[i], g.x[j])-distance(g.x[a], g.x[b])) > 2*tol {
				continue
			}
			r := rotation(frame, newFrame(g.x[i], g.x[j]))
			if !g.maps(func(p [3]float64) [3]float64 { return apply(r, p) }, tol) {
				continue
			}
			fresh := true
			for _, q := range found {
				fresh = fresh && !g.same(q, r, tol)
			}
			if fresh {
				found = append(found, r)
			}
		}
	}
	return max(len(found), 1)
}

// reference returns two atoms whose images fix a rotation: off the centre and
// not in line with it, of the kinds with the fewest atoms at their distance.
func (g *Geometry) reference(tol float64) (a, b int) {
	alike := func(i int) int {
		n := 0
		for j := range g.x {
			if g.elements[i] == g.elements[j] && math.Abs(length(g.x[i])-length(g.x[j])) <= tol {
				n++
			}
		}
		return n
	}
	best := math.MaxInt
	for i := range g.x {
		if length(g.x[i]) < 0.1e-10 {
			continue
		}
		for j := range g.x {
			s := length(cross(g.x[i], g.x[j]))
			if j == i || length(g.x[j]) < 0.1e-10 || s < 0.1*length(g.x[i])*length(g.x[j]) {
				continue
			}
			if n := alike(i) * alike(j); n < best {
				a, b, best = i, j, n
			}
		}
	}
	return a, b
}

// maps reports whether f brings every atom near one of its kind, each once.
func (g *Geometry) maps(f func([3]float64) [3]float64, tol float64) bool {
	used := make([]bool, len(g.x))
	for i := range g.x {
		q := f(g.x[i])
		hit := -1
		for j := range g.x {
			if !used[j] && g.elements[i] == g.elements[j] && distance(q, g.x[j]) <= tol {
				hit = j
				break
			}
		}
		if hit < 0 {
			return false
		}
		used[hit] = true
	}
	return true
}

// same reports whether two rotations take the atoms to the same places.
func (g *Geometry) same(q, r [3][3]float64, tol float64) bool {
	for _, p := range g.x {
		if distance(apply(q, p), apply(r, p)) > 3*tol {
			return false
		}
	}
	return true
}

func length(p [3]float64) float64 { return distance(p, [3]float64{}) }

func cross(a, b [3]float64) [3]float64 {
	return [3]float64{a[1]*b[2] - a[2]*b[1], a[2]*b[0] - a[0]*b[2], a[0]*b[1] - a[1]*b[0]}
}

func unitVector(p [3]float64) [3]float64 {
	l := length(p)
	return [3]float64{p[0] / l, p[1] / l, p[2] / l}
}

// newFrame returns three orthonormal vectors: along a, across a in the plane of
// a and b, and normal to both.
func newFrame(a, b [3]float64) [3][3]float64 {
	u := unitVector(a)
	w := unitVector(cross(a, b))
	return [3][3]float64{u, cross(w, u), w}
}

// rotation returns the matrix that turns one frame into another.
func rotation(from, to [3][3]float64) (r [3][3]float64) {
	for i := range 3 {
		for j := range 3 {
			for k := range 3 {
				r[i][j] += to[k][i] * from[k][j]
			}
		}
	}
	return r
}

func apply(r [3][3]float64, p [3]float64) (q [3]float64) {
	for i := range 3 {
		for j := range 3 {
			q[i] += r[i][j] * p[j]
		}
	}
	return q
}

// useGeometry fills constants and symmetry number from the atoms.
func (m *Molecule) useGeometry(g *Geometry) error {
	d := &m.d
	if n := m.formula.Count(); n > 0 && n != len(g.Atoms) {
		return fmt.Errorf("%d atoms in the geometry, %d in %s: %w", len(g.Atoms), n, d.Formula, ErrModes)
	}
	if len(d.Constants) == 0 && len(d.Moments) == 0 {
		d.Constants = g.Constants()
		m.note("rotational constants from the geometry, with isotopic masses")
	}
	if g.Linear != (len(d.Constants) == 1 || len(d.Moments) == 1) {
		return fmt.Errorf("the geometry and the number of rotational constants disagree on whether the molecule is linear: %w", ErrModes)
	}
	found := g.SymmetryNumber(SymmetryTolerance)
	ideal := g.SymmetryNumber(idealised)
	if d.Spin != nil {
		return nil
	}
	switch {
	case d.Symmetry == 0:
		d.Symmetry = found
		m.note(fmt.Sprintf("symmetry number %d found from the geometry within %g Å", found, SymmetryTolerance.In(unit.Angstrom)))
		if ideal != found {
			m.warn(fmt.Sprintf("near-symmetric within %g Å: symmetry number %d used, %d if idealised", idealised.In(unit.Angstrom), found, ideal))
		}
	case d.Symmetry != found:
		m.warn(fmt.Sprintf("symmetry number %d given, the geometry has %d within %g Å", d.Symmetry, found, SymmetryTolerance.In(unit.Angstrom)))
	}
	return nil
}
