package gas

import (
	"fmt"
	"math"

	"gonum.org/v1/gonum/mat"
)

// fourierFit returns the cosine and sine coefficients up to an order by linear
// least squares and the sum of squared residuals.
func fourierFit(phi, v []float64, order int) (c, s []float64, ss float64, err error) {
	n := 2*order + 1
	a := mat.NewDense(len(phi), n, nil)
	for i, p := range phi {
		a.Set(i, 0, 1)
		for k := 1; k <= order; k++ {
			sin, cos := math.Sincos(float64(k) * p)
			a.Set(i, 2*k-1, cos)
			a.Set(i, 2*k, sin)
		}
	}
	scale := 0.0
	for _, x := range v {
		scale = math.Max(scale, math.Abs(x))
	}
	if scale == 0 {
		scale = 1
	}
	y := mat.NewVecDense(len(v), nil)
	for i, x := range v {
		y.SetVec(i, x/scale)
	}
	var qr mat.QR
	qr.Factorize(a)
	var x mat.VecDense
	if err := qr.SolveVecTo(&x, false, y); err != nil {
		return nil, nil, 0, fmt.Errorf("the angles do not determine %d coefficients: %w", n, err)
	}
	c, s = make([]float64, order+1), make([]float64, order+1)
	c[0] = x.AtVec(0) * scale
	for k := 1; k <= order; k++ {
		c[k], s[k] = x.AtVec(2*k-1)*scale, x.AtVec(2*k)*scale
	}
	var r mat.VecDense
	r.MulVec(a, &x)
	r.SubVec(&r, y)
	return c, s, mat.Dot(&r, &r) * scale * scale, nil
}
