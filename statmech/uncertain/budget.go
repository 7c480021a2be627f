package uncertain

import (
	"fmt"
	"math"
	"sort"

	"gonum.org/v1/gonum/stat/distuv"

	"levelsum/statmech"
)

// A Contribution is one line of an uncertainty budget.
type Contribution struct {
	Name        string
	Unit        string
	Value       float64
	U           float64 // standard uncertainty of the input
	Shape       Shape
	Common      bool
	Freedom     float64 // degrees of freedom, +Inf if u is taken as known
	Sensitivity float64 // c = ∂f/∂x
	Part        float64 // |c|·u, in the unit of the result
	Share       float64 // fraction of u² of the result, correlations of this input included
}

// A Budget lists what makes up the standard uncertainty of a quantity.
type Budget struct {
	Result      Quantity
	Inputs      []Contribution // in the order in which the inputs were made
	Correlation float64        // the sum of the terms 2cᵢcⱼu(xᵢ,xⱼ), negative if correlations reduce u
	U           float64
	Freedom     float64 // effective degrees of freedom
}

// Budget returns the uncertainty budget of q (JCGM 100:2008, 5.1 and 5.2).
func (q Quantity) Budget() Budget {
	ts := q.node().terms
	total := variance(ts, anyPart)
	b := Budget{Result: q, U: math.Sqrt(total), Freedom: q.EffectiveFreedom()}
	var diagonal float64
	for i, t := range ts {
		u := t.in.u()
		c := Contribution{Name: t.in.name, Unit: t.in.unit, Value: t.in.src.value[t.in.pos], U: u,
			Shape: t.in.src.shape, Common: t.in.common, Freedom: t.in.src.dof, Sensitivity: t.c, Part: math.Abs(t.c) * u}
		if c.Name == "" {
			c.Name = "input " + itoa(i+1)
		}
		diagonal += c.Part * c.Part
		if total > 0 {
			c.Share = covariance([]term{t}, ts, anyPart) / total
		}
		b.Inputs = append(b.Inputs, c)
	}
	if len(ts) > 1 {
		b.Correlation = total - diagonal
		if math.Abs(b.Correlation) < 1e-12*diagonal {
			b.Correlation = 0
		}
	}
	return b
}

// Largest returns the contributions in falling order of their part.
func (b Budget) Largest() []Contribution {
	cs := append([]Contribution(nil), b.Inputs...)
	sort.SliceStable(cs, func(i, j int) bool { return cs[i].Part > cs[j].Part })
	return cs
}

// EffectiveFreedom returns the effective degrees of freedom of the standard
// uncertainty by the Welch-Satterthwaite formula,
//
//	ν = u⁴ / Σᵢ (cᵢ uᵢ)⁴/νᵢ
//
// where correlated inputs, which share their readings, count as one. +Inf if
// every standard uncertainty is taken as known.
//
// Reference: JCGM 100:2008, annex G.4, equation (G.2b).
func (q Quantity) EffectiveFreedom() float64 {
	ts := q.node().terms
	var sum float64
	for i := 0; i < len(ts); {
		j := i
		for j < len(ts) && ts[j].in.src == ts[i].in.src {
			j++
		}
		v := variance(ts[i:j:j], anyPart)
		sum += v * v / ts[i].in.src.dof
		i = j
	}
	total := variance(ts, anyPart)
	if sum == 0 {
		return math.Inf(1)
	}
	return total * total / sum
}

// CoverageFactor returns the k for which value ± k·u covers with probability p
// if the estimate is normally distributed: the quantile of the t-distribution
// for the effective degrees of freedom, rounded down (JCGM 100:2008, G.4.1).
func (q Quantity) CoverageFactor(p float64) float64 {
	if !(p > 0) || !(p < 1) {
		panic(&statmech.DomainError{Func: "uncertain.Quantity.CoverageFactor", Arg: "p", Value: fmt.Sprint(p), Want: "between 0 and 1"})
	}
	nu := q.EffectiveFreedom()
	if math.IsInf(nu, 1) {
		return distuv.UnitNormal.Quantile((1 + p) / 2)
	}
	if nu = math.Floor(nu + 1e-9); nu < 1 {
		panic(&statmech.DomainError{Func: "uncertain.Quantity.CoverageFactor", Arg: "effective degrees of freedom", Value: fmt.Sprint(q.EffectiveFreedom()), Want: "at least 1"})
	}
	return distuv.StudentsT{Mu: 0, Sigma: 1, Nu: nu}.Quantile((1 + p) / 2)
}
