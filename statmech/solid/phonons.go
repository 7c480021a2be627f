package solid

import (
	"errors"
	"fmt"
	"math"
	"runtime"
	"slices"
	"sync"

	"levelsum/display"
	"levelsum/statmech"
	"levelsum/statmech/internal/heats"
	"levelsum/statmech/internal/lanes"
	"levelsum/statmech/special"
	"levelsum/statmech/unit"
)

// Normalisation says what the integral of a tabulated density of states is
// meant to be.
type Normalisation int

// The choice has no default: a table without it is refused.
const (
	IntegralOne       Normalisation = iota + 1 // 1
	IntegralThree                              // 3: per atom
	IntegralCellModes                          // 3N, N atoms in the cell
)

func (n Normalisation) String() string {
	switch n {
	case IntegralOne:
		return "1"
	case IntegralThree:
		return "3 per atom"
	case IntegralCellModes:
		return "3 N per cell"
	}
	return "not chosen"
}

// A PhononTable is a density of vibrational states as computed or measured.
type PhononTable struct {
	// Energies are the quanta ħω of the rows in increasing order, made with
	// their unit: unit.Energies(column, unit.THzEnergy), unit.MilliEV,
	// unit.PerCm. Imaginary frequencies are given as negative.
	Energies []unit.Energy
	// States are the values of the density at these points, per Per.
	States []float64
	Per    unit.Energy // unit of the axis that States are per: unit.THzEnergy …

	Integral        Normalisation
	AtomsPerCell    int
	AtomsPerFormula int
}

// Phonons is a crystal with a given density of states g(ω), harmonic,
//
//	C_V = n R ∫ g(ω) x² eˣ/(eˣ-1)² dω,  x = ħω/kT,
//
// n = 3 for each atom, ∫ g dω = 1. It is made by [NewPhonons]. Between the
// points g is a piecewise cubic (exact for g ∝ ω², no overshoot), below the
// first point it falls to 0 as ω².
//
// Accuracy: the integrals over this g are good to 1e-12 relative
// (TestPhononsQuadrature), so that a parabola on 1000 points gives Debye's
// functions to 1e-8 (TestPhononsDebye). How well the points describe
// the crystal is another matter.
//
// A Phonons may be used by several goroutines. Its methods panic with a
// [*statmech.DomainError] if T is not positive and finite.
type Phonons struct {
	knots    []knot
	count    float64 // modes in the formula unit
	cell     float64 // modes in the cell
	share    float64 // of the table, of imaginary frequencies, left out
	measured float64 // integral of the table over what it is meant to be
	warnings []string

	mu    sync.Mutex // guards rules
	rules []rule     // made for some lowest temperatures, latest first
}

// A knot is a point of the density: ω in K, g in 1/K, slope in 1/K².
type knot struct{ w, g, slope float64 }

// Limits of what is accepted: departure of the integral, and weight of
// imaginary frequencies, above which a table is refused.
const (
	integralTolerance  = 0.01
	imaginaryTolerance = 0.005
)

