package solid

import (
	"encoding/csv"
	"errors"
	"fmt"
	"math"
	"os"
	"path/filepath"
	"strconv"
	"strings"
	"testing"

	"levelsum/statmech"
	"levelsum/statmech/unit"
)

func readReference(t testing.TB, source, name string) [][]string {
	t.Helper()
	text, err := os.ReadFile(filepath.Join("..", "..", "testdata", source, name))
	if err != nil {
		t.Fatal(err)
	}
	for _, want := range []string{"# source: ", "# how obtained: "} {
		if !strings.Contains(string(text), want) {
			t.Fatalf("%s/%s does not state %q", source, name, want)
		}
	}
	r := csv.NewReader(strings.NewReader(string(text)))
	r.Comment, r.TrimLeadingSpace = '#', true
	rows, err := r.ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	return rows[1:]
}

func number(t testing.TB, s string) float64 {
	t.Helper()
	f, err := strconv.ParseFloat(s, 64)
	if err != nil {
		t.Fatal(err)
	}
	return f
}

func near(t testing.TB, what string, got, want, relative float64) {
	t.Helper()
	if !(math.Abs(got-want) <= relative*math.Abs(want)) {
		t.Errorf("%s = %.15g, want %.15g within %g of it", what, got, want, relative)
	}
}

// TestDebye compares with values of 25 digits, theta/T from 1e-6 to 1e3 and
// more, read from decimal arguments (hence the 2 x 3 half units of rounding).
func TestDebye(t *testing.T) {
	const R = unit.GasConstant
	largest := 0.0
	for _, row := range readReference(t, "mpmath", "debye_solid_reduced.csv") {
		x := number(t, row[0])
		T := 100 * unit.K
		d := Debye{Theta: unit.Temperature(x) * T}
		what := "theta/T = " + row[0] + ": "
		largest = max(largest, math.Abs(float64(d.HeatCapacity(T))/(3*R)/number(t, row[1])-1), math.Abs(float64(d.Entropy(T))/(3*R)/number(t, row[3])-1))
		near(t, what+"C", float64(d.HeatCapacity(T))/(3*R), number(t, row[1]), 3e-15)
		near(t, what+"U", float64(d.ThermalEnergy(T))/(3*R*100), number(t, row[2]), 3e-15)
		near(t, what+"S", float64(d.Entropy(T))/(3*R), number(t, row[3]), 3e-15)
		near(t, what+"A", d.Reduced(T).LogQ/3, -number(t, row[4]), 3e-15)
		near(t, what+"U0", d.ZeroPointEnergy().OverKT(T), number(t, row[5]), 3e-15)
	}
	t.Logf("accuracy: Debye | C and S for θ/T from 1e-6 to 1000 | relative | %.3g | 3e-15 | 25 digits (mpmath)", largest)
	// The point T = theta, computed with 50 digits, 12 printed.
	near(t, "C/3R at T = theta", float64(Debye{Theta: 343 * unit.K}.HeatCapacity(343*unit.K))/(3*R), 0.951732135703, 5e-13)
	near(t, "Einstein C/3R at T = theta", float64(Einstein{Theta: 343 * unit.K}.HeatCapacity(343*unit.K))/(3*R), 0.920673594208, 5e-13)
	near(t, "S/R at T = theta", float64(Debye{Theta: 343 * unit.K}.Entropy(343*unit.K))/R, 4.0736876925, 5e-11)
	// 12 π⁴ R/5 and the departures from the T³ law, computed
	// with 50 digits: theta/24 (6e-7), theta/20 (2e-5), theta/12 (0.7 %), theta/10 (2.7 %).
	law := func(u float64) float64 {
		d := Debye{Theta: 1200 * unit.K}
		T := 1200 / u
		return float64(d.HeatCapacity(unit.Temperature(T))) / (12 * math.Pow(math.Pi, 4) / 5 * R / (u * u * u))
	}
	for _, test := range []struct{ u, low, high float64 }{{24, 5e-7, 7e-7}, {20, 1.5e-5, 2.5e-5}, {12, 0.0065, 0.0075}, {10, 0.0265, 0.0275}} {
		if d := 1 - law(test.u); d < test.low || d > test.high {
			t.Errorf("T³ law at theta/%g is off by %g, want %g to %g", test.u, d, test.low, test.high)
		}
	}
}

