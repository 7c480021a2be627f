package gas

import (
	"fmt"
	"math"
	"path/filepath"
	"sort"
	"strconv"
	"strings"

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
// replaces; columns F or I_r, V, n, sigma; treat: diagonalised, Pitzer-Gwinn or
// classical; or treat "scan: FILE", where FILE has columns phi and V and may have
// lines F or I_r and symmetry number); torsion-term (V, n of one more term of the
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
