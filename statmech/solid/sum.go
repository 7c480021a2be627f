package solid

import (
	"fmt"
	"math"
	"reflect"

	"levelsum/statmech"
	"levelsum/statmech/unit"
)

// Sum is a crystal composed of independent terms, all per mole of the same
// formula unit: Sum{&debye, &einstein, &electronic}. A fit that varies the
// fields of its terms needs the terms by pointer.
//
// Entropy, ThermalEnergy and Reduced need terms that have them from T = 0; the
// increments are there for every term, by quadrature where a term has no
// closed form (to 1e-10 of the increment). Errors: a panic with a
// [*statmech.DomainError].
type Sum []Term

// HeatCapacity returns the heat capacity of all terms at T. A term of the
// user's own that gives NaN or an infinity is named.
func (s Sum) HeatCapacity(T unit.Temperature) unit.MolarEntropy {
	const fn = "solid.Sum.HeatCapacity"
	statmech.CheckTemperature(fn, T)
	var c unit.MolarEntropy
	for i := range s {
		c += s.finite(fn, i, T, s.term(fn, i).HeatCapacity(T))
	}
	return c
}

// term returns the i-th term, which must be there.
func (s Sum) term(fn string, i int) Term {
	if s[i] == nil {
		panic(s.lacks(fn, i, "a term"))
	}
	return s[i]
}

func (s Sum) finite(fn string, i int, T unit.Temperature, c unit.MolarEntropy) unit.MolarEntropy {
	if math.IsNaN(float64(c)) || math.IsInf(float64(c), 0) {
		panic(&statmech.DomainError{Func: fn, Arg: fmt.Sprintf("term %d, %s, at %v", i+1, typeName(s[i]), T), Value: c.String(), Want: "a finite heat capacity"})
	}
	return c
}

// HeatCapacities returns the heat capacity of all terms at every temperature.
func (s Sum) HeatCapacities(ts []unit.Temperature) []unit.MolarEntropy {
	const fn = "solid.Sum.HeatCapacities"
	for _, T := range ts {
		statmech.CheckTemperature(fn, T)
	}
	c := make([]unit.MolarEntropy, len(ts))
	for k := range s {
		for i, v := range HeatCapacities(s.term(fn, k), ts) {
			c[i] += s.finite(fn, k, ts[i], v)
		}
	}
	return c
}

// HeatCapacities returns the heat capacity of a term at every temperature, by
// the term's own slice method where it has one.
func HeatCapacities(term Term, ts []unit.Temperature) []unit.MolarEntropy {
	if many, ok := term.(interface {
		HeatCapacities([]unit.Temperature) []unit.MolarEntropy
	}); ok {
		return many.HeatCapacities(ts)
	}
	c := make([]unit.MolarEntropy, len(ts))
	for i, T := range ts {
		c[i] = term.HeatCapacity(T)
	}
	return c
}

// EntropyIncrement returns S(to) - S(from), the integral of C/T.
func (s Sum) EntropyIncrement(from, to unit.Temperature) unit.MolarEntropy {
	const fn = "solid.Sum.EntropyIncrement"
	checkRange(fn, from, to)
	var sum unit.MolarEntropy
	for _, term := range s {
		if closed, ok := term.(interface {
			EntropyIncrement(from, to unit.Temperature) unit.MolarEntropy
		}); ok {
			sum += closed.EntropyIncrement(from, to)
			continue
		}
		sum += unit.MolarEntropy(integrateLog(func(t float64) float64 {
			return float64(term.HeatCapacity(unit.Temperature(t)))
		}, float64(from), float64(to)))
	}
	return sum
}

// EnthalpyIncrement returns H(to) - H(from), the integral of C; see
// [Debye.EnthalpyIncrement] for what that is at constant volume.
func (s Sum) EnthalpyIncrement(from, to unit.Temperature) unit.MolarEnergy {
	const fn = "solid.Sum.EnthalpyIncrement"
	checkRange(fn, from, to)
	var sum unit.MolarEnergy
	for _, term := range s {
		if closed, ok := term.(interface {
			EnthalpyIncrement(from, to unit.Temperature) unit.MolarEnergy
		}); ok {
			sum += closed.EnthalpyIncrement(from, to)
			continue
		}
		sum += unit.MolarEnergy(integrateLog(func(t float64) float64 {
			return t * float64(term.HeatCapacity(unit.Temperature(t)))
		}, float64(from), float64(to)))
	}
	return sum
}