func TestEinstein(t *testing.T) {
	const R = unit.GasConstant
	for _, row := range readReference(t, "mpmath", "einstein_oscillator_reduced.csv") {
		x := number(t, row[0])
		if x > 90 {
			continue // see the file's note
		}
		T := 100 * unit.K
		e := Einstein{Theta: unit.Temperature(x) * T, Modes: 1}
		what := "theta/T = " + row[0] + ": "
		tol := 3e-15 + x*2.3e-16
		near(t, what+"C", float64(e.HeatCapacity(T))/R, number(t, row[1]), tol)
		near(t, what+"U", float64(e.ThermalEnergy(T))/(R*100), number(t, row[2]), tol)
		near(t, what+"S", float64(e.Entropy(T))/R, number(t, row[3]), tol)
		near(t, what+"A", e.Reduced(T).LogQ, -number(t, row[4]), tol)
		near(t, what+"U0", e.ZeroPointEnergy().OverKT(T), number(t, row[5]), tol)
	}
}

// TestLowerDimensions: slopes π² R and 36 ζ(3) R of three modes at low T.
func TestLowerDimensions(t *testing.T) {
	const R = unit.GasConstant
	T := 0.5 * unit.K
	near(t, "1-D slope", float64(Debye1D{Theta: 100 * unit.K}.HeatCapacity(T))/(R*0.005), 9.8696, 1e-5)
	near(t, "2-D slope", float64(Debye2D{Theta: 100 * unit.K}.HeatCapacity(T))/(R*0.005*0.005), 43.2740, 1e-5)
	for _, m := range []Term{Debye{Theta: 1e-3 * unit.K}, Debye2D{Theta: 1e-3 * unit.K}, Debye1D{Theta: 1e-3 * unit.K}, Einstein{Theta: 1e-3 * unit.K}} {
		near(t, fmt.Sprintf("%T at high T", m), float64(m.HeatCapacity(1000*unit.K)), 3*R, 1e-12)
	}
}

func TestElectronic(t *testing.T) {
	e := Electronic{Gamma: 0.692 * unit.MilliJPerMolK2}
	near(t, "C", float64(e.HeatCapacity(10*unit.K)), 6.92e-3, 1e-15)
	near(t, "S", float64(e.Entropy(10*unit.K)), 6.92e-3, 1e-15)
	near(t, "U", float64(e.ThermalEnergy(10*unit.K)), 3.46e-2, 1e-15)
}

// models returns one of each model with a partition function, by pointer.
func models() []Differentiable {
	return []Differentiable{
		&Debye{Theta: 343 * unit.K, Modes: 2.5}, &Debye2D{Theta: 200 * unit.K, Modes: 6}, &Debye1D{Theta: 500 * unit.K, Modes: 1},
		&Einstein{Theta: 250 * unit.K, Modes: 4}, &Electronic{Gamma: 7 * unit.MilliJPerMolK2},
		&Tarasov{Theta1: 600 * unit.K, Theta2: 300 * unit.K, Theta3: 120 * unit.K, Modes: 3}, &Tarasov{Theta1: 90, Theta2: 80, Theta3: 79, Modes: 2},
		&FerroSpinWave{Coefficient: 2e-3, Gap: 30 * unit.K}, &AntiferroSpinWave{Coefficient: 3e-5, Gap: 40 * unit.K},
		&FerroSpinWave{Coefficient: 2e-3, Gap: 0.1 * unit.K}, &AntiferroSpinWave{Coefficient: 3e-5, Gap: 0.3 * unit.K},
		&Schottky{Energies: []unit.Energy{40 * unit.PerCm, 0, 95 * unit.PerCm}, Degeneracies: []float64{2, 1, 3}, Sites: 2},
		&ExponentialGap{A: 5 * unit.JPerMolK, Gap: 60 * unit.K}, &PowerLaw{Coefficient: 2e-4, Power: 2.5}, &NuclearTail{A: 3},
		&Superconductor{Gamma: 7e-3, Tc: 450 * unit.K, GapRatio: 1.9},
		&Dilated{Lattice: &Debye{Theta: 343 * unit.K, Modes: 3}, A: 3.9e-6},
		Sum{&Debye{Theta: 343 * unit.K, Modes: 3}, &Electronic{Gamma: 1 * unit.MilliJPerMolK2}},
	}
}

