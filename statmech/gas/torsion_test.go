package gas

import (
	"errors"
	"math"
	"strings"
	"testing"

	"levelsum/statmech"
	"levelsum/statmech/unit"
)

func newTorsion(t testing.TB, F unit.Energy, V Fourier, sigma int, m TorsionMethod) *Torsion {
	t.Helper()
	x, err := NewTorsion(F, V, sigma, m)
	if err != nil {
		t.Fatal(err)
	}
	return x
}

func TestTorsionLevels(t *testing.T) {
	largest := 0.0
	for _, row := range table(t, "computed/torsional_levels.csv") {
		n := int(num(t, row["n"]))
		F, V := unit.Energy(num(t, row["B_cm-1"]))*unit.PerCm, unit.Energy(num(t, row["V_cm-1"]))*unit.PerCm
		slack := 0.0
		if strings.HasPrefix(row["case"], "ethane") {
			// B and V are printed with half digits 5e-7 and 5e-5; E goes about as √(BV).
			slack = 5e-7/(2*F.In(unit.PerCm)) + 5e-5/(2*V.In(unit.PerCm))
		}
		x := newTorsion(t, F, Barrier(V, n), n, Diagonalised)
		got := x.Levels(300 * unit.K)[int(num(t, row["index"]))].In(unit.PerCm)
		if slack == 0 {
			largest = max(largest, math.Abs(got-num(t, row["E_cm-1_above_minimum"])))
		}
		if want := num(t, row["E_cm-1_above_minimum"]); math.Abs(got-want) > 2e-8+slack*want {
			t.Errorf("%s, level %s: %.9f, want %.9f cm-1", row["case"], row["index"], got, want)
		}
	}
	t.Logf("accuracy: Torsion, levels | testdata/computed/torsional_levels.csv | cm⁻¹ | %.3g | 2e-8 | independent diagonalisation", largest)
	// F = 10.70, V3 = 1013 cm⁻¹, independent diagonalisation.
	x := newTorsion(t, 10.70*unit.PerCm, Barrier(1013*unit.PerCm, 3), 3, Diagonalised)
	for i, want := range []float64{149.87917, 149.88498, 149.88498, 435.66483} {
		if got := x.Levels(300 * unit.K)[i].In(unit.PerCm); math.Abs(got-want) > 6e-6 {
			t.Errorf("level %d: %.6f, want %.5f cm-1", i, got, want)
		}
	}
	r := x.Reduced(298.15 * unit.K)
	if S, C := r.Entropy()*unit.GasConstant, r.C*unit.GasConstant; math.Abs(S-6.98550) > 1e-5 || math.Abs(C-8.37789) > 1e-5 {
		t.Errorf("S = %.6f, C = %.6f; want 6.98550, 8.37789", S, C)
	}
	free := newTorsion(t, 10.70*unit.PerCm, Fourier{}, 3, Diagonalised).Reduced(298.15 * unit.K)
	if S := free.Entropy() * unit.GasConstant; math.Abs(S-12.10197) > 2e-5 {
		t.Errorf("free rotor S = %.6f, want 12.10197", S)
	}
	h := Oscillator{Quantum: x.HarmonicQuantum()}.Reduced(298.15 * unit.K)
	if S := h.Entropy() * unit.GasConstant; math.Abs(S-5.64816) > 1e-5 {
		t.Errorf("harmonic S = %.6f, want 5.64816", S)
	}
}

func TestHinderedRotorTable(t *testing.T) {
	largest := 0.0
	const T = 300.0
	kt := (T * unit.K).AsEnergy()
	for _, row := range table(t, "computed/hindered_rotor.csv") {
		v := func(name string) float64 { return num(t, row[name]) }
		n := int(v("n"))
		qf := 1 / v("1/Qf (Qf=sqrt(pi kT/B)/n)")
		F := unit.Energy(math.Pi/float64(n*n)/(qf*qf)) * kt
		V := Barrier(unit.Energy(v("V/kT"))*kt, n)
		d := newTorsion(t, F, V, n, Diagonalised).Reduced(T * unit.K)
		c := newTorsion(t, F, V, n, ClassicalTorsion).Reduced(T * unit.K)
		p := newTorsion(t, F, V, n, PitzerGwinn).Reduced(T * unit.K)
		for _, x := range []struct {
			what      string
			got, want float64
		}{
			{"C quantum", d.C, v("C/k quantum")}, {"S quantum", d.Entropy(), v("S/k quantum")}, {"U quantum", d.U, v("(U-E0)/kT")},
			{"C classical", c.C, v("C/k classical")}, {"S classical", c.Entropy(), v("S/k classical")}, {"U classical", c.U, v("U/kT classical")},
			{"C PG", p.C, v("C/k PG")}, {"S PG", p.Entropy(), v("S/k PG")},
		} {
			largest = max(largest, math.Abs(x.got-x.want)/max(1, math.Abs(x.want)))
			if math.Abs(x.got-x.want) > 1e-8*math.Max(1, math.Abs(x.want)) {
				t.Errorf("n = %d, V/kT = %g, Qf = %.4g: %s = %.10g, want %.9g", n, v("V/kT"), qf, x.what, x.got, x.want)
			}
		}
	}
	t.Logf("accuracy: Torsion, all methods | C, S, U of testdata/computed/hindered_rotor.csv | of max(1, \\|value\\|) | %.3g | 1e-8 | independent diagonalisation and quadrature", largest)
}

