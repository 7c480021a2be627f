package lanes

import (
	"math"
	"math/rand/v2"
	"testing"
)

// levels are n energies in and about [0, 1) and weights: without order, sorted
// so that neighbours share bins, and with odd numbers among them.
func levels(r *rand.Rand, n int) (e, g []float64) {
	e, g = make([]float64, n+1)[1:], make([]float64, n+1)[1:]
	sorted, strange := r.IntN(2) == 0, r.IntN(3) == 0
	for i := range e {
		e[i], g[i] = r.Float64(), float64(1+r.IntN(7))
		if sorted {
			e[i] = (float64(i) + r.Float64()) / float64(n+1)
		}
		if r.IntN(4) == 0 {
			g[i] = 3 * (1 - r.Float64())
		}
		if strange && r.IntN(20) == 0 {
			if r.IntN(2) == 0 {
				e[i] = odd[r.IntN(len(odd))]
			} else {
				g[i] = odd[r.IntN(len(odd))]
			}
		}
	}
	return e, g
}

// added is all that Add says and leaves, past every group that it refuses.
func added(e, g []float64, bins int, from, perBin float64) []float64 {
	m := NewMoments(bins, from, perBin)
	var out []float64
	for k := 0; k < len(e); k += Width {
		rest := g
		if g != nil {
			rest = g[k:]
		}
		k += m.Add(e[k:], rest)
		out = append(out, float64(k))
	}
	for _, r := range m.Rows {
		out = append(out, r[:]...)
	}
	out = append(out, m.Min[:]...)
	if m.Fractions {
		out = append(out, 1)
	}
	return append(out, m.Max[:]...)
}

func TestMomentsSameBits(t *testing.T) {
	r := rand.New(rand.NewPCG(7, 8))
	for n := range 68 {
		for range 20 {
			e, g := levels(r, n)
			bins := 1 + r.IntN(40)
			both(t, "Moments.Add", func() []float64 { return added(e, g, bins, -0.01, float64(bins)/1.02) })
			both(t, "Moments.Add without weights", func() []float64 { return added(e, nil, bins, 0, float64(bins)) })
		}
	}
}

// Against sums written out.
func TestMoments(t *testing.T) {
	r := rand.New(rand.NewPCG(9, 10))
	const n, bins = 1000, 8
	e, g := make([]float64, n), make([]float64, n)
	var want [bins][Width]float64
	low := math.Inf(1)
	for i := range e {
		e[i], g[i] = 3+2*r.Float64(), float64(1+i%3)
		if i == 17 {
			g[i] += 0.25
		}
		low = min(low, e[i])
		b := int((e[i] - 3) * 4)
		for p := range Width {
			want[b][p] += g[i] * math.Pow((e[i]-3)*4-float64(b)-0.5, float64(p))
		}
	}
	for _, use := range []bool{false, true} {
		useVector(use && hasVector())
		m := NewMoments(bins, 3, 4)
		if did := m.Add(e, g); did != n {
			t.Fatalf("Add did %d levels, want %d", did, n)
		}
		for i, row := range m.Rows {
			for p, v := range row {
				if math.Abs(v-want[i][p]) > 1e-11 {
					t.Errorf("bin %d, moment %d: %g, want %g", i, p, v, want[i][p])
				}
			}
		}
		got := math.Inf(1)
		for _, v := range m.Min {
			got = min(got, v)
		}
		if got != low || !m.Fractions {
			t.Errorf("least energy %g, fractions %v, want %g and true", got, m.Fractions, low)
		}
		beyond := append([]float64(nil), e...)
		beyond[42] = 5.5
		if did := NewMoments(bins, 3, 4).Add(beyond, g); did != 40 {
			t.Errorf("Add did %d levels, want 40: the level after the next is outside", did)
		}
	}
	useVector(hasVector())
}

// Any numbers: the same bits, and no access outside of the bins.
func FuzzMoments(f *testing.F) {
	r := rand.New(rand.NewPCG(11, 12))
	e, g := levels(r, 60)
	f.Add(bytes(append(e, g...)), 0.0, 9.0)
	f.Add(bytes(odd), -1.0, 1e-3)
	f.Fuzz(func(t *testing.T, b []byte, from, perBin float64) {
		x := floats(b)
		if len(x) > 1000 {
			return
		}
		e, g := x[:len(x)/2], x[len(x)/2:len(x)/2*2]
		both(t, "Moments.Add", func() []float64 { return added(e, g, 37, from, perBin) })
		both(t, "Moments.Add without weights", func() []float64 { return added(e, nil, 37, from, perBin) })
	})
}

func BenchmarkMoments(b *testing.B) {
	const n = 1 << 16
	for _, bins := range []int{1024, 2048, 4096} {
		for _, sorted := range []string{"mixed", "sorted"} {
			e, g := make([]float64, n), make([]float64, n)
			for i := range e {
				_, e[i] = math.Modf(float64(i) * math.Phi)
				if sorted == "sorted" {
					e[i] = float64(i) / n
				}
				g[i] = float64(1 + i%7)
			}
			for _, use := range []bool{true, false} {
				name := sorted
				if !use {
					name += "-go"
				}
				b.Run(name, func(b *testing.B) {
					useVector(use && hasVector())
					m := NewMoments(bins, 0, float64(bins))
					for b.Loop() {
						m.Add(e, g)
					}
					b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N)/n, "ns/level")
				})
			}
		}
	}
	useVector(hasVector())
}
