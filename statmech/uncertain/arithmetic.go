package uncertain

import (
	"fmt"
	"math"

	"levelsum/statmech"
)

// op is the operation of a node; the Monte Carlo evaluation repeats it for
// blocks of draws.
type op uint8

const (
	opConstant op = iota
	opInput
	opAdd
	opSub
	opMul
	opDiv
	opScale // k·a
	opShift // a + k
	opPow   // a^b
	opPowK  // a^k
	opExp
	opLog
	opSqrt
	opSin
	opCos
	opTan
	opAsin
	opAcos
	opAtan
	opSinh
	opCosh
	opTanh
	opAbs
	opSum
	opFunction
	opFunctions // several results at once
	opResult    // one of them
)

// binary makes the node of an operation with value v and partial derivatives
// da and db.
func binary(o op, name string, a, b Quantity, v, da, db float64) Quantity {
	na, nb := a.node(), b.node()
	check(name, v, da, db)
	n := &node{op: o, a: na, b: nb, value: v, terms: combine(na.terms, da, nb.terms, db), withheld: na.withheld}
	if n.withheld == "" {
		n.withheld = nb.withheld
	}
	return Quantity{n}
}

func unary(o op, name string, a Quantity, k, v, da float64) Quantity {
	na := a.node()
	if len(na.terms) == 0 {
		da = 0 // the slope of an exact number does not matter, it may be infinite
	}
	check(name, v, da)
	return Quantity{&node{op: o, a: na, k: k, value: v, terms: combine(na.terms, da, nil, 0), withheld: na.withheld}}
}

func check(name string, xs ...float64) {
	for _, x := range xs {
		if math.IsNaN(x) || math.IsInf(x, 0) {
			panic(&statmech.DomainError{Func: "uncertain." + name, Arg: "result or its slope", Value: fmt.Sprint(x),
				Want: "finite: the best estimates lie outside the domain of the operation, or at a point where its slope is infinite"})
		}
	}
}

// inDomain panics unless the value of the argument is where the function has
// one.
func inDomain(fn, arg string, x float64, ok bool, want string) {
	if !ok {
		panic(&statmech.DomainError{Func: "uncertain." + fn, Arg: arg, Value: fmt.Sprint(x), Want: want})
	}
}

// Plus returns q + r.
func (q Quantity) Plus(r Quantity) Quantity {
	return binary(opAdd, "Quantity.Plus", q, r, q.Value()+r.Value(), 1, 1)
}

// Minus returns q - r.
func (q Quantity) Minus(r Quantity) Quantity {
	return binary(opSub, "Quantity.Minus", q, r, q.Value()-r.Value(), 1, -1)
}

// Times returns q·r.
func (q Quantity) Times(r Quantity) Quantity {
	return binary(opMul, "Quantity.Times", q, r, q.Value()*r.Value(), r.Value(), q.Value())
}

// Over returns q/r. It panics with a [*statmech.DomainError] if r is 0.
func (q Quantity) Over(r Quantity) Quantity {
	inDomain("Quantity.Over", "r", r.Value(), r.Value() != 0, "not 0")
	ratio := q.Value() / r.Value()
	return binary(opDiv, "Quantity.Over", q, r, ratio, 1/r.Value(), -ratio/r.Value())
}

// Scale returns k·q for a number without uncertainty.
func (q Quantity) Scale(k float64) Quantity {
	return unary(opScale, "Quantity.Scale", q, k, k*q.Value(), k)
}

// Shift returns q + k for a number without uncertainty.
func (q Quantity) Shift(k float64) Quantity {
	return unary(opShift, "Quantity.Shift", q, k, q.Value()+k, 1)
}

// Power returns q to a power without uncertainty.
func (q Quantity) Power(k float64) Quantity {
	x := q.Value()
	return unary(opPowK, "Quantity.Power", q, k, math.Pow(x, k), k*math.Pow(x, k-1))
}

// Pow returns a^b of two quantities, a > 0.
func Pow(a, b Quantity) Quantity {
	x, y := a.Value(), b.Value()
	inDomain("Pow", "a", x, x > 0, "positive")
	v := math.Pow(x, y)
	db := 0.0
	if len(b.node().terms) > 0 {
		db = v * math.Log(x)
	}
	return binary(opPow, "Pow", a, b, v, y*math.Pow(x, y-1), db)
}

