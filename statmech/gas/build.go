package gas

import (
	"fmt"
	"math"

	"levelsum/statmech"
	"levelsum/statmech/unit"
)

func (m *Molecule) checkBasis() error {
	if err := positive("Pressure", m.pressure); err != nil {
		return err
	}
	if err := positive("Reference", m.reference); err != nil {
		return err
	}
	m.mass = m.d.Mass
	if m.d.Formula == "" {
		if len(m.d.Atoms) > 0 && m.mass == 0 {
			for _, a := range m.d.Atoms {
				m.mass += a.Mass
			}
			m.note("mass from the atoms of the geometry: one isotopologue")
		}
		return positive("Mass", m.mass)
	}
	f, err := ParseFormula(m.d.Formula)
	if err != nil {
		return err
	}
	m.formula = f
	mean, u, err := f.Mass()
	if err != nil {
		return err
	}
	if m.mass == 0 {
		m.mass = mean
		if m.d.UMass == 0 {
			m.d.UMass = u
		}
		m.note(fmt.Sprintf("mass %.6g u from standard atomic weights (IUPAC 2021)", mean.In(unit.U)))
	} else if r := float64(m.mass/mean) - 1; math.Abs(r) > 0.2 {
		return &statmech.DomainError{Func: "gas.New", Arg: "Mass", Value: fmt.Sprintf("%.6g u", m.mass.In(unit.U)), Want: fmt.Sprintf("near %.6g u, that of %s", mean.In(unit.U), m.d.Formula)}
	} else if math.Abs(r) > 2e-4 {
		m.note(fmt.Sprintf("mass %.6g u given; the mean isotopic mass of %s is %.6g u: an isotopologue, or another mixture", m.mass.In(unit.U), m.d.Formula, mean.In(unit.U)))
	}
	return positive("Mass", m.mass)
}

func (m *Molecule) addTranslation() error {
	m.add("translation", "Sackur-Tetrode", Translation{Mass: m.mass, Pressure: m.pressure})
	return nil
}

func (m *Molecule) addDiatomic() error {
	if m.d.Diatomic == nil {
		return nil
	}
	switch {
	case len(m.d.Electronic) > 0:
		return fmt.Errorf("electronic levels are in Diatomic.States already: %w", ErrDouble)
	case len(m.d.Vibrations) > 0 || len(m.d.Constants) > 0 || len(m.d.Moments) > 0 || len(m.d.Torsions) > 0:
		return fmt.Errorf("vibration and rotation are in Diatomic already: %w", ErrDouble)
	case m.formula.Count() != 0 && m.formula.Count() != 2:
		return fmt.Errorf("%d atoms in %s, a diatomic has 2: %w", m.formula.Count(), m.d.Formula, ErrModes)
	}
	dia := *m.d.Diatomic
	if dia.Symmetry == 0 && dia.Spin == nil {
		dia.Symmetry, dia.Spin = m.d.Symmetry, m.d.Spin
	}
	if dia.Symmetry != 0 && dia.Spin != nil {
		return fmt.Errorf("a symmetry number and spin weights: %w", ErrDouble)
	}
	mode, err := dia.mode()
	if err != nil {
		return err
	}
	m.add("vibration, rotation, electronic states", "direct sum over v and J", mode)
	m.note(mode.Extent())
	g := 0.0
	for _, s := range dia.States {
		if s.Origin < 1000*unit.PerCm {
			g += s.Degeneracy
		}
	}
	m.checkElectrons(g)
	m.spinNote(dia.Symmetry, dia.Spin)
	return nil
}

func (m *Molecule) spinNote(sigma int, s *SpinWeights) {
	switch {
	case s == nil:
		m.note(fmt.Sprintf("symmetry number %d; nuclear spin not counted", sigma))
	case s.Include:
		m.note(fmt.Sprintf("nuclear-spin weights %v; spin degeneracy counted", s.Weights))
	default:
		m.note(fmt.Sprintf("nuclear-spin weights %v; spin degeneracy %g divided out (R ln %g not counted)", s.Weights, s.Total, s.Total))
	}
}

// linear reports whether the description is that of a linear molecule.
func (m *Molecule) linear() bool {
	return m.d.Diatomic != nil || len(m.d.Constants) == 1
}

