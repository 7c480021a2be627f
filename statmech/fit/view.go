package fit

import (
	"fmt"
	"strconv"

	"levelsum/display"
	"levelsum/statmech/uncertain"
)

// View shows the parameters with their standard uncertainties and
// correlations, the judgement of the fit, and the warnings.
func (r *Result) View() display.View {
	n := len(r.p)
	head := []string{"parameter", "value", "unit", "start"}
	if n > 1 && r.Withheld == "" {
		for _, p := range r.reg.free {
			head = append(head, "r("+p.name+")")
		}
	}
	rows := [][]string{head}
	rho := r.Correlation()
	for j, p := range r.reg.free {
		value := strconv.FormatFloat(r.p[j], 'g', 6, 64)
		if q := r.quantity[j]; q.Withheld() == "" {
			value = q.WithUnit("").String()
		}
		row := []string{p.name, value, p.unit, strconv.FormatFloat(p.start, 'g', 6, 64)}
		if n > 1 && r.Withheld == "" {
			for k := range rho {
				text := uncertain.CorrelationText(rho[j][k])
				if k > j {
					text = ""
				}
				row = append(row, text)
			}
		}
		rows = append(rows, row)
	}
	lines := r.summary()
	return view("fit to "+r.dataName(), rows, lines)
}

func (r *Result) dataName() string {
	if r.Name == "" {
		return strconv.Itoa(len(r.X)) + " points"
	}
	return r.Name
}

// summary says in words how the fit went.
func (r *Result) summary() []string {
	lo, hi := r.X[0], r.X[0]
	for _, x := range r.X {
		lo, hi = min(lo, x), max(hi, x)
	}
	at := ""
	if r.xUnit != "" {
		at = " " + r.xUnit
	}
	lines := []string{fmt.Sprintf("%d points from %.6g%s to %.6g%s, %d free parameters; %v after %d evaluations", len(r.X), lo, at, hi, at, len(r.p), r.Stop, r.Evaluations)}
	if r.reg.loss.weight != nil {
		lines[0] += "; robust loss: " + r.reg.loss.name
	}
	if r.reg.given {
		lines = append(lines, fmt.Sprintf("χ² = %.4g for %d degrees of freedom, %.3g each, p %s", r.ChiSquared, r.Freedom, r.Ratio(), probability(r.P)))
	} else {
		lines = append(lines, fmt.Sprintf("residual sum of squares %.6g for %d degrees of freedom", r.ChiSquared, r.Freedom))
	}
	if r.Withheld != "" {
		lines = append(lines, "no standard uncertainties: "+r.Withheld)
	} else {
		text := "standard uncertainties (k = 1): " + r.Sigma.String()
		if len(r.common) > 0 && r.Sigma != CommonSigma {
			text += ", with the common error of the data"
		}
		for j, p := range r.reg.free {
			if q := r.quantity[j]; len(r.common) > 0 && q.Withheld() == "" {
				text += fmt.Sprintf("; u(%s) random %.2g, common %.2g", p.name, q.RandomPart(), q.CommonPart())
			}
		}
		lines = append(lines, text)
	}
	d := r.Diagnostics
	lines = append(lines, fmt.Sprintf("residuals: %d runs of sign (p %s), neighbours correlated by %.2f, largest %.2g u at %.6g%s, leverage up to %.2f at %.6g%s; condition number %.2g",
		d.Runs, probability(d.RunsP), d.LagOne, d.Largest, d.LargestAt, at, d.MaxLeverage, d.MaxAt, at, r.Condition))
	for _, w := range r.Warnings {
		lines = append(lines, "warning: "+w)
	}
	return lines
}

// String returns the result as plain text.
func (r *Result) String() string { return r.View().Data["text/plain"].(string) }

// view makes a table of rows, the first being the head, with lines below.
func view(title string, rows [][]string, lines []string) display.View {
	t := display.Table{Caption: title, Notes: lines, Limit: 400}
	for i, head := range rows[0] {
		cells := make([]string, 0, len(rows)-1)
		for _, r := range rows[1:] {
			cells = append(cells, r[i])
		}
		t.Columns = append(t.Columns, display.Column{Quantity: head, Values: cells})
	}
	return t.View()
}
