package uncertain

import (
	"math"
	"sort"

	"levelsum/statmech/internal/lanes"
)

// tape is the computation of several quantities as a list of steps, each on a
// block of draws at a time.
type tape struct {
	steps   []*node
	slot    map[*node]int
	args    [][2]int // slots of a and b
	many    [][]int  // slots of args
	outputs []int
	sources []*source // in order of identity
	hasFunc bool
}

// newTape orders the nodes that lead to the outputs, operands first.
func newTape(outputs []*node) *tape {
	t := &tape{slot: map[*node]int{}}
	seen := map[*source]bool{}
	var stack []*node
	push := func(n *node) {
		if n != nil {
			if _, ok := t.slot[n]; !ok {
				stack = append(stack, n)
			}
		}
	}
	for _, out := range outputs {
		push(out)
		for len(stack) > 0 { // not recursive: a long sum may be a deep chain
			n := stack[len(stack)-1]
			if _, ok := t.slot[n]; ok {
				stack = stack[:len(stack)-1]
				continue
			}
			before := len(stack)
			push(n.a)
			push(n.b)
			for _, a := range n.args {
				push(a)
			}
			if len(stack) > before {
				continue
			}
			stack = stack[:len(stack)-1]
			t.slot[n] = len(t.steps)
			t.steps = append(t.steps, n)
			if n.op == opInput && !seen[n.in.src] {
				seen[n.in.src] = true
				t.sources = append(t.sources, n.in.src)
			}
			t.hasFunc = t.hasFunc || n.op == opFunction || n.op == opFunctions
		}
		t.outputs = append(t.outputs, t.slot[out])
	}
	sort.Slice(t.sources, func(i, j int) bool { return t.sources[i].id < t.sources[j].id })
	t.args, t.many = make([][2]int, len(t.steps)), make([][]int, len(t.steps))
	for i, n := range t.steps {
		if n.a != nil {
			t.args[i][0] = t.slot[n.a]
		}
		if n.b != nil {
			t.args[i][1] = t.slot[n.b]
		}
		for _, a := range n.args {
			t.many[i] = append(t.many[i], t.slot[a])
		}
	}
	return t
}

// block is the workspace for n draws at a time.
type block struct {
	values [][]float64             // of every step
	draws  map[*source][][]float64 // of every value of every source
	many   map[int][][]float64     // results of every opFunctions step
	x      []float64
}

func (t *tape) newBlock(n int) *block {
	b := &block{values: make([][]float64, len(t.steps)), draws: map[*source][][]float64{}, many: map[int][][]float64{}}
	for _, s := range t.sources {
		rows := make([][]float64, len(s.value))
		for i := range rows {
			rows[i] = make([]float64, n)
		}
		b.draws[s] = rows
	}
	for i, st := range t.steps {
		if st.op == opInput {
			b.values[i] = b.draws[st.in.src][st.in.pos]
			continue
		}
		if st.op == opResult {
			b.values[i] = b.many[t.args[i][0]][st.index]
			continue
		}
		b.values[i] = make([]float64, n)
		if st.op == opFunctions {
			rows := make([][]float64, st.count)
			for k := range rows {
				rows[k] = make([]float64, n)
			}
			b.many[i] = rows
		}
		if st.op == opConstant {
			for k := range b.values[i] {
				b.values[i][k] = st.k
			}
		}
	}
	return b
}

// run evaluates all steps for the first n draws of the block.
func (t *tape) run(b *block, n int) {
	for i, st := range t.steps {
		out := b.values[i][:n]
		var x, y []float64
		if st.a != nil {
			x = b.values[t.args[i][0]][:n]
		}
		if st.b != nil {
			y = b.values[t.args[i][1]][:n]
		}
		switch st.op {
		case opConstant, opInput, opResult:
		case opAdd:
			for k := range out {
				out[k] = x[k] + y[k]
			}
		case opSub:
			for k := range out {
				out[k] = x[k] - y[k]
			}
		case opMul:
			for k := range out {
				out[k] = x[k] * y[k]
			}
		case opDiv:
			for k := range out {
				out[k] = x[k] / y[k]
			}
		case opScale:
			for k := range out {
				out[k] = st.k * x[k]
			}
		case opShift:
			for k := range out {
				out[k] = x[k] + st.k
			}
		case opPow:
			for k := range out {
				out[k] = math.Pow(x[k], y[k])
			}
		case opPowK:
			power(out, x, st.k)
		case opSum:
			copy(out, b.values[t.many[i][0]][:n])
			for _, a := range t.many[i][1:] {
				for k, v := range b.values[a][:n] {
					out[k] += v
				}
			}
		case opFunction, opFunctions:
			if cap(b.x) < len(t.many[i]) {
				b.x = make([]float64, len(t.many[i]))
			}
			args := b.x[:len(t.many[i])]
			for k := range out {
				for j, a := range t.many[i] {
					args[j] = b.values[a][k]
				}
				if st.op == opFunction {
					out[k] = st.f(args)
					continue
				}
				ys := st.fs(args)
				for j, row := range b.many[i] {
					row[k] = math.NaN()
					if len(ys) == st.count {
						row[k] = ys[j]
					}
				}
			}
		case opExp:
			lanes.Exp(out, x)
		default:
			f := elementary[st.op]
			for k := range out {
				out[k] = f(x[k])
			}
		}
	}
}

func power(out, x []float64, k float64) {
	switch k {
	case 2:
		for i, v := range x {
			out[i] = v * v
		}
	case 0.5:
		for i, v := range x {
			out[i] = math.Sqrt(v)
		}
	case -1:
		for i, v := range x {
			out[i] = 1 / v
		}
	default:
		for i, v := range x {
			out[i] = math.Pow(v, k)
		}
	}
}

var elementary = [...]func(float64) float64{opLog: math.Log, opSqrt: math.Sqrt, opSin: math.Sin, opCos: math.Cos, opTan: math.Tan,
	opAsin: math.Asin, opAcos: math.Acos, opAtan: math.Atan, opSinh: math.Sinh, opCosh: math.Cosh, opTanh: math.Tanh, opAbs: math.Abs}
