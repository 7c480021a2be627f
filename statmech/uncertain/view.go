package uncertain

import (
	"fmt"
	"math"
	"strconv"
	"strings"

	"levelsum/display"
)

func itoa(i int) string { return strconv.Itoa(i) }

// View shows the value with its standard uncertainty and unit.
func (q Quantity) View() display.View { return display.Text(q.String()) }

// View shows the budget as a table.
func (b Budget) View() display.View {
	rows := [][]string{{"input", "value", "u", "unit", "distribution", "kind", "ν", "c = ∂f/∂x", "|c| u", "share of u² / %"}}
	for _, c := range b.Inputs {
		kind := "random"
		if c.Common {
			kind = "common"
		}
		rows = append(rows, []string{c.Name, valueAt(c.Value, c.U), two(c.U), c.Unit, c.Shape.String(), kind,
			freedom(c.Freedom), strconv.FormatFloat(c.Sensitivity, 'g', 4, 64), two(c.Part),
			strconv.FormatFloat(100*c.Share, 'f', 1, 64)})
	}
	foot := "result " + b.Result.String()
	if b.Result.Withheld() == "" {
		foot += fmt.Sprintf("; u = %s (k = 1), random part %s, common part %s", two(b.U), two(b.Result.RandomPart()), two(b.Result.CommonPart()))
	}
	if !math.IsInf(b.Freedom, 1) {
		foot += "; effective degrees of freedom " + freedom(b.Freedom)
	}
	if b.Correlation != 0 {
		foot += fmt.Sprintf("; correlation terms %+.2g of u² = %.2g", b.Correlation, b.U*b.U)
	}
	if l := b.Result.Linearity(); l.Reason != "" && b.Result.Withheld() == "" {
		foot += "; warning: the first order is not enough: " + l.Reason
	}
	return table(rows, foot)
}

// View shows the simulation as a table.
func (s *Simulation) View() display.View {
	lo, hi := s.Interval(s.Coverage)
	sLo, sHi := s.Shortest(s.Coverage)
	percent := strconv.FormatFloat(100*s.Coverage, 'g', 4, 64) + " %"
	name := s.Quantity.Name()
	if name == "" {
		name = "result"
	}
	if unit := s.Quantity.Unit(); unit != "" {
		name += " / (" + unit + ")"
	}
	rows := [][]string{
		{name, "estimate", "u", percent + " symmetric", percent + " shortest"},
		{"Monte Carlo", valueAt(s.Mean, s.U), two(s.U), "[" + valueAt(lo, s.U) + ", " + valueAt(hi, s.U) + "]", "[" + valueAt(sLo, s.U) + ", " + valueAt(sHi, s.U) + "]"},
		{"first order", valueAt(s.Quantity.Value(), s.U), two(s.Quantity.StandardUncertainty()), "", ""},
	}
	foot := fmt.Sprintf("%d draws, seed %d", s.Draws, s.Seed)
	for _, w := range s.Warnings {
		foot += "; warning: " + w
	}
	return table(rows, foot)
}

func freedom(nu float64) string {
	if math.IsInf(nu, 1) {
		return "∞"
	}
	return strconv.FormatFloat(math.Floor(nu+1e-9), 'f', 0, 64)
}

// two writes a number with two significant digits.
func two(x float64) string {
	if x == 0 {
		return "0"
	}
	if a := math.Abs(x); a >= 1e-4 && a < 1e6 {
		_, w := TwoDigits.Round(x, a)
		return w
	}
	return strconv.FormatFloat(x, 'e', 1, 64)
}

func valueAt(v, u float64) string {
	if a := math.Abs(v); u == 0 || a != 0 && (a < 1e-4 || a >= 1e7) {
		return strconv.FormatFloat(v, 'g', 6, 64)
	}
	s, _ := TwoDigits.Round(v, u)
	return s
}

// table makes a table of rows, the first being the head, with a line below.
func table(rows [][]string, foot string) display.View {
	t := display.Table{Caption: "", Notes: strings.Split(foot, "; "), Limit: 400}
	for i, head := range rows[0] {
		cells := make([]string, 0, len(rows)-1)
		for _, r := range rows[1:] {
			cells = append(cells, r[i])
		}
		t.Columns = append(t.Columns, display.Column{Quantity: head, Values: cells})
	}
	return t.View()
}
