package calorimetry

import (
	"fmt"
	"math"
	"sort"
	"strings"

	"levelsum/statmech"
	"levelsum/statmech/data"
	"levelsum/statmech/uncertain"
	"levelsum/statmech/unit"
)

// Limits of the warnings. They are rules of this package, without a source.
const (
	largeShare   = 0.02 // of the entropy, below the first point
	anomaly      = 0.03 // relative departure of a point from its neighbours
	anomalyScale = 8    // the same in units of the median departure
)

// A Path is the way from 0 K through the solid's phases and on: what the data
// cover, what lies below them, and the transitions.
type Path struct {
	Name     string
	Warnings []string

	low    Extrapolation
	pieces []*piece // in rising temperature
	jumps  []jump   // between them and after the last one
}

// piece is one phase: points and the spline through them.
type piece struct {
	name     string
	from, to float64   // where it is used, K; at a transition beyond its own points
	t, x, cp []float64 // T in K, ln T, Cp in J/(mol K)
	c        []uncertain.Quantity
	s        curve
	note     string // how it was smoothed, "" for interpolation
}

// curve is a function of ln T that is linear in the heat capacities: what it
// gives are their weights.
type curve interface {
	at(x float64) []float64
	slope(x float64) []float64
	integral(a, b float64, f func(x float64) float64) []float64
}

// jump is what happens at one temperature.
type jump struct {
	name string
	t    float64
	s, h uncertain.Quantity
}

// ThirdLaw joins the heat capacities of a table, an extrapolation to 0 K and
// first-order transitions to the entropy of a substance. Without an
// extrapolation (nil) entropies are counted from the first point, and say so.
//
// The phases are the pieces between the transitions, or, if the table has a
// column "phase", the rows of equal phase. Each piece is interpolated by a
// cubic spline in ln T, and carried on to the transition temperature where its
// points end before it. A piece with fewer than two points is refused, and so
// are two points at one temperature: smooth or average them first.
//
// Uncertainties: the random part of u(Cp) is independent from point to point,
// the common part one error of the whole table; u(T) counts through the slope
// of Cp. The error of interpolation is not in it: for points 5 % apart in T it
// is below 1e-4 J/(mol K) in 63 (TestThirdLawSynthetic).
func ThirdLaw(run *data.Table, low Extrapolation, transitions ...Transition) (*Path, error) {
	return newPath(run, low, transitions, false)
}

// Smooth is [ThirdLaw] for measured points that scatter, lie close together or
// in any order: each phase is smoothed by a cubic spline in ln T fitted with the
// weights 1/u² (1/Cp² if the table has no uncertainties), whose number of knots
// is found by leave-one-out cross-validation. The smoothed values are weighted
// sums of the points too, so that uncertainties follow as for interpolation.
func Smooth(run *data.Table, low Extrapolation, transitions ...Transition) (*Path, error) {
	return newPath(run, low, transitions, true)
}

func newPath(run *data.Table, low Extrapolation, transitions []Transition, smooth bool) (*Path, error) {
	if run == nil || len(run.T) == 0 || len(run.Cp) == 0 {
		return nil, fmt.Errorf("calorimetry: no columns T and Cp")
	}
	p := &Path{Name: run.Name, low: low}
	ts := append([]Transition(nil), transitions...)
	sort.SliceStable(ts, func(i, j int) bool { return ts[i].T < ts[j].T })
	for i, t := range ts {
		if err := t.check(); err != nil {
			return nil, err
		}
		if i > 0 && t.T == ts[i-1].T {
			return nil, fmt.Errorf("calorimetry: two transitions at %v; add their enthalpies", t.T)
		}
	}
	if err := p.cut(run, ts, smooth); err != nil {
		return nil, err
	}
	first := p.pieces[0].t[0]
	if low == nil {
		p.Warnings = append(p.Warnings, fmt.Sprintf("no extrapolation: entropy and enthalpy are counted from the first point, %.6g K", first))
	}
	for _, pc := range p.pieces {
		if !smooth {
			p.Warnings = append(p.Warnings, pc.anomalies()...)
		} else {
			p.Warnings = append(p.Warnings, pc.outliers()...)
		}
	}
	return p, nil
}

