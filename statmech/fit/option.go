package fit

import (
	"fmt"
	"math"
	"reflect"

	"levelsum/display"
	"levelsum/statmech/uncertain"
	"levelsum/statmech/unit"
)

// An Option says which numbers are free, between which bounds, and how the
// uncertainties of the data are to be read.
type Option interface{ apply(*settings) error }

type optionFunc func(*settings) error

func (f optionFunc) apply(s *settings) error { return f(s) }

// Sigma says what the standard uncertainties of the data mean.
type Sigma int

// The choice is an option of every fit and has no default.
const (
	// AbsoluteSigma: known standard deviations of independent errors.
	AbsoluteSigma Sigma = iota + 1
	// ScaledSigma: known up to one factor, which the scatter of the data about
	// the model determines.
	ScaledSigma
	// CommonSigma: one error shared by all points, which moves them together
	// by their stated uncertainties; the random part comes from the scatter.
	CommonSigma
)

func (s Sigma) String() string {
	switch s {
	case AbsoluteSigma:
		return "absolute"
	case ScaledSigma:
		return "scaled by the scatter"
	case CommonSigma:
		return "common to all points, with the random part from the scatter"
	}
	return "not chosen"
}

func (s Sigma) apply(set *settings) error {
	if set.sigma != 0 && set.sigma != s {
		return fmt.Errorf("fit: both %v and %v standard uncertainties asked for, want one of them", set.sigma, s)
	}
	set.sigma = s
	return nil
}

type settings struct {
	free   []*parameter
	bounds map[*float64][2]float64
	names  map[*float64]string
	ties   []tie
	sigma  Sigma
	from   float64
	to     float64
	ux     []float64
	common []commonError
	shared uncertain.Quantity // the common error that CommonSigma speaks of
	starts int
	seed   uint64
	loss   loss
	stop   func() bool
	nameOf func(*float64) string // the model's name of a parameter, may be nil
}

// commonError moves all points together by u times a shared error of 0 ± 1.
type commonError struct {
	u []float64
	e uncertain.Quantity
}

type parameter struct {
	at     *float64
	name   string
	unit   string
	field  string // the model's own name, whatever the caller calls it
	lo, hi float64
	start  float64
}

type tie struct {
	at *float64
	f  func() float64
}

func newSettings(opts []Option) (*settings, error) {
	s := &settings{stop: display.Interrupted, from: math.Inf(-1), to: math.Inf(1), bounds: map[*float64][2]float64{}, names: map[*float64]string{}}
	for _, o := range opts {
		if o == nil {
			return nil, fmt.Errorf("fit: a nil option")
		}
		if err := o.apply(s); err != nil {
			return nil, err
		}
	}
	if len(s.free) == 0 {
		return nil, fmt.Errorf("fit: nothing to fit: name the free parameters with fit.Vary(&model.Field)")
	}
	if s.sigma == 0 {
		return nil, fmt.Errorf("fit: say what the uncertainties of the data mean: fit.AbsoluteSigma, fit.ScaledSigma or fit.CommonSigma")
	}
	for i, p := range s.free {
		if name, ok := s.names[p.at]; ok {
			p.name = name
		}
		if s.nameOf != nil {
			p.field = s.nameOf(p.at)
		}
		if p.name == "" {
			p.name = p.field
		}
		if p.name == "" {
			p.name = fmt.Sprintf("p%d", i+1)
		}
		if b, ok := s.bounds[p.at]; ok {
			p.lo, p.hi = b[0], b[1]
			delete(s.bounds, p.at)
		}
		p.start = *p.at
		if math.IsNaN(p.start) || math.IsInf(p.start, 0) {
			return nil, fmt.Errorf("fit: %s starts at %g, want a finite number", p.name, p.start)
		}
		if p.start < p.lo || p.start > p.hi {
			return nil, fmt.Errorf("fit: %s starts at %g, outside its bounds %g to %g", p.name, p.start, p.lo, p.hi)
		}
		for _, t := range s.ties {
			if t.at == p.at {
				return nil, fmt.Errorf("fit: %s is both free and tied", p.name)
			}
		}
	}
	if len(s.bounds) > 0 {
		return nil, fmt.Errorf("fit: bounds for a number that is not free; add it to fit.Vary")
	}
	return s, nil
}

// address returns the float64 behind a pointer to any type of kind float64.
func address(fn string, ptr any) (*float64, error) {
	v := reflect.ValueOf(ptr)
	if !v.IsValid() || v.Kind() != reflect.Pointer || v.Type().Elem().Kind() != reflect.Float64 {
		return nil, fmt.Errorf("fit: %s: %T, want the address of a number or quantity, as &model.Theta", fn, ptr)
	}
	if v.IsNil() {
		return nil, fmt.Errorf("fit: %s: a nil pointer", fn)
	}
	return v.Convert(reflect.TypeFor[*float64]()).Interface().(*float64), nil
}

