package lattice

import (
	"math"
	"math/rand/v2"
	"slices"
	"strings"
	"sync/atomic"
	"testing"

	"levelsum/display"
	"levelsum/statmech/uncertain"
	"levelsum/statmech/unit"
)

// TestPCG compares the generator with that of the standard library.
func TestPCG(t *testing.T) {
	for seed := range uint64(5) {
		g := newPCG(seed)
		std := rand.NewPCG(g.hi, g.lo)
		got := make([]uint64, 64)
		for range 10 {
			g.fill(got)
			for i, v := range got {
				if want := std.Uint64(); v != want {
					t.Fatalf("seed %d: number %d is %x, want %x", seed, i, v, want)
				}
			}
			if v, want := g.next(), std.Uint64(); v != want {
				t.Fatalf("seed %d: after 64 numbers %x, want %x", seed, v, want)
			}
		}
	}
}

// TestSameStates compares what the loops in assembly do with the loops in Go:
// the numbers of the generator and the states, from lattices of less than a
// group to rows of many words.
func TestSameStates(t *testing.T) {
	if !hasVector() {
		t.Log("no vector loops on this machine: nothing to compare")
		return
	}
	defer useVector(true)
	for _, n := range []int{2, 14, 16, 34, 4096} {
		a, b := newPCG(uint64(n)), newPCG(uint64(n))
		x, y := make([]uint64, n), make([]uint64, n)
		for range 3 {
			useVector(false)
			a.fill(x)
			useVector(true)
			b.fill(y)
			if !slices.Equal(x, y) || a != b {
				t.Fatalf("%d numbers differ", n)
			}
		}
	}
	for _, shape := range append(shapes, [2]int{64, 64}, [2]int{2, 2048}) {
		for _, K := range []float64{0, 0.05, 0.44, 1.5, 20} {
			a, b := newSpins(shape[0], shape[1]), newSpins(shape[0], shape[1])
			d, g, h := newDigits(math.Exp(-4*K)), newPCG(9), newPCG(9)
			for range 50 {
				useVector(false)
				a.sweep(&d, &g)
				useVector(true)
				b.sweep(&d, &h)
			}
			if !slices.Equal(a.black, b.black) || !slices.Equal(a.white, b.white) || len(a.left) != len(b.left) {
				t.Errorf("%v, K = %g: different states", shape, K)
			}
		}
	}
}

// naive is a state as a table of +1 and -1.
func naive(s *spins, columns int) [][]int {
	all := make([][]int, s.rows)
	for r := range all {
		for c := range columns {
			all[r] = append(all[r], s.at(r, c))
		}
	}
	return all
}

// disagreeing counts the neighbours of a site that differ from it.
func disagreeing(all [][]int, r, c int) (n int) {
	R, C := len(all), len(all[0])
	for _, v := range []int{all[(r+1)%R][c], all[(r+R-1)%R][c], all[r][(c+1)%C], all[r][(c+C-1)%C]} {
		if v != all[r][c] {
			n++
		}
	}
	return n
}

var shapes = [][2]int{{2, 2}, {4, 4}, {6, 10}, {4, 128}, {2, 256}, {6, 130}, {4, 254}, {8, 384}}

// TestNeighbours compares the packed lattice with a table of spins: the pairs
// that disagree, and at T = 0, where a spin flips if two or more of its
// neighbours disagree and never else, each flip.
func TestNeighbours(t *testing.T) {
	r := rand.New(rand.NewPCG(1, 2))
	for _, shape := range shapes {
		s := newSpins(shape[0], shape[1])
		for range 5 {
			for i, m := range s.sites[:s.rows*s.words] {
				s.black[s.words+i], s.white[s.words+i] = r.Uint64()&m, r.Uint64()&m
			}
			s.close(s.black)
			s.close(s.white)
			before := naive(s, shape[1])
			pairs, ups := 0, 0
			for r := range before {
				for c, v := range before[r] {
					pairs += disagreeing(before, r, c)
					ups += (v + 1) / 2
				}
			}
			if d, u := s.count(); 2*d != pairs || u != ups {
				t.Errorf("%v: %d pairs disagree, %d up, want %d and %d", shape, d, u, pairs/2, ups)
			}
			for _, white := range []bool{false, true} {
				want := naive(s, shape[1])
				cold, g := newDigits(0), newPCG(1)
				if white {
					s.update(s.white, s.black, true, &cold, &g)
				} else {
					s.update(s.black, s.white, false, &cold, &g)
				}
				got := naive(s, shape[1])
				for r := range want {
					for c, v := range want[r] {
						if ((r+c)&1 == 1) == white && disagreeing(want, r, c) >= 2 {
							v = -v
						}
						if got[r][c] != v {
							t.Fatalf("%v: site (%d, %d) is %d, want %d", shape, r, c, got[r][c], v)
						}
					}
				}
			}
		}
	}
}