func checkRange(fn string, from, to unit.Temperature) {
	if _, err := temperature(fn, "from", from); err != nil {
		panic(err)
	}
	if _, err := temperature(fn, "to", to); err != nil {
		panic(err)
	}
}

// Entropy returns S(T) of all terms, counted from T = 0.
func (s Sum) Entropy(T unit.Temperature) unit.MolarEntropy {
	var sum unit.MolarEntropy
	statmech.CheckTemperature("solid.Sum.Entropy", T)
	for i, term := range s {
		absolute, ok := term.(interface {
			Entropy(unit.Temperature) unit.MolarEntropy
		})
		if !ok {
			panic(s.lacks("solid.Sum.Entropy", i, "a term with an entropy from T = 0; EntropyIncrement needs none"))
		}
		sum += absolute.Entropy(T)
	}
	return sum
}

// Entropies returns S of all terms at every temperature.
func (s Sum) Entropies(ts []unit.Temperature) []unit.MolarEntropy {
	sum := make([]unit.MolarEntropy, len(ts))
	for i, T := range ts {
		sum[i] = s.Entropy(T)
	}
	return sum
}

// ThermalEnergy returns U(T) - U(0) of all terms.
func (s Sum) ThermalEnergy(T unit.Temperature) unit.MolarEnergy {
	var sum unit.MolarEnergy
	statmech.CheckTemperature("solid.Sum.ThermalEnergy", T)
	for i, term := range s {
		absolute, ok := term.(interface {
			ThermalEnergy(unit.Temperature) unit.MolarEnergy
		})
		if !ok {
			panic(s.lacks("solid.Sum.ThermalEnergy", i, "a term with an energy from T = 0; EnthalpyIncrement needs none"))
		}
		sum += absolute.ThermalEnergy(T)
	}
	return sum
}

// ThermalEnergies returns U(T) - U(0) of all terms at every temperature.
func (s Sum) ThermalEnergies(ts []unit.Temperature) []unit.MolarEnergy {
	sum := make([]unit.MolarEnergy, len(ts))
	for i, T := range ts {
		sum[i] = s.ThermalEnergy(T)
	}
	return sum
}

// Reduced returns ln q, U/kT and C/k of one formula unit; see [statmech.Mode].
func (s Sum) Reduced(T unit.Temperature) statmech.Reduced {
	var r statmech.Reduced
	statmech.CheckTemperature("solid.Sum.Reduced", T)
	for i, term := range s {
		m, ok := term.(statmech.Mode)
		if !ok {
			panic(s.lacks("solid.Sum.Reduced", i, "a statmech.Mode"))
		}
		r = r.Add(m.Reduced(T))
	}
	return r
}

// ZeroPointEnergy returns the zero-point energy of the terms that have one,
// per formula unit.
func (s Sum) ZeroPointEnergy() unit.Energy {
	var e unit.Energy
	for _, term := range s {
		if z, ok := term.(statmech.ZeroPointer); ok {
			e += z.ZeroPointEnergy()
		}
	}
	return e
}

func (s Sum) lacks(fn string, i int, want string) *statmech.DomainError {
	return &statmech.DomainError{Func: fn, Arg: fmt.Sprintf("term %d", i+1), Value: typeName(s[i]), Want: want}
}

func typeName(term Term) string {
	t := reflect.TypeOf(term)
	if t == nil {
		return "nil"
	}
	if t.Kind() == reflect.Pointer {
		t = t.Elem()
	}
	return t.Name()
}

// ModeCount returns the number of vibrations of all terms that count them.
func (s Sum) ModeCount() float64 {
	n := 0.0
	for _, term := range s {
		if m, ok := term.(interface{ ModeCount() float64 }); ok {
			n += m.ModeCount()
		}
	}
	return n
}

// CheckModes returns an error that says what is there and what is missing if
// the vibrations of all terms are not 3 for each of the given number of atoms
// in the formula unit, to 1e-9 of them. Free weights of a fit that do not add
// to 3n describe another amount of substance.
func (s Sum) CheckModes(atoms int) error {
	if n, want := s.ModeCount(), 3*float64(atoms); !(math.Abs(n-want) <= 1e-9*want) {
		return &statmech.DomainError{Func: "solid.Sum.CheckModes", Arg: "modes of all terms", Value: fmt.Sprintf("%g", n),
			Want: fmt.Sprintf("%g, three for each of %d atoms in the formula unit", want, atoms)}
	}
	return nil
}

