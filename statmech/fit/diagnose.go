package fit

import (
	"cmp"
	"fmt"
	"math"
	"slices"
)

// Diagnostics say whether the residuals look like independent normal errors.
type Diagnostics struct {
	Runs        int     // runs of equal sign in the order of x
	RunsP       float64 // two-sided probability of so unusual a number of runs (Wald & Wolfowitz 1940)
	LagOne      float64 // autocorrelation of neighbouring residuals
	LagOneZ     float64 // the same in units of its standard deviation, 1/√n
	Normality   float64 // Anderson-Darling A², mean and variance estimated, small-sample factor included
	NormalityP  float64 // (M. A. Stephens, in D'Agostino & Stephens, Goodness-of-Fit Techniques, 1986, table 4.9)
	MaxLeverage float64
	MaxAt       float64 // x of the point of largest leverage
	Largest     float64 // residual of largest magnitude, in standard uncertainties
	LargestAt   float64
}

func diagnose(r *Result) Diagnostics {
	order := make([]int, len(r.X))
	for i := range order {
		order[i] = i
	}
	if !slices.IsSorted(r.X) {
		slices.SortStableFunc(order, func(a, b int) int { return cmp.Compare(r.X[a], r.X[b]) })
	}
	z := make([]float64, len(order))
	d := Diagnostics{RunsP: 1, NormalityP: 1}
	for k, i := range order {
		z[k] = r.Residual[i]
		if math.Abs(z[k]) > math.Abs(d.Largest) {
			d.Largest, d.LargestAt = z[k], r.X[i]
		}
		if r.Leverage[i] > d.MaxLeverage {
			d.MaxLeverage, d.MaxAt = r.Leverage[i], r.X[i]
		}
	}
	d.Runs, d.RunsP = runs(z)
	d.LagOne, d.LagOneZ = lagOne(z)
	d.Normality, d.NormalityP = andersonDarling(z)
	return d
}

// runs counts runs of equal sign and compares with the normal approximation of
// their distribution for the numbers of both signs.
func runs(z []float64) (count int, p float64) {
	var plus, minus float64
	last := 0
	for _, v := range z {
		sign := 1
		if v < 0 {
			sign = -1
			minus++
		} else {
			plus++
		}
		if sign != last {
			count++
		}
		last = sign
	}
	n := plus + minus
	if plus == 0 || minus == 0 {
		if n < 2 {
			return count, 1
		}
		return count, math.Pow(2, 1-n) // all of one sign
	}
	mean := 1 + 2*plus*minus/n
	variance := 2 * plus * minus * (2*plus*minus - n) / (n * n * (n - 1))
	if variance <= 0 {
		return count, 1
	}
	dev := max(0, math.Abs(float64(count)-mean)-0.5) // continuity correction
	return count, math.Erfc(dev / math.Sqrt(2*variance))
}

func lagOne(z []float64) (r, inSD float64) {
	var top, bottom float64
	for i, v := range z {
		bottom += v * v
		if i > 0 {
			top += v * z[i-1]
		}
	}
	if bottom == 0 {
		return 0, 0
	}
	r = top / bottom
	return r, r * math.Sqrt(float64(len(z)))
}

func andersonDarling(z []float64) (a2, p float64) {
	n := len(z)
	if n < 8 {
		return 0, 1
	}
	var mean, s2 float64
	for _, v := range z {
		mean += v
	}
	mean /= float64(n)
	for _, v := range z {
		s2 += (v - mean) * (v - mean)
	}
	s := math.Sqrt(s2 / float64(n-1))
	if s == 0 {
		return 0, 1
	}
	x := clone(z)
	slices.Sort(x)
	for i, v := range x {
		// The i-th smallest counts 2i+1 times below and 2(n-1-i)+1 times above.
		below, above := logNormal((v - mean) / s)
		a2 += float64(2*i+1)*below + float64(2*(n-i)-1)*above
	}
	a2 = -float64(n) - a2/float64(n)
	a2 *= 1 + 0.75/float64(n) + 2.25/float64(n*n)
	switch {
	case a2 < 0.2:
		p = 1 - math.Exp(-13.436+101.14*a2-223.73*a2*a2)
	case a2 < 0.34:
		p = 1 - math.Exp(-8.318+42.796*a2-59.938*a2*a2)
	case a2 < 0.6:
		p = math.Exp(0.9177 - 4.279*a2 - 1.38*a2*a2)
	case a2 < 13:
		p = math.Exp(1.2937 - 5.709*a2 + 0.0186*a2*a2)
	}
	return a2, p
}

// logNormal returns the logarithms of the standard normal distribution function
// and of its complement.
func logNormal(z float64) (below, above float64) {
	tail := max(0.5*math.Erfc(math.Abs(z)/math.Sqrt2), 1e-300)
	below, above = math.Log1p(-tail), math.Log(tail)
	if z < 0 {
		below, above = above, below
	}
	return below, above
}

func (d Diagnostics) warnings(r *Result) []string {
	var w []string
	n := len(r.X)
	if d.RunsP < doubtfulP && n >= 8 {
		w = append(w, fmt.Sprintf("residuals are not random in x: %d runs of sign in %d points (p %s), neighbours correlated by %.2f", d.Runs, n, probability(d.RunsP), d.LagOne))
	} else if d.LagOneZ > 3.3 && n >= 8 {
		w = append(w, fmt.Sprintf("residuals of neighbours are correlated by %.2f: independent errors are doubtful", d.LagOne))
	}
	if d.NormalityP < doubtfulP {
		w = append(w, fmt.Sprintf("residuals are not normally distributed (Anderson-Darling A² = %.2f, p %s)", d.Normality, probability(d.NormalityP)))
	}
	if r.Freedom > 0 && d.MaxLeverage > 0.99 {
		w = append(w, fmt.Sprintf("the point at x = %g decides alone (leverage %.3f)", d.MaxAt, d.MaxLeverage))
	}
	return w
}
