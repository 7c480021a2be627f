package fit

import (
	"fmt"
	"math"
	"math/rand/v2"
	"reflect"
	"runtime"
	"sort"
	"sync"

	"levelsum/display"
	"levelsum/statmech/uncertain"
)

// A Bootstrap holds refits to data that were drawn again.
type Bootstrap struct {
	Seed     uint64
	Values   [][]float64 // Values[k][j]: parameter j of refit k, in the order of Vary
	Failed   int         // refits that did not converge; they are left out
	Stopped  bool        // interrupted; what was done is kept
	Serial   bool        // the model could not be copied, so one refit ran after the other
	names    []string
	original []float64
}

// Bootstrap refits n times to data drawn from the fitted curve: with the given
// standard uncertainties for [AbsoluteSigma], with residuals drawn from those of
// the fit, scaled for the degrees of freedom, otherwise. It tests the standard
// uncertainties of the fit where the model is far from linear. Common errors
// are not drawn. The same seed gives the same refits on any number of
// processors.
//
// Reference: B. Efron, R. J. Tibshirani, An Introduction to the Bootstrap,
// Chapman & Hall (1993), 9.
func (r *Result) Bootstrap(n int, seed uint64) (*Bootstrap, error) {
	if n < 2 {
		return nil, fmt.Errorf("fit: Bootstrap: %d refits, want at least 2", n)
	}
	if r.Withheld != "" {
		return nil, fmt.Errorf("fit: Bootstrap: the fit has no standard uncertainties: %s", r.Withheld)
	}
	display.SeedUsed(fmt.Sprintf("fit.Bootstrap, %d refits", n), seed)
	b := &Bootstrap{Seed: seed, original: clone(r.p)}
	for _, p := range r.reg.free {
		b.names = append(b.names, p.name)
	}
	r.mu.Lock()
	defer r.mu.Unlock()
	defer r.reg.set(r.current())
	r.reg.set(r.p)
	workers := min(runtime.GOMAXPROCS(0), n)
	regs := make([]*regression, 0, workers)
	for range workers {
		c, ok := r.reg.copy()
		if !ok {
			break
		}
		regs = append(regs, c)
	}
	if len(regs) == 0 {
		regs, b.Serial = append(regs, r.reg.shallow()), true
	}
	values, tried := make([][]float64, n), make([]bool, n)
	progress := display.NewProgress("bootstrap", n)
	defer progress.Done()
	var wg sync.WaitGroup
	panics := make(chan any, len(regs))
	for w, reg := range regs {
		wg.Go(func() {
			defer func() {
				if e := recover(); e != nil {
					panics <- e
				}
			}()
			for k := w; k < n; k += len(regs) {
				if reg.stop() {
					return
				}
				tried[k] = true
				progress.Step(1)
				r.redraw(reg, rand.New(rand.NewPCG(seed, uint64(k))))
				if m := reg.solve(r.p); m.stop == Converged {
					values[k] = m.p
				}
			}
		})
	}
	wg.Wait()
	select {
	case e := <-panics:
		panic(e)
	default:
	}
	for k, v := range values {
		switch {
		case v != nil:
			b.Values = append(b.Values, v)
		case tried[k]:
			b.Failed++
		default:
			b.Stopped = true
		}
	}
	if len(b.Values) < 2 {
		return nil, fmt.Errorf("fit: Bootstrap: %d of %d refits failed", b.Failed, n)
	}
	if b.Stopped {
		return b, fmt.Errorf("fit: Bootstrap: interrupted after %d of %d refits", len(b.Values)+b.Failed, n)
	}
	return b, nil
}

// redraw puts new data into reg.
func (r *Result) redraw(reg *regression, random *rand.Rand) {
	m := len(r.Fitted)
	scale := math.Sqrt(float64(m) / float64(max(1, r.Freedom)))
	for i, f := range r.Fitted {
		z := 0.0
		if r.Sigma == AbsoluteSigma {
			z = random.NormFloat64()
		} else {
			z = scale * r.Residual[random.IntN(m)]
		}
		reg.y[i] = f + z*r.U[i]
	}
}

// shallow returns a regression with data of its own on the same model.
func (r *regression) shallow() *regression {
	c := *r
	c.y, c.weight, c.scale, c.last = clone(r.y), clone(r.weight), clone(r.scale), nil
	return &c
}

// copy returns a regression with data and a model of its own, or false if the
// model holds what cannot be copied (functions, channels), or a parameter lies
// outside it.
func (r *regression) copy() (*regression, bool) {
	th, ok := r.model.(*thermal)
	if !ok || len(r.ties) > 0 {
		return nil, false
	}
	cp := &copier{seen: map[uintptr]reflect.Value{}, at: map[*float64]*float64{}}
	for _, p := range r.free {
		cp.at[p.at] = nil
	}
	v, ok := cp.value(reflect.ValueOf(th.source), 0)
	if !ok {
		return nil, false
	}
	m, err := newThermal(v.Interface())
	if err != nil {
		return nil, false
	}
	c := r.shallow()
	set := *r.settings
	set.free = make([]*parameter, len(r.free))
	for j, p := range r.free {
		to := cp.at[p.at]
		if to == nil {
			return nil, false
		}
		q := *p
		q.at = to
		set.free[j] = &q
	}
	c.settings, c.model = &set, m
	return c, true
}

