package fit

import "math"

// householder reduces the m×n matrix a (column by column, m >= n) to upper
// triangular form in place and applies the same reflections to b. R is left in
// the upper triangle.
//
// Reference: G. H. Golub, C. F. Van Loan, Matrix Computations, 4th ed.,
// algorithm 5.2.1.
func householder(a []float64, m, n int, b []float64) {
	for j := range n {
		col := a[j*m : (j+1)*m]
		norm := norm2(col[j:])
		if norm == 0 {
			continue
		}
		alpha := -math.Copysign(norm, col[j])
		v0 := col[j] - alpha
		// v = (v0, col[j+1:]), H = 1 - v vᵀ/(norm·|v0|)
		beta := 1 / (norm * math.Abs(v0))
		for k := j + 1; k < n; k++ {
			mirror(col[j+1:], v0, beta, a[k*m+j:(k+1)*m])
		}
		if b != nil {
			mirror(col[j+1:], v0, beta, b[j:m])
		}
		col[j] = alpha
		for i := j + 1; i < m; i++ {
			col[i] = 0
		}
	}
}

func mirror(v []float64, v0, beta float64, x []float64) {
	s := float64(v0 * x[0])
	y := x[1 : 1+len(v)]
	for i, vi := range v {
		s += float64(vi * y[i])
	}
	s *= beta
	x[0] -= float64(s * v0)
	for i, vi := range v {
		y[i] -= float64(s * vi)
	}
}

// norm2 is the Euclidean norm without overflow.
func norm2(x []float64) float64 {
	s := dot(x, x)
	if s > 1e-280 && s < 1e280 {
		return math.Sqrt(s)
	}
	var big float64
	for _, v := range x {
		big = max(big, math.Abs(v))
	}
	if big == 0 || math.IsInf(big, 0) {
		return big
	}
	s = 0
	for _, v := range x {
		s += (v / big) * (v / big)
	}
	return big * math.Sqrt(s)
}

// backSolve solves R x = b for the upper triangle left by householder in a
// matrix with m rows. A zero on the diagonal gives a zero in x.
func backSolve(r []float64, m, n int, b, x []float64) {
	for i := n - 1; i >= 0; i-- {
		s := b[i]
		for j := i + 1; j < n; j++ {
			s -= float64(r[j*m+i] * x[j])
		}
		if d := r[i*m+i]; d != 0 {
			x[i] = s / d
		} else {
			x[i] = 0
		}
	}
}

// invertUpper returns R⁻¹, row by row, n×n; ok is false if R is singular.
func invertUpper(r []float64, m, n int) (inv []float64, ok bool) {
	inv = make([]float64, n*n)
	for j := range n {
		if r[j*m+j] == 0 {
			return nil, false
		}
		inv[j*n+j] = 1 / r[j*m+j]
		for i := j - 1; i >= 0; i-- {
			var s float64
			for k := i + 1; k <= j; k++ {
				s += float64(r[k*m+i] * inv[k*n+j])
			}
			inv[i*n+j] = -s / r[i*m+i]
		}
	}
	return inv, true
}

// conditionNumber returns the ratio of the largest to the smallest singular
// value of an n×n matrix given by its upper triangle in a matrix with m rows,
// by one-sided Jacobi rotations.
func conditionNumber(r []float64, m, n int) float64 {
	a := make([]float64, n*n) // column by column
	for j := range n {
		copy(a[j*n:j*n+j+1], r[j*m:j*m+j+1])
	}
	for range 60 {
		rotated := false
		for p := range n {
			for q := p + 1; q < n; q++ {
				cp, cq := a[p*n:(p+1)*n], a[q*n:(q+1)*n]
				var pp, qq, pq float64
				for i := range n {
					pp += cp[i] * cp[i]
					qq += cq[i] * cq[i]
					pq += cp[i] * cq[i]
				}
				if math.Abs(pq) <= 1e-15*math.Sqrt(pp*qq) {
					continue
				}
				rotated = true
				zeta := (qq - pp) / (2 * pq)
				t := math.Copysign(1, zeta) / (math.Abs(zeta) + math.Sqrt(1+zeta*zeta))
				c := 1 / math.Sqrt(1+t*t)
				s := c * t
				for i := range n {
					x, y := cp[i], cq[i]
					cp[i], cq[i] = c*x-s*y, s*x+c*y
				}
			}
		}
		if !rotated {
			break
		}
	}
	lo, hi := math.Inf(1), 0.0
	for j := range n {
		s := norm2(a[j*n : (j+1)*n])
		lo, hi = min(lo, s), max(hi, s)
	}
	if lo == 0 {
		return math.Inf(1)
	}
	return hi / lo
}

// factor is the QR factorisation of the Jacobian of a minimum over the
// parameters not at a bound, with columns of unit length.
type factor struct {
	m, k      int
	free      []int
	norms     []float64
	unit      []float64 // columns of unit length
	r         []float64 // R in the upper triangle of m rows
	condition float64
}

func (out *minimum) factorised() *factor {
	if out.qr != nil {
		return out.qr
	}
	m := len(out.r)
	f := &factor{m: m, condition: 1, unit: make([]float64, 0, len(out.jac))}
	vanishes := false
	for j, bound := range out.atBound {
		if bound {
			continue
		}
		col := out.jac[j*m : (j+1)*m]
		norm := norm2(col)
		if norm == 0 {
			vanishes = true
			continue
		}
		for _, v := range col {
			f.unit = append(f.unit, v/norm)
		}
		f.free, f.norms = append(f.free, j), append(f.norms, norm)
	}
	f.k = len(f.free)
	f.r = clone(f.unit)
	householder(f.r, m, f.k, nil)
	if f.k > 0 {
		f.condition = conditionNumber(f.r, m, f.k)
	}
	if vanishes {
		f.condition = math.Inf(1)
	}
	out.qr = f
	return f
}