func (m *Molecule) addRotation() error {
	if m.d.Diatomic != nil {
		return nil
	}
	d := &m.d
	if len(d.Atoms) > 1 {
		g, err := NewGeometry(d.Atoms)
		if err != nil {
			return err
		}
		if err := m.useGeometry(g); err != nil {
			return err
		}
	}
	if len(d.Moments) > 0 {
		if len(d.Constants) > 0 {
			return fmt.Errorf("rotational constants and moments of inertia: %w", ErrDouble)
		}
		for i, I := range d.Moments {
			if err := positive(fmt.Sprintf("Moments[%d]", i), I); err != nil {
				return err
			}
			d.Constants = append(d.Constants, I.RotationalConstant())
		}
		d.Moments = nil
	}
	if d.Symmetry != 0 && d.Spin != nil {
		return fmt.Errorf("a symmetry number and spin weights: %w", ErrDouble)
	}
	n := m.formula.Count()
	switch len(d.Constants) {
	case 0:
		if n > 1 {
			return &statmech.DomainError{Func: "gas.New", Arg: "Constants", Value: "none", Want: fmt.Sprintf("rotational constants, moments or a geometry for the %d atoms of %s", n, d.Formula)}
		}
		return nil
	case 1:
		r := LinearRotor{B: d.Constants[0], D: d.Distortion, Symmetry: d.Symmetry, Spin: d.Spin, Classical: d.ClassicalRotation}
		if err := r.check("gas.New"); err != nil {
			return err
		}
		method := "exact sum over J"
		if last := r.LastLevel(); last >= 0 {
			method += fmt.Sprintf(" up to the turnover at J = %d", last)
		}
		if d.ClassicalRotation {
			method = "classical"
		}
		m.add("rotation", method, r)
	case 3:
		if d.Distortion != 0 {
			return &statmech.DomainError{Func: "gas.New", Arg: "Distortion", Value: d.Distortion.String(), Want: "0 for a molecule that is not linear: its rotor is rigid here"}
		}
		t, err := NewTop(d.Constants[0], d.Constants[1], d.Constants[2], d.Symmetry, d.Spin)
		if err != nil {
			return err
		}
		method := map[topKind]string{spherical: "spherical top, exact sum", symmetric: "symmetric top, exact sum", asymmetric: "asymmetric top, Wang blocks diagonalised"}[t.kind]
		if d.ClassicalRotation {
			t, method = t.ClassicalForm(), "classical"
		}
		m.add("rotation", method, t)
		if d.Rho != 0 {
			s := stretching(d.Rho)
			if !(d.Rho > 0) || d.Rho > 0.01 {
				return &statmech.DomainError{Func: "gas.New", Arg: "Rho", Value: short(d.Rho) + " 1/K", Want: "a small positive coefficient"}
			}
			m.add("centrifugal stretching", "q (1 + ρT)", s)
		}
		// I_c <= I_a + I_b for any distribution of masses; averaging over the
		// zero-point motion moves it by some per cent (water: 3 %).
		if a, b, c := t.Constants(); float64(a*b)/float64(c*(a+b)) > 1.1 {
			m.warn(fmt.Sprintf("1/C exceeds 1/A + 1/B by more than 10 %%: no rigid body has the rotational constants %.6g, %.6g, %.6g cm-1", a.In(unit.PerCm), b.In(unit.PerCm), c.In(unit.PerCm)))
		}
	default:
		return &statmech.DomainError{Func: "gas.New", Arg: "Constants", Value: fmt.Sprintf("%d values", len(d.Constants)), Want: "one for a linear molecule, three for another"}
	}
	m.spinNote(d.Symmetry, d.Spin)
	return nil
}

func (m *Molecule) addVibrations() error {
	d := m.d
	if d.Diatomic != nil {
		return nil
	}
	have := 0
	for i, v := range d.Vibrations {
		if v.Degeneracy < 0 || v.Quantum-v.Quantum != 0 || v.Quantum == 0 {
			return &statmech.DomainError{Func: "gas.New", Arg: fmt.Sprintf("Vibrations[%d]", i), Value: v.Quantum.String(), Want: "a finite quantum, not zero, and a degeneracy of 1 or more"}
		}
		have += v.degeneracy()
	}
	if n := m.formula.Count(); n > 0 {
		want, kind := 3*n-6, "3N-6"
		if m.linear() {
			want, kind = 3*n-5, "3N-5"
		}
		if n == 1 {
			want, kind = 0, "an atom has none"
		}
		if have != want {
			return fmt.Errorf("%d vibrations with degeneracies, %s = %d wanted for the %d atoms of %s (a torsion counts through the vibration that it replaces): %w",
				have, kind, want, n, d.Formula, ErrModes)
		}
	} else if have > 0 {
		m.warn("no formula: the number of vibrations was not checked")
	}
	scale := d.Scale
	if scale == 0 {
		scale = 1
	}
	if !(scale > 0.5 && scale < 2) {
		return &statmech.DomainError{Func: "gas.New", Arg: "Scale", Value: fmt.Sprint(scale), Want: "a factor near 1"}
	}
	replaced, err := m.addTorsions()
	if err != nil {
		return err
	}
	if d.X != nil {
		return m.addAnharmonic(scale, replaced)
	}
	var modes statmech.Sum
	imaginary := 0
	var soft []string
	for i, v := range d.Vibrations {
		if v.Quantum < 0 {
			imaginary++
			continue
		}
		n := float64(v.degeneracy() - replaced[i])
		if n == 0 {
			continue
		}
		q := unit.Energy(scale) * v.Quantum
		var mode statmech.Mode = Oscillator{Quantum: q}
		if v.Treatment != Harmonic {
			mode = SoftOscillator{Quantum: q, Treatment: v.Treatment, Cutoff: v.Cutoff, MeanInertia: v.MeanInertia}
			soft = append(soft, fmt.Sprintf("%.6g cm-1: %s", q.In(unit.PerCm), v.Treatment))
		}
		modes = append(modes, statmech.Times{N: n, Mode: mode})
	}
	switch {
	case imaginary == 1 && d.Saddle:
		m.note("the imaginary quantum of the saddle point is left out")
	case imaginary > 0 && !d.Saddle:
		return &statmech.DomainError{Func: "gas.New", Arg: "Vibrations", Value: fmt.Sprintf("%d imaginary", imaginary), Want: "none for a minimum; set Saddle for a transition state"}
	case imaginary != 1 && d.Saddle:
		return &statmech.DomainError{Func: "gas.New", Arg: "Vibrations", Value: fmt.Sprintf("%d imaginary", imaginary), Want: "exactly one for a saddle point"}
	}
	if scale != 1 {
		m.note(fmt.Sprintf("wavenumbers scaled by %g", scale))
	}
	if len(modes) > 0 {
		m.add("vibration", "harmonic", modes)
		m.note("rigid rotor and harmonic vibrations: for small molecules S° is commonly within 0.12 J/(mol K) of measured values at 298.15 K, low by more at high temperature (anharmonicity, vibration-rotation interaction, centrifugal stretching)")
	}
	for _, s := range soft {
		m.note("low wavenumber " + s)
	}
	return nil
}

