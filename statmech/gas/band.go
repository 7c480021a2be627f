package gas

import (
	"math"

	"gonum.org/v1/gonum/lapack/gonum"
)

// A band is a real symmetric band matrix: diagonal d below the main one is
// sub[d], sub[d][j] = A[j+d][j]. One diagonal more than the bandwidth is kept
// for the bulge of the reduction.
type band struct {
	n, width int
	sub      [][]float64
}

func newBand(n, width int) *band {
	width = min(width, max(n-1, 1))
	b := &band{n: n, width: width, sub: make([][]float64, width+2)}
	for d := range b.sub {
		b.sub[d] = make([]float64, n)
	}
	return b
}

func (b *band) set(i, j int, x float64) {
	if i < j {
		i, j = j, i
	}
	b.sub[i-j][j] = x
}

// eigenvalues returns the eigenvalues in ascending order and destroys b: the
// band is reduced to three diagonals by Givens rotations, the element that each
// one pushes out of the band being chased down (H. R. Schwarz, Numer. Math. 12,
// 231, 1968), then LAPACK's QL. Rows should be ordered from small to large
// diagonal elements, which keeps the relative accuracy of the low eigenvalues.
func (b *band) eigenvalues() []float64 {
	for k := 0; k+2 < b.n; k++ {
		for r := min(b.width, b.n-1-k); r >= 2; r-- {
			b.chase(k, k+r)
		}
	}
	d, e := b.sub[0], b.sub[1][:max(b.n-1, 0)]
	if !(gonum.Implementation{}).Dsterf(b.n, d, e) {
		panic("gas: eigenvalues of a tridiagonal matrix did not converge")
	}
	return d
}

// chase removes A[i][p] by a rotation of rows and columns i-1, i and follows
// the bulge to the end.
func (b *band) chase(p, i int) {
	for ; i < b.n; p, i = i-1, i+b.width {
		g := b.sub[i-p][p]
		if g == 0 {
			return
		}
		f := b.sub[i-1-p][p]
		h := math.Hypot(f, g)
		c, s := f/h, g/h
		b.sub[i-1-p][p], b.sub[i-p][p] = h, 0
		for j := p + 1; j < i-1; j++ { // left of the block
			x, y := b.sub[i-1-j][j], b.sub[i-j][j]
			b.sub[i-1-j][j], b.sub[i-j][j] = c*x+s*y, c*y-s*x
		}
		x, y, z := b.sub[0][i-1], b.sub[1][i-1], b.sub[0][i]
		b.sub[0][i-1] = c*c*x + 2*c*s*y + s*s*z
		b.sub[0][i] = s*s*x - 2*c*s*y + c*c*z
		b.sub[1][i-1] = c*s*(z-x) + (c*c-s*s)*y
		last := min(i+b.width, b.n-1)
		for j := i + 1; j <= last; j++ { // below the block
			x, y := b.sub[j-i+1][i-1], b.sub[j-i][i]
			b.sub[j-i+1][i-1], b.sub[j-i][i] = c*x+s*y, c*y-s*x
		}
	}
}