// A potential turned by an angle has sine terms and the same levels; a
// three-fold one declared without symmetry too. Both go through other blocks.
func TestTorsionInvariance(t *testing.T) {
	F := 5 * unit.PerCm
	even := Fourier{Cos: []unit.Energy{400 * unit.PerCm, -120 * unit.PerCm, 60 * unit.PerCm, -300 * unit.PerCm}}
	turned := Fourier{Cos: make([]unit.Energy, 4), Sin: make([]unit.Energy, 4)}
	for k, a := range even.Cos {
		s, c := math.Sincos(0.7 * float64(k))
		turned.Cos[k], turned.Sin[k] = a*unit.Energy(c), a*unit.Energy(s)
	}
	a := newTorsion(t, F, even, 1, Diagonalised).Levels(300 * unit.K)
	b := newTorsion(t, F, turned, 1, Diagonalised).Levels(300 * unit.K)
	for i := range 60 {
		if d := (a[i] - b[i]).In(unit.PerCm); math.Abs(d) > 1e-9 {
			t.Errorf("level %d: even %.10f, turned %.10f cm-1", i, a[i].In(unit.PerCm), b[i].In(unit.PerCm))
		}
	}
	three := Barrier(800*unit.PerCm, 3).Plus(Barrier(-50*unit.PerCm, 6))
	tiny := three.Plus(Fourier{Cos: []unit.Energy{0, 1e-12 * unit.PerCm}}) // mixes all m
	c := newTorsion(t, F, three, 3, Diagonalised).Levels(300 * unit.K)
	d := newTorsion(t, F, tiny, 1, Diagonalised).Levels(300 * unit.K)
	for i := range 60 {
		if x := (c[i] - d[i]).In(unit.PerCm); math.Abs(x) > 1e-9 {
			t.Errorf("level %d: by residues %.10f, together %.10f cm-1", i, c[i].In(unit.PerCm), d[i].In(unit.PerCm))
		}
	}
}

func TestTorsionRefusesAndAudits(t *testing.T) {
	for name, err := range map[string]error{
		"sigma not of the potential": errorOf(NewTorsion(unit.PerCm, Barrier(100*unit.PerCm, 3), 2, Diagonalised)),
		"no sigma":                   errorOf(NewTorsion(unit.PerCm, Fourier{}, 0, Diagonalised)),
		"F":                          errorOf(NewTorsion(-unit.PerCm, Fourier{}, 1, Diagonalised)),
		"nan":                        errorOf(NewTorsion(unit.PerCm, Fourier{Cos: []unit.Energy{unit.Energy(math.NaN())}}, 1, Diagonalised)),
	} {
		if !errors.Is(err, statmech.ErrDomain) {
			t.Errorf("%s: %v", name, err)
		}
	}
	for _, m := range []TorsionMethod{Diagonalised, PitzerGwinn, ClassicalTorsion} {
		x := newTorsion(t, 10*unit.PerCm, Barrier(1000*unit.PerCm, 3), 3, m)
		if r := statmech.Audit(x, statmech.AuditOptions{From: 20 * unit.K, To: 2000 * unit.K, Points: 12}); !r.OK() {
			t.Errorf("%v:\n%s", m, r)
		}
	}
}

func errorOf(_ *Torsion, err error) error { return err }

func BenchmarkTorsion(b *testing.B) {
	V := Barrier(800*unit.PerCm, 3).Plus(Barrier(-50*unit.PerCm, 6))
	for b.Loop() {
		x := newTorsion(b, 10*unit.PerCm, V, 3, Diagonalised)
		x.Reduced(300 * unit.K)
	}
}

// Beyond the largest basis the classical integral takes over.
func TestTorsionHot(t *testing.T) {
	x := newTorsion(t, 0.5*unit.PerCm, Barrier(300*unit.PerCm, 3), 3, Diagonalised)
	edge := unit.Temperature(float64(x.f) * 3980 * 3980 / (40 * unit.Boltzmann)) // need is just below the limit
	if n := x.need(edge); n > largestBasis {
		t.Fatalf("need %d", n)
	}
	z := x.ZeroPointEnergy().OverKT(edge)
	a, b := x.Reduced(edge), x.classical(edge).Add(statmech.Reduced{LogQ: z, U: -z})
	if math.Abs(a.LogQ-b.LogQ) > 1e-7 || math.Abs(a.U-b.U) > 1e-7 || math.Abs(a.C-b.C) > 1e-7 {
		t.Errorf("at %v: levels %+v, classical %+v", edge, a, b)
	}
	if r := x.Reduced(1e7 * unit.K); math.Abs(r.C-0.5) > 1e-6 {
		t.Errorf("at 1e7 K: %+v", r)
	}
}
