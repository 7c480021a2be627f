package solid

import (
	"fmt"
	"math"

	"levelsum/statmech"
	"levelsum/statmech/unit"
)

// Stiffness is the elastic stiffness c_ij of a crystal in Voigt's notation,
// symmetric, indices 1 … 6 at [0 … 5], in the crystal's orthogonal axes.
type Stiffness [6][6]unit.Pressure

// CubicStiffness returns the stiffness of a cubic crystal.
func CubicStiffness(c11, c12, c44 unit.Pressure) Stiffness {
	return OrthorhombicStiffness(c11, c11, c11, c12, c12, c12, c44, c44, c44)
}

// HexagonalStiffness returns the stiffness of a hexagonal crystal, axis 3 along
// c; c66 = (c11-c12)/2.
func HexagonalStiffness(c11, c12, c13, c33, c44 unit.Pressure) Stiffness {
	return OrthorhombicStiffness(c11, c11, c33, c12, c13, c13, c44, c44, (c11-c12)/2)
}

// TrigonalStiffness returns the stiffness of a trigonal crystal, axis 3 along
// c and axis 1 along a; c66 = (c11-c12)/2. c15 is 0 for the classes 32, 3m and
// -3m.
func TrigonalStiffness(c11, c12, c13, c14, c15, c33, c44 unit.Pressure) Stiffness {
	c := HexagonalStiffness(c11, c12, c13, c33, c44)
	c.set(0, 3, c14)
	c.set(1, 3, -c14)
	c.set(4, 5, c14)
	c.set(0, 4, c15)
	c.set(1, 4, -c15)
	c.set(3, 5, -c15)
	return c
}

// TetragonalStiffness returns the stiffness of a tetragonal crystal, axis 3
// along c. c16 is 0 for the classes 4mm, -42m, 422 and 4/mmm.
func TetragonalStiffness(c11, c12, c13, c16, c33, c44, c66 unit.Pressure) Stiffness {
	c := OrthorhombicStiffness(c11, c11, c33, c12, c13, c13, c44, c44, c66)
	c.set(0, 5, c16)
	c.set(1, 5, -c16)
	return c
}

// OrthorhombicStiffness returns the stiffness of an orthorhombic crystal.
func OrthorhombicStiffness(c11, c22, c33, c12, c13, c23, c44, c55, c66 unit.Pressure) Stiffness {
	var c Stiffness
	for i, v := range []unit.Pressure{c11, c22, c33, c44, c55, c66} {
		c[i][i] = v
	}
	c.set(0, 1, c12)
	c.set(0, 2, c13)
	c.set(1, 2, c23)
	return c
}

// MonoclinicStiffness returns the stiffness of a monoclinic crystal with its
// unique axis along axis 2: an orthorhombic one and c15, c25, c35, c46.
func MonoclinicStiffness(orthorhombic Stiffness, c15, c25, c35, c46 unit.Pressure) Stiffness {
	c := orthorhombic
	c.set(0, 4, c15)
	c.set(1, 4, c25)
	c.set(2, 4, c35)
	c.set(3, 5, c46)
	return c
}

// TriclinicStiffness returns a stiffness from its 21 constants in the order
// c11, c12 … c16, c22, c23 … c66 of the upper triangle.
func TriclinicStiffness(upper [21]unit.Pressure) Stiffness {
	var c Stiffness
	n := 0
	for i := range 6 {
		for j := i; j < 6; j++ {
			c.set(i, j, upper[n])
			n++
		}
	}
	return c
}

func (c *Stiffness) set(i, j int, v unit.Pressure) { c[i][j], c[j][i] = v, v }