// cut makes the pieces.
func (p *Path) cut(run *data.Table, ts []Transition, smooth bool) error {
	phase, err := run.Column("phase")
	byPhase := err == nil && phase.Text != nil
	order := make([]int, len(run.T))
	for i := range order {
		order[i] = i
	}
	sort.SliceStable(order, func(a, b int) bool { return run.T[order[a]] < run.T[order[b]] })
	pts := points(run)
	groups := make([][]int, len(ts)+1)
	for _, i := range order {
		g := sort.Search(len(ts), func(k int) bool { return ts[k].T > run.T[i] })
		if g > 0 && ts[g-1].T == run.T[i] {
			if !byPhase {
				return fmt.Errorf("calorimetry: row %d lies at the transition temperature %v: a column \"phase\" must say to which side it belongs", i+1, run.T[i])
			}
			if len(groups[g-1]) > 0 && phase.Text[groups[g-1][0]] == phase.Text[i] {
				g--
			}
		}
		groups[g] = append(groups[g], i)
	}
	for g, rows := range groups {
		from, to := math.Inf(-1), math.Inf(1)
		if g > 0 {
			from = float64(ts[g-1].T)
		}
		if g < len(ts) {
			to = float64(ts[g].T)
		}
		name := fmt.Sprintf("phase %d", g+1)
		if len(groups) == 1 {
			name = "solid"
		}
		if byPhase && len(rows) > 0 {
			name = phase.Text[rows[0]]
			for _, i := range rows {
				if phase.Text[i] != name {
					return fmt.Errorf("calorimetry: row %d is of phase %q, the rows before it of %q, and no transition is given between them; a spline does not cross a transition", i+1, phase.Text[i], name)
				}
			}
		}
		if len(rows) == 0 && g == len(groups)-1 && g > 0 {
			break // the path ends with the last transition
		}
		if len(rows) < 2 {
			return fmt.Errorf("calorimetry: %d points between %s and %s, want at least two", len(rows), limit(from), limit(to))
		}
		pc := &piece{name: name, from: from, to: to}
		for k, i := range rows {
			T := float64(run.T[i])
			if k > 0 && T == pc.t[k-1] && !smooth {
				return fmt.Errorf("calorimetry: rows %d and %d have the same temperature %v: average them, or use Smooth", rows[k-1]+1, i+1, run.T[i])
			}
			if !(run.Cp[i] > 0) {
				return fmt.Errorf("calorimetry: row %d: Cp = %v, want positive", i+1, run.Cp[i])
			}
			pc.t, pc.cp, pc.c = append(pc.t, T), append(pc.cp, float64(run.Cp[i])), append(pc.c, pts[i])
		}
		if err := pc.prepare(run, rows, smooth); err != nil {
			return err
		}
		p.pieces = append(p.pieces, pc)
	}
	p.pieces[0].from = p.pieces[0].t[0]
	last := p.pieces[len(p.pieces)-1]
	if math.IsInf(last.to, 1) {
		last.to = last.t[len(last.t)-1]
	}
	for _, t := range ts {
		p.jumps = append(p.jumps, t.jump())
	}
	return nil
}

func limit(T float64) string {
	switch {
	case math.IsInf(T, -1):
		return "0 K"
	case math.IsInf(T, 1):
		return "the last point"
	}
	return fmt.Sprintf("%.6g K", T)
}

// points returns the measured heat capacities as quantities: the random part an
// input of each, the common part one input of all.
func points(run *data.Table) []uncertain.Quantity {
	random := run.URandom
	if random == nil && run.UCommon == nil {
		random = run.U
	}
	out := make([]uncertain.Quantity, len(run.T))
	for i, c := range run.Cp {
		q := uncertain.Exact(float64(c))
		if random == nil && run.UCommon == nil {
			q = q.Withhold("the table has no uncertainties of Cp")
		}
		if random != nil && random[i] > 0 {
			q = uncertain.Measured(float64(c), float64(random[i])).Named(fmt.Sprintf("Cp(%.6g K)", float64(run.T[i])))
		}
		if run.UCommon != nil && run.UCommon[i] > 0 {
			q = q.Plus(run.CommonError().Scale(float64(run.UCommon[i])))
		}
		out[i] = q
	}
	return out
}

