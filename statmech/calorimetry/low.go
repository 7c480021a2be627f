package calorimetry

import (
	"fmt"
	"math"

	"levelsum/statmech"
	"levelsum/statmech/fit"
	"levelsum/statmech/uncertain"
	"levelsum/statmech/unit"
)

// An Extrapolation is what is taken for the heat capacity below the first
// point, such as the [Model] of a fit.
type Extrapolation interface {
	// Entropy and Enthalpy are the integrals of Cp/T and Cp from 0 to T, in
	// J/(mol K) and J/mol.
	Entropy(T unit.Temperature) uncertain.Quantity
	Enthalpy(T unit.Temperature) uncertain.Quantity
	HeatCapacity(T unit.Temperature) uncertain.Quantity
	// Describe says what was taken, in words.
	Describe() string
}

// Model makes an extrapolation of a fit of a heat-capacity model to the lowest
// points; the covariance of the fit is carried into the entropy.
func Model(res *fit.Result) (Extrapolation, error) {
	if res == nil {
		return nil, fmt.Errorf("calorimetry: Model: no fit")
	}
	c, ok := res.Model().(interface {
		HeatCapacity(T unit.Temperature) unit.MolarEntropy
	})
	if !ok {
		mode, isMode := res.Model().(statmech.Mode)
		if !isMode {
			return nil, fmt.Errorf("calorimetry: Model: the fit is not one of a heat-capacity model")
		}
		c = modeTerm{mode}
	}
	m := &fitted{res: res, term: c}
	// A term that does not vanish towards 0 K has no entropy there.
	low := math.Inf(1)
	for _, x := range res.X {
		low = min(low, x)
	}
	if _, err := m.check(low); err != nil {
		return nil, err
	}
	return m, nil
}

type modeTerm struct{ mode statmech.Mode }

func (m modeTerm) HeatCapacity(T unit.Temperature) unit.MolarEntropy {
	return unit.MolarEntropy(m.mode.Reduced(T).C) * unit.R
}

type fitted struct {
	res  *fit.Result
	term interface {
		HeatCapacity(T unit.Temperature) unit.MolarEntropy
	}
}

func (m *fitted) check(T float64) (s float64, err error) {
	defer func() {
		if e, ok := recover().(*statmech.DomainError); ok {
			err = fmt.Errorf("calorimetry: Model: no entropy between 0 K and %g K: %w", T, e)
		}
	}()
	c1, c0 := float64(m.term.HeatCapacity(unit.Temperature(T/50))), float64(m.term.HeatCapacity(unit.Temperature(T)))
	if !(c1 >= 0) || !(c0 > 0) || c1 > c0 {
		return 0, fmt.Errorf("calorimetry: Model: the model's heat capacity does not fall towards 0 K (%g J/(mol K) at %g K, %g at %g K): its integral from 0 K is not an entropy", c1, T/50, c0, T)
	}
	return m.entropy(unit.Temperature(T)), nil
}

// entropy is the model's own S(T), else ∫ C/T dT from 0.
func (m *fitted) entropy(T unit.Temperature) (s float64) {
	if e, ok := m.term.(interface {
		Entropy(T unit.Temperature) unit.MolarEntropy
	}); ok {
		if s, ok := evaluated(func() float64 { return float64(e.Entropy(T)) }); ok {
			return s
		}
	}
	return fromZero(func(t float64) float64 { return float64(m.term.HeatCapacity(unit.Temperature(t))) / t }, float64(T))
}

// evaluated returns f(), and false if f is outside its domain: a sum one of
// whose terms has no closed entropy.
func evaluated(f func() float64) (v float64, ok bool) {
	defer func() {
		switch e := recover().(type) {
		case nil:
		case *statmech.DomainError:
			ok = false
		default:
			panic(e)
		}
	}()
	return f(), true
}

func (m *fitted) enthalpy(T unit.Temperature) float64 {
	return fromZero(func(t float64) float64 { return float64(m.term.HeatCapacity(unit.Temperature(t))) }, float64(T))
}

// fromZero integrates f from 0 to b in t = b·v³, which is smooth for f that
// begins like any power of t above -1/3. f is not evaluated at 0.
func fromZero(f func(t float64) float64, b float64) float64 {
	const panels = 12
	var sum float64
	for p := range panels {
		half := 0.5 / panels
		mid := (2*float64(p) + 1) * half
		for k, g := range gaussX {
			for _, x := range [2]float64{-g, g} {
				v := mid + half*x
				t := b * v * v * v
				if t > 0 {
					sum += gaussW[k] * half * 3 * b * v * v * f(t)
				}
			}
		}
	}
	return sum
}

func (m *fitted) Entropy(T unit.Temperature) uncertain.Quantity {
	return m.res.Function(func() float64 { return m.entropy(T) }).WithUnit("J/(mol K)")
}

func (m *fitted) Enthalpy(T unit.Temperature) uncertain.Quantity {
	return m.res.Function(func() float64 { return m.enthalpy(T) }).WithUnit("J/mol")
}

func (m *fitted) HeatCapacity(T unit.Temperature) uncertain.Quantity {
	return m.res.Function(func() float64 { return float64(m.term.HeatCapacity(T)) }).WithUnit("J/(mol K)")
}

func (m *fitted) Describe() string {
	lo, hi := math.Inf(1), math.Inf(-1)
	for _, x := range m.res.X {
		lo, hi = min(lo, x), max(hi, x)
	}
	return fmt.Sprintf("model fitted from %.6g K to %.6g K", lo, hi)
}
