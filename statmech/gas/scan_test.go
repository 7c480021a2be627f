package gas

import (
	"errors"
	"math"
	"testing"

	"levelsum/statmech"
	"levelsum/statmech/unit"
)

// A scan of a known series comes back; its minimum is moved to zero; noise of
// another symmetry is left out by Symmetrised.
func TestFitScan(t *testing.T) {
	known := Fourier{Cos: []unit.Energy{0, 3 * unit.KJPerMol, -1 * unit.KJPerMol, -6 * unit.KJPerMol}, Sin: []unit.Energy{0, 0.5 * unit.KJPerMol}}
	scan := func(n int, f func(phi float64) unit.Energy) (phi []unit.Angle, V []unit.Energy) {
		for i := range n + 1 {
			p := 360 * float64(i) / float64(n)
			phi, V = append(phi, unit.Angle(p)*unit.Deg), append(V, f(p*math.Pi/180))
		}
		return phi, V
	}
	phi, V := scan(24, func(p float64) unit.Energy { return known.At(unit.Angle(p)) + 100*unit.KJPerMol })
	f, rms, err := FitScan(phi, V)
	if err != nil || rms > 1e-9*unit.KJPerMol {
		t.Fatal(rms, err)
	}
	at, low := f.minimum()
	if math.Abs(low) > 1e-12*float64(unit.KJPerMol) {
		t.Errorf("minimum at %g rad is %g J", at, low)
	}
	for _, p := range []float64{0.1, 1, 2.5, 4} {
		want := known.At(unit.Angle(p)) - known.At(unit.Angle(at))
		if d := (f.At(unit.Angle(p)) - want).In(unit.KJPerMol); math.Abs(d) > 1e-9 {
			t.Errorf("V(%g) is off by %g kJ/mol", p, d)
		}
	}
	noisy := Barrier(12*unit.KJPerMol, 3).Plus(Fourier{Cos: []unit.Energy{0, 0.02 * unit.KJPerMol}, Sin: []unit.Energy{0, 0, 0.03 * unit.KJPerMol}})
	g, dropped := noisy.Symmetrised(3)
	if math.Abs(dropped.In(unit.KJPerMol)-0.03) > 1e-12 || g.fold() != 3 || noisy.fold() != 1 {
		t.Errorf("dropped %g kJ/mol, fold %d of %d", dropped.In(unit.KJPerMol), g.fold(), noisy.fold())
	}
	if _, err := NewTorsion(unit.PerCm, noisy, 3, Diagonalised); !errors.Is(err, statmech.ErrDomain) {
		t.Errorf("σ = 3 of a potential without it: %v", err)
	}
}

func TestFitScanRefuses(t *testing.T) {
	deg := func(list ...float64) (as []unit.Angle) {
		for _, x := range list {
			as = append(as, unit.Angle(x)*unit.Deg)
		}
		return as
	}
	e := func(list ...float64) (es []unit.Energy) {
		for _, x := range list {
			es = append(es, unit.Energy(x)*unit.KJPerMol)
		}
		return es
	}
	for name, c := range map[string]struct {
		phi  []unit.Angle
		V    []unit.Energy
		says string
	}{
		"not periodic": {deg(0, 60, 120, 180, 240, 300, 360), e(0, 1, 2, 3, 2, 1, 1), "periodic"},
		"a gap":        {deg(0, 10, 20, 30, 40, 50, 60), e(0, 1, 2, 3, 2, 1, 0), "gap"},
		"two turns":    {deg(0, 120, 240, 360, 480, 600, 720), e(0, 1, 2, 0, 1, 2, 0), "one turn"},
		"too few":      {deg(0, 120, 240), e(0, 1, 0), "six"},
		"lengths":      {deg(0, 60, 120, 180, 240, 300), e(0), "as many"},
		"not finite":   {deg(0, 60, 120, 180, 240, 300), e(0, 1, 2, math.NaN(), 2, 1), "finite"},
	} {
		if _, _, err := FitScan(c.phi, c.V); !errors.Is(err, statmech.ErrDomain) || !contains(err.Error(), c.says) {
			t.Errorf("%s: %v", name, err)
		}
	}
}
