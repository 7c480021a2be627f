package gas

import (
	"fmt"
	"math"
	"runtime"
	"slices"
	"sync"
	"sync/atomic"

	"levelsum/display"
	"levelsum/statmech"
	"levelsum/statmech/unit"
)

// A topKind says how the levels of a top follow from its constants.
type topKind int

const (
	spherical topKind = iota
	symmetric
	asymmetric
)

// A Top is the rotation of a non-linear rigid molecule by exact summation over
// its levels: J(J+1) for a spherical top, J and K for a symmetric one, the
// eigenvalues of the Wang blocks for an asymmetric one. Make it with
// [NewSphericalTop], [NewSymmetricTop], [NewAsymmetricTop] or [NewTop].
//
// Levels up to J = 60 or more are found once, at the first evaluation, twice as
// many J at the first one above the temperature that these suffice for. Above
// the temperature that those suffice for, ln q is continued as
//
//	ln q = ln[√π (kT)^(3/2)/(σ √(ABC))] + c₁/T + c₂/T² + c₃/T³,
//	c₁ = [2(A+B+C) - BC/A - CA/B - AB/C]/12k,
//
// with c₁ as published and c₂, c₃ from the exact sum itself; both agree within
// 1e-9 where they meet (TestTopContinuation).
//
// Accuracy: q, U and C 1e-9 relative (TestTopAccuracy); the rigid rotor itself
// leaves out centrifugal distortion.
//
// Reference: c₁ for all tops: K. F. Stripp, J. G. Kirkwood, J. Chem. Phys. 19,
// 1131 (1951). Wang blocks: S. C. Wang, Phys. Rev. 34, 243 (1929).
type Top struct {
	kind      topKind
	a, b, c   float64 // A >= B >= C, J; for a symmetric top c and a hold by shape, see unique
	unique    float64 // constant about the symmetry axis of a symmetric top, J
	sigma     int
	spin      *SpinWeights
	classical bool
	jMax      int
	near, all levelsOnce // up to jMax/2, up to jMax
	reach     float64    // highest temperature of the sum over all, K
	series    sync.Once  // guards c2, c3
	c2, c3    float64    // K², K³
}

// levelsOnce are levels that are found when they are first needed.
type levelsOnce struct {
	once   sync.Once
	levels *statmech.Levels
}

// NewSphericalTop returns the rotation of a molecule with three equal
// constants. Spin.Weights are those of the species A, E and F of a tetrahedral
// molecule, {5, 2, 3} with Total 16 for CH₄.
func NewSphericalTop(B unit.Energy, sigma int, spin *SpinWeights) (*Top, error) {
	return newTop("gas.NewSphericalTop", spherical, float64(B), float64(B), float64(B), float64(B), sigma, spin)
}

// NewSymmetricTop returns the rotation of a molecule with two equal constants:
// unique belongs to the symmetry axis (A of a prolate, C of an oblate top), B to
// the other two. Spin.Weights are those of K modulo their number, {w₀, w₁, w₁}
// for a threefold axis.
func NewSymmetricTop(unique, B unit.Energy, sigma int, spin *SpinWeights) (*Top, error) {
	a, c := math.Max(float64(unique), float64(B)), math.Min(float64(unique), float64(B))
	return newTop("gas.NewSymmetricTop", symmetric, a, float64(B), c, float64(unique), sigma, spin)
}

// NewAsymmetricTop returns the rotation of a molecule with three constants in
// any order. Spin.Weights are those of levels with (Ka, Kc) even-even,
// even-odd, odd-even and odd-odd, {1, 3, 3, 1} with Total 4 for H₂O.
func NewAsymmetricTop(A, B, C unit.Energy, sigma int, spin *SpinWeights) (*Top, error) {
	a, b, c := float64(A), float64(B), float64(C)
	if a < b {
		a, b = b, a
	}
	if b < c {
		b, c = c, b
	}
	if a < b {
		a, b = b, a
	}
	return newTop("gas.NewAsymmetricTop", asymmetric, a, b, c, 0, sigma, spin)
}

// equalConstants is the relative difference below which two rotational
// constants are taken as equal by NewTop.
const equalConstants = 1e-6

// NewTop returns the spherical, symmetric or asymmetric top that the three
// constants, in any order, describe: constants within 1e-6 of each other are
// equal.
func NewTop(A, B, C unit.Energy, sigma int, spin *SpinWeights) (*Top, error) {
	t, err := NewAsymmetricTop(A, B, C, sigma, nil2(spin))
	if err != nil {
		return nil, err
	}
	ab, bc := t.a-t.b <= equalConstants*t.a, t.b-t.c <= equalConstants*t.b
	switch {
	case ab && bc:
		return NewSphericalTop(B, sigma, spin)
	case ab:
		return NewSymmetricTop(unit.Energy(t.c), unit.Energy((t.a+t.b)/2), sigma, spin)
	case bc:
		return NewSymmetricTop(unit.Energy(t.a), unit.Energy((t.b+t.c)/2), sigma, spin)
	}
	return NewAsymmetricTop(A, B, C, sigma, spin)
}

