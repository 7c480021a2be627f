package gas

import (
	"fmt"
	"math"
	"sort"
	"strings"

	"levelsum/statmech"
	"levelsum/statmech/data"
	"levelsum/statmech/unit"
)

// ReadGeometry reads atoms from a table with the columns atom, x, y, z.
func ReadGeometry(path string) ([]Atom, error) {
	t, err := data.Read(path)
	if err != nil {
		return nil, err
	}
	symbols, err := t.Column("atom")
	if err != nil {
		return nil, err
	}
	atoms := make([]Atom, t.Len())
	for k, name := range []string{"x", "y", "z"} {
		c, err := t.Column(name)
		if err != nil {
			return nil, err
		}
		if c.Unit.Kind != unit.KindLength {
			return nil, fmt.Errorf("gas: %s: column %s: %s is a unit of %s, want one of length", t.Name, name, c.Unit, c.Unit.Kind)
		}
		for i, v := range c.Values {
			*[]*unit.Length{&atoms[i].X, &atoms[i].Y, &atoms[i].Z}[k] = unit.Length(v)
		}
	}
	for i, s := range symbols.Text {
		atoms[i].Isotope = strings.TrimSpace(s)
	}
	return atoms, nil
}

// ReadScan reads a torsion scan from a table with the columns phi (deg or rad)
// and V and returns its Fourier series, see [FitScan].
func ReadScan(path string) (Fourier, error) {
	f, _, err := readScan(path)
	return f, err
}

func readScan(path string) (Fourier, *data.Table, error) {
	t, err := data.Read(path)
	if err != nil {
		return Fourier{}, nil, err
	}
	f, err := scanOf(t)
	return f, t, err
}

// scanOf fits the columns phi and V of a table.
func scanOf(t *data.Table) (Fourier, error) {
	phi, err := t.Column("phi")
	if err != nil {
		return Fourier{}, err
	}
	V, err := t.Column("V")
	if err != nil {
		return Fourier{}, err
	}
	if phi.Unit.Kind != unit.KindAngle {
		return Fourier{}, fmt.Errorf("gas: %s: column phi: %s is a unit of %s, want deg or rad", t.Name, phi.Unit, phi.Unit.Kind)
	}
	angles, es := make([]unit.Angle, t.Len()), make([]unit.Energy, t.Len())
	for i := range angles {
		angles[i] = unit.Angle(phi.Values[i])
		if es[i], err = energy(V.Values[i], V.Unit); err != nil {
			return Fourier{}, fmt.Errorf("gas: %s: column V: %w", t.Name, err)
		}
	}
	f, _, err := FitScan(angles, es)
	return f, err
}

// FitScan returns the Fourier series of least squares through a torsion scan,
// with its minimum moved to zero energy, and the root-mean-square residual. A
// scan that ends where it began (0 and 360 degrees) must have the same energy at
// both ends. The order is the highest, at most 12, that leaves a point to
// spare.
//
// It returns a [*statmech.DomainError] if lengths differ, there are fewer than
// six points, the ends disagree by more than 1 % of the range, or the points
// leave a gap of more than 90 degrees.
func FitScan(phi []unit.Angle, V []unit.Energy) (f Fourier, rms unit.Energy, err error) {
	const fn = "gas.FitScan"
	if len(phi) != len(V) || len(phi) < 6 {
		return f, 0, &statmech.DomainError{Func: fn, Arg: "phi, V", Value: fmt.Sprintf("%d, %d values", len(phi), len(V)), Want: "as many of each, six or more"}
	}
	type point struct{ phi, v float64 }
	var ps []point
	lo, hi := math.Inf(1), math.Inf(-1)
	for i := range phi {
		x, v := float64(phi[i]), float64(V[i])
		if x-x != 0 || v-v != 0 {
			return f, 0, &statmech.DomainError{Func: fn, Arg: fmt.Sprintf("point %d", i+1), Value: fmt.Sprint(phi[i], V[i]), Want: "finite"}
		}
		lo, hi = math.Min(lo, v), math.Max(hi, v)
		ps = append(ps, point{x, v})
	}
	sort.Slice(ps, func(i, j int) bool { return ps[i].phi < ps[j].phi })
	const turn = 2 * math.Pi
	span := ps[len(ps)-1].phi - ps[0].phi
	if span > turn*(1+1e-6) {
		return f, 0, &statmech.DomainError{Func: fn, Arg: "phi", Value: fmt.Sprintf("a range of %.4g degrees", span*180/math.Pi), Want: "one turn, 360 degrees"}
	}
	if math.Abs(span-turn) < 1e-6 {
		if d := math.Abs(ps[len(ps)-1].v - ps[0].v); d > 0.01*(hi-lo) {
			return f, 0, &statmech.DomainError{Func: fn, Arg: "V", Value: fmt.Sprintf("ends that differ by %s", unit.Energy(d)), Want: "a periodic scan: the same energy one turn apart"}
		}
		ps = ps[:len(ps)-1]
	}
	for i := range ps {
		next := ps[(i+1)%len(ps)].phi
		if i == len(ps)-1 {
			next += turn
		}
		if gap := next - ps[i].phi; gap > math.Pi/2 {
			return f, 0, &statmech.DomainError{Func: fn, Arg: "phi", Value: fmt.Sprintf("a gap of %.4g degrees", gap*180/math.Pi),
				Want: "points all around the turn; write out the images of a symmetric scan"}
		}
	}
	order := min(12, (len(ps)-2)/2)
	angles, vs := make([]float64, len(ps)), make([]float64, len(ps))
	for i, p := range ps {
		angles[i], vs[i] = p.phi, p.v-lo
	}
	c, s, ss, err := fourierFit(angles, vs, order)
	if err != nil {
		return f, 0, fmt.Errorf("%s: %w", fn, err)
	}
	f = Fourier{Cos: make([]unit.Energy, order+1), Sin: make([]unit.Energy, order+1)}
	for k := range c {
		f.Cos[k], f.Sin[k] = unit.Energy(c[k]), unit.Energy(s[k])
		// Terms that are rounding errors would break symmetry and cost time.
		if math.Abs(c[k]) < 1e-9*(hi-lo) {
			f.Cos[k] = 0
		}
		if math.Abs(s[k]) < 1e-9*(hi-lo) {
			f.Sin[k] = 0
		}
	}
	_, v := f.minimum()
	f.Cos[0] -= unit.Energy(v)
	return f, unit.Energy(math.Sqrt(ss / float64(len(ps)))), nil
}