// prepare makes the curve and adds the uncertainties of T.
func (pc *piece) prepare(run *data.Table, rows []int, smooth bool) error {
	pc.x = make([]float64, len(pc.t))
	for i, T := range pc.t {
		pc.x[i] = math.Log(T)
	}
	if smooth {
		if err := pc.smooth(run, rows); err != nil {
			return err
		}
	} else {
		pc.s = newSpline(pc.x)
	}
	if run.UT == nil {
		return nil
	}
	for k, i := range rows {
		if u := float64(run.UT[i]); u > 0 {
			slope := dotted(pc.s.slope(pc.x[k]), pc.cp) / pc.t[k]
			pc.c[k] = pc.c[k].Plus(uncertain.Measured(0, u).Named(fmt.Sprintf("T(%.6g K)", pc.t[k])).Scale(-slope))
		}
	}
	return nil
}

func dotted(w, y []float64) float64 {
	var s float64
	for i, wi := range w {
		s += float64(wi * y[i])
	}
	return s
}

// entropy and enthalpy of the piece between two temperatures.
func (pc *piece) entropy(a, b float64) uncertain.Quantity {
	w := pc.s.integral(math.Log(a), math.Log(b), func(float64) float64 { return 1 })
	return uncertain.Linear(dotted(w, pc.cp), w, pc.c)
}

func (pc *piece) enthalpy(a, b float64) uncertain.Quantity {
	w := pc.s.integral(math.Log(a), math.Log(b), math.Exp)
	return uncertain.Linear(dotted(w, pc.cp), w, pc.c)
}

// First and Last return the range of temperature that the points cover.
func (p *Path) First() unit.Temperature { return unit.Temperature(p.pieces[0].t[0]) }

// Last returns the highest temperature of the path.
func (p *Path) Last() unit.Temperature {
	return unit.Temperature(p.last())
}

func (p *Path) last() float64 {
	end := p.pieces[len(p.pieces)-1].to
	if n := len(p.jumps); n > 0 {
		end = max(end, p.jumps[n-1].t)
	}
	return end
}

// check panics unless T lies on the path.
func (p *Path) check(fn string, T unit.Temperature) float64 {
	x := float64(T)
	low := 0.0
	if p.low == nil {
		low = p.pieces[0].t[0]
	}
	if !(x > 0) || x < low || !(x <= p.last()) {
		panic(&statmech.DomainError{Func: "calorimetry.Path." + fn, Arg: "T", Value: T.String(),
			Want: fmt.Sprintf("between %.6g K and %.6g K, where there are data", low, p.last())})
	}
	return x
}

// A Contribution is one part of an entropy or enthalpy.
type Contribution struct {
	Name     string
	From, To unit.Temperature // equal for a transition
	Entropy  uncertain.Quantity
	Enthalpy uncertain.Quantity
}

// Contributions returns the parts of S(T) and H(T) - H(0), from below.
func (p *Path) Contributions(T unit.Temperature) []Contribution {
	x := p.check("Contributions", T)
	var out []Contribution
	add := func(name string, a, b float64, s, h uncertain.Quantity) {
		out = append(out, Contribution{name, unit.Temperature(a), unit.Temperature(b), s.WithUnit("J/(mol K)"), h.WithUnit("J/mol")})
	}
	first := p.pieces[0].t[0]
	if p.low != nil {
		end := min(x, first)
		add("extrapolation, "+p.low.Describe(), 0, end, p.low.Entropy(unit.Temperature(end)), p.low.Enthalpy(unit.Temperature(end)))
	}
	for i, pc := range p.pieces {
		if end := min(x, pc.to); end > pc.from {
			add(pc.name, pc.from, end, pc.entropy(pc.from, end), pc.enthalpy(pc.from, end))
		}
		if i < len(p.jumps) && x > p.jumps[i].t {
			j := p.jumps[i]
			add(j.name, j.t, j.t, j.s, j.h)
		}
	}
	// A path that ends with a transition includes it at its own temperature.
	if n := len(p.jumps); n == len(p.pieces) && x == p.jumps[n-1].t {
		j := p.jumps[n-1]
		add(j.name, j.t, j.t, j.s, j.h)
	}
	return out
}