// TestIdentities checks S and H against quadrature of C and the slices
// against the scalars.
func TestIdentities(t *testing.T) {
	type molar interface {
		statmech.Mode
		HeatCapacities(ts []unit.Temperature) []unit.MolarEntropy
		Entropies(ts []unit.Temperature) []unit.MolarEntropy
		Entropy(T unit.Temperature) unit.MolarEntropy
		EntropyIncrement(from, to unit.Temperature) unit.MolarEntropy
		ThermalEnergy(T unit.Temperature) unit.MolarEnergy
		EnthalpyIncrement(from, to unit.Temperature) unit.MolarEnergy
	}
	ts := []unit.Temperature{10, 20, 77, 298.15, 1500}
	for _, m := range models() {
		mm, ok := m.(molar)
		if !ok {
			continue // a term without a partition function
		}
		name := fmt.Sprintf("%T", m)
		plain := OfTerm{m}
		for i, T := range ts {
			if i > 0 {
				near(t, name+" ΔS", float64(mm.EntropyIncrement(ts[i-1], T)), float64(Sum{plain}.EntropyIncrement(ts[i-1], T)), 1e-10)
				near(t, name+" ΔH", float64(mm.EnthalpyIncrement(ts[i-1], T)), float64(Sum{plain}.EnthalpyIncrement(ts[i-1], T)), 1e-10)
			}
			if a, b := mm.HeatCapacities(ts)[i], m.HeatCapacity(T); a != b {
				t.Errorf("%s: C(%v) = %v in a slice, %v alone", name, T, a, b)
			}
			if a, b := mm.Entropies(ts)[i], mm.Entropy(T); a != b {
				t.Errorf("%s: S(%v) = %v in a slice, %v alone", name, T, a, b)
			}
			r := mm.Reduced(T)
			near(t, name+" C", r.C*unit.GasConstant, float64(m.HeatCapacity(T)), 1e-14)
			near(t, name+" S", r.Entropy()*unit.GasConstant, float64(mm.Entropy(T)), 1e-14)
			near(t, name+" U", r.U*unit.GasConstant*float64(T), float64(mm.ThermalEnergy(T)), 1e-14)
			// U = T dlnq/dT by central difference of fourth order
			h := float64(T) * 1e-4
			q := func(k float64) float64 { return mm.Reduced(T + unit.Temperature(k*h)).LogQ }
			slope := (8*(q(1)-q(-1)) - (q(2) - q(-2))) / (12 * h)
			if math.Abs(slope*float64(T)-r.U) > 1e-8*max(r.U, r.LogQ) {
				t.Errorf("%s: T dlnq/dT = %v, U/kT = %v at %v", name, slope*float64(T), r.U, T)
			}
		}
	}
}

// OfTerm hides everything but the heat capacity, so that Sum integrates.
type OfTerm struct{ t Term }

func (o OfTerm) HeatCapacity(T unit.Temperature) unit.MolarEntropy { return o.t.HeatCapacity(T) }

// TestPartials compares Accumulate with central differences in every field.
func TestPartials(t *testing.T) {
	ts := make([]unit.Temperature, 300) // more than two chunks
	for i := range ts {
		ts[i] = unit.Temperature(20 + 1.3*float64(i))
	}
	for _, m := range models() {
		var at []*float64
		for _, f := range fieldsOf(m) {
			at = append(at, f.at)
			if _, ok := m.Owns(f.at); !ok {
				t.Errorf("%T does not own %s", m, f.name)
			}
		}
		foreign := 1.0
		if name, ok := m.Owns(&foreign); ok {
			t.Errorf("%T owns a foreign number as %s", m, name)
		}
		at = append(at, &foreign)
		c := make([]float64, len(ts))
		partials := make([][]float64, len(at))
		for j := range partials {
			partials[j] = make([]float64, len(ts))
		}
		if err := m.Accumulate(ts, at, c, partials); err != nil {
			t.Fatal(err)
		}
		want := HeatCapacities(m, ts)
		for j, p := range at {
			keep := *p
			h := 5e-4 * keep
			if keep == 0 {
				h = 1e-2 * unit.Boltzmann // the ground level
			}
			var d [4][]unit.MolarEntropy
			for k, s := range []float64{-2, -1, 1, 2} {
				*p = keep + s*h
				d[k] = HeatCapacities(m, ts)
			}
			*p = keep
			for i := range ts {
				slope := float64(8*(d[2][i]-d[1][i])-(d[3][i]-d[0][i])) / (12 * h)
				scale := max(math.Abs(slope), 1e-4*float64(want[i])/(2000*h))
				if !(math.Abs(partials[j][i]-slope) <= 1e-6*scale) {
					t.Errorf("%T: partial %d at %v = %v, by difference %v", m, j, ts[i], partials[j][i], slope)
					break
				}
			}
		}
		for i := range ts {
			near(t, fmt.Sprintf("%T accumulated C at %v", m, ts[i]), c[i], float64(want[i]), 4e-15)
		}
	}
}

