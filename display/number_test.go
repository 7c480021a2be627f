package display

import (
	"strings"
	"testing"
)

// The first rows are examples printed in JCGM 100:2008, 7.2.2 and 7.2.6:
// m = 100.02147(35) g, y = 10.05762 Ω with u = 27 mΩ becomes 10.058 Ω.
func TestRound(t *testing.T) {
	for _, test := range []struct {
		v, u float64
		want string
	}{
		{100.02147, 0.00035, "100.02147(35)"},
		{10.05762, 0.027, "10.058(27)"},
		{343.2, 0.7, "343.20(70)"},
		{0.0995, 0.00995, "0.100(10)"}, // rounding u carries into the next place
		{1.234, 0.996, "1.2(1.0)"},
		{12.3, 1.23, "12.3(1.2)"},
		{1e-21, 3.26e-24, "1.0000(33)×10⁻²¹"},
		{99999, 12345, "1.00(12)×10⁵"},
		{5000, 1234, "5000(1200)"},
		{12, 99.6, "10(100)"},
		{-0.001, 0.5, "0.00(50)"}, // no negative zero
		{-154.846, 0.003, "-154.8460(30)"},
	} {
		if got := round(test.v, test.u).text(); got != test.want {
			t.Errorf("round(%v, %v) = %s, want %s", test.v, test.u, got, test.want)
		}
	}
}

func TestTableText(t *testing.T) {
	text := Table{Columns: []Column{
		{Quantity: "T", Unit: "K", Values: []float64{1, 1.5, 298.15}},
		{Quantity: "C_p", Unit: "J/(mol K)", Values: []float64{0.000743, 0.00143, 24.4423}, U: []float64{7e-6, 1.4e-5, 0.0733}},
		{Quantity: "phase", Values: []string{"cr", "<img onerror=x>", "l & g"}},
	}}.View().Data["text/plain"].(string)
	for _, line := range []string{" T / K  C_p / (J mol⁻¹ K⁻¹)  phase\n", "  1.00        0.0007430(70)  cr", "0.001430(14)   <img onerror=x>", "24.442(73)      l & g"} {
		if !strings.Contains(text, line) {
			t.Errorf("no line with %q in\n%s", line, text)
		}
	}
}
