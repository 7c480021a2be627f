package calorimetry

import (
	"fmt"
	"math"
	"sort"

	"levelsum/display"
	"levelsum/statmech/data"
	"levelsum/statmech/uncertain"
	"levelsum/statmech/unit"
)

// MolarFromTotal subtracts the heat capacity of the empty holder and divides by
// the amount of sample,
//
//	Cp = (C_total - C_addenda) / n
//
// Both tables have columns T and C in J/K (or another unit of that kind) and
// perhaps u(C), u_r(C), u_c(C). The addenda are interpolated by a cubic spline
// in ln T and must reach over the whole range. The random part of the result
// is that of the total; what comes from the addenda and from u(n), relative,
// is common to neighbouring points and goes into the common part.
func MolarFromTotal(total, addenda *data.Table, n unit.Amount, relativeU float64) (*data.Table, error) {
	if !(n > 0) || math.IsInf(float64(n), 1) {
		return nil, fmt.Errorf("calorimetry: MolarFromTotal: amount %v, want positive and finite", n)
	}
	if !(relativeU >= 0) || math.IsInf(relativeU, 1) {
		return nil, fmt.Errorf("calorimetry: MolarFromTotal: relative uncertainty of the amount %g, want not negative", relativeU)
	}
	c, err := capacity(total)
	if err != nil {
		return nil, err
	}
	a, err := capacity(addenda)
	if err != nil {
		return nil, err
	}
	order := make([]int, len(a.t))
	for i := range order {
		order[i] = i
	}
	sort.Slice(order, func(i, j int) bool { return a.t[order[i]] < a.t[order[j]] })
	x, y := make([]float64, len(order)), make([]float64, len(order))
	ur, uc := make([]float64, len(order)), make([]float64, len(order))
	for k, i := range order {
		x[k], y[k], ur[k], uc[k] = math.Log(a.t[i]), a.c[i], a.random[i], a.common[i]
		if k > 0 && x[k] == x[k-1] {
			return nil, fmt.Errorf("calorimetry: MolarFromTotal: %s has %.6g K twice: average or smooth it first", addenda.Name, a.t[i])
		}
	}
	if len(x) < 2 {
		return nil, fmt.Errorf("calorimetry: MolarFromTotal: %s has %d points, want at least two", addenda.Name, len(x))
	}
	s := newSpline(x)
	cp, random, common := make([]float64, len(c.t)), make([]float64, len(c.t)), make([]float64, len(c.t))
	for i, T := range c.t {
		v := math.Log(T)
		if v < x[0] || v > x[len(x)-1] {
			return nil, fmt.Errorf("calorimetry: MolarFromTotal: row %d of %s: %.6g K is outside the addenda, %.6g K to %.6g K", i+1, total.Name, T, math.Exp(x[0]), math.Exp(x[len(x)-1]))
		}
		w := s.at(v)
		rest := c.c[i] - dotted(w, y)
		if !(rest > 0) {
			return nil, fmt.Errorf("calorimetry: MolarFromTotal: row %d of %s: the total %.6g J/K at %.6g K is not above the addenda", i+1, total.Name, c.c[i], T)
		}
		var fromAddenda, shift float64
		for k, wk := range w {
			fromAddenda += wk * wk * ur[k] * ur[k]
			shift += wk * uc[k]
		}
		mol := float64(n)
		cp[i] = rest / mol
		random[i] = c.random[i] / mol
		common[i] = math.Sqrt(c.common[i]*c.common[i]+fromAddenda+shift*shift) / mol
		common[i] = math.Hypot(common[i], relativeU*cp[i])
	}
	return molarTable(total, c.t, cp, random, common, fmt.Sprintf("addenda %s subtracted, n = %.6g mol", addenda.Name, float64(n)))
}

// total heat capacities of a table.
type totals struct{ t, c, random, common []float64 }

func capacity(run *data.Table) (totals, error) {
	var out totals
	if run == nil {
		return out, fmt.Errorf("calorimetry: no table")
	}
	c, err := run.Column("C")
	if err != nil {
		return out, fmt.Errorf("calorimetry: %w", err)
	}
	if c.Unit.Kind != unit.KindEntropy {
		return out, fmt.Errorf("calorimetry: %s: column C is in %q, a unit of %s; want the heat capacity of the whole, as J K-1", run.Name, c.Unit.Symbol, c.Unit.Kind)
	}
	if len(run.T) == 0 {
		return out, fmt.Errorf("calorimetry: %s has no column T", run.Name)
	}
	for _, T := range run.T {
		out.t = append(out.t, float64(T))
	}
	out.c = c.Values
	out.random, out.common = make([]float64, len(out.c)), make([]float64, len(out.c))
	for _, name := range []string{"u(C)", "u_r(C)"} {
		if u, err := run.Column(name); err == nil {
			for i, v := range u.Values {
				out.random[i] = math.Hypot(out.random[i], v)
			}
		}
	}
	if u, err := run.Column("u_c(C)"); err == nil {
		copy(out.common, u.Values)
	}
	return out, nil
}

