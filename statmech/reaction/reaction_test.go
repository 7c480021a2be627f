package reaction

import (
	"encoding/csv"
	"errors"
	"math"
	"os"
	"strconv"
	"strings"
	"testing"

	"levelsum/statmech"
	"levelsum/statmech/gas"
	"levelsum/statmech/unit"
)

func newReaction(t *testing.T, equation string, kind EnergyKind, ms ...*gas.Molecule) *Reaction {
	t.Helper()
	r, err := New(equation, kind, ms...)
	if err != nil {
		t.Fatal(err)
	}
	return r
}

// I2 = 2 I with D0 = 12440.2 cm⁻¹: independent arithmetic gives K(1000 K) =
// 3.0848e-3 at 1 bar.
func TestIodine(t *testing.T) {
	r := newReaction(t, "I2 = 2 I", AtomisationD0)
	if K := r.K(1000 * unit.K); math.Abs(K/3.0848e-3-1) > 1e-3 {
		t.Errorf("K(1000 K) = %.5e, want 3.0848e-3 within 0.1 %%", K)
	}
	if H := r.EnthalpyAtZero(); math.Abs(H.In(unit.MolarKJ)-12440.2*0.01196265656) > 1e-6 {
		t.Errorf("ΔrH(0) = %v", H)
	}
	// K_c = K p°/(RT): RT/p° = 24.790 L/mol at 298.15 K and 1 bar.
	if x := math.Exp(r.LogK(298.15*unit.K) - r.LogKc(298.15*unit.K)); math.Abs(x-24.790) > 5e-4 {
		t.Errorf("K/K_c = %.5f, want 24.790", x)
	}
}

// The thermal part of K against NASA's functions: with the reaction enthalpy of
// the table at 298.15 K, K agrees within 1 % for gases whose functions are
// complete, from 298.15 K to where the molecules' constants hold.
func TestEquilibriumConstantsPublished(t *testing.T) {
	f, err := os.Open("testdata/nasa2002/equilibrium_constants.csv")
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	c := csv.NewReader(f)
	c.Comment = '#'
	rows, err := c.ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	equations := map[string]struct {
		text string
		to   float64 // K; above, levels near dissociation are missing
	}{
		"H2+I2=2HI": {"H2 + I2 = 2 HI", 1200}, "I2=2I": {"I2 = 2 I", 1200}, "H2=2H": {"H2 = 2 H", 2000}, "N2=2N": {"N2 = 2 N", 3000},
		"Cl2=2Cl": {"Cl2 = 2 Cl", 1000}, "N2+O2=2NO": {"N2 + O2 = 2 NO", 3000}, "CO+0.5O2=CO2": {"CO + 0.5 O2 = CO2", 1000}, "H2+0.5O2=H2O": {"H2 + 0.5 O2 = H2O", 1000},
		"H2+D2=2HD": {"H2 + D2 = 2 HD", 1000},
	}
	value := func(s string) float64 {
		x, err := strconv.ParseFloat(s, 64)
		if err != nil {
			t.Fatal(err)
		}
		return x
	}
	// Rigid water is 0.11 J/(mol K) low, 1.4 % in K; with the centrifugal
	// stretching of JANAF's water, ρ = 2.04e-5 1/K (from memory), it is within 1 %.
	w, err := gas.Find("H2O")
	if err != nil {
		t.Fatal(err)
	}
	w.Rho = 2.04e-5
	water, err := gas.New(w)
	if err != nil {
		t.Fatal(err)
	}
	made := map[string]*Reaction{}
	n, largest := 0, 0.0
	for _, row := range rows[1:] {
		e, ok := equations[row[0]]
		T := unit.Temperature(value(row[1]))
		if !ok {
			continue
		}
		r := made[row[0]]
		if r == nil {
			r = newReaction(t, e.text, Given, water)
			if err := r.SetEnthalpy(298.15*unit.K, unit.MolarEnergy(value(row[3]))*unit.MolarKJ, 0); err != nil || T != 298.15 {
				t.Fatal(T, err)
			}
			made[row[0]] = r
		}
		if float64(T) > e.to {
			continue
		}
		n++
		largest = max(largest, math.Abs(r.LogK(T)-value(row[4])*math.Ln10))
		if d := r.LogK(T) - value(row[4])*math.Ln10; math.Abs(d) > 0.01 {
			t.Errorf("%s at %v: ln K differs by %+.4f", row[0], T, d)
		}
	}
	t.Logf("accuracy: Reaction.LogK | %d constants of 9 reactions, ΔrH given | of ln K | %.3g | 0.01 | NASA/TP-2002-211556", n, largest)
	if n < 40 {
		t.Errorf("only %d constants compared", n)
	}
}

