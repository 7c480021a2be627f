package special

import (
	"fmt"
	"math"
	"math/rand/v2"
	"testing"
)

// order reads "-1/2", "3" or "0.5".
func order(t testing.TB, s string) float64 {
	t.Helper()
	var a, b float64
	if n, _ := fmt.Sscanf(s, "%g/%g", &a, &b); n == 2 {
		return a / b
	}
	return number(t, s)
}

func TestFermiDiracAccuracy(t *testing.T) {
	w := map[float64]*worst{}
	for _, row := range readReference(t, "mpmath", "fermi_dirac_full_range.csv") {
		j, eta := order(t, row[0]), number(t, row[1])
		if w[j] == nil {
			w[j] = new(worst)
		}
		w[j].see(t, "F", row[0]+", "+row[1], FermiDirac(j, eta), exactly(t, row[2]), 0, 4)
	}
	for _, j := range []float64{-0.5, 0.5, 1, 1.5, 2, 3} {
		w[j].log(t, fmt.Sprintf("FermiDirac, order %g", j), "")
	}
	var other worst
	for _, row := range readReference(t, "mpmath", "fermi_dirac.csv") {
		j, eta := order(t, row[0]), number(t, row[1])
		if math.IsNaN(FermiDirac(j, 0)) {
			continue // an order that is not offered
		}
		other.see(t, "F", row[0]+", "+row[1], FermiDirac(j, eta), exactly(t, row[2]), 0, 4)
	}
	t.Logf("fermi_dirac.csv: largest error %.2f eps at %s", other.err, other.where)
}

func TestFermiDiracHalfInverseAccuracy(t *testing.T) {
	var w worst
	for _, row := range readReference(t, "mpmath", "fermi_half_inverse_full_range.csv") {
		w.see(t, "inverse F_1/2", row[0], FermiDiracHalfInverse(number(t, row[0])), exactly(t, row[1]), 1, 5)
	}
	w.log(t, "FermiDiracHalfInverse", "of max(\\|η\\|, 1)")
	for F := 1e-10; F < 1e10; F *= 1.37 {
		// The way back, whose error is dlnF/dη times that of η.
		eta := FermiDiracHalfInverse(F)
		if e := math.Abs(FermiDirac(0.5, eta)/F - 1); e > 12*eps*max(1, math.Abs(eta)) {
			t.Errorf("F_1/2(inverse(%v)) is off by %.3g", F, e)
		}
	}
}

func TestFermiDiracJoins(t *testing.T) {
	for _, j := range []float64{-0.5, 0.5, 1, 1.5, 2, 3} {
		for eta := -2.0; eta <= 42; eta += 0.5 {
			a, b := FermiDirac(j, math.Nextafter(eta, -100)), FermiDirac(j, eta)
			if !(math.Abs(a-b) <= 1e-14*b) {
				t.Errorf("F_%g jumps at %v: %v, %v", j, eta, a, b)
			}
		}
		// dF_j/dη = F_(j-1), by difference
		if lower := FermiDirac(j-1, 3.3); !math.IsNaN(lower) {
			h := 1e-4
			d := (8*(FermiDirac(j, 3.3+h)-FermiDirac(j, 3.3-h)) - (FermiDirac(j, 3.3+2*h) - FermiDirac(j, 3.3-2*h))) / (12 * h)
			if math.Abs(d/lower-1) > 1e-11 {
				t.Errorf("dF_%g/dη = %v, F of the order below %v", j, d, lower)
			}
		}
	}
	for k := -4; k <= 24; k++ {
		F := math.Exp(float64(k) / 4)
		a, b := FermiDiracHalfInverse(F*(1-2e-16)), FermiDiracHalfInverse(F*(1+2e-16))
		if math.Abs(a-b) > 3e-15*max(1, math.Abs(b)) {
			t.Errorf("inverse of F_1/2 jumps at %v: %v, %v", F, a, b)
		}
	}
	for _, F := range []float64{fermiInverseLowTo, fermiInverseHighFrom} {
		a, b := FermiDiracHalfInverse(math.Nextafter(F, 0)), FermiDiracHalfInverse(F)
		if math.Abs(a-b) > 1e-14*max(1, math.Abs(b)) {
			t.Errorf("inverse of F_1/2 jumps at %v: %v, %v", F, a, b)
		}
	}
}