// NewPhonons checks a table and makes a crystal of it. A table is refused if
// its integral departs by more than 1 % from what it is meant to be, if
// imaginary frequencies have more than 0.5 % of it, if a density is negative by
// more than 0.1 % of the largest, or if rows are out of order. Smaller flaws
// are corrected and named by Warnings.
func NewPhonons(t PhononTable) (*Phonons, error) {
	const fn = "solid.NewPhonons"
	wrong := func(arg, value, want string) (*Phonons, error) {
		return nil, &statmech.DomainError{Func: fn, Arg: arg, Value: value, Want: want}
	}
	n := len(t.Energies)
	switch {
	case len(t.States) != n:
		return wrong("States", fmt.Sprintf("%d values", len(t.States)), fmt.Sprintf("one for each of %d energies", n))
	case n < 4:
		return wrong("Energies", fmt.Sprintf("%d points", n), "at least 4")
	case !positive(float64(t.Per)):
		return wrong("Per", t.Per.String(), "the unit of the axis that States are per, such as unit.THzEnergy")
	case t.Integral < IntegralOne || t.Integral > IntegralCellModes:
		return wrong("Integral", t.Integral.String(), "IntegralOne, IntegralThree or IntegralCellModes")
	case t.AtomsPerCell < 1:
		return wrong("AtomsPerCell", fmt.Sprint(t.AtomsPerCell), "at least 1")
	case t.AtomsPerFormula < 1:
		return wrong("AtomsPerFormula", fmt.Sprint(t.AtomsPerFormula), "at least 1")
	}
	top := 0.0
	for i, g := range t.States {
		e := t.Energies[i]
		if math.IsNaN(g) || math.IsInf(g, 0) || math.IsNaN(float64(e)) || math.IsInf(float64(e), 0) {
			return wrong(fmt.Sprintf("row %d", i+1), fmt.Sprintf("%v, %g", e, g), "finite numbers")
		}
		if i > 0 && !(e > t.Energies[i-1]) {
			return wrong(fmt.Sprintf("Energies[%d]", i), e.String(), "larger than the one before, "+t.Energies[i-1].String())
		}
		top = max(top, g)
	}
	if top == 0 {
		return wrong("States", "all zero", "a density of states")
	}
	p := &Phonons{count: 3 * float64(t.AtomsPerFormula), cell: 3 * float64(t.AtomsPerCell)}
	clipped := 0
	per := float64(t.Per) / unit.Boltzmann
	g := make([]float64, n)
	w := make([]float64, n)
	for i, v := range t.States {
		if v < -1e-3*top {
			return wrong(fmt.Sprintf("States[%d]", i), fmt.Sprintf("%g at %v", v, t.Energies[i]), "a density that is not negative")
		}
		if v < 0 {
			clipped, v = clipped+1, 0
		}
		w[i] = float64(t.Energies[i]) / unit.Boltzmann
		g[i] = v / per
	}
	if clipped > 0 {
		p.warnings = append(p.warnings, fmt.Sprintf("%d negative densities, each below 0.1 %% of the largest, taken as 0", clipped))
	}
	// Split at ω = 0.
	first := 0
	for first < n && w[first] < 0 {
		first++
	}
	if n-first < 3 {
		return wrong("Energies", fmt.Sprintf("%d points of real frequency", n-first), "at least 3")
	}
	imaginary := 0.0
	if first > 0 {
		// down to ω = 0 itself
		ws, gs := w[:first:first], g[:first:first]
		ws = append(ws, 0)
		switch {
		case w[first] == 0:
			gs = append(gs, g[first])
		default:
			gs = append(gs, 0)
		}
		imaginary = integral(cubic(ws, gs))
	}
	real := cubic(w[first:], g[first:])
	if real[0].w > 0 {
		real = append([]knot{{}}, real...)
		if first := real[1]; first.g > 0 {
			// c ω² up to the first point: a cubic with the slope 2g/ω there.
			real[1].slope = min(2*first.g/first.w, 3*first.g/first.w)
		}
	}
	if g0 := real[0].g; real[0].w == 0 && g0 > 1e-3*top/per {
		p.warnings = append(p.warnings, fmt.Sprintf("the density at ω = 0 is %.2g of the largest: sound waves have none there, and entropy and low-temperature heat capacity take it at its word", g0*per/top))
	}
	area := integral(real)
	whole := area + imaginary
	p.share = imaginary / whole
	want := map[Normalisation]float64{IntegralOne: 1, IntegralThree: 3, IntegralCellModes: p.cell}[t.Integral]
	p.measured = whole / want
	if d := math.Abs(p.measured - 1); d > integralTolerance {
		return wrong("integral of the table", fmt.Sprintf("%.6g", whole), fmt.Sprintf("%g within 1 %%: check the normalisation, the unit that States are per and the range", want))
	} else if d > 1e-6 {
		p.warnings = append(p.warnings, fmt.Sprintf("the integral is %.6g of what it is meant to be; the density was scaled", p.measured))
	}
	if p.share > imaginaryTolerance {
		return wrong("imaginary frequencies", fmt.Sprintf("%.3g %% of the states", 100*p.share), "at most 0.5 %: this lattice is not stable, and no heat capacity belongs to it")
	} else if p.share > 0 {
		p.warnings = append(p.warnings, fmt.Sprintf("imaginary frequencies have %.2g %% of the states; they were left out and the others scaled", 100*p.share))
	}
	scale := 1 / area
	for i, k := range real {
		real[i] = knot{k.w, k.g * scale, k.slope * scale}
	}
	p.knots = real
	return p, nil
}

// cubic returns knots with the slopes of parabolas through three points,
// limited so that the cubic between two points does not overshoot (F. N.
// Fritsch and R. E. Carlson, SIAM J. Numer. Anal. 17, 238 (1980)).
func cubic(w, g []float64) []knot {
	n := len(w)
	k := make([]knot, n)
	secant := func(i int) float64 { return (g[i+1] - g[i]) / (w[i+1] - w[i]) }
	first, last := secant(0), secant(n-2)
	k[0] = knot{w: w[0], g: g[0], slope: first}
	k[n-1] = knot{w: w[n-1], g: g[n-1], slope: last}
	if n > 2 {
		s := secant(1)
		k[0].slope = first + (first-s)*(w[1]-w[0])/(w[2]-w[0])
		s = secant(n - 3)
		k[n-1].slope = last + (last-s)*(w[n-1]-w[n-2])/(w[n-1]-w[n-3])
	}
	k[0].slope = limited(k[0].slope, first, first)
	k[n-1].slope = limited(k[n-1].slope, last, last)
	inParallel(n-2, 5, func(from, to int) {
		before := secant(from)
		for i := from + 1; i <= to; i++ {
			h0, h1 := w[i]-w[i-1], w[i+1]-w[i]
			after := (g[i+1] - g[i]) / h1
			k[i] = knot{w[i], g[i], limited((before*h1+after*h0)/(h0+h1), before, after)}
			before = after
		}
	})
	return k
}

