package calorimetry

import (
	"fmt"
	"math"
	"strings"

	"levelsum/statmech/data"
	"levelsum/statmech/uncertain"
	"levelsum/statmech/unit"
)

// An Excess is what a heat capacity has over a baseline: the heat and entropy
// of a transition that is spread over a range of temperature, as a λ anomaly or
// a glass transition is.
type Excess struct {
	From, To unit.Temperature
	Entropy  uncertain.Quantity // ∫ (Cp - baseline)/T dT, J/(mol K)
	Enthalpy uncertain.Quantity // ∫ (Cp - baseline) dT, J/mol
	Peak     unit.Temperature   // of the largest point
	Warnings []string
}

// ExcessOver integrates the heat capacity of a table over a baseline between
// two temperatures. The baseline is a function of the lattice's heat capacity,
// as a fitted model's HeatCapacity or [Baseline] gives it; its uncertainty is
// not in the result, so compare baselines and state the spread
// ([BaselineSpread]). Points are joined by straight lines in Cp: a peak is
// sharper than a spline.
func ExcessOver(run *data.Table, from, to unit.Temperature, baseline func(T unit.Temperature) unit.MolarEntropy) (*Excess, error) {
	if baseline == nil {
		return nil, fmt.Errorf("calorimetry: ExcessOver: no baseline")
	}
	if !(from > 0) || !(from < to) {
		return nil, fmt.Errorf("calorimetry: ExcessOver: from %v to %v, want two temperatures, the lower one first", from, to)
	}
	p, err := newPath(run.Within(0, unit.Temperature(math.MaxFloat64)), nil, nil, false)
	if err != nil {
		return nil, err
	}
	pc := p.pieces[0]
	if float64(from) < pc.t[0] || float64(to) > pc.t[len(pc.t)-1] {
		return nil, fmt.Errorf("calorimetry: ExcessOver: %v to %v is not covered by the points, %.6g K to %.6g K", from, to, pc.t[0], pc.t[len(pc.t)-1])
	}
	ws, wh := make([]float64, len(pc.t)), make([]float64, len(pc.t))
	var baseS, baseH float64
	x := &Excess{From: from, To: to}
	if method := run.Note("method"); strings.Contains(strings.ToLower(method), "relaxation") || strings.Contains(strings.ToLower(method), "heat pulse") {
		x.Warnings = append(x.Warnings, fmt.Sprintf("method %q: each point averages over its temperature rise, which underestimates a sharp peak; check the enthalpy with a run through the transition", method))
	}
	top := math.Inf(-1)
	for i := range len(pc.t) - 1 {
		lo, hi := max(pc.t[i], float64(from)), min(pc.t[i+1], float64(to))
		for _, k := range []int{i, i + 1} {
			if T := pc.t[k]; T >= float64(from) && T <= float64(to) && pc.cp[k] > top {
				top, x.Peak = pc.cp[k], unit.Temperature(T)
			}
		}
		if hi <= lo {
			continue
		}
		half, mid := (hi-lo)/2, (hi+lo)/2
		for k, g := range gaussX {
			for _, s := range [2]float64{-g, g} {
				T := mid + half*s
				f := (T - pc.t[i]) / (pc.t[i+1] - pc.t[i])
				w := gaussW[k] * half
				ws[i] += w * (1 - f) / T
				ws[i+1] += w * f / T
				wh[i] += w * (1 - f)
				wh[i+1] += w * f
				b := float64(baseline(unit.Temperature(T)))
				baseS += w * b / T
				baseH += w * b
			}
		}
	}
	x.Entropy = uncertain.Linear(dotted(ws, pc.cp), ws, pc.c).Shift(-baseS).WithUnit("J/(mol K)").Named("excess entropy")
	x.Enthalpy = uncertain.Linear(dotted(wh, pc.cp), wh, pc.c).Shift(-baseH).WithUnit("J/mol").Named("excess enthalpy")
	return x, nil
}

