package unit

import (
	"encoding/csv"
	"errors"
	"math"
	"os"
	"strconv"
	"strings"
	"testing"
)

// near reports whether got is within rel of want.
func near(got, want, rel float64) bool { return math.Abs(got-want) <= rel*math.Abs(want) }

func TestConversionsPublished(t *testing.T) {
	for _, test := range []struct {
		name      string
		got, want float64
		rel       float64
	}{
		// hc N_A per cm and hc/k per cm follow from the defining constants;
		// digits: NIST, Energy equivalents, CODATA 2022.
		{"1 cm-1 in J/mol", float64((1 * PerCm).PerMole()), 11.96265656, 1e-9},
		{"1 cm-1 in K", float64((1 * PerCm).AsTemperature()), 1.438776877, 1e-9},
		{"1 eV in cm-1", EV.In(PerCm), 8065.543937, 1e-9},
		{"1 hartree in cm-1", Hartree.In(PerCm), 219474.63136314, 1e-12},
		{"1 hartree in eV", Hartree.In(EV), 27.211386245981, 1e-12},
		{"1 K in GHz", KelvinEnergy.In(GHzEnergy), 20.836619123, 1e-9},
		{"1 cm-1 in GHz", PerCm.In(GHzEnergy), 29.9792458, 1e-15},
		{"kcal/mol in kJ/mol", KcalPerMol.In(KJPerMol), 4.184, 1e-15},
		{"atm in bar", Atm.In(Bar), 1.01325, 1e-15},
		{"torr in Pa", Torr.In(Pa), 133.32236842105263, 1e-15},
		// B/cm⁻¹ · I/(u Å²) = 16.857629...: h/(8π²c u Å²) from CODATA 2022.
		{"B of 1 u Å²", UAngstrom2.RotationalConstant().In(PerCm), Planck / (8 * math.Pi * math.Pi * SpeedOfLight * AtomicMassConstant * 1e-20) / 100, 1e-14},
		{"I of B", (10 * PerCm).AsMomentOfInertia().RotationalConstant().In(PerCm), 10, 1e-14},
		{"25 °C", float64(Celsius(25)), 298.15, 0},
	} {
		if !near(test.got, test.want, test.rel) {
			t.Errorf("%s = %.15g, want %.15g", test.name, test.got, test.want)
		}
	}
}

func TestConstantsPublished(t *testing.T) {
	// NIST, CODATA 2022: derived constants are printed with an ellipsis and
	// must agree to all printed digits.
	for _, test := range []struct {
		name      string
		got, want float64
	}{
		{"R", GasConstant, 8.31446261815324},
		{"c2", SecondRadiationConstant, 0.01438776877503933},
		{"F", Faraday, 96485.33212331001},
		{"ħ", ReducedPlanck, 1.0545718176461563e-34},
		{"σ", StefanBoltzmann, 5.6703744191844294e-8},
	} {
		if !near(test.got, test.want, 1e-15) {
			t.Errorf("%s = %.17g, want %.17g", test.name, test.got, test.want)
		}
	}
	// M_u = N_A m_u, printed 1.000 000 001 05(31)e-3 kg/mol.
	if !near(MolarMassConstant, 1.00000000105e-3, 5e-12) {
		t.Errorf("M_u = %.15g", MolarMassConstant)
	}
	// Relations among the measured ones hold within their uncertainties:
	// E_h = 2 R_∞ h c; a0 = α/(4π R_∞); μ_B = eħ/2m_e; μ_N = eħ/2m_p.
	for _, test := range []struct {
		name           string
		got, want, rel float64
	}{
		{"E_h", 2 * RydbergConstant * Planck * SpeedOfLight, HartreeEnergy, 2e-12},
		{"a0", FineStructureConstant / (4 * math.Pi * RydbergConstant), BohrRadius, 3e-10},
		{"mu_B", ElementaryCharge * ReducedPlanck / (2 * ElectronMass), BohrMagneton, 6e-10},
		{"mu_N", ElementaryCharge * ReducedPlanck / (2 * ProtonMass), NuclearMagneton, 6e-10},
	} {
		if !near(test.got, test.want, test.rel) {
			t.Errorf("%s = %.15g, want %.15g", test.name, test.got, test.want)
		}
	}
	s := Constants().String()
	for _, want := range []string{"CODATA 2022", "8.31446261815324", "exact", "u = 5.2e-37"} {
		if !strings.Contains(s, want) {
			t.Errorf("Constants() lacks %q:\n%s", want, s)
		}
	}
}