// TestAcceptance counts flips where every site has the same number of
// disagreeing neighbours: none, one (rows in pairs), two, four.
func TestAcceptance(t *testing.T) {
	const L = 256
	for _, K := range []float64{0.02, 0.2, 0.4406867935097715, 0.8} {
		p := math.Exp(-4 * K)
		d, g := newDigits(p), newPCG(7)
		for _, state := range []struct {
			name string
			up   func(r, c int) bool
			want float64
		}{
			{"none", func(r, c int) bool { return true }, p * p},
			{"one", func(r, c int) bool { return r/2%2 == 0 }, p},
			{"two", func(r, c int) bool { return r%2 == 0 }, 1},
			{"four", func(r, c int) bool { return (r+c)%2 == 0 }, 1},
		} {
			flips, offered := 0, 0
			for range 30 {
				s := newSpins(L, L)
				for r := range L {
					for c := range L {
						if !state.up(r, c) {
							word, bit := s.place(r, c)
							*word &^= 1 << bit
						}
					}
				}
				s.close(s.black)
				s.close(s.white)
				before := naive(s, L)
				s.update(s.black, s.white, false, &d, &g)
				for r := range L {
					for c := range L {
						if s.at(r, c) != before[r][c] {
							flips++
						}
					}
				}
				offered += L * L / 2
			}
			n := float64(offered)
			u := math.Sqrt(state.want*(1-state.want)/n) + 1e-12
			if got := float64(flips) / n; math.Abs(got-state.want) > 4.5*u {
				t.Errorf("K = %g, %s disagree: %.6f of the sites flip, want %.6f ± %.6f", K, state.name, got, state.want, u)
			}
		}
	}
}

// TestDetailedBalance: on 4 × 4 spins in equilibrium, updates of one colour go
// from a class of states (energy, magnetisation) to another as often as back.
func TestDetailedBalance(t *testing.T) {
	s, err := NewSimulation(Torus{kelvin, 4, 4}, 2.5*unit.K, 3)
	if err != nil {
		t.Fatal(err)
	}
	s.Sweep(1000)
	class := func() [2]int {
		d, u := s.spins.count()
		return [2]int{d, u}
	}
	moves := map[[2][2]int]float64{}
	for range 400_000 {
		a := class()
		s.spins.update(s.spins.black, s.spins.white, false, &s.digits, &s.random)
		moves[[2][2]int{a, class()}]++
		s.spins.update(s.spins.white, s.spins.black, true, &s.digits, &s.random)
	}
	chi, pairs := 0.0, 0.0
	for k, n := range moves {
		back := moves[[2][2]int{k[1], k[0]}]
		if k[0][0] < k[1][0] || k[0] == k[1] || k[0][0] == k[1][0] && k[0][1] < k[1][1] || n+back < 20 {
			continue
		}
		chi += (n - back) * (n - back) / (n + back)
		pairs++
	}
	if z := (chi - pairs) / math.Sqrt(2*pairs); pairs < 100 || math.Abs(z) > 4.5 {
		t.Errorf("χ² = %.1f of %g pairs of classes (%.1f standard deviations)", chi, pairs, z)
	}
}

// TestBoltzmann: on 4 × 4 spins each energy is as frequent as the enumeration
// of all states says.
func TestBoltzmann(t *testing.T) {
	m := Torus{kelvin, 4, 4}
	g, err := m.states("test")
	if err != nil {
		t.Fatal(err)
	}
	const T = 2.269185314213022
	z := 0.0
	for i := range g {
		g[i] *= math.Exp(-2 * float64(i) / T)
		z += g[i]
	}
	s, err := NewSimulation(m, T*unit.K, 11)
	if err != nil {
		t.Fatal(err)
	}
	s.Sweep(500)
	const n = 200_000
	seen := make([][]float64, len(g))
	for i := range seen {
		seen[i] = make([]float64, n)
	}
	for k := range n {
		s.Sweep(1)
		d, _ := s.spins.count()
		seen[d][k] = 1
	}
	for i, w := range g {
		if w == 0 && total(seen[i]) > 0 {
			t.Errorf("an energy that is not there, with %d pairs that disagree", i)
		}
		if w/z < 1e-3 {
			continue
		}
		mean, err := MeanOf(seen[i])
		if err != nil {
			t.Fatal(err)
		}
		if math.Abs(mean.Value-w/z) > 4.5*mean.U {
			t.Errorf("%d pairs that disagree: frequency %.5f ± %.5f, want %.5f", i, mean.Value, mean.U, w/z)
		}
	}
}

func total(x []float64) (s float64) {
	for _, v := range x {
		s += v
	}
	return s
}