// HD exchange: published calculations give 3.26 at 298.15 K, 2.87 at 195 K, and
// 4 is the limit at high temperature (symmetry numbers).
func TestIsotopeExchange(t *testing.T) {
	r := newReaction(t, "H2 + D2 = 2 HD", AtomisationD0)
	for T, want := range map[unit.Temperature]float64{298.15: 3.26, 195: 2.87, 1000: 3.90} {
		if K := r.K(T); math.Abs(K-want) > 0.03 {
			t.Errorf("K(%v) = %.3f, want %.2f", T, K, want)
		}
	}
}

func TestIdentities(t *testing.T) {
	r := newReaction(t, "N2 + O2 = 2 NO", AtomisationD0)
	for _, T := range []unit.Temperature{300, 1500} {
		if d := r.GibbsEnergy(T) - (r.Enthalpy(T) - r.Entropy(T).Times(T)); math.Abs(float64(d)) > 1e-6 {
			t.Errorf("G - (H - TS) = %v", d)
		}
		// van 't Hoff: d ln K/d(1/T) = -ΔH/R, by a central difference.
		h := 0.01
		slope := (r.LogK(unit.Temperature(float64(T)+h)) - r.LogK(unit.Temperature(float64(T)-h))) / (2 * h)
		if want := r.Enthalpy(T).Over(T).In(unit.R) / float64(T); math.Abs(slope/want-1) > 1e-7 {
			t.Errorf("d ln K/dT = %g, want ΔH/RT² = %g", slope, want)
		}
	}
}

// Formation enthalpies of the CODATA key values, in the library at 0 K, against
// NASA's constants for the whole reaction: within twice the standard uncertainty
// and 1 %, the rotor and oscillator bound of water and CO2 included (1.4 %).
func TestFormationEnthalpies(t *testing.T) {
	for _, c := range []struct {
		equation string
		T        unit.Temperature
	}{
		{"I2 = 2 I", 1000}, {"H2 = 2 H", 1500}, {"Cl2 = 2 Cl", 1000}, {"N2 = 2 N", 2000}, {"H2 + I2 = 2 HI", 700}, {"CO + 0.5 O2 = CO2", 1000}, {"H2 + 0.5 O2 = H2O", 1000},
	} {
		r := newReaction(t, c.equation, FormationAt0K)
		u, err := r.UncertaintyOfLogK(c.T)
		if err != nil || u <= 0 {
			t.Fatal(u, err)
		}
		d := r.LogK(c.T) - published(t, strings.ReplaceAll(c.equation, " ", ""), c.T)*math.Ln10
		if math.Abs(d) > 2*u+0.024 {
			t.Errorf("%s at %v: ln K differs by %+.4f, u = %.4f", c.equation, c.T, d, u)
		}
		t.Logf("%s at %v: ln K differs by %+.4f, u = %.4f", c.equation, c.T, d, u)
	}
}

// Measured constants of H2 + I2 = 2 HI: A. H. Taylor, R. H. Crist, J. Am. Chem.
// Soc. 63, 1377 (1941), from memory.
func TestHydrogenIodideMeasured(t *testing.T) {
	r := newReaction(t, "H2 + I2 = 2 HI", FormationAt0K)
	for T, want := range map[unit.Temperature]float64{666.8: 60.8, 730.8: 48.7, 763.8: 45.6} {
		u, err := r.UncertaintyOfLogK(T)
		if K := r.K(T); err != nil || math.Abs(math.Log(K/want)) > 2*u {
			t.Errorf("K(%v) = %.2f, measured %.1f, u(ln K) = %.3f, %v", T, K, want, u, err)
		}
	}
}

// published returns log10 K of the NASA table.
func published(t *testing.T, reaction string, T unit.Temperature) float64 {
	t.Helper()
	raw, err := os.ReadFile("testdata/nasa2002/equilibrium_constants.csv")
	if err != nil {
		t.Fatal(err)
	}
	for _, line := range strings.Split(string(raw), "\n") {
		f := strings.Split(line, ",")
		if f[0] == reaction && f[1] == strconv.FormatFloat(float64(T), 'g', -1, 64) {
			x, err := strconv.ParseFloat(f[4], 64)
			if err != nil {
				t.Fatal(err)
			}
			return x
		}
	}
	t.Fatalf("%s at %v is not in the table", reaction, T)
	return 0
}

