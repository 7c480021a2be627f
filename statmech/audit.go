package statmech

import (
	"fmt"
	"math"
	"strings"

	"levelsum/display"
	"levelsum/statmech/unit"
)

// A GroundDegenerate is a Mode that declares the degeneracy g₀ of its ground
// level; its entropy must tend to k ln g₀ as T → 0. Classical forms and
// translation do not declare one.
type GroundDegenerate interface {
	GroundDegeneracy() float64
}

// A HighTemperatureLimited is a Mode that declares the limit of C/k for T → ∞:
// 1 for an oscillator or a linear rotor, 3/2 for another rotor, 0 for a bounded
// spectrum.
type HighTemperatureLimited interface {
	HighTemperatureHeatCapacity() float64
}

// AuditOptions say where and how strictly [Audit] looks. The zero value is a
// grid of 60 temperatures from 1 K to 10000 K, equal steps in ln T, and a
// tolerance of 1e-6.
type AuditOptions struct {
	From, To  unit.Temperature
	Points    int
	Tolerance float64 // allowed departure in units of k, relative to 1 + |value|
}

// An AuditCheck is the outcome of one identity over the grid.
type AuditCheck struct {
	Name      string
	Departure float64          // largest, relative to 1 + |value|
	At        unit.Temperature // where it is largest
	Allowed   float64
	Note      string // why a check was not made, or what the number cannot say
}

// OK reports whether the identity holds within what is allowed.
func (c AuditCheck) OK() bool { return c.Departure <= c.Allowed }

// An AuditReport lists the checks of a mode. It shows itself as a table.
type AuditReport struct {
	Checks []AuditCheck
}

// OK reports whether every check that was made is within what is allowed.
func (r AuditReport) OK() bool {
	for _, c := range r.Checks {
		if !c.OK() {
			return false
		}
	}
	return true
}

// String returns the report as a plain-text table.
func (r AuditReport) String() string {
	var b strings.Builder
	fmt.Fprintf(&b, "%-28s %-10s %-12s %-10s %s\n", "check", "departure", "at", "allowed", "verdict")
	for _, c := range r.Checks {
		at, verdict := "", "holds"
		if c.At > 0 {
			at = c.At.String()
		}
		if !c.OK() {
			verdict = "DOES NOT HOLD"
		}
		if c.Note != "" {
			verdict += " (" + c.Note + ")"
		}
		fmt.Fprintf(&b, "%-28s %-10.1e %-12s %-10.1e %s\n", c.Name, c.Departure, at, c.Allowed, verdict)
	}
	return b.String()
}

// View shows the report as a table.
func (r AuditReport) View() display.View {
	var names, at, verdicts []string
	var departures, allowed []float64
	for _, c := range r.Checks {
		T, verdict := "", "holds"
		if c.At > 0 {
			T = c.At.String()
		}
		switch {
		case !c.OK():
			verdict = "does not hold"
		case strings.HasPrefix(c.Note, "not made"):
			verdict = c.Note
		}
		departure := c.Departure
		if math.IsInf(departure, 0) {
			departure, verdict = 1, "does not hold: "+c.Note
		}
		names, at, verdicts = append(names, c.Name), append(at, T), append(verdicts, verdict)
		departures, allowed = append(departures, departure), append(allowed, c.Allowed)
	}
	return display.Table{Caption: "Audit of a mode", Columns: []display.Column{
		{Quantity: "check", Values: names}, {Quantity: "largest departure", Values: departures, Digits: 2}, {Quantity: "at", Values: at},
		{Quantity: "allowed", Values: allowed, Digits: 2}, {Quantity: "verdict", Values: verdicts},
	}}.View()
}

// Audit checks the three functions of a mode against one another over a grid
// of temperatures. The derivatives are taken by extrapolated central
// differences of the mode's own ln q in ln T, so U and C are tested by a route
// that does not use the mode's formulas for them:
//
//	U/kT = ∂ln q/∂ln T,   C/k = U/kT + ∂(U/kT)/∂ln T,
//	∫ C/k d ln T over the grid = difference of S/k = ln q + U/kT,
//	C >= 0,
//	S/k → ln g₀ as T → 0 if the mode is [GroundDegenerate],
//	C/k → its declared limit as T → ∞ if the mode is [HighTemperatureLimited].
//
// A translation at fixed pressure passes as well: its U is an enthalpy and its
// ln q is that at fixed pressure.
//
// The limits are looked at where the mode's own U (below) or C (above) no
// longer changes; if that is outside what float64 temperatures between 1e-6 K
// and 1e9 K reach, the note says so. What the audit cannot see: an error that
// leaves all three functions consistent, such as a wrong energy.
func Audit(m Mode, o AuditOptions) AuditReport {
	if o.From == 0 {
		o.From = 1 * unit.K
	}
	if o.To == 0 {
		o.To = 1e4 * unit.K
	}
	if o.Points == 0 {
		o.Points = 60
	}
	if o.Tolerance == 0 {
		o.Tolerance = 1e-6
	}
	CheckTemperature("statmech.Audit", o.From)
	CheckTemperature("statmech.Audit", o.To)
	if o.To <= o.From || o.Points < 2 {
		panic(&DomainError{"statmech.Audit", "To", o.To.String(), "above From = " + o.From.String() + ", with at least two points"})
	}
	u := AuditCheck{Name: "U/kT = d ln q/d ln T", Allowed: o.Tolerance}
	c := AuditCheck{Name: "C/k = d(T U/kT)/dT", Allowed: o.Tolerance}
	s := AuditCheck{Name: "S/k by integration of C/T", Allowed: o.Tolerance}
	pos := AuditCheck{Name: "C >= 0", Allowed: 1e-12}
	finite := AuditCheck{Name: "finite everywhere", Allowed: 0}
	step := math.Log(float64(o.To/o.From)) / float64(o.Points-1)
	at := func(lnT float64) Reduced { return m.Reduced(unit.Temperature(math.Exp(lnT))) }
	lo := math.Log(float64(o.From))
	for i := range o.Points {
		x := lo + float64(i)*step
		T := unit.Temperature(math.Exp(x))
		r := at(x)
		if bad := r.LogQ + r.U + r.C; bad-bad != 0 {
			finite.worst(1, T)
			continue
		}
		u.worst(math.Abs(slope(func(y float64) float64 { return at(y).LogQ }, x)-r.U)/(1+math.Abs(r.U)), T)
		c.worst(math.Abs(r.U+slope(func(y float64) float64 { return at(y).U }, x)-r.C)/(1+math.Abs(r.C)), T)
		pos.worst(math.Max(0, -r.C), T)
		if i > 0 {
			before := at(x - step)
			d := integral(func(y float64) float64 { return at(y).C }, x-step, x, 1e-10*(1+math.Abs(r.C)), 18) - (r.Entropy() - before.Entropy())
			s.worst(math.Abs(d)/(1+math.Abs(r.C)*step), T)
		}
	}
	return AuditReport{[]AuditCheck{finite, u, c, s, pos, thirdLaw(m, o), hotLimit(m, o)}}
}

