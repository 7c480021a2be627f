package uncertain

import (
	"fmt"
	"math"
)

// linearEnough is how large second and third order may be, in units of u, for
// the first order to count as enough. A rule of this package.
const linearEnough = 0.1

// mostPairs is the number of independent directions up to which the mixed
// second derivatives are looked at.
const mostPairs = 24

// A Linearity says how far a computation is from linear within the standard
// uncertainties of its inputs.
type Linearity struct {
	First  float64 // standard uncertainty by the first order
	Second float64 // standard deviation of the second-order terms
	Third  float64 // what steps of ±u leave over the first order
	Bias   float64 // shift of the mean by the second order, ½ Σ f″u²
	Reason string  // why the first order is not enough, "" if it is
}

// Linearity compares the computation at ±u of every independent direction of
// its inputs, and of every pair up to 24 directions, with its first order
// (JCGM 100:2008, 5.1.2 note). It costs some evaluations of the computation,
// no random numbers.
func (q Quantity) Linearity() Linearity {
	l := Linearity{}
	if q.Withheld() != "" {
		l.Reason = "no standard uncertainty: " + q.Withheld()
		return l
	}
	l.First = q.StandardUncertainty()
	t := newTape([]*node{q.node()})
	type direction struct {
		src *source
		d   []float64
	}
	var ds []direction
	for _, src := range t.sources {
		n := len(src.value)
		f, _ := factor(src.cov, n)
		for j := range n {
			d := make([]float64, n)
			size := 0.0
			for i := range n {
				d[i] = f[i*n+j]
				size += math.Abs(d[i])
			}
			if size > 0 {
				ds = append(ds, direction{src, d})
			}
		}
	}
	if len(ds) == 0 {
		return l
	}
	b := t.newBlock(1)
	at := func(steps ...any) float64 {
		for _, src := range t.sources {
			for i, v := range src.value {
				b.draws[src][i][0] = v
			}
		}
		for k := 0; k < len(steps); k += 2 {
			d := ds[steps[k].(int)]
			for i, v := range d.d {
				b.draws[d.src][i][0] += steps[k+1].(float64) * v
			}
		}
		t.run(b, 1)
		return b.values[t.outputs[0]][0]
	}
	f0 := q.Value()
	var second, third float64
	for i := range ds {
		up, down := at(i, 1.0), at(i, -1.0)
		fi := (up - down) / 2
		fii := up - 2*f0 + down
		// First order along this direction, from a step small enough.
		const h = 1e-3
		slope := (at(i, h) - at(i, -h)) / (2 * h)
		second += fii * fii / 2
		third += (fi - slope) * (fi - slope)
		l.Bias += fii / 2
	}
	if len(ds) <= mostPairs {
		for i := range ds {
			for j := range i {
				fij := (at(i, 1.0, j, 1.0) - at(i, 1.0, j, -1.0) - at(i, -1.0, j, 1.0) + at(i, -1.0, j, -1.0)) / 4
				second += fij * fij
			}
		}
	}
	l.Second, l.Third = math.Sqrt(second), math.Sqrt(third)
	switch size := math.Hypot(l.Second, l.Third); {
	case math.IsNaN(size) || math.IsInf(size, 0):
		l.Reason = "within one standard uncertainty of its inputs the computation leaves its domain"
	case size > linearEnough*l.First || math.Abs(l.Bias) > linearEnough*l.First:
		l.Reason = fmt.Sprintf("terms of second and third order amount to %.2g and shift the mean by %.2g, the first order gives u = %.2g: use MonteCarlo", size, l.Bias, l.First)
	}
	return l
}
