package uncertain

import (
	"math"
	"math/rand/v2"
	"slices"
	"testing"
)

// Two million draws against the exact normal distribution: moments to the
// fourth, the largest difference of the distribution functions
// (Kolmogorov-Smirnov), and how many lie beyond 2 ... 5, the tail that has a
// method of its own included. Every bound is 4 standard deviations of the
// statistic; the seed is fixed.
func TestNormalsDistribution(t *testing.T) {
	const n = 2_000_000
	z := make([]float64, n)
	normals(z, 0, 1, rand.NewPCG(11, 12))
	var m [5]float64
	for _, v := range z {
		for k, p := 1, v; k <= 4; k, p = k+1, p*v {
			m[k] += p / n
		}
	}
	// Variances of zᵏ: 1, 2, 15, 96.
	for k, want := range []struct{ mean, variance float64 }{1: {0, 1}, 2: {1, 2}, 3: {0, 15}, 4: {3, 96}} {
		if k > 0 && math.Abs(m[k]-want.mean) > 4*math.Sqrt(want.variance/n) {
			t.Errorf("mean of z^%d is %.6f, want %g within %.2g", k, m[k], want.mean, 4*math.Sqrt(want.variance/n))
		}
	}
	for _, x := range []float64{2, 3, zigguratEnd, 4, 4.5, 5} {
		p := math.Erfc(x / math.Sqrt2)
		count := 0.0
		for _, v := range z {
			if math.Abs(v) > x {
				count++
			}
		}
		t.Logf("beyond %.4g: %.0f, expected %.1f", x, count, n*p)
		if math.Abs(count-n*p) > 4*math.Sqrt(n*p)+1 {
			t.Errorf("beyond %.4g: %.0f draws, expected %.1f", x, count, n*p)
		}
	}
	slices.Sort(z)
	worst := 0.0
	for i, v := range z {
		f := 0.5 * math.Erfc(-v/math.Sqrt2)
		worst = max(worst, math.Abs(f-float64(i)/n), math.Abs(f-float64(i+1)/n))
	}
	// P(D > 2/√n) = 2 exp(-8) = 7e-4 (Kolmogorov's limit).
	if worst > 2/math.Sqrt(n) {
		t.Errorf("the distribution function is off by %.2g, allowed %.2g", worst, 2/math.Sqrt(n))
	}
}

// The layers have equal area and close at the top.
func TestZigguratLayers(t *testing.T) {
	z := normalLayers()
	edge := func(i int) float64 { return z.width[i] * mantissa }
	tail := math.Sqrt(math.Pi/2) * math.Erfc(zigguratEnd/math.Sqrt2)
	if area := zigguratEnd*math.Exp(-zigguratEnd*zigguratEnd/2) + tail; math.Abs(area-zigguratArea) > 1e-13 {
		t.Errorf("the lowest layer has the area %.15g, want %.15g", area, zigguratArea)
	}
	for i := 1; i < layers; i++ {
		if area := edge(i) * (z.height[i+1] - z.height[i]); math.Abs(area-zigguratArea) > 1e-9*zigguratArea {
			t.Errorf("layer %d has the area %.15g, want %.15g", i, area, zigguratArea)
		}
	}
}