func TestRefuses(t *testing.T) {
	o2, err := gas.Find("O2")
	if err != nil {
		t.Fatal(err)
	}
	o2.Pressure = unit.Atm
	atm, err := gas.New(o2)
	if err != nil {
		t.Fatal(err)
	}
	h2, err := gas.Find("H2")
	if err != nil {
		t.Fatal(err)
	}
	h2.Spin = &gas.SpinWeights{Weights: []float64{1, 3}, Total: 4, Include: true}
	spin, err := gas.New(h2)
	if err != nil {
		t.Fatal(err)
	}
	for name, c := range map[string]struct {
		equation string
		kind     EnergyKind
		ms       []*gas.Molecule
		want     error
		says     string
	}{
		"unbalanced":    {"H2 + O2 = H2O", Given, nil, ErrUnbalanced, "O -1"},
		"isotopes":      {"Cl2 = 35Cl2", Given, nil, ErrUnbalanced, "35Cl"},
		"1 atm, 1 bar":  {"N2 + O2 = 2 NO", AtomisationD0, []*gas.Molecule{atm}, ErrMixed, "101325"},
		"spin":          {"H2 = 2 H", AtomisationD0, []*gas.Molecule{spin}, ErrMixed, "spin"},
		"no energy":     {"CO + 1/2 O2 = CO2", AtomisationD0, nil, ErrMixed, "CO2"},
		"other kind":    {"N2 + O2 = 2 NO", FormationAt0K, nil, ErrMixed, "0 K"},
		"kind not said": {"I2 = 2 I", 0, nil, statmech.ErrDomain, ""},
		"unknown":       {"Xx = 2 I", Given, nil, nil, "Xx"},
		"no equation":   {"I2", Given, nil, nil, "equals"},
		"coefficient":   {"-1 I2 = 2 I", Given, nil, nil, "coefficient"},
		"nothing":       {"I2 = I2", Given, nil, ErrUnbalanced, ""},
	} {
		_, err := New(c.equation, c.kind, c.ms...)
		if err == nil || c.want != nil && !errors.Is(err, c.want) || !strings.Contains(err.Error(), c.says) {
			t.Errorf("%s: %v", name, err)
		}
	}
	r := newReaction(t, "CO + 1/2 O2 = CO2", Given)
	func() {
		defer func() {
			if err, _ := recover().(error); !errors.Is(err, statmech.ErrDomain) {
				t.Errorf("without an enthalpy: %v", err)
			}
		}()
		r.LogK(300 * unit.K)
	}()
}

// Uncertainties: shared species cancel within a reaction and between two.
func TestUncertainty(t *testing.T) {
	species := func(name string, u unit.MolarEnergy) *gas.Molecule {
		d, err := gas.Find(name)
		if err != nil {
			t.Fatal(err)
		}
		d.UAtomisationD0 = u
		m, err := gas.New(d)
		if err != nil {
			t.Fatal(err)
		}
		return m
	}
	n2, o2, no := species("N2", 0.1*unit.MolarKJ), species("O2", 0.05*unit.MolarKJ), species("NO", 0.2*unit.MolarKJ)
	T := 1000 * unit.K
	r := newReaction(t, "N2 + O2 = 2 NO", AtomisationD0, n2, o2, no)
	u, err := r.UncertaintyOfLogK(T)
	want := math.Sqrt(0.1*0.1+0.05*0.05+0.4*0.4) / (8.31446261815324)
	if err != nil || math.Abs(u/want-1) > 1e-12 {
		t.Errorf("u(ln K) = %g, %v; want %g", u, err, want)
	}
	with := newReaction(t, "N2 + O2 + NO = 3 NO", AtomisationD0, n2, o2, no)
	if v, err := with.UncertaintyOfLogK(T); err != nil || v != u {
		t.Errorf("with NO on both sides %g, %v; want %g", v, err, u)
	}
	a := newReaction(t, "N2 = 2 N", AtomisationD0, n2)
	c, err := CovarianceOfLogK(r, a, T)
	if want := 0.1 * 0.1 / (8.31446261815324 * 8.31446261815324); err != nil || math.Abs(c/want-1) > 1e-12 {
		t.Errorf("covariance %g, %v; want %g", c, err, want)
	}
	table, err := r.Table([]unit.Temperature{500, 1000})
	if err != nil || table.Check() != nil || table.Columns[1].U == nil || !strings.Contains(strings.Join(table.Notes, " "), "safety") {
		t.Errorf("%v, %v", err, table.Check())
	}
}
