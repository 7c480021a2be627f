package gas

import (
	"errors"
	"fmt"
	"math"
	"path/filepath"
	"strings"

	"levelsum/statmech/unit"
)

// cell is a row's access to optional columns.
type cell struct {
	r *fileReader
	i int
}

// number returns the value in SI and its unit; ok is false for a missing column
// or an empty cell.
func (c cell) number(symbol string) (x float64, u unit.Unit, ok bool) {
	col, err := c.r.t.Column(symbol)
	if err != nil || col.Values == nil || col.Missing != nil && col.Missing[c.i] {
		return 0, unit.Unit{}, false
	}
	return col.Values[c.i], col.Unit, true
}

func (c cell) energy(symbol string) (unit.Energy, bool, error) {
	x, u, ok := c.number(symbol)
	if !ok {
		return 0, false, nil
	}
	// The values of an uncertainty are in the SI unit of its quantity.
	if of, ok := strings.CutPrefix(symbol, "u("); ok {
		if col, err := c.r.t.Column(strings.TrimSuffix(of, ")")); err == nil {
			u = col.Unit
		}
	}
	e, err := energy(x, u)
	if err != nil {
		return 0, true, fmt.Errorf("column %s: %w", symbol, err)
	}
	return e, true, nil
}

func (c cell) text(symbol string) string {
	col, err := c.r.t.Column(symbol)
	if err != nil || col.Text == nil {
		return ""
	}
	return strings.TrimSpace(col.Text[c.i])
}

var fileColumns = map[string]bool{"kind": true, "wavenumber": true, "g": true, "u(wavenumber)": true, "treat": true, "F": true, "I_r": true, "u(F)": true, "V": true,

	"n": true, "i": true, "k": true, "x": true, "sigma": true, "name": true, "note": true, "source": true, "omega_e": true, "omega_e x_e": true, "omega_e y_e": true, "B_e": true, "alpha_e": true, "gamma_e": true,
	"D_J": true, "A_so": true, "beta_e": true, "H_J": true, "Omega": true, "u(omega_e)": true, "u(omega_e x_e)": true, "u(B_e)": true, "u(alpha_e)": true, "u(D_J)": true}

func (r *fileReader) rows() error {
	for _, c := range r.t.Columns {
		if !fileColumns[c.Symbol] {
			return fmt.Errorf("column %q is not understood", c.Symbol)
		}
	}
	if !r.t.Has("kind") {
		return fmt.Errorf("no column kind")
	}
	for i := range r.t.Len() {
		c := cell{r, i}
		var err error
		switch kind := c.text("kind"); kind {
		case "vibration":
			err = r.vibration(c)
		case "electronic":
			err = r.electronic(c)
		case "torsion":
			err = r.torsion(c)
		case "torsion-term":
			err = r.torsionTerm(c)
		case "state":
			err = r.state(c)
		case "x":
			err = r.anharmonic(c)
		default:
			err = fmt.Errorf("kind %q, want vibration, electronic, torsion, torsion-term, state or x", kind)
		}
		if err != nil {
			return fmt.Errorf("row %d: %w", i+1, err)
		}
	}
	if r.d.Diatomic != nil && r.d.AtomisationD0 != nil {
		r.d.Diatomic.States[0].Dissociation = r.d.AtomisationD0.PerParticle()
	}
	return nil
}

// wavenumber returns the required wavenumber of a row with its degeneracy and
// uncertainty.
func (r *fileReader) wavenumber(c cell) (e unit.Energy, g float64, u unit.Energy, err error) {
	e, ok, err := c.energy("wavenumber")
	if err != nil || !ok {
		return 0, 0, 0, orMissing(err, "wavenumber")
	}
	g = 1
	if x, _, ok := c.number("g"); ok {
		g = x
	}
	u, _, err = c.energy("u(wavenumber)")
	return e, g, u, err
}

