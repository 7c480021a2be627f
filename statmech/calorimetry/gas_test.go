package calorimetry

import (
	"encoding/csv"
	"math"
	"os"
	"strconv"
	"strings"
	"testing"

	"levelsum/statmech"
	"levelsum/statmech/data"
	"levelsum/statmech/uncertain"
	"levelsum/statmech/unit"
)

const calorie = 4.184

// TestNitrogenStages: the entropy of nitrogen gas at its boiling point by W. F.
// Giauque and J. O. Clayton, J. Am. Chem. Soc. 55, 4875 (1933), from its stages:
// 36.53 cal/(mol K) at 1 atm as printed (entries from memory); 1 bar adds
// 0.0262.
func TestNitrogenStages(t *testing.T) {
	cal := func(name string, s float64) Stage { return Stage{name, uncertain.Exact(s * calorie)} }
	heat := func(name string, T, h float64) Stage {
		tr := Transition{Name: name, T: unit.Temperature(T), Enthalpy: unit.MolarEnergy(h * calorie)}
		return Stage{name, tr.Entropy()}
	}
	imperfection := Berthelot(126.2, 33.5*101325, 77.32, 101325, 0)
	within(t, "imperfection / (cal mol-1 K-1)", imperfection.Entropy.Value()/calorie, 0.2176, 0.00005)
	stages := []Stage{cal("0-10 K", 0.458), cal("10-35.61 K", 6.034), heat("transition", 35.61, 54.71), cal("35.61-63.14 K", 5.589),
		heat("fusion", 63.14, 172.3), cal("63.14-77.32 K", 2.728), heat("vaporisation", 77.32, 1332.9), imperfection}
	s := TotalEntropy(stages...)
	within(t, "S(77.32 K, 1 atm) / (cal mol-1 K-1)", s.Value()/calorie, 36.53, 0.005)
	bar := ToStandardPressure(101325)
	within(t, "1 bar adds / (cal mol-1 K-1)", bar.Entropy.Value()/calorie, 0.0262, 0.00005)
	within(t, "1 atm to 1 bar", float64(PressureChange(101325, 1e5)), 0.10944, 0.000005)
}

// TestStages sums the stages of other gases to the totals that the papers
// print (third_law_stages, from memory) within 0.02 cal/(mol K).
func TestStages(t *testing.T) {
	f, err := os.Open("testdata/giauque/third_law_stages.csv")
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	r := csv.NewReader(f)
	r.Comment = '#'
	rows, err := r.ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	sums := map[string][]Stage{}
	for _, row := range rows[1:] {
		if row[2] != "" {
			T, _ := strconv.ParseFloat(row[2], 64)
			h, _ := strconv.ParseFloat(row[3], 64)
			tr := Transition{Name: row[1], T: unit.Temperature(T), Enthalpy: unit.MolarEnergy(h * calorie)}
			sums[row[0]] = append(sums[row[0]], Stage{row[1], tr.Entropy()})
			continue
		}
		s, err := strconv.ParseFloat(row[4], 64)
		if err != nil {
			t.Fatal(err)
		}
		sums[row[0]] = append(sums[row[0]], Stage{row[1], uncertain.Exact(s * calorie)})
	}
	for name, want := range map[string]float64{"N2": 36.53, "CO": 37.2, "SO2": 58.07} {
		tol := 0.02
		if name == "CO" {
			tol = 0.05 // printed with one decimal
		}
		within(t, name, TotalEntropy(sums[name]...).Value()/calorie, want, tol)
	}
}

// TestResidualCO: carbon monoxide, direct sum over levels 38.20 cal/(mol K) at
// 81.61 K and 1 atm (197.6600 J/(mol K) at 298.15 K and 1 bar), calorimetric
// 37.2 (J. O. Clayton, W. F. Giauque, J. Am. Chem. Soc. 54, 2610 (1932), from
// memory): 4.18 J/(mol K), below R ln 2 = 5.763.
func TestResidualCO(t *testing.T) {
	r := Residual(uncertain.Measured(38.20*calorie, 0.02), uncertain.Measured(37.2*calorie, 0.4), 2)
	within(t, "difference", r.Difference.Value(), 4.184, 0.01)
	within(t, "u", r.Difference.StandardUncertainty(), 0.4005, 1e-4)
	within(t, "R ln 2", float64(r.Model), 5.763, 0.0005)
	within(t, "ratio", r.Ratio.Value(), 0.726, 0.001)
	if s := r.String(); !r.Significant || !strings.Contains(s, "4.18(40) J/(mol K)") || !strings.Contains(s, "R ln 2 = 5.763") {
		t.Errorf("%s", s)
	}
	// Nitrogen: 36.38 against 36.53 cal/(mol K) means nothing with u = 0.1 cal.
	n := Residual(uncertain.Measured(36.38*calorie, 0.01), uncertain.Measured(36.53*calorie, 0.42), 2)
	if s := n.String(); n.Significant || !strings.Contains(s, "not significant") {
		t.Errorf("%s", s)
	}
}