// Accumulate implements [Differentiable] if every term that owns one of the
// addresses does, and every other term knows its heat capacity. A term that is
// not Differentiable must not depend on the numbers at those addresses, or
// their derivatives miss its part.
func (s Sum) Accumulate(ts []unit.Temperature, at []*float64, c []float64, partials [][]float64) (err error) {
	defer func() {
		// A term that is not Differentiable panics where others return an error.
		if r := recover(); r != nil {
			domain, ok := r.(*statmech.DomainError)
			if !ok {
				panic(r)
			}
			err = domain
		}
	}()
	for k, term := range s {
		if d, ok := term.(Differentiable); ok {
			if err := d.Accumulate(ts, at, c, partials); err != nil {
				return err
			}
			continue
		}
		if c == nil {
			continue
		}
		const fn = "solid.Sum.Accumulate"
		for i, v := range HeatCapacities(s.term(fn, k), ts) {
			c[i] += float64(s.finite(fn, k, ts[i], v))
		}
	}
	return nil
}

// Owns implements [Differentiable]. The name is that of the term's type and of
// the field, "Debye.Theta"; terms of one type are numbered, "Einstein2.Theta".
func (s Sum) Owns(p *float64) (string, bool) {
	for i, term := range s {
		d, ok := term.(Differentiable)
		if !ok {
			continue
		}
		name, ok := d.Owns(p)
		if !ok {
			continue
		}
		kind, same, before := typeName(term), 0, 0
		for j, other := range s {
			if typeName(other) == kind {
				same++
				if j < i {
					before++
				}
			}
		}
		if same > 1 {
			kind = fmt.Sprintf("%s%d", kind, before+1)
		}
		return kind + "." + name, true
	}
	return "", false
}

// Warnings returns what a composition makes doubtful: terms of the same form,
// which a heat capacity cannot tell apart.
func (s Sum) Warnings() []string {
	lattice, cubic := false, ""
	linear := 0
	for _, term := range s {
		switch m := term.(type) {
		case Debye, *Debye, Tarasov, *Tarasov, *Phonons:
			lattice = true
		case AntiferroSpinWave:
			if m.Gap == 0 {
				cubic = "AntiferroSpinWave without a gap"
			}
		case *AntiferroSpinWave:
			if m.Gap == 0 {
				cubic = "AntiferroSpinWave without a gap"
			}
		case PowerLaw:
			if m.Power == 3 {
				cubic = "PowerLaw with Power 3"
			}
		case *PowerLaw:
			if m.Power == 3 {
				cubic = "PowerLaw with Power 3"
			}
		case Electronic, *Electronic:
			linear++
		}
	}
	var out []string
	if lattice && cubic != "" {
		out = append(out, cubic+" has the T³ of the lattice: heat capacities alone do not separate the two; measurements in a magnetic field may")
	}
	if linear > 1 {
		out = append(out, fmt.Sprintf("%d Electronic terms are one: only the sum of their coefficients shows", linear))
	}
	return out
}

// OfMode makes a Term of any [statmech.Mode], such as a type declared in a
// notebook cell, with Count independent copies in the formula unit.
type OfMode struct {
	Mode  statmech.Mode
	Count float64 // copies in the formula unit; 0 stands for 1
}

func (o OfMode) count() float64 {
	if o.Count == 0 {
		return 1
	}
	return o.Count
}

// Reduced returns ln q, U/kT and C/k of one formula unit.
func (o OfMode) Reduced(T unit.Temperature) statmech.Reduced {
	statmech.CheckTemperature("solid.OfMode.Reduced", T)
	return o.Mode.Reduced(T).Scale(o.count())
}

// HeatCapacity returns the molar heat capacity at T.
func (o OfMode) HeatCapacity(T unit.Temperature) unit.MolarEntropy {
	return unit.MolarEntropy(o.Reduced(T).C) * unit.R
}

// Entropy returns S(T).
func (o OfMode) Entropy(T unit.Temperature) unit.MolarEntropy {
	return unit.MolarEntropy(o.Reduced(T).Entropy()) * unit.R
}

// EntropyIncrement returns S(to) - S(from).
func (o OfMode) EntropyIncrement(from, to unit.Temperature) unit.MolarEntropy {
	return o.Entropy(to) - o.Entropy(from)
}

// ThermalEnergy returns U(T) - U(0).
func (o OfMode) ThermalEnergy(T unit.Temperature) unit.MolarEnergy {
	return (unit.MolarEntropy(o.Reduced(T).U) * unit.R).Times(T)
}

// EnthalpyIncrement returns U(to) - U(from).
func (o OfMode) EnthalpyIncrement(from, to unit.Temperature) unit.MolarEnergy {
	return o.ThermalEnergy(to) - o.ThermalEnergy(from)
}
