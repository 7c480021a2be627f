package gas

import (
	"errors"
	"fmt"
	"math"
	"path/filepath"
	"sort"
	"strconv"
	"strings"

	"levelsum/statmech"
	"levelsum/statmech/data"
	"levelsum/statmech/unit"
)

// A fileReader turns a table into a description.
type fileReader struct {
	t    *data.Table
	d    Description
	dir  string
	used map[string]bool // note keys that were understood
}

// prose are the keys of lines that are for people.
var prose = map[string]bool{"source": true, "where": true, "how obtained": true, "note": true, "title": true, "checked": true,
	"transcribed": true, "uncertainty": true, "licence": true, "conditions": true, "comment": true, "scenario": true, "": true}

// ReadMolecule reads the description of a molecule from a table file, in the
// form that [levelsum/statmech/data] reads. Scalars are "# quantity/unit: value"
// lines, modes are rows:
//
//	# name: water, formula: H2O, symmetry number: 2
//	# A/cm-1: 27.8806, B/cm-1: 14.5216, C/cm-1: 9.2778
//	# source: ...
//	kind, wavenumber / cm-1, g, u(wavenumber) / cm-1
//	vibration, 3657, 1, 2
//	vibration, 1595, 1, 1
//	vibration, 3756, 1, 2
//
// Lines: name; formula; M/(g mol-1) or m/u; A, B, C or for a linear molecule B
// alone, in cm-1, GHz, MHz or another unit of energy, with u(A) ...; Ia, Ib, Ic
// in (u Å2), or I for a linear one; D_J for its centrifugal distortion; symmetry
// number; rho/K-1 for centrifugal stretching (1 + ρT); spin weights ("1 3") with spin states ("4") and nuclear spin ("counted"
// or "divided out"); scale, u(scale), zero-point scale; mirror forms ("yes");
// saddle point ("yes"); p; T_ref; D0, the atomisation or dissociation energy of
// the ground level; DfH0, the enthalpy of formation at 0 K; geometry, the name of
// a file with columns atom, x, y, z.
//
// Kinds of rows: vibration (treat: harmonic, raised, entropy-interpolated or
// interpolated; with a column x its anharmonic constant, wavenumber is then the
// harmonic quantum); x (the constant x of the vibrations i and k before it,
// counted from 1); electronic; torsion (wavenumber is that of the vibration it
// replaces; columns F, V, n, sigma; treat: diagonalised, Pitzer-Gwinn or
// classical; or treat "scan: FILE"); torsion-term (V, n of one more term of the
// torsion before); state (a diatomic molecule: wavenumber is the origin; columns
// omega_e, omega_e x_e, omega_e y_e, B_e, alpha_e, gamma_e, D_J, beta_e, H_J,
// and Omega or A_so). Wavenumbers may be in any unit that stands for an energy.
//
// An unknown line, kind, column or unit is an error that names it.
func ReadMolecule(path string) (Description, error) {
	t, err := data.Read(path)
	if err != nil {
		return Description{}, err
	}
	return describe(t, filepath.Dir(path))
}

func describe(t *data.Table, dir string) (Description, error) {
	r := &fileReader{t: t, dir: dir, used: map[string]bool{}}
	for _, step := range []func() error{r.scalars, r.rows, r.leftover} {
		if err := step(); err != nil {
			return Description{}, fmt.Errorf("gas: %s: %w", t.Name, err)
		}
	}
	return r.d, nil
}

// energy converts a number in SI to an energy per particle by the kind of its
// unit, which says how.
func energy(x float64, u unit.Unit) (unit.Energy, error) {
	switch u.Kind {
	case unit.KindEnergy:
		return unit.Energy(x), nil
	case unit.KindWavenumber:
		return unit.Wavenumber(x).AsEnergy(), nil
	case unit.KindFrequency:
		return unit.Frequency(x).AsEnergy(), nil
	case unit.KindMolarEnergy:
		return unit.MolarEnergy(x).PerParticle(), nil
	case unit.KindTemperature:
		return unit.Temperature(x).AsEnergy(), nil
	}
	return 0, fmt.Errorf("%s is a unit of %s, want one that stands for an energy: cm-1, GHz, eV, kJ/mol, K", u, u.Kind)
}

// has reports whether there is a line of that quantity and marks it as understood.
func (r *fileReader) has(quantity string) bool {
	found := false
	for _, n := range r.t.Notes {
		name, _, err := unit.ParseHeader(n.Key)
		if n.Key == quantity || err == nil && name == quantity {
			r.used[n.Key] = true
			found = true
		}
	}
	return found
}