// Every constant of the reference list that this package has: values to the
// printed digits, uncertainties as printed.
func TestConstantsList(t *testing.T) {
	raw, err := os.ReadFile("testdata/codata2022/constants.csv")
	if err != nil {
		t.Fatal(err)
	}
	have := map[string]Constant{}
	for _, c := range Constants() {
		have[c.Name] = c
	}
	names := map[string]string{
		"Boltzmann constant k": "Boltzmann constant", "Planck constant h": "Planck constant", "Avogadro constant N_A": "Avogadro constant",
		"molar gas constant R": "molar gas constant", "elementary charge e": "elementary charge", "speed of light c": "speed of light in vacuum",
		"Bohr radius a0": "Bohr radius", "Hartree energy E_h": "Hartree energy", "second radiation constant hc/k": "second radiation constant",
		"electron mass": "electron mass", "proton mass": "proton mass", "Rydberg constant": "Rydberg constant", "molar mass constant": "molar mass constant",
		"Faraday constant": "Faraday constant", "atomic mass constant m_u": "atomic mass constant",
	}
	n := 0
	r := csv.NewReader(strings.NewReader(string(raw)))
	r.Comment, r.FieldsPerRecord = '#', -1
	rows, err := r.ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	for _, row := range rows[1:] {
		c, ok := have[names[row[0]]]
		if !ok {
			continue
		}
		n++
		value, err1 := strconv.ParseFloat(row[2], 64)
		u, err2 := strconv.ParseFloat(row[3], 64)
		if err1 != nil || err2 != nil {
			t.Fatal(row)
		}
		// M_u is computed from m_u here and printed with 12 digits there.
		if !near(c.Value, value, 1e-15) && !near(c.Value, value, 2e-12*map[bool]float64{true: 1}[row[0] == "molar mass constant"]) || c.StandardUncertainty != u {
			t.Errorf("%s = %.17g, u %g; want %s, %s", row[0], c.Value, c.StandardUncertainty, row[2], row[3])
		}
	}
	if n != len(names) {
		t.Errorf("%d of %d constants compared", n, len(names))
	}
}

func TestString(t *testing.T) {
	for _, test := range []struct {
		q    Quantity
		want string
	}{
		{154.8457 * JPerMolK, "154.846 J/(mol K)"},
		{298.15 * K, "298.15 K"},
		{-3 * K, "-3 K"},
		{101325 * Pa, "101325 Pa"},
		{1 * PerCm, "1.98645e-23 J"},
		{0.692 * MilliJPerMolK2, "0.000692 J/(mol K2)"},
	} {
		if got := test.q.String(); got != test.want {
			t.Errorf("String() = %q, want %q", got, test.want)
		}
	}
}

