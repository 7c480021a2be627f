package solid

import (
	"math"

	"levelsum/statmech"
	"levelsum/statmech/unit"
)

// Superconductor is the heat capacity of the conduction electrons of a
// superconductor without a magnetic field: γT above Tc and, below, that of
// independent quasiparticles of energy E = √(ε² + Δ²),
//
//	C = γT (6/π²) ∫₀^∞ f(1-f) [E² - ½ dΔ²/d ln T]/(kT)² dε/kT,
//
// f = 1/(e^(E/kT)+1), with the gap Δ(T) of weak coupling scaled so that
// Δ(0) = GapRatio·kTc. The jump at Tc is 1.426 γTc for the ratio of weak
// coupling, π/e^0.5772… = 1.7639, which GapRatio = 0 stands for, and grows as
// its square. The entropy at Tc is γTc for every ratio.
//
// Range: one isotropic gap. Accuracy: 1e-11 relative for the heat capacity and
// the entropy, 1e-9 for the energy, which is integrated
// (TestSuperconductor); derivatives by Tc and GapRatio are differences, 1e-8.
//
// Errors: a panic with a [*statmech.DomainError] if T or Tc is not positive and
// finite, or Gamma or GapRatio is negative or not finite.
//
// Reference: J. Bardeen, L. N. Cooper and J. R. Schrieffer, Physical Review
// 108, 1175 (1957), doi:10.1103/PhysRev.108.1175; B. Mühlschlegel, Zeitschrift
// für Physik 155, 313 (1959), doi:10.1007/BF01332932 (tables of weak coupling);
// H. Padamsee, J. E. Neighbor and C. A. Shiffman, J. Low Temp. Phys. 12, 387
// (1973), doi:10.1007/BF00654872 (the scaled gap).
type Superconductor struct {
	Gamma    unit.SommerfeldCoefficient // of the normal state, per mole of formula units
	Tc       unit.Temperature
	GapRatio float64 // Δ(0)/kTc; 0 stands for weak coupling
}

// weakCoupling is π/e^γ, γ Euler's constant.
const weakCoupling = math.Pi / 1.78107241799019798523650410311

func (s Superconductor) ratio() float64 {
	if s.GapRatio == 0 {
		return weakCoupling
	}
	return s.GapRatio
}

func (s Superconductor) bad() *statmech.DomainError {
	switch {
	case !notNegative(float64(s.Gamma)):
		return field("Gamma", s.Gamma, wantNotNegative)
	case !positive(float64(s.Tc)):
		return field("Tc", s.Tc, wantPositive)
	case !notNegative(s.GapRatio):
		return field("GapRatio", plainNumber(s.GapRatio), wantNotNegative)
	}
	return nil
}

// gapOverT returns r = Δ/kT in weak coupling at t = T/Tc < 1 and
// r² d lnΔ/d ln T there.
//
// With I(r) = ∫₀^∞ dθ/(e^(r cosh θ)+1), the gap equation is
// ln t = ln(δ₀/r) - 2 I(r); for small r it is the sum over Matsubara's
// frequencies, ln t = 2 Σₖ C(-½,k) λ(2k+1) (r/π)²ᵏ, λ(s) = (1-2⁻ˢ) ζ(s).
func gapOverT(t float64) (r, slope float64) {
	lnt := math.Log(t)
	// First approximations: near Tc, ln t = -λ(3) (r/π)²; else Δ = Δ(0).
	r = math.Pi * math.Sqrt(-lnt/lambda[0])
	if r > 1.5 {
		r = max(1.5, weakCoupling/t*math.Sqrt(1-math.Pow(t, 3)))
	}
	for range 60 {
		g, b := gapEquation(r) // ln t and -(d ln t/d ln r)/r²
		step := (g - lnt) / (b * r * r)
		r *= math.Exp(max(-0.5, min(step, 0.5)))
		if math.Abs(step) < 1e-15 {
			break
		}
	}
	_, b := gapEquation(r)
	// d lnΔ/d ln T = 1 + d ln r/d ln t = 1 - 1/(b r²)
	return r, r*r - 1/b
}

func gapEquation(r float64) (lnt, b float64) {
	if r < 1 {
		x := r / math.Pi * (r / math.Pi)
		c, p := 1.0, 1.0 // C(-½,k), xᵏ⁻¹
		for k, l := range lambda {
			n := float64(k + 1)
			c *= -(n - 0.5) / n
			lnt += 2 * c * l * p * x
			b -= 4 * n * c * l * p / (math.Pi * math.Pi)
			p *= x
		}
		return lnt, b
	}
	var integral, slope float64
	quasiparticles(r, func(w, e, boltzmann float64) {
		f := boltzmann / (1 + boltzmann)
		integral += w / e * f            // dθ = dε/E in units of kT
		slope += w * f / (1 + boltzmann) // -r dI/dr = ∫ r cosh θ f(1-f) dθ
	})
	return math.Log(weakCoupling/r) - 2*integral, (1 - 2*slope) / (r * r)
}

// lambda holds λ(2k+1) = Σ (2n+1)^-(2k+1), k = 1 … 16, by the sum itself with
// the Euler-Maclaurin remainder.
var lambda = func() (l [16]float64) {
	for k := range l {
		s := float64(2*k + 3)
		const n = 40
		for i := range n {
			l[k] += math.Pow(float64(2*i+1), -s)
		}
		m := float64(2*n + 1) // Σ_{i>=n} f(i) = ∫ + f/2 - f'/12 + f'''/720
		f := math.Pow(m, -s)
		l[k] += f*m/(2*(s-1)) + f/2 + 2*s*f/m/12 - 8*s*(s+1)*(s+2)*f/(m*m*m)/720
	}
	return l
}()

