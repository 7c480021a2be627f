package runner_test

import (
	"strings"
	"testing"
)

// A figure that would mislead fails its cell, shown by a call or as the last
// value.
func TestRefusedFigure(t *testing.T) {
	e := start(t)
	const figure = `display.Figure{X: []float64{1, 2}, Y: []float64{0, 1}, XAxis: display.Axis{Unit: "K"}, YAxis: display.Axis{Unit: "K", Log: true}}`
	for i, src := range []string{"f := func() int { return 1 }\n_ = f()\n" + figure, "display.Show(" + figure + ")"} {
		out, _ := run(t, e, i+1, src)
		if out.Fault == nil || !strings.Contains(out.Fault.Message, "1 of 2 values of Y of series 1 are not positive") {
			t.Errorf("%.20s: fault %v", src, out.Fault)
		}
	}
}
