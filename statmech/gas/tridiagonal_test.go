package gas

import (
	"math"
	"math/rand/v2"
	"testing"

	"gonum.org/v1/gonum/lapack/gonum"
)

// The matrix with 2 on the diagonal and -1 beside it has the eigenvalues
// 4 sin²(kπ/2(n+1)) (common practice, no source), at any scale; small ones are
// right to the accuracy of the largest.
func TestTridiagonalClosedForm(t *testing.T) {
	for _, scale := range []float64{1, 1e-23, 1e-290, 1e290} {
		var ts []*tridiagonal
		sizes := []int{0, 1, 2, 3, 17, 200, 201}
		for _, n := range sizes {
			d, e := make([]float64, n), make([]float64, n)
			for i := range d {
				d[i], e[i] = 2*scale, -scale
			}
			ts = append(ts, newTridiagonal(d, e))
		}
		for i, got := range eigenvaluesOf(ts) {
			n := sizes[i]
			if len(got) != n || got == nil && n > 0 {
				t.Fatalf("n = %d: %d eigenvalues", n, len(got))
			}
			for k, v := range got {
				s := math.Sin(float64(k+1) * math.Pi / float64(2*(n+1)))
				if want := 4 * s * s; math.Abs(v/scale-want) > 8e-15 {
					t.Errorf("n = %d, scale %g: eigenvalue %d is %.17g, want %.17g", n, scale, k, v/scale, want)
				}
			}
		}
	}
}

// Random matrices, graded ones and ones that fall apart, against LAPACK's QL of
// gonum; how many are solved together, and beside which, changes no bit.
func TestTridiagonalAgainstLibrary(t *testing.T) {
	r := rand.New(rand.NewPCG(1, 2))
	var together []*tridiagonal
	var alone [][]float64
	for n := 1; n < 60; n++ {
		d, e := make([]float64, n), make([]float64, n)
		for i := range d {
			d[i], e[i] = r.NormFloat64()+float64(n%3*i*i), r.NormFloat64()
			if r.IntN(10) == 0 {
				e[i] = 0
			}
		}
		want, off := append([]float64(nil), d...), append([]float64(nil), e[:n-1]...)
		together = append(together, newTridiagonal(append([]float64(nil), d...), append([]float64(nil), e...)))
		one := eigenvaluesOf([]*tridiagonal{newTridiagonal(d, e)})[0]
		alone = append(alone, one)
		if !(gonum.Implementation{}).Dsterf(n, want, off) {
			t.Fatal("the library did not converge")
		}
		size := max(math.Abs(want[0]), math.Abs(want[n-1]))
		for k, v := range one {
			if math.Abs(v-want[k]) > 1e-14*size {
				t.Errorf("n = %d: eigenvalue %d is %.17g, the library has %.17g", n, k, v, want[k])
			}
		}
	}
	for i, got := range eigenvaluesOf(together) {
		for k, v := range got {
			if v != alone[i][k] {
				t.Errorf("n = %d: eigenvalue %d is %.17g beside others, %.17g alone", i+1, k, v, alone[i][k])
			}
		}
	}
}

// What cannot converge is said, not looped over.
func TestTridiagonalNotANumber(t *testing.T) {
	nan := math.NaN()
	if got := eigenvaluesOf([]*tridiagonal{newTridiagonal([]float64{1, nan, 2}, []float64{1, 1, 0})})[0]; got != nil {
		for _, v := range got {
			if math.IsNaN(v) {
				return
			}
		}
		t.Errorf("eigenvalues %v of a matrix with a NaN", got)
	}
}
