package gas

import (
	"fmt"
	"math"
	"slices"
	"sync"

	"levelsum/display"
	"levelsum/statmech"
	"levelsum/statmech/unit"
)

// A TorsionMethod says how the functions of an internal rotation are computed.
type TorsionMethod int

const (
	// Diagonalised finds the levels in a basis of plane waves.
	Diagonalised TorsionMethod = iota
	// PitzerGwinn multiplies the classical partition function by the quantum
	// over classical ratio of the oscillator at the deepest minimum (K. S.
	// Pitzer, W. D. Gwinn, J. Chem. Phys. 10, 428, 1942).
	PitzerGwinn
	// ClassicalTorsion is the classical phase-space integral.
	ClassicalTorsion
)

// String returns the name of the method.
func (m TorsionMethod) String() string {
	switch m {
	case Diagonalised:
		return "diagonalised"
	case PitzerGwinn:
		return "Pitzer-Gwinn (1942)"
	case ClassicalTorsion:
		return "classical"
	}
	return "unknown method"
}

// A Torsion is a one-dimensional internal rotation with
//
//	H = -F d²/dφ² + V(φ),  F = ħ²/2I_r as an energy,
//
// I_r the reduced moment of inertia. q is divided by the internal symmetry
// number once. Energies are counted from the lowest level (Diagonalised), from
// half a quantum above the minimum (PitzerGwinn) or from the minimum
// (ClassicalTorsion).
//
// Accuracy: levels 2e-8 cm⁻¹ (TestTorsionLevels), S, C and U 1e-8 of
// max(k, their size) (TestHinderedRotorTable).
//
// References: K. S. Pitzer, W. D. Gwinn, J. Chem. Phys. 10, 428 (1942); A. L. L.
// East, L. Radom, J. Chem. Phys. 106, 6655 (1997).
type Torsion struct {
	f         unit.Energy
	potential Fourier
	sigma     int
	method    TorsionMethod
	phi, vMin float64 // deepest minimum, rad and J
	quantum   float64 // of the oscillator there, J; 0 for a free rotor

	mu     sync.Mutex // guards levels and mMax
	levels *statmech.Levels
	mMax   int
}

// NewTorsion returns the internal rotation with the constant F = ħ²/2I_r, a
// potential, the internal symmetry number and a method. For a moment I,
// F is I.RotationalConstant().
//
// It returns a [*statmech.DomainError] if F or a coefficient is not finite, F
// not positive, or the symmetry number less than 1 or one that the potential
// does not have.
func NewTorsion(F unit.Energy, potential Fourier, sigma int, method TorsionMethod) (*Torsion, error) {
	const fn = "gas.NewTorsion"
	if !(F > 0) || math.IsInf(float64(F), 1) {
		return nil, &statmech.DomainError{Func: fn, Arg: "F", Value: F.String(), Want: "positive and finite"}
	}
	for _, list := range [][]unit.Energy{potential.Cos, potential.Sin} {
		for k, a := range list {
			if a-a != 0 {
				return nil, &statmech.DomainError{Func: fn, Arg: fmt.Sprintf("coefficient %d of the potential", k), Value: a.String(), Want: "finite"}
			}
		}
	}
	if sigma < 1 {
		return nil, &statmech.DomainError{Func: fn, Arg: "sigma", Value: fmt.Sprint(sigma), Want: "an internal symmetry number of 1 or more"}
	}
	if method < Diagonalised || method > ClassicalTorsion {
		return nil, &statmech.DomainError{Func: fn, Arg: "method", Value: fmt.Sprint(int(method)), Want: "Diagonalised, PitzerGwinn or ClassicalTorsion"}
	}
	if n := potential.fold(); potential.order() > 0 && n%sigma != 0 {
		return nil, &statmech.DomainError{Func: fn, Arg: "sigma", Value: fmt.Sprint(sigma), Want: fmt.Sprintf("a divisor of %d, the symmetry that the potential has", n)}
	}
	t := &Torsion{f: F, potential: potential, sigma: sigma, method: method}
	if 2*math.Sqrt(t.height()/float64(F))+20 > largestBasis/2 || potential.order() > 100 {
		return nil, &statmech.DomainError{Func: fn, Arg: "potential", Value: fmt.Sprintf("amplitudes of %.3g cm-1, order %d", unit.Energy(t.height()).In(unit.PerCm), potential.order()),
			Want: "below a million times F, of order 100 at most: units may be mixed"}
	}
	t.phi, t.vMin = potential.minimum()
	if _, _, v2 := potential.derivatives(t.phi); v2 > 0 {
		t.quantum = math.Sqrt(2 * float64(F) * v2)
	}
	return t, nil
}

