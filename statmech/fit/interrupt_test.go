package fit

import (
	"strings"
	"sync/atomic"
	"testing"

	"levelsum/display"
)

// stopper is a sink whose reader interrupts after some questions.
type stopper struct {
	display.Sink
	after, asked atomic.Int64
}

func (s *stopper) Interrupted() bool               { return s.asked.Add(1) > s.after.Load() }
func (s *stopper) Show(display.View, string, bool) {}

// TestInterrupt: an interrupted fit and bootstrap keep what they have and say
// so.
func TestInterrupt(t *testing.T) {
	ts, cs, us := syntheticSolid()
	run := newTable(t, ts, cs, us)
	var m debyeEinstein
	res := m.fit(t, run, AbsoluteSigma)
	s := &stopper{Sink: display.Current()}
	display.SetSink(s)
	defer display.SetSink(nil)
	s.after.Store(300)
	b, err := res.Bootstrap(2000, 1)
	if err == nil || !strings.Contains(err.Error(), "interrupted after") || b == nil || !b.Stopped || len(b.Values) < 2 || len(b.Values) > 300 {
		t.Errorf("%v", err)
	}
	s.asked.Store(0)
	s.after.Store(2)
	a := 1.0
	early, err := Curve(func(x float64) float64 { return a * a * a * x }, []float64{1, 2, 3}, []float64{80, 160, 241}, nil, Vary(&a), ScaledSigma)
	if err == nil || early == nil || early.Stop != Interrupted || early.Withheld == "" || a == 1 {
		t.Errorf("%v, %v, a = %g", err, early, a)
	}
}