// number returns the float64 in a value of any type of kind float64, or an int.
func number(fn string, x any) (float64, error) {
	v := reflect.ValueOf(x)
	switch {
	case v.IsValid() && v.Kind() == reflect.Float64:
		return v.Float(), nil
	case v.IsValid() && v.CanInt():
		return float64(v.Int()), nil
	}
	return 0, fmt.Errorf("fit: %s: %T, want a number or quantity", fn, x)
}

// Vary makes the numbers at the addresses free. Each is a *float64 or a
// pointer to a quantity, as &deb.Theta; its present value is the start.
func Vary(ptrs ...any) Option {
	return optionFunc(func(s *settings) error {
		for _, ptr := range ptrs {
			at, err := address("Vary", ptr)
			if err != nil {
				return err
			}
			for _, p := range s.free {
				if p.at == at {
					return fmt.Errorf("fit: Vary: %T at the same address twice", ptr)
				}
			}
			p := &parameter{at: at, lo: math.Inf(-1), hi: math.Inf(1), unit: unitOf(ptr)}
			s.free = append(s.free, p)
		}
		return nil
	})
}

// unitOf returns the unit in which the quantity behind ptr is stored.
func unitOf(ptr any) string {
	v := reflect.ValueOf(ptr).Elem()
	if q, ok := v.Interface().(interface{ Unit() unit.Unit }); ok {
		return q.Unit().Symbol
	}
	return ""
}

// Between keeps a free parameter between two bounds, in the type of the
// parameter: fit.Between(&deb.Theta, 100*unit.K, 600*unit.K). An infinite
// bound is no bound.
func Between(ptr any, lo, hi any) Option {
	return optionFunc(func(s *settings) error {
		at, err := address("Between", ptr)
		if err != nil {
			return err
		}
		a, err := number("Between", lo)
		if err != nil {
			return err
		}
		b, err := number("Between", hi)
		if err != nil {
			return err
		}
		if !(a < b) {
			return fmt.Errorf("fit: Between: bounds %g and %g, want the lower one first", a, b)
		}
		s.bounds[at] = [2]float64{a, b}
		return nil
	})
}

// Tie makes a number follow the free ones: before every evaluation it is set
// to f(), which may read them. fit.Tie(&ein.Modes, func() float64 { return 6 -
// deb.Modes }) keeps a count of modes.
func Tie(ptr any, f func() float64) Option {
	return optionFunc(func(s *settings) error {
		at, err := address("Tie", ptr)
		if err != nil {
			return err
		}
		if f == nil {
			return fmt.Errorf("fit: Tie: no function")
		}
		s.ties = append(s.ties, tie{at, f})
		return nil
	})
}

// Name gives a free parameter a name for tables and messages.
func Name(ptr any, name string) Option {
	return optionFunc(func(s *settings) error {
		at, err := address("Name", ptr)
		if err != nil {
			return err
		}
		s.names[at] = name
		return nil
	})
}

// Window keeps the points with from <= T <= to.
func Window(from, to unit.Temperature) Option { return Range(float64(from), float64(to)) }

// Range keeps the points with from <= x <= to.
func Range(from, to float64) Option {
	return optionFunc(func(s *settings) error {
		if !(from < to) {
			return fmt.Errorf("fit: window from %g to %g, want the lower end first", from, to)
		}
		s.from, s.to = from, to
		return nil
	})
}

// XUncertainty gives the standard uncertainties of x, one for each point. They
// are carried over with the slope of the model, u² = u(y)² + (dy/dx)² u(x)²
// (J. Orear, Am. J. Phys. 50, 912 (1982)).
func XUncertainty(ux []float64) Option {
	return optionFunc(func(s *settings) error { s.ux = ux; return nil })
}

// CommonUncertainty gives standard uncertainties of one error that moves all
// points together, one for each point. It may be repeated for several
// independent common errors.
func CommonUncertainty(u []float64) Option {
	return optionFunc(func(s *settings) error {
		e := uncertain.Common(fmt.Sprintf("common error %d of the data", len(s.common)+1), 1)
		s.common = append(s.common, commonError{u, e})
		return nil
	})
}

// Starts tries n starting points in all, the given one and random ones between
// the bounds (or within about a factor of e² of the start), and keeps the
// lowest minimum.
func Starts(n int, seed uint64) Option {
	return optionFunc(func(s *settings) error {
		if n < 1 {
			return fmt.Errorf("fit: %d starts, want at least 1", n)
		}
		s.starts, s.seed = n, seed
		return nil
	})
}

// Until asks stop at every step and ends the fit when it is true, keeping the
// best values so far, in place of the notebook's interrupt, which does the same
// where this option is not given.
func Until(stop func() bool) Option {
	return optionFunc(func(s *settings) error {
		if stop == nil {
			return fmt.Errorf("fit: Until: no function")
		}
		s.stop = stop
		return nil
	})
}
