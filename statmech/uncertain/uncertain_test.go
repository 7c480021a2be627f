package uncertain

import (
	"encoding/csv"
	"errors"
	"math"
	"os"
	"strconv"
	"strings"
	"testing"

	"levelsum/statmech"
	"levelsum/statmech/unit"
)

func within(t testing.TB, what string, got, want, tol float64) {
	t.Helper()
	if !(math.Abs(got-want) <= tol) {
		t.Errorf("%s = %.12g, want %.12g ± %.2g", what, got, want, tol)
	}
}

func readCSV(t testing.TB, name string) [][]string {
	t.Helper()
	f, err := os.Open("testdata/jcgm/" + name)
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	r := csv.NewReader(f)
	r.Comment = '#'
	rows, err := r.ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	return rows[1:]
}

func num(t testing.TB, s string) float64 {
	t.Helper()
	v, err := strconv.ParseFloat(s, 64)
	if err != nil {
		t.Fatal(err)
	}
	return v
}

// TestSameInputCancels: a - a is exactly 0 ± 0, a/a exactly 1 ± 0.
func TestSameInputCancels(t *testing.T) {
	a := Measured(0.1, 0.03)
	b := Measured(0.1, 0.03)
	for name, q := range map[string]Quantity{
		"a-a": a.Minus(a), "a/a": a.Over(a), "a+b-a-b": a.Plus(b).Minus(a).Minus(b), "3a-a-a-a": a.Scale(3).Minus(a).Minus(a).Minus(a),
	} {
		want := 0.0
		if name == "a/a" {
			want = 1
		}
		if u := q.StandardUncertainty(); u != 0 || math.Abs(q.Value()-want) > 1e-16 {
			t.Errorf("%s = %g ± %g, want exactly %g ± 0", name, q.Value(), u, want)
		}
	}
	if d := a.Minus(a); d.Value() != 0 || d.String() != "0" {
		t.Errorf("a-a prints %q", d)
	}
	// Two measurements with the same numbers are two inputs.
	within(t, "u(a-b)", a.Minus(b).StandardUncertainty(), 0.03*math.Sqrt2, 1e-17)
	// Naming keeps the identity.
	if u := a.Named("x").Minus(a.WithUnit("m")).StandardUncertainty(); u != 0 {
		t.Errorf("u of the same input under another name %g", u)
	}
}

// TestGUMH2 is the simultaneous resistance and reactance measurement of JCGM
// 100:2008, H.2.
func TestGUMH2(t *testing.T) {
	var v, i, phi []float64
	for _, r := range readCSV(t, "gum_H2_data.csv") {
		v, i, phi = append(v, num(t, r[1])), append(i, num(t, r[2])), append(phi, num(t, r[3]))
	}
	q, err := ObservedTogether(v, i, phi)
	if err != nil {
		t.Fatal(err)
	}
	V, I, p := q[0], q[1], q[2]
	R, X, Z := V.Over(I).Times(Cos(p)), V.Over(I).Times(Sin(p)), V.Over(I)
	got := map[string]Quantity{"V": V, "I_A": I, "phi": p, "R_ohm": R, "X_ohm": X, "Z_ohm": Z}
	r := map[string]float64{"r(V,I)": Correlation(V, I), "r(V,phi)": Correlation(V, p), "r(I,phi)": Correlation(I, p),
		"r(R,X)": Correlation(R, X), "r(R,Z)": Correlation(R, Z), "r(X,Z)": Correlation(X, Z)}
	rows := readCSV(t, "gum_H2_results.csv")
	if len(rows) != len(got)+len(r) {
		t.Fatalf("%d rows", len(rows))
	}
	for _, row := range rows {
		if c, ok := r[row[0]]; ok {
			within(t, row[0], c, num(t, row[1]), 1e-9) // the reference has ten digits
			continue
		}
		q := got[row[0]]
		within(t, row[0], q.Value(), num(t, row[1]), 1e-13*num(t, row[1]))
		within(t, "u("+row[0]+")", q.StandardUncertainty(), num(t, row[2]), 1e-9*num(t, row[2]))
	}
	// The same by a function of several inputs, with numerical derivatives.
	f := Function(func(x []float64) float64 { return x[0] / x[1] * math.Cos(x[2]) }, V, I, p)
	within(t, "u(R) by Function", f.StandardUncertainty(), R.StandardUncertainty(), 1e-8*R.StandardUncertainty())
	within(t, "r(R, R by Function)", Correlation(f, R), 1, 1e-12)
	if c := R.Budget().Correlation; !(c < 0) {
		t.Errorf("correlation terms of R %g", c)
	}
}