// Entropy returns S(T), in J/(mol K), from 0 K (from the first point if there
// is no extrapolation), taking S(0) = 0. At the temperature of a transition it
// is that of the phase below, unless the path ends there.
func (p *Path) Entropy(T unit.Temperature) uncertain.Quantity {
	var parts []uncertain.Quantity
	for _, c := range p.Contributions(T) {
		parts = append(parts, c.Entropy)
	}
	return uncertain.Sum(parts...).WithUnit("J/(mol K)").Named(fmt.Sprintf("S(%.6g K)", float64(T)))
}

// Enthalpy returns H(T) - H(0), in J/mol.
func (p *Path) Enthalpy(T unit.Temperature) uncertain.Quantity {
	var parts []uncertain.Quantity
	for _, c := range p.Contributions(T) {
		parts = append(parts, c.Enthalpy)
	}
	return uncertain.Sum(parts...).WithUnit("J/mol").Named(fmt.Sprintf("H(%.6g K)-H(0)", float64(T)))
}

// GibbsFunction returns -(G(T) - H(0))/T = S(T) - (H(T) - H(0))/T, in J/(mol K).
func (p *Path) GibbsFunction(T unit.Temperature) uncertain.Quantity {
	return p.Entropy(T).Minus(p.Enthalpy(T).Scale(1 / float64(T))).WithUnit("J/(mol K)").Named(fmt.Sprintf("-(G-H(0))/T(%.6g K)", float64(T)))
}

// HeatCapacity returns the interpolated Cp at T, in J/(mol K).
func (p *Path) HeatCapacity(T unit.Temperature) uncertain.Quantity {
	x := p.check("HeatCapacity", T)
	if x < p.pieces[0].t[0] {
		return p.low.HeatCapacity(T)
	}
	for _, pc := range p.pieces {
		if x <= pc.to {
			w := pc.s.at(math.Log(x))
			return uncertain.Linear(dotted(w, pc.cp), w, pc.c).WithUnit("J/(mol K)")
		}
	}
	panic(&statmech.DomainError{Func: "calorimetry.Path.HeatCapacity", Arg: "T", Value: T.String(), Want: "inside a phase"})
}

// Notes returns the warnings that concern the entropy at T: those of the path,
// and the share of the extrapolation where it is large.
func (p *Path) Notes(T unit.Temperature) []string {
	notes := append([]string(nil), p.Warnings...)
	p.check("Notes", T)
	if p.low != nil {
		part, total := p.Contributions(T)[0].Entropy.Value(), p.Entropy(T).Value()
		if share := part / total; share > largeShare {
			notes = append(notes, fmt.Sprintf("%.1f %% of the entropy lies below the first point, %v", 100*share, p.First()))
		}
	}
	total := p.Entropy(T).Value()
	for _, pc := range p.pieces {
		for k := 2; k+1 < len(pc.t) && pc.t[k] <= float64(T); k++ {
			a, b, c, d := pc.t[k-2], pc.t[k-1], pc.t[k], pc.t[k+1]
			if b > a && d > c && c-b > 3*max(b-a, d-c) && math.Log(c/b) > 3*max(math.Log(b/a), math.Log(d/c)) {
				notes = append(notes, fmt.Sprintf("%.1f %% of the entropy lies in a gap of the points between %.6g K and %.6g K", 100*pc.entropy(b, c).Value()/total, b, c))
			}
		}
		if n := len(pc.t); pc.to > pc.t[n-1] && float64(T) > pc.t[n-1] {
			notes = append(notes, fmt.Sprintf("%s carried on from its last point, %.6g K, to %.6g K", pc.name, pc.t[n-1], pc.to))
		}
		if pc.from < pc.t[0] && float64(T) > pc.from {
			notes = append(notes, fmt.Sprintf("%s carried on from its first point, %.6g K, down to %.6g K", pc.name, pc.t[0], pc.from))
		}
	}
	return notes
}

// String returns the path in words.
func (p *Path) String() string {
	return strings.TrimSpace(fmt.Sprintf("%s: %d phases from %v to %v", p.Name, len(p.pieces), p.First(), p.Last()))
}
