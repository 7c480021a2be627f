package display

import (
	"math"
	"math/rand/v2"
	"strconv"
	"testing"
)

// The first rows are examples printed in JCGM 100:2008, 7.2.2 and 7.2.6:
// m = 100.02147(35) g, y = 10.05762 Ω with u = 27 mΩ becomes 10.058 Ω.
func TestRound(t *testing.T) {
	for _, test := range []struct {
		v, u float64
		want string
	}{
		{100.02147, 0.00035, "100.02147(35)"},
		{10.05762, 0.027, "10.058(27)"},
		{343.2, 0.7, "343.20(70)"},
		{0.0995, 0.00995, "0.100(10)"}, // rounding u carries into the next place
		{1.234, 0.996, "1.2(1.0)"},
		{12.3, 1.23, "12.3(1.2)"},
		{1e-21, 3.26e-24, "1.0000(33)×10⁻²¹"},
		{99999, 12345, "1.00(12)×10⁵"},
		{5000, 1234, "5000(1200)"},
		{12, 99.6, "10(100)"},
		{-0.001, 0.5, "0.00(50)"}, // no negative zero
		{-154.846, 0.003, "-154.8460(30)"},
	} {
		if got := round(test.v, test.u).text(); got != test.want {
			t.Errorf("round(%v, %v) = %s, want %s", test.v, test.u, got, test.want)
		}
	}
}

// Rounding moves a value by at most half a unit of the last digit shown.
func TestRoundError(t *testing.T) {
	r := rand.New(rand.NewPCG(1, 1))
	for range 20000 {
		v := (r.Float64() - 0.5) * math.Pow(10, 40*r.Float64()-20)
		u := math.Abs(v) * math.Pow(10, 8*r.Float64()-6)
		s := round(v, u)
		got, err := strconv.ParseFloat(s.digits+"e"+strconv.Itoa(s.exp), 64)
		if err != nil {
			t.Fatalf("round(%v, %v) = %s: %v", v, u, s.text(), err)
		}
		if d := math.Abs(got - v); d > 0.0501*u+1e-15*math.Abs(v) {
			t.Fatalf("round(%v, %v) = %s, off by %.3g u", v, u, s.text(), d/u)
		}
	}
}