func TestParse(t *testing.T) {
	for _, test := range []struct {
		text   string
		kind   Kind
		factor float64
	}{
		{"K", KindTemperature, 1},
		{"mK", KindTemperature, 1e-3},
		{"J/(mol K)", KindMolarEntropy, 1},
		{"J K-1 mol-1", KindMolarEntropy, 1},
		{"J·K⁻¹·mol⁻¹", KindMolarEntropy, 1},
		{"J mol^-1 K^-1", KindMolarEntropy, 1},
		{"J/mol/K", KindMolarEntropy, 1},
		{"cal K-1 mol-1", KindMolarEntropy, 4.184},
		{"R", KindMolarEntropy, 8.31446261815324},
		{"mJ/(mol K2)", KindSommerfeldCoefficient, 1e-3},
		{"mJ mol-1 K-2", KindSommerfeldCoefficient, 1e-3},
		{"kJ mol-1", KindMolarEnergy, 1e3},
		{"kcal/mol", KindMolarEnergy, 4184},
		{"J/(g K)", KindSpecificEntropy, 1e3},
		{"J/K", KindEntropy, 1},
		{"cm-1", KindWavenumber, 100},
		{"1/cm", KindWavenumber, 100},
		{"cm⁻¹", KindWavenumber, 100},
		{"THz", KindFrequency, 1e12},
		{"THz-1 cell-1", KindDensityOfStates, 1e-12},
		{"meV", KindEnergy, 1.602176634e-22},
		{"g mol-1", KindMolarMass, 1e-3},
		{"u", KindMass, AtomicMassConstant},
		{"u Å2", KindMomentOfInertia, AtomicMassConstant * 1e-20},
		{"g/cm3", KindDensity, 1e3},
		{"cm3/mol", KindMolarVolume, 1e-6},
		{"GPa", KindPressure, 1e9},
		{"mbar", KindPressure, 100},
		{"10^-6 K-1", KindVolumeExpansivity, 1e-6},
		{"1e-6/K", KindVolumeExpansivity, 1e-6},
		{"%", KindNumber, 0.01},
		{"1", KindNumber, 1},
		{"deg", KindAngle, math.Pi / 180},
		{"°C", KindTemperature, 1},
		{"Å", KindLength, 1e-10},
		{"J mol-1 K-4", KindOther, 1},
		{"min", KindTime, 60},
		{"J/(g °C)", KindSpecificEntropy, 1e3},
		{"Å3", KindVolume, 1e-30},
		{"kOe", KindOther, 0}, // not a unit here: see below
	} {
		u, err := Parse(test.text)
		if test.factor == 0 {
			if !errors.Is(err, ErrUnit) || !strings.Contains(err.Error(), test.text) {
				t.Errorf("Parse(%q) = %v, %v; want an error that names it", test.text, u, err)
			}
			continue
		}
		if err != nil || u.Kind != test.kind || !near(u.Factor, test.factor, 3e-16) {
			t.Errorf("Parse(%q) = %s %.17g, %v; want %s %.17g", test.text, u.Kind, u.Factor, err, test.kind, test.factor)
		}
	}
}

func TestParseRefuses(t *testing.T) {
	for text, names := range map[string]string{
		"":           "no unit",
		"J/mol K":    `"K"`,
		"J/(mol K":   "parenthesis",
		"furlong":    `"furlong"`,
		"J K^":       "exponent",
		"J K-0":      "exponent",
		"J/":         "slash",
		"kpa":        `"kpa"`,
		"1000 °C":    "K",
		"Kelvin":     `"Kelvin"`,
		"J)":         `")"`,
		"0 K":        "positive",
		"()":         "nothing",
		"J K-1 mol-": "exponent",
	} {
		u, err := Parse(text)
		if !errors.Is(err, ErrUnit) || !strings.Contains(err.Error(), names) {
			t.Errorf("Parse(%q) = %v, %v; want an error with %s", text, u, err, names)
		}
	}
}

func TestParseHeader(t *testing.T) {
	for _, test := range []struct {
		text, name string
		kind       Kind
		factor     float64
	}{
		{"Cp / (J K-1 mol-1)", "Cp", KindMolarEntropy, 1},
		{"T / K", "T", KindTemperature, 1},
		{"T/K", "T", KindTemperature, 1},
		{"u_r(Cp) / %", "u_r(Cp)", KindNumber, 0.01},
		{"M/(g mol-1)", "M", KindMolarMass, 1e-3},
		{"H-H(0) / (kJ/mol)", "H-H(0)", KindMolarEnergy, 1e3},
		{"g1/g0 / 1", "g1/g0", KindNumber, 1},
		{"x / cm-1", "x", KindWavenumber, 100},
		{"V / (kJ mol-1)", "V", KindMolarEnergy, 1e3},
		{"g / (THz-1 cell-1)", "g", KindDensityOfStates, 1e-12},
		{"q / J/(mol K)", "q", KindMolarEntropy, 1},
	} {
		name, u, err := ParseHeader(test.text)
		if err != nil || name != test.name || u.Kind != test.kind || !near(u.Factor, test.factor, 3e-16) {
			t.Errorf("ParseHeader(%q) = %q, %s %g, %v", test.text, name, u.Kind, u.Factor, err)
		}
	}
	for _, text := range []string{"Cp", "Cp / ", "/ K", "Cp / (J K-1 mole-1)"} {
		if name, u, err := ParseHeader(text); !errors.Is(err, ErrUnit) || !strings.Contains(err.Error(), strings.TrimSpace(text)) {
			t.Errorf("ParseHeader(%q) = %q, %v, %v; want an error that quotes it", text, name, u, err)
		}
	}
}

