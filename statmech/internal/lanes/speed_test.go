package lanes

import (
	"math"
	"math/rand/v2"
	"testing"
	"time"
)

// A vector loop that is not much faster than the loop in Go is not worth its
// assembly. Usual are a ninth for neighbouring arguments, a third for arguments
// without order, a tenth for moments. Both sides run in turn and the best of each
// counts.
func TestVectorLoopIsFaster(t *testing.T) {
	if !hasVector() {
		t.Log("no vector loops on this machine: nothing to compare")
		return
	}
	defer useVector(true)
	r := rand.New(rand.NewPCG(1, 2))
	s := table(r, 200)
	near, far, dst := make([]float64, 4096), make([]float64, 4096), make([]float64, 4096)
	for i := range near {
		near[i], far[i] = 0.1+0.01*float64(i), s.End*r.Float64()
	}
	s11 := table11(r)
	e, g := make([]float64, 4096), make([]float64, 4096)
	for i := range e {
		e[i], g[i] = r.Float64(), 1
	}
	m := NewMoments(2048, 0, 2048)
	var sum, y [Width]float64
	for l := range y {
		y[l] = 1 + 0.001*float64(l)
	}
	for _, test := range []struct {
		what  string
		bound float64
		f     func()
	}{
		{"neighbouring arguments", 0.5, func() { s.Fill(dst, near, nil) }},
		{"arguments without order", 0.9, func() { s.Fill(dst, far, nil) }},
		{"degree 11", 0.5, func() { s11.Fill(dst, near, nil) }},
		{"degree 11 without order", 0.9, func() { s11.Fill(dst, e, nil) }},
		{"products", 0.5, func() { s.AddProducts(&sum, &y, near, g) }},
		{"moments of levels", 0.5, func() { m.Add(e, g) }},
		{"moments of Chebyshev polynomials", 0.5, func() { sum[0] += ChebyshevMoments(far, g, s.End/2, s.End/2)[0] }},
	} {
		vector, plain := math.Inf(1), math.Inf(1)
		for range 15 {
			vector = min(vector, timed(true, test.f))
			plain = min(plain, timed(false, test.f))
		}
		t.Logf("%s: %.2f of the loop in Go", test.what, vector/plain)
		if vector > test.bound*plain {
			t.Errorf("%s: the vector loop takes %.2f of the time of the loop in Go, want less than %g", test.what, vector/plain, test.bound)
		}
	}
}

func timed(use bool, f func()) float64 {
	useVector(use)
	start := time.Now()
	f()
	return float64(time.Since(start))
}
