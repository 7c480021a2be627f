package lattice

import (
	"fmt"
	"math"
	"strconv"

	"levelsum/display"
	"levelsum/statmech"
	"levelsum/statmech/uncertain"
)

// Estimates are what a series says about the canonical distribution, for one
// spin and without a unit. Standard uncertainties know of the correlation of
// the sweeps, and of one another: what is computed from two of them has the
// covariance of the values of the same sweeps.
type Estimates struct {
	Energy         uncertain.Quantity // ⟨E⟩/NJ
	HeatCapacity   uncertain.Quantity // C/Nk = (⟨E²⟩-⟨E⟩²)/N(kT)²
	Magnetisation  uncertain.Quantity // ⟨|m|⟩
	Susceptibility uncertain.Quantity // kTχ = N(⟨m²⟩-⟨|m|⟩²)
	// Means are these four with their autocorrelation times.
	Means    [4]Mean
	Warnings []string
	series   *Series
}

// fewest is how many τ a series must have for its uncertainties to be given.
const fewest = 50

// Estimates returns mean energy, heat capacity, magnetisation and
// susceptibility. The heat capacity and the susceptibility are variances; their
// uncertainties are those of the means of squared departures, to first order.
//
// Standard uncertainties are withheld, and a warning says so, from a series
// that is shorter than 50 autocorrelation times of its quantity. A warning also says
// if the first quarter and the last half of the series disagree, which is the
// sign of a simulation that was not in equilibrium.
//
// It returns a [*statmech.DomainError] if the series has fewer than two sweeps.
func (s *Series) Estimates() (*Estimates, error) {
	n := len(s.Energies)
	if n < 2 || len(s.Magnetisations) != n {
		return nil, &statmech.DomainError{Func: "lattice.Series.Estimates", Arg: "series", Value: fmt.Sprintf("%d energies, %d magnetisations", n, len(s.Magnetisations)), Want: "two or more of each"}
	}
	N, K := float64(s.Lattice.Spins()), s.Lattice.J.OverKT(s.T)
	var x [4][]float64
	for i := range x {
		x[i] = make([]float64, n)
	}
	for i := range n {
		x[0][i], x[2][i] = s.Energies[i].In(s.Lattice.J), math.Abs(s.Magnetisations[i])
	}
	est := &Estimates{series: s}
	for i, scale := range [4]float64{0, N * K * K, 0, N} {
		if i%2 == 1 { // a variance, without bias by the mean
			mean := est.Means[i-1]
			scale /= 1 - min(0.5, 1/mean.Independent())
			for j, v := range x[i-1] {
				x[i][j] = scale * (v - mean.Value) * (v - mean.Value)
			}
		}
		var err error
		if est.Means[i], err = MeanOf(x[i]); err != nil {
			return nil, err
		}
	}
	q := joined(x, est.Means)
	for i, name := range [4]string{"E/NJ", "C/Nk", "|m|", "kTχ"} {
		m := est.Means[i]
		q[i] = q[i].Named(name)
		switch {
		case m.U == 0:
			q[i] = q[i].Withhold("all values are the same")
		case float64(n) < fewest*m.Tau:
			q[i] = q[i].Withhold(fmt.Sprintf("%d sweeps are fewer than %d autocorrelation times of %.3g", n, fewest, m.Tau))
		}
		if reason := q[i].Withheld(); reason != "" {
			est.Warnings = append(est.Warnings, name+": no standard uncertainty, "+reason)
		}
		if i%2 == 0 && drift(x[i]) {
			est.Warnings = append(est.Warnings, name+": the first quarter disagrees with the last half, the simulation was not in equilibrium")
		}
	}
	if s.Interrupted {
		est.Warnings = append(est.Warnings, fmt.Sprintf("interrupted after %d sweeps", n))
	}
	est.Energy, est.HeatCapacity, est.Magnetisation, est.Susceptibility = q[0], q[1], q[2], q[3]
	return est, nil
}

// joined makes quantities of means whose correlations are those of values of
// the same sweep.
func joined(x [4][]float64, means [4]Mean) []uncertain.Quantity {
	values, cov := make([]float64, 4), make([][]float64, 4)
	var c [4][4]float64
	for i := range c {
		values[i] = means[i].Value
		for j := range i + 1 {
			for k := range x[i] {
				c[i][j] += float64((x[i][k] - means[i].Value) * (x[j][k] - means[j].Value))
			}
			c[j][i] = c[i][j]
		}
	}
	for i := range cov {
		cov[i] = make([]float64, 4)
		for j := range cov[i] {
			if i == j {
				cov[i][i] = means[i].U * means[i].U
			} else if d := math.Sqrt(c[i][i] * c[j][j]); d > 0 {
				cov[i][j] = c[i][j] / d * means[i].U * means[j].U
			}
		}
	}
	q, err := uncertain.Correlated(values, cov)
	if err != nil { // rounding, where a quantity hardly varies
		q = make([]uncertain.Quantity, 4)
		for i, m := range means {
			q[i] = uncertain.Measured(m.Value, m.U)
		}
	}
	return q
}

// drift compares the mean of the first quarter with that of the last half,
// whose difference has √3 times the standard uncertainty of the latter. That of
// the whole would be large just because of a drift.
func drift(x []float64) bool {
	n := len(x)
	if n < 100 {
		return false
	}
	first := 0.0
	for _, v := range x[:n/4] {
		first += v / float64(n/4)
	}
	last, err := MeanOf(x[n/2:])
	return err == nil && last.U > 0 && math.Abs(first-last.Value) > 4*math.Sqrt(3)*last.U
}

// View shows the estimates as a table.
func (e *Estimates) View() display.View {
	var names, values, times []string
	for i, q := range [4]uncertain.Quantity{e.Energy, e.HeatCapacity, e.Magnetisation, e.Susceptibility} {
		value := strconv.FormatFloat(q.Value(), 'g', 6, 64)
		if q.Withheld() == "" {
			value = q.String()
		}
		names, values, times = append(names, q.Name()), append(values, value), append(times, strconv.FormatFloat(e.Means[i].Tau, 'g', 3, 64))
	}
	s := e.series
	t := display.Table{Caption: fmt.Sprintf("%d × %d spins at kT/J = %.6g", s.Lattice.Rows, s.Lattice.Columns, 1/s.Lattice.J.OverKT(s.T)),
		Columns: []display.Column{{Quantity: "for a spin", Values: names}, {Quantity: "value", Values: values}, {Quantity: "τ in sweeps", Values: times}},
		Notes:   append([]string{fmt.Sprintf("%d sweeps after %d, seed %d; in parentheses the standard uncertainty of the last digits (k = 1)", len(s.Energies), s.Before, s.Seed)}, e.Warnings...)}
	return t.View()
}