// TestGUMH1 is the end-gauge calibration of JCGM 100:2008, H.1: the budget of
// contributions in nm, effective degrees of freedom 16, U99 = 93 nm.
func TestGUMH1(t *testing.T) {
	var parts []Quantity
	var want float64
	for _, r := range readCSV(t, "gum_H1_budget.csv") {
		if strings.HasPrefix(r[0], "u_c") {
			want = num(t, r[1])
			continue
		}
		parts = append(parts, Estimated(0, num(t, r[1]), num(t, r[2])).Named(r[0]))
	}
	l := Sum(parts...).Shift(50000838)
	within(t, "u_c", l.StandardUncertainty(), want, 0.5)
	within(t, "ν_eff", math.Floor(l.EffectiveFreedom()), 16, 0)
	within(t, "t99(16)", l.CoverageFactor(0.99), 2.92, 0.005)
	within(t, "U99", l.CoverageFactor(0.99)*l.StandardUncertainty(), 93, 0.5)
	b := l.Budget()
	if big := b.Largest(); len(big) != 4 || big[0].Name != "u(ls)" || big[0].Part != 25 {
		t.Errorf("largest contribution %+v", big)
	}
	var share float64
	for _, c := range b.Inputs {
		share += c.Share
	}
	within(t, "sum of shares", share, 1, 1e-12)
}

func TestWelchSatterthwaite(t *testing.T) {
	// JCGM 100:2008, G.4.1, equation G.2b for two equal parts: ν = 2·ν₁ if both have ν₁.
	q := Estimated(1, 0.1, 5).Plus(Estimated(2, 0.1, 5))
	within(t, "ν_eff", q.EffectiveFreedom(), 10, 1e-12)
	if nu := Measured(1, 0.1).EffectiveFreedom(); !math.IsInf(nu, 1) {
		t.Errorf("ν of a known uncertainty %g", nu)
	}
}

// TestSlopes compares every elementary function with a numerical derivative.
func TestSlopes(t *testing.T) {
	for name, f := range map[string]func(Quantity) Quantity{
		"Exp": Exp, "Log": Log, "Log10": Log10, "Sqrt": Sqrt, "Sin": Sin, "Cos": Cos, "Tan": Tan, "Asin": Asin, "Acos": Acos, "Atan": Atan,
		"Sinh": Sinh, "Cosh": Cosh, "Tanh": Tanh, "Abs": Abs, "Power": func(q Quantity) Quantity { return q.Power(2.5) },
		"Scale": func(q Quantity) Quantity { return q.Scale(-3) }, "Shift": func(q Quantity) Quantity { return q.Shift(4) },
		"Over":  func(q Quantity) Quantity { return Exact(2).Over(q) },
		"Times": func(q Quantity) Quantity { return q.Times(q).Times(q) },
		"Pow":   func(q Quantity) Quantity { return Pow(q, q) },
	} {
		const x, h = 0.37, 1e-5
		q := f(Measured(x, 1))
		want := math.Abs(f(Exact(x+h)).Value()-f(Exact(x-h)).Value()) / (2 * h)
		within(t, name, q.StandardUncertainty(), want, 1e-8*max(1, want))
		// The tape repeats the same operations.
		tp := newTape([]*node{q.node()})
		b := tp.newBlock(1)
		b.draws[tp.sources[0]][0][0] = x
		tp.run(b, 1)
		within(t, name+" on the tape", b.values[tp.outputs[0]][0], q.Value(), 1e-15*math.Abs(q.Value()))
	}
}

func TestRandomAndCommonParts(t *testing.T) {
	scale := Common("calibration", 0.005)
	var sum []Quantity
	for range 100 {
		sum = append(sum, Measured(1, 0.005).Times(scale.Shift(1)))
	}
	mean := Sum(sum...).Scale(0.01)
	within(t, "random part of a mean of 100", mean.RandomPart(), 0.0005, 1e-15)
	within(t, "common part", mean.CommonPart(), 0.005, 1e-15)
	within(t, "u", mean.StandardUncertainty(), math.Hypot(0.0005, 0.005), 1e-15)
	if n := len(mean.Budget().Inputs); n != 101 {
		t.Errorf("%d inputs, want 101: the common one counts once", n)
	}
}

