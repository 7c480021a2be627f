package gas

import (
	"encoding/csv"
	"errors"
	"math"
	"os"
	"strconv"
	"strings"
	"testing"

	"levelsum/statmech"
	"levelsum/statmech/unit"
)

// table reads a reference table: a row is a map from the head's names.
func table(t testing.TB, name string) []map[string]string {
	t.Helper()
	f, err := os.Open("testdata/" + name)
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	r := csv.NewReader(f)
	r.Comment = '#'
	r.LazyQuotes = true
	r.FieldsPerRecord = -1
	rows, err := r.ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	var out []map[string]string
	for _, row := range rows[1:] {
		m := map[string]string{}
		for i, s := range row {
			if i < len(rows[0]) {
				m[rows[0][i]] = s
			}
		}
		out = append(out, m)
	}
	return out
}

func num(t testing.TB, s string) float64 {
	t.Helper()
	x, err := strconv.ParseFloat(s, 64)
	if err != nil {
		t.Fatal(err)
	}
	return x
}

func rel(got, want float64) float64 {
	if want == 0 {
		return math.Abs(got)
	}
	return math.Abs(got-want) / math.Abs(want)
}

func top(t testing.TB) func(*Top, error) *Top {
	return func(x *Top, err error) *Top {
		t.Helper()
		if err != nil {
			t.Fatal(err)
		}
		return x
	}
}

func TestLinearRotorAccuracy(t *testing.T) {
	largest := 0.0
	const theta = 100.0
	B := unit.Energy(theta) * unit.KelvinEnergy
	h2 := LinearRotor{B: B, Spin: &SpinWeights{Weights: []float64{1, 3}, Total: 4}}
	d2 := LinearRotor{B: B, Spin: &SpinWeights{Weights: []float64{6, 3}, Total: 9}}
	for _, row := range table(t, "computed/rigid_rotor_sums.csv") {
		x := num(t, row["theta_rot/T"])
		T := unit.Temperature(theta / x)
		v := func(name string) float64 { return num(t, row[name]) }
		all := LinearRotor{B: B, Symmetry: 1}.Reduced(T)
		even := LinearRotor{B: B, Spin: &SpinWeights{Weights: []float64{1, 0}, Total: 1}}.Reduced(T)
		odd := LinearRotor{B: B, Spin: &SpinWeights{Weights: []float64{0, 1}, Total: 1}}
		o := odd.Reduced(T)
		para, _ := h2.Fractions(T)
		ortho, _ := d2.Fractions(T)
		for _, c := range []struct {
			what      string
			got, want float64
		}{
			{"q", math.Exp(all.LogQ), v("q_all")}, {"U/RT", all.U, v("U/RT")}, {"C/R", all.C, v("C/R")},
			{"q even", math.Exp(even.LogQ), v("q_even")}, {"C even", even.C, v("C/R even")},
			{"q odd", math.Exp(o.LogQ - odd.ZeroPointEnergy().OverKT(T)), v("q_odd")}, {"C odd", o.C, v("C/R odd")},
			{"para H2", para, v("H2 equilibrium para fraction")}, {"C H2", h2.Reduced(T).C, v("C/R equilibrium H2")},
			{"ortho D2", ortho, v("D2 equilibrium ortho fraction")}, {"C D2", d2.Reduced(T).C, v("C/R equilibrium D2")},
			{"C normal H2", (even.C + 3*o.C) / 4, v("C/R normal H2 (1:3)")},
		} {
			largest = max(largest, rel(c.got, c.want)/max(1, x))
			if rel(c.got, c.want) > 1e-12*math.Max(1, x) {
				t.Errorf("θ/T = %g: %s = %.15g, want %.15g", x, c.what, c.got, c.want)
			}
		}
	}
	t.Logf("accuracy: LinearRotor | q, U, C, spin isomers for B/kT from 1e-3 to 6 | relative, over max(1, B/kT) | %.3g | 1e-12 | 16 digits (mpmath)", largest)
}