// Reduced returns the functions at temperature T. It panics with a
// [*statmech.DomainError] if T is not positive and finite.
func (t *Torsion) Reduced(T unit.Temperature) statmech.Reduced {
	statmech.CheckTemperature("gas.Torsion.Reduced", T)
	switch t.method {
	case ClassicalTorsion:
		return t.classical(T)
	case PitzerGwinn:
		r := t.classical(T)
		if t.quantum > 0 {
			x := t.quantum / (unit.Boltzmann * float64(T))
			h := harmonic(x)
			r = r.Add(statmech.Reduced{LogQ: h.LogQ + math.Log(x), U: h.U - 1, C: h.C - 1})
		}
		return r
	}
	if t.need(T) > largestBasis {
		// kT is a million times F: the classical integral is exact to 1e-7,
		// counted from the ground level.
		r := t.classical(T)
		z := t.ZeroPointEnergy().OverKT(T)
		return r.Add(statmech.Reduced{LogQ: z, U: -z})
	}
	r := t.levelsTo(T).Reduced(T)
	r.LogQ -= math.Log(float64(t.sigma))
	return r
}

// ReducedAt is Reduced at each temperature.
func (t *Torsion) ReducedAt(ts []unit.Temperature) []statmech.Reduced {
	rs := make([]statmech.Reduced, len(ts))
	hot := unit.Temperature(0)
	for _, T := range ts {
		statmech.CheckTemperature("gas.Torsion.ReducedAt", T)
		hot = max(hot, T)
	}
	if t.method == Diagonalised && hot > 0 && t.need(hot) <= largestBasis {
		t.levelsTo(hot) // one diagonalisation for all
	}
	for i, T := range ts {
		display.Checkpoint()
		rs[i] = t.Reduced(T)
	}
	return rs
}

// String says what torsion it is.
func (t *Torsion) String() string {
	return fmt.Sprintf("torsion, F = %.6g cm-1, potential up to cos %dφ, internal symmetry number %d, %s", t.f.In(unit.PerCm), t.potential.order(), t.sigma, t.method)
}

// WithMethod returns the same torsion computed in another way.
func (t *Torsion) WithMethod(method TorsionMethod) (*Torsion, error) {
	return NewTorsion(t.f, t.potential, t.sigma, method)
}

// HarmonicQuantum returns the quantum of the oscillator at the deepest minimum,
// √(2F V″), 0 for a free rotor.
func (t *Torsion) HarmonicQuantum() unit.Energy { return unit.Energy(t.quantum) }

// ZeroPointEnergy returns the energy of the ground level above the minimum of
// the potential.
func (t *Torsion) ZeroPointEnergy() unit.Energy {
	switch t.method {
	case ClassicalTorsion:
		return 0
	case PitzerGwinn:
		return unit.Energy(t.quantum / 2)
	}
	return t.levelsTo(1 * unit.K).ZeroPointEnergy()
}

// Levels returns the levels above the minimum of the potential in ascending
// order, degenerate ones one by one, enough of them for temperatures up to T.
func (t *Torsion) Levels(T unit.Temperature) []unit.Energy {
	statmech.CheckTemperature("gas.Torsion.Levels", T)
	l := t.levelsTo(T)
	es := make([]unit.Energy, l.Len())
	for i := range es {
		es[i], _ = l.Level(i)
	}
	slices.Sort(es) // the blocks of the matrix come one after the other
	return es
}

// classical returns √(πkT/F)/σ · ⟨exp(-(V-V_min)/kT)⟩ and its derivatives; the
// mean over φ by the trapezoidal rule, which converges exponentially here.
func (t *Torsion) classical(T unit.Temperature) statmech.Reduced {
	kt := unit.Boltzmann * float64(T)
	order := max(t.potential.order(), 1)
	depth := 0.0
	for _, list := range [][]unit.Energy{t.potential.Cos, t.potential.Sin} {
		for _, a := range list {
			depth += math.Abs(float64(a)) / kt
		}
	}
	n := order * (64 + int(8*math.Sqrt(depth)) + int(min(depth, 4000)/2))
	var z, v1, v2 float64
	vs := make([]float64, n)
	for i := range vs {
		v, _, _ := t.potential.derivatives(2 * math.Pi * float64(i) / float64(n))
		vs[i] = (v - t.vMin) / kt
		w := math.Exp(-vs[i])
		z += w
		v1 += w * vs[i]
	}
	mean := v1 / z
	for _, v := range vs {
		v2 += math.Exp(-v) * (v - mean) * (v - mean)
	}
	q := math.Sqrt(math.Pi*kt/float64(t.f)) / float64(t.sigma) * z / float64(n)
	return statmech.Reduced{LogQ: math.Log(q), U: 0.5 + mean, C: 0.5 + v2/z}
}

// levelsTo returns the levels for temperatures up to T, from a basis whose
// highest plane wave has exp(-F m²/kT) < 2⁻⁵⁵.
func (t *Torsion) levelsTo(T unit.Temperature) *statmech.Levels {
	t.mu.Lock()
	defer t.mu.Unlock()
	m := 200
	for m < min(t.need(T), largestBasis) {
		m = m * 3 / 2
	}
	if t.levels == nil || m > t.mMax {
		t.mMax = m
		t.levels = t.diagonalise(m)
	}
	return t.levels
}

// largestBasis is the highest plane wave of a basis.
const largestBasis = 4000