func fieldsOf(m Differentiable) []parameter {
	if s, ok := m.(Sum); ok {
		var all []parameter
		for _, term := range s {
			all = append(all, fieldsOf(term.(Differentiable))...)
		}
		return all
	}
	if d, ok := m.(*Dilated); ok {
		return append(fieldsOf(d.Lattice.(Differentiable)), parameter{"A", &d.A, "mol/J"})
	}
	return m.(interface{ fields() []parameter }).fields()
}

func TestSum(t *testing.T) {
	deb, a, b := Debye{Theta: 200 * unit.K}, Einstein{Theta: 300 * unit.K, Modes: 2}, Einstein{Theta: 500 * unit.K, Modes: 1}
	s := Sum{&deb, &a, &b, &Electronic{}}
	if err := s.CheckModes(2); err != nil {
		t.Error(err)
	}
	err := s.CheckModes(3)
	if !errors.Is(err, statmech.ErrDomain) || !strings.Contains(err.Error(), "= 6, want 9") {
		t.Errorf("six modes for three atoms: %v", err)
	}
	for p, want := range map[*float64]string{(*float64)(&deb.Theta): "Debye.Theta", (*float64)(&a.Theta): "Einstein1.Theta", &b.Modes: "Einstein2.Modes"} {
		if name, ok := s.Owns(p); !ok || name != want {
			t.Errorf("Owns = %q, %v, want %q", name, ok, want)
		}
	}
	near(t, "zero-point", float64(s.ZeroPointEnergy()), unit.Boltzmann*(9.0/8*200+300+250), 1e-15)
	// The Debye + Einstein crystal of the third-law check, 50-digit values:
	// S(298.15 K) - S(5 K) = 62.88911 and S(5 K) = 0.010124 J/(mol K).
	third := Sum{Debye{Theta: 200 * unit.K}, Einstein{Theta: 400 * unit.K}}
	near(t, "S(5)", float64(third.Entropy(5*unit.K)), 0.010124, 5e-5)
	if d := float64(third.EntropyIncrement(5*unit.K, 298.15*unit.K)); math.Abs(d-62.88911) > 5e-6 {
		t.Errorf("S(298.15) - S(5) = %.6f, want 62.88911", d)
	}
	mode := Sum{OfMode{Mode: Einstein{Theta: 400 * unit.K, Modes: 1}, Count: 3}}
	near(t, "OfMode", float64(mode.Entropy(77*unit.K)), float64(Einstein{Theta: 400 * unit.K}.Entropy(77*unit.K)), 1e-14)
}

// broken is a term of a user that divides by zero at 5 K.
type broken struct{}

func (broken) HeatCapacity(T unit.Temperature) unit.MolarEntropy {
	return unit.MolarEntropy(0 / (T - 5))
}

func TestSumRefusals(t *testing.T) {
	for _, test := range []struct {
		want string
		f    func()
	}{
		{"solid.Sum.HeatCapacity: term 2, broken, at 5 K = NaN J/(mol K), want a finite heat capacity", func() { Sum{Einstein{Theta: 10}, broken{}}.HeatCapacity(5) }},
		{"solid.Sum.HeatCapacities: term 1, broken, at 5 K = NaN J/(mol K), want a finite heat capacity", func() { Sum{broken{}}.HeatCapacities([]unit.Temperature{4, 5}) }},
		{"solid.Sum.HeatCapacity: T = -5 K, want positive and finite", func() { Sum{}.HeatCapacity(-5) }},
		{"solid.Sum.HeatCapacity: term 1 = nil, want a term", func() { Sum{nil}.HeatCapacity(5) }},
		{"solid.OfMode.Reduced: T = 0 K, want positive and finite", func() { OfMode{Mode: Einstein{Theta: 10}}.HeatCapacity(0) }},
	} {
		if got := message(test.f); got != test.want {
			t.Errorf("got  %s\nwant %s", got, test.want)
		}
	}
	if err := (Sum{broken{}}).Accumulate([]unit.Temperature{5}, nil, make([]float64, 1), nil); !errors.Is(err, statmech.ErrDomain) {
		t.Errorf("Accumulate of a term that gives NaN: %v", err)
	}
	if w := (Sum{&Debye{Theta: 1}, AntiferroSpinWave{Coefficient: 1}}).Warnings(); len(w) != 1 || !strings.Contains(w[0], "T³") {
		t.Errorf("warnings: %q", w)
	}
}

