package statmech

import (
	"errors"
	"math"
	"math/rand/v2"
	"runtime"
	"slices"
	"testing"

	"levelsum/statmech/unit"
)

// longLists are lists that are surveyed, up to 5000 K high.
func longLists() map[string]func(i int) (e, g float64) {
	const n = longList
	r := rand.New(rand.NewPCG(3, 4))
	return map[string]func(i int) (float64, float64){
		"without order": func(i int) (float64, float64) { return 5000 * r.Float64(), float64(1 + i%7) },
		"sorted":        func(i int) (float64, float64) { return 5000 * float64(i) / n, float64(1 + i%3) },
		"descending":    func(i int) (float64, float64) { return 5000 * (1 - float64(i)/n), 1 },
		"few energies":  func(i int) (float64, float64) { return float64(1000 * (i % 6)), float64(1 + i%7) },
		"from another zero": func(i int) (float64, float64) {
			return -80_000 + 5000*r.Float64(), 0.5 + r.Float64()
		},
		// A sample does not see the lowest and the highest.
		"rare ends": func(i int) (float64, float64) {
			switch i {
			case 12_345:
				return 0, 3
			case 23_457:
				return 5000, 5
			}
			return 1000 + 3000*r.Float64(), 2
		},
	}
}

const longList = 60_003

func makeLevels(f func(i int) (e, g float64)) ([]unit.Energy, []float64) {
	e, g := make([]unit.Energy, longList), make([]float64, longList)
	for i := range e {
		x, w := f(i)
		e[i], g[i] = unit.Energy(x)*unit.KelvinEnergy, w
	}
	return e, g
}

// Surveyed lists against the direct sum, to 2e-14; what is said of the list
// against loops over it.
func TestLevelsSurvey(t *testing.T) {
	worst := 0.0
	for name, f := range longLists() {
		e, g := makeLevels(f)
		for _, weights := range [][]float64{g, nil} {
			l := mustLevels(t, e, weights)
			if l.surveyed == nil {
				t.Errorf("%s: not surveyed", name)
				continue
			}
			low, high := slices.Min(e), slices.Max(e)
			var ground, sum float64
			for i, v := range e {
				w := 1.0
				if weights != nil {
					w = weights[i]
				}
				if v == low {
					ground += w
				}
				sum += w
			}
			if l.ZeroPointEnergy() != low || l.TopEnergy() != high || relDiff(l.GroundDegeneracy(), ground) > 1e-14 || relDiff(l.gSum, sum) > 1e-12 {
				t.Errorf("%s: %v from %v, %g there, %g in all; want %v from %v, %g, %g", name, l.TopEnergy(), l.ZeroPointEnergy(), l.GroundDegeneracy(), l.gSum, high, low, ground, sum)
			}
			ts := []unit.Temperature{10, 12, 20, 45, 46, 60, 99, 100, 101, 250, 300, 420, 1000, 1e4, 1.5e4, 5e4, 1e7, 2e7, 3e7}
			all := l.ReducedAt(ts)
			for _, T := range ts {
				all, ts = append(all, l.Reduced(T)), append(ts, T)
			}
			for i, r := range all {
				want := l.direct(unit.Boltzmann * float64(ts[i]))
				for what, d := range map[string]float64{"ln q": relDiff(r.LogQ, want.LogQ), "U": relDiff(r.U, want.U), "C": relDiff(r.C, want.C)} {
					worst = math.Max(worst, d)
					if d > 2e-14 {
						t.Errorf("%s, %v: %s differs by %.1e from the direct sum", name, ts[i], what, d)
					}
				}
			}
		}
	}
	t.Logf("largest difference: %.1e", worst)
}

// The errors of a list do not depend on its length, nor the warning.
func TestLevelsSurveyDomain(t *testing.T) {
	for _, test := range []struct {
		at   int
		e, g float64
		arg  string
	}{
		{50_001, math.NaN(), 1, "energies[50001]"},
		{7, math.Inf(1), 1, "energies[7]"},
		{60_002, math.Inf(-1), 1, "energies[60002]"},
		{30_000, 1, 0, "degeneracies[30000]"},
		{30_001, 1, -2, "degeneracies[30001]"},
		{30_002, 1, math.Inf(1), "degeneracies[30002]"},
		{60_002, 1, math.NaN(), "degeneracies[60002]"},
	} {
		e, g := makeLevels(longLists()["without order"])
		e[test.at], g[test.at] = unit.Energy(test.e)*unit.KelvinEnergy, test.g
		_, err := NewLevels(e, g)
		var wrong *DomainError
		if !errors.As(err, &wrong) || wrong.Arg != test.arg {
			t.Errorf("level %d: %v, want an error about %s", test.at, err, test.arg)
		}
	}
	e, g := makeLevels(longLists()["sorted"])
	g[5], g[40_000] = 0.5, 1.25
	want := "2 of 60003 degeneracies are not integers"
	if w := mustLevels(t, e, g).Warnings(300); len(w) != 1 || w[0] != want {
		t.Errorf("warnings %q, want %q", w, want)
	}
	// One energy: no range to survey.
	for i := range e {
		e[i] = unit.KelvinEnergy
	}
	l := mustLevels(t, e, nil)
	if r := l.ReducedAt([]unit.Temperature{1, 2, 3, 4}); l.surveyed != nil || r[2].U != 0 || relDiff(r[2].LogQ, math.Log(longList)) > 1e-15 {
		t.Errorf("levels of one energy: %+v, want U = 0 and ln q = ln %d", r[2], longList)
	}
}

// The same bits on any number of processors.
func TestLevelsSurveyProcessors(t *testing.T) {
	e, g := makeLevels(longLists()["from another zero"])
	ts := []unit.Temperature{100, 200, 300, 400}
	defer runtime.GOMAXPROCS(runtime.GOMAXPROCS(1))
	one := mustLevels(t, e, g)
	want := one.ReducedAt(ts)
	runtime.GOMAXPROCS(4)
	many := mustLevels(t, e, g)
	if got := many.ReducedAt(ts); !slices.Equal(got, want) || many.gSum != one.gSum || many.gMin != one.gMin {
		t.Errorf("four processors give %v, one %v", got, want)
	}
}
