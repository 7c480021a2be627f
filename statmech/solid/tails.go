package solid

import (
	"math"

	"levelsum/statmech"
	"levelsum/statmech/special"
	"levelsum/statmech/unit"
)

// NuclearTail is the high-temperature tail of the levels of nuclear moments in
// the field of their electrons, C = A/T². It has no entropy from T = 0: the
// term is the end of a Schottky anomaly whose maximum lies at lower
// temperatures, commonly millikelvins.
//
// Accuracy: 4 × 2⁻⁵² (TestTails). Errors: a panic with a
// [*statmech.DomainError] if T is not positive and finite or A is negative or
// not finite.
//
// Reference: O. V. Lounasmaa, in Hyperfine Interactions, edited by A. J.
// Freeman and R. B. Frankel, Academic Press (1967).
type NuclearTail struct {
	A float64 // J K/mol, per mole of formula units
}

func (n NuclearTail) bad() *statmech.DomainError {
	if !notNegative(n.A) {
		return field("A", plainNumber(n.A), wantNotNegative)
	}
	return nil
}

// heats writes C/k.
func (n NuclearTail) heat(T float64) float64 { return n.A / unit.GasConstant / T / T }

func (n NuclearTail) heats(dst, ts []float64) {
	for i, T := range ts {
		dst[i] = n.heat(T)
	}
}

func (n NuclearTail) reduced(T float64) statmech.Reduced { panic("solid: NuclearTail has no ln q") }

// HeatCapacity returns A/T².
func (n NuclearTail) HeatCapacity(T unit.Temperature) unit.MolarEntropy {
	return heatCapacity(n, "solid.NuclearTail.HeatCapacity", T)
}

// HeatCapacities returns A/T² at every temperature.
func (n NuclearTail) HeatCapacities(ts []unit.Temperature) []unit.MolarEntropy {
	return heatCapacities(n, "solid.NuclearTail.HeatCapacities", ts)
}

// EntropyIncrement returns S(to) - S(from) = (A/2)(1/from² - 1/to²).
func (n NuclearTail) EntropyIncrement(from, to unit.Temperature) unit.MolarEntropy {
	const fn = "solid.NuclearTail.EntropyIncrement"
	a, b := checked(n, fn, from), checked(n, fn, to)
	return unit.MolarEntropy(n.A / 2 * (1/a - 1/b) * (1/a + 1/b))
}

// EnthalpyIncrement returns H(to) - H(from) = A (1/from - 1/to).
func (n NuclearTail) EnthalpyIncrement(from, to unit.Temperature) unit.MolarEnergy {
	const fn = "solid.NuclearTail.EnthalpyIncrement"
	a, b := checked(n, fn, from), checked(n, fn, to)
	return unit.MolarEnergy(n.A * (1/a - 1/b))
}

func (n *NuclearTail) fields() []parameter { return []parameter{{"A", &n.A, "J K/mol"}} }

// Owns implements [Differentiable].
func (n *NuclearTail) Owns(p *float64) (string, bool) { return owns(n.fields(), p) }

// Accumulate implements [Differentiable] for A.
func (n *NuclearTail) Accumulate(ts []unit.Temperature, at []*float64, c []float64, partials [][]float64) error {
	return accumulate(n, "solid.NuclearTail.Accumulate", n.fields(), ts, at, c, partials,
		func(temps, c []float64, slopes [][]float64) {
			for i, T := range temps {
				slopes[0][i] = 1 / unit.GasConstant / T / T
				c[i] = n.A * slopes[0][i]
			}
		})
}

// ExponentialGap is the heat capacity of excitations above a gap in its
// simplest form, C = A e^(-Δ/T), as it is fitted to superconductors well below
// their transition. It gives
//
//	S = A E₁(Δ/T),  U - U(0) = A T E₂(Δ/T)
//
// with the exponential integrals Eₙ. It is an interpolation formula over the
// range of a fit, not the heat capacity of one particular spectrum.
//
// Accuracy: 2e-14 relative (TestTails). Errors: a panic with a
// [*statmech.DomainError] if T or Gap is not positive and finite or A is
// negative or not finite.
//
// Reference: W. S. Corak, B. B. Goodman, C. B. Satterthwaite and A. Wexler,
// Physical Review 96, 1442 (1954), doi:10.1103/PhysRev.96.1442.2.
type ExponentialGap struct {
	A   unit.MolarEntropy // per mole of formula units
	Gap unit.Temperature  // Δ
}

func (e ExponentialGap) bad() *statmech.DomainError {
	switch {
	case !notNegative(float64(e.A)):
		return field("A", e.A, wantNotNegative)
	case !positive(float64(e.Gap)):
		return field("Gap", e.Gap, wantPositive)
	}
	return nil
}