// TestRounding: values of JCGM 100:2008, 7.2.6 (10.057 62 ± 0.027 and 28.05)
// and of the rule of the Particle Data Group.
func TestRounding(t *testing.T) {
	for _, test := range []struct {
		v, u             float64
		short, plusMinus string
		ruled            string
	}{
		{10.05762, 0.027, "10.058(27)", "10.058 ± 0.027", "10.058(27)"},
		{127.732, 28.05, "128(28)", "128 ± 28", "128(28)"},
		{1.23456, 0.0962, "1.235(96)", "1.235 ± 0.096", "1.23(10)"},
		{1.23456, 0.0356, "1.235(36)", "1.235 ± 0.036", "1.23(4)"},
		{1.23456, 0.0354, "1.235(35)", "1.235 ± 0.035", "1.235(35)"},
		{1.23456, 0.0949, "1.235(95)", "1.235 ± 0.095", "1.23(9)"},
		{0.9996, 0.0996, "1.00(10)", "1.00 ± 0.10", "1.00(10)"},
		{1.5, 1.2, "1.5(1.2)", "1.5 ± 1.2", "1.5(1.2)"},
		{-0.001, 0.027, "-0.001(27)", "-0.001 ± 0.027", "-0.001(27)"},
		{-0.0001, 0.27, "0.00(27)", "0.00 ± 0.27", "0.00(27)"},
		{6.62607e-34, 1.2e-39, "6.626070(12)×10⁻³⁴", "(6.626070 ± 0.000012)×10⁻³⁴", "6.626070(12)×10⁻³⁴"},
		{12345678, 1234567, "1.23(12)×10⁷", "(1.23 ± 0.12)×10⁷", "1.23(12)×10⁷"},
		{12346, 123, "12350(120)", "12350 ± 120", "12350(120)"},
		{12345, 123, "12340(120)", "12340 ± 120", "12340(120)"},
		{6.919e-4, 5.3e-6, "0.0006919(53)", "0.0006919 ± 0.0000053", "0.000692(5)"},
		{23456, 2345, "2.35(23)×10⁴", "(2.35 ± 0.23)×10⁴", "2.35(23)×10⁴"},
		{9.9996e7, 6e4, "9.9996(60)×10⁷", "(9.9996 ± 0.0060)×10⁷", "1.0000(6)×10⁸"},
		{5, 0, "5", "5", "5"},
	} {
		if got := (Notation{}).Format(test.v, test.u); got != test.short {
			t.Errorf("%g, %g: %q, want %q", test.v, test.u, got, test.short)
		}
		if got := (Notation{PlusMinus: true}).Format(test.v, test.u); got != test.plusMinus {
			t.Errorf("%g, %g: %q, want %q", test.v, test.u, got, test.plusMinus)
		}
		if got := (Notation{Rule: Rule355}).Format(test.v, test.u); got != test.ruled {
			t.Errorf("%g, %g: %q by the 355/950 rule, want %q", test.v, test.u, got, test.ruled)
		}
	}
	for _, test := range []struct {
		rule Rule
		u    float64
		want string
	}{{TwoDigits, 0.0962, "0.096"}, {Rule355, 0.0962, "0.10"}, {TwoDigits, 28.05, "28"}, {TwoDigits, 0.027, "0.027"}} {
		if _, u := test.rule.Round(10.05762, test.u); u != test.want {
			t.Errorf("u = %g by rule %d: %q, want %q", test.u, test.rule, u, test.want)
		}
	}
}

func TestRoundingKeepsThePrecision(t *testing.T) {
	q := Measured(10.05762, 0.0274).WithUnit("J/(mol K)")
	if q.String() != "10.058(27) J/(mol K)" || q.Value() != 10.05762 {
		t.Errorf("%v, %v", q, q.Value())
	}
	if s := q.Expanded(2); s != "(10.058 ± 0.055) J/(mol K) (k = 2)" {
		t.Errorf("expanded %q", s)
	}
}

func TestWithheld(t *testing.T) {
	q := Measured(343.2, 0.7).WithUnit("K").Withhold("the model does not describe the data")
	if s := q.String(); s != "343.2 K (no standard uncertainty: the model does not describe the data)" {
		t.Errorf("%q", s)
	}
	r := Exp(q.Scale(0.001)).Plus(Measured(1, 0.1))
	if r.Withheld() == "" {
		t.Error("a result of a withheld uncertainty has one")
	}
	defer func() {
		e, ok := recover().(*statmech.DomainError)
		if !ok || !strings.Contains(e.Error(), "the model does not describe the data") {
			t.Errorf("panic %v", e)
		}
	}()
	_ = r.StandardUncertainty()
}

