package calorimetry

import (
	"fmt"
	"math"

	"levelsum/display"
	"levelsum/statmech"
	"levelsum/statmech/data"
	"levelsum/statmech/fit"
	"levelsum/statmech/uncertain"
	"levelsum/statmech/unit"
)

// ReferenceTemperature is 298.15 K.
const ReferenceTemperature = 298.15 * unit.Temperature(1)

// A HighTemperature is a heat capacity and enthalpy above room temperature as
// powers of τ = T/298.15 K,
//
//	Cp = Σ aₖ τ^pₖ,  H(T) - H(298.15 K) = 298.15 K Σ aₖ (τ^(pₖ+1) - 1)/(pₖ+1)
//
// (with ln τ where pₖ = -1), fitted to drop-calorimetry enthalpies and heat
// capacities together.
type HighTemperature struct {
	Powers       []float64
	Coefficients []float64 // aₖ, J/(mol K)
	Result       *fit.Result
	From, To     unit.Temperature
	fixed        float64 // Cp(298.15 K) if it is held, else NaN
}

// FitDrop fits enthalpy increments and heat capacities together, Cp being the
// derivative of the enthalpy. drop has columns T and dH = H(T) - H(T_ref) with
// u(dH) (and u_c(dH), as of a furnace blank), and says T_ref in the line "#
// reference temperature/K: 273.15", 298.15 K if it is not there. cp is an
// ordinary table of heat capacities and may be nil. The enthalpy is exactly 0
// at T_ref. Where at298 is positive, Cp(298.15 K) is held at it; the powers
// must then contain 0.
//
// A mean heat capacity dH/(T - T_ref) is not Cp at T; columns of that kind
// belong into dH.
func FitDrop(drop, cp *data.Table, powers []float64, at298 unit.MolarEntropy, sigma fit.Sigma) (*HighTemperature, error) {
	h, err := drop.Column("dH")
	if err != nil {
		return nil, fmt.Errorf("calorimetry: FitDrop: %w", err)
	}
	if h.Unit.Kind != unit.KindMolarEnergy {
		return nil, fmt.Errorf("calorimetry: FitDrop: column dH is in %q, a unit of %s; want an enthalpy per mole. Cp = dH/(T - T_ref) is a mean over the range, not Cp at T", h.Unit.Symbol, h.Unit.Kind)
	}
	if len(drop.T) == 0 {
		return nil, fmt.Errorf("calorimetry: FitDrop: %s has no column T", drop.Name)
	}
	ref := float64(ReferenceTemperature)
	if x, u, err := drop.Number("reference temperature"); err == nil {
		if u.Kind != unit.KindTemperature || !(x > 0) {
			return nil, fmt.Errorf("calorimetry: FitDrop: %s: the reference temperature %g %s, want a temperature", drop.Name, x, u.Symbol)
		}
		ref = x
	}
	seen := map[float64]bool{}
	for _, p := range powers {
		if math.IsNaN(p) || math.IsInf(p, 0) || seen[p] {
			return nil, fmt.Errorf("calorimetry: FitDrop: power %g, want different finite powers", p)
		}
		seen[p] = true
	}
	m := &HighTemperature{Powers: append([]float64(nil), powers...), Coefficients: make([]float64, len(powers)), fixed: math.NaN()}
	if at298 > 0 {
		if !seen[0] {
			return nil, fmt.Errorf("calorimetry: FitDrop: Cp(298.15 K) can be held only with 0 among the powers")
		}
		m.fixed = float64(at298)
	}
	var t, y, u, common []float64
	isH := []bool{}
	lo, hi := math.Inf(1), math.Inf(-1)
	add := func(T, value, random, shared float64, enthalpy bool) {
		t, y, u, common, isH = append(t, T), append(y, value), append(u, random), append(common, shared), append(isH, enthalpy)
		lo, hi = min(lo, T), max(hi, T)
	}
	uh, uhc := columnOr(drop, "u_r(dH)", "u(dH)"), columnOr(drop, "u_c(dH)")
	for i, T := range drop.T {
		if float64(T) == ref {
			return nil, fmt.Errorf("calorimetry: FitDrop: row %d: an increment at the reference temperature itself says nothing", i+1)
		}
		if uh == nil && sigma != fit.ScaledSigma {
			return nil, fmt.Errorf("calorimetry: FitDrop: %s has no u(dH)", drop.Name)
		}
		add(float64(T), h.Values[i], at(uh, i, 0), at(uhc, i, 0), true)
	}
	if cp != nil {
		if uh == nil || cp.U == nil {
			return nil, fmt.Errorf("calorimetry: FitDrop: enthalpies and heat capacities are weighed against each other by their uncertainties: both tables need them")
		}
		for i, T := range cp.T {
			r := cp.U
			if cp.URandom != nil {
				r = cp.URandom
			}
			add(float64(T), float64(cp.Cp[i]), float64(r[i]), 0, false)
		}
	}
	m.From, m.To = unit.Temperature(min(lo, ref)), unit.Temperature(hi)
	x := make([]float64, len(t))
	for i := range x {
		x[i] = float64(i)
	}
	opts := []fit.Option{sigma}
	for k, p := range m.Powers {
		if p == 0 {
			m.Coefficients[k] = 25
		}
		if p == 0 && at298 > 0 {
			continue
		}
		opts = append(opts, fit.Vary(&m.Coefficients[k]), fit.Name(&m.Coefficients[k], fmt.Sprintf("a(%g)", p)))
	}
	if anyPositive(common) {
		opts = append(opts, fit.CommonUncertainty(common))
	}
	if uh == nil {
		u = nil
	}
	m.Result, err = fit.Curves(func(xs []float64) []float64 {
		m.hold()
		out := make([]float64, len(xs))
		for k, v := range xs {
			i := int(v)
			if isH[i] {
				out[k] = m.enthalpy(t[i]) - m.enthalpy(ref)
			} else {
				out[k] = m.heatCapacity(t[i])
			}
		}
		return out
	}, x, y, u, opts...)
	m.hold()
	return m, err
}

