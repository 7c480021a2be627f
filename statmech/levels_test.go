package statmech

import (
	"encoding/csv"
	"errors"
	"math"
	"math/rand/v2"
	"os"
	"strconv"
	"testing"

	"levelsum/statmech/unit"
)

// readTable returns the rows of a reference table in testdata, numbers only.
func readTable(t *testing.T, name string) [][]float64 {
	t.Helper()
	f, err := os.Open(name)
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	r := csv.NewReader(f)
	r.Comment = '#'
	records, err := r.ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	var rows [][]float64
	for _, record := range records[1:] {
		row := make([]float64, len(record))
		for i, s := range record {
			if row[i], err = strconv.ParseFloat(s, 64); err != nil {
				t.Fatal(err)
			}
		}
		rows = append(rows, row)
	}
	return rows
}

// relDiff is |got-want| relative to want, or got itself where want is 0.
func relDiff(got, want float64) float64 {
	if want == 0 {
		return math.Abs(got)
	}
	return math.Abs(got-want) / math.Abs(want)
}

func mustLevels(t testing.TB, e []unit.Energy, g []float64) *Levels {
	t.Helper()
	l, err := NewLevels(e, g)
	if err != nil {
		t.Fatal(err)
	}
	return l
}

// Two levels against 20-digit values, through Levels and through Schottky.
func TestLevelsSchottky(t *testing.T) {
	worst := 0.0
	for _, row := range readTable(t, "testdata/computed/two_level_schottky.csv") {
		ratio, x, C, U, S, A := row[0], row[1], row[2], row[3], row[4], row[5]
		gap := unit.Energy(x) * unit.KelvinEnergy * 100
		// The gap of the list as float64, so that the comparison is not one of inputs.
		l := mustLevels(t, []unit.Energy{gap, 0}, []float64{ratio, 1})
		for name, r := range map[string]Reduced{
			"Levels":   l.Reduced(100 * unit.K),
			"Schottky": Schottky{gap, ratio}.Reduced(100 * unit.K),
		} {
			if A == 0 {
				// The table gives A as 0 and S as U below 1e-80: ln q = r e⁻ˣ = U/x there.
				A, S = -U/x, U+U/x
			}
			for _, c := range []struct {
				what      string
				got, want float64
			}{{"C/k", r.C, C}, {"U/kT", r.U, U}, {"ln q", r.LogQ, -A}} {
				// Near x = 200 the rounding of x alone moves exp(-x) by 200 × 2⁻⁵³.
				d := relDiff(c.got, c.want) / (1 + x)
				worst = math.Max(worst, d)
				if d > 1e-15 {
					t.Errorf("%s: r = %g, x = %g: %s = %.17g, want %.17g (%.1e of 1+x)", name, ratio, x, c.what, c.got, c.want, d)
				}
			}
			if relDiff(r.Entropy(), S) > 1e-15*(1+x)+1e-14 {
				t.Errorf("%s: r = %g, x = %g: S/k = %.17g, want %.17g", name, ratio, x, r.Entropy(), S)
			}
		}
	}
	t.Logf("accuracy: Levels, Schottky | ln q, U, C of two levels, x = E/kT from 1e-4 to 200 | relative, over 1+x | %.3g | 1e-15 | 20 digits (mpmath)", worst)
}

// Maximum of the Schottky heat capacity: mpmath, 12 digits.
func TestSchottkyMaximum(t *testing.T) {
	for _, test := range []struct{ ratio, T, C float64 }{
		{0.5, 0.44887, 0.24078}, {1, 0.41678, 0.43923}, {2, 0.37670, 0.76180}, {3, 0.35150, 1.02349},
	} {
		s := Schottky{unit.KelvinEnergy, test.ratio}
		at := s.Reduced(unit.Temperature(test.T)).C
		if math.Abs(at-test.C) > 5e-6 {
			t.Errorf("ratio %g: C/k = %.6f, want %.5f", test.ratio, at, test.C)
		}
		if s.Reduced(unit.Temperature(test.T*1.01)).C > at || s.Reduced(unit.Temperature(test.T*0.99)).C > at {
			t.Errorf("ratio %g: no maximum at T = %g", test.ratio, test.T)
		}
	}
	got := Schottky{unit.KelvinEnergy * 2.39935728052, 1}.Reduced(1 * unit.K).C
	if relDiff(got, 0.439228839890646) > 1e-14 {
		t.Errorf("C/k = %.15g, want 0.439228839890646", got)
	}
}

