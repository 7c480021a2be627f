package unit

import "testing"

func TestTemperatureSteps(t *testing.T) {
	ts := TemperatureSteps(100*K, 1000*K, 100*K)
	if len(ts) != 10 || ts[0] != 100 || ts[9] != 1000 {
		t.Errorf("%v", ts)
	}
	if ts := TemperatureSteps(0.1*K, 0.7*K, 0.1*K); len(ts) != 7 || ts[6] != 0.7*K {
		t.Errorf("%v", ts)
	}
	if ts := TemperatureSteps(10*K, 19*K, 5*K); len(ts) != 2 || ts[1] != 15 {
		t.Errorf("%v", ts)
	}
	ls := TemperatureLogSteps(1*K, 1000*K, 4)
	for i, want := range []Temperature{1, 10, 100, 1000} {
		if !near(float64(ls[i]), float64(want), 1e-14) {
			t.Errorf("%v", ls)
		}
	}
	for name, f := range map[string]func(){
		"no step":  func() { TemperatureSteps(1, 2, 0) },
		"down":     func() { TemperatureSteps(2, 1, 1) },
		"zero":     func() { TemperatureSteps(0, 1, 1) },
		"one":      func() { TemperatureLogSteps(1, 2, 1) },
		"too many": func() { TemperatureSteps(1, 1000, 1e-9) },
	} {
		func() {
			defer func() {
				if _, ok := recover().(error); !ok {
					t.Errorf("%s: no error", name)
				}
			}()
			f()
		}()
	}
}
