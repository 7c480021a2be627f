package gas

import (
	"math"

	"levelsum/statmech/unit"
)

// A Fourier series is a torsional potential
//
//	V(φ) = Σ Cos[k] cos kφ + Sin[k] sin kφ,  k = 0, 1, ...
//
// Either slice may be shorter or nil; Sin[0] has no meaning.
type Fourier struct {
	Cos, Sin []unit.Energy
}

// Barrier returns the potential ½V(1 - cos nφ) of height V with n equal wells.
func Barrier(V unit.Energy, n int) Fourier {
	c := make([]unit.Energy, n+1)
	c[0] = V / 2
	c[n] -= V / 2
	return Fourier{Cos: c}
}

// Plus returns the sum of two potentials.
func (f Fourier) Plus(g Fourier) Fourier {
	sum := func(a, b []unit.Energy) []unit.Energy {
		s := make([]unit.Energy, max(len(a), len(b)))
		copy(s, a)
		for i, x := range b {
			s[i] += x
		}
		return s
	}
	return Fourier{sum(f.Cos, g.Cos), sum(f.Sin, g.Sin)}
}

// Symmetrised returns the terms whose orders n divides, and the largest
// coefficient that was left out: what noise or a real asymmetry put into a scan
// of a rotor with n equal positions.
func (f Fourier) Symmetrised(n int) (g Fourier, dropped unit.Energy) {
	g = f.Plus(Fourier{})
	for _, list := range [][]unit.Energy{g.Cos, g.Sin} {
		for k := range list {
			if n > 1 && k%n != 0 {
				dropped = max(dropped, max(list[k], -list[k]))
				list[k] = 0
			}
		}
	}
	return g, dropped
}

// At returns V(φ).
func (f Fourier) At(phi unit.Angle) unit.Energy {
	v, _, _ := f.derivatives(float64(phi))
	return unit.Energy(v)
}

// derivatives returns V, V′ and V″ at φ in J and rad.
func (f Fourier) derivatives(phi float64) (v, v1, v2 float64) {
	for k, a := range f.Cos {
		s, c := math.Sincos(float64(k) * phi)
		v += float64(a) * c
		v1 -= float64(a) * float64(k) * s
		v2 -= float64(a) * float64(k*k) * c
	}
	for k, a := range f.Sin {
		s, c := math.Sincos(float64(k) * phi)
		v += float64(a) * s
		v1 += float64(a) * float64(k) * c
		v2 -= float64(a) * float64(k*k) * s
	}
	return v, v1, v2
}

func (f Fourier) order() int {
	n := 0
	for k, a := range f.Cos {
		if a != 0 {
			n = max(n, k)
		}
	}
	for k, a := range f.Sin {
		if k > 0 && a != 0 {
			n = max(n, k)
		}
	}
	return n
}

// even reports whether there are no sine terms.
func (f Fourier) even() bool {
	for k, a := range f.Sin {
		if k > 0 && a != 0 {
			return false
		}
	}
	return true
}

// height returns half the sum of the amplitudes, a measure of the barrier.
func (f Fourier) height() unit.Energy {
	var h unit.Energy
	for _, list := range [][]unit.Energy{f.Cos, f.Sin} {
		for k, a := range list {
			if k > 0 {
				h += max(a, -a)
			}
		}
	}
	return h
}

// fold returns the largest n that divides the order of every term.
func (f Fourier) fold() int {
	n := 0
	for k, a := range f.Cos {
		if a != 0 {
			n = gcd(n, k)
		}
	}
	for k, a := range f.Sin {
		if a != 0 {
			n = gcd(n, k)
		}
	}
	return max(n, 1)
}

func gcd(a, b int) int {
	for b != 0 {
		a, b = b, a%b
	}
	return a
}

// minimum returns the angle and value of the deepest minimum.
func (f Fourier) minimum() (phi, v float64) {
	n := 64 * max(f.order(), 1)
	v = math.Inf(1)
	for i := range n {
		p := 2 * math.Pi * float64(i) / float64(n)
		if x, _, _ := f.derivatives(p); x < v {
			phi, v = p, x
		}
	}
	for range 50 {
		_, v1, v2 := f.derivatives(phi)
		if v2 <= 0 || v1 == 0 {
			break
		}
		d := v1 / v2
		if math.Abs(d) > math.Pi/float64(n) {
			d = math.Copysign(math.Pi/float64(n), d)
		}
		phi -= d
		if math.Abs(d) < 1e-15 {
			break
		}
	}
	x, _, _ := f.derivatives(phi)
	return phi, math.Min(v, x)
}
