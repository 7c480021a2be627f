package statmech

import (
	"errors"
	"fmt"
	"math"

	"gonum.org/v1/gonum/mat"

	"levelsum/statmech/unit"
)

// ErrUnderdetermined is returned where data do not determine what is asked.
var ErrUnderdetermined = errors.New("the data do not determine the result")

// A LineSignal says what the intensities of emission lines measure.
type LineSignal int

const (
	// PhotonRate is a number of photons per time: I ∝ g A exp(-E/kT).
	PhotonRate LineSignal = iota + 1
	// RadiantPower is an energy per time: I ∝ g A ν exp(-E/kT).
	RadiantPower
)

// A Line is one emission line.
type Line struct {
	Upper           unit.Energy // energy of the upper level
	Degeneracy      float64     // of the upper level
	Rate            float64     // Einstein A, 1/s
	Photon          unit.Energy // hν of the line; needed for RadiantPower
	Intensity       float64     // in any unit common to all lines
	Uncertainty     float64     // standard uncertainty of Intensity
	RateUncertainty float64     // relative standard uncertainty of Rate
	Multiplet       string      // lines with the same name share the error of Rate; "" is a line of its own
}

// A TemperatureFit is a temperature from populations or line intensities.
type TemperatureFit struct {
	T                   unit.Temperature
	StandardUncertainty unit.Temperature
	LogScale            float64   // ln of the common factor of the signals
	Residuals           []float64 // (observed - fitted)/u for each line, of ln or of the intensity itself
	ChiSquared          float64
	DegreesOfFreedom    int
	LeverArm            float64 // (E_max - E_min)/kT
	InIntensities       bool    // fitted in intensities rather than in logarithms
	Warnings            []string
}

const (
	leverArm   = 1.5 // (E_max - E_min)/kT below which a Boltzmann plot says little; common practice, no source
	snrForLogs = 10  // signal over its uncertainty below which logarithms are biased
)

// TemperatureFromPopulations returns the temperature of a Boltzmann
// distribution over levels from measured populations (relative numbers) n with
// standard uncertainties u: a weighted straight line of ln(n/g) against the
// energy, slope -1/kT. See [TemperatureFromLines].
func TemperatureFromPopulations(energies []unit.Energy, g, n, u []float64) (TemperatureFit, error) {
	const fn = "statmech.TemperatureFromPopulations"
	if len(g) != len(energies) || len(n) != len(energies) || len(u) != len(energies) {
		return TemperatureFit{}, &DomainError{fn, "g, n, u", fmt.Sprintf("%d, %d, %d values", len(g), len(n), len(u)), fmt.Sprintf("%d each, one for each energy", len(energies))}
	}
	lines := make([]Line, len(energies))
	for i := range lines {
		lines[i] = Line{Upper: energies[i], Degeneracy: g[i], Rate: 1, Intensity: n[i], Uncertainty: u[i]}
	}
	return fitLines(fn, lines, PhotonRate)
}

// TemperatureFromLines returns the temperature of the upper levels of emission
// lines, ln(I/(gA)) = const - E/kT for photon rates, ln(I/(gAν)) for radiant
// powers; which of the two the intensities are must be said.
//
// Weights come from the intensities' uncertainties and from those of the rates,
// which lines of one Multiplet have in common (a correlated error). Where a
// signal is less than 10 times its uncertainty, logarithms are biased and lose
// points; then the intensities themselves are fitted by Gauss-Newton steps.
//
// u(T) = k T² u(slope), with the given uncertainties as they are. Warnings: a
// lever arm (E_max-E_min)/kT below 1.5; a chi-squared that the uncertainties do
// not explain, or a curved plot, which self-absorption or a distribution
// without temperature would give.
//
// Errors: a [*DomainError] if a number is not positive where it must be;
// [ErrUnderdetermined] for fewer than two different energies, or if the signals
// do not fall with energy within what is positive T.
func TemperatureFromLines(lines []Line, signal LineSignal) (TemperatureFit, error) {
	return fitLines("statmech.TemperatureFromLines", lines, signal)
}