// Hydrogen from B0 and D0 against measured term values and Woolley's table.
func TestHydrogen(t *testing.T) {
	h2 := LinearRotor{B: 59.33 * unit.PerCm, D: 0.0457 * unit.PerCm, Spin: &SpinWeights{Weights: []float64{1, 3}, Total: 4}}
	for T, want := range map[unit.Temperature]float64{77.35: 0.50334, 20: 0.99821} {
		if para, _ := h2.Fractions(T); math.Abs(para-want) > 1e-5 {
			t.Errorf("para fraction at %v = %.6f, want %.5f", T, para, want)
		}
	}
	for _, row := range table(t, "computed/hydrogen_ortho_para.csv") {
		T := unit.Temperature(num(t, row["T_K"]))
		if para, _ := h2.Fractions(T); math.Abs(100*para-num(t, row["equilibrium_para_percent_computed"])) > 0.03 {
			t.Errorf("para fraction at %v = %.4f %%, from term values %s", T, 100*para, row["equilibrium_para_percent_computed"])
		}
	}
	peak := h2.Reduced(49 * unit.K).C
	if math.Abs(peak-2.0690) > 1e-3 || h2.Reduced(47*unit.K).C > peak || h2.Reduced(51*unit.K).C > peak {
		t.Errorf("C_rot of equilibrium hydrogen at 49 K = %.4f k, want the maximum 2.0690", peak)
	}
	// The distortion series of H2 turns over; counting on would fold levels back.
	if J := h2.LastLevel(); J != 25 {
		t.Errorf("last level J = %d, want 25", J)
	}
}

// Water, ground-state constants: exact against classical.
func TestWaterRotor(t *testing.T) {
	A, B, C := 27.8806*unit.PerCm, 14.5216*unit.PerCm, 9.2778*unit.PerCm
	w := top(t)(NewAsymmetricTop(C, A, B, 2, nil))
	if q := math.Exp(w.Reduced(298.15 * unit.K).LogQ); math.Abs(q-43.7872) > 5e-5 {
		t.Errorf("q(298.15 K) = %.5f, want 43.7872", q)
	}
	d := w.ClassicalDifference(298.15 * unit.K)
	if math.Abs(math.Exp(d.LogQ)-1.01513) > 5e-6 || math.Abs(d.Entropy()*unit.GasConstant+0.00085) > 5e-6 {
		t.Errorf("exact/classical at 298.15 K: %.6f, ΔS %.6f", math.Exp(d.LogQ), d.Entropy()*unit.GasConstant)
	}
	d = w.ClassicalDifference(10 * unit.K)
	if math.Abs(math.Exp(d.LogQ)-2.11) > 0.005 || math.Abs(d.Entropy()*unit.GasConstant+2.88) > 0.005 {
		t.Errorf("exact/classical at 10 K: %.4f, ΔS %.4f", math.Exp(d.LogQ), d.Entropy()*unit.GasConstant)
	}
	para := top(t)(NewAsymmetricTop(A, B, C, 0, &SpinWeights{Weights: []float64{1, 0, 0, 1}, Total: 1}))
	ortho := top(t)(NewAsymmetricTop(A, B, C, 0, &SpinWeights{Weights: []float64{0, 3, 3, 0}, Total: 1}))
	for T, want := range map[unit.Temperature]float64{50: 2.95666, 10: 0.309, 298: 3} {
		r := math.Exp(ortho.Reduced(T).LogQ - para.Reduced(T).LogQ - ortho.ZeroPointEnergy().OverKT(T))
		if math.Abs(r-want) > map[bool]float64{true: 5e-6, false: 5e-4}[want == 2.95666] {
			t.Errorf("ortho/para at %v = %.6f, want %g", T, r, want)
		}
	}
	if E := ortho.ZeroPointEnergy().In(unit.PerCm); math.Abs(E-(14.5216+9.2778)) > 1e-9 {
		t.Errorf("lowest ortho level at %.6f cm-1, want 1(01) = B + C", E)
	}
}

