package statmech

import (
	"errors"
	"math"
	"strings"
	"testing"

	"levelsum/statmech/unit"
)

func TestMolar(t *testing.T) {
	m := Molar{Mode: oscillator{theta: 500}, Per: "mol of oscillators", Reference: 298.15 * unit.K}
	ts := []unit.Temperature{100, 298.15, 1000}
	// An Einstein oscillator at x = 1: C/k = e/(e-1)² = 0.920673594208.
	if C := m.HeatCapacity(500 * unit.K).In(unit.R); math.Abs(C-0.920673594208) > 1e-12 {
		t.Errorf("C/R at T = θ: %.13f", C)
	}
	// G = H - TS from zero and from the reference.
	for i, T := range ts {
		H, S := m.Increments(ts)[i], m.Entropies(ts)[i]
		if d := m.GibbsFunctionsFromZero(ts)[i] - (S - H.Over(T)); math.Abs(float64(d)) > 1e-12 {
			t.Errorf("%v: -(A-U(0))/T off by %v", T, d)
		}
		HR := m.IncrementsFromReference(ts)[i]
		if d := m.GibbsFunctionsFromReference(ts)[i] - (S - HR.Over(T)); math.Abs(float64(d)) > 1e-12 {
			t.Errorf("%v: -(A-U(Tref))/T off by %v", T, d)
		}
		if m.HeatCapacities(ts)[i] != m.HeatCapacity(T) || HR != m.IncrementFromReference(T) || m.GibbsFunctionsFromReference(ts)[i] != m.GibbsFunctionFromReference(T) {
			t.Errorf("%v: slice forms differ from scalar ones", T)
		}
	}
	if m.IncrementFromReference(298.15*unit.K) != 0 {
		t.Error("the increment at the reference temperature is not zero")
	}
	table := m.Table(ts)
	csv, err := table.CSV()
	if err != nil || !strings.Contains(csv, "298.15") || len(table.Columns) != 7 || !strings.Contains(table.Notes[0], "mol of oscillators") {
		t.Errorf("%v\n%s\n%q", err, csv, table.Notes)
	}
	err = panicOf(func() { Molar{Mode: m.Mode}.GibbsFunctionFromReference(300 * unit.K) })
	if !errors.Is(err, ErrDomain) {
		t.Errorf("without a reference temperature: %v", err)
	}
	if b := (Molar{Mode: m.Mode, Pressure: unit.Bar}).Basis(); !strings.Contains(b, "100000 Pa") || !strings.Contains(b, "Cp") {
		t.Errorf("basis %q", b)
	}
}
