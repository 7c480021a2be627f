package runner_test

import (
	"context"
	"testing"

	"levelsum/kernel/engine"
)

// An interrupt that comes while a cell is checked or compiled is not lost: the
// child would have to be ended, with all values.
func TestInterruptBeforeTheCellRuns(t *testing.T) {
	e := start(t)
	if out := e.Run(t.Context(), engine.Cell{N: 1, Source: "x := 41"}, &capture{}); out.Fault != nil {
		t.Fatal(out.Fault)
	}
	ctx, cancel := context.WithCancel(t.Context())
	cancel() // Run interrupts as soon as it has sent the cell
	out := e.Run(ctx, engine.Cell{N: 2, Source: "for { }"}, &capture{})
	if out.Fault == nil || out.Fault.Name != "interrupted" || out.Restarted {
		t.Errorf("outcome %+v of fault %v, want interrupted", out, out.Fault)
	}
	out = e.Run(t.Context(), engine.Cell{N: 3, Source: "x + 1"}, &capture{})
	if out.Fault != nil || out.Value == nil || out.Value.Data["text/plain"] != "42" {
		t.Errorf("after the interrupt x + 1 gives %+v of fault %v, want 42", out.Value, out.Fault)
	}
}
