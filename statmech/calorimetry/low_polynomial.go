package calorimetry

import (
	"fmt"
	"math"
	"sort"

	"gonum.org/v1/gonum/stat/distuv"

	"levelsum/display"
	"levelsum/statmech/data"
	"levelsum/statmech/fit"
	"levelsum/statmech/uncertain"
	"levelsum/statmech/unit"
)

// Powers is the heat capacity of a solid far below its Debye temperature,
//
//	Cp = γT + βT³ + δT⁵ + εT⁷
//
// from conduction electrons (γ) and the lattice, per mole of formula units. The
// coefficients are in J/(mol K²), J/(mol K⁴), J/(mol K⁶), J/(mol K⁸).
type Powers struct {
	Gamma   unit.SommerfeldCoefficient
	Beta    float64
	Delta   float64
	Epsilon float64
}

// HeatCapacity returns Cp at T.
func (p *Powers) HeatCapacity(T unit.Temperature) unit.MolarEntropy {
	t2 := float64(T) * float64(T)
	return unit.MolarEntropy(float64(T) * (float64(p.Gamma) + t2*(p.Beta+t2*(p.Delta+t2*p.Epsilon))))
}

// Entropy returns γT + βT³/3 + δT⁵/5 + εT⁷/7.
func (p *Powers) Entropy(T unit.Temperature) unit.MolarEntropy {
	t2 := float64(T) * float64(T)
	return unit.MolarEntropy(float64(T) * (float64(p.Gamma) + t2*(p.Beta/3+t2*(p.Delta/5+t2*p.Epsilon/7))))
}

// Owns and Accumulate give a fit the derivatives.
func (p *Powers) Owns(at *float64) (string, bool) {
	switch at {
	case (*float64)(&p.Gamma):
		return "γ", true
	case &p.Beta:
		return "β", true
	case &p.Delta:
		return "δ", true
	case &p.Epsilon:
		return "ε", true
	}
	return "", false
}

// Accumulate adds Cp to c and the derivatives to partials.
func (p *Powers) Accumulate(ts []unit.Temperature, at []*float64, c []float64, partials [][]float64) error {
	for i, T := range ts {
		if c != nil {
			c[i] += float64(p.HeatCapacity(T))
		}
		t := float64(T)
		t3 := t * t * t
		for j, a := range at {
			switch a {
			case (*float64)(&p.Gamma):
				partials[j][i] += t
			case &p.Beta:
				partials[j][i] += t3
			case &p.Delta:
				partials[j][i] += t3 * t * t
			case &p.Epsilon:
				partials[j][i] += t3 * t * t * t * t
			}
		}
	}
	return nil
}

// Terms says which powers are fitted by [LowTemperature] beside T³.
type Terms struct {
	Linear bool             // γT, of a metal
	Fifth  bool             // δT⁵
	UpTo   unit.Temperature // upper end of the window; 0: found from the data
}

// A LowFit is a fit of [Powers] to the lowest points and the range in which it
// holds. It is an [Extrapolation].
type LowFit struct {
	Extrapolation
	Powers   *Powers
	Result   *fit.Result
	From, To unit.Temperature
	Warnings []string
}

// LowTemperature fits γT + βT³ + δT⁵ to the lowest points, which is the straight
// line (or parabola) of Cp/T against T². Where no window is given, it is the
// widest one from the first point on in which the next power of T is not seen
// (p > 0.3, by the fall of χ² with absolute uncertainties, else by an F test) and χ² does not object (p > 0.05 with absolute
// uncertainties). A next power below what can be seen still shifts β by up to
// about three of its standard uncertainties; a fit with Fifth does not have
// that error.
func LowTemperature(run *data.Table, terms Terms, sigma fit.Sigma) (*LowFit, error) {
	if run == nil || len(run.T) == 0 || len(run.Cp) == 0 {
		return nil, fmt.Errorf("calorimetry: LowTemperature: no columns T and Cp")
	}
	ts := make([]float64, len(run.T))
	for i, T := range run.T {
		ts[i] = float64(T)
	}
	sort.Float64s(ts)
	parameters := 1
	if terms.Linear {
		parameters++
	}
	if terms.Fifth {
		parameters++
	}
	if terms.UpTo > 0 {
		return lowFit(run, terms, sigma, ts[0], float64(terms.UpTo))
	}
	if len(ts) < parameters+3 {
		return nil, fmt.Errorf("calorimetry: LowTemperature: %d points, want at least %d to find the range", len(ts), parameters+3)
	}
	for k := len(ts); k >= parameters+3; k-- {
		if k < len(ts) && ts[k] == ts[k-1] {
			continue
		}
		f, err := lowFit(run, terms, sigma, ts[0], ts[k-1])
		if err != nil {
			continue // so wide that the powers do not even fall towards 0 K
		}
		if ok, err := f.holds(run, terms, sigma); err == nil && ok {
			return f, nil
		}
	}
	return nil, fmt.Errorf("calorimetry: LowTemperature: already in the lowest %d points, up to %.4g K, Cp does not follow the powers asked for; add Fifth, a magnetic or nuclear term, or give UpTo", parameters+3, ts[parameters+2])
}