func TestDomain(t *testing.T) {
	for name, f := range map[string]func(){
		"Measured":         func() { Measured(1, -1) },
		"NaN":              func() { Measured(math.NaN(), 1) },
		"Over":             func() { Measured(1, 1).Over(Measured(0, 1)) },
		"Log":              func() { Log(Measured(-1, 1)) },
		"Sqrt(0)":          func() { Sqrt(Measured(0, 1)) },
		"Expanded":         func() { _ = Measured(1, 1).Expanded(0) },
		"Function":         func() { Function(func(x []float64) float64 { return math.Log(x[0]) }, Measured(-1, 1)) },
		"CoverageFactor":   func() { Measured(1, 1).CoverageFactor(1) },
		"Exp out of range": func() { Exp(Measured(1e4, 1)) },
	} {
		func() {
			defer func() {
				if e, ok := recover().(*statmech.DomainError); !ok || !strings.HasPrefix(e.Func, "uncertain.") {
					t.Errorf("%s: panic %v, want a DomainError", name, e)
				}
			}()
			f()
			t.Errorf("%s: no panic", name)
		}()
	}
	// An exact number has no slope to be infinite.
	if v := Sqrt(Exact(0)).Value(); v != 0 {
		t.Errorf("√0 = %g", v)
	}
	for _, c := range [][][]float64{{{1, 2}, {2, 1}}, {{1, 0.5}, {0.4, 1}}, {{-1, 0}, {0, 1}}, {{1}}, {{1, 0}, {0, math.NaN()}}} {
		if _, err := Correlated([]float64{1, 2}, c); !errors.Is(err, statmech.ErrDomain) {
			t.Errorf("covariance %v: %v", c, err)
		}
	}
}

// TestCorrelatedInputs: two fully correlated errors cancel in the difference.
func TestCorrelatedInputs(t *testing.T) {
	q, err := Correlated([]float64{5, 3}, [][]float64{{0.04, 0.04}, {0.04, 0.04}})
	if err != nil {
		t.Fatal(err)
	}
	if u := q[0].Minus(q[1]).StandardUncertainty(); u != 0 {
		t.Errorf("u of the difference %g", u)
	}
	within(t, "u of the sum", q[0].Plus(q[1]).StandardUncertainty(), 0.4, 1e-15)
	within(t, "r", Correlation(q[0], q[1]), 1, 1e-15)
}

// TestLongSum: the sum of many inputs costs n log n and no stack.
func TestLongSum(t *testing.T) {
	qs := make([]Quantity, 20000)
	for i := range qs {
		qs[i] = Measured(1, 0.1)
	}
	within(t, "u", Sum(qs...).StandardUncertainty(), 0.1*math.Sqrt(20000), 1e-9)
	chain := Exact(0)
	a := Measured(1, 0.1)
	for range 100000 {
		chain = chain.Plus(a)
	}
	within(t, "u of a chain", chain.StandardUncertainty(), 1e4, 1e-6)
	if _, err := MonteCarlo(chain, Draws(1)); err == nil {
		t.Error("one draw has a standard deviation")
	}
}

func TestUnits(t *testing.T) {
	gamma := Measured(6.919e-4, 5.3e-6).WithUnit("J/(mol K2)").Named("γ")
	if s := gamma.In("mJ/(mol K2)").String(); s != "0.6919(53) mJ/(mol K2)" {
		t.Errorf("γ = %s", s)
	}
	theta := Of(343.2*unit.K, 0.7*unit.K)
	if s := theta.String(); s != "343.20(70) K" {
		t.Errorf("θ = %s", s)
	}
	if c := theta.In("°C"); math.Abs(c.Value()-70.05) > 1e-12 || math.Abs(c.StandardUncertainty()-0.7) > 1e-15 {
		t.Errorf("θ = %v", c)
	}
	if r := Correlation(gamma, gamma.In("cal/(mol K2)")); math.Abs(r-1) > 1e-15 {
		t.Errorf("correlation with itself in another unit %g", r)
	}
	for name, f := range map[string]func(){
		"another kind": func() { theta.In("cm-1") },
		"no unit":      func() { Measured(1, 1).In("K") },
		"unknown":      func() { theta.In("furlong") },
		"Of":           func() { Of(343*unit.K, 1*unit.Pressure(1)) },
	} {
		func() {
			defer func() {
				if _, ok := recover().(*statmech.DomainError); !ok {
					t.Errorf("%s: no DomainError", name)
				}
			}()
			f()
		}()
	}
}