// energyOf reads "# quantity/unit: value" as an energy.
func (r *fileReader) energyOf(quantity string) (unit.Energy, bool, error) {
	if !r.has(quantity) {
		return 0, false, nil
	}
	x, u, err := r.t.Number(quantity)
	if err != nil {
		return 0, true, err
	}
	if u.Kind == unit.KindTemperature {
		// "K" in a line is read as a temperature; a difference of 0 °C makes no energy.
		if u.Offset != 0 {
			return 0, true, fmt.Errorf("# %s: a Celsius reading is no energy", quantity)
		}
	}
	e, err := energy(x, u)
	if err != nil {
		return 0, true, fmt.Errorf("# %s: %w", quantity, err)
	}
	return e, true, nil
}

// quantityOf reads "# quantity/unit: value" in SI if its unit is of kind k.
func (r *fileReader) quantityOf(quantity string, k unit.Kind) (float64, bool, error) {
	if !r.has(quantity) {
		return 0, false, nil
	}
	x, u, err := r.t.Number(quantity)
	if err != nil {
		return 0, true, err
	}
	if u.Kind != k {
		return 0, true, fmt.Errorf("# %s: %s is a unit of %s, want one of %s", quantity, u, u.Kind, k)
	}
	return x, true, nil
}

// numberOf reads "# key: value" as a plain number.
func (r *fileReader) numberOf(key string) (float64, bool, error) {
	if !r.has(key) {
		return 0, false, nil
	}
	x, err := strconv.ParseFloat(r.t.Note(key), 64)
	if err != nil || x-x != 0 {
		return 0, true, fmt.Errorf("# %s: %q is not a number", key, r.t.Note(key))
	}
	return x, true, nil
}

// yes reads "# key: yes" or "no".
func (r *fileReader) yes(key string) (bool, error) {
	if !r.has(key) {
		return false, nil
	}
	switch strings.ToLower(r.t.Note(key)) {
	case "yes":
		return true, nil
	case "no":
		return false, nil
	}
	return false, fmt.Errorf("# %s: %q, want yes or no", key, r.t.Note(key))
}

func (r *fileReader) scalars() error {
	d := &r.d
	if r.has("name") {
		d.Name = r.t.Note("name")
	}
	if r.has("formula") {
		d.Formula = r.t.Note("formula")
	}
	for _, n := range r.t.Notes {
		if n.Key == "source" {
			d.Sources = append(d.Sources, n.Value)
		}
	}
	if x, ok, err := r.quantityOf("M", unit.KindMolarMass); err != nil {
		return err
	} else if ok {
		d.Mass = unit.MolarMass(x).PerParticle()
	}
	if x, ok, err := r.quantityOf("m", unit.KindMass); err != nil {
		return err
	} else if ok {
		d.Mass = unit.Mass(x)
	}
	if x, ok, err := r.quantityOf("u(M)", unit.KindMolarMass); err != nil {
		return err
	} else if ok {
		d.UMass = unit.MolarMass(x).PerParticle()
	}
	for _, name := range []string{"A", "B", "C"} {
		x, ok, err := r.energyOf(name)
		if err != nil {
			return err
		}
		u, uOK, err := r.energyOf("u(" + name + ")")
		if err != nil {
			return err
		}
		if ok {
			d.Constants = append(d.Constants, x)
			d.UConstants = append(d.UConstants, u)
		} else if uOK {
			return fmt.Errorf("# u(%s) without # %s", name, name)
		}
	}
	for _, name := range []string{"I", "Ia", "Ib", "Ic"} {
		x, ok, err := r.quantityOf(name, unit.KindMomentOfInertia)
		if err != nil {
			return err
		}
		if ok {
			d.Moments = append(d.Moments, unit.MomentOfInertia(x))
		}
	}
	var err error
	if d.Distortion, _, err = r.energyOf("D_J"); err != nil {
		return err
	}
	if x, ok, err := r.numberOf("symmetry number"); err != nil {
		return err
	} else if ok {
		if x != math.Trunc(x) || x < 1 || x > 1000 {
			return fmt.Errorf("# symmetry number: %g, want a whole number of 1 or more", x)
		}
		d.Symmetry = int(x)
	}
	if err := r.spin(); err != nil {
		return err
	}
	for key, at := range map[string]*float64{"rho/K-1": &d.Rho, "u(rho)/K-1": &d.URho, "scale": &d.Scale, "u(scale)": &d.UScale, "zero-point scale": &d.ZeroPointScale} {
		if x, ok, err := r.numberOf(key); err != nil {
			return err
		} else if ok {
			*at = x
		}
	}
	if d.MirrorForms, err = r.yes("mirror forms"); err != nil {
		return err
	}
	if d.Saddle, err = r.yes("saddle point"); err != nil {
		return err
	}
	if x, ok, err := r.quantityOf("p", unit.KindPressure); err != nil {
		return err
	} else if ok {
		d.Pressure = unit.Pressure(x)
	}
	if x, ok, err := r.quantityOf("T_ref", unit.KindTemperature); err != nil {
		return err
	} else if ok {
		d.Reference = unit.Temperature(x)
	}
	if x, ok, err := r.energyOf("D0"); err != nil {
		return err
	} else if ok {
		e := x.PerMole()
		d.AtomisationD0 = &e
		u, _, err := r.energyOf("u(D0)")
		if err != nil {
			return err
		}
		d.UAtomisationD0 = u.PerMole()
	}
	if x, ok, err := r.energyOf("DfH0"); err != nil {
		return err
	} else if ok {
		e := x.PerMole()
		d.Formation = &e
		u, _, err := r.energyOf("u(DfH0)")
		if err != nil {
			return err
		}
		d.UFormation = u.PerMole()
	}
	if r.has("geometry") {
		name := r.t.Note("geometry")
		if filepath.IsAbs(name) || strings.HasPrefix(name, "..") {
			return fmt.Errorf("# geometry: %q, want a file in the same folder", name)
		}
		if d.Atoms, err = ReadGeometry(filepath.Join(r.dir, name)); err != nil {
			return err
		}
	}
	return nil
}