func fitLines(fn string, lines []Line, signal LineSignal) (TemperatureFit, error) {
	if signal != PhotonRate && signal != RadiantPower {
		return TemperatureFit{}, &DomainError{fn, "signal", fmt.Sprint(int(signal)), "PhotonRate or RadiantPower"}
	}
	if len(lines) < 2 {
		return TemperatureFit{}, fmt.Errorf("%s: %d lines: %w", fn, len(lines), ErrUnderdetermined)
	}
	f := lineFit{lines: lines, factor: make([]float64, len(lines))}
	for i, l := range lines {
		for _, c := range []struct {
			arg      string
			x        float64
			zeroOK   bool
			negative bool
		}{
			{"Degeneracy", l.Degeneracy, false, false}, {"Rate", l.Rate, false, false}, {"Uncertainty", l.Uncertainty, false, false},
			{"RateUncertainty", l.RateUncertainty, true, false}, {"Intensity", l.Intensity, true, true}, {"Upper", float64(l.Upper), true, true},
		} {
			if c.x-c.x != 0 || c.x < 0 && !c.negative || c.x == 0 && !c.zeroOK {
				return TemperatureFit{}, &DomainError{fn, fmt.Sprintf("lines[%d].%s", i, c.arg), num(c.x), "positive and finite"}
			}
		}
		f.factor[i] = l.Degeneracy * l.Rate
		if signal == RadiantPower {
			if !(l.Photon > 0) {
				return TemperatureFit{}, &DomainError{fn, fmt.Sprintf("lines[%d].Photon", i), l.Photon.String(), "the photon energy of a line whose radiant power is given"}
			}
			f.factor[i] *= float64(l.Photon / lines[0].Photon)
		}
		if l.Intensity < snrForLogs*l.Uncertainty {
			f.noisy++
		}
	}
	f.low, f.high = lines[0].Upper, lines[0].Upper
	for _, l := range lines {
		f.low, f.high = min(f.low, l.Upper), max(f.high, l.Upper)
	}
	if f.low == f.high {
		return TemperatureFit{}, fmt.Errorf("%s: all levels have the energy %s: %w", fn, f.low, ErrUnderdetermined)
	}
	a, b, err := f.logarithms()
	if err != nil {
		return TemperatureFit{}, fmt.Errorf("%s: %w", fn, err)
	}
	if f.noisy > 0 {
		if a, b, err = f.intensities(a, b); err != nil {
			return TemperatureFit{}, fmt.Errorf("%s: %w", fn, err)
		}
	}
	return f.finish(fn, a, b)
}

// A lineFit fits ln(signal/factor) = a - b y, y = (E-E_low)/(E_high-E_low).
type lineFit struct {
	lines     []Line
	factor    []float64
	low, high unit.Energy
	noisy     int
	cov       mat.SymDense // of a and b
	residuals []float64
	chi2      float64
	dof       int
}

func (f *lineFit) y(i int) float64 { return float64((f.lines[i].Upper - f.low) / (f.high - f.low)) }

// covariance of the logarithms of the lines in use, at the relative
// uncertainties r of their intensities.
func (f *lineFit) covariance(use []int, r []float64) *mat.SymDense {
	v := mat.NewSymDense(len(use), nil)
	for j, i := range use {
		for k := j; k < len(use); k++ {
			m := use[k]
			x := 0.0
			if i == m {
				x = r[j]*r[j] + f.lines[i].RateUncertainty*f.lines[i].RateUncertainty
			} else if f.lines[i].Multiplet != "" && f.lines[i].Multiplet == f.lines[m].Multiplet {
				x = f.lines[i].RateUncertainty * f.lines[m].RateUncertainty
			}
			v.SetSym(j, k, x)
		}
	}
	return v
}

