package lanes

import (
	"encoding/binary"
	"math"
	"math/rand/v2"
	"testing"
)

// both runs f with the loops in Go and, where this machine has them, with the
// loops in assembly, and fails if the numbers that f returns differ in a bit.
func both(t *testing.T, what string, f func() []float64) {
	t.Helper()
	if !hasVector() {
		t.Logf("%s: no vector loops on this machine: nothing to compare", what)
		return
	}
	defer useVector(true)
	useVector(false)
	want := f()
	useVector(true)
	got := f()
	if len(got) != len(want) {
		t.Fatalf("%s: %d numbers, want %d", what, len(got), len(want))
	}
	for i := range got {
		if math.Float64bits(got[i]) != math.Float64bits(want[i]) {
			t.Fatalf("%s: number %d is %.17g by the vector loop, %.17g in Go", what, i, got[i], want[i])
		}
	}
}

// table is a Table8 of random rows; a wrong row or a wrong order of operations
// shows in the last bits.
func table(r *rand.Rand, segments int) *Table8 {
	s := &Table8{Rows: make([][9]float64, segments), End: float64(segments) / 4}
	for i := range s.Rows {
		for j := range s.Rows[i] {
			s.Rows[i][j] = r.NormFloat64()
		}
	}
	return s
}

// odd are numbers that a loop may stumble over.
var odd = []float64{0, math.Copysign(0, -1), math.NaN(), math.Inf(1), math.Inf(-1), 5e-324, 1e-310, 0x1p-1022, -1, 1e300, math.MaxFloat64}

// arguments are n numbers, spread over [0, end) or slowly growing, with some odd
// ones among them.
func arguments(r *rand.Rand, n int, end float64) []float64 {
	x := make([]float64, n+1)[1:] // not aligned
	slow, strange := r.IntN(2) == 0, r.IntN(3)
	for i := range x {
		x[i] = end * r.Float64()
		if slow {
			x[i] = end * (float64(i) + 0.5) / float64(40*(n+1))
		}
		switch {
		case strange == 1 && r.IntN(10) == 0:
			x[i] = odd[r.IntN(len(odd))]
		case strange == 2 && r.IntN(20) == 0: // edges of segments and of the table
			x[i] = math.Nextafter(float64(r.IntN(int(4*end)+1))/4, float64(r.IntN(3)-1)*1000)
		}
	}
	return x
}

// The loops in assembly and in Go give the same bits: random arguments, odd
// ones, every length from 0 to 67.
func TestSameBits(t *testing.T) {
	r := rand.New(rand.NewPCG(1, 2))
	s := table(r, 200)
	for n := range 68 {
		for range 20 {
			x := arguments(r, n, s.End)
			num, f1, f2 := r.Float64(), r.NormFloat64(), r.NormFloat64()
			both(t, "Fill", func() []float64 { return runAll(s, x, 0, 1, 1, false) })
			both(t, "FillQuotients", func() []float64 { return runAll(s, x, num, f1, f2, true) })
			both(t, "AddProducts", func() []float64 { return products(s, x, arguments(rand.New(rand.NewPCG(uint64(n), 3)), Width, 1)) })
		}
	}
}

// runAll is Fill or FillQuotients in place, with a value outside that tells the
// argument.
func runAll(s *Table8, x []float64, num, f1, f2 float64, divide bool) []float64 {
	dst := append(make([]float64, 3), x...)[3:]
	rest := func(k int) float64 {
		if x[k] != x[k] {
			return float64(k)
		}
		return x[k]
	}
	if divide {
		s.FillQuotients(dst, dst, num, f1, f2, rest)
	} else {
		s.Fill(dst, dst, rest)
	}
	return dst
}

func products(s *Table8, w, y []float64) []float64 {
	sum := [Width]float64{1, -2, 3}
	weight := make([]float64, len(w))
	for k := range weight {
		weight[k] = 1 / float64(k+3)
	}
	var stops []float64
	for k := 0; k < len(w); k++ {
		k += s.AddProducts(&sum, (*[Width]float64)(y), w[k:], weight[k:])
		stops = append(stops, float64(k))
	}
	return append(stops, sum[:]...)
}

