package special

import (
	"math"
	"testing"
	"time"
)

// TestTablesAreFaster guards the polynomials of the Fermi-Dirac functions, of
// an inverse and of the Bose-Einstein functions, by ratios within one run to the
// trapezoid loop that has their accuracy. Both sides run in turn and the best
// of each counts. Usual is a hundredth, with -race a twentieth; the bound is
// 0.2.
func TestTablesAreFaster(t *testing.T) {
	const n = 2000
	eta, F, z, dst := make([]float64, n), make([]float64, n), make([]float64, n), make([]float64, n)
	for i := range eta {
		eta[i] = -10 + 50*float64(i)/n
		F[i] = math.Exp(-8 + 14*float64(i)/n)
		z[i] = float64(i) / n
	}
	// F_1/2(η) = (4/√π) ∫ u²/(e^(u²-η)+1) du, 200 steps.
	trapezoid := func(eta float64) float64 {
		h := math.Sqrt(50+45) / 200
		s := 0.0
		for k := 1; k < 200; k++ {
			u2 := (h * float64(k)) * (h * float64(k))
			s += u2 / (math.Exp(u2-eta) + 1)
		}
		return 4 / math.SqrtPi * h * s
	}
	for _, test := range []struct {
		what string
		f    func()
	}{
		{"FermiDiracs", func() { FermiDiracs(dst, 0.5, eta) }},
		{"FermiDiracHalfInverses", func() { FermiDiracHalfInverses(dst, F) }},
		{"Boses", func() { Boses(dst, 1.5, z) }},
	} {
		table, loop := math.Inf(1), math.Inf(1)
		for range 15 {
			start := time.Now()
			test.f()
			middle := time.Now()
			for _, v := range eta[:n/20] {
				sink = trapezoid(v)
			}
			table = min(table, float64(middle.Sub(start)))
			loop = min(loop, 20*float64(time.Since(middle)))
		}
		t.Logf("%s: %.1f ns a value, trapezoid loop %.0f", test.what, table/n, loop/n)
		if table > 0.2*loop {
			t.Errorf("%s takes %.3f of the trapezoid loop, want less than 0.2", test.what, table/loop)
		}
	}
	if got, want := trapezoid(3), FermiDirac(0.5, 3); math.Abs(got/want-1) > 1e-12 {
		t.Errorf("the loop gives %.15g, the table %.15g", got, want)
	}
}
