package special

import (
	"fmt"
	"math"
	"math/big"
	"testing"
)

func TestDebyeFunctionAccuracy(t *testing.T) {
	var w [7]worst
	for _, name := range []string{"debye_functions_full_range.csv", "debye_functions.csv"} {
		for _, row := range readReference(t, "mpmath", name) {
			n, x := int(number(t, row[0])), number(t, row[1])
			if name == "debye_functions.csv" && fmt.Sprint(x) != row[1] && exactly(t, row[1]).Cmp(exactly(t, fmt.Sprint(x))) != 0 {
				t.Fatalf("argument %s is not a decimal that can be compared", row[1])
			}
			w[n].see(t, fmt.Sprintf("D_%d", n), row[1], Debye(n, x), exactly(t, row[2]), 0, 3)
		}
	}
	for n := 1; n <= 6; n++ {
		w[n].log(t, fmt.Sprintf("Debye, order %d", n), "")
	}
}

func TestDebyeThermalAccuracy(t *testing.T) {
	names := []string{"C", "U", "S", "LogQ", "CSlope", "USlope"}
	var w [4][6]worst
	for _, row := range readReference(t, "mpmath", "debye_thermal_full_range.csv") {
		d, x := int(number(t, row[0])), number(t, row[1])
		lnq, u, c := DebyeThermal(d, x)
		if c != DebyeC(d, x) || u != DebyeU(d, x) || lnq != DebyeLogQ(d, x) {
			t.Errorf("DebyeThermal(%d, %v) differs from the single functions", d, x)
		}
		for i, got := range []float64{c, u, DebyeS(d, x), lnq} {
			limit := []float64{3, 3, 4, 4}[i]
			w[d][i].see(t, names[i], row[0]+", "+row[1], got, exactly(t, row[2+i]), 0, limit)
		}
		w[d][4].see(t, names[4], row[0]+", "+row[1], DebyeCSlope(d, x), exactly(t, row[6]), 0.05, 300)
		// U' = (U-C)/x
		slope := new(big.Float).SetPrec(160).Sub(exactly(t, row[3]), exactly(t, row[2]))
		slope.Quo(slope, new(big.Float).SetFloat64(x))
		if x > 1e-4 { // below, 30 digits less the cancellation are not enough
			w[d][5].see(t, names[5], row[0]+", "+row[1], DebyeUSlope(d, x), slope, 0, 300)
		}
	}
	for d := 1; d <= 3; d++ {
		for i := range names {
			of := ""
			if i == 4 {
				of = "of max(\\|C′\\|, 0.05)"
			}
			w[d][i].log(t, fmt.Sprintf("Debye%s, d = %d", names[i], d), of)
		}
	}
}

func TestDebyeSpecialCases(t *testing.T) {
	nan, inf := math.NaN(), math.Inf(1)
	for n := 1; n <= 6; n++ {
		if Debye(n, 0) != 1 || Debye(n, inf) != 0 || !math.IsNaN(Debye(n, -1)) || !math.IsNaN(Debye(n, nan)) || !math.IsNaN(Debye(n, -inf)) {
			t.Errorf("special case of D_%d", n)
		}
	}
	for d := 1; d <= 3; d++ {
		if DebyeC(d, 0) != 1 || DebyeC(d, inf) != 0 || !math.IsNaN(DebyeC(d, -1)) || !math.IsNaN(DebyeC(d, nan)) {
			t.Errorf("special case of C, d = %d", d)
		}
		if !math.IsInf(DebyeLogQ(d, 0), 1) || DebyeLogQ(d, inf) != 0 || !math.IsNaN(DebyeS(d, -1)) || DebyeS(d, inf) != 0 {
			t.Errorf("special case of ln q or S, d = %d", d)
		}
		if DebyeCSlope(d, 0) != 0 || DebyeCSlope(d, inf) != 0 || !math.IsNaN(DebyeCSlope(d, -1)) || !math.IsNaN(DebyeCSlope(d, nan)) {
			t.Errorf("special case of C', d = %d", d)
		}
		if want := -float64(d) / (2 * float64(d+1)); math.Abs(DebyeUSlope(d, 0)-want) > 4*eps {
			t.Errorf("DebyeUSlope(%d, 0) = %v, want %v", d, DebyeUSlope(d, 0), want)
		}
	}
	for _, v := range []float64{Debye(0, 1), Debye(7, 1), DebyeC(4, 1), DebyeC(0, 1), DebyeU(4, 1), DebyeLogQ(4, 1), DebyeCSlope(4, 1), DebyeUSlope(0, 1), Debye(-1, 1)} {
		if !math.IsNaN(v) {
			t.Errorf("an order that does not exist gives %v", v)
		}
	}
}

func TestDebyePublished(t *testing.T) {
	// A. Abramowitz & Stegun's table 27.1 is of 6 digits; these are the 25
	// digits of testdata/mpmath/debye_solid_reduced.csv (3-D, per 3R).
	var w [4]worst
	for _, row := range readReference(t, "mpmath", "debye_solid_reduced.csv") {
		x := number(t, row[0])
		for i, got := range []float64{DebyeC(3, x), DebyeU(3, x), DebyeS(3, x), -DebyeLogQ(3, x)} {
			// The arguments are decimals, not exact binary numbers: half an
			// ulp of x moves each result by at most d ln f/d ln x <= 3 half eps.
			w[i].see(t, "debye_solid_reduced "+[]string{"C", "U", "S", "A"}[i], row[0], got, exactly(t, row[1+i]), 0, 6)
		}
	}
}