func TestUnitAs(t *testing.T) {
	c := MustParse("°C")
	if got := c.SI(25); got != 298.15 {
		t.Errorf("25 °C = %g K, want 298.15", got)
	}
	d, err := c.As(KindTemperatureDifference)
	if err != nil || d.SI(25) != 25 {
		t.Errorf("a difference of 25 °C = %g K, %v", d.SI(25), err)
	}
	if b, err := d.As(KindTemperature); err != nil || b.SI(25) != 298.15 {
		t.Errorf("back to a temperature: %g, %v", b.SI(25), err)
	}
	if l, err := MustParse("K-1").As(KindLinearExpansivity); err != nil || l.Kind != KindLinearExpansivity {
		t.Errorf("K-1 as linear expansivity: %v, %v", l.Kind, err)
	}
	if _, err := MustParse("cm-1").As(KindEnergy); !errors.Is(err, ErrUnit) {
		t.Errorf("a wavenumber became an energy: %v", err)
	}
	if _, err := MustParse("kJ/mol").Convert(1, MustParse("J")); !errors.Is(err, ErrUnit) {
		t.Errorf("a molar energy became an energy: %v", err)
	}
	if x, err := MustParse("kcal/mol").Convert(1, MustParse("kJ/mol")); err != nil || !near(x, 4.184, 1e-15) {
		t.Errorf("1 kcal/mol = %g kJ/mol, %v", x, err)
	}
}

// Every quantity's own unit text is read back as its own kind, with factor 1.
func TestUnitTextsRoundTrip(t *testing.T) {
	for _, q := range []Quantity{Temperature(1), Energy(1), InverseEnergy(1), MolarEnergy(1), MolarEntropy(1), Entropy(1),
		SpecificEnergy(1), SpecificEntropy(1), SommerfeldCoefficient(1), Amount(1), Mass(1), MolarMass(1), Pressure(1),
		Compressibility(1), Length(1), Area(1), Volume(1), MolarVolume(1), Density(1), NumberDensity(1), Frequency(1),
		Wavenumber(1), Time(1), Speed(1), Power(1), Angle(1), MomentOfInertia(1), VolumeExpansivity(1), DensityOfStates(1),
		MagneticFluxDensity(1), TemperatureDifference(1), LinearExpansivity(1)} {
		own := q.Unit()
		u, err := Parse(own.Symbol)
		if err == nil {
			u, err = u.As(own.Kind)
		}
		if err != nil || u != own {
			t.Errorf("%T: unit %q read as %+v, %v; want %+v", q, own.Symbol, u, err, own)
		}
		if name, v, err := ParseHeader(own.Header("x")); err != nil || name != "x" || v.Factor != 1 {
			t.Errorf("%T: header %q read as %q, %v, %v", q, own.Header("x"), name, v, err)
		}
	}
}

func FuzzParseHeader(f *testing.F) {
	for _, s := range []string{"Cp / (J K-1 mol-1)", "T/K", "x / u Å2", "a / 10^-6 K-1", "°C / ((", "µ / 1e", "T / K²⁻", "x/A\u030a"} {
		f.Add(s)
	}
	f.Fuzz(func(t *testing.T, s string) {
		_, u, err := ParseHeader(s)
		if err == nil && !(u.Factor > 0) {
			t.Errorf("ParseHeader(%q) has factor %g", s, u.Factor)
		}
	})
}
