package uncertain

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

func (s *stopper) Interrupted() bool { return s.asked.Add(1) > s.after.Load() }

// TestInterrupt: an interrupted simulation keeps its draws and says that they
// are not enough.
func TestInterrupt(t *testing.T) {
	s := &stopper{Sink: display.Current()}
	s.after.Store(50)
	display.SetSink(s)
	defer display.SetSink(nil)
	sim, err := MonteCarlo(Measured(1, 0.1), Draws(1000000))
	if err != nil {
		t.Fatal(err)
	}
	if sim.Stable || sim.Draws > 52*blockSize || sim.Draws < 40*blockSize || !strings.Contains(strings.Join(sim.Warnings, ""), "not stable") {
		t.Errorf("%d draws, stable %v, %q", sim.Draws, sim.Stable, sim.Warnings)
	}
	within(t, "u", sim.U, 0.1, 0.003)
	for _, v := range sim.Values() {
		if v == 0 {
			t.Fatal("a block that was not drawn is counted")
		}
	}
}
