package special

import (
	"math"
	"math/rand/v2"
	"testing"
)

func TestLogSumExpAccuracy(t *testing.T) {
	largest := 0.0
	// Terms with closed sums. n equal terms: x + ln n. A geometric series:
	// Σ_{i<n} e^(-i h) = (1-e^(-nh))/(1-e^(-h)).
	for _, shift := range []float64{0, 700, -1e5, 1e8, 3.25} {
		for _, n := range []int{1, 2, 7, 1000, 1_000_000} {
			x := make([]float64, n)
			for i := range x {
				x[i] = shift
			}
			want := shift + math.Log(float64(n))
			got := LogSumExp(x)
			largest = max(largest, math.Abs(got-want)/max(1, math.Abs(want)))
			if math.Abs(got-want) > 4*eps*max(1, math.Abs(want)) {
				t.Errorf("%d times e^%v: %v, want %v", n, shift, got, want)
			}
			const h = 0.0078125
			for i := range x {
				x[i] = shift - h*float64(i)
			}
			rand.New(rand.NewPCG(1, 2)).Shuffle(n, func(i, j int) { x[i], x[j] = x[j], x[i] })
			want = shift + math.Log(math.Expm1(-h*float64(n))/math.Expm1(-h))
			got = LogSumExp(x)
			largest = max(largest, math.Abs(got-want)/max(1, math.Abs(want)))
			if math.Abs(got-want) > 4*eps*max(1, math.Abs(want)) {
				t.Errorf("geometric, %d terms from e^%v: %v, want %v (%.2g eps)", n, shift, got, want, (got-want)/eps)
			}
		}
	}
	t.Logf("accuracy: LogSumExp | 1 to 1e6 terms, equal and geometric, shifted by up to 1e8 | eps, of max(1, \\|result\\|) | %.3g | 4 | closed sums", largest/eps)
	// One term of 1 and a small rest: ln(1+e^-60) = e^-60 to 26 digits.
	if got, want := LogSumExp([]float64{-60, 0}), math.Exp(-60); math.Abs(got/want-1) > 4*eps {
		t.Errorf("ln(1+e^-60) = %v, want %v", got, want)
	}
}

func TestLogSumExpSpecialCases(t *testing.T) {
	inf, nan := math.Inf(1), math.NaN()
	for _, test := range []struct {
		x, w []float64
		want float64
	}{
		{nil, nil, -inf}, {[]float64{-inf, -inf}, nil, -inf}, {[]float64{-inf, 3}, nil, 3}, {[]float64{inf, 3}, nil, inf},
		{[]float64{nan, inf}, nil, nan}, {[]float64{1, 2}, []float64{1, -1}, nan}, {[]float64{nan, 2}, []float64{0, 1}, 2},
		{[]float64{inf, 2}, []float64{0, 1}, 2}, {[]float64{5}, []float64{0}, -inf}, {[]float64{0, 0}, []float64{1, nan}, nan},
		{[]float64{0, 0, -800}, []float64{2, 3, 1e300}, math.Log(5)},
		{[]float64{-1000, -1000}, []float64{2, 6}, -1000 + math.Log(8)},
	} {
		got := LogSumExpWeighted(test.x, test.w)
		if !(math.Abs(got-test.want) <= 4*eps*max(1, math.Abs(test.want))) && got != test.want && !(math.IsNaN(got) && math.IsNaN(test.want)) {
			t.Errorf("LogSumExpWeighted(%v, %v) = %v, want %v", test.x, test.w, got, test.want)
		}
	}
	for _, p := range [][2]float64{{0, 0}, {-inf, 5}, {5, -inf}, {inf, -inf}, {-inf, -inf}, {nan, 1}, {700, 710}, {-3, 40}} {
		got, want := LogAddExp(p[0], p[1]), LogSumExp(p[:])
		if got != want && !(math.IsNaN(got) && math.IsNaN(want)) {
			t.Errorf("LogAddExp(%v) = %v, LogSumExp %v", p, got, want)
		}
		if s := LogAddExps(nil, p[:1], p[1:]); s[0] != got && !math.IsNaN(got) {
			t.Errorf("LogAddExps(%v) = %v", p, s)
		}
	}
}