// Eigenvalues against the closed forms of J = 1 and 2 (Townes and Schawlow,
// Microwave Spectroscopy, appendix III) and the trace for large J.
func TestAsymmetricLevels(t *testing.T) {
	a, b, c := 27.88, 14.52, 9.28
	w := 2 * math.Sqrt((b-c)*(b-c)+(a-c)*(a-b))
	for J, want := range map[int][]float64{
		0: {0}, 1: {b + c, a + c, a + b},
		2: {2*(a+b+c) - w, a + b + 4*c, a + 4*b + c, 4*a + b + c, 2*(a+b+c) + w},
	} {
		for i, E := range asymmetricLevels(a, b, c, J) {
			if rel(E, want[i]) > 4e-15 {
				t.Errorf("J = %d, level %d: %.16g, want %.16g", J, i, E, want[i])
			}
		}
	}
	for _, J := range []int{7, 60} {
		sum := 0.0
		for _, E := range asymmetricLevels(a, b, c, J) {
			sum += E
		}
		if want := (a + b + c) * float64(J*(J+1)*(2*J+1)) / 3; rel(sum, want) > 1e-14 {
			t.Errorf("J = %d: sum of levels %.16g, want (A+B+C) J(J+1)(2J+1)/3 = %.16g", J, sum, want)
		}
	}
}

// The three kinds of top agree where they describe the same molecule, and with
// the known series of the spherical top, q = √π (T/B)^{3/2} e^{B/4T}.
func TestTopAccuracy(t *testing.T) {
	B := unit.KelvinEnergy * 5
	for _, T := range []unit.Temperature{1, 5, 30, 400} {
		s := top(t)(NewSphericalTop(B, 1, nil)).Reduced(T)
		y := top(t)(NewSymmetricTop(B, B, 1, nil)).Reduced(T)
		a := top(t)(NewAsymmetricTop(B, B, B, 1, nil)).Reduced(T)
		for _, d := range []float64{rel(y.LogQ, s.LogQ), rel(a.LogQ, s.LogQ), rel(y.C, s.C), rel(a.C, s.C), rel(a.U, s.U)} {
			if d > 1e-12 {
				t.Errorf("T = %v: spherical %+v, symmetric %+v, asymmetric %+v", T, s, y, a)
			}
		}
		if T >= 30 {
			x := 5 / float64(T)
			if want := math.Log(math.Sqrt(math.Pi)/math.Pow(x, 1.5)) + x/4; rel(s.LogQ, want) > 1e-12 {
				t.Errorf("T = %v: ln q = %.15g, want %.15g", T, s.LogQ, want)
			}
		}
		p := top(t)(NewSymmetricTop(4*B, B, 1, nil)).Reduced(T)
		q := top(t)(NewAsymmetricTop(B, 4*B, B, 1, nil)).Reduced(T)
		o := top(t)(NewSymmetricTop(B/2, B, 1, nil)).Reduced(T)
		r := top(t)(NewAsymmetricTop(B, B/2, B, 1, nil)).Reduced(T)
		if rel(q.LogQ, p.LogQ) > 1e-12 || rel(q.C, p.C) > 1e-12 || rel(r.LogQ, o.LogQ) > 1e-12 || rel(r.C, o.C) > 1e-12 {
			t.Errorf("T = %v: prolate %+v, %+v; oblate %+v, %+v", T, p, q, o, r)
		}
	}
}