func (r *fileReader) spin() error {
	if !r.has("spin weights") {
		if r.has("spin states") || r.has("nuclear spin") {
			return fmt.Errorf("# spin states or # nuclear spin without # spin weights")
		}
		return nil
	}
	s := &SpinWeights{}
	for _, f := range strings.Fields(r.t.Note("spin weights")) {
		x, err := strconv.ParseFloat(f, 64)
		if err != nil {
			return fmt.Errorf("# spin weights: %q is not a number", f)
		}
		s.Weights = append(s.Weights, x)
	}
	x, ok, err := r.numberOf("spin states")
	if err != nil {
		return err
	}
	if !ok {
		return fmt.Errorf("# spin weights need # spin states, the product of all 2I+1")
	}
	s.Total = x
	if r.has("nuclear spin") {
		switch v := strings.ToLower(r.t.Note("nuclear spin")); v {
		case "counted":
			s.Include = true
		case "divided out":
		default:
			return fmt.Errorf("# nuclear spin: %q, want counted or divided out", v)
		}
	}
	r.d.Spin = s
	return nil
}

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

var fileColumns = map[string]bool{"kind": true, "wavenumber": true, "g": true, "u(wavenumber)": true, "treat": true, "F": true, "u(F)": true, "V": true,
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
	if t.F == 0 {
		return orMissing(nil, "F")
	}
	if t.UF, _, err = c.energy("u(F)"); err != nil {
		return err
	}
	if x, _, ok := c.number("sigma"); ok {
		t.Symmetry = int(x)
	}
	method := c.text("treat")
	if file, ok := strings.CutPrefix(method, "scan:"); ok {
		if t.Potential, err = ReadScan(filepath.Join(r.dir, filepath.Base(strings.TrimSpace(file)))); err != nil {
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

// leftover refuses lines that were not understood.
func (r *fileReader) leftover() error {
	var unknown []string
	for _, n := range r.t.Notes {
		if !r.used[n.Key] && !prose[n.Key] {
			unknown = append(unknown, strconv.Quote(n.Key))
		}
	}
	if len(unknown) > 0 {
		sort.Strings(unknown)
		return fmt.Errorf("lines not understood: %s", strings.Join(unknown, ", "))
	}
	return nil
}

// ReadGeometry reads atoms from a table with the columns atom, x, y, z.
func ReadGeometry(path string) ([]Atom, error) {
	t, err := data.Read(path)
	if err != nil {
		return nil, err
	}
	symbols, err := t.Column("atom")
	if err != nil {
		return nil, err
	}
	atoms := make([]Atom, t.Len())
	for k, name := range []string{"x", "y", "z"} {
		c, err := t.Column(name)
		if err != nil {
			return nil, err
		}
		if c.Unit.Kind != unit.KindLength {
			return nil, fmt.Errorf("gas: %s: column %s: %s is a unit of %s, want one of length", t.Name, name, c.Unit, c.Unit.Kind)
		}
		for i, v := range c.Values {
			*[]*unit.Length{&atoms[i].X, &atoms[i].Y, &atoms[i].Z}[k] = unit.Length(v)
		}
	}
	for i, s := range symbols.Text {
		atoms[i].Isotope = strings.TrimSpace(s)
	}
	return atoms, nil
}

// ReadScan reads a torsion scan from a table with the columns phi (deg or rad)
// and V and returns its Fourier series, see [FitScan].
func ReadScan(path string) (Fourier, error) {
	t, err := data.Read(path)
	if err != nil {
		return Fourier{}, err
	}
	phi, err := t.Column("phi")
	if err != nil {
		return Fourier{}, err
	}
	V, err := t.Column("V")
	if err != nil {
		return Fourier{}, err
	}
	if phi.Unit.Kind != unit.KindAngle {
		return Fourier{}, fmt.Errorf("gas: %s: column phi: %s is a unit of %s, want deg or rad", t.Name, phi.Unit, phi.Unit.Kind)
	}
	angles, es := make([]unit.Angle, t.Len()), make([]unit.Energy, t.Len())
	for i := range angles {
		angles[i] = unit.Angle(phi.Values[i])
		if es[i], err = energy(V.Values[i], V.Unit); err != nil {
			return Fourier{}, fmt.Errorf("gas: %s: column V: %w", t.Name, err)
		}
	}
	f, _, err := FitScan(angles, es)
	return f, err
}

// FitScan returns the Fourier series of least squares through a torsion scan,
// with its minimum moved to zero energy, and the root-mean-square residual. A
// scan that ends where it began (0 and 360 degrees) must have the same energy at
// both ends. The order is the highest, at most 12, that leaves a point to
// spare.
//
// It returns a [*statmech.DomainError] if lengths differ, there are fewer than
// six points, the ends disagree by more than 1 % of the range, or the points
// leave a gap of more than 90 degrees.
func FitScan(phi []unit.Angle, V []unit.Energy) (f Fourier, rms unit.Energy, err error) {
	const fn = "gas.FitScan"
	if len(phi) != len(V) || len(phi) < 6 {
		return f, 0, &statmech.DomainError{Func: fn, Arg: "phi, V", Value: fmt.Sprintf("%d, %d values", len(phi), len(V)), Want: "as many of each, six or more"}
	}
	type point struct{ phi, v float64 }
	var ps []point
	lo, hi := math.Inf(1), math.Inf(-1)
	for i := range phi {
		x, v := float64(phi[i]), float64(V[i])
		if x-x != 0 || v-v != 0 {
			return f, 0, &statmech.DomainError{Func: fn, Arg: fmt.Sprintf("point %d", i+1), Value: fmt.Sprint(phi[i], V[i]), Want: "finite"}
		}
		lo, hi = math.Min(lo, v), math.Max(hi, v)
		ps = append(ps, point{x, v})
	}
	sort.Slice(ps, func(i, j int) bool { return ps[i].phi < ps[j].phi })
	const turn = 2 * math.Pi
	span := ps[len(ps)-1].phi - ps[0].phi
	if span > turn*(1+1e-6) {
		return f, 0, &statmech.DomainError{Func: fn, Arg: "phi", Value: fmt.Sprintf("a range of %.4g degrees", span*180/math.Pi), Want: "one turn, 360 degrees"}
	}
	if math.Abs(span-turn) < 1e-6 {
		if d := math.Abs(ps[len(ps)-1].v - ps[0].v); d > 0.01*(hi-lo) {
			return f, 0, &statmech.DomainError{Func: fn, Arg: "V", Value: fmt.Sprintf("ends that differ by %s", unit.Energy(d)), Want: "a periodic scan: the same energy one turn apart"}
		}
		ps = ps[:len(ps)-1]
	}
	for i := range ps {
		next := ps[(i+1)%len(ps)].phi
		if i == len(ps)-1 {
			next += turn
		}
		if gap := next - ps[i].phi; gap > math.Pi/2 {
			return f, 0, &statmech.DomainError{Func: fn, Arg: "phi", Value: fmt.Sprintf("a gap of %.4g degrees", gap*180/math.Pi),
				Want: "points all around the turn; write out the images of a symmetric scan"}
		}
	}
	order := min(12, (len(ps)-2)/2)
	angles, vs := make([]float64, len(ps)), make([]float64, len(ps))
	for i, p := range ps {
		angles[i], vs[i] = p.phi, p.v-lo
	}
	c, s, ss, err := fourierFit(angles, vs, order)
	if err != nil {
		return f, 0, fmt.Errorf("%s: %w", fn, err)
	}
	f = Fourier{Cos: make([]unit.Energy, order+1), Sin: make([]unit.Energy, order+1)}
	for k := range c {
		f.Cos[k], f.Sin[k] = unit.Energy(c[k]), unit.Energy(s[k])
		// Terms that are rounding errors would break symmetry and cost time.
		if math.Abs(c[k]) < 1e-9*(hi-lo) {
			f.Cos[k] = 0
		}
		if math.Abs(s[k]) < 1e-9*(hi-lo) {
			f.Sin[k] = 0
		}
	}
	_, v := f.minimum()
	f.Cos[0] -= unit.Energy(v)
	return f, unit.Energy(math.Sqrt(ss / float64(len(ps)))), nil
}
