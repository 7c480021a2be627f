package fit

import (
	"fmt"
	"math"
	"strconv"

	"gonum.org/v1/gonum/mathext"

	"levelsum/display"
)

// AICc returns Akaike's information criterion corrected for few points, 2k +
// χ² + 2k(k+1)/(n-k-1) with given absolute uncertainties, else with n ln(χ²/n)
// in place of χ² and the scale counted as one more parameter. Only differences
// between fits to the same data mean something. +Inf if there are too few
// points for the correction.
//
// References: H. Akaike, IEEE Trans. Autom. Control 19, 716 (1974); C. M.
// Hurvich, C.-L. Tsai, Biometrika 76, 297 (1989).
func (r *Result) AICc() float64 {
	k, n, deviance := r.counts()
	if n-k-1 <= 0 {
		return math.Inf(1)
	}
	return deviance + 2*k + 2*k*(k+1)/(n-k-1)
}

// BIC returns the Bayesian information criterion, k ln n in place of 2k.
//
// Reference: G. Schwarz, Ann. Stat. 6, 461 (1978).
func (r *Result) BIC() float64 {
	k, n, deviance := r.counts()
	return deviance + k*math.Log(n)
}

// counts returns the number of parameters, of points, and -2 ln L up to a
// constant.
func (r *Result) counts() (k, n, deviance float64) {
	k, n = float64(len(r.p)), float64(len(r.X))
	if r.Sigma == AbsoluteSigma {
		return k, n, r.ChiSquared
	}
	return k + 1, n, n * math.Log(r.ChiSquared/n)
}

// sameData refuses fits that cannot be compared.
func sameData(a, b *Result) error {
	switch {
	case a == nil || b == nil:
		return fmt.Errorf("fit: Compare: a nil result")
	case a.reg.data != b.reg.data:
		return fmt.Errorf("fit: the fits are to different data (%d and %d points, or other values or weights); a comparison means nothing", len(a.X), len(b.X))
	case (a.Sigma == AbsoluteSigma) != (b.Sigma == AbsoluteSigma):
		return fmt.Errorf("fit: one fit takes the uncertainties as absolute, the other scales them; make both the same way")
	case a.reg.loss.name != b.reg.loss.name:
		return fmt.Errorf("fit: the fits use different losses; a comparison means nothing")
	}
	return nil
}

// A Comparison ranks fits of different models to the same data.
type Comparison struct {
	Names  []string
	Fits   []*Result
	AICc   []float64
	BIC    []float64
	Weight []float64 // exp(-ΔAICc/2), normalised (Akaike weights)
}

// Compare ranks fits to the same data; it refuses fits to different data or
// weights.
func Compare(fits ...*Result) (*Comparison, error) {
	if len(fits) < 2 {
		return nil, fmt.Errorf("fit: Compare: %d fits, want at least two", len(fits))
	}
	c := &Comparison{Fits: fits}
	best := math.Inf(1)
	for i, f := range fits {
		if err := sameData(fits[0], f); err != nil {
			return nil, err
		}
		c.Names = append(c.Names, "model "+strconv.Itoa(i+1))
		c.AICc, c.BIC = append(c.AICc, f.AICc()), append(c.BIC, f.BIC())
		best = min(best, c.AICc[i])
	}
	sum := 0.0
	for _, a := range c.AICc {
		w := math.Exp((best - a) / 2)
		if math.IsInf(a, 1) {
			w = 0
		}
		c.Weight = append(c.Weight, w)
		sum += w
	}
	for i := range c.Weight {
		c.Weight[i] /= sum
	}
	return c, nil
}

// Best returns the number of the fit with the lowest AICc, from 0.
func (c *Comparison) Best() int {
	best := 0
	for i, a := range c.AICc {
		if a < c.AICc[best] {
			best = i
		}
	}
	return best
}

// View shows the comparison as a table.
func (c *Comparison) View() display.View {
	rows := [][]string{{"model", "parameters", "χ²", "degrees of freedom", "ΔAICc", "weight", "ΔBIC"}}
	bestB := math.Inf(1)
	for _, b := range c.BIC {
		bestB = min(bestB, b)
	}
	for i, f := range c.Fits {
		rows = append(rows, []string{c.Names[i], strconv.Itoa(len(f.p)), fmt.Sprintf("%.5g", f.ChiSquared), strconv.Itoa(f.Freedom),
			fmt.Sprintf("%.2f", c.AICc[i]-c.AICc[c.Best()]), fmt.Sprintf("%.3f", c.Weight[i]), fmt.Sprintf("%.2f", c.BIC[i]-bestB)})
	}
	return view("comparison of models", rows, []string{fmt.Sprintf("same %d points; %s standard uncertainties", len(c.Fits[0].X), c.Fits[0].Sigma)})
}

// FTest compares a model with one that contains it: F is the fall of χ² for
// each added parameter over χ² for each degree of freedom of the larger model,
// p the probability of an F as large if the smaller model is right.
func FTest(small, large *Result) (f, p float64, err error) {
	if err := sameData(small, large); err != nil {
		return 0, 0, err
	}
	added := small.Freedom - large.Freedom
	switch {
	case added <= 0:
		return 0, 0, fmt.Errorf("fit: FTest: the second model has no more parameters than the first")
	case large.Freedom == 0:
		return 0, 0, fmt.Errorf("fit: FTest: the larger model leaves no degrees of freedom")
	case large.ChiSquared > small.ChiSquared*(1+1e-9):
		return 0, 0, fmt.Errorf("fit: FTest: the larger model has the larger χ²: it does not contain the smaller one, or its fit is not at the minimum")
	}
	f = (small.ChiSquared - large.ChiSquared) / float64(added) / (large.ChiSquared / float64(large.Freedom))
	return f, fTail(f, float64(added), float64(large.Freedom)), nil
}

// fTail returns the probability of an F above f for d1 and d2 degrees of
// freedom. It is not 1 less the distribution function, which ends at 1e-16.
func fTail(f, d1, d2 float64) float64 {
	return mathext.RegIncBeta(d2/2, d1/2, d2/(d2+d1*f))
}