// quasiparticles calls visit with weights w of ∫₀^∞ dε/kT, energies e = E/kT
// and e⁻ᵉ, for a gap of r kT. In the rapidity, ε = r sinh θ and e = r cosh θ,
// the integrand is even, falls doubly exponentially and has its poles at
// Im θ = π/2, so that equal steps of 1/5 converge to rounding. For a large r it
// is a Gaussian of width r^-1/2.
func quasiparticles(r float64, visit func(w, e, boltzmann float64)) {
	r = max(r, 1e-8)
	step := min(0.2, 0.6/math.Sqrt(r))
	for i := 0; ; i++ {
		x := math.Exp(step * float64(i))
		e := r * (x + 1/x) / 2
		if e > r+45 || e > 740 {
			return
		}
		w := step * e
		if i == 0 {
			w /= 2
		}
		visit(w, e, math.Exp(-e))
	}
}

// below returns C and S over γT at t = T/Tc < 1.
func (s Superconductor) below(t float64) (c, entropy float64) {
	r, slope := gapOverT(t)
	scale := s.ratio() / weakCoupling
	slope *= scale * scale
	quasiparticles(r*scale, func(w, e, boltzmann float64) {
		f := boltzmann / (1 + boltzmann)
		c += w * f / (1 + boltzmann) * (e*e - slope)
		entropy += w * (math.Log1p(boltzmann) + e*f)
	})
	norm := 6 / (math.Pi * math.Pi)
	return norm * c, norm * entropy
}

func (s Superconductor) heat(T float64) float64 {
	c := float64(s.Gamma) * T / unit.GasConstant
	if t := T / float64(s.Tc); t < 1 {
		shape, _ := s.below(t)
		c *= shape
	}
	return c
}

func (s Superconductor) heats(dst, ts []float64) {
	for i, T := range ts {
		dst[i] = s.heat(T)
	}
}

func (s Superconductor) reduced(T float64) statmech.Reduced {
	g, tc := float64(s.Gamma)/unit.GasConstant, float64(s.Tc)
	t := T / tc
	area, entropy := g*tc*s.area(min(t, 1)), g*T
	if t < 1 {
		_, shape := s.below(t)
		entropy *= shape
	} else {
		area += g / 2 * (t - 1) * (t + 1) * tc
	}
	return statmech.Reduced{LogQ: area / t, U: entropy - area/t, C: s.heat(T)}
}

// area returns ∫₀ᵗ S/(γTc) dt for t <= 1, over r = Δ/kT of weak coupling
// instead of t, which is explicit in r: dt = -t b r dr.
func (s Superconductor) area(t float64) float64 {
	scale := s.ratio() / weakCoupling
	shape := func(r float64) float64 {
		lnt, b := gapEquation(r)
		sum := 0.0
		quasiparticles(r*scale, func(w, e, boltzmann float64) {
			sum += w * (math.Log1p(boltzmann) + e*boltzmann/(1+boltzmann))
		})
		return 6 / (math.Pi * math.Pi) * sum * math.Exp(2*lnt) * b * r * r
	}
	if scale == 0 {
		return t * t / 2
	}
	r := 1e-6 // at Tc; the part left out is r² of the whole
	if t < 1 {
		r, _ = gapOverT(t)
		r = max(r, 1e-6)
	}
	// S falls as e^-r·scale.
	end := min(r+45/scale, 700/scale)
	if end <= r {
		return 0
	}
	return integrateLog(shape, r, end)
}

// GroundDegeneracy returns 1.
func (s Superconductor) GroundDegeneracy() float64 { return 1 }

func (s *Superconductor) fields() []parameter {
	return []parameter{{"Gamma", (*float64)(&s.Gamma), "J/(mol K2)"}, {"Tc", (*float64)(&s.Tc), "K"}, {"GapRatio", &s.GapRatio, ""}}
}

// Owns implements [Differentiable].
func (s *Superconductor) Owns(p *float64) (string, bool) { return owns(s.fields(), p) }

// Accumulate implements [Differentiable] for Gamma, Tc and GapRatio. A point
// at Tc has the derivative of the side on which it lies: the jump has none.
func (s *Superconductor) Accumulate(ts []unit.Temperature, at []*float64, c []float64, partials [][]float64) error {
	return accumulate(s, "solid.Superconductor.Accumulate", s.fields(), ts, at, c, partials,
		func(temps, c []float64, slopes [][]float64) {
			for i, T := range temps {
				slopes[0][i] = T / unit.GasConstant
				slopes[1][i], slopes[2][i] = 0, 0
				t := T / float64(s.Tc)
				if t >= 1 {
					c[i] = float64(s.Gamma) * slopes[0][i]
					continue
				}
				shape := func(t, ratio float64) float64 {
					v, _ := Superconductor{GapRatio: ratio}.below(t)
					return v
				}
				a := s.ratio()
				normal := float64(s.Gamma) * slopes[0][i]
				f := shape(t, a)
				c[i] = normal * f
				slopes[0][i] *= f
				// ∂/∂Tc = -(t/Tc) ∂/∂t
				h := min(1e-3*t, (1-t)/3)
				dt := (8*(shape(t+h, a)-shape(t-h, a)) - (shape(t+2*h, a) - shape(t-2*h, a))) / (12 * h)
				slopes[1][i] = -normal * dt * t / float64(s.Tc)
				h = 1e-3 * a
				slopes[2][i] = normal * (8*(shape(t, a+h)-shape(t, a-h)) - (shape(t, a+2*h) - shape(t, a-2*h))) / (12 * h)
			}
		})
}
