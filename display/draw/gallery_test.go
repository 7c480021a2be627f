package draw

import (
	"math"
	"math/rand/v2"
	"strings"

	"levelsum/display"
)

// kelvin and molar are quantities as another package might declare them.
type (
	kelvin float64
	molar  float64
	joule  float64
)

func (kelvin) Unit() string { return "K" }
func (molar) Unit() string  { return "J/(mol K)" }
func (joule) Unit() string  { return "J" }

const perCm joule = 1.98644586e-23 // hc × 1 cm⁻¹

// einstein is a curve to draw, 3R times the Einstein function.
func einstein(theta float64) func(kelvin) molar {
	return func(T kelvin) molar {
		x := theta / float64(T)
		e := math.Exp(-x)
		return molar(3 * 8.314462618 * x * x * e / ((1 - e) * (1 - e)))
	}
}

// measured invents measurements around a curve, the same ones every time.
func measured(n int, f func(kelvin) molar, rel float64, lo, hi float64) (T []kelvin, c, u []molar) {
	r := rand.New(rand.NewPCG(1, 2))
	for i := range n {
		t := kelvin(lo + (hi-lo)*float64(i)/float64(max(n-1, 1)))
		y := f(t)
		s := molar(rel) * y
		T, c, u = append(T, t), append(c, y+s*molar(r.NormFloat64())), append(u, s)
	}
	return T, c, u
}