// Baseline returns the smooth curve through the points below from and above
// to, carried through between them: a cubic spline in ln T without the points of
// the anomaly.
func Baseline(run *data.Table, from, to unit.Temperature) (func(T unit.Temperature) unit.MolarEntropy, error) {
	outside := run.Select(func(i int) bool { return run.T[i] < from || run.T[i] > to })
	below := outside.Within(0, from).Len()
	if below < 2 || outside.Len()-below < 2 {
		return nil, fmt.Errorf("calorimetry: Baseline: %d points below %v and %d above %v, want at least two on each side", below, from, outside.Len()-below, to)
	}
	p, err := newPath(outside, nil, nil, false)
	if err != nil {
		return nil, err
	}
	return func(T unit.Temperature) unit.MolarEntropy { return unit.MolarEntropy(p.HeatCapacity(T).Value()) }, nil
}

// BaselineSpread combines the same excess over several baselines: the mean of
// the values, with half their range as a rectangular contribution added to the
// uncertainty of the data.
func BaselineSpread(alternatives ...*Excess) (entropy, enthalpy uncertain.Quantity, err error) {
	if len(alternatives) < 2 {
		return entropy, enthalpy, fmt.Errorf("calorimetry: BaselineSpread: %d baselines, want at least two", len(alternatives))
	}
	combine := func(of func(*Excess) uncertain.Quantity) uncertain.Quantity {
		lo, hi := math.Inf(1), math.Inf(-1)
		var qs []uncertain.Quantity
		for _, a := range alternatives {
			q := of(a)
			qs = append(qs, q)
			lo, hi = min(lo, q.Value()), max(hi, q.Value())
		}
		mean := uncertain.Sum(qs...).Scale(1 / float64(len(qs)))
		return mean.Plus(uncertain.Rectangular(0, (hi-lo)/2).Named("choice of baseline"))
	}
	entropy = combine(func(x *Excess) uncertain.Quantity { return x.Entropy }).WithUnit("J/(mol K)").Named("excess entropy")
	enthalpy = combine(func(x *Excess) uncertain.Quantity { return x.Enthalpy }).WithUnit("J/mol").Named("excess enthalpy")
	return entropy, enthalpy, nil
}

// FictiveTemperature returns the temperature at which a glass leaves
// equilibrium, by equal areas: extrapolated glass and liquid heat capacities
// between which the measured enthalpy from from (in the glass) to to (in the
// liquid) is divided so that
//
//	∫(liquid - glass) dT from T_f to to = ∫(Cp - glass) dT from from to to
//
// (C. T. Moynihan et al., J. Am. Ceram. Soc. 59, 12 (1976)).
func FictiveTemperature(run *data.Table, from, to unit.Temperature, glass, liquid func(T unit.Temperature) unit.MolarEntropy) (unit.Temperature, error) {
	x, err := ExcessOver(run, from, to, glass)
	if err != nil {
		return 0, err
	}
	if liquid == nil {
		return 0, fmt.Errorf("calorimetry: FictiveTemperature: no liquid curve")
	}
	area := func(Tf float64) float64 {
		var sum float64
		const panels = 16
		for p := range panels {
			half := (float64(to) - Tf) / (2 * panels)
			mid := Tf + half*(2*float64(p)+1)
			for k, g := range gaussX {
				for _, s := range [2]float64{-g, g} {
					T := unit.Temperature(mid + half*s)
					sum += gaussW[k] * half * float64(liquid(T)-glass(T))
				}
			}
		}
		return sum
	}
	lo, hi := float64(from), float64(to)
	want := x.Enthalpy.Value()
	if want < 0 || area(lo) < want {
		return 0, fmt.Errorf("calorimetry: FictiveTemperature: the measured excess %.4g J/mol is not between 0 and that of the liquid over the whole range, %.4g J/mol: check the two curves", want, area(lo))
	}
	for range 60 {
		mid := (lo + hi) / 2
		if area(mid) > want {
			lo = mid
		} else {
			hi = mid
		}
	}
	return unit.Temperature((lo + hi) / 2), nil
}
