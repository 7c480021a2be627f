package statmech

import (
	"errors"
	"math"
	"math/rand/v2"
	"strings"
	"testing"

	"levelsum/statmech/unit"
)

// lineList is invented: upper levels from 3 to 7 eV at 9000 K.
func lineList(T unit.Temperature, rel float64, rnd *rand.Rand) []Line {
	var lines []Line
	for i := range 12 {
		l := Line{Upper: unit.Energy(3+0.35*float64(i)) * unit.EV, Degeneracy: float64(1 + i%5), Rate: 1e7 * float64(1+(i*7)%11),
			Photon: unit.Energy(2+0.1*float64(i%4)) * unit.EV}
		exact := l.Degeneracy * l.Rate * float64(l.Photon) * math.Exp(-l.Upper.OverKT(T)) * 1e14
		l.Uncertainty = rel * exact
		l.Intensity = exact
		if rnd != nil {
			l.Intensity += l.Uncertainty * rnd.NormFloat64()
		}
		lines = append(lines, l)
	}
	return lines
}

func TestTemperatureFromLinesExact(t *testing.T) {
	lines := lineList(9000*unit.K, 0.01, nil)
	r, err := TemperatureFromLines(lines, RadiantPower)
	if err != nil || relDiff(float64(r.T), 9000) > 1e-12 || r.InIntensities || len(r.Warnings) != 0 {
		t.Errorf("%+v, %v", r, err)
	}
	// Taking radiant powers for photon rates moves T by more than its uncertainty here.
	if w, err := TemperatureFromLines(lines, PhotonRate); err != nil || math.Abs(float64(w.T-9000)) < 5 {
		t.Errorf("as photon rates: %v, %v", w.T, err)
	}
	// u(T) = k T² u(slope) of the weighted line, by the textbook sums.
	var sw, sx, sxx float64
	for _, l := range lines {
		w := 1e4
		x := float64(l.Upper)
		sw, sx, sxx = sw+w, sx+w*x, sxx+w*x*x
	}
	u := unit.Boltzmann * 9000 * 9000 * math.Sqrt(sw/(sw*sxx-sx*sx))
	if relDiff(float64(r.StandardUncertainty), u) > 1e-9 {
		t.Errorf("u(T) = %v, want %g", r.StandardUncertainty, u)
	}
}

// Coverage: T within 2u in 95 ± 3 per cent of noisy lists, by logarithms and
// by intensities.
func TestTemperatureFromLinesCoverage(t *testing.T) {
	rnd := rand.New(rand.NewPCG(11, 12))
	for _, rel := range []float64{0.02, 0.08, 0.2} {
		in := 0
		const n = 1000
		for range n {
			r, err := TemperatureFromLines(lineList(9000*unit.K, rel, rnd), RadiantPower)
			if err != nil {
				t.Fatal(err)
			}
			if math.Abs(float64(r.T-9000)) < 2*float64(r.StandardUncertainty) {
				in++
			}
		}
		if f := float64(in) / n; f < 0.92 || f > 0.98 {
			t.Errorf("noise %g: covered in %.1f %%", rel, 100*f)
		}
	}
}

func TestTemperatureFromLinesWarnings(t *testing.T) {
	short := lineList(9e5*unit.K, 0.001, nil)
	if r, err := TemperatureFromLines(short, RadiantPower); err != nil || len(r.Warnings) != 1 || !strings.Contains(r.Warnings[0], "span") {
		t.Errorf("lever arm: %q, %v", r.Warnings, err)
	}
	absorbed := lineList(9000*unit.K, 0.01, nil)
	for i := range absorbed {
		absorbed[i].Intensity *= 1 - 0.5*math.Exp(-3*float64(i)/11)
		absorbed[i].Uncertainty = 0.01 * absorbed[i].Intensity
	}
	r, err := TemperatureFromLines(absorbed, RadiantPower)
	if err != nil || !strings.Contains(strings.Join(r.Warnings, ";"), "curved") || !strings.Contains(strings.Join(r.Warnings, ";"), "χ²") {
		t.Errorf("self-absorption: %q, %v", r.Warnings, err)
	}
	// An error of the rates that all lines share moves no temperature; errors
	// of its own for each line do.
	common, own := lineList(9000*unit.K, 0.01, nil), lineList(9000*unit.K, 0.01, nil)
	for i := range common {
		common[i].RateUncertainty, own[i].RateUncertainty = 0.1, 0.1
		common[i].Multiplet = "all"
	}
	none, errN := TemperatureFromLines(lineList(9000*unit.K, 0.01, nil), RadiantPower)
	a, errA := TemperatureFromLines(common, RadiantPower)
	b, errB := TemperatureFromLines(own, RadiantPower)
	if errN != nil || errA != nil || errB != nil || relDiff(float64(a.StandardUncertainty), float64(none.StandardUncertainty)) > 1e-6 ||
		relDiff(float64(b.StandardUncertainty), math.Sqrt(101)*float64(none.StandardUncertainty)) > 1e-6 {
		t.Errorf("u(T): no rate error %v, common %v, own %v; %v %v %v", none.StandardUncertainty, a.StandardUncertainty, b.StandardUncertainty, errN, errA, errB)
	}
}

func TestTemperatureFromPopulations(t *testing.T) {
	e := []unit.Energy{0, 100 * unit.PerCm, 300 * unit.PerCm, 600 * unit.PerCm}
	g := []float64{1, 3, 5, 7}
	l := mustLevels(t, e, g)
	p := l.Populations(250 * unit.K)
	u := []float64{1e-3, 1e-3, 1e-3, 1e-3}
	if r, err := TemperatureFromPopulations(e, g, p, u); err != nil || relDiff(float64(r.T), 250) > 1e-10 {
		t.Errorf("%+v, %v", r, err)
	}
	inverted := []float64{0.1, 0.3, 0.9, 5}
	if _, err := TemperatureFromPopulations(e, []float64{1, 1, 1, 1}, inverted, u); !errors.Is(err, ErrUnderdetermined) {
		t.Errorf("inverted populations: %v", err)
	}
	if _, err := TemperatureFromPopulations(e[:1], g[:1], p[:1], u[:1]); !errors.Is(err, ErrUnderdetermined) {
		t.Errorf("one level: %v", err)
	}
	if _, err := TemperatureFromPopulations(e, g, p, []float64{0, 1, 1, 1}); !errors.Is(err, ErrDomain) {
		t.Errorf("no uncertainty: %v", err)
	}
	if _, err := TemperatureFromLines([]Line{{}, {}}, 0); !errors.Is(err, ErrDomain) {
		t.Errorf("signal not said: %v", err)
	}
}