// CheckStability returns an error unless the crystal resists every small
// strain: the stiffness must be symmetric and positive definite, which is the
// condition of M. Born, Proc. Cambridge Phil. Soc. 36, 160 (1940),
// doi:10.1017/S0305004100017138, for any symmetry (c11 > |c12|,
// c11 + 2c12 > 0, c44 > 0 for a cubic crystal). The error names the softest
// strain.
func (c Stiffness) CheckStability() error {
	const fn = "solid.Stiffness.CheckStability"
	var a [6][6]float64
	for i := range 6 {
		for j := range 6 {
			v := float64(c[i][j])
			if math.IsNaN(v) || math.IsInf(v, 0) {
				return &statmech.DomainError{Func: fn, Arg: fmt.Sprintf("c%d%d", i+1, j+1), Value: c[i][j].String(), Want: "finite"}
			}
			if d := v - float64(c[j][i]); math.Abs(d) > 1e-9*math.Abs(v) {
				return &statmech.DomainError{Func: fn, Arg: fmt.Sprintf("c%d%d", i+1, j+1), Value: c[i][j].String(), Want: fmt.Sprintf("the value of c%d%d, %v", j+1, i+1, c[j][i])}
			}
			// Strains e4 … e6 are twice the tensor's: with √2 of them the
			// quadratic form has the tensor's own eigenvalues.
			if i > 2 {
				v *= math.Sqrt2
			}
			if j > 2 {
				v *= math.Sqrt2
			}
			a[i][j] = v
		}
	}
	values, vectors := jacobi(a)
	soft := 0
	for k, v := range values {
		if v < values[soft] {
			soft = k
		}
	}
	if values[soft] > 0 {
		return nil
	}
	var strain [6]float64
	big := 0.0
	for i := range strain {
		strain[i] = vectors[i][soft]
		if i > 2 {
			strain[i] *= math.Sqrt2
		}
		if math.Abs(strain[i]) > math.Abs(big) {
			big = strain[i]
		}
	}
	text := ""
	for i := range strain {
		if s := strain[i] / big; math.Abs(s) > 1e-6 {
			text += fmt.Sprintf(" e%d = %.3g", i+1, s)
		}
	}
	return &statmech.DomainError{Func: fn, Arg: "smallest eigenvalue of the stiffness",
		Value: fmt.Sprintf("%.4g GPa, for the strain%s", values[soft]/1e9, text), Want: "positive: this lattice is not stable (Born 1940)"}
}

// jacobi returns eigenvalues and, in columns, eigenvectors of a symmetric
// matrix by cyclic Jacobi rotations.
func jacobi(a [6][6]float64) (values [6]float64, v [6][6]float64) {
	for i := range v {
		v[i][i] = 1
	}
	for range 60 {
		off, all := 0.0, 0.0
		for i := range a {
			for j := range a {
				all += a[i][j] * a[i][j]
				if i != j {
					off += a[i][j] * a[i][j]
				}
			}
		}
		if off <= 1e-34*all {
			break
		}
		for p := range 5 {
			for q := p + 1; q < 6; q++ {
				if a[p][q] == 0 {
					continue
				}
				theta := (a[q][q] - a[p][p]) / (2 * a[p][q])
				t := 1 / (math.Abs(theta) + math.Hypot(theta, 1))
				if theta < 0 {
					t = -t
				}
				cs := 1 / math.Hypot(t, 1)
				sn := t * cs
				for k := range a {
					x, y := a[k][p], a[k][q]
					a[k][p], a[k][q] = cs*x-sn*y, sn*x+cs*y
				}
				for k := range a {
					x, y := a[p][k], a[q][k]
					a[p][k], a[q][k] = cs*x-sn*y, sn*x+cs*y
				}
				for k := range v {
					x, y := v[k][p], v[k][q]
					v[k][p], v[k][q] = cs*x-sn*y, sn*x+cs*y
				}
			}
		}
	}
	for i := range values {
		values[i] = a[i][i]
	}
	return values, v
}

// ElasticCrystal is an elastic body made of atoms, whose sound waves give the
// Debye temperature that its heat capacity has for T → 0.
type ElasticCrystal struct {
	Stiffness Stiffness
	Density   unit.Density
	MolarMass unit.MolarMass // of the formula unit
	Atoms     int            // in the formula unit
	// MeasuredAt is the temperature of the elastic constants, 0 for values
	// extrapolated to 0 K; sound velocities give the adiabatic ones.
	MeasuredAt unit.Temperature
}

// Elastic is what the sound waves of an [ElasticCrystal] amount to.
type Elastic struct {
	Theta    unit.Temperature // Debye temperature of the elastic limit
	Velocity unit.Speed       // mean velocity v_m, v_m⁻³ = ⟨(1/3) Σ v⁻³⟩ over directions
	Bulk     unit.Pressure    // bulk modulus: Voigt-Reuss-Hill
	Shear    unit.Pressure    // shear modulus: Voigt-Reuss-Hill
	// ThetaHill is the short cut of O. L. Anderson, J. Phys. Chem. Solids 24,
	// 909 (1963), from Bulk and Shear: a few per cent above Theta in a strongly
	// anisotropic crystal.
	ThetaHill unit.Temperature
	Warnings  []string
}