// The continuation meets the sum: a top is made with a larger J limit and the
// two are compared above the reach of the smaller one.
func TestTopContinuation(t *testing.T) {
	all := 0.0
	defer func() {
		t.Logf("accuracy: Top, continuation above the levels | ln q, U, C of 7 tops where both meet | relative | %.3g | 1e-9 | the sum with twice as many J", all)
	}()
	for _, c := range [][3]float64{{27.8806, 14.5216, 9.2778}, {8, 0.43, 0.41}, {9.7, 9.7, 6.3}, {5.2, 0.44, 0.44}, {5.24, 5.24, 5.24}, {1, 0.7, 0.412}, {1, 0.55, 0.355}} {
		A, B, C := unit.Energy(c[0])*unit.PerCm, unit.Energy(c[1])*unit.PerCm, unit.Energy(c[2])*unit.PerCm
		small, large := top(t)(NewTop(A, B, C, 1, nil)), top(t)(NewTop(A, B, C, 1, nil))
		large.jMax *= 2
		large.reach *= 4
		worst := 0.0
		for _, f := range []float64{1.01, 1.5, 2.5, 3.9} {
			T := unit.Temperature(small.reach * f)
			x, y := small.Reduced(T), large.Reduced(T)
			worst = math.Max(worst, math.Max(math.Abs(x.LogQ-y.LogQ), math.Max(math.Abs(x.U-y.U), math.Abs(x.C-y.C))))
		}
		t.Logf("%v cm-1: reach %.4g K, J <= %d, largest departure %.1e", c, small.reach, small.jMax, worst)
		all = max(all, worst)
		if worst > 1e-9 {
			t.Errorf("%v cm-1: continuation departs by %.1e", c, worst)
		}
	}
}

// Up to the temperature that half the J suffice for, the other half adds
// nothing; below and above it the functions are those of all levels.
func TestTopNearLevels(t *testing.T) {
	for _, c := range [][3]float64{{27.8806, 14.5216, 9.2778}, {8, 0.43, 0.41}, {9.7, 9.7, 6.3}, {5.24, 5.24, 5.24}} {
		r := top(t)(NewTop(unit.Energy(c[0])*unit.PerCm, unit.Energy(c[1])*unit.PerCm, unit.Energy(c[2])*unit.PerCm, 1, nil))
		for _, f := range []float64{0.01, 0.1, 0.2499, 0.25, 0.2501, 1} {
			T := unit.Temperature(r.reach * f)
			x, y := r.Reduced(T), r.Levels().Reduced(T)
			worst := math.Max(math.Abs(x.LogQ-y.LogQ), math.Max(math.Abs(x.U-y.U), math.Abs(x.C-y.C)))
			if worst > 4e-15*math.Max(1, y.LogQ) {
				t.Errorf("%v cm-1 at %v: %v, all levels give %v", c, T, x, y)
			}
			if at := r.ReducedAt([]unit.Temperature{T})[0]; at != x {
				t.Errorf("%v cm-1 at %v: the slice form gives %v, not %v", c, T, at, x)
			}
		}
	}
}

// Spin weights at high temperature: CH4 tends to 16/12 of q without spin, NH3
// type tops to Total/σ, water to 4/2.
func TestSpinWeightLimits(t *testing.T) {
	T := 2000 * unit.K
	ch4 := top(t)(NewSphericalTop(5.24*unit.PerCm, 0, &SpinWeights{Weights: []float64{5, 2, 3}, Total: 16, Include: true}))
	one := top(t)(NewSphericalTop(5.24*unit.PerCm, 1, nil))
	if r := math.Exp(ch4.Reduced(T).LogQ - one.Reduced(T).LogQ); math.Abs(r-16.0/12) > 1e-9 {
		t.Errorf("CH4: %.12f, want 16/12", r)
	}
	twelve := top(t)(NewSphericalTop(5.24*unit.PerCm, 12, nil))
	excluded := top(t)(NewSphericalTop(5.24*unit.PerCm, 0, &SpinWeights{Weights: []float64{5, 2, 3}, Total: 16}))
	if a, b := twelve.Reduced(T), excluded.Reduced(T); math.Abs(a.LogQ-b.LogQ) > 1e-9 || math.Abs(a.C-b.C) > 1e-9 {
		t.Errorf("CH4 with σ = 12 %+v, with spin weights divided out %+v", a, b)
	}
	// The number of states is that of all J levels: n_A + 2n_E + 3n_F = 2J+1.
	for J := range 40 {
		s := &Top{spin: &SpinWeights{Weights: []float64{1, 2, 3}}}
		if w := s.sphericalWeight(J); w != float64(2*J+1) {
			t.Errorf("J = %d: %g states, want %d", J, w, 2*J+1)
		}
	}
}

