package gas

import (
	"encoding/csv"
	"errors"
	"math"
	"os"
	"strconv"
	"testing"

	"levelsum/statmech"
	"levelsum/statmech/unit"
)

type keyValue struct{ S, uS, H, uH float64 } // J/(mol K), kJ/mol; about 95 %

func keyValues(t *testing.T) map[string]keyValue {
	t.Helper()
	f, err := os.Open("testdata/codata1989/gases.csv")
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	r := csv.NewReader(f)
	r.Comment = '#'
	rows, err := r.ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	m := map[string]keyValue{}
	for _, row := range rows[1:] {
		var v [4]float64
		for i := range v {
			if v[i], err = strconv.ParseFloat(row[2+i], 64); err != nil {
				t.Fatal(err)
			}
		}
		m[row[0]] = keyValue{v[0], v[1], v[2], v[3]}
	}
	return m
}

// Sackur-Tetrode against CODATA key values; relative atomic masses: IUPAC
// abridged values, the table itself used 39.948 for Ar and 83.80 for Kr.
func TestMonatomicPublished(t *testing.T) {
	key := keyValues(t)
	largest := 0.0
	for _, test := range []struct {
		name string
		mass float64
	}{{"He", 4.002602}, {"Ne", 20.1797}, {"Ar", 39.948}, {"Kr", 83.798}, {"Xe", 131.293}} {
		g := Monatomic{Mass: unit.Mass(test.mass) * unit.U, Pressure: unit.Bar}
		want := key[test.name]
		largest = max(largest, math.Abs(g.Entropy(298.15*unit.K).In(unit.JPerMolK)-want.S)/want.uS)
		if got := g.Entropy(298.15 * unit.K).In(unit.JPerMolK); math.Abs(got-want.S) > want.uS {
			t.Errorf("%s: S° = %.4f, want %.3f ± %.3f", test.name, got, want.S, want.uS)
		}
		if got := g.EnthalpyIncrement(298.15 * unit.K).In(unit.MolarKJ); math.Abs(got-want.H) > want.uH {
			t.Errorf("%s: H°-H°(0) = %.4f kJ/mol, want %.3f ± %.3f", test.name, got, want.H, want.uH)
		}
	}
	t.Logf("accuracy: Monatomic | S°(298.15 K) of the noble gases | over the table's ± (95 %%) | %.3g | 1 | CODATA key values (1989)", largest)
	// Independent arithmetic: Ar of 39.948 at 1 bar and 1 atm.
	ar := Monatomic{Mass: 39.948 * unit.U, Pressure: unit.Bar}
	if got := ar.Entropy(298.15 * unit.K).In(unit.JPerMolK); math.Abs(got-154.8457) > 5e-5 {
		t.Errorf("Ar, 1 bar: %.5f, want 154.8457", got)
	}
	ar.Pressure = unit.Atm
	if got := ar.Entropy(298.15 * unit.K).In(unit.JPerMolK); math.Abs(got-154.7362) > 5e-5 {
		t.Errorf("Ar, 1 atm: %.5f, want 154.7362", got)
	}
}

// The Sackur-Tetrode constant of CODATA 2022: -1.15170753496(47) at 1 K and
// 100 kPa for a mass of m_u, -1.16487052149(47) at 101.325 kPa.
func TestSackurTetrodeConstant(t *testing.T) {
	for p, want := range map[unit.Pressure]float64{unit.Bar: -1.15170753496, unit.Atm: -1.16487052149} {
		r := Translation{Mass: unit.U, Pressure: p}.Reduced(1 * unit.K)
		if got := r.Entropy(); math.Abs(got-want) > 5e-11 {
			t.Errorf("S0/R at %v = %.12f, want %.11f", p, got, want)
		}
	}
}

func TestTranslationEnsembles(t *testing.T) {
	T := 300 * unit.K
	p := Translation{Mass: 28 * unit.U, Pressure: unit.Bar}
	v := Translation{Mass: 28 * unit.U, VolumePerParticle: unit.Volume(float64(T.AsEnergy()) / 1e5)}
	a, b := p.Reduced(T), v.Reduced(T)
	if math.Abs(a.Entropy()-b.Entropy()) > 1e-13 {
		t.Errorf("S/k at fixed p %.15g, at fixed V %.15g", a.Entropy(), b.Entropy())
	}
	if a.U != 2.5 || a.C != 2.5 || b.U != 1.5 || b.C != 1.5 {
		t.Errorf("fixed p %+v, fixed V %+v", a, b)
	}
	// n Λ³ of He at 4.2 K and 1 bar is 0.13, of Ar at 298 K 1e-7.
	he := Translation{Mass: 4.0026 * unit.U, Pressure: unit.Bar}
	if d := he.Degeneracy(4.2 * unit.K); math.Abs(d-0.13) > 0.005 {
		t.Errorf("He at 4.2 K: nΛ³ = %.3f, want 0.13", d)
	}
	if len(he.Warnings(4.2*unit.K)) != 1 || len(he.Warnings(298*unit.K)) != 0 || len(he.Warnings(1*unit.K)) != 1 {
		t.Errorf("warnings %q, %q", he.Warnings(4.2*unit.K), he.Warnings(298*unit.K))
	}
}

func TestMonatomicDomain(t *testing.T) {
	for name, f := range map[string]func(){
		"T":        func() { Monatomic{Mass: unit.U, Pressure: unit.Bar}.Entropy(-3 * unit.K) },
		"Mass":     func() { Monatomic{Pressure: unit.Bar}.Entropy(3 * unit.K) },
		"Pressure": func() { Monatomic{Mass: unit.U}.Entropy(3 * unit.K) },
	} {
		func() {
			defer func() {
				var d *statmech.DomainError
				if err, _ := recover().(error); !errors.As(err, &d) || d.Arg != name {
					t.Errorf("%s: panic %v", name, err)
				}
			}()
			f()
		}()
	}
}