// gallery has every kind of figure; all data are invented.
func gallery() map[string]display.Figure {
	T, c, u := measured(40, einstein(240), 0.02, 20, 300)
	fit := display.Curve{Name: "Einstein, θ = 240 K", F: einstein(240), U: func(t kelvin) molar { return 0.03 * einstein(240)(t) }, K: 2}
	figs := map[string]display.Figure{}
	q := display.Axis{Quantity: "C_{p,m}"}
	x := display.Axis{Quantity: "T"}
	figs["points"] = display.Figure{X: T, Y: c, Err: u, Name: "run 7", Curve: fit, Residuals: true, XAxis: x, YAxis: q,
		Marks: []display.Mark{{X: kelvin(180), Label: "T_{trs}"}}}
	figs["column"] = display.Figure{X: T, Y: c, Err: u, Curve: einstein(240), RelativeResiduals: true, XAxis: x, YAxis: q, Width: display.OneColumn}
	T2, c2, u2 := measured(25, einstein(420), 0.04, 20, 300)
	xe := make([]kelvin, len(T2))
	for i := range xe {
		xe[i] = 4
	}
	T3, c3, u3 := measured(18, einstein(700), 0.06, 40, 300)
	figs["series"] = display.Figure{XAxis: x, YAxis: q, Series: []display.Series{
		{Name: "sample A", X: T, Y: c, Err: u, Curve: einstein(240)},
		{Name: "sample B", X: T2, Y: c2, Err: u2, XErr: xe, Curve: einstein(420)},
		{Name: "sample C", X: T3, Y: c3, Err: u3, Curve: einstein(700)},
	}}
	lt, lc, lu := measured(40, einstein(100), 0.05, 3, 300)
	figs["log"] = display.Figure{X: lt, Y: lc, Err: lu, Curve: einstein(100), XAxis: display.Axis{Quantity: "T", Log: true},
		YAxis: display.Axis{Quantity: "C_{p,m}", Log: true}}
	es := []joule{0, 1000 * perCm, 1500 * perCm, 3000 * perCm, 3050 * perCm, 3100 * perCm, 5200 * perCm}
	e := make([]joule, 40)
	for i := range e {
		e[i] = joule(i*i) * 2 * perCm
	}
	n := make([]float64, len(e))
	for i := range n {
		n[i] = float64(2*i+1) * math.Exp(-float64(i*i)*2/200)
	}
	figs["right"] = display.Figure{X: T, Y: c, Name: "C_p", XAxis: x, YAxis: q, RightAxis: display.Axis{Quantity: "S", Unit: "J/(mol K)"},
		Series: []display.Series{{Name: "S (right)", X: T, Y: integral(T, c), Line: true, Right: true}}}
	figs["units"] = display.Figure{X: n, Y: e, XAxis: display.Axis{Quantity: "g_i exp(-\\epsilon_i/kT)", Unit: "1"},
		YAxis: display.Axis{Quantity: "\\epsilon", Unit: "cm-1", In: perCm}, RightAxis: display.Axis{Unit: "kJ/mol", Factor: 0.0119626566}}
	r := rand.New(rand.NewPCG(3, 4))
	draws := make([]kelvin, 5000)
	for i := range draws {
		draws[i] = kelvin(343 + 0.7*r.NormFloat64())
	}
	figs["histogram"] = display.Figure{Histogram: &display.Histogram{Values: draws, Density: true, Name: "5000 draws"}, XAxis: display.Axis{Quantity: "\\theta_D"},
		Curve: display.Curve{Name: "normal", F: func(x float64) float64 {
			return math.Exp(-(x-343)*(x-343)/(2*0.49)) / (0.7 * math.Sqrt(2*math.Pi))
		}}}
	figs["map"] = display.Figure{Map: surface2(40, 30, []float64{0.1, 0.5, 1, 2, 3}, false), XAxis: display.Axis{Quantity: "T", Unit: "K"}, YAxis: display.Axis{Quantity: "\\theta", Unit: "K"}}
	figs["contours"] = display.Figure{Map: surface2(40, 30, []float64{-2, -1, 0, 1, 2, 3, 4}, true), XAxis: display.Axis{Quantity: "T", Unit: "K"}, YAxis: display.Axis{Quantity: "\\theta", Unit: "K"}}
	figs["levels"] = display.Figure{YAxis: display.Axis{Quantity: "E", Unit: "cm-1", In: perCm}, Ladders: []display.Ladder{
		{Name: "rotor", Energies: []joule{0, 400 * perCm, 1200 * perCm, 2400 * perCm, 4000 * perCm}, Degeneracies: []int{1, 3, 5, 7, 9},
			Labels: []string{"J = 0", "J = 1", "J = 2", "J = 3", "J = 4"}, Populations: []float64{0.5, 0.3, 0.15, 0.04, 0.01}},
		{Name: "torsion", Energies: es, Labels: []string{"A", "E_1", "E_2", "A_{1g}", "B_2", "E", "A"}},
		{Name: "electronic", Energies: []joule{0, 158 * perCm, 227 * perCm, 5000 * perCm}, Degeneracies: []int{5, 3, 1, 15}, Labels: []string{"^3P_2", "^3P_1", "^3P_0", "^1D"}},
	}, Width: display.TwoColumns, Height: 100}
	bl, bu := make([]float64, 50), make([]float64, 50)
	bx := make([]float64, 50)
	for i := range bx {
		bx[i] = float64(i) * 0.2
		bl[i], bu[i] = math.Sin(bx[i])-0.2-0.02*bx[i], math.Sin(bx[i])+0.2+0.02*bx[i]
	}
	figs["band"] = display.Figure{XAxis: display.Axis{Quantity: "x", Unit: "1"}, YAxis: display.Axis{Quantity: "y", Unit: "1"},
		Series: []display.Series{{Name: "95 % <img onerror=alert(1)>", X: bx, Lower: bl, Upper: bu},
			{Name: "sin x", X: bx, Y: sines(bx, 1), Line: true}, {Name: "0.8 sin x", X: bx, Y: sines(bx, 0.8), Line: true},
			{Name: "0.6 sin x", X: bx, Y: sines(bx, 0.6), Line: true}, {Name: "0.4 sin x", X: bx, Y: sines(bx, 0.4), Line: true, Marks: true}}}
	px, py, pu := make([]float64, 30), make([]float64, 30), make([]float64, 30)
	for i := range px {
		px[i] = math.Pow(10, -1+float64(i)*0.12)
		py[i], pu[i] = 3e-22*px[i]*px[i]*(1+0.05*math.Sin(float64(i))), 4e-23*px[i]*px[i]
	}
	figs["logresiduals"] = display.Figure{X: px, Y: py, Err: pu, RelativeResiduals: true,
		Curve: display.Curve{Name: "3×10^{−22} x^2", F: func(x float64) float64 { return 3e-22 * x * x }},
		XAxis: display.Axis{Quantity: "p", Unit: "kPa", Log: true}, YAxis: display.Axis{Quantity: "E", Unit: "J", Log: true}}
	figs["powers"] = display.Figure{X: px, Y: py, Err: pu, XAxis: display.Axis{Quantity: "p", Unit: "kPa"},
		YAxis: display.Axis{Quantity: "E", Unit: "J"}, RightAxis: display.Axis{Unit: "cm-1", Factor: 5.0341e22}}
	figs["marks"] = display.Figure{X: []kelvin{100, 200, 300}, Y: []molar{24.4, 24.4, 24.4}, Name: strings.Repeat("a very long name ", 6),
		XAxis: x, YAxis: q, Marks: []display.Mark{{Y: molar(24.41), Label: "3R"}, {X: kelvin(150), Label: "first"},
			{X: kelvin(160), Label: "second transition"}, {X: kelvin(295), Label: "third transition"}}}
	dx, dy, dz := make([]float64, 61), make([]float64, 41), make([][]float64, 41)
	for i := range dx {
		dx[i] = -3 + float64(i)*0.1
	}
	for j := range dy {
		dy[j] = -2 + float64(j)*0.1
		dz[j] = make([]float64, len(dx))
		for i := range dx {
			dz[j][i] = dx[i]*dx[i] - 2*dy[j]*dy[j]
		}
	}
	figs["diverging"] = display.Figure{Map: &display.Map{X: dx, Y: dy, Z: dz, Diverging: true, Quantity: "ΔG", Unit: "kJ/mol",
		Contours: []float64{-4, -1, 0, 1, 4}}, XAxis: display.Axis{Quantity: "x", Unit: "1"}, YAxis: display.Axis{Quantity: "y", Unit: "1"}}
	return figs
}

func sines(x []float64, k float64) []float64 {
	y := make([]float64, len(x))
	for i := range x {
		y[i] = k * math.Sin(x[i])
	}
	return y
}

func integral(T []kelvin, c []molar) []molar {
	s := make([]molar, len(T))
	for i := 1; i < len(T); i++ {
		s[i] = s[i-1] + (c[i]/molar(T[i])+c[i-1]/molar(T[i-1]))/2*molar(T[i]-T[i-1])
	}
	return s
}

func surface2(nx, ny int, levels []float64, lines bool) *display.Map {
	var x, y []float64
	for i := range nx {
		x = append(x, 10+float64(i)*8)
	}
	for j := range ny {
		y = append(y, 50+float64(j)*12)
	}
	z := make([][]float64, ny)
	for j := range z {
		z[j] = make([]float64, nx)
		for i := range z[j] {
			if lines {
				z[j][i] = 3*math.Sin(x[i]/60)*math.Cos(y[j]/90) + y[j]/200
			} else {
				z[j][i] = 3 / (math.Exp(y[j]/x[i]) - 1)
			}
		}
	}
	return &display.Map{X: x, Y: y, Z: z, Quantity: "⟨n⟩", Unit: "1", Contours: levels, LinesOnly: lines}
}
