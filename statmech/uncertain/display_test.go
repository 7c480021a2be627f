package uncertain

import (
	"math"
	"math/rand/v2"
	"strings"
	"testing"

	"levelsum/display"
)

// TestAgreesWithDisplay: a quantity prints the same here and as a named result
// of a notebook.
func TestAgreesWithDisplay(t *testing.T) {
	r := rand.New(rand.NewPCG(1, 1))
	for range 3000 {
		q := Measured(math.Exp(r.NormFloat64()*6)*float64(1-2*r.IntN(2)), math.Exp(r.NormFloat64()*6))
		n, err := display.NumberOf("x", q)
		if err != nil {
			t.Fatal(err)
		}
		if a, b := q.String(), strings.TrimPrefix(n.String(), "x = "); a != strings.ReplaceAll(b, "−", "-") {
			t.Errorf("%g ± %g: %q here, %q there", q.Value(), q.StandardUncertainty(), a, b)
		}
	}
}
