package calorimetry

import (
	"fmt"
	"math"
	"sort"

	"levelsum/statmech/unit"
)

// otherwise integrates exp of the spline through ln Cp, another curve through
// the same points: the difference shows what the interpolation leaves open.
func (pc *piece) otherwise(a, b float64) (entropy float64, ok bool) {
	s, isSpline := pc.s.(*spline)
	if !isSpline {
		return 0, false
	}
	y := make([]float64, len(pc.cp))
	for i, c := range pc.cp {
		y[i] = math.Log(c)
	}
	m := s.moments(y)
	lnA, lnB := math.Log(a), math.Log(b)
	for i := range s.h {
		lo, hi := s.x[i], s.x[i+1]
		if i == 0 {
			lo = math.Inf(-1)
		}
		if i == len(s.h)-1 {
			hi = math.Inf(1)
		}
		lo, hi = max(lo, lnA), min(hi, lnB)
		if hi <= lo {
			continue
		}
		half, mid := (hi-lo)/2, (hi+lo)/2
		for k, g := range gaussX {
			for _, t := range [2]float64{-g, g} {
				x := mid + half*t
				p, q, h := (s.x[i+1]-x)/s.h[i], (x-s.x[i])/s.h[i], s.h[i]
				v := p*y[i] + q*y[i+1] + (p*(p*p-1)*m[i]+q*(q*q-1)*m[i+1])*h*h/6
				entropy += gaussW[k] * half * math.Exp(v)
			}
		}
	}
	return entropy, true
}

// Interpolation returns how much the entropy at T changes, in J/(mol K), if ln Cp
// is interpolated in place of Cp: a measure of what the interpolation between
// the points leaves open. It is 0 for a smoothed path.
func (p *Path) Interpolation(T unit.Temperature) float64 {
	x := p.check("Interpolation", T)
	var change float64
	for _, pc := range p.pieces {
		if end := min(x, pc.to); end > pc.from {
			if s, ok := pc.otherwise(pc.from, end); ok {
				change += s - pc.entropy(pc.from, end).Value()
			}
		}
	}
	return change
}

// anomalies looks for points that depart from the line between their
// neighbours in ln Cp against ln T far more than the others do, in itself and
// as a curvature, so that a coarse part of the table is not taken for a peak.
func (pc *piece) anomalies() []string {
	n := len(pc.t)
	if n < 8 {
		return nil
	}
	d, curvature := make([]float64, n-2), make([]float64, n-2)
	for i := range d {
		x0, x1, x2 := pc.x[i], pc.x[i+1], pc.x[i+2]
		f := (x1 - x0) / (x2 - x0)
		d[i] = math.Log(pc.cp[i+1]) - (1-f)*math.Log(pc.cp[i]) - f*math.Log(pc.cp[i+2])
		curvature[i] = d[i] / ((x1 - x0) * (x2 - x1))
	}
	usual, usualCurvature := medianSize(d), medianSize(curvature)
	worst := -1
	for i, v := range d {
		if math.Abs(v) > anomaly && math.Abs(v) > anomalyScale*usual && math.Abs(curvature[i]) > anomalyScale*usualCurvature &&
			(worst < 0 || math.Abs(v) > math.Abs(d[worst])) {
			worst = i
		}
	}
	if worst < 0 {
		return nil
	}
	return []string{fmt.Sprintf("Cp at %.6g K departs by %.1f %% from its neighbours, the median point by %.2g %%: an outlier, or a transition hidden in %s?", pc.t[worst+1], 100*math.Expm1(d[worst]), 100*usual, pc.name)}
}

func medianSize(xs []float64) float64 {
	size := make([]float64, len(xs))
	for i, x := range xs {
		size[i] = math.Abs(x)
	}
	sort.Float64s(size)
	return size[len(size)/2]
}