// addTorsions adds the internal rotations and returns how many of each
// vibration they replace.
func (m *Molecule) addTorsions() ([]int, error) {
	replaced := make([]int, len(m.d.Vibrations))
	for i, t := range m.d.Torsions {
		name := t.Name
		if name == "" {
			name = fmt.Sprintf("%d", i+1)
		}
		found := -1
		for j, v := range m.d.Vibrations {
			if math.Abs(float64(v.Quantum-t.Replaces)) <= 1e-6*math.Abs(float64(v.Quantum)) && replaced[j] < v.degeneracy() {
				found = j
				break
			}
		}
		if found < 0 {
			return nil, fmt.Errorf("torsion %s replaces no vibration: none of the listed quanta is %.6g cm-1: %w", name, t.Replaces.In(unit.PerCm), ErrModes)
		}
		replaced[found]++
		mode, err := NewTorsion(t.F, t.Potential, t.Symmetry, t.Method)
		if err != nil {
			return nil, fmt.Errorf("torsion %s: %w", name, err)
		}
		m.add("torsion "+name, t.Method.String(), mode)
		m.note(fmt.Sprintf("torsion %s replaces the vibration at %.6g cm-1; internal symmetry number %d", name, t.Replaces.In(unit.PerCm), t.Symmetry))
	}
	if len(m.d.Torsions) > 1 {
		m.warn("several torsions are treated as independent of one another")
	}
	return replaced, nil
}

func (m *Molecule) addAnharmonic(scale float64, replaced []int) error {
	a := Anharmonic{X: m.d.X}
	for i, v := range m.d.Vibrations {
		if replaced[i] != 0 || v.Quantum < 0 || v.Treatment != Harmonic {
			return &statmech.DomainError{Func: "gas.New", Arg: "X", Value: fmt.Sprintf("mode %d is replaced, imaginary or treated otherwise", i), Want: "plain vibrations where anharmonic constants couple them"}
		}
		a.Omega = append(a.Omega, unit.Energy(scale)*v.Quantum)
		a.Degeneracy = append(a.Degeneracy, v.degeneracy())
	}
	mode, err := newAnharmonicMode(a)
	if err != nil {
		return err
	}
	m.add("vibration", "anharmonic, direct sum with x_ij", mode)
	return nil
}

func (m *Molecule) addElectronic() error {
	if m.d.Diatomic != nil {
		return nil
	}
	l, err := electronicLevels(m.d.Electronic)
	if err != nil {
		return err
	}
	g := 1.0
	if l != nil && m.formula.Count() != 1 {
		var states []DiatomicState
		for _, e := range m.d.Electronic {
			states = append(states, DiatomicState{Origin: e.Energy, Degeneracy: e.Degeneracy})
		}
		if err := tripletTwice(states); err != nil {
			return err
		}
	}
	if l != nil {
		m.add("electronic", "sum over the levels given", l)
		g = math.Exp(l.Reduced(1500 * unit.K).Entropy()) // low fine structure counts
	}
	m.checkElectrons(math.Round(g))
	return nil
}

// checkElectrons warns of a forgotten doublet.
func (m *Molecule) checkElectrons(g float64) {
	n, err := m.formula.Electrons()
	if err == nil && m.formula.Count() > 0 && n%2 == 1 && g < 1.5 {
		m.warn(fmt.Sprintf("%s has an odd number of electrons (%d) but an electronic degeneracy of 1: a doublet adds R ln 2 = 5.763 J/(mol K)", m.d.Formula, n))
	}
}