// Both loops give the polynomial, and what is said where it has no value.
func TestFill(t *testing.T) {
	s := &Table8{Rows: make([][9]float64, 4), End: 1}
	for i := range s.Rows {
		s.Rows[i] = [9]float64{float64(i), 1, 0, 0, 0, 0, 0, 0, 1}
	}
	for _, use := range []bool{false, true} {
		useVector(use && hasVector())
		x := []float64{0.125, 0.25, 0.5, 0.75, 0.875, 0.3, 0.1, 0, 0.99, 1, 0.5, -3, 0.25}
		dst := make([]float64, len(x))
		s.Fill(dst, x, func(k int) float64 { return 100 + float64(k) })
		// i + t + t⁸ with t = 4x-(i+1/2): 0 in the middle, 2⁻⁸ - 1/2 at the left edge.
		left := -0.5 + 1./256
		for k, want := range map[int]float64{0: 0, 1: 1 + left, 2: 2 + left, 3: 3 + left, 4: 3, 7: 107, 9: 109, 10: 2 + left, 11: 111, 12: 1 + left} {
			if dst[k] != want {
				t.Errorf("at %g: %g, want %g", x[k], dst[k], want)
			}
		}
		s.FillQuotients(dst, []float64{2, 4, math.Inf(1)}, 1, 3, 5, func(k int) float64 { return float64(k) })
		for k, want := range []float64{15 * (2 + left), 15 * (1 + left), 30} {
			if dst[k] != want {
				t.Errorf("quotient %d: %g, want %g", k, dst[k], want)
			}
		}
	}
	useVector(hasVector())
}

// floats reads a fuzz input as numbers.
func floats(b []byte) []float64 {
	x := make([]float64, len(b)/8)
	for i := range x {
		x[i] = math.Float64frombits(binary.LittleEndian.Uint64(b[8*i:]))
	}
	return x
}

func bytes(x []float64) []byte {
	var b []byte
	for _, v := range x {
		b = binary.LittleEndian.AppendUint64(b, math.Float64bits(v))
	}
	return b
}

// Any arguments: the same bits, and no access outside of the table.
func FuzzTable8(f *testing.F) {
	r := rand.New(rand.NewPCG(5, 6))
	s := table(r, 182)
	f.Add(bytes(odd), 1.0)
	f.Add(bytes(arguments(r, 50, s.End)), 300.0)
	f.Fuzz(func(t *testing.T, b []byte, num float64) {
		x := floats(b)
		if len(x) > 1000 {
			return
		}
		both(t, "Fill", func() []float64 { return runAll(s, x, 0, 1, 1, false) })
		both(t, "FillQuotients", func() []float64 { return runAll(s, x, num, 3, 0.1, true) })
		if len(x) > Width {
			both(t, "AddProducts", func() []float64 { return products(s, x[Width:], x[:Width]) })
		}
	})
}

func BenchmarkFill(b *testing.B) {
	r := rand.New(rand.NewPCG(1, 2))
	s := table(r, 200)
	same, mixed := make([]float64, 512), make([]float64, 512)
	for i := range same {
		same[i], mixed[i] = 3+0.2*r.Float64()/float64(1+i), s.End*r.Float64()
	}
	dst := make([]float64, 512)
	for _, use := range []struct {
		name   string
		x      []float64
		vector bool
	}{{"same", same, true}, {"mixed", mixed, true}, {"same-go", same, false}, {"mixed-go", mixed, false}} {
		b.Run(use.name, func(b *testing.B) {
			useVector(use.vector && hasVector())
			for b.Loop() {
				s.Fill(dst, use.x, nil)
			}
			b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N)/512, "ns/point")
		})
	}
	useVector(hasVector())
}
