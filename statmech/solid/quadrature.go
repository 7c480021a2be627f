package solid

import "math"

// integrateLog returns ∫ g(t) d ln t from a to b by Gauss-Kronrod quadrature
// in ln t with bisection, to 1e-10 of the integral of |g|. A heat capacity
// varies as a power of T at low T, so that equal steps of ln T are the
// natural ones.
func integrateLog(g func(t float64) float64, a, b float64) float64 {
	if a == b {
		return 0
	}
	f := func(y float64) float64 { return g(math.Exp(y)) }
	lo, hi := math.Log(a), math.Log(b)
	_, _, scale := kronrod(f, lo, hi)
	return bisect(f, lo, hi, 1e-11*scale, 40)
}

func bisect(f func(float64) float64, lo, hi, tol float64, depth int) float64 {
	v, err, size := kronrod(f, lo, hi)
	if err <= max(tol, 1e-12*size) || depth == 0 {
		return v
	}
	mid := lo + (hi-lo)/2
	return bisect(f, lo, mid, tol, depth-1) + bisect(f, mid, hi, tol, depth-1)
}

// kronrod returns the 15-point Kronrod value of ∫f, its difference from the
// 7-point Gauss value, and the integral of |f|. Nodes and weights: R.
// Piessens and others, QUADPACK, Springer (1983), routine QK15.
func kronrod(f func(float64) float64, lo, hi float64) (value, err, size float64) {
	mid, half := lo+(hi-lo)/2, (hi-lo)/2
	y := f(mid)
	value, gauss := kronrodWeights[7]*y, gaussWeights[3]*y
	size = kronrodWeights[7] * math.Abs(y)
	for i, x := range kronrodNodes[:7] {
		a, b := f(mid-half*x), f(mid+half*x)
		value += kronrodWeights[i] * (a + b)
		size += kronrodWeights[i] * (math.Abs(a) + math.Abs(b))
		if i%2 == 1 {
			gauss += gaussWeights[i/2] * (a + b)
		}
	}
	return value * half, math.Abs((value - gauss) * half), size * math.Abs(half)
}

var kronrodNodes = [...]float64{
	0.991455371120812639206854697526329, 0.949107912342758524526189684047851,
	0.864864423359769072789712788640926, 0.741531185599394439863864773280788,
	0.586087235467691130294144691693013, 0.405845151377397166906606412076961,
	0.207784955007898467600689403773245, 0,
}

var kronrodWeights = [...]float64{
	0.022935322010529224963732008058970, 0.063092092629978553290700663189204,
	0.104790010322250183839876322541518, 0.140653259715525918745189590510238,
	0.169004726639267902826583426598550, 0.190350578064785409913256402421014,
	0.204432940075298892414161999234649, 0.209482141084727828012999174891714,
}

var gaussWeights = [...]float64{
	0.129484966168869693270611432679082, 0.279705391489276667901467771423780,
	0.381830050505118944950369775488975, 0.417959183673469387755102040816327,
}