// message returns what f panics with.
func message(f func()) (s string) {
	defer func() {
		switch e := recover().(type) {
		case nil:
			s = "no panic"
		case *statmech.DomainError:
			s = e.Error()
		default:
			s = fmt.Sprint("not a DomainError: ", e)
		}
	}()
	f()
	return
}

func TestDomain(t *testing.T) {
	ok := Debye{Theta: 343 * unit.K}
	for _, test := range []struct {
		want string
		f    func()
	}{
		{"solid.Debye.HeatCapacity: T = -3 K, want positive and finite", func() { ok.HeatCapacity(-3 * unit.K) }},
		{"solid.Debye.Entropy: T = 0 K, want positive and finite", func() { ok.Entropy(0) }},
		{"solid.Debye.Reduced: T = NaN K, want positive and finite", func() { ok.Reduced(unit.Temperature(math.NaN())) }},
		{"solid.Debye.HeatCapacities: ts[1] = +Inf K, want positive and finite", func() { ok.HeatCapacities([]unit.Temperature{1, unit.Temperature(math.Inf(1))}) }},
		{"solid.Debye.HeatCapacity: Theta = 0 K, want positive and finite", func() { Debye{}.HeatCapacity(1) }},
		{"solid.Debye1D.ThermalEnergy: Modes = -1, want not negative, and finite", func() { Debye1D{Theta: 1, Modes: -1}.ThermalEnergy(1) }},
		{"solid.Einstein.ZeroPointEnergy: Theta = -2 K, want positive and finite", func() { Einstein{Theta: -2}.ZeroPointEnergy() }},
		{"solid.Electronic.HeatCapacity: Gamma = -1 J/(mol K2), want not negative, and finite", func() { Electronic{Gamma: -1}.HeatCapacity(1) }},
	} {
		if got := message(test.f); got != test.want {
			t.Errorf("got  %s\nwant %s", got, test.want)
		}
	}
	if err := new(Debye).Accumulate(nil, nil, nil, nil); !errors.Is(err, statmech.ErrDomain) {
		t.Errorf("Accumulate with Theta = 0: %v", err)
	}
	if err := ok.Accumulate(nil, []*float64{&ok.Modes}, nil, [][]float64{nil}); !errors.Is(err, statmech.ErrDomain) {
		t.Errorf("Accumulate with Modes free and 0: %v", err)
	}
}

func BenchmarkAccumulate(b *testing.B) {
	deb, ein, el := &Debye{Theta: 250 * unit.K, Modes: 3}, &Einstein{Theta: 550 * unit.K, Modes: 3}, &Electronic{Gamma: 1e-3}
	s := Sum{deb, ein, el}
	at := []*float64{(*float64)(&deb.Theta), &deb.Modes, (*float64)(&ein.Theta), &ein.Modes, (*float64)(&el.Gamma)}
	ts := make([]unit.Temperature, 500)
	partials := make([][]float64, len(at))
	for i := range ts {
		ts[i] = unit.Temperature(2 + 0.6*float64(i))
	}
	for j := range partials {
		partials[j] = make([]float64, len(ts))
	}
	c := make([]float64, len(ts))
	b.ReportAllocs()
	for b.Loop() {
		if err := s.Accumulate(ts, at, c, partials); err != nil {
			b.Fatal(err)
		}
	}
}

func BenchmarkHeatCapacity(b *testing.B) {
	d := Debye{Theta: 343 * unit.K}
	b.Run("scalar", func(b *testing.B) {
		b.ReportAllocs()
		for b.Loop() {
			sinkMolar = d.HeatCapacity(77 * unit.K)
		}
	})
	ts := make([]unit.Temperature, 1_000_000)
	for i := range ts {
		ts[i] = unit.Temperature(1 + 999*float64(i)/1e6)
	}
	b.Run("slice", func(b *testing.B) {
		b.ReportAllocs()
		for b.Loop() {
			sinkMolar = d.HeatCapacities(ts)[7]
		}
		b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N)/float64(len(ts)), "ns/point")
	})
}

var sinkMolar unit.MolarEntropy