// limited returns a slope made so small that the cubics to both sides, whose
// mean slopes are given, do not overshoot.
func limited(slope, before, after float64) float64 {
	if before*after < 0 || slope*math.Copysign(1, before) < 0 {
		return math.Copysign(0, slope)
	}
	return math.Copysign(min(math.Abs(slope), 3*math.Abs(before), 3*math.Abs(after)), slope)
}

// integral returns ∫ g dω of the cubics, exactly.
func integral(k []knot) float64 {
	sum := 0.0
	for i := range len(k) - 1 {
		h := k[i+1].w - k[i].w
		sum += h*(k[i].g+k[i+1].g)/2 + h*h*(k[i].slope-k[i+1].slope)/12
	}
	return sum
}

// density returns g between knots i and i+1 at ω.
func (p *Phonons) density(i int, w float64) float64 {
	a, b := p.knots[i], p.knots[i+1]
	h := b.w - a.w
	t := (w - a.w) / h
	u := 1 - t
	return u*u*(1+2*t)*a.g + t*t*(1+2*u)*b.g + h*t*u*(u*a.slope-t*b.slope)
}

// String says how many modes and which range of frequencies the density has.
func (p *Phonons) String() string {
	return fmt.Sprintf("Phonons{%g modes per formula unit, %d points up to ħω/k = %.6g K}", p.count, len(p.knots), p.knots[len(p.knots)-1].w)
}

// Warnings returns what was found wrong with the table and set right.
func (p *Phonons) Warnings() []string { return append([]string(nil), p.warnings...) }

// ImaginaryShare returns the share of the states that had imaginary
// frequencies and were left out.
func (p *Phonons) ImaginaryShare() float64 { return p.share }

// PerCell returns the same crystal per mole of cells instead of formula units.
func (p *Phonons) PerCell() *Phonons {
	return &Phonons{knots: p.knots, count: p.cell, cell: p.cell, share: p.share, measured: p.measured, warnings: p.warnings}
}

// ModeCount returns the number of vibrations in the formula unit.
func (p *Phonons) ModeCount() float64 { return p.count }

// GroundDegeneracy returns 1.
func (p *Phonons) GroundDegeneracy() float64 { return 1 }

// HighTemperatureHeatCapacity returns the limit of C/k.
func (p *Phonons) HighTemperatureHeatCapacity() float64 { return p.count }

// ZeroPointEnergy returns n ∫ g ħω/2 dω per formula unit.
func (p *Phonons) ZeroPointEnergy() unit.Energy {
	return unit.Energy(p.count/2*unit.Boltzmann) * unit.Energy(p.average(func(w float64) float64 { return w }))
}

// average returns ∫ g f dω for an f that is smooth between ω and 2ω.
func (p *Phonons) average(f func(w float64) float64) float64 {
	sum := 0.0
	r := p.rule(p.knots[len(p.knots)-1].w)
	for i, w := range r.w {
		sum += r.weight[i] * f(w)
	}
	return sum
}

// ErrMoment is returned for a moment that does not exist.
var ErrMoment = errors.New("solid: the moment does not exist for a density that grows as ω²")

// Moment returns the n-th moment of the density, ⟨(ħω/k)ⁿ⟩ in Kⁿ, n > -3.
func (p *Phonons) Moment(n float64) (float64, error) {
	if !(n > -3) || math.IsInf(n, 1) || n <= -1 && p.knots[0].w == 0 && p.knots[0].g > 0 {
		return 0, fmt.Errorf("%w: n = %g", ErrMoment, n)
	}
	m := p.average(func(w float64) float64 { return math.Pow(w, n) })
	if p.knots[0].g == 0 {
		// The lowest piece, from 0 on, holds c ω²: its Gauss points are not
		// made for ωⁿ, the integral is closed.
		r := p.rule(p.knots[len(p.knots)-1].w)
		for i := range gauss6Nodes {
			m -= r.weight[i] * math.Pow(r.w[i], n)
		}
		end := r.first
		m += p.density(0, end) * math.Pow(end, n+1) / (n + 3)
	}
	return m, nil
}