func TestBoseAccuracy(t *testing.T) {
	for _, test := range []struct {
		name, file string
		f          func(s, x float64) float64
		limit      float64
	}{{"Bose", "bose_full_range.csv", Bose, 3}, {"BoseAlpha", "bose_alpha_full_range.csv", BoseAlpha, 7}} {
		w := map[float64]*worst{}
		for _, row := range readReference(t, "mpmath", test.file) {
			s, x := order(t, row[0]), number(t, row[1])
			if w[s] == nil {
				w[s] = new(worst)
			}
			w[s].see(t, "Li", row[0]+", "+row[1], test.f(s, x), exactly(t, row[2]), 0, test.limit)
		}
		for _, s := range []float64{0.5, 1, 1.5, 2, 2.5, 3} {
			w[s].log(t, fmt.Sprintf("%s, order %g", test.name, s), "")
		}
	}
	var other worst
	for _, row := range readReference(t, "mpmath", "bose_polylog.csv") {
		s, z := order(t, row[0]), number(t, row[1])
		if math.IsNaN(Bose(s, 0)) {
			continue // an order that is not offered
		}
		// z is a decimal: half an eps of it moves Li by z Li_(s-1)/2.
		limit := 7 + 1/(1-z+eps)
		other.see(t, "Li", row[0]+", "+row[1], Bose(s, z), exactly(t, row[2]), 0, limit)
	}
}

func TestBoseSpecialCases(t *testing.T) {
	nan, inf := math.NaN(), math.Inf(1)
	for _, s := range []float64{0.5, 1, 1.5, 2, 2.5, 3} {
		if s <= 1 != math.IsInf(Bose(s, 1), 1) || s <= 1 != math.IsInf(BoseAlpha(s, 0), 1) {
			t.Errorf("Li_%g(1) = %v, %v", s, Bose(s, 1), BoseAlpha(s, 0))
		}
		if Bose(s, 0) != 0 || BoseAlpha(s, inf) != 0 || Bose(s, -inf) != -inf || !math.Signbit(Bose(s, math.Copysign(0, -1))) {
			t.Errorf("Li_%g at 0 or -Inf: %v, %v, %v", s, Bose(s, 0), BoseAlpha(s, inf), Bose(s, -inf))
		}
		for _, v := range []float64{Bose(s, math.Nextafter(1, 2)), Bose(s, inf), Bose(s, nan), BoseAlpha(s, -1e-300), BoseAlpha(s, nan)} {
			if !math.IsNaN(v) {
				t.Errorf("Li_%g outside its domain gives %v", s, v)
			}
		}
	}
	for _, j := range []float64{-0.5, 0, 0.5, 1, 1.5, 2, 3} {
		if FermiDirac(j, -inf) != 0 || !math.IsInf(FermiDirac(j, inf), 1) || !math.IsNaN(FermiDirac(j, nan)) {
			t.Errorf("F_%g at ±Inf or NaN", j)
		}
	}
	for _, v := range []float64{FermiDirac(2.5, 1), Bose(0, 0.5), BoseAlpha(4, 1), FermiDirac(nan, 1), FermiDiracHalfInverse(-1), FermiDiracHalfInverse(nan), EllipticK(1.1), EllipticE(nan)} {
		if !math.IsNaN(v) {
			t.Errorf("outside the domain: %v, want NaN", v)
		}
	}
	if !math.IsInf(FermiDiracHalfInverse(0), -1) || !math.IsInf(FermiDiracHalfInverse(inf), 1) {
		t.Error("inverse of F_1/2 at 0 or +Inf")
	}
	if !math.IsInf(EllipticK(1), 1) || EllipticE(1) != 1 || EllipticK(-inf) != 0 || !math.IsInf(EllipticE(-inf), 1) {
		t.Error("elliptic integrals at 1 or -Inf")
	}
}

