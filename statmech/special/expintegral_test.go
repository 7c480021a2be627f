package special

import (
	"math"
	"testing"
)

func TestExpIntegralAccuracy(t *testing.T) {
	var w [3]worst
	for _, row := range readReference(t, "mpmath", "exp_integral.csv") {
		x := number(t, row[0])
		for n := 1; n <= 2; n++ {
			w[n].see(t, "E", row[0], ExpIntegral(n, x), exactly(t, row[n]), 0, 12)
		}
	}
	w[1].log(t, "ExpIntegral, order 1", "")
	w[2].log(t, "ExpIntegral, order 2", "")
}

func TestExpIntegralSpecialCases(t *testing.T) {
	inf := math.Inf(1)
	if !math.IsInf(ExpIntegral(1, 0), 1) || ExpIntegral(2, 0) != 1 || ExpIntegral(1, inf) != 0 || ExpIntegral(2, inf) != 0 {
		t.Error("at 0 or +Inf")
	}
	for _, v := range []float64{ExpIntegral(1, -1), ExpIntegral(2, math.NaN()), ExpIntegral(0, 1), ExpIntegral(3, 1)} {
		if !math.IsNaN(v) {
			t.Errorf("outside the domain: %v", v)
		}
	}
	x := []float64{0.5, 2, 30}
	for i, v := range ExpIntegrals(nil, 1, x) {
		if v != ExpIntegral(1, x[i]) {
			t.Error("slice form")
		}
	}
}
