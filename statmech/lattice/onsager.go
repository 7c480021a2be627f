package lattice

import (
	"math"

	"levelsum/statmech"
	"levelsum/statmech/special"
	"levelsum/statmech/unit"
)

// Onsager is the Ising model on the infinite square lattice, without a field.
// Its functions are for one spin. With K = J/kT, k = 2 sinh 2K/cosh² 2K and
// k″ = 2 tanh² 2K - 1,
//
//	ln q = ln(2 cosh 2K) + (1/π) ∫₀^(π/2) ln[½ + ½√(1-k² sin²φ)] dφ
//	E/J  = -coth 2K [1 + (2/π) k″ K₁]
//	C/k  = (4/π) (K coth 2K)² {K₁ - E₁ - ½(1-k″)[π/2 + k″ K₁]},
//
// K₁ and E₁ being the complete elliptic integrals of modulus k. Reduced counts
// energies from the ground level, -2J. The heat capacity grows as ln|T-Tc|
// without bound; within rounding of Tc it is large or +Inf.
//
// Range: every T > 0. Accuracy, relative, for T from 0.5 J/k and 0.1 per cent
// and more from Tc: 2e-14 in LogQ, 3e-14 in U, 2e-15 in E/J, 1.2e-13 in C
// (TestOnsagerAccuracy). Below 0.5 J/k the rounding of K counts, of which LogQ, U
// and C have e^(-8K); nearer to Tc, that of T-Tc.
//
// Reference: L. Onsager, Physical Review 65, 117 (1944),
// doi:10.1103/PhysRev.65.117.
type Onsager struct {
	J unit.Energy
}

// k checks the arguments of the method fn and returns J/kT.
func (m Onsager) k(fn string, T unit.Temperature) float64 {
	statmech.CheckPositive("lattice.Onsager."+fn, "J", m.J)
	statmech.CheckTemperature("lattice.Onsager."+fn, T)
	return m.J.OverKT(T)
}

// CriticalTemperature returns Tc = 2J/(k ln(1+√2)).
func (m Onsager) CriticalTemperature() unit.Temperature {
	statmech.CheckPositive("lattice.Onsager.CriticalTemperature", "J", m.J)
	return m.J.AsTemperature() * 2 / unit.Temperature(math.Log1p(math.Sqrt2))
}

// Reduced returns the functions of one spin at temperature T.
func (m Onsager) Reduced(T unit.Temperature) statmech.Reduced {
	K := m.k("Reduced", T)
	_, rise, c := onsagerEnergy(K)
	return statmech.Reduced{LogQ: onsagerLogQ(K), U: K * rise, C: c}
}

// Energy returns the mean energy of a spin at temperature T, which is -2J in
// the ground state and tends to 0 from below for high T.
func (m Onsager) Energy(T unit.Temperature) unit.Energy {
	e, _, _ := onsagerEnergy(m.k("Energy", T))
	return m.J * unit.Energy(e)
}

// Energies returns the energy at each temperature.
func (m Onsager) Energies(ts []unit.Temperature) []unit.Energy {
	es := make([]unit.Energy, len(ts))
	for i, T := range ts {
		es[i] = m.Energy(T)
	}
	return es
}

// HelmholtzEnergy returns the Helmholtz energy of a spin at temperature T,
// -2J - kT ln q with the ln q of Reduced.
func (m Onsager) HelmholtzEnergy(T unit.Temperature) unit.Energy {
	K := m.k("HelmholtzEnergy", T)
	return -m.J * unit.Energy(2+onsagerLogQ(K)/K)
}

// HelmholtzEnergies returns the Helmholtz energy at each temperature.
func (m Onsager) HelmholtzEnergies(ts []unit.Temperature) []unit.Energy {
	fs := make([]unit.Energy, len(ts))
	for i, T := range ts {
		fs[i] = m.HelmholtzEnergy(T)
	}
	return fs
}

// Magnetisation returns the spontaneous magnetisation of a spin, from 1 at T = 0
// to 0 at Tc and above:
//
//	m = (1 - sinh⁻⁴ 2K)^(1/8).
//
// Accuracy: 3e-13 but for what the rounding of T moves within 0.1 per cent of Tc
// (TestOnsagerAccuracy).
//
// Reference: C. N. Yang, Physical Review 85, 808 (1952),
// doi:10.1103/PhysRev.85.808.
func (m Onsager) Magnetisation(T unit.Temperature) float64 {
	s := math.Sinh(2 * m.k("Magnetisation", T))
	if s <= 1 {
		return 0
	}
	return math.Pow((1-1/s)*(1+1/s)*(1+1/(s*s)), 0.125)
}

// Magnetisations returns the spontaneous magnetisation at each temperature.
func (m Onsager) Magnetisations(ts []unit.Temperature) []float64 {
	ms := make([]float64, len(ts))
	for i, T := range ts {
		ms[i] = m.Magnetisation(T)
	}
	return ms
}

// GroundDegeneracy returns 1: the two ground states of the lattice are nothing
// in the entropy of one spin.
func (m Onsager) GroundDegeneracy() float64 { return 1 }

// HighTemperatureHeatCapacity returns 0, the limit of a bounded spectrum.
func (m Onsager) HighTemperatureHeatCapacity() float64 { return 0 }

