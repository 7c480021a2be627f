package lanes

import (
	"math"
	"math/rand/v2"
	"testing"
	"time"
)

// A vector loop that is not much faster than the loop in Go is not worth its
// assembly. Usual is a ninth for neighbouring arguments, 0.6 for arguments
// without order; the bounds are a half and 1. Both sides run in turn and the
// best of each counts.
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
	for _, test := range []struct {
		what  string
		bound float64
		f     func()
	}{
		{"neighbouring arguments", 0.5, func() { s.Fill(dst, near, nil) }},
		{"arguments without order", 1, func() { s.Fill(dst, far, nil) }},
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