// TestSimulationEnergies: of 100 seeds at least 97 give an energy and a heat
// capacity within three standard uncertainties of the exact ones; the
// departures are distributed as u says. L = 16, kT = 2.4 J: E/NJ = -1.2550432,
// C/Nk = 1.40817 (Kaufman's formula).
func TestSimulationEnergies(t *testing.T) {
	m := Torus{kelvin, 16, 16}
	const T = 2.4 * unit.K
	e, c := m.Energy(T).In(m.J), m.HeatCapacity(T)
	closeTo(t, "E/NJ", e, -1.2550432, 4e-8, 0)
	closeTo(t, "C/Nk", c, 1.40817, 4e-6, 0)
	outE, outC, within, sum := 0, 0, 0, 0.0
	for seed := range uint64(100) {
		s, err := NewSimulation(m, T, seed+1)
		if err != nil {
			t.Fatal(err)
		}
		s.Sweep(500)
		est, err := s.Sample(3000).Estimates()
		if err != nil {
			t.Fatal(err)
		}
		if len(est.Warnings) > 0 {
			t.Errorf("seed %d: %v", seed+1, est.Warnings)
		}
		dE := (est.Energy.Value() - e) / est.Energy.StandardUncertainty()
		dC := (est.HeatCapacity.Value() - c) / est.HeatCapacity.StandardUncertainty()
		sum += dE
		if math.Abs(dE) > 3 {
			outE++
		}
		if math.Abs(dC) > 3 {
			outC++
		}
		if math.Abs(dE) < 1 {
			within++
		}
		if r := uncertain.Correlation(est.Energy, est.Magnetisation); seed == 0 && r > -0.5 {
			t.Errorf("correlation of energy and magnetisation %g, want a strong negative one", r)
		}
	}
	t.Logf("energy: %d beyond 3 u, %d within u, mean departure %.2f u; heat capacity: %d beyond 3 u", outE, within, sum/100, outC)
	// 68 ± 14 are three standard deviations of a hundred cases; the mean of a
	// hundred departures has 0.1.
	if outE > 3 || outC > 3 || within < 54 || within > 82 || math.Abs(sum/100) > 0.35 {
		t.Errorf("energy: %d beyond 3 u, %d within u, mean departure %.2f u; heat capacity: %d beyond 3 u", outE, within, sum/100, outC)
	}
}

// TestSpontaneousMagnetisation compares a large lattice below Tc with Yang's
// formula and with Onsager's energy, a wide one above it.
func TestSpontaneousMagnetisation(t *testing.T) {
	for _, test := range []struct {
		m Torus
		T unit.Temperature
	}{{Torus{kelvin, 128, 128}, 2}, {Torus{kelvin, 64, 200}, 3.2}} {
		s, err := NewSimulation(test.m, test.T, 5)
		if err != nil {
			t.Fatal(err)
		}
		s.Sweep(400)
		est, err := s.Sample(2000).Estimates()
		if err != nil {
			t.Fatal(err)
		}
		exact := Onsager{kelvin}
		within := func(what string, q uncertain.Quantity, want float64) {
			t.Helper()
			if u := q.StandardUncertainty(); !(math.Abs(q.Value()-want) < 4*u) || u > 0.02*max(math.Abs(want), 0.3) {
				t.Errorf("%s of %d × %d at %v: %v, want %.6f", what, test.m.Rows, test.m.Columns, test.T, q, want)
			}
		}
		within("energy", est.Energy, exact.Energy(test.T).In(kelvin))
		if test.T < 2.2 {
			within("magnetisation", est.Magnetisation, exact.Magnetisation(test.T))
		}
	}
}

// TestReproducible: a seed gives the same series, in one piece or two, and
// another seed another one.
func TestReproducible(t *testing.T) {
	series := func(seed uint64, parts ...int) (es []unit.Energy) {
		s, err := NewSimulation(Torus{kelvin, 8, 136}, 2.3*unit.K, seed)
		if err != nil {
			t.Fatal(err)
		}
		for _, n := range parts {
			es = append(es, s.Sample(n).Energies...)
		}
		return es
	}
	a, b, c := series(1, 100), series(1, 60, 40), series(2, 100)
	same := 0
	for i := range a {
		if a[i] != b[i] {
			t.Fatalf("sweep %d: %v and %v with one seed", i, a[i], b[i])
		}
		if a[i] == c[i] {
			same++
		}
	}
	if same > 20 {
		t.Errorf("%d of 100 energies are those of another seed", same)
	}
}

// stopper is a sink whose reader interrupts at the second question.
type stopper struct {
	display.Sink
	asked atomic.Int64
}

func (s *stopper) Interrupted() bool { return s.asked.Add(1) >= 2 }

// TestInterrupt: an interrupted series has the sweeps made until then and says so.
func TestInterrupt(t *testing.T) {
	display.SetSink(&stopper{Sink: display.Current()})
	defer display.SetSink(nil)
	s, err := NewSimulation(Torus{kelvin, 64, 64}, 3*unit.K, 1)
	if err != nil {
		t.Fatal(err)
	}
	series := s.Sample(1_000_000)
	if n := len(series.Energies); !series.Interrupted || n < 100 || n > 2000 || len(series.Magnetisations) != n {
		t.Fatalf("%d sweeps, interrupted %v", n, series.Interrupted)
	}
	est, err := series.Estimates()
	if err != nil {
		t.Fatal(err)
	}
	if text := est.View().Data["text/plain"].(string); !strings.Contains(text, "interrupted after") || !strings.Contains(text, "seed 1") {
		t.Errorf("the table does not say it:\n%s", text)
	}
}