// Sum returns the sum of any number of quantities.
func Sum(qs ...Quantity) Quantity {
	n := &node{op: opSum, args: make([]*node, len(qs))}
	lists := make([][]term, len(qs))
	for i, q := range qs {
		n.args[i] = q.node()
		n.value += q.Value()
		lists[i] = n.args[i].terms
		if n.withheld == "" {
			n.withheld = n.args[i].withheld
		}
	}
	check("Sum", n.value)
	for len(lists) > 1 { // pairwise, so that a long sum costs n log n
		half := lists[:(len(lists)+1)/2]
		for i := range half {
			if 2*i+1 < len(lists) {
				half[i] = combine(lists[2*i], 1, lists[2*i+1], 1)
			} else {
				half[i] = lists[2*i]
			}
		}
		lists = half
	}
	if len(lists) == 1 {
		n.terms = lists[0]
	}
	return Quantity{n}
}

// Exp returns e^q.
func Exp(q Quantity) Quantity {
	v := math.Exp(q.Value())
	return unary(opExp, "Exp", q, 0, v, v)
}

// Log returns the natural logarithm of q > 0.
func Log(q Quantity) Quantity {
	inDomain("Log", "q", q.Value(), q.Value() > 0, "positive")
	return unary(opLog, "Log", q, 0, math.Log(q.Value()), 1/q.Value())
}

// Log10 returns the decadic logarithm of q > 0.
func Log10(q Quantity) Quantity { return Log(q).Scale(1 / math.Ln10) }

// Sqrt returns the square root of q.
func Sqrt(q Quantity) Quantity {
	inDomain("Sqrt", "q", q.Value(), q.Value() > 0 || q.Value() == 0 && len(q.node().terms) == 0, "positive")
	v := math.Sqrt(q.Value())
	return unary(opSqrt, "Sqrt", q, 0, v, 0.5/v)
}

// Sin returns the sine of q in radians.
func Sin(q Quantity) Quantity {
	s, c := math.Sincos(q.Value())
	return unary(opSin, "Sin", q, 0, s, c)
}

// Cos returns the cosine of q in radians.
func Cos(q Quantity) Quantity {
	s, c := math.Sincos(q.Value())
	return unary(opCos, "Cos", q, 0, c, -s)
}

// Tan returns the tangent of q in radians.
func Tan(q Quantity) Quantity {
	v := math.Tan(q.Value())
	return unary(opTan, "Tan", q, 0, v, 1+v*v)
}

// Asin returns the arc sine of q in radians.
func Asin(q Quantity) Quantity {
	x := q.Value()
	inDomain("Asin", "q", x, math.Abs(x) < 1 || math.Abs(x) == 1 && len(q.node().terms) == 0, "between -1 and 1")
	return unary(opAsin, "Asin", q, 0, math.Asin(x), 1/math.Sqrt((1-x)*(1+x)))
}

// Acos returns the arc cosine of q in radians.
func Acos(q Quantity) Quantity {
	x := q.Value()
	inDomain("Acos", "q", x, math.Abs(x) < 1 || math.Abs(x) == 1 && len(q.node().terms) == 0, "between -1 and 1")
	return unary(opAcos, "Acos", q, 0, math.Acos(x), -1/math.Sqrt((1-x)*(1+x)))
}

// Atan returns the arc tangent of q in radians.
func Atan(q Quantity) Quantity {
	x := q.Value()
	return unary(opAtan, "Atan", q, 0, math.Atan(x), 1/(1+x*x))
}

// Sinh returns the hyperbolic sine of q.
func Sinh(q Quantity) Quantity {
	return unary(opSinh, "Sinh", q, 0, math.Sinh(q.Value()), math.Cosh(q.Value()))
}

// Cosh returns the hyperbolic cosine of q.
func Cosh(q Quantity) Quantity {
	return unary(opCosh, "Cosh", q, 0, math.Cosh(q.Value()), math.Sinh(q.Value()))
}

// Tanh returns the hyperbolic tangent of q.
func Tanh(q Quantity) Quantity {
	v := math.Tanh(q.Value())
	return unary(opTanh, "Tanh", q, 0, v, (1-v)*(1+v))
}

