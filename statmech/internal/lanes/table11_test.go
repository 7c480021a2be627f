package lanes

import (
	"math/rand/v2"
	"testing"
)

func table11(r *rand.Rand) *Table11 {
	s := &Table11{Rows: make([][12]float64, 88), From: -2, To: 42, PerUnit: 2}
	for i := range s.Rows {
		for j := range s.Rows[i] {
			s.Rows[i][j] = r.NormFloat64()
		}
	}
	return s
}

func all11(s *Table11, x []float64) []float64 {
	dst := append(make([]float64, 3), x...)[3:]
	s.Fill(dst, dst, func(k int) float64 {
		if x[k] != x[k] {
			return float64(k)
		}
		return x[k]
	})
	return dst
}

func TestTable11SameBits(t *testing.T) {
	r := rand.New(rand.NewPCG(19, 20))
	s := table11(r)
	for n := range 68 {
		for range 20 {
			x := arguments(r, n, 47)
			for i := range x {
				x[i] -= 3
			}
			both(t, "Table11.Fill", func() []float64 { return all11(s, x) })
		}
	}
}

// The polynomial, and what is said where there is none.
func TestTable11(t *testing.T) {
	s := &Table11{Rows: make([][12]float64, 88), From: -2, To: 42, PerUnit: 2}
	for i := range s.Rows {
		for j := range s.Rows[i] {
			s.Rows[i][j] = float64(i + j)
		}
	}
	for _, use := range []bool{false, true} {
		useVector(use && hasVector())
		x := []float64{-2, -1.75, 0.25, 41.9375, 42, -2.5, 7.125, 0.375, 0.3125}
		dst := make([]float64, len(x))
		s.Fill(dst, x, func(k int) float64 { return -float64(k) })
		for k, v := range x {
			want := -float64(k)
			if v >= -2 && v < 42 {
				y := 2 * (v + 2)
				i := int(y)
				want = 0
				for j := 11; j >= 0; j-- {
					want = want*(y-float64(i)-0.5) + float64(i+j)
				}
			}
			if d := dst[k] - want; d > 1e-12 || d < -1e-12 {
				t.Errorf("at %g: %g, want %g", v, dst[k], want)
			}
		}
	}
	useVector(hasVector())
}

// Any arguments: the same bits, and no access outside of the table.
func FuzzTable11(f *testing.F) {
	r := rand.New(rand.NewPCG(21, 22))
	s := table11(r)
	f.Add(bytes(odd))
	f.Add(bytes(arguments(r, 50, 42)))
	f.Fuzz(func(t *testing.T, b []byte) {
		if x := floats(b); len(x) <= 1000 {
			both(t, "Table11.Fill", func() []float64 { return all11(s, x) })
		}
	})
}
