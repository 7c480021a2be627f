package lattice

import (
	"encoding/csv"
	"errors"
	"math"
	"os"
	"path/filepath"
	"strconv"
	"strings"
	"testing"

	"levelsum/statmech"
	"levelsum/statmech/unit"
)

// readReference returns the rows below the header of a file of testdata and
// fails if the file does not say where its digits came from.
func readReference(t testing.TB, name string) [][]string {
	t.Helper()
	text, err := os.ReadFile(filepath.Join("..", "..", "testdata", "mpmath", name))
	if err != nil {
		t.Fatal(err)
	}
	for _, want := range []string{"# source: ", "# how obtained: "} {
		if !strings.Contains(string(text), want) {
			t.Fatalf("%s does not state %q", name, want)
		}
	}
	r := csv.NewReader(strings.NewReader(string(text)))
	r.Comment = '#'
	rows, err := r.ReadAll()
	if err != nil || len(rows) < 2 {
		t.Fatalf("%s: %d rows, %v", name, len(rows), err)
	}
	return rows[1:]
}

func number(t testing.TB, s string) float64 {
	t.Helper()
	f, err := strconv.ParseFloat(s, 64)
	if err != nil {
		t.Fatal(err)
	}
	return f
}

// closeTo reports a value that departs from want by more than tol times the
// larger of |want| and floor.
func closeTo(t testing.TB, what string, got, want, tol, floor float64) float64 {
	t.Helper()
	d := math.Abs(got-want) / max(math.Abs(want), floor)
	if !(d <= tol) {
		t.Errorf("%s = %.17g, want %.17g (off by %.2g, allowed %.2g)", what, got, want, d, tol)
	}
	return d
}

var kelvin = 1 * unit.KelvinEnergy

// TestOnsagerAccuracy compares with Onsager's and Yang's formulas at 100 digits.
func TestOnsagerAccuracy(t *testing.T) {
	m := Onsager{J: kelvin}
	tc := 2 / math.Log1p(math.Sqrt2)
	var worst [5]float64
	for _, row := range readReference(t, "ising_onsager.csv") {
		T := number(t, row[0])
		K := 1 / T
		e, rise, c := onsagerEnergy(K)
		// K is rounded, and near Tc that moves C and m by the part of T-Tc.
		near := 2e-16 / math.Abs(T/tc-1)
		at := " at kT/J = " + row[0]
		small := 1e-15 * K // the rounding of K in e^(-8K), relative
		found := [5]float64{
			closeTo(t, "ln q"+at, onsagerLogQ(K), number(t, row[1]), 1e-15+8*small, 0),
			closeTo(t, "E/J + 2"+at, rise, number(t, row[2]), 1e-14+8*small, 0),
			closeTo(t, "E/J"+at, e, number(t, row[3]), 2e-15, 0),
			closeTo(t, "C/k"+at, c, number(t, row[4]), 1e-13+8*small+near, 0),
			closeTo(t, "m"+at, m.Magnetisation(unit.Temperature(T)), number(t, row[5]), 1e-15+near, 1),
		}
		if math.Abs(T/tc-1) > 1e-3 && T >= 0.5 {
			for i, d := range found {
				worst[i] = max(worst[i], d)
			}
		}
		r := m.Reduced(unit.Temperature(T))
		closeTo(t, "LogQ"+at, r.LogQ, number(t, row[1]), 4e-15+16*small, 0)
		closeTo(t, "U"+at, r.U, K*number(t, row[2]), 2e-14+16*small, 0)
		closeTo(t, "Energy"+at, m.Energy(unit.Temperature(T)).In(kelvin), number(t, row[3]), 4e-15, 0)
		closeTo(t, "HelmholtzEnergy"+at, m.HelmholtzEnergy(unit.Temperature(T)).In(kelvin), -2-T*number(t, row[1]), 1e-15, 0)
	}
	const where = "kT/J from 0.5 to 1e5, 0.1 % and more from Tc"
	for i, what := range []string{"ln q", "E/J + 2", "E/J", "C/k", "m"} {
		t.Logf("accuracy: Onsager, %s | %s | relative | %.3g | %s | 20 digits (mpmath)", what, where, worst[i], []string{"2e-14", "3e-14", "2e-15", "1.2e-13", "3e-13"}[i])
		if bound := [5]float64{2e-14, 3e-14, 2e-15, 1.2e-13, 3e-13}[i]; !(worst[i] <= bound) {
			t.Errorf("%s: %.2g, want at most %g", what, worst[i], bound)
		}
	}
}