func orMissing(err error, column string) error {
	if err != nil {
		return err
	}
	return fmt.Errorf("column %s is missing or empty", column)
}

func (r *fileReader) vibration(c cell) error {
	e, g, u, err := r.wavenumber(c)
	if err != nil {
		return err
	}
	if g != math.Trunc(g) || g < 1 {
		return fmt.Errorf("g = %g, want a whole number of 1 or more", g)
	}
	v := Vibration{Quantum: e, Degeneracy: int(g), U: u}
	switch t := c.text("treat"); t {
	case "", "harmonic":
	case "raised":
		v.Treatment = RaisedCutoff
	case "entropy-interpolated":
		v.Treatment = EntropyInterpolation
	case "interpolated":
		v.Treatment = ConsistentInterpolation
	default:
		return fmt.Errorf("treat %q, want harmonic, raised, entropy-interpolated or interpolated", t)
	}
	r.d.Vibrations = append(r.d.Vibrations, v)
	if x, ok, err := c.energy("x"); err != nil || ok {
		n := len(r.d.Vibrations)
		return errors.Join(err, r.setX(n, n, x))
	}
	return nil
}

// anharmonic reads x_ik between the vibrations i and k, counted from 1.
func (r *fileReader) anharmonic(c cell) error {
	x, ok, err := c.energy("x")
	if err != nil || !ok {
		return orMissing(err, "x")
	}
	i, _, okI := c.number("i")
	k, _, okK := c.number("k")
	if !okI || !okK || i != math.Trunc(i) || k != math.Trunc(k) {
		return fmt.Errorf("columns i and k, the numbers of two vibrations counted from 1, are missing")
	}
	return r.setX(int(i), int(k), x)
}

func (r *fileReader) setX(i, k int, x unit.Energy) error {
	n := len(r.d.Vibrations)
	if i < 1 || k < 1 || i > n || k > n {
		return fmt.Errorf("x_%d,%d: there are %d vibrations before this row", i, k, n)
	}
	for len(r.d.X) < n {
		r.d.X = append(r.d.X, nil)
	}
	if i < k {
		i, k = k, i
	}
	for len(r.d.X[i-1]) < i {
		r.d.X[i-1] = append(r.d.X[i-1], 0)
	}
	r.d.X[i-1][k-1] = x
	return nil
}

func (r *fileReader) electronic(c cell) error {
	e, g, u, err := r.wavenumber(c)
	if err != nil {
		return err
	}
	r.d.Electronic = append(r.d.Electronic, ElectronicLevel{e, g, u})
	return nil
}

func (r *fileReader) torsion(c cell) error {
	e, g, u, err := r.wavenumber(c)
	if err != nil {
		return err
	}
	if g != 1 {
		return fmt.Errorf("a torsion with g = %g: write one row for each", g)
	}
	t := TorsionDescription{Name: c.text("name"), Replaces: e}
	if t.F, _, err = c.energy("F"); err != nil {
		return err
	}
	if x, u, ok := c.number("I_r"); ok && t.F == 0 {
		if u.Kind != unit.KindMomentOfInertia {
			return fmt.Errorf("column I_r: %s is a unit of %s, want one of %s", u, u.Kind, unit.KindMomentOfInertia)
		}
		t.F = unit.MomentOfInertia(x).RotationalConstant()
	}
	if t.UF, _, err = c.energy("u(F)"); err != nil {
		return err
	}
	if x, _, ok := c.number("sigma"); ok {
		t.Symmetry = int(x)
	}
	method := c.text("treat")
	file, ok := strings.CutPrefix(method, "scan:")
	if !ok {
		file, ok = strings.CutPrefix(method, "replaced-by:")
	}
	if ok {
		if err := r.scan(&t, filepath.Join(r.dir, filepath.Base(strings.TrimSpace(file)))); err != nil {
			return err
		}
		if t.Symmetry > 1 {
			var dropped unit.Energy
			height := t.Potential.height()
			if t.Potential, dropped = t.Potential.Symmetrised(t.Symmetry); dropped > 0.05*height {
				return fmt.Errorf("the scan has a term of %.3g cm-1 that a rotor of symmetry %d cannot have", dropped.In(unit.PerCm), t.Symmetry)
			}
		}
		method = ""
	}
	if t.F == 0 {
		return fmt.Errorf("torsion %s: neither F nor the reduced moment I_r is given", t.Name)
	}
	switch strings.ToLower(method) {
	case "", "diagonalised":
	case "pitzer-gwinn":
		t.Method = PitzerGwinn
	case "classical":
		t.Method = ClassicalTorsion
	default:
		return fmt.Errorf("treat %q, want diagonalised, Pitzer-Gwinn, classical or scan: FILE", method)
	}
	r.d.Vibrations = append(r.d.Vibrations, Vibration{Quantum: e, U: u})
	r.d.Torsions = append(r.d.Torsions, t)
	return r.torsionTerm(c)
}