// step solves the generalised least-squares problem for the design matrix with
// rows (p, -p y) and the residuals d, with covariance v.
func (f *lineFit) step(design *mat.Dense, d *mat.VecDense, v *mat.SymDense) (da, db float64, err error) {
	var chol mat.Cholesky
	if !chol.Factorize(v) {
		return 0, 0, fmt.Errorf("the errors of the lines are wholly common: %w", ErrUnderdetermined)
	}
	var wd, wx mat.Dense
	if err := chol.SolveTo(&wx, design); err != nil {
		return 0, 0, err
	}
	var wr mat.VecDense
	if err := chol.SolveVecTo(&wr, d); err != nil {
		return 0, 0, err
	}
	wd.Mul(design.T(), &wx)
	n := mat.NewSymDense(2, []float64{wd.At(0, 0), wd.At(0, 1), wd.At(0, 1), wd.At(1, 1)})
	var rhs mat.VecDense
	rhs.MulVec(design.T(), &wr)
	var c2 mat.Cholesky
	if !c2.Factorize(n) {
		return 0, 0, fmt.Errorf("energies too close: %w", ErrUnderdetermined)
	}
	var x mat.VecDense
	if err := c2.SolveVecTo(&x, &rhs); err != nil {
		return 0, 0, err
	}
	if err := c2.InverseTo(&f.cov); err != nil {
		return 0, 0, err
	}
	f.chi2 = mat.Dot(d, &wr)
	f.dof = d.Len() - 2
	return x.AtVec(0), x.AtVec(1), nil
}

// logarithms fits the lines with positive signals. It is the result where all
// signals are strong, else a start.
func (f *lineFit) logarithms() (a, b float64, err error) {
	var use []int
	var r []float64
	for i, l := range f.lines {
		if l.Intensity > 0 {
			use, r = append(use, i), append(r, l.Uncertainty/l.Intensity)
		}
	}
	distinct := false
	for _, i := range use {
		distinct = distinct || f.y(i) != f.y(use[0])
	}
	if !distinct {
		return 0, 0, fmt.Errorf("%d lines have a positive signal, of fewer than two energies: %w", len(use), ErrUnderdetermined)
	}
	design := mat.NewDense(len(use), 2, nil)
	d := mat.NewVecDense(len(use), nil)
	for j, i := range use {
		design.SetRow(j, []float64{1, -f.y(i)})
		d.SetVec(j, math.Log(f.lines[i].Intensity/f.factor[i]))
	}
	v := f.covariance(use, r)
	if a, b, err = f.step(design, d, v); err != nil {
		return 0, 0, err
	}
	f.residuals = make([]float64, len(f.lines))
	for j, i := range use {
		d.SetVec(j, d.AtVec(j)-(a-b*f.y(i)))
		f.residuals[i] = d.AtVec(j) / math.Sqrt(v.At(j, j))
	}
	// χ² of the residuals.
	if _, _, err = f.step(design, d, v); err != nil {
		return 0, 0, err
	}
	return a, b, nil
}

// intensities fits the signals themselves, factor·exp(a - b y), by Gauss-Newton
// from a start by logarithms; the uncertainties of the rates are taken relative
// to the fitted signal.
func (f *lineFit) intensities(a, b float64) (float64, float64, error) {
	n := len(f.lines)
	design, d := mat.NewDense(n, 2, nil), mat.NewVecDense(n, nil)
	use := make([]int, n)
	for i := range use {
		use[i] = i
	}
	for range 100 {
		model := make([]float64, n)
		v := mat.NewSymDense(n, nil)
		zero := make([]float64, n)
		for i := range f.lines {
			model[i] = f.factor[i] * math.Exp(a-b*f.y(i))
			design.SetRow(i, []float64{model[i], -model[i] * f.y(i)})
			d.SetVec(i, f.lines[i].Intensity-model[i])
		}
		rate := f.covariance(use, zero)
		for i := range n {
			for j := i; j < n; j++ {
				x := rate.At(i, j) * model[i] * model[j]
				if i == j {
					x += f.lines[i].Uncertainty * f.lines[i].Uncertainty
				}
				v.SetSym(i, j, x)
			}
		}
		da, db, err := f.step(design, d, v)
		if err != nil {
			return 0, 0, err
		}
		if s := math.Max(math.Abs(da), math.Abs(db)); s > 2 { // keep the exponential in reach
			da, db = da*2/s, db*2/s
		}
		a, b = a+da, b+db
		for i := range n {
			f.residuals[i] = d.AtVec(i) / math.Sqrt(v.At(i, i))
		}
		if math.Abs(da)+math.Abs(db) < 1e-12*(1+math.Abs(a)+math.Abs(b)) {
			return a, b, nil
		}
	}
	return 0, 0, fmt.Errorf("the fit of intensities does not settle: %w", ErrUnderdetermined)
}