// nil2 returns weights that an asymmetric top takes, for the sorting only.
func nil2(s *SpinWeights) *SpinWeights {
	if s == nil {
		return nil
	}
	return &SpinWeights{Weights: []float64{1, 1, 1, 1}, Total: 1}
}

// nearLinear is the ratio of the smallest moment of inertia to the others below
// which a molecule is refused as a three-axis rotor.
const nearLinear = 1e-3

func newTop(fn string, kind topKind, a, b, c, unique float64, sigma int, spin *SpinWeights) (*Top, error) {
	for _, x := range []struct {
		arg string
		v   float64
	}{{"A", a}, {"B", b}, {"C", c}} {
		if !(x.v > 0) || math.IsInf(x.v, 1) {
			return nil, &statmech.DomainError{Func: fn, Arg: x.arg, Value: unit.Energy(x.v).String(), Want: "positive and finite"}
		}
	}
	if c/a < nearLinear {
		return nil, &statmech.DomainError{Func: fn, Arg: "A/C", Value: short(a / c),
			Want: "below 1000: the molecule is almost linear and has no free rotation about its axis; describe it as linear, with a bending vibration"}
	}
	if err := checkSymmetry(fn, sigma, spin); err != nil {
		return nil, err
	}
	if spin != nil {
		n, meaning := 4, "four weights, of (Ka, Kc) even-even, even-odd, odd-even, odd-odd"
		switch kind {
		case spherical:
			n, meaning = 3, "three weights, of the species A, E, F"
		case symmetric:
			n, meaning = 0, "weights of K modulo their number"
		}
		if err := spin.check(fn, n, meaning); err != nil {
			return nil, err
		}
	}
	t := &Top{kind: kind, a: a, b: b, c: c, unique: unique, sigma: sigma, spin: spin}
	// exp(-C J²/kT) < 2⁻⁵² at the reach, which must also be high enough for the
	// sum over K to have become classical: exp(-π² kT/A) is the error of that.
	low := 360.0
	t.jMax = int(math.Ceil(math.Sqrt(41 * math.Max(low, 2.6*a/c))))
	t.jMax = max(t.jMax, 120)
	t.reach = float64(t.jMax*t.jMax) / 41 * c / unit.Boltzmann
	return t, nil
}

// ClassicalForm returns the same top with q = √π (kT)^(3/2)/(σ √(ABC)).
func (t *Top) ClassicalForm() *Top {
	return &Top{kind: t.kind, a: t.a, b: t.b, c: t.c, unique: t.unique, sigma: t.sigma, spin: t.spin, jMax: t.jMax, reach: t.reach, classical: true}
}

// String says what top it is.
func (t *Top) String() string {
	name := map[topKind]string{spherical: "spherical top", symmetric: "symmetric top", asymmetric: "asymmetric top"}[t.kind]
	return fmt.Sprintf("%s, A, B, C = %.6g, %.6g, %.6g cm-1", name, unit.Energy(t.a).In(unit.PerCm), unit.Energy(t.b).In(unit.PerCm), unit.Energy(t.c).In(unit.PerCm))
}

// Constants returns A >= B >= C as energies.
func (t *Top) Constants() (A, B, C unit.Energy) {
	return unit.Energy(t.a), unit.Energy(t.b), unit.Energy(t.c)
}

// Reduced returns the functions at temperature T. It panics with a
// [*statmech.DomainError] if T is not positive and finite.
func (t *Top) Reduced(T unit.Temperature) statmech.Reduced {
	statmech.CheckTemperature("gas.Top.Reduced", T)
	if t.classical {
		return t.classicalAt(float64(T))
	}
	return t.quantum(T)
}

func (t *Top) quantum(T unit.Temperature) statmech.Reduced {
	if float64(T) <= t.reach {
		return t.exact(T)
	}
	return t.continued(float64(T))
}

