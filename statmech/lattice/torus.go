package lattice

import (
	"fmt"
	"math"

	"levelsum/statmech"
	"levelsum/statmech/unit"
)

// Torus is the Ising model on a square lattice of Rows × Columns spins with
// periodic boundaries, without a field. Its functions are for the whole
// lattice; energies are counted from the ground level, -2NJ for N spins, which
// is two states. Where a side has two spins, they are neighbours twice.
//
// The partition function is exact. With γᵣ >= 0, but γ₀ = 2K + ln tanh K of
// either sign, and the sums and products over the r below 2n that are even or
// odd, n columns and m rows,
//
//	cosh γᵣ = cosh 2K coth 2K - cos(πr/n)
//	Z = ½ (2 sinh 2K)^(mn/2) [Π 2 cosh ½mγ_odd + Π 2 sinh ½mγ_odd
//	                        + Π 2 cosh ½mγ_even + Π 2 sinh ½mγ_even],
//
// and E and C are its derivatives, term by term.
//
// Range: two spins and more along each side and 1e8 at most in all. Accuracy
// for T from J/k to 10 J/k and up to 128 × 128: 1e-15 relative in ln Z, 4e-15 in
// E/NJ, 6e-14 in C/Nk, the latter relative where it is above 1
// (TestTorusAccuracy). So LogQ and U lose their relative accuracy where nearly
// all spins are alike.
//
// Errors: Reduced and the other functions of T panic with a
// [*statmech.DomainError] if T or J is not positive and finite, or a side or
// their product out of range.
//
// Reference: B. Kaufman, Physical Review 76, 1232 (1949),
// doi:10.1103/PhysRev.76.1232.
type Torus struct {
	J             unit.Energy
	Rows, Columns int
}

const mostSpins = 100_000_000

// check returns what is wrong with the fields.
func (t Torus) check(fn string) *statmech.DomainError {
	switch {
	case !(t.J > 0) || math.IsInf(float64(t.J), 1):
		return &statmech.DomainError{Func: fn, Arg: "J", Value: t.J.String(), Want: "positive and finite"}
	case t.Rows < 2 || t.Columns < 2 || t.Rows > mostSpins/t.Columns:
		return &statmech.DomainError{Func: fn, Arg: "Rows and Columns", Value: fmt.Sprintf("%d and %d", t.Rows, t.Columns), Want: "2 or more each, 1e8 spins at most"}
	}
	return nil
}

// k checks the arguments of the method fn and returns J/kT.
func (t Torus) k(fn string, T unit.Temperature) float64 {
	fn = "lattice.Torus." + fn
	if err := t.check(fn); err != nil {
		panic(err)
	}
	statmech.CheckTemperature(fn, T)
	return t.J.OverKT(T)
}

// Spins returns the number of spins.
func (t Torus) Spins() int { return t.Rows * t.Columns }

// Reduced returns the functions of the whole lattice at temperature T.
func (t Torus) Reduced(T unit.Temperature) statmech.Reduced {
	K := t.k("Reduced", T)
	lnZ, slope, curvature := t.kaufman(K)
	return statmech.Reduced{LogQ: lnZ, U: -K * slope, C: K * K * curvature}
}

// Energy returns the mean energy of a spin at temperature T, as
// [Onsager.Energy] does for the infinite lattice.
func (t Torus) Energy(T unit.Temperature) unit.Energy {
	_, slope, _ := t.kaufman(t.k("Energy", T))
	return -t.J * unit.Energy(2+slope/float64(t.Spins()))
}

// Energies returns the energy at each temperature.
func (t Torus) Energies(ts []unit.Temperature) []unit.Energy {
	es := make([]unit.Energy, len(ts))
	for i, T := range ts {
		es[i] = t.Energy(T)
	}
	return es
}

// HeatCapacity returns C/k of a spin at temperature T.
func (t Torus) HeatCapacity(T unit.Temperature) float64 {
	K := t.k("HeatCapacity", T)
	_, _, curvature := t.kaufman(K)
	return K * K * curvature / float64(t.Spins())
}

// HeatCapacities returns C/k of a spin at each temperature.
func (t Torus) HeatCapacities(ts []unit.Temperature) []float64 {
	cs := make([]float64, len(ts))
	for i, T := range ts {
		cs[i] = t.HeatCapacity(T)
	}
	return cs
}

// GroundDegeneracy returns 2: all spins up or all down.
func (t Torus) GroundDegeneracy() float64 { return 2 }

