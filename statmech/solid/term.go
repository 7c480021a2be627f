package solid

import (
	"fmt"
	"math"
	"strings"
	"sync"

	"levelsum/statmech"
	"levelsum/statmech/unit"
)

// A Term is a contribution to the molar heat capacity of a solid. A type of
// the user's own with this one method can stand in a [Sum].
type Term interface {
	HeatCapacity(T unit.Temperature) unit.MolarEntropy
}

// Differentiable is a Term that knows its derivatives with respect to its own
// fields. All models of this package, by pointer, are.
type Differentiable interface {
	Term
	// Accumulate adds the heat capacity at ts[i], in J/(mol K), to c[i] and,
	// for every at[j] that is the address of one of the term's fields, the
	// derivative with respect to it, in J/(mol K) per SI unit of the field, to
	// partials[j][i]. Other rows are left alone, so that a sum of terms is a
	// sequence of calls. c may be nil; at may be empty.
	//
	// It returns a *statmech.DomainError, and has then written nothing
	// useful, if a field or a temperature is outside the model's range. A trial
	// step of a fit that leads there is to be shortened.
	Accumulate(ts []unit.Temperature, at []*float64, c []float64, partials [][]float64) error
	// Owns says whether p is the address of one of the term's fields, and
	// under what name ("Theta").
	Owns(p *float64) (name string, ok bool)
}

// model is what the models of this package have in common. Everything is per
// formula unit, in units of k; T is already known to be good.
type model interface {
	// bad returns a field outside its range, or nil.
	bad() *statmech.DomainError
	reduced(T float64) statmech.Reduced
	heat(T float64) float64 // C/k
	heats(dst, ts []float64)
}

// field is a DomainError about a field of a model; checked fills in Func.
func field(name string, value fmt.Stringer, want string) *statmech.DomainError {
	return &statmech.DomainError{Arg: name, Value: value.String(), Want: want}
}

type plainNumber float64

func (n plainNumber) String() string { return fmt.Sprintf("%g", float64(n)) }

func positive(x float64) bool    { return x > 0 && !math.IsInf(x, 1) }
func notNegative(x float64) bool { return x >= 0 && !math.IsInf(x, 1) }

const (
	wantPositive    = "positive and finite"
	wantNotNegative = "not negative, and finite"
)

// temperature returns T in K, or the error that says which T is wrong.
func temperature(fn, arg string, T unit.Temperature) (float64, *statmech.DomainError) {
	if positive(float64(T)) {
		return float64(T), nil
	}
	return 0, &statmech.DomainError{Func: fn, Arg: arg, Value: T.String(), Want: wantPositive}
}

// checked panics if the model or T is bad and returns T in K.
func checked[M model](m M, fn string, T unit.Temperature) float64 {
	if err := m.bad(); err != nil {
		err.Func = fn
		panic(err)
	}
	x, err := temperature(fn, "T", T)
	if err != nil {
		panic(err)
	}
	return x
}

func reduced[M model](m M, fn string, T unit.Temperature) statmech.Reduced {
	return m.reduced(checked(m, fn, T))
}

func heatCapacity[M model](m M, fn string, T unit.Temperature) unit.MolarEntropy {
	return unit.MolarEntropy(m.heat(checked(m, fn, T))) * unit.R
}

// A wholeModel wants all temperatures at once.
type wholeModel interface{ whole() }

func heatCapacities(m model, fn string, ts []unit.Temperature) []unit.MolarEntropy {
	if err := m.bad(); err != nil {
		err.Func = fn
		panic(err)
	}
	c := make([]unit.MolarEntropy, len(ts))
	if t, ok := m.(tabledModel); ok {
		tabledHeats(c, fn, ts, t.heatTable())
		return c
	}
	size := min(len(ts), chunk)
	if _, ok := m.(wholeModel); ok {
		size = len(ts)
	}
	x := make([]float64, size)
	for from := 0; from < len(ts); from += size {
		part := ts[from:min(from+size, len(ts))]
		x := x[:len(part)]
		convert(fn, x, part, from)
		m.heats(x, x)
		for i, v := range x {
			c[from+i] = unit.MolarEntropy(v) * unit.R
		}
	}
	return c
}

// kelvins checks every temperature and names the one that is wrong.
func kelvins(m model, fn string, ts []unit.Temperature) []float64 {
	if err := m.bad(); err != nil {
		err.Func = fn
		panic(err)
	}
	x := make([]float64, len(ts))
	convert(fn, x, ts, 0)
	return x
}

// convert writes temperatures in K; ts begins at the given index of the
// argument.
func convert(fn string, x []float64, ts []unit.Temperature, at int) {
	for i, T := range ts {
		if !positive(float64(T)) {
			_, err := temperature(fn, fmt.Sprintf("ts[%d]", at+i), T)
			panic(err)
		}
		x[i] = float64(T)
	}
}

func entropy(m model, fn string, T unit.Temperature) unit.MolarEntropy {
	return unit.MolarEntropy(reduced(m, fn, T).Entropy()) * unit.R
}

func entropies(m model, fn string, ts []unit.Temperature) []unit.MolarEntropy {
	s := make([]unit.MolarEntropy, len(ts))
	for i, r := range reducedAt(m, kelvins(m, fn, ts)) {
		s[i] = unit.MolarEntropy(r.Entropy()) * unit.R
	}
	return s
}