// scan reads the potential of a torsion and, if the row does not have them, F or
// I_r and the symmetry number from the scan's own lines.
func (r *fileReader) scan(t *TorsionDescription, path string) error {
	potential, notes, err := readScan(path)
	if err != nil {
		return err
	}
	t.Potential = potential
	s := &fileReader{t: notes, used: map[string]bool{}}
	if t.F == 0 {
		if t.F, _, err = s.energyOf("F"); err != nil {
			return err
		}
		if I, ok, err := s.quantityOf("I_r", unit.KindMomentOfInertia); err != nil {
			return err
		} else if ok && t.F == 0 {
			t.F = unit.MomentOfInertia(I).RotationalConstant()
		}
	}
	if t.Symmetry == 0 {
		n, _, err := s.numberOf("symmetry number")
		if err != nil {
			return err
		}
		t.Symmetry = int(n)
	}
	return nil
}

func (r *fileReader) torsionTerm(c cell) error {
	if len(r.d.Torsions) == 0 {
		return fmt.Errorf("a torsion-term without a torsion before it")
	}
	V, ok, err := c.energy("V")
	if err != nil || !ok {
		return err
	}
	n, _, ok := c.number("n")
	if !ok || n != math.Trunc(n) || n < 1 || n > 100 {
		return fmt.Errorf("column n = %g, want the fold of the barrier V", n)
	}
	t := &r.d.Torsions[len(r.d.Torsions)-1]
	t.Potential = t.Potential.Plus(Barrier(V, int(n)))
	return nil
}

func (r *fileReader) state(c cell) error {
	origin, g, u, err := r.wavenumber(c)
	if err != nil {
		return err
	}
	s := DiatomicState{Origin: origin, Degeneracy: g, UOrigin: u}
	for _, f := range []struct {
		column string
		at     *unit.Energy
	}{
		{"omega_e", &s.OmegaE}, {"omega_e x_e", &s.OmegaEXE}, {"omega_e y_e", &s.OmegaEYE}, {"B_e", &s.BE}, {"alpha_e", &s.AlphaE}, {"gamma_e", &s.GammaE},
		{"D_J", &s.CentrifugalE}, {"A_so", &s.SpinOrbit}, {"beta_e", &s.BetaE}, {"H_J", &s.SexticE}, {"u(omega_e)", &s.UOmegaE}, {"u(omega_e x_e)", &s.UOmegaEXE}, {"u(B_e)", &s.UBE},
		{"u(alpha_e)", &s.UAlphaE}, {"u(D_J)", &s.UCentrif},
	} {
		e, _, err := c.energy(f.column)
		if err != nil {
			return err
		}
		*f.at = e
	}
	if x, _, ok := c.number("Omega"); ok {
		s.Omega = x
	}
	if r.d.Diatomic == nil {
		r.d.Diatomic = &Diatomic{}
	}
	r.d.Diatomic.States = append(r.d.Diatomic.States, s)
	return nil
}