// HighTemperatureHeatCapacity returns 0, the limit of a bounded spectrum.
func (t Torus) HighTemperatureHeatCapacity() float64 { return 0 }

// product is the logarithm of a product of Kaufman's formula without its part
// mnK, with its first two derivatives by K.
type product struct{ ln, d1, d2 float64 }

// kaufman returns ln Z - 2NK and its first two derivatives by K.
func (t Torus) kaufman(K float64) (lnZ, slope, curvature float64) {
	if K > 100 {
		return math.Ln2, 0, 0 // N e^(-8K) is nothing
	}
	rows, n := float64(t.Rows), t.Columns
	if t.Columns > t.Rows { // m >= n: fewer factors, and mγᵣ is not small
		rows, n = float64(t.Columns), t.Rows
	}
	m := rows / 2
	s, c := math.Sinh(2*K), math.Cosh(2*K)
	x, rest := math.Exp(-4*K), -math.Expm1(-4*K) // rest = 1-x
	logRest := math.Log1p(-x)
	if x > 0.5 {
		logRest = math.Log(rest)
	}

	// Σ ½mγᵣ + ln(1 ± e^(-mγᵣ)), of γᵣ only what exceeds 2K; r = 0 comes last.
	var cosh, sinh [2]product // even r, odd r
	for r := 1; r < 2*n; r++ {
		half := math.Sin(math.Pi * float64(r) / float64(2*n))
		y := (s-1)*(s-1)/s + 2*half*half // cosh γ - 1
		S := math.Sqrt(y * (y + 2))      // sinh γ
		excess := math.Log((1 + y + S) * math.Exp(-2*K))
		g1 := 2 * c * (s - 1) * (s + 1) / (s * s) / S
		g2 := (4*s + 4/s + 8/(s*s*s) - (1+y)*g1*g1) / S
		q := math.Exp(-2 * m * (excess + 2*K))
		p := &cosh[r&1]
		p.ln += m*excess + math.Log1p(q)
		p.d1 += m * (g1 - 2 - g1*2*q/(1+q))
		p.d2 += m*g2*(1-q)/(1+q) + m*g1*m*g1*4*q/((1+q)*(1+q))
		p = &sinh[r&1]
		p.ln += m*excess + math.Log1p(-q)
		p.d1 += m * (g1 - 2 + g1*2*q/(1-q))
		p.d2 += m*g2*(1+q)/(1-q) - m*g1*m*g1*4*q/((1-q)*(1-q))
	}
	// h = ½mγ₀ and what 2 sinh h and 2 cosh h are in units of e^|h|.
	logTanh := math.Log(math.Tanh(K))
	h, h1, h2 := m*(2*K+logTanh), m*(2+2/s), -m*4*c/(s*s)
	q := math.Exp(-2 * math.Abs(h))
	sinh0, cosh0 := math.Copysign(1-q, h), 1+q
	excess := m * logTanh // |h| - 2mK
	if h < 0 {
		excess = -m * (4*K + logTanh)
	}
	tanh := sinh0 / cosh0
	cosh[0].ln += excess + math.Log(cosh0)
	cosh[0].d1 += h1*tanh - 2*m
	cosh[0].d2 += h2*tanh + h1*h1*4*q/(cosh0*cosh0)

	// The four products as parts of the first, the factor 2 sinh h, which may
	// be 0 or negative, outside the logarithm. Slopes are counted from that of
	// the first, so that squares of N do not cancel.
	first := cosh[1]
	var sum, sum1, sum2 float64
	for _, p := range [3]product{first, sinh[1], cosh[0]} {
		w, d := math.Exp(p.ln-first.ln), p.d1-first.d1
		sum += w
		sum1 += w * d
		sum2 += w * (p.d2 + d*d)
	}
	w, d := math.Exp(excess+sinh[0].ln-first.ln), sinh[0].d1-2*m-first.d1
	sum += w * sinh0
	sum1 += w * (h1*cosh0 + sinh0*d)
	sum2 += w * (h2*cosh0 + h1*h1*sinh0 + 2*h1*cosh0*d + sinh0*(sinh[0].d2+d*d))

	N := float64(t.Spins())
	mean := sum1 / sum
	lnZ = N/2*logRest - math.Ln2 + first.ln + math.Log(sum)
	slope = N*2*x/rest + first.d1 + mean
	curvature = -N*8*x/(rest*rest) + sum2/sum - mean*mean
	return lnZ, slope, curvature
}
