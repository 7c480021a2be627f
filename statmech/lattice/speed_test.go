package lattice

import (
	"fmt"
	"math"
	"math/rand/v2"
	"testing"
	"time"

	"levelsum/statmech/unit"
)

// plainSweep offers every spin of a table a flip, one after the other, with
// the probabilities of Metropolis' rule from a table.
func plainSweep(spins []int8, L int, accept *[5]float64, r *rand.Rand) {
	for colour := range 2 {
		for i := range L {
			row, above, below := spins[i*L:i*L+L], spins[(i+L-1)%L*L:][:L], spins[(i+1)%L*L:][:L]
			for j := (i + colour) % 2; j < L; j += 2 {
				left, right := j-1, j+1
				if left < 0 {
					left = L - 1
				}
				if right == L {
					right = 0
				}
				s := row[j] * (above[j] + below[j] + row[left] + row[right]) // -4 … 4
				if s <= 0 || r.Float64() < accept[s] {
					row[j] = -row[j]
				}
			}
		}
	}
}

// TestManySpinsAtOnce guards what 512 spins at once bring, as a ratio within
// one run to a sweep that takes one spin after the other. All run in turn and
// the best of each counts. Usual is 35 with vector registers and 10 without;
// the bounds 8 and 3 catch a fast way that was lost.
func TestManySpinsAtOnce(t *testing.T) {
	const L = 256
	T := Onsager{kelvin}.CriticalTemperature()
	s, err := NewSimulation(Torus{kelvin, L, L}, T, 1)
	if err != nil {
		t.Fatal(err)
	}
	spins := make([]int8, L*L)
	for i := range spins {
		spins[i] = 1
	}
	p := math.Exp(-4 * kelvin.OverKT(T))
	accept := [5]float64{0: 1, 2: p, 4: p * p}
	r := rand.New(rand.NewPCG(1, 2))
	defer useVector(hasVector())
	words, vectors, plain := math.Inf(1), math.Inf(1), math.Inf(1)
	sweeps := func(use bool) float64 {
		useVector(use)
		start := time.Now()
		s.Sweep(10)
		return float64(time.Since(start)) / 10
	}
	for range 15 {
		words = min(words, sweeps(false))
		if hasVector() {
			vectors = min(vectors, sweeps(true))
		}
		start := time.Now()
		plainSweep(spins, L, &accept, r)
		plain = min(plain, float64(time.Since(start)))
	}
	up := 0
	for _, v := range spins {
		up += int(v)
	}
	t.Logf("a sweep of 256 × 256: %.3g µs with vector registers, %.3g µs without, spin by spin %.3g µs (magnetisations %.2f and %.2f)",
		vectors/1e3, words/1e3, plain/1e3, s.Magnetisation(), float64(up)/L/L)
	if plain < 3*words {
		t.Errorf("spin by spin takes %.1f times as long, want more than 3", plain/words)
	}
	if hasVector() && plain < 8*vectors {
		t.Errorf("spin by spin takes %.1f times as long as with vector registers, want more than 8", plain/vectors)
	}
}

func BenchmarkSweep(b *testing.B) {
	for _, L := range []int{16, 64, 256, 1024} {
		b.Run(fmt.Sprintf("L=%d", L), func(b *testing.B) {
			s, err := NewSimulation(Torus{kelvin, L, L}, 2.27*unit.K, 1)
			if err != nil {
				b.Fatal(err)
			}
			b.ReportAllocs()
			for b.Loop() {
				s.Sweep(10)
			}
			b.ReportMetric(10*float64(L*L)*float64(b.N)/float64(b.Elapsed().Nanoseconds()), "attempts/ns")
		})
	}
}
