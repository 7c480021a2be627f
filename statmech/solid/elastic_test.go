package solid

import (
	"math"
	"strings"
	"testing"

	"levelsum/statmech/unit"
)

func TestElasticPublished(t *testing.T) {
	for _, row := range readReference(t, "elastic-constants", "debye_theta_from_elastic.csv") {
		gpa := func(i int) unit.Pressure { return unit.Pressure(number(t, row[i])) * unit.GPa }
		b := ElasticCrystal{
			Stiffness: CubicStiffness(gpa(1), gpa(2), gpa(3)), Density: unit.Density(number(t, row[4])),
			MolarMass: unit.MolarMass(number(t, row[5])), Atoms: int(number(t, row[6])),
		}
		e, err := b.Evaluate()
		if err != nil {
			t.Errorf("%s: %v", row[0], err)
			continue
		}
		if d := float64(e.Theta) - number(t, row[7]); math.Abs(d) > 1e-3 {
			t.Errorf("%s: theta = %.4f K, independent program %s K", row[0], float64(e.Theta), row[7])
		}
		if d := float64(e.Velocity)/number(t, row[8]) - 1; math.Abs(d) > 3e-6 {
			t.Errorf("%s: mean velocity %v, independent program %s m/s", row[0], e.Velocity, row[8])
		}
		// The file's header says how far from the literature.
		tolerance := 0.01 * number(t, row[9])
		switch row[0] {
		case "Cu", "Ag", "Al", "Pb":
			tolerance = 0.3
		}
		if d := float64(e.Theta) - number(t, row[9]); math.Abs(d) > tolerance {
			t.Errorf("%s: theta = %.2f K, literature %s K", row[0], float64(e.Theta), row[9])
		}
	}
}

func copper() ElasticCrystal {
	return ElasticCrystal{Stiffness: CubicStiffness(176.2*unit.GPa, 124.94*unit.GPa, 81.77*unit.GPa), Density: 9018, MolarMass: 0.063546, Atoms: 1}
}

// TestElasticConvergence: the average against 4 times as many directions, and
// in turned axes, for a strongly anisotropic crystal.
func TestElasticConvergence(t *testing.T) {
	b := copper()
	e, err := b.Evaluate()
	if err != nil {
		t.Fatal(err)
	}
	near(t, "theta of copper at 0 K", float64(e.Theta), 344.4, 0.1/344.4)
	near(t, "the short cut", float64(e.ThetaHill), 351.6, 0.1/351.6)
	fine := b.theta(1 / math.Cbrt(b.inverseCubes(300)/3))
	near(t, "300 x 600 directions", float64(e.Theta), float64(fine), 1e-9)
	turned := b
	turned.Stiffness = rotate(b.Stiffness, 0.3, 1.1, -0.7)
	te, err := turned.Evaluate()
	if err != nil {
		t.Fatal(err)
	}
	near(t, "turned axes", float64(te.Theta), float64(e.Theta), 1e-9)
	near(t, "turned axes, bulk modulus", float64(te.Bulk), float64(e.Bulk), 1e-12)
	near(t, "turned axes, shear modulus", float64(te.Shear), float64(e.Shear), 1e-12)
	near(t, "bulk modulus (c11+2c12)/3", float64(e.Bulk), (176.2+2*124.94)/3*1e9, 1e-12)
	// Lead is less stiff against shear still.
	lead := ElasticCrystal{Stiffness: CubicStiffness(55.54*unit.GPa, 45.42*unit.GPa, 19.42*unit.GPa), Density: 11595, MolarMass: 0.2072, Atoms: 1}
	le, err := lead.Evaluate()
	if err != nil {
		t.Fatal(err)
	}
	near(t, "lead, 300 x 600 directions", float64(le.Theta), float64(lead.theta(1/math.Cbrt(lead.inverseCubes(300)/3))), 1e-9)
}

// rotate turns a stiffness by three angles about axes 3, 1, 3.
func rotate(c Stiffness, a, b, g float64) Stiffness {
	turn := func(i, j int, t float64) (m [3][3]float64) {
		m[0][0], m[1][1], m[2][2] = 1, 1, 1
		m[i][i], m[j][j], m[i][j], m[j][i] = math.Cos(t), math.Cos(t), -math.Sin(t), math.Sin(t)
		return
	}
	times := func(a, b [3][3]float64) (m [3][3]float64) {
		for i := range 3 {
			for j := range 3 {
				for k := range 3 {
					m[i][j] += a[i][k] * b[k][j]
				}
			}
		}
		return
	}
	r := times(turn(0, 1, a), times(turn(1, 2, b), turn(0, 1, g)))
	voigt := [3][3]int{{0, 5, 4}, {5, 1, 3}, {4, 3, 2}}
	var out Stiffness
	pairs := [6][2]int{{0, 0}, {1, 1}, {2, 2}, {1, 2}, {0, 2}, {0, 1}}
	for x, ij := range pairs {
		for y, kl := range pairs {
			sum := 0.0
			for p := range 3 {
				for q := range 3 {
					for s := range 3 {
						for u := range 3 {
							sum += r[ij[0]][p] * r[ij[1]][q] * r[kl[0]][s] * r[kl[1]][u] * float64(c[voigt[p][q]][voigt[s][u]])
						}
					}
				}
			}
			out[x][y] = unit.Pressure(sum)
		}
	}
	return out
}