// Evaluate averages the sound velocities of the three branches over all
// directions, from Christoffel's equation
//
//	det(Γ - ρv²) = 0,  Γ_ik = Σ c_ijkl n_j n_l,
//	θ = (h/k) (3 q N_A ρ/(4π M))^(1/3) v_m
//
// for q atoms and the mass M of the formula unit. The three modes of every
// atom are counted below θ, which is the convention of the calorimetric θ of
// [Debye] with 3q modes.
//
// Accuracy: 1e-9 of θ (TestElasticConvergence): equal steps in azimuth, Gauss
// points in the polar cosine, doubled until the average stands.
//
// Errors: an error if a field is outside its range or the lattice is not
// stable. Elastic constants of room temperature give a θ too low by some per
// cent (13 K for copper) for the low-temperature heat capacity: a warning says
// so where MeasuredAt is above θ/20.
//
// Reference: G. A. Alers, in Physical Acoustics, volume III B, edited by W. P.
// Mason, Academic Press (1965), chapter 1.
func (b ElasticCrystal) Evaluate() (Elastic, error) {
	const fn = "solid.ElasticCrystal.Evaluate"
	wrong := func(arg, value, want string) (Elastic, error) {
		return Elastic{}, &statmech.DomainError{Func: fn, Arg: arg, Value: value, Want: want}
	}
	switch {
	case !positive(float64(b.Density)):
		return wrong("Density", b.Density.String(), wantPositive)
	case !positive(float64(b.MolarMass)):
		return wrong("MolarMass", b.MolarMass.String(), wantPositive)
	case b.Atoms < 1:
		return wrong("Atoms", fmt.Sprint(b.Atoms), "the number of atoms in the formula unit, at least 1")
	case !notNegative(float64(b.MeasuredAt)):
		return wrong("MeasuredAt", b.MeasuredAt.String(), wantNotNegative)
	}
	if err := b.Stiffness.CheckStability(); err != nil {
		return Elastic{}, err
	}
	mean, last := 0.0, math.Inf(1)
	for n := 16; n <= 256; n *= 2 {
		mean = b.inverseCubes(n)
		if math.Abs(mean-last) <= 1e-10*mean {
			break
		}
		last = mean
	}
	v := 1 / math.Cbrt(mean/3)
	e := Elastic{Theta: b.theta(v), Velocity: unit.Speed(v)}
	e.Bulk, e.Shear = b.Stiffness.hill()
	vl := math.Sqrt(float64(e.Bulk+e.Shear*4/3) / float64(b.Density))
	vt := math.Sqrt(float64(e.Shear) / float64(b.Density))
	e.ThetaHill = b.theta(1 / math.Cbrt((1/(vl*vl*vl)+2/(vt*vt*vt))/3))
	if b.MeasuredAt > e.Theta/20 {
		e.Warnings = append(e.Warnings, fmt.Sprintf("elastic constants of %v: the crystal is softer there than at 0 K, so that θ = %v is too low for the low-temperature heat capacity", b.MeasuredAt, e.Theta))
	}
	return e, nil
}

// theta returns the Debye temperature of a mean velocity.
func (b ElasticCrystal) theta(v float64) unit.Temperature {
	atoms := float64(b.Atoms) * unit.Avogadro * float64(b.Density) / float64(b.MolarMass) // per m³
	return unit.Temperature(unit.Planck / unit.Boltzmann * math.Cbrt(3*atoms/(4*math.Pi)) * v)
}

// inverseCubes returns the average over directions of Σ v⁻³ with n points in
// the polar cosine, of half the sphere, and 2n in azimuth.
func (b ElasticCrystal) inverseCubes(n int) float64 {
	var c [3][3][3][3]float64 // c_ijkl/ρ
	voigt := [3][3]int{{0, 5, 4}, {5, 1, 3}, {4, 3, 2}}
	for i := range 3 {
		for j := range 3 {
			for k := range 3 {
				for l := range 3 {
					c[i][j][k][l] = float64(b.Stiffness[voigt[i][j]][voigt[k][l]]) / float64(b.Density)
				}
			}
		}
	}
	nodes, weights := gaussLegendre(n)
	sum := 0.0
	for a, z := range nodes {
		if z < 0 {
			continue // Γ(-n) = Γ(n)
		}
		s := math.Sqrt((1 - z) * (1 + z))
		ring := 0.0
		for m := range 2 * n {
			phi := math.Pi * (float64(m) + 0.5) / float64(n)
			d := [3]float64{s * math.Cos(phi), s * math.Sin(phi), z}
			var g [3][3]float64
			for i := range 3 {
				for k := i; k < 3; k++ {
					for j := range 3 {
						for l := range 3 {
							g[i][k] += c[i][j][k][l] * d[j] * d[l]
						}
					}
				}
			}
			for _, v2 := range eigenvalues3(g) {
				ring += 1 / (v2 * math.Sqrt(v2))
			}
		}
		w := weights[a] // of the interval from -1 to 1; half of it is used
		if z == 0 {
			w /= 2
		}
		sum += w * ring / float64(2*n)
	}
	return sum
}

