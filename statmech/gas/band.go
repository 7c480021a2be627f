package gas

import "math"

// A band is a real symmetric band matrix, stored by columns: A[j+d][j] is
// at[j*stride+d]. One diagonal more than the bandwidth is kept for the bulge of
// the reduction.
type band struct {
	n, width, stride int
	at               []float64
}

func newBand(n, width int) *band {
	width = min(width, max(n-1, 1))
	return &band{n: n, width: width, stride: width + 2, at: make([]float64, n*(width+2))}
}

func (b *band) set(i, j int, x float64) {
	if i < j {
		i, j = j, i
	}
	b.at[j*b.stride+i-j] = x
}

// tridiagonal reduces b, which it destroys, to three diagonals by Givens
// rotations, the element that each one pushes out of the band being chased down
// (H. R. Schwarz, Numer. Math. 12, 231, 1968). Rows should be ordered from small
// to large diagonal elements, which keeps the relative accuracy of the low
// eigenvalues.
func (b *band) tridiagonal() *tridiagonal {
	for k := 0; k+2 < b.n; k++ {
		for r := min(b.width, b.n-1-k); r >= 2; r-- {
			b.chase(k, k+r)
		}
	}
	d, e := make([]float64, b.n), make([]float64, b.n)
	for j := range d {
		d[j], e[j] = b.at[j*b.stride], b.at[j*b.stride+1]
	}
	return newTridiagonal(d, e)
}

// chase removes A[i][p] by a rotation of rows and columns i-1, i and follows
// the bulge to the end.
func (b *band) chase(p, i int) {
	w := b.stride
	for ; i < b.n; p, i = i-1, i+b.width {
		at := b.at[p*w+i-p-1 : p*w+i-p+1]
		f, g := at[0], at[1]
		if g == 0 {
			return
		}
		h := math.Sqrt(float64(f*f) + float64(g*g))
		if h < 0x1p-500 || h > 0x1p500 { // squares that left the range
			h = math.Hypot(f, g)
		}
		c, s := f/h, g/h
		at[0], at[1] = h, 0
		for j := p + 1; j < i-1; j++ { // left of the block
			at := b.at[j*w+i-j-1 : j*w+i-j+1]
			x, y := at[0], at[1]
			at[0], at[1] = float64(c*x)+float64(s*y), float64(c*y)-float64(s*x)
		}
		left, right := b.at[(i-1)*w:i*w], b.at[i*w:(i+1)*w] // columns i-1 and i
		x, y, z := left[0], left[1], right[0]
		cc, cs, ss := c*c, c*s, s*s
		left[0] = float64(cc*x) + float64(2*cs*y) + float64(ss*z)
		right[0] = float64(ss*x) - float64(2*cs*y) + float64(cc*z)
		left[1] = float64(cs*(z-x)) + float64((cc-ss)*y)
		below := min(b.width, b.n-1-i)
		left = left[2 : 2+below]
		right = right[1 : 1+len(left)]
		for j, x := range left { // below the block
			y := right[j]
			left[j], right[j] = float64(c*x)+float64(s*y), float64(c*y)-float64(s*x)
		}
	}
}
