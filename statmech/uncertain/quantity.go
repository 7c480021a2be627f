package uncertain

import (
	"fmt"
	"math"
	"strconv"

	"levelsum/statmech"
)

// A Quantity is a value with its standard uncertainty and the inputs both came
// from. It is immutable and may be shared between goroutines. The zero
// Quantity is exactly 0.
type Quantity struct{ n *node }

// node is one step of the computation that led to a quantity.
type node struct {
	op       op
	a, b     *node
	args     []*node                 // of opFunction
	f        func([]float64) float64 // of opFunction
	fs       func([]float64) []float64
	count    int     // of opFunctions: number of results
	index    int     // of opResult: which of them
	k        float64 // constant operand
	in       *input  // of opInput
	value    float64
	terms    []term // first-order dependence on the inputs, in order of their identity
	withheld string // reason why no standard uncertainty is given
	name     string
	unit     string
}

// term is the sensitivity coefficient of one input, ∂f/∂x.
type term struct {
	in *input
	c  float64
}

var zero = &node{op: opConstant}

func (q Quantity) node() *node {
	if q.n == nil {
		return zero
	}
	return q.n
}

// Value returns the best estimate.
func (q Quantity) Value() float64 { return q.node().value }

// StandardUncertainty returns the combined standard uncertainty to first order
// in the inputs,
//
//	u² = Σᵢ Σⱼ cᵢ cⱼ u(xᵢ,xⱼ),  cᵢ = ∂f/∂xᵢ
//
// where u(xᵢ,xⱼ) is the covariance of two inputs. It panics with a
// [*statmech.DomainError] if the uncertainty was withheld (see [Quantity.Withheld]).
//
// Reference: JCGM 100:2008, equation (13).
func (q Quantity) StandardUncertainty() float64 {
	n := q.node()
	if n.withheld != "" {
		panic(&statmech.DomainError{Func: "uncertain.Quantity.StandardUncertainty", Arg: "q",
			Value: strconv.FormatFloat(n.value, 'g', 8, 64), Want: "a standard uncertainty, which was withheld: " + n.withheld})
	}
	return math.Sqrt(variance(n.terms, anyPart))
}

// RandomPart returns the part of the standard uncertainty that comes from
// random inputs, CommonPart the part from common ones (see [Common]); the
// squares of the two add to the square of the whole.
func (q Quantity) RandomPart() float64 { return math.Sqrt(variance(q.node().terms, randomPart)) }

// CommonPart: see [Quantity.RandomPart].
func (q Quantity) CommonPart() float64 { return math.Sqrt(variance(q.node().terms, commonPart)) }

// Covariance returns the covariance of two quantities through the inputs that
// they share or whose errors are correlated.
func Covariance(a, b Quantity) float64 { return covariance(a.node().terms, b.node().terms, anyPart) }

// Correlation returns the correlation coefficient of two quantities, 0 if
// either is exact.
func Correlation(a, b Quantity) float64 {
	va, vb := variance(a.node().terms, anyPart), variance(b.node().terms, anyPart)
	if va == 0 || vb == 0 {
		return 0
	}
	r := Covariance(a, b) / (math.Sqrt(va) * math.Sqrt(vb))
	return max(-1, min(1, r))
}

// Withhold returns q without a standard uncertainty, for the reason given: a
// result whose uncertainty would be a false statement. The reason is printed
// with the value and passes to whatever is computed from it.
func (q Quantity) Withhold(reason string) Quantity {
	n := *q.node()
	n.withheld = reason
	return Quantity{&n}
}

// Withheld returns the reason why q has no standard uncertainty, or "".
func (q Quantity) Withheld() string { return q.node().withheld }

// Named returns q with a name for budgets and tables.
func (q Quantity) Named(name string) Quantity {
	n := *q.node()
	n.name = name
	if n.op == opInput {
		in := *n.in // the identity of an input is its origin, which the copy keeps
		in.name = name
		n.in = &in
		n.terms = []term{{&in, 1}}
	}
	return Quantity{&n}
}

// WithUnit returns q with a unit to be printed behind it. It converts nothing.
func (q Quantity) WithUnit(unit string) Quantity {
	n := *q.node()
	n.unit = unit
	if n.op == opInput {
		in := *n.in
		in.unit = unit
		n.in = &in
		n.terms = []term{{&in, 1}}
	}
	return Quantity{&n}
}

// Name returns the name given by [Quantity.Named].
func (q Quantity) Name() string { return q.node().name }

// Unit returns the unit given by [Quantity.WithUnit].
func (q Quantity) Unit() string { return q.node().unit }

type part int

const (
	anyPart part = iota
	randomPart
	commonPart
)

func (p part) has(in *input) bool {
	return p == anyPart || in.common == (p == commonPart)
}

func variance(ts []term, p part) float64 { return covariance(ts, ts, p) }

// covariance sums c_i c_j u(x_i,x_j). Inputs of different origin are
// independent, so terms are matched by origin.
func covariance(as, bs []term, p part) float64 {
	var sum float64
	for i, j := 0, 0; i < len(as) && j < len(bs); {
		switch a, b := as[i].in.src, bs[j].in.src; {
		case a.id < b.id:
			i++
		case a.id > b.id:
			j++
		default:
			i1, j1 := i, j
			for i1 < len(as) && as[i1].in.src == a {
				i1++
			}
			for j1 < len(bs) && bs[j1].in.src == a {
				j1++
			}
			if p.has(as[i].in) {
				for _, ta := range as[i:i1] {
					for _, tb := range bs[j:j1] {
						sum += ta.c * tb.c * a.covariance(ta.in.pos, tb.in.pos)
					}
				}
			}
			i, j = i1, j1
		}
	}
	return max(sum, negative(as, bs, sum))
}

// negative keeps a covariance of two different quantities as it is; a
// variance that rounding made negative becomes 0.
func negative(as, bs []term, sum float64) float64 {
	if len(as) == len(bs) && (len(as) == 0 || &as[0] == &bs[0]) {
		return 0
	}
	return sum
}

// combine returns ca·a + cb·b of two lists of terms, without those that cancel.
func combine(as []term, ca float64, bs []term, cb float64) []term {
	out := make([]term, 0, len(as)+len(bs))
	i, j := 0, 0
	for i < len(as) || j < len(bs) {
		switch {
		case j == len(bs) || i < len(as) && as[i].in.before(bs[j].in):
			out = appendTerm(out, as[i].in, ca*as[i].c)
			i++
		case i == len(as) || bs[j].in.before(as[i].in):
			out = appendTerm(out, bs[j].in, cb*bs[j].c)
			j++
		default:
			out = appendTerm(out, as[i].in, float64(ca*as[i].c)+float64(cb*bs[j].c))
			i++
			j++
		}
	}
	return out
}

func appendTerm(ts []term, in *input, c float64) []term {
	if c == 0 {
		return ts
	}
	return append(ts, term{in, c})
}

// finite panics for the exported function fn if the value of its argument is
// not a finite number.
func finite(fn, arg string, x float64) {
	if math.IsNaN(x) || math.IsInf(x, 0) {
		panic(&statmech.DomainError{Func: "uncertain." + fn, Arg: arg, Value: fmt.Sprint(x), Want: "a finite number"})
	}
}