func TestRotorRefuses(t *testing.T) {
	w := &SpinWeights{Weights: []float64{1, 3, 3, 1}, Total: 4}
	for name, err := range map[string]error{
		"both symmetry and weights": second(NewAsymmetricTop(3, 2, 1, 2, w)),
		"neither":                   second(NewAsymmetricTop(3, 2, 1, 0, nil)),
		"near linear":               second(NewAsymmetricTop(5000, 2, 1, 1, nil)),
		"negative constant":         second(NewAsymmetricTop(3, -2, 1, 1, nil)),
		"three weights":             second(NewAsymmetricTop(3, 2, 1, 0, &SpinWeights{Weights: []float64{1, 2, 3}, Total: 4})),
		"no total":                  second(NewAsymmetricTop(3, 2, 1, 0, &SpinWeights{Weights: []float64{1, 3, 3, 1}})),
		"linear, both":              LinearRotor{B: 1, Symmetry: 2, Spin: &SpinWeights{Weights: []float64{1, 3}, Total: 4}}.check(""),
		"linear, σ 3":               LinearRotor{B: 1, Symmetry: 3}.check(""),
	} {
		if !errors.Is(err, statmech.ErrDomain) {
			t.Errorf("%s: %v", name, err)
		}
	}
}

func second(_ *Top, err error) error { return err }

func TestRotorAudit(t *testing.T) {
	for name, m := range map[string]statmech.Mode{
		"linear": LinearRotor{B: 2 * unit.PerCm, Symmetry: 1},
		"H2":     LinearRotor{B: 59 * unit.PerCm, Spin: &SpinWeights{Weights: []float64{1, 3}, Total: 4}},
		"water":  top(t)(NewAsymmetricTop(27.88*unit.PerCm, 14.52*unit.PerCm, 9.28*unit.PerCm, 2, nil)),
	} {
		if r := statmech.Audit(m, statmech.AuditOptions{From: 5 * unit.K, To: 3000 * unit.K, Points: 12}); !r.OK() {
			t.Errorf("%s:\n%s", name, r)
		}
	}
}

func BenchmarkAsymmetricLevels(b *testing.B) {
	for b.Loop() {
		for J := 0; J <= 60; J++ {
			asymmetricLevels(27.88, 14.52, 9.28, J)
		}
	}
}

func contains(s, part string) bool { return strings.Contains(s, part) }

// Far above the constants: the expansion meets the sum, at kT/B = 1e6; what it has
// beyond ln kT/B there is below 1e-6.
func TestLinearRotorHot(t *testing.T) {
	for _, r := range []LinearRotor{{B: unit.KelvinEnergy, Symmetry: 2}, {B: unit.KelvinEnergy, Spin: &SpinWeights{Weights: []float64{0, 3}, Total: 4}}} {
		a, b := r.Reduced(0.999e6), r.expanded(1/0.999e6)
		if math.Abs(a.LogQ-b.LogQ) > 1e-12 || math.Abs(a.U-b.U) > 1e-12 || math.Abs(a.C-b.C) > 1e-12 {
			t.Errorf("sum %+v, expansion %+v", a, b)
		}
		if x := r.Reduced(1e15); rel(x.LogQ, b.LogQ+math.Log(1e15/0.999e6)) > 1e-7 {
			t.Errorf("at 1e15 K: %+v", x)
		}
	}
}