func (e ExponentialGap) reduced(T float64) statmech.Reduced {
	a, x := float64(e.A)/unit.GasConstant, float64(e.Gap)/T
	s, u := a*special.ExpIntegral(1, x), a*special.ExpIntegral(2, x)
	lnq := s - u
	if x > 1 { // E₁ and E₂ come close to each other
		lnq = a * gapLogQ(x)
	}
	return statmech.Reduced{LogQ: lnq, U: u, C: a * math.Exp(-x)}
}

// gapLogQ returns E₁(x) - E₂(x) = ∫₁^∞ e^(-xt) (t-1)/t² dt for x > 1, by
// Kronrod quadrature of e^-x ∫₀^∞ e^-s s/(x+s)² ds.
func gapLogQ(x float64) float64 {
	f := func(s float64) float64 { return math.Exp(-s) * s / ((x + s) * (x + s)) }
	sum := 0.0
	for _, end := range [][2]float64{{0, 1}, {1, 3}, {3, 6}, {6, 10}, {10, 16}, {16, 24}, {24, 44}} {
		v, _, _ := kronrod(f, end[0], end[1])
		sum += v
	}
	return math.Exp(-x) * sum
}

func (e ExponentialGap) heat(T float64) float64 {
	return float64(e.A) / unit.GasConstant * math.Exp(-float64(e.Gap)/T)
}

func (e ExponentialGap) heats(dst, ts []float64) {
	for i, T := range ts {
		dst[i] = e.heat(T)
	}
}

func (e *ExponentialGap) fields() []parameter {
	return []parameter{{"A", (*float64)(&e.A), "J/(mol K)"}, {"Gap", (*float64)(&e.Gap), "K"}}
}

// Owns implements [Differentiable].
func (e *ExponentialGap) Owns(p *float64) (string, bool) { return owns(e.fields(), p) }

// Accumulate implements [Differentiable] for A and Gap.
func (e *ExponentialGap) Accumulate(ts []unit.Temperature, at []*float64, c []float64, partials [][]float64) error {
	return accumulate(e, "solid.ExponentialGap.Accumulate", e.fields(), ts, at, c, partials,
		func(temps, c []float64, slopes [][]float64) {
			for i, T := range temps {
				slopes[0][i] = math.Exp(-float64(e.Gap)/T) / unit.GasConstant
				c[i] = float64(e.A) * slopes[0][i]
				slopes[1][i] = -c[i] / T
			}
		})
}

// PowerLaw is a term C = B Tᵖ, for a low-temperature expansion such as βT³ or
// δT⁵, or for spin waves without a gap (p = 3/2 and 3). S = C/p and
// U - U(0) = C T/(p+1).
//
// Accuracy: 8 × 2⁻⁵² (TestTails). Errors: a panic with a
// [*statmech.DomainError] if T or Power is not positive and finite or
// Coefficient is not finite. A negative Coefficient is allowed, since a term of
// an expansion may be negative.
type PowerLaw struct {
	Coefficient float64 // B in J mol⁻¹ K^(-1-p), per mole of formula units
	Power       float64 // p > 0
}

func (p PowerLaw) bad() *statmech.DomainError {
	switch {
	case math.IsNaN(p.Coefficient) || math.IsInf(p.Coefficient, 0):
		return field("Coefficient", plainNumber(p.Coefficient), "finite")
	case !positive(p.Power):
		return field("Power", plainNumber(p.Power), wantPositive)
	}
	return nil
}

func (p PowerLaw) reduced(T float64) statmech.Reduced {
	c := p.Coefficient / unit.GasConstant * math.Pow(T, p.Power)
	return statmech.Reduced{LogQ: c / p.Power / (p.Power + 1), U: c / (p.Power + 1), C: c}
}

func (p PowerLaw) heat(T float64) float64 {
	return p.Coefficient / unit.GasConstant * math.Pow(T, p.Power)
}

func (p PowerLaw) heats(dst, ts []float64) {
	for i, T := range ts {
		dst[i] = p.heat(T)
	}
}

func (p *PowerLaw) fields() []parameter {
	return []parameter{{"Coefficient", &p.Coefficient, "J/mol K^(-1-Power)"}, {"Power", &p.Power, ""}}
}

// Owns implements [Differentiable].
func (p *PowerLaw) Owns(q *float64) (string, bool) { return owns(p.fields(), q) }

// Accumulate implements [Differentiable] for Coefficient and Power.
func (p *PowerLaw) Accumulate(ts []unit.Temperature, at []*float64, c []float64, partials [][]float64) error {
	return accumulate(p, "solid.PowerLaw.Accumulate", p.fields(), ts, at, c, partials,
		func(temps, c []float64, slopes [][]float64) {
			for i, T := range temps {
				slopes[0][i] = math.Pow(T, p.Power) / unit.GasConstant
				c[i] = p.Coefficient * slopes[0][i]
				slopes[1][i] = c[i] * math.Log(T)
			}
		})
}

// String names the field with its unit.
func (n NuclearTail) String() string { return describe("NuclearTail", n.fields()) }