// ReducedAt is Reduced at each temperature.
func (t *Top) ReducedAt(ts []unit.Temperature) []statmech.Reduced {
	rs := make([]statmech.Reduced, len(ts))
	var at []int
	var low []unit.Temperature
	for i, T := range ts {
		statmech.CheckTemperature("gas.Top.ReducedAt", T)
		if t.classical || float64(T) > t.reach {
			rs[i] = t.Reduced(T)
		} else {
			at, low = append(at, i), append(low, T)
		}
	}
	if len(low) > 0 {
		f := math.Log(t.spin.factor(t.sigma))
		for j, r := range t.levelsFor(slices.Max(low)).ReducedAt(low) {
			r.LogQ += f
			rs[at[j]] = r
		}
	}
	return rs
}

func (t *Top) exact(T unit.Temperature) statmech.Reduced {
	r := t.levelsFor(T).Reduced(T)
	r.LogQ += math.Log(t.spin.factor(t.sigma))
	return r
}

func (t *Top) classicalAt(T float64) statmech.Reduced {
	var share []float64
	if t.kind == spherical {
		share = []float64{1.0 / 12, 1.0 / 12, 3.0 / 12}
	}
	kt := unit.Boltzmann * T
	q := math.Sqrt(math.Pi * (kt / t.a) * (kt / t.b) * (kt / t.c))
	return statmech.Reduced{LogQ: math.Log(q * t.spin.mean(share) * t.spin.factor(t.sigma)), U: 1.5, C: 1.5}
}

// c1 returns the first quantum correction in K.
func (t *Top) c1() float64 {
	return (2*(t.a+t.b+t.c) - t.b*t.c/t.a - t.c*t.a/t.b - t.a*t.b/t.c) / (12 * unit.Boltzmann)
}

func (t *Top) continued(T float64) statmech.Reduced {
	t.series.Do(t.continuation)
	r := t.classicalAt(T)
	// Energies are counted from the lowest level with a weight; the series
	// counts from J = 0.
	z := float64(t.lowest().ZeroPointEnergy()) / (unit.Boltzmann * T)
	c1 := t.c1()
	r.LogQ += c1/T + t.c2/(T*T) + t.c3/(T*T*T) + z
	r.U += -c1/T - 2*t.c2/(T*T) - 3*t.c3/(T*T*T) - z
	r.C += 2*t.c2/(T*T) + 6*t.c3/(T*T*T)
	return r
}

// ClassicalDifference returns the exact functions minus the classical ones.
func (t *Top) ClassicalDifference(T unit.Temperature) statmech.Reduced {
	statmech.CheckTemperature("gas.Top.ClassicalDifference", T)
	return t.quantum(T).Add(t.classicalAt(float64(T)).Scale(-1))
}

// ZeroPointEnergy returns the energy of the lowest level with a weight above J = 0.
func (t *Top) ZeroPointEnergy() unit.Energy {
	if t.classical {
		return 0
	}
	return t.lowest().ZeroPointEnergy()
}

// HighTemperatureHeatCapacity returns the classical limit of C/k, 3/2.
func (t *Top) HighTemperatureHeatCapacity() float64 { return 1.5 }

// Levels returns the levels that are summed, up to J = jMax, with degeneracies
// that hold the spin weights but not the symmetry number.
func (t *Top) Levels() *statmech.Levels {
	return t.all.to(t, t.jMax)
}

// lowest returns levels of which the lowest are needed.
func (t *Top) lowest() *statmech.Levels { return t.near.to(t, t.jMax/2) }

// levelsFor returns levels that suffice up to T.
func (t *Top) levelsFor(T unit.Temperature) *statmech.Levels {
	if near := float64(t.jMax/2) / float64(t.jMax); float64(T) <= t.reach*near*near {
		return t.lowest()
	}
	return t.Levels()
}

func (l *levelsOnce) to(t *Top, jMax int) *statmech.Levels {
	l.once.Do(func() { l.levels = t.build(jMax) })
	return l.levels
}

// build finds the levels up to J = jMax.
func (t *Top) build(jMax int) *statmech.Levels {
	var es []unit.Energy
	var gs []float64
	add := func(E, g float64) {
		if g > 0 {
			es, gs = append(es, unit.Energy(E)), append(gs, g)
		}
	}
	switch t.kind {
	case spherical:
		for J := 0; J <= jMax; J++ {
			add(t.b*float64(J)*float64(J+1), float64(2*J+1)*t.sphericalWeight(J))
		}
	case symmetric:
		for J := 0; J <= jMax; J++ {
			for K := 0; K <= J; K++ {
				g := float64(2*J + 1)
				if K > 0 {
					g *= 2
				}
				if t.spin != nil {
					g *= t.spin.Weights[K%len(t.spin.Weights)]
				}
				add(t.b*float64(J)*float64(J+1)+(t.unique-t.b)*float64(K)*float64(K), g)
			}
		}
	case asymmetric:
		for J, energies := range t.asymmetricLevels(jMax) {
			for n, E := range energies {
				g := float64(2*J + 1)
				if t.spin != nil {
					ka, kc := (n+1)/2, J-n/2
					g *= t.spin.Weights[2*(ka%2)+kc%2]
				}
				add(E, g)
			}
		}
	}
	l, err := statmech.NewLevels(es, gs)
	if err != nil {
		panic(fmt.Sprintf("gas: levels of a top: %v", err)) // constants were checked
	}
	return l
}

