package main

import (
	"fmt"
	"math"
	"os"
	"path/filepath"
	"runtime"
	"strings"
	"time"

	"levelsum/display"
	"levelsum/statmech"
	"levelsum/statmech/data"
	"levelsum/statmech/fit"
	"levelsum/statmech/gas"
	"levelsum/statmech/lattice"
	"levelsum/statmech/solid"
	"levelsum/statmech/special"
	"levelsum/statmech/uncertain"
	"levelsum/statmech/unit"
)

// This file is also the first cell of the notebook that is measured: the same
// text is timed as a Go program and as a cell.

// ready maps a workload to the function that makes its inputs and returns what
// is timed. The number that a workload returns is compared with the peers'.
var ready = map[string]func() func() float64{
	"a":  debye,
	"b":  levels,
	"c":  func() func() float64 { return fitted(0) },
	"cb": func() func() float64 { return fitted(1000) },
	"d":  top,
	"e":  torsion,
	"f":  ising,
	"fz": isingDeparture,
	"g":  phonons,
	"h":  propagation,
	"i1": func() func() float64 {
		eta := ramp(size(100_000), -10, 50)
		return func() float64 { return total(special.FermiDiracs(nil, 0.5, eta)) }
	},
	"i2": func() func() float64 {
		F := ramp(size(100_000), -8, 6)
		for i := range F {
			F[i] = math.Exp(F[i])
		}
		return func() float64 { return total(special.FermiDiracHalfInverses(nil, F)) }
	},
	"i3": func() func() float64 {
		z := ramp(size(100_000), 0, 1)
		return func() float64 { return total(special.Boses(nil, 1.5, z)) }
	},
	"j": figure,
	"k1": func() func() float64 {
		n := map[int]int{1: 27, 4: 24, 16: 21}[divisor]
		amount = float64(fib(n)) // as many calls, but for a factor
		return func() float64 { return float64(fib(n)) }
	},
	"k2": func() func() float64 {
		n := size(500)
		return func() float64 { return rotorSums(400, n) }
	},
	"k3": func() func() float64 {
		n := size(1_000_000)
		return func() float64 { return simpson(integrand, 0, 20, n) }
	},
}

func ramp(n int, from, to float64) []float64 {
	x := make([]float64, n)
	for i := range x {
		x[i] = from + (to-from)*(float64(i)+0.5)/float64(n)
	}
	return x
}

func kelvins(n int, from, step float64) []unit.Temperature {
	ts := make([]unit.Temperature, n)
	for i := range ts {
		ts[i] = unit.Temperature(from + step*float64(i))
	}
	return ts
}

func total(x []float64) float64 {
	s := 0.0
	for _, v := range x {
		s += v
	}
	return s
}

func totalMolar(x []unit.MolarEntropy) float64 {
	s := 0.0
	for _, v := range x {
		s += float64(v)
	}
	return s
}

func check(err error) {
	if err != nil {
		panic(err)
	}
}

func debye() func() float64 {
	ts := kelvins(size(1_000_000), 1, 999e-6*float64(divisor))
	d := solid.Debye{Theta: 343 * unit.K}
	return func() float64 { return totalMolar(d.HeatCapacities(ts)) }
}

func levels() func() float64 {
	n := size(10_000_000)
	e, g := make([]unit.Energy, n), make([]float64, n)
	for i := range e {
		_, f := math.Modf(float64(i) * 0.6180339887498949)
		e[i], g[i] = unit.Energy(5000*f)*unit.KelvinEnergy, float64(1+i%7)
	}
	ts := kelvins(100, 100, 7)
	return func() float64 {
		l, err := statmech.NewLevels(e, g)
		check(err)
		s := 0.0
		for i, r := range l.ReducedAt(ts) {
			if i%10 == 0 { // the peers do these and their times are scaled
				s += r.LogQ + r.U + r.C
			}
		}
		return s
	}
}