// onsagerEnergy returns E/J, E/J + 2 and C/k.
func onsagerEnergy(K float64) (e, rise, c float64) {
	if x := math.Exp(-4 * K); x < seriesEnd {
		// E/J + 2 = 4 Σ n aₙ xⁿ and C/k = 16 K² Σ n² aₙ xⁿ
		for i, p := 0, x*x; i < len(lowSeries); i, p = i+1, p*x {
			rise += 4 * lowSeries[i] * p
			c += 16 * K * K * float64(i+2) * lowSeries[i] * p
		}
		return rise - 2, rise, c
	}
	s := math.Sinh(2 * K)
	cosh2 := 1 + s*s
	coth := math.Sqrt(cosh2) / s
	if K < highEnd {
		// With zⁿ the terms of onsagerLogQ, d ln z/dK is D below.
		z, term := s*s/(4*cosh2*cosh2), 1.0
		D := 4 * (1 - s*s) / (s * s * coth)
		// D = 4/(sinh cosh) - 4 tanh at 2K, whose derivative is
		slope := -8*(1/(s*s)+1/cosh2) - 8/cosh2
		var s1, s2 float64 // Σ n cₙ zⁿ, Σ n² cₙ zⁿ
		for n := 1.0; ; n++ {
			term *= z * (2 * (2*n - 1) / n) * (2 * (2*n - 1) / n)
			s1 += term / 4
			s2 += n * term / 4
			if n*term < 1e-18*s2 {
				break
			}
		}
		e = float64(s1*D) - 2/coth
		c = K * K * (4/cosh2 - float64(s2*D*D) - float64(s1*slope))
		return e, 2 + e, c
	}
	modulus := (s - 1) * (s + 1) / cosh2 // k″; 1-k² is its square
	k1, e1 := completeElliptic(modulus * modulus)
	product := modulus * k1
	if modulus == 0 {
		product = 0 // x ln x
	}
	e = -coth * (1 + 2/math.Pi*product)
	// ½(1-k″) = 1/cosh²
	c = 4 / math.Pi * (K * coth) * (K * coth) * (k1 - e1 - (math.Pi/2+product)/cosh2)
	return e, 2 + e, c
}

// completeElliptic returns K and E for the complementary parameter c = 1-m, so
// that no digits are lost where m is near 1: K(1-c) = K(1-1/c)/√c by the
// transformation of an imaginary modulus, and E(1-c) = E(1-1/c) √c.
func completeElliptic(c float64) (k, e float64) {
	if c < 1e-300 {
		return math.Inf(1), 1
	}
	root := math.Sqrt(c)
	return special.EllipticK(1-1/c) / root, special.EllipticE(1-1/c) * root
}

// onsagerLogQ returns ln q with energies counted from -2J.
func onsagerLogQ(K float64) float64 {
	x := math.Exp(-4 * K)
	if x < seriesEnd {
		sum := 0.0
		for i, p := 0, x*x; i < len(lowSeries); i, p = i+1, p*x {
			sum += lowSeries[i] / float64(i+2) * p
		}
		return sum
	}
	// ln(2 cosh 2K) - 2K = ln(1+x)
	s := math.Sinh(2 * K)
	cosh2 := 1 + s*s
	if K < highEnd {
		// ln[½+½√(1-k² sin²φ)] averaged over φ in powers of z = k²/16:
		// -2 Σ cₙ zⁿ, cₙ = binomial(2n,n)²/4n
		z, term, sum := s*s/(4*cosh2*cosh2), 1.0, 0.0
		for n := 1.0; term > 1e-18*sum || n == 1; n++ {
			term *= z * (2 * (2*n - 1) / n) * (2 * (2*n - 1) / n)
			sum += term / (4 * n)
		}
		return math.Log1p(x) - sum
	}
	// Near Tc the integrand has a kink of width k″ at φ = π/2. The nodes of
	// the tanh-sinh rule, θ = π/2-φ = (π/2)/(1+e^(2 sinh u)), crowd there.
	modulus := (s - 1) * (s + 1) / cosh2
	k2 := 4 * s * s / (cosh2 * cosh2)
	const h = 1. / 16
	sum := 0.0
	for i := -56; i <= 56; i++ { // sinh 3.5·π/2: weights below 1e-21
		u := h * float64(i)
		q := math.Exp(math.Pi * math.Sinh(u))
		theta := math.Pi / 2 / (1 + q)
		w := h * math.Pi * math.Cosh(u) * q / (1 + q) * theta
		sin := math.Sin(theta)
		root := math.Sqrt(float64(modulus*modulus) + float64(k2*sin*sin))
		sum += w * math.Log1p((root-1)/2)
	}
	return math.Log1p(x) + sum/math.Pi
}

// Below seriesEnd = x = e^(-4K), T < 1.14 J/k, and below highEnd = K,
// T > 7.7 J/k, series keep the relative accuracy that differences lose. The
// low series reaches to Tc, x = 3-√8, and ends where x²⁶ is nothing.
const (
	seriesEnd = 0.03
	highEnd   = 0.13
)

// lowSeries holds n aₙ, n = 2, 3, …, of ln q = Σ aₙ xⁿ: integers, from the
// closed form by exact arithmetic (ising.py in testdata/mpmath).
var lowSeries = [...]float64{
	2, 6, 18, 60, 224, 910, 3922, 17628, 81742, 388322, 1880880, 9256676, 46169384, 232913766,
	1186581074, 6096959764, 31564256174, 164502941754, 862456678238, 4545940101520,
	24077341257356, 128085071706818, 684110198176624,
}