// continuation finds c₂ and c₃ from δ(T) = ln q - classical - c₁/T at two
// temperatures.
func (t *Top) continuation() {
	delta := func(T float64) float64 {
		z := float64(t.lowest().ZeroPointEnergy()) / (unit.Boltzmann * T)
		return (t.exact(unit.Temperature(T)).LogQ - z - t.classicalAt(T).LogQ - t.c1()/T) * T * T
	}
	d1, d2 := delta(t.reach), delta(t.reach/2)
	t.c3 = (d2 - d1) * t.reach // δT² = c₂ + c₃/T
	t.c2 = d1 - t.c3/t.reach
}

// sphericalWeight returns the number of K states of J times spin weights: 2J+1
// without weights, else n_A w_A + n_E w_E + n_F w_F, where the n are how often
// the species of the rotation group T occur in D(J).
func (t *Top) sphericalWeight(J int) float64 {
	if t.spin == nil {
		return float64(2*J + 1)
	}
	// Characters of D(J): 1 for J even and -1 for J odd at π; 1, 0, -1 for
	// J mod 3 = 0, 1, 2 at 2π/3.
	pi := 1 - 2*(J%2)
	third := 1 - J%3
	nA := (2*J + 1 + 3*pi + 8*third) / 12
	nE := (2*J + 1 + 3*pi - 4*third) / 12 // each of the two components
	nF := (2*J + 1 - pi) / 4
	w := t.spin.Weights
	return float64(nA)*w[0] + float64(nE)*w[1] + float64(nF)*w[2]
}

// asymmetricLevels returns the energies of every J up to jMax. The J are shared
// among the processors.
func (t *Top) asymmetricLevels(jMax int) [][]float64 {
	out := make([][]float64, jMax+1)
	var next atomic.Int64
	var wait sync.WaitGroup
	for range runtime.GOMAXPROCS(0) {
		wait.Go(func() {
			for {
				J := jMax - int(next.Add(1)) + 1 // the long ones first
				if J < 0 || display.Interrupted() {
					return
				}
				out[J] = asymmetricLevels(t.a, t.b, t.c, J)
			}
		})
	}
	wait.Wait()
	display.Checkpoint()
	for _, energies := range out {
		if energies == nil {
			panic("gas: eigenvalues of a Wang block did not converge")
		}
	}
	return out
}

// asymmetricLevels returns the 2J+1 eigenvalues of the rigid asymmetric rotor
// of one J in ascending order, from the four Wang blocks in the basis of a
// prolate top. The n-th has Ka = (n+1)/2 and Kc = J - n/2 (integer divisions).
// It returns nil if an iteration did not converge.
func asymmetricLevels(a, b, c float64, J int) []float64 {
	j := float64(J) * float64(J+1)
	mean, quarter := (b+c)/2, (b-c)/4
	couplings := make([]float64, J+1) // of K and K+2
	for K := range couplings {
		k := float64(K)
		couplings[K] = quarter * math.Sqrt((j-k*(k+1))*(j-(k+1)*(k+2)))
	}
	var blocks []*tridiagonal
	block := func(first int, shift, root float64) {
		if first > J {
			return
		}
		n := (J-first)/2 + 1
		d, e := make([]float64, n), make([]float64, n)
		for i := range d {
			K := first + 2*i
			d[i] = mean*j + float64((a-mean)*float64(K)*float64(K))
			e[i] = couplings[K]
		}
		d[0] += shift
		e[0] *= root
		blocks = append(blocks, newTridiagonal(d, e))
	}
	block(0, 0, math.Sqrt2) // E⁺
	block(2, 0, 1)          // E⁻
	block(1, quarter*j, 1)  // O⁺
	block(1, -quarter*j, 1) // O⁻
	out := make([]float64, 0, 2*J+1)
	for _, levels := range eigenvaluesOf(blocks) {
		if levels == nil {
			return nil
		}
		out = append(out, levels...)
	}
	slices.Sort(out)
	return out
}

// GroundDegeneracy returns the weight of the lowest level in q.
func (t *Top) GroundDegeneracy() float64 {
	return t.lowest().GroundDegeneracy() * t.spin.factor(t.sigma)
}