// TestScale: T90 - T68 as in the table of H. Preston-Thomas, Metrologia 27, 3
// (1990), table 6, three decimals (from memory).
func TestScale(t *testing.T) {
	for T, want := range map[unit.Temperature]float64{20: -0.009, 40: -0.006, 60: 0.003, 70: 0.007, 80: 0.008, 90: 0.008, 100: 0.009,
		173.15: 0.013, 223.15: 0.009, 273.15: 0, 373.15: -0.026, 473.15: -0.040, 573.15: -0.039, 673.15: -0.048} {
		within(t, T.String(), float64(FromIPTS68(T)-T), want, 0.0015)
	}
	within(t, "373.15 K", float64(FromIPTS68(373.15)), 373.124, 0.001)
	below, above := FromIPTS68(83.7999)-83.7999, FromIPTS68(83.8)-83.8
	within(t, "join at 83.8 K", float64(above-below), 0, 0.001)
	// The slope against differences.
	for _, T := range []float64{20, 55, 120, 300, 700} {
		_, slope := fromIPTS68(T)
		hi, _ := fromIPTS68(T + 0.01)
		lo, _ := fromIPTS68(T - 0.01)
		within(t, "slope", slope, (hi-lo)/0.02, 1e-7)
	}
	run, err := data.Parse("old.csv", []byte("# temperature scale: IPTS-68\nT / °C, Cp / (cal K-1 mol-1), u(Cp) / %\n100, 6, 1\n"))
	if err != nil {
		t.Fatal(err)
	}
	new, err := ToITS90(run)
	if err != nil {
		t.Fatal(err)
	}
	within(t, "T", float64(new.T[0]), 373.124, 0.001)
	_, slope := fromIPTS68(373.15)
	within(t, "Cp", float64(new.Cp[0]), 6*calorie/(1+slope), 1e-12)
	within(t, "u(Cp)", float64(new.U[0]), 0.01*6*calorie, 1e-12)
	var b strings.Builder
	if err := new.Write(&b); err != nil {
		t.Fatal(err)
	}
	again, err := data.Parse("new.csv", []byte(b.String()))
	if err != nil {
		t.Fatal(err)
	}
	if math.Abs(float64(again.T[0]-new.T[0])) > 1e-10 || math.Abs(float64(again.Cp[0]-new.Cp[0])) > 1e-12 || again.Note("temperature scale") != "ITS-90" {
		t.Errorf("written and read: %v %v\n%s", again.T, again.Cp, b.String())
	}
	if _, err := ToITS90(table(t, []float64{10, 20}, []float64{1, 2}, nil)); err == nil || !strings.Contains(err.Error(), "IPTS-68") {
		t.Errorf("a table without a scale: %v", err)
	}
}

func TestGasDomain(t *testing.T) {
	for name, f := range map[string]func(){
		"T":            func() { Imperfection(126.2, 33.5*101325, 0, 101325) },
		"too large":    func() { Imperfection(126.2, 33.5*101325, 60, 101325) },
		"p":            func() { PressureChange(-1, 1e5) },
		"IPTS-68 low":  func() { FromIPTS68(5) },
		"W":            func() { Residual(uncertain.Exact(1), uncertain.Exact(1), 1) },
		"saturation T": func() { ConstantPressure(70, -1, 1e-8, 1e3) },
	} {
		func() {
			defer func() {
				if e, ok := recover().(*statmech.DomainError); !ok || !strings.HasPrefix(e.Func, "calorimetry.") {
					t.Errorf("%s: panic %v", name, e)
				}
			}()
			f()
			t.Errorf("%s: no panic", name)
		}()
	}
}
