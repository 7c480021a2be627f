package gas

import (
	"math"
	"testing"

	"levelsum/statmech"
	"levelsum/statmech/unit"
)

func TestOscillatorAccuracy(t *testing.T) {
	largest := 0.0
	for _, row := range table(t, "computed/einstein_oscillator_reduced.csv") {
		x := num(t, row["x=hv_over_kT"])
		r := Oscillator{Quantum: unit.Energy(x) * unit.KelvinEnergy * 100}.Reduced(100 * unit.K)
		A, S := num(t, row["A_minus_U0_over_RT"]), num(t, row["S_over_R"])
		if x >= 100 {
			// The table's 50 digits do not hold ln q = e⁻ˣ = U/x there.
			A, S = -r.U/x, r.U+r.U/x
		}
		tol := 1e-14 * math.Max(1, x) // of the rounding of x itself
		largest = max(largest, max(rel(r.C, num(t, row["Cv_over_R"])), rel(r.U, num(t, row["U_minus_U0_over_RT"])), rel(r.Entropy(), S), rel(-r.LogQ, A))/max(1, x))
		if rel(r.C, num(t, row["Cv_over_R"])) > tol || rel(r.U, num(t, row["U_minus_U0_over_RT"])) > tol ||
			rel(r.Entropy(), S) > tol || rel(-r.LogQ, A) > tol {
			t.Errorf("x = %g: %+v, want %v", x, r, row)
		}
	}
	t.Logf("accuracy: Oscillator | C, U, S, ln q for x = hν/kT from 1e-8 to 700 | relative, over max(1, x) | %.3g | 1e-14 | 50 digits (mpmath)", largest)
	if r := (Oscillator{Quantum: 800 * unit.KelvinEnergy}).Reduced(1 * unit.K); r.C != r.C || r.C < 0 {
		t.Errorf("x = 800: %+v", r)
	}
}

// Independent arithmetic from the published formulas: S(298.15 K) of one mode.
func TestLowFrequency(t *testing.T) {
	T := 298.15 * unit.K
	for _, row := range []struct{ cm, harmonic, interpolated float64 }{
		{10, 33.518, 21.507}, {20, 27.757, 18.645}, {50, 20.156, 15.138}, {100, 14.453, 13.198},
	} {
		s := SoftOscillator{Quantum: unit.Energy(row.cm) * unit.PerCm, Treatment: EntropyInterpolation}
		if got := s.Reduced(T).Entropy() * unit.GasConstant; math.Abs(got-row.interpolated) > 6e-4 {
			t.Errorf("%g cm-1: interpolated S = %.4f, want %.3f", row.cm, got, row.interpolated)
		}
		if got := s.Harmonic(T).Entropy() * unit.GasConstant; math.Abs(got-row.harmonic) > 6e-4 {
			t.Errorf("%g cm-1: harmonic S = %.4f, want %.3f", row.cm, got, row.harmonic)
		}
		s.Treatment = RaisedCutoff
		if got := s.Reduced(T).Entropy() * unit.GasConstant; math.Abs(got-14.453) > 6e-4 {
			t.Errorf("%g cm-1 raised to 100: S = %.4f, want 14.453", row.cm, got)
		}
	}
	// T dS/dT = 4.19 but C = 8.30 J/(mol K) at 30 cm-1: the warning says so.
	s := SoftOscillator{Quantum: 30 * unit.PerCm, Treatment: EntropyInterpolation}
	if w := s.Warnings(T); len(w) != 1 || !contains(w[0], "4.19") || !contains(w[0], "8.3 ") {
		t.Errorf("warnings %q", w)
	}
	// The consistent variant keeps the identities.
	s.Treatment = ConsistentInterpolation
	if r := statmech.Audit(s, statmech.AuditOptions{}); !r.OK() || s.Warnings(T) != nil {
		t.Errorf("consistent interpolation:\n%s", r)
	}
	s.Treatment = EntropyInterpolation
	if r := statmech.Audit(s, statmech.AuditOptions{}); r.OK() {
		t.Error("the audit does not see that only the entropy was changed")
	}
}

// A Morse oscillator as a one-mode anharmonic sum.
func TestAnharmonicMorse(t *testing.T) {
	for _, row := range table(t, "computed/morse_oscillator_sums.csv") {
		we, x := num(t, row["we_cm-1"]), num(t, row["wexe_cm-1"])
		T := unit.Temperature(num(t, row["T_K"]))
		a := Anharmonic{Omega: []unit.Energy{unit.Energy(we) * unit.PerCm}, X: [][]unit.Energy{{unit.Energy(-x) * unit.PerCm}}}
		l, err := a.Levels(unit.Energy(math.Inf(1)))
		if err != nil {
			t.Fatal(err)
		}
		r := l.Reduced(T)
		if rel(math.Exp(r.LogQ), num(t, row["q (zero at v=0)"])) > 1e-10 || rel(r.U, num(t, row["U/kT"])) > 1e-9 || rel(r.C, num(t, row["C/k"])) > 1e-9 {
			t.Errorf("ω = %g, T = %v: q %.12g, %+v; want %v", we, T, math.Exp(r.LogQ), r, row)
		}
		if got, want := a.Fundamental(0).In(unit.PerCm), we-2*x; rel(got, want) > 1e-12 {
			t.Errorf("fundamental %g, want ω - 2ωx = %g", got, want)
		}
	}
	// Without anharmonicity it is the product of oscillators; d = 2 counts twice.
	a := Anharmonic{Omega: []unit.Energy{600 * unit.PerCm, 1300 * unit.PerCm}, Degeneracy: []int{2, 1}}
	l, err := a.Levels(40000 * unit.PerCm)
	if err != nil {
		t.Fatal(err)
	}
	T := 700 * unit.K
	want := (Oscillator{Quantum: 600 * unit.PerCm}).Reduced(T).Scale(2).Add(Oscillator{Quantum: 1300 * unit.PerCm}.Reduced(T))
	if got := l.Reduced(T); rel(got.LogQ, want.LogQ) > 1e-12 || rel(got.C, want.C) > 1e-12 {
		t.Errorf("harmonic limit %+v, want %+v", got, want)
	}
}