func TestLevelsExtremeTemperatures(t *testing.T) {
	l := mustLevels(t, []unit.Energy{5 * unit.EV, 0, 1 * unit.PerCm}, []float64{2, 4, 6})
	for e := -6; e <= 8; e++ {
		r := l.Reduced(unit.Temperature(math.Pow(10, float64(e))))
		if !(r.C >= 0) || !(r.U >= 0) || math.IsInf(r.LogQ, 0) || r.Entropy() < math.Log(4) || r.Entropy() > math.Log(12) {
			t.Errorf("T = 1e%d K: %+v", e, r)
		}
	}
	if got := l.Reduced(1e-6 * unit.K).Entropy(); got != math.Log(4) {
		t.Errorf("S/k at 1e-6 K = %.17g, want ln 4", got)
	}
	if got := l.Reduced(1e8 * unit.K).Entropy(); relDiff(got, math.Log(12)) > 1e-6 {
		t.Errorf("S/k at 1e8 K = %.17g, want ln 12", got)
	}
	if l.LowTemperatureEntropy() != EntropyOverK(math.Log(4)) || l.HighTemperatureEntropy() != EntropyOverK(math.Log(12)) {
		t.Errorf("limits %v, %v", l.LowTemperatureEntropy(), l.HighTemperatureEntropy())
	}
}

func TestLevelsDomain(t *testing.T) {
	for name, err := range map[string]error{
		"empty":     second(NewLevels(nil, nil)),
		"lengths":   second(NewLevels([]unit.Energy{0, 1}, []float64{1})),
		"zero g":    second(NewLevels([]unit.Energy{0, 1}, []float64{1, 0})),
		"nan g":     second(NewLevels([]unit.Energy{0}, []float64{math.NaN()})),
		"inf E":     second(NewLevels([]unit.Energy{unit.Energy(math.Inf(1))}, nil)),
		"nan E":     second(NewLevels([]unit.Energy{unit.Energy(math.NaN())}, nil)),
		"negativeg": second(NewLevels([]unit.Energy{0}, []float64{-1})),
	} {
		if !errors.Is(err, ErrDomain) {
			t.Errorf("%s: error %v", name, err)
		}
	}
	l := mustLevels(t, []unit.Energy{0, unit.PerCm}, []float64{1, 1.5})
	if w := l.Warnings(100 * unit.K); len(w) != 1 {
		t.Errorf("a degeneracy of 1.5 gives warnings %q", w)
	}
	for _, T := range []unit.Temperature{0, -1, unit.Temperature(math.NaN()), unit.Temperature(math.Inf(1))} {
		err := panicOf(func() { l.Reduced(T) })
		var d *DomainError
		if !errors.As(err, &d) || d.Arg != "T" {
			t.Errorf("Reduced(%v): panic %v", T, err)
		}
	}
}

func second(_ *Levels, err error) error { return err }

// panicOf returns the error that f panics with.
func panicOf(f func()) (err error) {
	defer func() {
		if e, ok := recover().(error); ok {
			err = e
		}
	}()
	f()
	return nil
}

// A long list at many temperatures through the moment table equals the direct
// sum, which is checked against known values elsewhere.
func TestLevelsTable(t *testing.T) {
	rnd := rand.New(rand.NewPCG(1, 2))
	const n = 40000
	e, g := make([]unit.Energy, n), make([]float64, n)
	for i := range e {
		e[i] = unit.Energy(rnd.ExpFloat64()*2000+10) * unit.KelvinEnergy
		g[i] = float64(1 + rnd.IntN(20))
	}
	e[n/2] = 0
	l := mustLevels(t, e, g)
	ts := make([]unit.Temperature, 100)
	for i := range ts {
		ts[i] = unit.Temperature(3000 * math.Pow(0.94, float64(i))) // 3000 K down to 6.6 K
	}
	if bins := l.tableBins(ts[99], ts[65]); bins == 0 {
		t.Fatal("the table is not used here")
	}
	worst := 0.0
	for i, r := range l.ReducedAt(ts) {
		d := l.Reduced(ts[i])
		for _, x := range []float64{(r.LogQ - d.LogQ) / math.Max(1, d.LogQ), (r.U - d.U) / math.Max(d.U, 1e-3), (r.C - d.C) / math.Max(d.C, 1e-3)} {
			worst = math.Max(worst, math.Abs(x))
		}
	}
	t.Logf("accuracy: Levels.ReducedAt | 40000 levels at 100 temperatures | relative | %.3g | 5e-14 | the direct sum", worst)
	if worst > 5e-14 {
		t.Errorf("table and direct sum differ by %.1e", worst)
	}
}

