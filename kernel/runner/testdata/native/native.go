// Package native is a small compiled package used to probe the interpreter.
package native

import (
	"errors"
	"fmt"
	"sort"
	"time"
)

const Avogadro = 6.02214076e23
const R float64 = 8.31446261815324
const Name = "native"

type Unit int

const (
	Joule Unit = iota
	Kelvin
)

func (u Unit) String() string { return [...]string{"J", "K"}[u] }

var Default = &Molecule{Name: "N2", Mass: 28.0134}
var ErrBad = errors.New("native: bad")
var Count int

type Renderer interface {
	Render() (mime string, data []byte)
}

type Model interface {
	Eval(x float64, p []float64) float64
	Grad(g []float64, x float64, p []float64)
	Names() []string
}

type Shape interface {
	Area() float64
	fmt.Stringer
}

type Molecule struct {
	Name  string
	Mass  float64
	Theta []float64
	F     func(float64) float64
	extra int
}

func New(name string, mass float64, theta ...float64) (*Molecule, error) {
	if mass <= 0 {
		return nil, fmt.Errorf("native.New %q: %w", name, ErrBad)
	}
	return &Molecule{Name: name, Mass: mass, Theta: theta}, nil
}

func (m *Molecule) Cv(t float64) float64 {
	s := 2.5
	for _, th := range m.Theta {
		s += th / t
	}
	return s
}
func (m Molecule) String() string { return fmt.Sprintf("Molecule(%s, %g)", m.Name, m.Mass) }

func Show(r Renderer) string { m, d := r.Render(); return m + ":" + string(d) }
func ShowAny(v any) string {
	if r, ok := v.(Renderer); ok {
		return "renderer " + Show(r)
	}
	if s, ok := v.(fmt.Stringer); ok {
		return "stringer " + s.String()
	}
	if e, ok := v.(error); ok {
		return "error " + e.Error()
	}
	return fmt.Sprintf("plain %T %v", v, v)
}
func UseModel(m Model, x float64, p []float64) (float64, []float64) {
	g := make([]float64, len(p))
	m.Grad(g, x, p)
	return m.Eval(x, p), g
}
func AreaOf(s Shape) string { return fmt.Sprintf("%s %.3f", s, s.Area()) }

func Integrate(f func(float64) float64, a, b float64, n int) float64 {
	h := (b - a) / float64(n)
	s := 0.5 * (f(a) + f(b))
	for i := 1; i < n; i++ {
		s += f(a + float64(i)*h)
	}
	return s * h
}
func Map(f func(float64) (float64, error), xs []float64) ([]float64, error) {
	r := make([]float64, len(xs))
	for i, x := range xs {
		v, err := f(x)
		if err != nil {
			return nil, fmt.Errorf("at %d: %w", i, err)
		}
		r[i] = v
	}
	return r, nil
}
func Minimize(f func(x []float64) float64, x0 []float64) []float64 {
	x := append([]float64(nil), x0...)
	for k := 0; k < 200; k++ {
		for i := range x {
			h := 1e-4
			x[i] += h
			fp := f(x)
			x[i] -= 2 * h
			fm := f(x)
			x[i] += h
			x[i] -= 0.1 * (fp - fm) / (2 * h)
		}
	}
	return x
}

type Option func(*Molecule)

func WithMass(m float64) Option { return func(x *Molecule) { x.Mass = m } }
func Build(name string, opts ...Option) *Molecule {
	m := &Molecule{Name: name}
	for _, o := range opts {
		o(m)
	}
	return m
}

type Number interface{ ~int | ~float64 }

func Sum[T Number](xs ...T) T {
	var s T
	for _, x := range xs {
		s += x
	}
	return s
}

type Pair[A, B any] struct {
	First  A
	Second B
}

func MakePair[A, B any](a A, b B) Pair[A, B] { return Pair[A, B]{a, b} }

type FloatPair = Pair[float64, float64]

func MakeFloatPair(a, b float64) FloatPair { return FloatPair{a, b} }

func Busy(d time.Duration) int {
	t := time.Now()
	n := 0
	for time.Since(t) < d {
		n++
	}
	return n
}
func SleepFor(d time.Duration) { time.Sleep(d) }
func SortBy(s sort.Interface)  { sort.Sort(s) }
func Panics(s string)          { panic(s) }
func Each(yield func(int) bool) {
	for i := 0; i < 5; i++ {
		if !yield(i) {
			return
		}
	}
}
func Seq(n int) func(yield func(int) bool) {
	return func(yield func(int) bool) {
		for i := 0; i < n; i++ {
			if !yield(i) {
				return
			}
		}
	}
}
func GoCall(f func())      { done := make(chan struct{}); go func() { defer close(done); f() }(); <-done }
func Wrap(err error) error { return fmt.Errorf("wrapped: %w", err) }
func IsBad(err error) bool { return errors.Is(err, ErrBad) }

type Grid struct {
	Rows, Cols int
	Data       [][]float64
}

func (g Grid) At(i, j int) float64 { return g.Data[i][j] }

type Base struct{ ID int }

func (b *Base) SetID(i int) { b.ID = i }
func (b Base) GetID() int   { return b.ID }

type hidden struct{ V int }

func (h *hidden) Get() int { return h.V }
func MakeHidden() *hidden  { return &hidden{7} }

// helpers used by lowered code
func Recovered(v any) any {
	if r, ok := v.(interface {
		Interface() any
		CanInterface() bool
	}); ok && r.CanInterface() {
		return r.Interface()
	}
	return v
}
func EqAny(a, b any) bool    { return a == b }
func Describe(v any) string  { return fmt.Sprintf("%T|%v", v, v) }
func Unwrap1(e error) any    { return e }
func ErrText(e error) string { return e.Error() }
func PanicAny(v any)         { panic(v) }
func As(err error, f func(error) bool) bool {
	for err != nil {
		if f(err) {
			return true
		}
		err = errors.Unwrap(err)
	}
	return false
}