// need returns the highest plane wave that T and the barrier ask for.
func (t *Torsion) need(T unit.Temperature) int {
	m := math.Sqrt(40*unit.Boltzmann*float64(T)/float64(t.f)) + float64(2*t.potential.order()+10)
	m = math.Max(m, 2*math.Sqrt(t.height()/float64(t.f))+20)
	return int(math.Min(m, 1e9))
}

// height returns a bound of V - V_min.
func (t *Torsion) height() float64 {
	h := 0.0
	for _, list := range [][]unit.Energy{t.potential.Cos, t.potential.Sin} {
		for k, a := range list {
			if k > 0 {
				h += 2 * math.Abs(float64(a))
			}
		}
	}
	return h
}

// diagonalise finds the levels in the basis cos mφ, sin mφ up to m = top. An
// even potential does not mix the two; a potential whose terms all have orders
// divisible by n mixes only m that are equal modulo n, up to sign.
func (t *Torsion) diagonalise(top int) *statmech.Levels {
	n := t.potential.fold()
	if t.potential.order() == 0 {
		n = 1
	}
	var blocks []*band
	var times []int // every level of a block counts
	for r := 0; 2*r <= n; r++ {
		var waves, cosines, sines []wave
		for m := 0; m <= top; m++ {
			if k := m % n; k != r && k != n-r && !(r == 0 && k == 0) {
				continue
			}
			cosines = append(cosines, wave{m, false})
			waves = append(waves, wave{m, false})
			if m > 0 {
				sines = append(sines, wave{m, true})
				waves = append(waves, wave{m, true})
			}
		}
		switch {
		case !t.potential.even():
			blocks, times = append(blocks, t.block(waves)), append(times, 1)
		case r == 0 || 2*r == n:
			blocks, times = append(blocks, t.block(cosines), t.block(sines)), append(times, 1, 1)
		default: // cosines and sines have the same levels
			blocks, times = append(blocks, t.block(cosines)), append(times, 2)
		}
	}
	tridiagonals := make([]*tridiagonal, len(blocks))
	var wait sync.WaitGroup
	for i, b := range blocks {
		wait.Go(func() { tridiagonals[i] = b.tridiagonal() })
	}
	wait.Wait()
	var es []unit.Energy
	for i, list := range eigenvaluesOf(tridiagonals) {
		if list == nil {
			panic("gas: eigenvalues of a torsion did not converge")
		}
		for _, e := range list {
			for range times[i] {
				es = append(es, unit.Energy(e-t.vMin))
			}
		}
	}
	l, err := statmech.NewLevels(es, nil)
	if err != nil {
		panic(fmt.Sprintf("gas: levels of a torsion: %v", err))
	}
	return l
}

// A wave is the basis function cos mφ or sin mφ, normalised.
type wave struct {
	m    int
	sine bool
}

// block returns the matrix of H in the basis ws.
func (t *Torsion) block(ws []wave) *band {
	order := t.potential.order()
	width := 1
	for i := range ws { // waves are sorted by m: a term of order k reaches m+k
		j := i
		for j+1 < len(ws) && ws[j+1].m <= ws[i].m+order {
			j++
		}
		width = max(width, j-i)
	}
	b := newBand(len(ws), width)
	for i := range ws {
		for j := i; j < len(ws) && j <= i+width; j++ {
			x := t.element(ws[i], ws[j])
			if i == j {
				x += float64(t.f) * float64(ws[i].m) * float64(ws[i].m)
			}
			b.set(j, i, x)
		}
	}
	return b
}

// element returns the matrix element of V between two basis functions.
func (t *Torsion) element(a, b wave) float64 {
	cos := func(k int) float64 {
		if k < len(t.potential.Cos) {
			return float64(t.potential.Cos[k])
		}
		return 0
	}
	sin := func(k int) float64 {
		switch {
		case k > 0 && k < len(t.potential.Sin):
			return float64(t.potential.Sin[k])
		case k < 0 && -k < len(t.potential.Sin):
			return -float64(t.potential.Sin[-k])
		}
		return 0
	}
	diff, sum := a.m-b.m, a.m+b.m
	if diff < 0 {
		diff = -diff
	}
	// Products of two functions are sums of waves of orders m-m′ and m+m′; a
	// constant has norm 1/√2 of the others.
	scale := 0.5
	if a.m == 0 {
		scale *= math.Sqrt2 / 2
	}
	if b.m == 0 {
		scale *= math.Sqrt2 / 2
	}
	mean := func(k int, c float64) float64 { // ∫ V cos kφ/π
		if k == 0 {
			return 2 * c
		}
		return c
	}
	switch {
	case !a.sine && !b.sine:
		return scale * (mean(diff, cos(diff)) + mean(sum, cos(sum)))
	case a.sine && b.sine:
		return scale * (mean(diff, cos(diff)) - mean(sum, cos(sum)))
	case a.sine: // sin m cos m′ = ½[sin(m+m′) + sin(m-m′)]
		return scale * (sin(a.m+b.m) + sin(a.m-b.m))
	default:
		return scale * (sin(a.m+b.m) + sin(b.m-a.m))
	}
}