// copier copies a model with everything its exported fields point to, and
// notes where the parameters went.
type copier struct {
	seen map[uintptr]reflect.Value
	at   map[*float64]*float64
}

func (c *copier) value(v reflect.Value, depth int) (reflect.Value, bool) {
	if depth > 32 {
		return v, false
	}
	switch v.Kind() {
	case reflect.Func, reflect.Chan, reflect.UnsafePointer, reflect.Map:
		return v, v.IsZero()
	case reflect.Interface:
		if v.IsNil() {
			return v, true
		}
		e, ok := c.value(v.Elem(), depth+1)
		if !ok {
			return v, false
		}
		out := reflect.New(v.Type()).Elem()
		out.Set(e)
		return out, true
	case reflect.Pointer:
		if v.IsNil() {
			return v, true
		}
		if to, ok := c.seen[v.Pointer()]; ok && to.Type() == v.Type() {
			return to, true
		}
		out := reflect.New(v.Type().Elem())
		c.seen[v.Pointer()] = out
		return out, c.into(out.Elem(), v.Elem(), depth+1)
	case reflect.Slice:
		if v.IsNil() {
			return v, true
		}
		out := reflect.MakeSlice(v.Type(), v.Len(), v.Len())
		for i := range v.Len() {
			if !c.into(out.Index(i), v.Index(i), depth+1) {
				return v, false
			}
		}
		return out, true
	case reflect.Struct, reflect.Array:
		out := reflect.New(v.Type()).Elem()
		return out, c.into(out, v, depth+1)
	}
	return v, true
}

// into copies v to the place dst.
func (c *copier) into(dst, v reflect.Value, depth int) bool {
	if v.Kind() == reflect.Float64 && v.CanAddr() && dst.CanAddr() {
		p := v.Addr().Convert(reflect.TypeFor[*float64]()).Interface().(*float64)
		if _, ok := c.at[p]; ok {
			c.at[p] = dst.Addr().Convert(reflect.TypeFor[*float64]()).Interface().(*float64)
		}
	}
	switch v.Kind() {
	case reflect.Struct:
		dst.Set(v) // unexported fields as they are
		for i := range v.NumField() {
			f := v.Type().Field(i)
			if !f.IsExported() {
				if holdsReferences(f.Type, 0) && !v.Field(i).IsZero() {
					return false
				}
				continue
			}
			if !c.into(dst.Field(i), v.Field(i), depth+1) {
				return false
			}
		}
		return true
	case reflect.Array:
		for i := range v.Len() {
			if !c.into(dst.Index(i), v.Index(i), depth+1) {
				return false
			}
		}
		return true
	}
	e, ok := c.value(v, depth+1)
	if ok {
		dst.Set(e)
	}
	return ok
}

// holdsReferences reports whether a value of the type may share memory.
func holdsReferences(t reflect.Type, depth int) bool {
	switch t.Kind() {
	case reflect.Struct:
		for i := range t.NumField() {
			if depth > 8 || holdsReferences(t.Field(i).Type, depth+1) {
				return true
			}
		}
		return false
	case reflect.Array:
		return holdsReferences(t.Elem(), depth+1)
	case reflect.Pointer, reflect.Slice, reflect.Map, reflect.Interface, reflect.Func, reflect.Chan, reflect.UnsafePointer:
		return true
	}
	return false
}

// StandardDeviation returns the standard deviation of parameter j over the
// refits.
func (b *Bootstrap) StandardDeviation(j int) float64 {
	c := b.Covariance()
	return math.Sqrt(c[j][j])
}

// Covariance returns the covariance matrix of the parameters over the refits.
func (b *Bootstrap) Covariance() [][]float64 {
	n := len(b.original)
	mean := make([]float64, n)
	for _, v := range b.Values {
		for j := range mean {
			mean[j] += v[j] / float64(len(b.Values))
		}
	}
	c := square(n)
	for _, v := range b.Values {
		for i := range n {
			for j := range n {
				c[i][j] += (v[i] - mean[i]) * (v[j] - mean[j]) / float64(len(b.Values)-1)
			}
		}
	}
	return c
}

// Interval returns the ends of the symmetric percentile interval of parameter
// j for probability p.
func (b *Bootstrap) Interval(j int, p float64) (lo, hi float64) {
	x := make([]float64, len(b.Values))
	for k, v := range b.Values {
		x[k] = v[j]
	}
	sort.Float64s(x)
	n := float64(len(x))
	at := func(q float64) float64 {
		i := q*n - 0.5
		k := max(0, min(len(x)-2, int(math.Floor(i))))
		f := max(0, min(1, i-float64(k)))
		return x[k] + f*(x[k+1]-x[k])
	}
	return at((1 - p) / 2), at((1 + p) / 2)
}

// Parameters returns the values of the fit with the covariance of the refits.
func (b *Bootstrap) Parameters() ([]uncertain.Quantity, error) {
	qs, err := uncertain.Correlated(b.original, b.Covariance())
	if err != nil {
		return nil, fmt.Errorf("fit: Bootstrap: %w", err)
	}
	for j := range qs {
		qs[j] = qs[j].Named(b.names[j])
	}
	return qs, nil
}
