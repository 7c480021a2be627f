package unit

import (
	"fmt"
	"math"
)

// mostSteps is the number of temperatures above which a grid is taken for a
// mistake in the step.
const mostSteps = 10_000_000

// TemperatureSteps returns from, from+step, ... up to and including to, which
// is met exactly if the steps lead there within rounding. It panics with an
// error if a temperature is not positive and finite, to is below from, or the
// step is not positive.
func TemperatureSteps(from, to, step Temperature) []Temperature {
	checkGrid("TemperatureSteps", from, to)
	if !(step > 0) || math.IsInf(float64(step), 1) || float64((to-from)/step) > mostSteps {
		panic(fmt.Errorf("unit.TemperatureSteps: step = %s, want positive, and not more than %d steps", step, mostSteps))
	}
	n := int(math.Floor(float64((to-from)/step)*(1+1e-12) + 1e-9))
	ts := make([]Temperature, n+1)
	for i := range ts {
		ts[i] = from + Temperature(float64(i)*float64(step))
	}
	if last := &ts[n]; n > 0 && math.Abs(float64(*last-to)) < 1e-9*float64(step) {
		*last = to
	}
	return ts
}

// TemperatureLogSteps returns n temperatures from from to to, both included,
// with a constant ratio between neighbours. It panics with an error if a
// temperature is not positive and finite, to is not above from, or n < 2.
func TemperatureLogSteps(from, to Temperature, n int) []Temperature {
	checkGrid("TemperatureLogSteps", from, to)
	if n < 2 || n > mostSteps || to == from {
		panic(fmt.Errorf("unit.TemperatureLogSteps: n = %d from %s to %s, want two or more different temperatures", n, from, to))
	}
	ts := make([]Temperature, n)
	ratio := math.Log(float64(to / from))
	for i := range ts {
		ts[i] = from * Temperature(math.Exp(ratio*float64(i)/float64(n-1)))
	}
	ts[0], ts[n-1] = from, to
	return ts
}

func checkGrid(fn string, from, to Temperature) {
	if !(from > 0) || !(to >= from) || math.IsInf(float64(to), 1) {
		panic(fmt.Errorf("unit.%s: from %s to %s, want positive, finite and ascending temperatures", fn, from, to))
	}
}
