package fit

import (
	"fmt"
	"math"
	"reflect"
	"slices"

	"levelsum/statmech"
	"levelsum/statmech/data"
	"levelsum/statmech/unit"
)

// What a model of the heat capacity may offer. One of the first two is needed.
type (
	heatCapacity interface {
		HeatCapacity(T unit.Temperature) unit.MolarEntropy
	}
	heatCapacities interface {
		HeatCapacities(ts []unit.Temperature) []unit.MolarEntropy
	}
	// differentiable is a term that adds its values and its derivatives with
	// respect to the numbers at the addresses it owns.
	differentiable interface {
		Accumulate(ts []unit.Temperature, at []*float64, c []float64, partials [][]float64) error
		Owns(p *float64) (name string, ok bool)
	}
)

// Model returns the model that was fitted by [HeatCapacity], or nil.
func (r *Result) Model() any {
	if m, ok := r.reg.model.(*thermal); ok {
		return m.source
	}
	return nil
}

// HeatCapacity fits a model to the heat capacities of a table. The model is
// anything with a method HeatCapacity or HeatCapacities, which takes all
// temperatures at once (a solid, a term, a type of a notebook cell), or a
// [statmech.Mode], whose C_V of one mole is taken; give pointers where fields
// are free.
//
// The weights come from the random part of the uncertainty of Cp if the table
// has one (u_r), else from u(Cp); a column u(T) is carried over with the slope
// of the model, and a column u_c is propagated once for all points.
func HeatCapacity(model any, run *data.Table, opts ...Option) (*Result, error) {
	if run == nil {
		return nil, fmt.Errorf("fit: HeatCapacity: no data")
	}
	if len(run.T) == 0 || len(run.Cp) == 0 {
		return nil, fmt.Errorf("fit: HeatCapacity: %s has no columns T and Cp", run.Name)
	}
	m, err := newThermal(model)
	if err != nil {
		return nil, err
	}
	all := append([]Option{optionFunc(m.describe)}, opts...)
	all = append(all, optionFunc(func(s *settings) error {
		s.shared = run.CommonError()
		if run.UCommon != nil && s.sigma != CommonSigma {
			s.common = append(s.common, commonError{plain(run.UCommon), s.shared})
		}
		if run.UCommon != nil && run.URandom == nil && s.sigma == AbsoluteSigma {
			return fmt.Errorf("fit: HeatCapacity: %s has only common uncertainties of Cp; they say nothing of the scatter, so ask for fit.ScaledSigma", run.Name)
		}
		return nil
	}))
	var u []float64
	switch {
	case run.URandom != nil:
		u = plain(run.URandom)
	case run.U != nil:
		u = plain(run.U) // of common ones the ratios, as the best guess of the weights
	}
	if run.UT != nil {
		all = append(all, XUncertainty(plain(run.UT)))
	}
	res, err := fitModel(m, plain(run.T), plain(run.Cp), u, all)
	if res != nil {
		res.Name, res.yUnit, res.xUnit = run.Name, "J/(mol K)", "K"
		m.warn(res)
	}
	return res, err
}

// plain returns the float64 values of a slice of quantities.
func plain[Q ~float64](qs []Q) []float64 {
	out := make([]float64, len(qs))
	for i, q := range qs {
		out[i] = float64(q)
	}
	return out
}

// thermal is a model of the molar heat capacity as a function of T.
type thermal struct {
	source any
	one    func(unit.Temperature) unit.MolarEntropy
	many   heatCapacities
	diff   differentiable
	ts     []unit.Temperature
	rows   [][]float64

	// The derivatives of the last evaluation, which come at no cost with the
	// values: valid for the temperatures x0 and the parameters p at the
	// addresses at.
	at  []*float64
	p   []float64
	jac []float64
	x0  []float64
}

func newThermal(source any) (*thermal, error) {
	m := &thermal{source: source}
	if h, ok := source.(heatCapacity); ok {
		m.one = h.HeatCapacity
	} else if h, ok := source.(heatCapacities); ok {
		m.one = func(T unit.Temperature) unit.MolarEntropy { return h.HeatCapacities([]unit.Temperature{T})[0] }
	} else if mode, ok := source.(statmech.Mode); ok {
		m.one = func(T unit.Temperature) unit.MolarEntropy {
			return unit.MolarEntropy(mode.Reduced(T).C) * unit.R
		}
	} else {
		hint := ""
		if v := reflect.ValueOf(source); v.IsValid() && v.Kind() == reflect.Struct {
			if _, ok := reflect.New(v.Type()).Interface().(heatCapacity); ok {
				hint = "; give its address, &model"
			}
		}
		return nil, fmt.Errorf("fit: HeatCapacity: %T has no method HeatCapacity(unit.Temperature) unit.MolarEntropy and is no statmech.Mode%s", source, hint)
	}
	m.many, _ = source.(heatCapacities)
	m.diff, _ = source.(differentiable)
	return m, nil
}