// molarTable makes a table of molar heat capacities with the notes of the run.
func molarTable(run *data.Table, t, cp, random, common []float64, reading string) (*data.Table, error) {
	var columns []data.Column
	add := func(symbol, unitText string, v []float64) error {
		col, err := data.NewColumn(symbol, unitText, v)
		columns = append(columns, col)
		return err
	}
	if err := add("T", "K", t); err != nil {
		return nil, err
	}
	if err := add("Cp", "J K-1 mol-1", cp); err != nil {
		return nil, err
	}
	if anyPositive(random) {
		if err := add("u_r(Cp)", "J K-1 mol-1", random); err != nil {
			return nil, err
		}
	}
	if anyPositive(common) {
		if err := add("u_c(Cp)", "J K-1 mol-1", common); err != nil {
			return nil, err
		}
	}
	var notes []data.Note
	for _, n := range run.Notes {
		if n.Key != "coverage of u" {
			notes = append(notes, n)
		}
	}
	notes = append(notes, data.Note{Key: "coverage of u", Value: "k=1"})
	out, err := data.New(run.Name, notes, columns...)
	if err != nil {
		return nil, err
	}
	out.Readings = append(out.Readings, reading)
	return out, nil
}

func anyPositive(xs []float64) bool {
	for _, x := range xs {
		if x > 0 {
			return true
		}
	}
	return false
}

// CorrectCurvature corrects heat capacities that are means over temperature
// steps to the value at the middle of the step,
//
//	Cp(T) = ⟨Cp⟩ - Cp″ ΔT²/24
//
// with the second derivative of a smoothing spline through the points. The
// table has a column "dT" in K. It returns the largest correction in per cent
// with the table; corrections above 5 per cent are refused, the expansion ends
// there.
func CorrectCurvature(run *data.Table) (corrected *data.Table, largestPercent float64, err error) {
	step, err := run.Column("dT")
	if err != nil {
		return nil, 0, fmt.Errorf("calorimetry: CorrectCurvature: %w", err)
	}
	if _, err := step.Unit.As(unit.KindTemperatureDifference); err != nil {
		return nil, 0, fmt.Errorf("calorimetry: CorrectCurvature: column dT: %w", err)
	}
	p, err := Smooth(run, nil)
	if err != nil {
		return nil, 0, err
	}
	pc := p.pieces[0]
	value := func(T float64) float64 { return dotted(pc.s.at(math.Log(T)), pc.cp) }
	cs := make([]float64, len(run.Cp))
	for i, T := range run.T {
		t, d := float64(T), step.Unit.Factor*step.Unit.From(step.Values[i])
		h := 0.01 * t
		second := (value(t+h) - 2*value(t) + value(t-h)) / (h * h)
		shift := second * d * d / 24
		relative := shift / float64(run.Cp[i])
		if math.Abs(relative) > 0.05 {
			return nil, 0, fmt.Errorf("calorimetry: CorrectCurvature: row %d: a step of %.3g K at %v changes Cp by %.2g %%: too wide for a curvature correction, use the enthalpy", i+1, d, T, 100*relative)
		}
		largestPercent = max(largestPercent, 100*math.Abs(relative))
		cs[i] = float64(run.Cp[i]) - shift
	}
	corrected, err = run.ReplaceHeatCapacity(cs)
	if err != nil {
		return nil, 0, err
	}
	corrected.Readings = append(corrected.Readings, fmt.Sprintf("Cp corrected for the curvature over each temperature step, by up to %.2g %%", largestPercent))
	return corrected, largestPercent, nil
}

// A ReferenceCheck compares a run on a reference material with its certified
// heat capacities.
type ReferenceCheck struct {
	T       []unit.Temperature
	Percent []float64 // 100 (run - certified)/certified
	U       []float64 // standard uncertainty of Percent, both sides
	Mean    uncertain.Quantity
	Outside int // points that deviate by more than twice U
	name    string
}

// CompareReference compares the points of a run with the certified table,
// interpolated by a spline in ln T. Points outside its range are refused.
func CompareReference(run, certified *data.Table) (*ReferenceCheck, error) {
	if certified.U == nil || run.U == nil {
		return nil, fmt.Errorf("calorimetry: CompareReference: both tables need u(Cp), or a deviation says nothing")
	}
	p, err := ThirdLaw(certified, nil)
	if err != nil {
		return nil, err
	}
	r := &ReferenceCheck{name: run.Name}
	pts := points(run)
	var parts []uncertain.Quantity
	for i, T := range run.T {
		if T < p.First() || T > p.Last() {
			return nil, fmt.Errorf("calorimetry: CompareReference: row %d of %s: %v is outside the certified range, %v to %v", i+1, run.Name, T, p.First(), p.Last())
		}
		d := pts[i].Over(p.HeatCapacity(T)).Shift(-1).Scale(100)
		r.T, r.Percent, r.U = append(r.T, T), append(r.Percent, d.Value()), append(r.U, d.StandardUncertainty())
		if math.Abs(d.Value()) > 2*d.StandardUncertainty() {
			r.Outside++
		}
		parts = append(parts, d)
	}
	r.Mean = uncertain.Sum(parts...).Scale(1 / float64(len(parts))).WithUnit("%").Named("mean deviation")
	return r, nil
}

// String says whether the run agrees.
func (r *ReferenceCheck) String() string {
	s := fmt.Sprintf("%s against the certified values: mean deviation %v, %d of %d points outside twice their standard uncertainty", r.name, r.Mean, r.Outside, len(r.T))
	if float64(r.Outside) > 0.05*float64(len(r.T))+2*math.Sqrt(0.05*float64(len(r.T))) {
		s += ": more than chance allows"
	}
	return s
}

// View shows the deviations.
func (r *ReferenceCheck) View() display.View {
	return display.Table{
		Caption: "deviation from the reference material, " + r.name,
		Columns: []display.Column{{Quantity: "T", Values: r.T}, {Quantity: "deviation", Unit: "%", Values: r.Percent, U: r.U}},
		Notes:   []string{r.String()},
	}.View()
}
