package derive

import (
	"flag"
	"math"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"levelsum/display"
	"levelsum/statmech"
	"levelsum/statmech/calorimetry"
	"levelsum/statmech/data"
	"levelsum/statmech/gas"
	"levelsum/statmech/reaction"
	"levelsum/statmech/solid"
	"levelsum/statmech/unit"
)

var update = flag.Bool("update", false, "write the golden files")

// number returns the value that a derivation stores under a name.
func number(t *testing.T, d display.Derivation, name string) float64 {
	t.Helper()
	if err := d.Check(); err != nil {
		t.Fatal(err)
	}
	for _, n := range d.View().Data[display.NumbersMediaType].([]map[string]any) {
		if n["name"] == name {
			return n["value"].(float64)
		}
	}
	t.Fatalf("no number %s", name)
	return 0
}

func near(t *testing.T, what string, got, want, tol float64) {
	t.Helper()
	if !(math.Abs(got-want) <= tol) {
		t.Errorf("%s = %v, want %v ± %v", what, got, want, tol)
	}
}

// S°(Ar, 298.15 K, 100 kPa) = 154.846 ± 0.003 J/(mol K): J. D. Cox, D. D.
// Wagman, V. A. Medvedev, CODATA Key Values for Thermodynamics, Hemisphere
// (1989). Relative atomic mass: IUPAC, abridged (2021).
func TestSackurTetrode(t *testing.T) {
	argon := gas.Monatomic{Mass: 39.95 * unit.U, Pressure: unit.Bar}
	d := SackurTetrode(argon, 298.15*unit.K)
	near(t, "S(Ar)", number(t, d, "S_tr"), 154.846, 0.003)
	golden(t, "sackur-tetrode.md", d.View().Data["text/markdown"].(string)+"\n")
	golden(t, "sackur-tetrode.txt", d.View().Data["text/plain"].(string)+"\n")
	levels, err := statmech.NewLevels([]unit.Energy{0, 100 * unit.PerCm}, []float64{2, 4})
	if err != nil {
		t.Fatal(err)
	}
	argon.Levels = levels
	near(t, "S with levels", number(t, SackurTetrode(argon, 298.15*unit.K), "S"), float64(argon.Entropy(298.15*unit.K)), 1e-9)
}

// C/3R of Debye at T = θ and θ/3, and C/k of two levels with x = 1 and 2 and
// equal degeneracies, from 40-digit values (mpmath, computed with the formulas
// of the packages' reference data).
func TestHeatCapacities(t *testing.T) {
	for _, test := range []struct{ x, want float64 }{{1, 0.9517321357032794472}, {3, 0.6627580441523862805}} {
		d := Debye(solid.Debye{Theta: unit.Temperature(300 * test.x)}, 300*unit.K)
		near(t, "f", number(t, d, "f"), test.want, 1e-14)
	}
	for _, test := range []struct{ x, want float64 }{{1, 0.19661193324148185254}, {2, 0.41997434161402606939}} {
		s := statmech.Schottky{Splitting: unit.Temperature(10 * test.x).AsEnergy(), Ratio: 1}
		near(t, "C", number(t, Schottky(s, 10*unit.K), "C")/unit.GasConstant, test.want, 1e-14)
	}
	// The T³ law at θ/T = 50 holds: 12π⁴/5 R = 1943.77 J/(mol K).
	d := Debye(solid.Debye{Theta: 500 * unit.K}, 10*unit.K)
	near(t, "T³ law", number(t, d, "C"), 1943.77*math.Pow(1.0/50, 3), 1e-7)
}

// k ln 2 = 1.380649e-23 J/K × 0.69314718056 = 9.5699296e-24 J/K, by hand; S of
// (1/2, 1/4, 1/4) is 1.5 bits, of 16 equal states 4 bits.
func TestEntropies(t *testing.T) {
	near(t, "k ln 2", number(t, EqualStates(2), "S"), 9.5699296e-24, 1e-31)
	d, err := GibbsEntropy([]float64{0.5, 0.25, 0, 0.25})
	if err != nil {
		t.Fatal(err)
	}
	near(t, "S", number(t, d, "S"), 1.5*9.5699296e-24, 2e-31)
	many := make([]float64, 16)
	for i := range many {
		many[i] = 1.0 / 16
	}
	if d, err = GibbsEntropy(many); err != nil {
		t.Fatal(err)
	}
	near(t, "4 bits", number(t, d, "S"), 4*9.5699296e-24, 4e-31)
	if _, err := GibbsEntropy([]float64{0.5, 0.6}); err == nil {
		t.Error("probabilities with the sum 1.1 are taken")
	}
	defer func() {
		if _, ok := recover().(*statmech.DomainError); !ok {
			t.Error("W = 0.5 is taken")
		}
	}()
	EqualStates(0.5)
}

func TestPartitionFunction(t *testing.T) {
	d := FromPartitionFunction(statmech.Schottky{Splitting: (10 * unit.K).AsEnergy(), Ratio: 1}, 10*unit.K)
	// S/k of two levels at x = 1, from the same source as above.
	near(t, "S", number(t, d, "S")/unit.GasConstant, 0.58220310888821795480, 1e-14)
}

// ln K of I2 = 2 I at 1000 K is that of the reaction; the formulas are worked
// out again by the derivation itself.
func TestEquilibriumConstant(t *testing.T) {
	r, err := reaction.New("I2 = 2 I", reaction.AtomisationD0)
	if err != nil {
		t.Fatal(err)
	}
	d := EquilibriumConstant(r, 1000*unit.K)
	near(t, "ln K", number(t, d, "ln K"), r.LogK(1000*unit.K), 1e-12)
	if !strings.Contains(d.View().Data["text/plain"].(string), "not a safety case") {
		t.Error("the caution is missing")
	}
}

// The parts add up to the entropy of the path, whose value and uncertainty
// the derivation shows.
func TestThirdLaw(t *testing.T) {
	run, err := data.Read("../../testdata/white-collocott-1984/copper.csv")
	if err != nil {
		t.Fatal(err)
	}
	path, err := calorimetry.ThirdLaw(run, nil)
	if err != nil {
		t.Fatal(err)
	}
	// CODATA key value 33.15 ± 0.08 (Cox, Wagman, Medvedev 1989).
	near(t, "S(Cu)", number(t, ThirdLaw(path, 298.15*unit.K), "S(298.15 K)"), 33.15, 0.08)
}

func golden(t *testing.T, name, got string) {
	t.Helper()
	path := filepath.Join("testdata", name)
	if *update {
		if err := os.WriteFile(path, []byte(got), 0o666); err != nil {
			t.Fatal(err)
		}
	}
	want, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	if got != string(want) {
		t.Errorf("%s has changed; got\n%s", path, got)
	}
}