func (c *AuditCheck) worst(d float64, T unit.Temperature) {
	if d > c.Departure || d != d {
		c.Departure, c.At = d, T
		if d != d {
			c.Departure = math.Inf(1)
		}
	}
}

// slope returns f′(x) by central differences, extrapolated to step zero by
// Neville's scheme (C. J. F. Ridders, Adv. Eng. Softw. 4, 75, 1982); the entry
// whose neighbours agree best is taken.
func slope(f func(float64) float64, x float64) float64 {
	const n, ratio = 8, 1.6
	var a [n][n]float64
	h := 0.05
	best, err := math.NaN(), math.Inf(1)
	for i := range n {
		a[0][i] = (f(x+h) - f(x-h)) / (2 * h)
		fac := ratio * ratio
		for j := 1; j <= i; j++ {
			a[j][i] = (a[j-1][i]*fac - a[j-1][i-1]) / (fac - 1)
			fac *= ratio * ratio
			if e := math.Max(math.Abs(a[j][i]-a[j-1][i]), math.Abs(a[j][i]-a[j-1][i-1])); e <= err {
				best, err = a[j][i], e
			}
		}
		h /= ratio
	}
	return best
}

// integral is adaptive Simpson quadrature.
func integral(f func(float64) float64, a, b, tol float64, depth int) float64 {
	m := (a + b) / 2
	fa, fm, fb := f(a), f(m), f(b)
	return simpson(f, a, b, fa, fm, fb, (b-a)/6*(fa+4*fm+fb), tol, depth)
}

func simpson(f func(float64) float64, a, b, fa, fm, fb, whole, tol float64, depth int) float64 {
	m := (a + b) / 2
	fl, fr := f((a+m)/2), f((m+b)/2)
	left, right := (m-a)/6*(fa+4*fl+fm), (b-m)/6*(fm+4*fr+fb)
	d := left + right - whole
	if depth == 0 || math.Abs(d) <= 15*tol {
		return left + right + d/15
	}
	return simpson(f, a, m, fa, fl, fm, left, tol/2, depth-1) + simpson(f, m, b, fm, fr, fb, right, tol/2, depth-1)
}

// thirdLaw goes down in T until U/kT is negligible and compares S/k with ln g₀.
func thirdLaw(m Mode, o AuditOptions) AuditCheck {
	c := AuditCheck{Name: "S/k → ln g0 as T → 0", Allowed: math.Max(o.Tolerance, 1e-6)}
	g, ok := m.(GroundDegenerate)
	if !ok {
		c.Note = "not made: the mode declares no ground degeneracy"
		return c
	}
	for T := o.From; T > 1e-9; T /= 2 {
		if r := m.Reduced(T); r.U < 1e-7 && r.C < 1e-7 {
			c.worst(math.Abs(r.Entropy()-math.Log(g.GroundDegeneracy())), T)
			return c
		}
	}
	c.Departure, c.Note = math.Inf(1), "U/kT does not vanish down to 1e-9 K"
	return c
}

// hotLimit goes up in T until C/k no longer changes and compares it with the
// declared limit.
func hotLimit(m Mode, o AuditOptions) AuditCheck {
	c := AuditCheck{Name: "C/k → its limit as T → ∞", Allowed: math.Max(o.Tolerance, 1e-4)}
	h, ok := m.(HighTemperatureLimited)
	if !ok {
		c.Note = "not made: the mode declares no limit"
		return c
	}
	want := h.HighTemperatureHeatCapacity()
	last := m.Reduced(o.To).C
	for T := 2 * o.To; T < 1e9; T *= 2 {
		now := m.Reduced(T).C
		if math.Abs(now-last) < 1e-6 {
			c.worst(math.Abs(now-want), T)
			return c
		}
		last = now
	}
	c.Note = "not made: C/k still changes at 1e9 K"
	return c
}
