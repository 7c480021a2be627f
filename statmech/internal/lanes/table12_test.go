package lanes

import (
	"math"
	"math/rand/v2"
	"testing"
)

func table11(r *rand.Rand) *Table11 {
	s := &Table11{Rows: make([][12]float64, 88), From: -2, PerUnit: 2}
	for i := range s.Rows {
		for j := range s.Rows[i] {
			s.Rows[i][j] = r.NormFloat64()
		}
	}
	return s
}

func all11(s interface {
	Fill(dst, x []float64, rest func(k int) float64)
}, x []float64) []float64 {
	dst := append(make([]float64, 3), x...)[3:]
	s.Fill(dst, dst, func(k int) float64 {
		if x[k] != x[k] {
			return float64(k)
		}
		return x[k]
	})
	return dst
}

func table12(r *rand.Rand) *Table12 {
	s := &Table12{Rows: make([][13]float64, 88), From: -2, PerUnit: 2}
	for i := range s.Rows {
		for j := range s.Rows[i] {
			s.Rows[i][j] = r.NormFloat64()
		}
	}
	return s
}

func TestTable11SameBits(t *testing.T) {
	r := rand.New(rand.NewPCG(19, 20))
	s, s12 := table11(r), table12(r)
	for n := range 68 {
		for range 20 {
			x := arguments(r, n, 47)
			for i := range x {
				x[i] -= 3
			}
			both(t, "Table11.Fill", func() []float64 { return all11(s, x) })
			both(t, "Table12.Fill", func() []float64 { return all11(s12, x) })
		}
	}
}

// The polynomial, and what is said where there is none.
func TestTable11(t *testing.T) {
	s := &Table11{Rows: make([][12]float64, 88), From: -2, PerUnit: 2}
	s12 := &Table12{Rows: make([][13]float64, 88), From: -2, PerUnit: 2}
	for i := range s.Rows {
		for j := range s12.Rows[i] {
			s12.Rows[i][j] = float64(i + j)
		}
		copy(s.Rows[i][:], s12.Rows[i][:])
	}
	for _, use := range []bool{false, true} {
		useVector(use && hasVector())
		x := []float64{-2, -1.75, 0.25, 41.9375, 42, math.Nextafter(42, 0), math.Nextafter(-2, -3), -2.5, 7.125, 0.375, 0.3125}
		dst, dst12 := make([]float64, len(x)), make([]float64, len(x))
		s.Fill(dst, x, func(k int) float64 { return -float64(k) })
		s12.Fill(dst12, x, func(k int) float64 { return -float64(k) })
		for k, v := range x {
			want, want12 := -float64(k), -float64(k)
			if v >= -2 && v < 42 {
				y := 2 * (v + 2)
				i := int(y)
				t := y - float64(i) - 0.5
				want, want12 = 0, float64(i+12)
				for j := 11; j >= 0; j-- {
					want, want12 = want*t+float64(i+j), want12*t+float64(i+j)
				}
			}
			if d := dst12[k] - want12; d > 1e-12 || d < -1e-12 {
				t.Errorf("degree 12 at %g: %g, want %g", v, dst12[k], want12)
			}
			if d := dst[k] - want; d > 1e-12 || d < -1e-12 {
				t.Errorf("at %g: %g, want %g", v, dst[k], want)
			}
		}
	}
	useVector(hasVector())
}

// An argument so near to the end that y rounds to it is outside: there is no row
// for it.
func TestTable12RoundedEnd(t *testing.T) {
	s := &Table12{Rows: make([][13]float64, 12), From: -1, PerUnit: 8}
	x := make([]float64, 9)
	for i := range x {
		x[i] = math.Nextafter(0.5, 0)
	}
	for _, use := range []bool{false, true} {
		useVector(use && hasVector())
		dst := make([]float64, len(x))
		s.Fill(dst, x, func(k int) float64 { return 7 })
		for k, v := range dst {
			if v != 7 {
				t.Errorf("argument %d gives %g, want what is said for it, 7", k, v)
			}
		}
	}
	useVector(hasVector())
}

// Any arguments: the same bits, and no access outside of the table.
func FuzzTable11(f *testing.F) {
	r := rand.New(rand.NewPCG(21, 22))
	s, s12 := table11(r), table12(r)
	f.Add(bytes(odd))
	f.Add(bytes(arguments(r, 50, 42)))
	f.Fuzz(func(t *testing.T, b []byte) {
		if x := floats(b); len(x) <= 1000 {
			both(t, "Table11.Fill", func() []float64 { return all11(s, x) })
			both(t, "Table12.Fill", func() []float64 { return all11(s12, x) })
		}
	})
}