func TestElasticIsotropic(t *testing.T) {
	// An isotropic body: v_l² = c11/ρ, v_t² = c44/ρ with c44 = (c11-c12)/2,
	// however the constants are passed.
	for name, c := range map[string]Stiffness{
		"cubic":        CubicStiffness(100*unit.GPa, 40*unit.GPa, 30*unit.GPa),
		"hexagonal":    HexagonalStiffness(100*unit.GPa, 40*unit.GPa, 40*unit.GPa, 100*unit.GPa, 30*unit.GPa),
		"trigonal":     TrigonalStiffness(100*unit.GPa, 40*unit.GPa, 40*unit.GPa, 0, 0, 100*unit.GPa, 30*unit.GPa),
		"tetragonal":   TetragonalStiffness(100*unit.GPa, 40*unit.GPa, 40*unit.GPa, 0, 100*unit.GPa, 30*unit.GPa, 30*unit.GPa),
		"monoclinic":   MonoclinicStiffness(CubicStiffness(100*unit.GPa, 40*unit.GPa, 30*unit.GPa), 0, 0, 0, 0),
		"triclinic":    TriclinicStiffness([21]unit.Pressure{100e9, 40e9, 40e9, 0, 0, 0, 100e9, 40e9, 0, 0, 0, 100e9, 0, 0, 0, 30e9, 0, 0, 30e9, 0, 30e9}),
		"orthorhombic": OrthorhombicStiffness(100e9, 100e9, 100e9, 40e9, 40e9, 40e9, 30e9, 30e9, 30e9),
	} {
		b := ElasticCrystal{Stiffness: c, Density: 2000, MolarMass: 0.03, Atoms: 2}
		e, err := b.Evaluate()
		if err != nil {
			t.Errorf("%s: %v", name, err)
			continue
		}
		vl, vt := math.Sqrt(100e9/2000), math.Sqrt(30e9/2000)
		want := math.Pow((1/(vl*vl*vl)+2/(vt*vt*vt))/3, -1.0/3)
		near(t, name, float64(e.Velocity), want, 1e-12)
		near(t, name+", short cut", float64(e.ThetaHill), float64(e.Theta), 1e-12)
		near(t, name+", bulk", float64(e.Bulk), 60e9, 1e-12)
		near(t, name+", shear", float64(e.Shear), 30e9, 1e-12)
	}
	// Trigonal symmetry: a third of a turn about c changes nothing.
	c := TrigonalStiffness(86.8e9, 7.04e9, 11.91e9, -18.04e9, 5e9, 105.75e9, 58.2e9)
	turned := rotate(c, 2*math.Pi/3, 0, 0)
	for i := range c {
		for j := range c {
			if d := float64(turned[i][j] - c[i][j]); math.Abs(d) > 1e-3 {
				t.Errorf("trigonal: c%d%d changes by %g Pa", i+1, j+1, d)
			}
		}
	}
	// Tetragonal: a quarter of a turn.
	c = TetragonalStiffness(86.8e9, 7.04e9, 11.91e9, -8e9, 105.75e9, 58.2e9, 30e9)
	turned = rotate(c, math.Pi/2, 0, 0)
	for i := range c {
		for j := range c {
			if d := float64(turned[i][j] - c[i][j]); math.Abs(d) > 1e-3 {
				t.Errorf("tetragonal: c%d%d changes by %g Pa", i+1, j+1, d)
			}
		}
	}
}

func TestElasticRefusals(t *testing.T) {
	good := copper()
	for name, test := range map[string]struct {
		change func(*ElasticCrystal)
		want   string
	}{
		"shear": {func(b *ElasticCrystal) { b.Stiffness = CubicStiffness(100e9, 120e9, 50e9) }, "-20 GPa"},
		"c44":   {func(b *ElasticCrystal) { b.Stiffness = CubicStiffness(100e9, 50e9, -1e9) }, "not stable (Born 1940)"},
		"bulk":  {func(b *ElasticCrystal) { b.Stiffness = CubicStiffness(100e9, -60e9, 50e9) }, "e1 = 1 e2 = 1 e3 = 1"},
		"asymmetric": {func(b *ElasticCrystal) {
			b.Stiffness[0][1] = 3e9
		}, "c12"},
		"density": {func(b *ElasticCrystal) { b.Density = 0 }, "Density = 0 kg/m3"},
		"atoms":   {func(b *ElasticCrystal) { b.Atoms = 0 }, "Atoms = 0"},
		"NaN":     {func(b *ElasticCrystal) { b.Stiffness[2][2] = unit.Pressure(math.NaN()) }, "c33"},
	} {
		b := good
		test.change(&b)
		if _, err := b.Evaluate(); err == nil || !strings.Contains(err.Error(), test.want) {
			t.Errorf("%s: %v, want %q", name, err, test.want)
		}
	}
	// Constants of 300 K (168.4, 121.4, 75.4 GPa, 8932 kg/m³, from memory) give
	// 331 K, 13 K less: the warning's reason.
	good.Stiffness, good.Density = CubicStiffness(168.4*unit.GPa, 121.4*unit.GPa, 75.4*unit.GPa), 8932
	good.MeasuredAt = 300 * unit.K
	if e, err := good.Evaluate(); err != nil || math.Abs(float64(e.Theta)-331) > 0.5 {
		t.Errorf("constants of 300 K: %v, %v, want 331 K", e.Theta, err)
	}
	if e, err := good.Evaluate(); err != nil || len(e.Warnings) != 1 || !strings.Contains(e.Warnings[0], "300 K") {
		t.Errorf("constants of 300 K: %v, %v", e.Warnings, err)
	}
}

func BenchmarkElastic(b *testing.B) {
	c := copper()
	for b.Loop() {
		if _, err := c.Evaluate(); err != nil {
			b.Fatal(err)
		}
	}
}