func lowFit(run *data.Table, terms Terms, sigma fit.Sigma, from, to float64) (*LowFit, error) {
	p := start(run, from, to)
	vary := []any{&p.Beta}
	if terms.Linear {
		vary = append(vary, &p.Gamma)
	}
	if terms.Fifth {
		vary = append(vary, &p.Delta)
	}
	res, err := fit.HeatCapacity(p, run, fit.Vary(vary...), fit.Window(unit.Temperature(from), unit.Temperature(to)), sigma)
	if err != nil {
		return nil, err
	}
	low, err := Model(res)
	if err != nil {
		return nil, err
	}
	f := &LowFit{Extrapolation: low, Powers: p, Result: res, From: unit.Temperature(from), To: unit.Temperature(to)}
	if p.Beta > 0 {
		if theta := float64(f.debye(1)); to > theta/50 && !terms.Fifth {
			f.Warnings = append(f.Warnings, fmt.Sprintf("the window reaches %.4g K, above a fiftieth of the Debye temperature %.4g K of one atom per formula unit: lattices leave T³ there, compare with Fifth", to, theta))
		}
	}
	if p.Gamma < 0 {
		f.Warnings = append(f.Warnings, "γ is negative: no electronic term, or the window is too wide")
	}
	return f, nil
}

// start guesses β from the top of the window.
func start(run *data.Table, from, to float64) *Powers {
	p := &Powers{}
	top := 0.0
	for i, T := range run.T {
		if x := float64(T); x >= from && x <= to && x > top {
			top = x
			p.Beta = float64(run.Cp[i]) / (x * x * x)
		}
	}
	return p
}

// holds reports whether the next power is superfluous and χ² acceptable.
func (f *LowFit) holds(run *data.Table, terms Terms, sigma fit.Sigma) (bool, error) {
	if sigma == fit.AbsoluteSigma && f.Result.P < 0.05 {
		return false, nil
	}
	next := *f.Powers
	vary := []any{&next.Beta}
	if terms.Linear {
		vary = append(vary, &next.Gamma)
	}
	if terms.Fifth {
		vary = append(vary, &next.Delta, &next.Epsilon)
	} else {
		vary = append(vary, &next.Delta)
	}
	larger, err := fit.HeatCapacity(&next, run, fit.Vary(vary...), fit.Window(f.From, f.To), sigma)
	if err != nil {
		return false, err
	}
	if sigma == fit.AbsoluteSigma {
		// The uncertainties are known: the fall of χ² itself is the test.
		added := float64(f.Result.Freedom - larger.Freedom)
		fall := max(0, f.Result.ChiSquared-larger.ChiSquared)
		return distuv.ChiSquared{K: added}.Survival(fall) > 0.3, nil
	}
	_, p, err := fit.FTest(f.Result, larger)
	return p > 0.3, err
}

// debye returns the Debye temperature of β for n atoms in the formula unit.
func (f *LowFit) debye(atoms float64) float64 {
	return math.Cbrt(12 * math.Pow(math.Pi, 4) * atoms * unit.GasConstant / (5 * f.Powers.Beta))
}

// DebyeTemperature returns the limit of the Debye temperature towards 0 K,
//
//	θ = (12π⁴ n R / 5β)^(1/3)
//
// in K, where n is the number of atoms in the formula unit.
func (f *LowFit) DebyeTemperature(atoms int) uncertain.Quantity {
	beta := f.Result.Parameter(&f.Powers.Beta)
	c := 12 * math.Pow(math.Pi, 4) * float64(atoms) * unit.GasConstant / 5
	return uncertain.Exact(c).Over(beta).Power(1.0 / 3).WithUnit("K").Named("θ(0 K)")
}

// Describe says what was taken below the first point.
func (f *LowFit) Describe() string {
	s := "βT³"
	if f.Powers.Gamma != 0 {
		s = "γT + " + s
	}
	if f.Powers.Delta != 0 {
		s += " + δT⁵"
	}
	return fmt.Sprintf("%s from %.6g K to %.6g K", s, float64(f.From), float64(f.To))
}

// View shows the fit.
func (f *LowFit) View() display.View {
	f.Result.Name = f.Describe()
	return f.Result.View()
}