// Equally spaced levels have closed forms: the table is right, not only equal
// to the direct sum. N levels at spacing θ: ln q = ln(1-e^{-Nx}) - ln(1-e^{-x}).
func TestLevelsTableClosedForm(t *testing.T) {
	const n = 200000
	const theta = 0.05 // K; the top is at 10000 K
	e := make([]unit.Energy, n)
	for i := range e {
		e[(i*7919)%n] = unit.Energy(float64(i)*theta) * unit.KelvinEnergy // unsorted: 7919 is prime to n
	}
	l := mustLevels(t, e, nil)
	ts := make([]unit.Temperature, 40)
	for i := range ts {
		ts[i] = unit.Temperature(20 + 5*i)
	}
	largest := 0.0
	for i, r := range l.ReducedAt(ts) {
		x := theta / float64(ts[i])
		lnq := -math.Log(-math.Expm1(-x))
		U := x / math.Expm1(x)
		C := x * x * math.Exp(x) / (math.Expm1(x) * math.Expm1(x))
		largest = max(largest, relDiff(r.LogQ, lnq), relDiff(r.U, U), relDiff(r.C, C))
		if relDiff(r.LogQ, lnq) > 2e-14 || relDiff(r.U, U) > 2e-14 || relDiff(r.C, C) > 2e-14 {
			t.Errorf("T = %v: %+v, want %.16g %.16g %.16g", ts[i], r, lnq, U, C)
		}
	}
	t.Logf("accuracy: Levels.ReducedAt | 200000 equally spaced levels at 40 temperatures | relative | %.3g | 2e-14 | closed forms", largest)
}

// Shifting all energies leaves the functions: exactly where the shift is
// representable, within 1e-11 for an offset of 1e5 kT.
func TestLevelsShift(t *testing.T) {
	rnd := rand.New(rand.NewPCG(3, 4))
	const T = 300
	e, f, h := make([]unit.Energy, 5000), make([]unit.Energy, 5000), make([]unit.Energy, 5000)
	kt := (unit.Temperature(T)).AsEnergy()
	for i := range e {
		e[i] = unit.Energy(math.Round(rnd.Float64()*5*(1<<20))/(1<<20)) * (1 << 10) // J, representable also after the shift
		f[i] = e[i] + (1 << 20)
	}
	a, b := mustLevels(t, e, nil), mustLevels(t, f, nil)
	for _, beta := range []float64{1e-3, 1e-2} {
		x, errX := a.AtBeta(unit.InverseEnergy(beta))
		y, errY := b.AtBeta(unit.InverseEnergy(beta))
		if errX != nil || errY != nil {
			t.Fatal(errX, errY)
		}
		if x.LogZ != y.LogZ || x.HeatC != y.HeatC || x.Entropy != y.Entropy || math.Abs(float64(y.Energy-x.Energy-(1<<20))) > 1e-9 {
			t.Errorf("beta = %g: %+v and %+v", beta, x, y)
		}
	}
	for i := range e {
		e[i] = unit.Energy(rnd.Float64()*5) * kt
		h[i] = e[i] + 1e5*kt
	}
	r, s := mustLevels(t, e, nil).Reduced(T*unit.K), mustLevels(t, h, nil).Reduced(T*unit.K)
	for _, d := range []float64{relDiff(s.LogQ, r.LogQ), relDiff(s.U, r.U), relDiff(s.C, r.C)} {
		if d > 1e-11 {
			t.Errorf("an offset of 1e5 kT moves the functions by %.1e: %+v, %+v", d, r, s)
		}
	}
}

