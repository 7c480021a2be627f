package lanes

import (
	"math"
	"math/rand/v2"
	"testing"
)

func TestChebyshevSameBits(t *testing.T) {
	r := rand.New(rand.NewPCG(13, 14))
	for n := range 68 {
		for range 20 {
			w, weight := arguments(r, n, 3), arguments(r, n, 1)
			both(t, "ChebyshevMoments", func() []float64 {
				m := ChebyshevMoments(w, weight, 1.7, 0.9)
				for i, v := range m {
					if v != v {
						m[i] = 1234 // which NaN is not said
					}
				}
				return m[:]
			})
		}
	}
}

// Against Tₖ(t) = cos(k arccos t).
func TestChebyshevMoments(t *testing.T) {
	r := rand.New(rand.NewPCG(15, 16))
	w, weight := make([]float64, 1001), make([]float64, 1001)
	var want [Chebyshevs]float64
	for i := range w {
		x := 2*r.Float64() - 1
		w[i], weight[i] = 5+3*x, r.Float64()
		for k := range want {
			want[k] += weight[i] * math.Cos(float64(k)*math.Acos((w[i]-5)/3))
		}
	}
	for _, use := range []bool{false, true} {
		useVector(use && hasVector())
		for k, v := range ChebyshevMoments(w, weight, 5, 3) {
			if math.Abs(v-want[k]) > 1e-11 {
				t.Errorf("moment %d: %.15g, want %.15g", k, v, want[k])
			}
		}
	}
	useVector(hasVector())
}

// Any numbers: the same bits.
func FuzzChebyshev(f *testing.F) {
	r := rand.New(rand.NewPCG(17, 18))
	f.Add(bytes(arguments(r, 70, 1)), 0.5, 0.5)
	f.Add(bytes(odd), 0.0, 1.0)
	f.Fuzz(func(t *testing.T, b []byte, mid, half float64) {
		x := floats(b)
		if len(x) > 1000 {
			return
		}
		n := len(x) / 2
		both(t, "ChebyshevMoments", func() []float64 {
			m := ChebyshevMoments(x[:n], x[n:2*n], mid, half)
			for i, v := range m {
				if v != v {
					m[i] = 1234
				}
			}
			return m[:]
		})
	})
}