func (m *thermal) temperatures(x []float64) []unit.Temperature {
	m.ts = m.ts[:0]
	for _, v := range x {
		m.ts = append(m.ts, unit.Temperature(v))
	}
	return m.ts
}

func (m *thermal) values(x, out []float64) bool {
	ts := m.temperatures(x)
	switch {
	case m.at != nil:
		clear(out)
		m.x0 = nil
		if len(m.jac) != len(m.at)*len(x) {
			m.jac = make([]float64, len(m.at)*len(x))
		}
		clear(m.jac)
		if m.diff.Accumulate(ts, m.at, out, m.split(m.jac, len(x))) != nil {
			return false
		}
		m.x0, m.p = x, m.p[:0]
		for _, a := range m.at {
			m.p = append(m.p, *a)
		}
	case m.diff != nil:
		clear(out)
		return m.diff.Accumulate(ts, nil, out, nil) == nil
	case m.many != nil:
		for i, c := range m.many.HeatCapacities(ts) {
			out[i] = float64(c)
		}
	default:
		for i, T := range ts {
			out[i] = float64(m.one(T))
		}
	}
	return true
}

func (m *thermal) partials(x []float64, at []*float64, jac []float64) bool {
	if m.diff == nil {
		return false
	}
	if !slices.Equal(m.at, at) {
		for _, p := range at {
			if _, ok := m.diff.Owns(p); !ok {
				return false
			}
		}
		m.at, m.x0 = slices.Clone(at), nil
	}
	if m.current(x) {
		copy(jac, m.jac)
		return true
	}
	clear(jac)
	return m.diff.Accumulate(m.temperatures(x), at, nil, m.split(jac, len(x))) == nil
}

// current reports whether the derivatives of the last evaluation are those at x
// and the present parameters.
func (m *thermal) current(x []float64) bool {
	if len(x) == 0 || len(m.x0) != len(x) || &m.x0[0] != &x[0] {
		return false
	}
	for j, a := range m.at {
		if *a != m.p[j] {
			return false
		}
	}
	return true
}

// split returns the columns of a Jacobian.
func (m *thermal) split(jac []float64, n int) [][]float64 {
	m.rows = m.rows[:0]
	for j := range len(jac) / n {
		m.rows = append(m.rows, jac[j*n:(j+1)*n])
	}
	return m.rows
}

// describe gives the free parameters the names of their fields.
func (m *thermal) describe(s *settings) error {
	s.nameOf = func(p *float64) string {
		if m.diff != nil {
			if name, ok := m.diff.Owns(p); ok {
				return name
			}
		}
		return fieldName(reflect.ValueOf(m.source), p, "", 0)
	}
	return nil
}

// fieldName looks for the address among the exported fields of a model and
// returns its path, "Debye.Theta".
func fieldName(v reflect.Value, p *float64, path string, depth int) string {
	if depth > 8 || !v.IsValid() {
		return ""
	}
	switch v.Kind() {
	case reflect.Pointer, reflect.Interface:
		if v.IsNil() {
			return ""
		}
		return fieldName(v.Elem(), p, path, depth+1)
	case reflect.Struct:
		if path == "" {
			path = v.Type().Name()
		}
		for i := range v.NumField() {
			f := v.Type().Field(i)
			if !f.IsExported() {
				continue
			}
			if name := fieldName(v.Field(i), p, path+"."+f.Name, depth+1); name != "" {
				return name
			}
		}
	case reflect.Slice, reflect.Array:
		for i := range v.Len() {
			if name := fieldName(v.Index(i), p, "", depth+1); name != "" {
				return name
			}
		}
	case reflect.Float64:
		if v.CanAddr() && v.Addr().Convert(reflect.TypeFor[*float64]()).Interface().(*float64) == p {
			return path
		}
	}
	return ""
}

// warn adds what is particular to heat capacities: the data are Cp, lattice
// models give C_V.
func (m *thermal) warn(r *Result) {
	highest := math.Inf(-1)
	for _, x := range r.X {
		highest = max(highest, x)
	}
	for j, p := range r.reg.free {
		theta := r.p[j]
		if p.unit != "K" || !isTheta(p.field) || theta <= 0 || highest <= theta/3 {
			continue
		}
		r.Warnings = append(r.Warnings, fmt.Sprintf("points up to %.4g K, above a third of %s = %.4g K: the model gives C_V, the data are Cp; subtract Cp - C_V, or put the lattice into solid.Dilated", highest, p.name, theta))
	}
}

func isTheta(name string) bool {
	const suffix = "Theta"
	return len(name) >= len(suffix) && name[len(name)-len(suffix):] == suffix
}