// eigenvalues3 returns the eigenvalues of the symmetric matrix of which the
// upper triangle is given, by the cosine formula. Where two of them are close
// each may be off by the square root of the rounding error, but with opposite
// signs, so that a smooth symmetric function of them is not.
func eigenvalues3(a [3][3]float64) [3]float64 {
	m := (a[0][0] + a[1][1] + a[2][2]) / 3
	x, y, z := a[0][0]-m, a[1][1]-m, a[2][2]-m
	off := a[0][1]*a[0][1] + a[0][2]*a[0][2] + a[1][2]*a[1][2]
	p := math.Sqrt((x*x + y*y + z*z + 2*off) / 6)
	if p == 0 {
		return [3]float64{m, m, m}
	}
	det := x*(y*z-a[1][2]*a[1][2]) - a[0][1]*(a[0][1]*z-a[1][2]*a[0][2]) + a[0][2]*(a[0][1]*a[1][2]-y*a[0][2])
	r := min(max(det/(2*p*p*p), -1), 1)
	phi := math.Acos(r) / 3
	hi := m + 2*p*math.Cos(phi)
	lo := m + 2*p*math.Cos(phi+2*math.Pi/3)
	return [3]float64{hi, 3*m - hi - lo, lo}
}

// gaussLegendre returns the n nodes and weights on [-1, 1] by Newton's
// iteration on Legendre's polynomial.
func gaussLegendre(n int) (x, w []float64) {
	x, w = make([]float64, n), make([]float64, n)
	for i := range n {
		t := math.Cos(math.Pi * (float64(i) + 0.75) / (float64(n) + 0.5))
		var d float64
		for range 100 {
			p0, p1 := 1.0, t
			for k := 2; k <= n; k++ {
				p0, p1 = p1, (float64(2*k-1)*t*p1-float64(k-1)*p0)/float64(k)
			}
			d = float64(n) * (t*p1 - p0) / (t*t - 1)
			step := p1 / d
			t -= step
			if math.Abs(step) < 1e-16 {
				break
			}
		}
		x[i], w[i] = t, 2/((1-t*t)*d*d)
	}
	if n%2 == 1 {
		x[n/2] = 0
	}
	return x, w
}

// hill returns the arithmetic means of Voigt's and Reuss's bulk and shear
// moduli (R. Hill, Proc. Phys. Soc. A 65, 349 (1952)).
func (c Stiffness) hill() (bulk, shear unit.Pressure) {
	kv, gv := moduli(c.plain())
	s := inverse(c.plain())
	// Reuss: the same combinations of compliances with s44 … counted once.
	kr := 1 / (s[0][0] + s[1][1] + s[2][2] + 2*(s[0][1]+s[0][2]+s[1][2]))
	gr := 15 / (4*(s[0][0]+s[1][1]+s[2][2]) - 4*(s[0][1]+s[0][2]+s[1][2]) + 3*(s[3][3]+s[4][4]+s[5][5]))
	return unit.Pressure((kv + kr) / 2), unit.Pressure((gv + gr) / 2)
}

func moduli(c [6][6]float64) (bulk, shear float64) {
	a, b, d := c[0][0]+c[1][1]+c[2][2], c[0][1]+c[0][2]+c[1][2], c[3][3]+c[4][4]+c[5][5]
	return (a + 2*b) / 9, (a - b + 3*d) / 15
}

func (c Stiffness) plain() (a [6][6]float64) {
	for i := range a {
		for j := range a {
			a[i][j] = float64(c[i][j])
		}
	}
	return a
}

// inverse inverts a positive definite matrix by Gauss-Jordan steps, which need
// no pivoting then.
func inverse(a [6][6]float64) [6][6]float64 {
	for k := range a {
		p := 1 / a[k][k]
		a[k][k] = 1
		for j := range a {
			a[k][j] *= p
		}
		for i := range a {
			if i == k {
				continue
			}
			f := a[i][k]
			a[i][k] = 0
			for j := range a {
				a[i][j] -= f * a[k][j]
			}
		}
	}
	return a
}