// hold makes the constant term follow the others where Cp(298.15 K) is held.
func (m *HighTemperature) hold() {
	if math.IsNaN(m.fixed) {
		return
	}
	rest, zero := 0.0, 0
	for k, p := range m.Powers {
		if p == 0 {
			zero = k
			continue
		}
		rest += m.Coefficients[k]
	}
	m.Coefficients[zero] = m.fixed - rest // all powers of τ are 1 at 298.15 K
}

func (m *HighTemperature) heatCapacity(T float64) float64 {
	tau, s := T/float64(ReferenceTemperature), 0.0
	for k, p := range m.Powers {
		s += m.Coefficients[k] * math.Pow(tau, p)
	}
	return s
}

func (m *HighTemperature) enthalpy(T float64) float64 {
	tau, s := T/float64(ReferenceTemperature), 0.0
	for k, p := range m.Powers {
		if p == -1 {
			s += m.Coefficients[k] * math.Log(tau)
		} else {
			s += m.Coefficients[k] * (math.Pow(tau, p+1) - 1) / (p + 1)
		}
	}
	return s * float64(ReferenceTemperature)
}

func (m *HighTemperature) entropy(T float64) float64 {
	tau, s := T/float64(ReferenceTemperature), 0.0
	for k, p := range m.Powers {
		if p == 0 {
			s += m.Coefficients[k] * math.Log(tau)
		} else {
			s += m.Coefficients[k] * (math.Pow(tau, p) - 1) / p
		}
	}
	return s
}

func columnOr(run *data.Table, names ...string) []float64 {
	for _, n := range names {
		if c, err := run.Column(n); err == nil && c.Values != nil {
			return c.Values
		}
	}
	return nil
}

func at(xs []float64, i int, otherwise float64) float64 {
	if xs == nil {
		return otherwise
	}
	return xs[i]
}

// quantity evaluates f with the covariance of the fit.
func (m *HighTemperature) quantity(fn string, T unit.Temperature, f func(T float64) float64) uncertain.Quantity {
	if !(T >= min(m.From, ReferenceTemperature) && T <= m.To) {
		panic(&statmech.DomainError{Func: "calorimetry.HighTemperature." + fn, Arg: "T", Value: T.String(), Want: fmt.Sprintf("between %v and %v, the range of the fit", min(m.From, ReferenceTemperature), m.To)})
	}
	return m.Result.Function(func() float64 { m.hold(); return f(float64(T)) })
}

// HeatCapacity returns Cp at T, in J/(mol K).
func (m *HighTemperature) HeatCapacity(T unit.Temperature) uncertain.Quantity {
	return m.quantity("HeatCapacity", T, m.heatCapacity).WithUnit("J/(mol K)")
}

// Enthalpy returns H(T) - H(298.15 K), in J/mol.
func (m *HighTemperature) Enthalpy(T unit.Temperature) uncertain.Quantity {
	return m.quantity("Enthalpy", T, m.enthalpy).WithUnit("J/mol")
}

// Entropy returns S(T) - S(298.15 K), in J/(mol K).
func (m *HighTemperature) Entropy(T unit.Temperature) uncertain.Quantity {
	return m.quantity("Entropy", T, m.entropy).WithUnit("J/(mol K)")
}

// View shows the fit.
func (m *HighTemperature) View() display.View { return m.Result.View() }