func (f *lineFit) finish(fn string, a, b float64) (TemperatureFit, error) {
	span := float64(f.high - f.low)
	ub := math.Sqrt(f.cov.At(1, 1))
	if !(b > 0) {
		return TemperatureFit{}, fmt.Errorf("%s: the signals do not fall with energy, slope -1/kT = %s ± %s per J: no positive temperature: %w",
			fn, num(-b/span), num(ub/span), ErrUnderdetermined)
	}
	T := span / (unit.Boltzmann * b)
	r := TemperatureFit{
		T: unit.Temperature(T), StandardUncertainty: unit.Temperature(T * ub / b), LogScale: a + b*float64(f.low)/span,
		Residuals: f.residuals, ChiSquared: f.chi2, DegreesOfFreedom: f.dof, LeverArm: b, InIntensities: f.noisy > 0,
	}
	if r.LeverArm < leverArm {
		r.Warnings = append(r.Warnings, fmt.Sprintf("the energies span only %.2g kT (below %.1f): the temperature rests on small differences", r.LeverArm, leverArm))
	}
	if r.InIntensities {
		r.Warnings = append(r.Warnings, fmt.Sprintf("%d of %d signals are less than %d times their uncertainty: intensities were fitted, not logarithms", f.noisy, len(f.lines), snrForLogs))
	}
	// Wilson-Hilferty: χ² beyond about 3 standard deviations.
	if k := float64(f.dof); k > 0 {
		if z := (math.Cbrt(r.ChiSquared/k) - (1 - 2/(9*k))) / math.Sqrt(2/(9*k)); z > 3 {
			r.Warnings = append(r.Warnings, fmt.Sprintf("χ² = %.3g for %d degrees of freedom: the uncertainties do not explain the scatter", r.ChiSquared, f.dof))
		}
	}
	if c := f.curvature(); math.Abs(c) > 3 {
		r.Warnings = append(r.Warnings, fmt.Sprintf("the plot is curved by %.1f of its standard uncertainty: self-absorption, or levels that share no temperature", c))
	}
	return r, nil
}

// curvature returns the coefficient of y² in the scaled residuals over its
// standard uncertainty, orthogonal to the line that was fitted.
func (f *lineFit) curvature() float64 {
	if len(f.lines) < 4 {
		return 0
	}
	var one, y, yy, r []float64
	for i, l := range f.lines {
		w := 1.0 / math.Hypot(l.Uncertainty/math.Max(l.Intensity, l.Uncertainty), l.RateUncertainty)
		one, y, yy = append(one, w), append(y, w*f.y(i)), append(yy, w*f.y(i)*f.y(i))
		r = append(r, f.residuals[i])
	}
	for range 2 {
		for _, b := range [][]float64{one, y} {
			p := dot(yy, b) / dot(b, b)
			for i := range yy {
				yy[i] -= p * b[i]
			}
		}
		p := dot(y, one) / dot(one, one)
		for i := range y {
			y[i] -= p * one[i]
		}
	}
	s := math.Sqrt(dot(yy, yy))
	if s == 0 {
		return 0
	}
	return dot(r, yy) / s
}