func fitted(refits int) func() float64 {
	m := solid.Sum{&solid.Electronic{Gamma: 0.7 * unit.MilliJPerMolK2}, &solid.Debye{Theta: 250 * unit.K, Modes: 3}, &solid.Einstein{Theta: 550 * unit.K, Modes: 3}}
	n := size(500)
	ts, cs, us := make([]float64, n), make([]float64, n), make([]float64, n)
	for i := range ts {
		ts[i] = 2 + 0.6*float64(divisor*i)
		c := float64(m.HeatCapacity(unit.Temperature(ts[i])))
		us[i] = 0.005 * c
		cs[i] = c + us[i]*math.Sqrt2*math.Sin(12.9898*float64(i))
	}
	T, err := data.NewColumn("T", "K", ts)
	check(err)
	C, err := data.NewColumn("Cp", "J K-1 mol-1", cs)
	check(err)
	U, err := data.NewColumn("u(Cp)", "J K-1 mol-1", us)
	check(err)
	run, err := data.New("invented", nil, T, C, U)
	check(err)
	return func() float64 {
		el, deb, ein := solid.Electronic{Gamma: 0.5 * unit.MilliJPerMolK2}, solid.Debye{Theta: 230 * unit.K, Modes: 2.7}, solid.Einstein{Theta: 500 * unit.K, Modes: 3.2}
		res, err := fit.HeatCapacity(solid.Sum{&el, &deb, &ein}, run, fit.Vary(&el.Gamma, &deb.Theta, &deb.Modes, &ein.Theta, &ein.Modes), fit.AbsoluteSigma)
		check(err)
		if refits > 0 {
			b, err := res.Bootstrap(refits, 1)
			check(err)
			return b.StandardDeviation(1)
		}
		return float64(deb.Theta)
	}
}

// top sums the levels of an asymmetric top to J = 60, which is where the
// library stops for this temperature; to 120 and 240 for others, which are
// larger and have the place of the parts.
func top() func() float64 {
	A, T, J := 27.88*unit.PerCm, 300*unit.K, 60.0
	switch divisor {
	case 4:
		T, J = 2000*unit.K, 120
	case 16:
		A, T, J = 5000*unit.PerCm, 6000*unit.K, 240
	}
	amount = J
	return func() float64 {
		t, err := gas.NewAsymmetricTop(A, 14.52*unit.PerCm, 9.28*unit.PerCm, 1, nil)
		check(err)
		return t.Reduced(T).LogQ
	}
}

// torsion has a potential without symmetry: one block of cosines, one of sines.
// High temperatures ask for more plane waves, in the place of the parts.
func torsion() func() float64 {
	V := gas.Barrier(800*unit.PerCm, 3).Plus(gas.Barrier(100*unit.PerCm, 1)).Plus(gas.Barrier(50*unit.PerCm, 2))
	T := map[int]unit.Temperature{4: 20_000 * unit.K, 16: 50_000 * unit.K}[divisor]
	amount = map[int]float64{1: 401, 4: 601, 16: 901}[divisor]
	return func() float64 {
		t, err := gas.NewTorsion(10*unit.PerCm, V, 1, gas.Diagonalised)
		check(err)
		if T > 0 {
			return t.Reduced(T).LogQ
		}
		return t.ZeroPointEnergy().In(unit.PerCm)
	}
}

func square(L int) lattice.Torus {
	return lattice.Torus{J: 1 * unit.KelvinEnergy, Rows: L, Columns: L}
}

// ising makes 1000 sweeps of 256 × 256 spins at the critical temperature of
// the infinite lattice, from all spins alike.
func ising() func() float64 {
	L := int(math.Sqrt(float64(size(256 * 256))))
	m := square(L)
	Tc := lattice.Onsager{J: m.J}.CriticalTemperature()
	return func() float64 {
		s, err := lattice.NewSimulation(m, Tc, 1)
		check(err)
		s.Sweep(1000)
		return s.Energy().In(m.J)
	}
}

// isingDeparture gives how far the energy of 64 × 64 spins at the same
// temperature is from Kaufman's exact one, in standard uncertainties.
func isingDeparture() func() float64 {
	m := square(64)
	Tc := lattice.Onsager{J: m.J}.CriticalTemperature()
	return func() float64 {
		s, err := lattice.NewSimulation(m, Tc, 1)
		check(err)
		s.Sweep(20_000)
		e, err := s.Sample(100_000).Estimates()
		check(err)
		return (e.Energy.Value() - m.Energy(Tc).In(m.J)) / e.Energy.StandardUncertainty()
	}
}

func phonons() func() float64 {
	n := size(20_000)
	table := solid.PhononTable{Per: unit.THzEnergy, Integral: solid.IntegralOne, AtomsPerCell: 1, AtomsPerFormula: 1}
	end := float64(unit.Temperature(400).AsEnergy() / unit.THzEnergy)
	for i := range n {
		w := end * float64(i) / float64(n-1)
		table.Energies = append(table.Energies, unit.Energy(w)*unit.THzEnergy)
		table.States = append(table.States, 3*w*w/(end*end*end))
	}
	ts := kelvins(500, 5, 2)
	return func() float64 {
		p, err := solid.NewPhonons(table)
		check(err)
		return totalMolar(p.HeatCapacities(ts))
	}
}

