package fit

import "math"

// normal holds the normal equations of a step over the free columns of the
// Jacobian, scaled to columns of unit length: c y = -g with y the step times the
// length of its column.
type normal struct {
	k      int
	c      []float64 // k×k, ones on the diagonal
	g      []float64 // Jᵀr over the lengths
	length []float64
	factor []float64
}

// pivotEnough is the smallest squared diagonal element of the Cholesky factor of
// the scaled matrix with which a step comes from the normal equations: their
// condition is that of the Jacobian squared, and a step of which eight digits
// are right converges as fast as an exact one. Steps of others come from QR.
const pivotEnough = 1e-7

func (e *normal) reserve(n int) {
	e.c, e.factor = make([]float64, n*n), make([]float64, n*n)
	e.g, e.length = make([]float64, n), make([]float64, n)
}

// form fills the equations and reports whether they are good enough.
func (e *normal) form(jac []float64, m int, free []int, gradient, norms []float64) bool {
	k := len(free)
	e.k = k
	for i, fi := range free {
		if norms[fi] == 0 {
			return false
		}
		e.length[i] = norms[fi]
		e.g[i] = gradient[fi] / norms[fi]
		for j := range i {
			fj := free[j]
			d := dot(jac[fi*m:(fi+1)*m], jac[fj*m:(fj+1)*m]) / (norms[fi] * norms[fj])
			e.c[i*k+j], e.c[j*k+i] = d, d
		}
		e.c[i*k+i] = 1
	}
	return e.cholesky(nil)
}

// cholesky factorises c with added on its diagonal and reports whether no pivot
// is too small.
func (e *normal) cholesky(added []float64) bool {
	k := e.k
	for i := range k {
		for j := 0; j <= i; j++ {
			s := e.c[i*k+j]
			if i == j && added != nil {
				s += added[i]
			}
			for l := range j {
				s -= float64(e.factor[i*k+l] * e.factor[j*k+l])
			}
			if i == j {
				if !(s > pivotEnough) {
					return false
				}
				e.factor[i*k+i] = math.Sqrt(s)
			} else {
				e.factor[i*k+j] = s / e.factor[j*k+j]
			}
		}
	}
	return true
}

// step solves (c + λ scale²/length²) y = -g and puts y/length into delta.
func (e *normal) step(lambda float64, scale []float64, free []int, added, delta []float64) bool {
	k := e.k
	for i, f := range free {
		s := scale[f] / e.length[i]
		added[i] = lambda * s * s
	}
	if !e.cholesky(added) {
		return false
	}
	for i := range k {
		s := -e.g[i]
		for j := range i {
			s -= float64(e.factor[i*k+j] * delta[j])
		}
		delta[i] = s / e.factor[i*k+i]
	}
	for i := k - 1; i >= 0; i-- {
		s := delta[i]
		for j := i + 1; j < k; j++ {
			s -= float64(e.factor[j*k+i] * delta[j])
		}
		delta[i] = s / e.factor[i*k+i]
	}
	for i := range k {
		delta[i] /= e.length[i]
	}
	return true
}

// reduction returns χ² - |r + Jδ|² = -2 gᵀδ - δᵀJᵀJδ.
func (e *normal) reduction(delta []float64) float64 {
	k := e.k
	total := 0.0
	for i := range k {
		y := delta[i] * e.length[i]
		row := 0.0
		for j := range k {
			row += float64(e.c[i*k+j] * (delta[j] * e.length[j]))
		}
		total -= float64(y * (2*e.g[i] + row))
	}
	return total
}
