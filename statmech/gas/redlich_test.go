package gas

import (
	"math"
	"testing"

	"gonum.org/v1/gonum/mat"

	"levelsum/statmech/unit"
)

// harmonicWavenumbers returns the quanta of a bent YXY molecule with a valence
// force field: stretching constant kr (N/m), bending constant kt (J/rad²), by
// diagonalisation of the mass-weighted Hessian BᵀFB.
func harmonicWavenumbers(t *testing.T, atoms []Atom, kr, kt float64) []unit.Energy {
	t.Helper()
	at := func(i int) [3]float64 {
		return [3]float64{float64(atoms[i].X), float64(atoms[i].Y), float64(atoms[i].Z)}
	}
	bond := func(i int) (e [3]float64, r float64) {
		for k := range 3 {
			e[k] = at(i)[k] - at(0)[k]
		}
		r = length(e)
		return unitVector(e), r
	}
	e1, r1 := bond(1)
	e2, r2 := bond(2)
	c := e1[0]*e2[0] + e1[1]*e2[1] + e1[2]*e2[2]
	s := math.Sqrt(1 - c*c)
	b := mat.NewDense(3, 9, nil)
	for k := range 3 {
		b.Set(0, 3+k, e1[k])
		b.Set(0, k, -e1[k])
		b.Set(1, 6+k, e2[k])
		b.Set(1, k, -e2[k])
		s1, s2 := (c*e1[k]-e2[k])/(r1*s), (c*e2[k]-e1[k])/(r2*s)
		b.Set(2, 3+k, s1)
		b.Set(2, 6+k, s2)
		b.Set(2, k, -s1-s2)
	}
	f := mat.NewDiagDense(3, []float64{kr, kr, kt})
	var fb, h mat.Dense
	fb.Mul(f, b)
	h.Mul(b.T(), &fb)
	w := mat.NewSymDense(9, nil)
	for i := range 9 {
		for j := i; j < 9; j++ {
			w.SetSym(i, j, h.At(i, j)/math.Sqrt(float64(atoms[i/3].Mass)*float64(atoms[j/3].Mass)))
		}
	}
	var e mat.EigenSym
	if !e.Factorize(w, false) {
		t.Fatal("no eigenvalues")
	}
	var out []unit.Energy
	for _, x := range e.Values(nil)[6:] {
		out = append(out, unit.Energy(unit.ReducedPlanck*math.Sqrt(x)))
	}
	return out
}

// The product rule (O. Redlich, Z. Phys. Chem. B 28, 371, 1935): for two
// isotopologues with one geometry and one harmonic force field the classical
// entropies differ by 3/2 R Σ ln(m'/m), whatever the force constants. It ties
// translation, moments of inertia, rotor and vibrations together. Force field
// and angle are near those of water.
func TestProductRuleWater(t *testing.T) {
	water := geometryAtoms(t)["H2O"]
	classical := func(masses [3]float64) (S float64, quanta []unit.Energy) {
		atoms := append([]Atom(nil), water...)
		for i := range atoms {
			atoms[i].Mass = unit.Mass(masses[i]) * unit.U
		}
		d := Description{Atoms: atoms, Symmetry: 1, ClassicalRotation: true}
		for _, q := range harmonicWavenumbers(t, atoms, 845, 0.76e-18*0.9572*0.9572) {
			d.Vibrations = append(d.Vibrations, Vibration{Quantum: q})
			quanta = append(quanta, q)
		}
		m := molecule(t, d)
		r := m.Part("translation").Reduced(T0).Add(m.Part("rotation").Reduced(T0))
		for _, q := range quanta {
			r = r.Add(Oscillator{Quantum: q, Classical: true}.Reduced(T0))
		}
		return r.Entropy(), quanta
	}
	light := [3]float64{15.99491461957, 1.00782503223, 1.00782503223}
	S, quanta := classical(light)
	// The force field gives wavenumbers like those of water, or it tests nothing.
	for i, want := range []float64{1650, 3830, 3940} {
		if q := quanta[i].In(unit.PerCm); math.Abs(q-want) > 120 {
			t.Errorf("quantum %d: %.0f cm-1, want about %.0f", i+1, q, want)
		}
	}
	for _, heavy := range [][3]float64{{15.99491461957, 2.01410177812, 2.01410177812}, {15.99491461957, 1.00782503223, 2.01410177812}, {17.99915961286, 1.00782503223, 3.0160492779}} {
		other, _ := classical(heavy)
		want := 0.0
		for i := range heavy {
			want += 1.5 * math.Log(heavy[i]/light[i])
		}
		if math.Abs(other-S-want) > 1e-9 {
			t.Errorf("masses %v: ΔS/R = %.10f, want %.10f", heavy, other-S, want)
		}
	}
}