func propagation() func() float64 {
	in := make([]uncertain.Quantity, 11)
	for i := range in {
		in[i] = uncertain.Measured(1+0.1*float64(i), 0.01)
	}
	prod := in[0]
	for _, q := range in[1:6] {
		prod = prod.Times(q)
	}
	q := uncertain.Log(prod).Scale(8.314462618)
	for _, x := range in[6:] {
		q = q.Plus(x.Over(uncertain.Exp(x).Shift(-1)))
	}
	draws := size(1_000_000)
	return func() float64 {
		s, err := uncertain.MonteCarlo(q, uncertain.Draws(draws))
		check(err)
		lo, hi := s.Interval(0.95)
		return hi - lo
	}
}

func figure() func() float64 {
	model := func(T unit.Temperature) unit.MolarEntropy {
		x := 240 / float64(T)
		e := math.Exp(-x)
		return unit.MolarEntropy(3 * 8.314462618 * x * x * e / ((1 - e) * (1 - e)))
	}
	ts := kelvins(size(2000), 2, 0.149*float64(divisor))
	c, u := make([]unit.MolarEntropy, len(ts)), make([]unit.MolarEntropy, len(ts))
	for i, T := range ts {
		u[i] = 0.02 * model(T)
		c[i] = model(T) + u[i]*unit.MolarEntropy(math.Sqrt2*math.Sin(12.9898*float64(i)))
	}
	f := display.Figure{X: ts, Y: c, Err: u, Name: "data", Curve: display.Curve{Name: "fit", F: model},
		XAxis: display.Axis{Quantity: "T"}, YAxis: display.Axis{Quantity: "C_{p,m}"}}
	return func() float64 {
		svg, _ := f.View().Data["image/svg+xml"].(string)
		return float64(len(svg))
	}
}

func fib(n int) int {
	if n < 2 {
		return n
	}
	return fib(n-1) + fib(n-2)
}

func rotorSums(jMax, temperatures int) float64 {
	s := 0.0
	for t := 0; t < temperatures; t++ {
		T := 10 + 2*float64(t)
		q := 0.0
		for J := 0; J <= jMax; J++ {
			q += float64(2*J+1) * math.Exp(-2.88*float64(J*(J+1))/T)
		}
		s += q
	}
	return s
}

func integrand(x float64) float64 {
	if x == 0 {
		return 0
	}
	return x * x * x / math.Expm1(x)
}

func simpson(f func(float64) float64, a, b float64, n int) float64 {
	h := (b - a) / float64(n)
	s := f(a) + f(b)
	for i := 1; i < n; i++ {
		s += float64(2+2*(i%2)) * f(a+float64(i)*h)
	}
	return s * h / 3
}

// cpu returns the seconds that the threads of this process have run. Cells
// cannot import syscall; the program puts getrusage in its place.
var cpu = func() float64 {
	threads, err := filepath.Glob("/proc/self/task/*/schedstat")
	check(err)
	ns := 0.0
	for _, t := range threads {
		if b, err := os.ReadFile(t); err == nil { // a thread may have ended
			var ran float64
			fmt.Sscan(string(b), &ran)
			ns += ran
		}
	}
	return ns / 1e9
}

// divisor makes the sizes of the workloads smaller, to see how time grows;
// amount is what the size became.
var (
	divisor = 1
	amount  float64
)

func size(n int) int {
	amount = float64(n / divisor)
	return n / divisor
}

// prepared keeps what ready made, amounts how large it is.
var (
	prepared = map[string]func() float64{}
	amounts  = map[string]float64{}
)

// timed runs a workload until 50 ms have passed and returns seconds of the
// clock, seconds of the processor and bytes allocated for one call, as JSON. A
// name such as "a/4" is the workload at a quarter of its size.
func timed(name string) string {
	if prepared[name] == nil {
		workload, part, _ := strings.Cut(name, "/")
		divisor = 1
		fmt.Sscan(part, &divisor)
		prepared[name] = ready[workload]()
		amounts[name] = amount
		prepared[name]() // warm
	}
	f := prepared[name]
	runtime.GC()
	var before, after runtime.MemStats
	runtime.ReadMemStats(&before)
	c, start, n, value := cpu(), time.Now(), 0, 0.0
	for n == 0 || time.Since(start) < 50*time.Millisecond {
		value = f()
		n++
	}
	wall, used := time.Since(start).Seconds(), cpu()-c
	runtime.ReadMemStats(&after)
	if strings.HasPrefix(name, "b") {
		delete(prepared, name) // 160 MB
	}
	k := float64(n)
	return fmt.Sprintf(`{"name": %q, "wall": %g, "cpu": %g, "bytes": %g, "amount": %g, "value": %.17g}`,
		name, wall/k, used/k, float64(after.TotalAlloc-before.TotalAlloc)/k, amounts[name], value)
}