func TestEllipticAccuracy(t *testing.T) {
	var worstOf [2][2]worst
	for _, name := range []string{"elliptic_full_range.csv", "elliptic_KE.csv"} {
		k, e := &worstOf[0][0], &worstOf[0][1]
		if name == "elliptic_KE.csv" {
			k, e = &worstOf[1][0], &worstOf[1][1]
		}
		for _, row := range readReference(t, "mpmath", name) {
			m, cols, limit := number(t, row[0]), row[1:], 0.0
			if m == 1 {
				continue
			}
			if name == "elliptic_KE.csv" {
				cols = row[2:]
				limit = 0.25 / (1 - m) // m is a decimal there: d ln K/dm < 1/(2(1-m))
			}
			k.see(t, "K", row[0], EllipticK(m), exactly(t, cols[0]), 0, 4+limit)
			e.see(t, "E", row[0], EllipticE(m), exactly(t, cols[1]), 0, 6+limit)
		}
	}
	worstOf[0][0].log(t, "EllipticK", "")
	worstOf[0][1].log(t, "EllipticE", "")
}

func TestQuantumSlices(t *testing.T) {
	x := []float64{-800, -3, -1, -0.2, 0, 0.3, 0.75, 1, 5, 41.9, 43, 1e5, math.Inf(1), math.NaN()}
	same := func(a, b float64) bool { return a == b || math.IsNaN(a) && math.IsNaN(b) }
	for i, v := range x {
		for _, j := range []float64{-0.5, 0, 0.5, 1, 1.5, 2, 3, 7} {
			if !same(FermiDiracs(nil, j, x)[i], FermiDirac(j, v)) {
				t.Errorf("FermiDiracs(%v, %v)", j, v)
			}
			if !same(Boses(nil, j, x)[i], Bose(j, v)) || !same(BoseAlphas(nil, j, x)[i], BoseAlpha(j, v)) {
				t.Errorf("Boses or BoseAlphas(%v, %v)", j, v)
			}
		}
		if !same(FermiDiracHalfInverses(nil, x)[i], FermiDiracHalfInverse(v)) || !same(EllipticKs(nil, x)[i], EllipticK(v)) || !same(EllipticEs(nil, x)[i], EllipticE(v)) {
			t.Errorf("slice form at %v", v)
		}
	}
}

// The slice form of the Bose functions goes through other tables in another
// order: the same bits as the scalar form, at every edge, also in place.
func TestBosesEveryTable(t *testing.T) {
	r := rand.New(rand.NewPCG(1, 2))
	z := []float64{-1, 0.5, 0.75, 1, 0, math.Copysign(0, -1), math.NaN(), math.Inf(-1), 1.5, -3}
	for i := -16; i <= 16; i++ {
		v := float64(i) / 16
		z = append(z, math.Nextafter(v, -2), v, math.Nextafter(v, 2))
	}
	for range 1500 {
		z = append(z, -1.5+2.6*r.Float64())
	}
	for _, s := range []float64{0.5, 1, 1.5, 2, 2.5, 3} {
		got := append([]float64(nil), z...)
		for i, v := range Boses(got, s, got) {
			if want := Bose(s, z[i]); math.Float64bits(v) != math.Float64bits(want) && want == want {
				t.Errorf("Boses(%g, %.17g) = %.17g, want %.17g", s, z[i], v, want)
			}
		}
		// No jump where the tables meet: beside the slope, a few eps.
		for _, v := range []float64{-0.5, 0.25, 0.5, 0.625, 0.75, 0.875} {
			a, c := Bose(s, math.Nextafter(v, -2)), Bose(s, v)
			if math.Abs(a-c) > 6*eps*math.Abs(c) {
				t.Errorf("Li_%g jumps at %g: %.17g, %.17g", s, v, a, c)
			}
		}
	}
}

func BenchmarkQuantum(b *testing.B) {
	eta, F, z := make([]float64, 100_000), make([]float64, 100_000), make([]float64, 100_000)
	for i, x := range benchmarkArguments(len(eta), 1) {
		eta[i] = -10 + 60*x
		F[i] = math.Exp(-8 + 14*x)
		z[i] = x
	}
	dst := make([]float64, len(eta))
	for _, test := range []struct {
		name string
		f    func()
	}{
		{"F_1/2", func() { FermiDiracs(dst, 0.5, eta) }},
		{"inverse F_1/2", func() { FermiDiracHalfInverses(dst, F) }},
		{"Li_3/2", func() { Boses(dst, 1.5, z) }},
		{"K", func() { EllipticKs(dst, z) }},
	} {
		b.Run(test.name, func(b *testing.B) {
			for b.Loop() {
				test.f()
			}
			b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N)/float64(len(dst)), "ns/point")
		})
	}
}