// TestDebyeJoins compares both sides of every segment's end and of the tail.
func TestDebyeJoins(t *testing.T) {
	for i := 1; i <= 260; i++ {
		x := float64(i) / 4
		below := math.Nextafter(x, 0)
		for n := 1; n <= 6; n++ {
			a, b := Debye(n, below), Debye(n, x)
			if !(math.Abs(a-b) <= 1e-14*b) {
				t.Errorf("D_%d jumps at %v: %v, %v", n, x, a, b)
			}
		}
		for d := 1; d <= 3; d++ {
			a, b := DebyeC(d, below), DebyeC(d, x)
			if !(math.Abs(a-b) <= 1e-14*b) {
				t.Errorf("C of %d dimensions jumps at %v: %v, %v", d, x, a, b)
			}
			a, b = DebyeCSlope(d, below), DebyeCSlope(d, x)
			if !(math.Abs(a-b) <= 1e-13*math.Abs(b)+1e-16) {
				t.Errorf("C' of %d dimensions jumps at %v: %v, %v", d, x, a, b)
			}
		}
	}
}

func TestDebyeSlices(t *testing.T) {
	x := []float64{0, 1e-7, 0.3, 1, 7.25, 49.9, 50, 61, 1e4, math.Inf(1), -1, math.NaN()}
	same := func(a, b float64) bool { return a == b || math.IsNaN(a) && math.IsNaN(b) }
	near := func(a, b float64) bool { return same(a, b) || math.Abs(a-b) <= eps }
	for d := 1; d <= 3; d++ {
		c, slope := DebyeCSlopes(nil, nil, d, x)
		for _, test := range []struct {
			name   string
			slice  []float64
			scalar func(int, float64) float64
		}{
			{"Debyes", Debyes(nil, d, x), Debye},
			{"DebyeCs", DebyeCs(nil, d, x), DebyeC},
			{"DebyeUs", DebyeUs(make([]float64, len(x)), d, x), DebyeU},
			{"DebyeSs", DebyeSs(nil, d, x), DebyeS},
			{"DebyeLogQs", DebyeLogQs(nil, d, x), DebyeLogQ},
			{"DebyeCSlopes C", c, DebyeC},
		} {
			for i, v := range x {
				if !near(test.slice[i], test.scalar(d, v)) {
					t.Errorf("%s(%d, %v) = %v, scalar %v", test.name, d, v, test.slice[i], test.scalar(d, v))
				}
			}
		}
		for i, v := range x {
			if v != 0 && !same(slope[i], DebyeCSlope(d, v)) {
				t.Errorf("DebyeCSlopes(%d, %v) = %v, scalar %v", d, v, slope[i], DebyeCSlope(d, v))
			}
		}
	}
	// dst may be the argument itself.
	y := append([]float64(nil), x...)
	DebyeCs(y, 3, y)
	for i, v := range DebyeCs(nil, 3, x) {
		if !same(v, y[i]) {
			t.Errorf("in place: %v, want %v", y[i], v)
		}
	}
	defer func() {
		if recover() == nil {
			t.Error("a dst of the wrong length was accepted")
		}
	}()
	DebyeCs(make([]float64, 3), 3, x)
}

func benchmarkArguments(n int, to float64) []float64 {
	x := make([]float64, n)
	for i := range x {
		x[i] = to * (float64((i*7919)%n) + 0.5) / float64(n)
	}
	return x
}

func BenchmarkDebyeC(b *testing.B) {
	for _, x := range []float64{0.1, 5, 200} { // first segment, segments, tail
		b.Run(fmt.Sprintf("x=%g", x), func(b *testing.B) {
			for b.Loop() {
				sink = DebyeC(3, x)
			}
		})
	}
}

func BenchmarkDebyeCs(b *testing.B) {
	for _, test := range []struct {
		name string
		x    []float64
	}{
		{"theta/T from 0 to 60, shuffled", benchmarkArguments(1_000_000, 60)},
		{"theta 343 K, T from 1 to 1000 K", func() []float64 {
			x := make([]float64, 1_000_000)
			for i := range x {
				x[i] = 343 / (1 + 999*float64(i)/1e6)
			}
			return x
		}()},
	} {
		b.Run(test.name, func(b *testing.B) {
			dst := make([]float64, len(test.x))
			for b.Loop() {
				DebyeCs(dst, 3, test.x)
			}
			b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N)/float64(len(dst)), "ns/point")
		})
	}
}

func BenchmarkDebyeCSlopes(b *testing.B) {
	x := benchmarkArguments(10_000, 60)
	c, s := make([]float64, len(x)), make([]float64, len(x))
	for b.Loop() {
		DebyeCSlopes(c, s, 3, x)
	}
	b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N)/float64(len(x)), "ns/point")
}

func BenchmarkDebyeSs(b *testing.B) {
	x := benchmarkArguments(10_000, 60)
	s := make([]float64, len(x))
	for b.Loop() {
		DebyeSs(s, 3, x)
	}
	b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N)/float64(len(x)), "ns/point")
}