// MomentTheta returns the Debye temperature of the Debye spectrum that has the
// same n-th moment, [(n+3)/3 ⟨ωⁿ⟩]^(1/n); for n = 0 the one with the same mean
// of ln ω, exp(1/3 + ⟨ln ω⟩). n = 1 belongs to the zero-point energy, n = 2 to
// the high-temperature heat capacity, n = 0 to the high-temperature entropy,
// n = -2 to the mean square displacement.
func (p *Phonons) MomentTheta(n float64) (unit.Temperature, error) {
	if n == 0 {
		return unit.Temperature(math.Exp(1./3 + p.average(math.Log))), nil
	}
	m, err := p.Moment(n)
	if err != nil {
		return 0, err
	}
	return unit.Temperature(math.Pow((n+3)/3*m, 1/n)), nil
}

func (p *Phonons) bad() *statmech.DomainError { return nil }

func (p *Phonons) reduced(T float64) statmech.Reduced { return p.rule(T).reduced(T).Scale(p.count) }

func (r rule) reduced(T float64) statmech.Reduced {
	var out statmech.Reduced
	for i, w := range r.w {
		lnq, u, c := special.EinsteinThermal(w / T)
		out.LogQ += float64(r.weight[i] * lnq)
		out.U += float64(r.weight[i] * u)
		out.C += float64(r.weight[i] * c)
	}
	return out
}

// reducedAt is reduced with one rule for all temperatures.
func (p *Phonons) reducedAt(ts []float64) []statmech.Reduced {
	out := make([]statmech.Reduced, len(ts))
	if len(ts) == 0 {
		return out
	}
	r := p.rule(slices.Min(ts))
	inParallel(len(ts), 30*len(r.w), func(from, to int) {
		for i := from; i < to; i++ {
			out[i] = r.reduced(ts[i]).Scale(p.count)
		}
	})
	return out
}

// ReducedAt returns ln q, U/kT and C/k at every temperature; see
// [statmech.SliceMode].
func (p *Phonons) ReducedAt(ts []unit.Temperature) []statmech.Reduced {
	return p.reducedAt(kelvins(p, "solid.Phonons.ReducedAt", ts))
}

func (p *Phonons) whole() {}

func (p *Phonons) heat(T float64) float64 {
	x := []float64{T}
	p.heats(x, x)
	return x[0]
}

func (p *Phonons) heats(dst, ts []float64) {
	if len(ts) == 0 {
		return
	}
	r := p.rule(slices.Min(ts))
	inParallel(len(ts), len(r.w), func(from, to int) {
		for ; from < to && !display.Interrupted(); from += lanes.Width {
			n := min(lanes.Width, to-from)
			var inverse, sum [lanes.Width]float64
			for l := range inverse {
				inverse[l] = 1 / ts[from+min(l, n-1)] // lanes too many repeat the last temperature
			}
			r.addHeats(&sum, &inverse)
			for l, c := range sum[:n] {
				dst[from+l] = p.count * c
			}
		}
	})
	display.Checkpoint()
}

// addHeats adds Σ weightᵢ C(wᵢ/T) for eight inverse temperatures to sum.
func (r rule) addHeats(sum, inverse *[lanes.Width]float64) {
	warm := slices.Min(inverse[:])
	for i := 0; i < len(r.w); i++ {
		i += heats.Einstein.AddProducts(sum, inverse, r.w[i:], r.weight[i:])
		if i == len(r.w) || r.w[i]*warm > heatIsZero {
			continue
		}
		// Beyond the table for the coldest at least.
		for l, y := range inverse {
			sum[l] += float64(r.weight[i] * special.EinsteinC(r.w[i]*y))
		}
	}
}

// heatIsZero is an x from which on special.EinsteinC is 0.
const heatIsZero = 750

// inParallel calls f for parts of 0 … n-1, on all processors if n calls of the
// given cost (in nanoseconds) are worth it, and waits for them.
func inParallel(n, cost int, f func(from, to int)) {
	workers := min(runtime.GOMAXPROCS(0), n)
	if n*cost < 50_000 || workers < 2 {
		f(0, n)
		return
	}
	var wait sync.WaitGroup
	for k := range workers {
		wait.Go(func() { f(k*n/workers, (k+1)*n/workers) })
	}
	wait.Wait()
}

// Owns implements [Differentiable]: nothing of a table is free.
func (p *Phonons) Owns(*float64) (string, bool) { return "", false }

// Accumulate implements [Differentiable].
func (p *Phonons) Accumulate(ts []unit.Temperature, at []*float64, c []float64, partials [][]float64) error {
	if c == nil {
		return nil
	}
	x := make([]float64, len(ts))
	for i, T := range ts {
		t, err := temperature("solid.Phonons.Accumulate", "T", T)
		if err != nil {
			return err
		}
		x[i] = t
	}
	p.heats(x, x)
	for i, v := range x {
		c[i] += float64(unit.GasConstant * v)
	}
	return nil
}