// Abs returns the absolute value of q ≠ 0; at 0 it has no slope and panics.
func Abs(q Quantity) Quantity {
	x := q.Value()
	slope := 1.0
	switch {
	case x < 0:
		slope = -1
	case x == 0:
		slope = math.NaN()
	}
	return unary(opAbs, "Abs", q, 0, math.Abs(x), slope)
}

// Function returns f of several quantities, for what the operations of this
// package do not express: an integral, a root, a fit. The sensitivity
// coefficients are central differences of f with steps of cbrt(ε)·max(|x|, u),
// good to about ten digits for a smooth f. f must not keep or change the slice
// it is given, and must be safe to call from several goroutines at once.
func Function(f func(x []float64) float64, args ...Quantity) Quantity {
	n := &node{op: opFunction, f: f, args: make([]*node, len(args))}
	x := make([]float64, len(args))
	for i, q := range args {
		n.args[i], x[i] = q.node(), q.Value()
	}
	n.value = f(x)
	check("Function", n.value)
	for i, a := range n.args {
		if n.withheld == "" {
			n.withheld = a.withheld
		}
		if len(a.terms) == 0 {
			continue
		}
		u := math.Sqrt(variance(a.terms, anyPart))
		h := math.Cbrt(0x1p-52) * max(math.Abs(x[i]), u)
		centre := x[i]
		up, down := centre+h, centre-h
		x[i] = up
		fUp := f(x)
		x[i] = down
		fDown := f(x)
		x[i] = centre
		c := (fUp - fDown) / (up - down)
		check("Function", c)
		n.terms = combine(n.terms, 1, a.terms, c)
	}
	return Quantity{n}
}

// Functions is [Function] for several results of one computation, such as a
// table of entropies from one model: f is called once for all of them, also in
// every draw of a Monte Carlo simulation. f returns as many values every time.
func Functions(f func(x []float64) []float64, args ...Quantity) []Quantity {
	n := &node{op: opFunctions, fs: f, args: make([]*node, len(args))}
	x := make([]float64, len(args))
	for i, q := range args {
		n.args[i], x[i] = q.node(), q.Value()
	}
	call := func() []float64 {
		y := f(x)
		inDomain("Functions", "number of results", float64(len(y)), n.count == 0 || len(y) == n.count, fmt.Sprintf("%d, as at first", n.count))
		check("Functions", y...)
		return append([]float64(nil), y...)
	}
	y := call()
	n.count = len(y)
	results := make([]*node, len(y))
	for k, v := range y {
		results[k] = &node{op: opResult, a: n, index: k, value: v}
	}
	for i, a := range n.args {
		for _, r := range results {
			if r.withheld == "" {
				r.withheld = a.withheld
			}
		}
		if len(a.terms) == 0 {
			continue
		}
		h := math.Cbrt(0x1p-52) * max(math.Abs(x[i]), math.Sqrt(variance(a.terms, anyPart)))
		centre := x[i]
		high, low := centre+h, centre-h
		x[i] = high
		up := call()
		x[i] = low
		down := call()
		x[i] = centre
		for k, r := range results {
			r.terms = combine(r.terms, 1, a.terms, (up[k]-down[k])/(high-low))
		}
	}
	out := make([]Quantity, len(results))
	for k, r := range results {
		out[k] = Quantity{r}
	}
	return out
}

// Linear returns value + Σ cᵢ (argsᵢ - E(argsᵢ)): a quantity whose value and
// sensitivity coefficients were worked out elsewhere, such as an integral over
// data points with known weights.
func Linear(value float64, coefficients []float64, args []Quantity) Quantity {
	if len(coefficients) != len(args) {
		panic(&statmech.DomainError{Func: "uncertain.Linear", Arg: "coefficients",
			Value: fmt.Sprintf("%d of them", len(coefficients)), Want: fmt.Sprintf("%d, one for each quantity", len(args))})
	}
	parts := make([]Quantity, len(args)+1)
	centre := value
	for i, q := range args {
		parts[i] = q.Scale(coefficients[i])
		centre -= parts[i].Value()
	}
	parts[len(args)] = Exact(centre)
	q := Sum(parts...)
	q.n.value = value // not the value plus the rounding of the sum
	return q
}
