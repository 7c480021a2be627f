package statmech

import (
	"math"
	"strings"
	"testing"

	"levelsum/statmech/unit"
)

// oscillator is a mode as a user would write it, with a fault to choose.
type oscillator struct {
	theta float64
	fault string
}

func (o oscillator) Reduced(T unit.Temperature) Reduced {
	x := o.theta / float64(T)
	e := math.Exp(-x)
	r := Reduced{LogQ: -math.Log1p(-e), U: x * e / (1 - e), C: x * x * e / ((1 - e) * (1 - e))}
	switch o.fault {
	case "C":
		if T > 500 {
			r.C *= 1.001
		}
	case "U":
		r.U *= 1 - 1e-4
	case "ground":
		r.LogQ += math.Ln2
	case "negative":
		r.C = -r.C
	case "nan":
		if T > 9000 {
			r.C = math.NaN()
		}
	}
	return r
}

func (o oscillator) GroundDegeneracy() float64            { return 1 }
func (o oscillator) HighTemperatureHeatCapacity() float64 { return 1 }

func TestAuditPasses(t *testing.T) {
	for name, m := range map[string]Mode{
		"oscillator": oscillator{theta: 300},
		"Schottky":   Schottky{100 * unit.KelvinEnergy, 3},
		"levels":     mustLevels(t, []unit.Energy{0, 10 * unit.PerCm, 500 * unit.PerCm}, []float64{2, 4, 6}),
		"sum":        Sum{oscillator{theta: 300}, Times{2, Schottky{40 * unit.KelvinEnergy, 1}}},
	} {
		if r := Audit(m, AuditOptions{}); !r.OK() || len(r.Checks) != 7 {
			t.Errorf("%s:\n%s", name, r)
		}
	}
}

func TestAuditNamesTheFault(t *testing.T) {
	for fault, check := range map[string]string{
		"C": "C/k = d(T U/kT)/dT", "U": "U/kT = d ln q/d ln T", "ground": "S/k → ln g0", "negative": "C >= 0", "nan": "finite",
	} {
		r := Audit(oscillator{300, fault}, AuditOptions{})
		found := false
		for _, c := range r.Checks {
			if strings.HasPrefix(c.Name, check) && !c.OK() && c.At > 0 {
				found = true
				if fault == "C" && c.At < 500 {
					t.Errorf("the fault above 500 K shows at %v", c.At)
				}
			}
		}
		if s, ok := r.View().Data["text/plain"].(string); !ok || !strings.Contains(s, "does not hold") || !strings.Contains(s, "Audit of a mode") {
			t.Errorf("fault %q shows itself as\n%v", fault, r.View().Data["text/plain"])
		}
		if r.OK() || !found || !strings.Contains(r.String(), "DOES NOT HOLD") {
			t.Errorf("fault %q:\n%s", fault, r)
		}
	}
}