// Properties of any finite list, and of two independent systems.
func TestLevelsProperties(t *testing.T) {
	rnd := rand.New(rand.NewPCG(5, 6))
	for range 200 {
		n, m := 1+rnd.IntN(20), 1+rnd.IntN(20)
		a, b := randomLevels(t, rnd, n), randomLevels(t, rnd, m)
		var e []unit.Energy
		var g []float64
		for i := range n {
			for j := range m {
				ei, gi := a.Level(i)
				ej, gj := b.Level(j)
				e, g = append(e, ei+ej), append(g, gi*gj)
			}
		}
		T := unit.Temperature(math.Pow(10, 4*rnd.Float64()-1))
		both := mustLevels(t, e, g).Reduced(T)
		sum := Sum{a, b}.Reduced(T)
		for _, d := range [][2]float64{{both.LogQ, sum.LogQ}, {both.U, sum.U}, {both.C, sum.C}} {
			if math.Abs(d[0]-d[1]) > 1e-12*math.Max(1, math.Abs(d[1])) {
				t.Fatalf("two independent systems: %+v, sum %+v", both, sum)
			}
		}
		s := both.Entropy()
		total := 0.0
		for _, x := range g {
			total += x
		}
		if both.C < 0 || s < 0 || s > math.Log(total)*(1+1e-14) {
			t.Fatalf("C = %g, S = %g, ln Σg = %g", both.C, s, math.Log(total))
		}
		p := mustLevels(t, e, g).Populations(T)
		gibbs, err := GibbsEntropyOfLevels(p, g)
		if err != nil || math.Abs(float64(gibbs)-s) > 1e-12*math.Max(1, s) {
			t.Fatalf("Gibbs entropy of the populations %v, %v; S/k = %g", gibbs, err, s)
		}
	}
}

func randomLevels(t testing.TB, rnd *rand.Rand, n int) *Levels {
	e, g := make([]unit.Energy, n), make([]float64, n)
	for i := range e {
		e[i] = unit.Energy(rnd.NormFloat64()*300) * unit.KelvinEnergy
		g[i] = float64(1 + rnd.IntN(9))
	}
	return mustLevels(t, e, g)
}

// A truncated oscillator: the tail estimate against the closed form e^{-Nx}.
func TestLevelsTail(t *testing.T) {
	const n = 30
	e := make([]unit.Energy, n)
	for i := range e {
		e[i] = unit.Energy(i) * 100 * unit.KelvinEnergy
	}
	l := mustLevels(t, e, nil)
	if l.Tail(500*unit.K) != 0 || l.Warnings(500*unit.K) != nil {
		t.Error("a complete list has a tail")
	}
	l.MarkTruncated()
	for _, T := range []unit.Temperature{150, 300, 500} {
		x := 100 / float64(T)
		want := math.Exp(-n * x)
		if got := l.Tail(T); got < want/1.5 || got > want*1.5 {
			t.Errorf("T = %v: tail %.3g, exact %.3g", T, got, want)
		}
	}
	if len(l.Warnings(500*unit.K)) != 1 || len(l.Warnings(150*unit.K)) != 0 {
		t.Errorf("warnings %q at 500 K, %q at 150 K", l.Warnings(500*unit.K), l.Warnings(150*unit.K))
	}
	if _, err := l.AtBeta(-1e20); !errors.Is(err, ErrUnbounded) {
		t.Errorf("negative temperature of a truncated list: %v", err)
	}
}

func BenchmarkLevels(b *testing.B) {
	const n = 10_000_000
	rnd := rand.New(rand.NewPCG(1, 2))
	e, g := make([]unit.Energy, n), make([]float64, n)
	for i := range e {
		e[i] = unit.Energy(rnd.Float64()*5000) * unit.KelvinEnergy
		g[i] = float64(1 + i%7)
	}
	l := mustLevels(b, e, g)
	ts := make([]unit.Temperature, 100)
	for i := range ts {
		ts[i] = unit.Temperature(100 + 7*i)
	}
	b.ResetTimer()
	for b.Loop() {
		l.ReducedAt(ts)
	}
}