// TestOnsagerCritical holds what is known at Tc: sinh(2J/kTc) = 1 and E = -√2 J.
func TestOnsagerCritical(t *testing.T) {
	m := Onsager{J: 3 * unit.KJPerMol}
	tc := m.CriticalTemperature()
	closeTo(t, "kTc/J", tc.AsEnergy().In(m.J), 2.269185314213022, 1e-15, 0) // the reference data of Kaufman's formula
	closeTo(t, "E(Tc)/J", m.Energy(tc).In(m.J), -math.Sqrt2, 1e-14, 0)
	if c := m.Reduced(tc).C; !(c > 15) {
		t.Errorf("C/k = %g at Tc, want a large number or +Inf", c)
	}
	_, _, c := onsagerEnergy(math.Asinh(1) / 2)
	if math.IsNaN(c) {
		t.Error("C is NaN at Tc")
	}
	if m.Magnetisation(tc*(1+1e-12)) != 0 || m.Magnetisation(tc*(1-1e-12)) < 0.03 {
		t.Error("the magnetisation does not begin at Tc")
	}
}

// TestOnsagerSeams: the series and the closed forms agree where they meet.
func TestOnsagerSeams(t *testing.T) {
	for _, seam := range []float64{-math.Log(seriesEnd) / 4, highEnd} {
		lo, hi := seam*(1-1e-15), seam*(1+1e-15)
		e1, r1, c1 := onsagerEnergy(lo)
		e2, r2, c2 := onsagerEnergy(hi)
		closeTo(t, "ln q", onsagerLogQ(lo), onsagerLogQ(hi), 4e-14, 0)
		closeTo(t, "E/J", e1, e2, 4e-15, 0)
		closeTo(t, "E/J + 2", r1, r2, 1e-13, 0)
		closeTo(t, "C/k", c1, c2, 1e-12, 0)
	}
}

// TestModes audits both as any mode: U and C against derivatives of ln q.
func TestModes(t *testing.T) {
	at := statmech.AuditOptions{From: 0.3 * unit.K, To: 60 * unit.K, Points: 40}
	for _, m := range []statmech.Mode{Onsager{J: kelvin}, Torus{kelvin, 6, 10}, Torus{kelvin, 32, 32}} {
		if r := statmech.Audit(m, at); !r.OK() {
			t.Errorf("%T: %v", m, r)
		}
	}
}

// TestTorusAccuracy compares with Kaufman's formula at high precision and with
// exact numbers of states.
func TestTorusAccuracy(t *testing.T) {
	var worst [3]float64
	for _, row := range readReference(t, "ising_finite_torus.csv") {
		L := int(number(t, row[0]))
		T := number(t, row[1])
		m := Torus{kelvin, L, L}
		N := float64(m.Spins())
		lnZ, slope, curvature := m.kaufman(1 / T)
		at := " of L = " + row[0] + " at kT/J = " + row[1]
		worst[0] = max(worst[0], closeTo(t, "ln Z"+at, lnZ+2*N/T, number(t, row[2]), 1e-15, 0))
		worst[1] = max(worst[1], closeTo(t, "E/NJ"+at, -2-slope/N, number(t, row[3]), 4e-15, 1))
		worst[2] = max(worst[2], closeTo(t, "C/Nk"+at, curvature/(T*T)/N, number(t, row[4]), 6e-14, 1)) // 5e-14 is half a digit of the reference
	}
	const where = "2 × 2 to 128 × 128, kT/J from 1 to 10"
	t.Logf("accuracy: Torus, ln Z | %s | relative | %.3g | 1e-15 | 20 digits (exact numbers of states, Kaufman's formula)", where, worst[0])
	t.Logf("accuracy: Torus, E/NJ | %s | absolute | %.3g | 4e-15 | 16 digits (the same)", where, worst[1])
	t.Logf("accuracy: Torus, C/Nk | %s | over max(1, C/Nk) | %.3g | 6e-14 | 14 digits (the same)", where, worst[2])
}