// reducedAt returns the functions at every temperature, by the model's own
// slice form where it has one.
func reducedAt(m model, ts []float64) []statmech.Reduced {
	if many, ok := m.(interface {
		reducedAt(ts []float64) []statmech.Reduced
	}); ok {
		return many.reducedAt(ts)
	}
	out := make([]statmech.Reduced, len(ts))
	for i, t := range ts {
		out[i] = m.reduced(t)
	}
	return out
}

func entropyIncrement(m model, fn string, from, to unit.Temperature) unit.MolarEntropy {
	return entropy(m, fn, to) - entropy(m, fn, from)
}

// energy returns U(T) - U(0) of one mole.
func energy(m model, fn string, T unit.Temperature) unit.MolarEnergy {
	t := checked(m, fn, T)
	return unit.MolarEnergy(m.reduced(t).U*t) * unit.MolarEnergy(unit.GasConstant)
}

func energies(m model, fn string, ts []unit.Temperature) []unit.MolarEnergy {
	x := kelvins(m, fn, ts)
	out := make([]unit.MolarEnergy, len(ts))
	for i, r := range reducedAt(m, x) {
		out[i] = unit.MolarEnergy(r.U*x[i]) * unit.MolarEnergy(unit.GasConstant)
	}
	return out
}

func enthalpyIncrement(m model, fn string, from, to unit.Temperature) unit.MolarEnergy {
	return energy(m, fn, to) - energy(m, fn, from)
}

func enthalpyIncrements(m model, fn string, from unit.Temperature, ts []unit.Temperature) []unit.MolarEnergy {
	base := energy(m, fn, from)
	out := energies(m, fn, ts)
	for i := range out {
		out[i] -= base
	}
	return out
}

// A parameter is a field of a model that a fit may vary.
type parameter struct {
	name string
	at   *float64
	unit string
}

// describe writes a model with its fields and units.
func describe(kind string, fields []parameter) string {
	var b strings.Builder
	b.WriteString(kind)
	b.WriteByte('{')
	for i, f := range fields {
		if i > 0 {
			b.WriteString(", ")
		}
		v := *f.at
		if f.name == "Modes" {
			v = modes(v)
		} else if f.name == "Sites" && v == 0 {
			v = 1
		}
		fmt.Fprintf(&b, "%s: %.6g", f.name, v)
		switch {
		case f.unit != "":
			b.WriteString(" " + f.unit)
		case f.name == "Modes" || f.name == "Sites":
			b.WriteString(" per formula unit")
		}
	}
	b.WriteByte('}')
	return b.String()
}

func owns(fields []parameter, p *float64) (string, bool) {
	for _, f := range fields {
		if f.at == p {
			return f.name, true
		}
	}
	return "", false
}

// chunk is how many temperatures Accumulate treats at a time, so that its
// scratch space is on the stack.
const chunk = 128

// blocks keeps the arrays of accumulate: a fit calls it for every step.
var blocks sync.Pool

// accumulate is Accumulate for a model whose values and derivatives block
// writes for at most chunk good temperatures: C/k into c and ∂(C/k)/∂fieldⱼ
// into slopes[j] for each field j.
func accumulate(m model, name string, fields []parameter, ts []unit.Temperature, at []*float64, c []float64, partials [][]float64,
	block func(t, c []float64, slopes [][]float64)) error {
	if err := m.bad(); err != nil {
		err.Func = name
		return err
	}
	// rows of partials that each field goes to
	var wanted [][2]int
	for row, p := range at {
		for j, f := range fields {
			if p != f.at {
				continue
			}
			if f.name == "Modes" && *p == 0 {
				return &statmech.DomainError{Func: name, Arg: f.name, Value: "0", Want: "a value other than the default, since it is free"}
			}
			wanted = append(wanted, [2]int{j, row})
		}
	}
	need := (2 + len(fields)) * chunk
	kept, _ := blocks.Get().(*[]float64)
	if kept == nil || len(*kept) < need {
		fresh := make([]float64, need)
		kept = &fresh
	}
	defer blocks.Put(kept)
	scratch := *kept
	t, values := scratch[:chunk], scratch[chunk:2*chunk]
	slopes := make([][]float64, len(fields))
	for from := 0; from < len(ts); from += chunk {
		n := min(chunk, len(ts)-from)
		for i, T := range ts[from : from+n] {
			if !positive(float64(T)) {
				_, err := temperature(name, "T", T)
				return err
			}
			t[i] = float64(T)
		}
		for j := range slopes {
			slopes[j] = scratch[(2+j)*chunk:][:n]
		}
		block(t[:n], values[:n], slopes)
		if c != nil {
			out := c[from : from+n]
			for i, v := range values[:n] {
				out[i] += float64(unit.GasConstant * v)
			}
		}
		for _, w := range wanted {
			out := partials[w[1]][from : from+n]
			for i, v := range slopes[w[0]] {
				out[i] += float64(unit.GasConstant * v)
			}
		}
	}
	return nil
}

// modes returns the count of modes that a field Modes stands for.
func modes(n float64) float64 {
	if n == 0 {
		return 3
	}
	return n
}