// TestTorusLimits: the ground states alone at low T, 2ᴺ states at high T, the
// infinite lattice for a large one, and the same by rows as by columns.
func TestTorusLimits(t *testing.T) {
	m := Torus{kelvin, 8, 14}
	cold, hot := m.Reduced(0.1*unit.K), m.Reduced(1e9*unit.K)
	closeTo(t, "ln q at low T", cold.LogQ, math.Ln2, 1e-15, 0)
	closeTo(t, "ln q at high T", hot.LogQ, 112*math.Ln2, 1e-8, 0)
	if math.Abs(cold.U) > 1e-12 || math.Abs(hot.C) > 1e-12 {
		t.Errorf("U = %g at low T, C = %g at high T, want 0", cold.U, hot.C)
	}
	turned := Torus{kelvin, 14, 8}
	for _, T := range []unit.Temperature{1, 2, 2.3, 3, 7} {
		a, b := m.Reduced(T), turned.Reduced(T)
		closeTo(t, "ln q turned", a.LogQ, b.LogQ, 1e-14, 0)
		closeTo(t, "U turned", a.U, b.U, 1e-12, 0)
		closeTo(t, "C turned", a.C, b.C, 1e-11, 0)
		large, infinite := Torus{kelvin, 400, 400}, Onsager{kelvin}
		if math.Abs(float64(T)-2.27) > 0.2 { // where correlations are short
			closeTo(t, "E of 400 × 400", large.Energy(T).In(kelvin), infinite.Energy(T).In(kelvin), 1e-12, 0)
			closeTo(t, "C of 400 × 400", large.HeatCapacity(T), infinite.Reduced(T).C, 1e-9, 0)
		}
	}
}

// TestLevels compares the enumeration of all states with exact numbers of
// states, and its functions with Kaufman's formula.
func TestLevels(t *testing.T) {
	want := map[int]map[float64]float64{}
	for _, row := range readReference(t, "ising_density_of_states.csv") {
		L := int(number(t, row[0]))
		if want[L] == nil {
			want[L] = map[float64]float64{}
		}
		want[L][number(t, row[1])] = number(t, row[2])
	}
	for _, L := range []int{2, 4, 5} {
		g, err := Torus{kelvin, L, L}.states("test")
		if err != nil {
			t.Fatal(err)
		}
		found := 0
		for i, n := range g {
			if n == 0 {
				continue
			}
			found++
			if e := float64(2*i - 2*L*L); want[L][e] != n {
				t.Errorf("%d × %d: %g states of E = %g J, want %g", L, L, n, e, want[L][e])
			}
		}
		if found == 0 || found != len(want[L]) {
			t.Errorf("%d × %d: %d levels, want %d", L, L, found, len(want[L]))
		}
	}
	for _, m := range []Torus{{kelvin, 2, 3}, {kelvin, 5, 3}, {kelvin, 4, 5}} {
		l, err := m.Levels()
		if err != nil {
			t.Fatal(err)
		}
		for _, T := range []unit.Temperature{0.8, 2.269185314213022, 5} {
			a, b := l.Reduced(T), m.Reduced(T)
			closeTo(t, "ln q", b.LogQ, a.LogQ, 1e-14, 1)
			closeTo(t, "U", b.U, a.U, 1e-12, 0)
			closeTo(t, "C", b.C, a.C, 1e-11, 0)
		}
	}
}

func TestDomain(t *testing.T) {
	panics := func(what string, f func()) {
		t.Helper()
		defer func() {
			if e, ok := recover().(error); !ok || !errors.Is(e, statmech.ErrDomain) {
				t.Errorf("%s: no domain error", what)
			}
		}()
		f()
	}
	for _, T := range []unit.Temperature{0, -1, unit.Temperature(math.NaN()), unit.Temperature(math.Inf(1))} {
		panics("Onsager at "+T.String(), func() { Onsager{J: kelvin}.Reduced(T) })
		panics("Torus at "+T.String(), func() { Torus{kelvin, 4, 4}.Energy(T) })
	}
	panics("J = 0", func() { Onsager{}.CriticalTemperature() })
	panics("one row", func() { Torus{kelvin, 1, 4}.Reduced(1) })
	panics("too large", func() { Torus{kelvin, 1 << 20, 1 << 20}.Reduced(1) })
	for _, m := range []Torus{{kelvin, 5, 6}, {kelvin, 1, 4}, {-kelvin, 4, 4}} {
		if l, err := m.Levels(); err == nil || l != nil {
			t.Errorf("Levels of %v: no error", m)
		}
	}
	for _, m := range []Torus{{kelvin, 5, 6}, {kelvin, 6, 5}, {0, 4, 4}, {kelvin, 0, 4}} {
		if s, err := NewSimulation(m, 1*unit.K, 1); !errors.Is(err, statmech.ErrDomain) || s != nil {
			t.Errorf("simulation of %v: %v", m, err)
		}
	}
	if _, err := NewSimulation(Torus{kelvin, 4, 4}, 0, 1); !errors.Is(err, statmech.ErrDomain) {
		t.Errorf("simulation at 0 K: %v", err)
	}
}
