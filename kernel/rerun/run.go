package rerun

import (
	"context"
	"errors"
	"fmt"
	"strings"
	"sync"
	"time"

	"levelsum/kernel/engine"
	"levelsum/kernel/notebook"
)

// A Session runs cells one after the other and keeps their values;
// [engine.Engine] is one.
type Session interface {
	Run(ctx context.Context, c engine.Cell, out engine.Output) engine.Outcome
	// Interrupt asks the running cell to end; the second call ends it.
	Interrupt()
	Close() error
}

// Options say how a document is run.
type Options struct {
	// Start begins the session in which the cells run.
	Start func(ctx context.Context) (Session, error)
	// Dir is the notebook's folder, which relative file names in cells mean.
	Dir string
	// KeepGoing goes on with the next cell after one that failed.
	KeepGoing bool
	// Limit ends the run when it has taken longer; 0 means no limit.
	Limit time.Duration
	// Set gives values to inputs, see [Setting].
	Set []Setting
	// Whole has the compiler do what it has to do for all cells before the
	// first runs, as one program, if the session can; see
	// [engine.Engine.Program].
	Whole bool
	// Compiled, if not nil, is called with what came of Whole.
	Compiled func(engine.Program)
	// Words are the options of the run as the command line spells them; they
	// are stored.
	Words []string
	// Step, if not nil, is called when a cell is over.
	Step func(Step)
	// Hint, if not nil, gets hints for the reader of the moment, see
	// [engine.Hinter]. They are not stored.
	Hint func(text string)
	// Progress, if not nil, gets the line that a running cell shows of its
	// progress, which takes the place of the one before; "" ends it. Lines of
	// progress are not stored.
	Progress func(text string)
}

// A Step says how one code cell ended.
type Step struct {
	Cell    int // place in the document, from 1, all kinds counted
	Count   int // the number of its run
	First   string
	Took    time.Duration
	How     string // "interpreted", "compiled", ...
	Alone   string // why it was not in the program of Options.Whole, though compiled
	Fault   *engine.Fault
	Allowed bool // the cell is tagged raises-exception: its fault is wanted
}

// A Report says how a run went.
type Report struct {
	Steps   []Step
	Program *engine.Program // of Options.Whole, nil without
	Inputs  []Input
	Results []Result
	// Failed counts the cells that failed and were not allowed to.
	Failed int
	// NotRun counts the code cells that were not reached.
	NotRun int
	// Stopped says why the run ended before the last cell, if not for a
	// failed cell: the time limit, an interrupt, the end of the engine.
	Stopped string
}

// OK says that every cell ran and none failed.
func (r *Report) OK() bool { return r.Failed == 0 && r.NotRun == 0 && r.Stopped == "" }

// grace is how long a cell has to end after it was asked to, before it is
// ended.
const grace = 5 * time.Second

// Run runs the code cells of d in order in a fresh session and replaces their
// outputs. When ctx is cancelled the running cell is interrupted and the run ends. Code cells that are not reached have no outputs afterwards: what a
// document shows after Run comes from this run only. The error is about the
// run as a whole (an input that does not exist, a session that does not
// start); a cell that failed is in the report.
func Run(ctx context.Context, d *notebook.Document, o Options) (*Report, error) {
	r := &Report{}
	var err error
	if r.Inputs, err = applySettings(d, o.Set); err != nil {
		return nil, err
	}
	var code []*notebook.Cell
	for _, c := range d.Cells() {
		if c.Kind() != notebook.Code {
			continue
		}
		c.SetExecutionCount(0)
		if err := c.SetOutputs(nil); err != nil {
			return nil, err
		}
		if strings.TrimSpace(c.Source()) != "" {
			code = append(code, c)
		}
	}
	if o.Limit > 0 {
		var cancel context.CancelFunc
		ctx, cancel = context.WithTimeout(ctx, o.Limit)
		defer cancel()
	}
	session, err := o.Start(ctx)
	if err != nil {
		return nil, err
	}
	defer session.Close()
	from := &Provenance{Options: o.Words}
	var interpreted, compiled, program []int
	rec := &recorder{places: map[string][]place{}, hint: o.Hint, progress: o.Progress}
	if o.Whole {
		r.Program = compileWhole(ctx, session, rec, code)
		if r.Program != nil && o.Compiled != nil {
			o.Compiled(*r.Program)
		}
	}
	for i, c := range code {
		if i+1 < len(code) {
			announce(session, i+2, code[i+1])
		}
		step := runCell(ctx, session, rec, i+1, c)
		if ctx.Err() != nil {
			r.Stopped = stopReason(ctx, o.Limit)
			if step.Fault == nil {
				step.Fault = &engine.Fault{Name: "interrupted"}
			}
			step.Fault.Message = r.Stopped
			step.Allowed = false
		}
		if step.Fault != nil {
			rec.add(c.N, notebook.Output{Kind: notebook.ErrorOutput, ErrorName: step.Fault.Name,
				ErrorValue: step.Fault.Message, Traceback: step.Fault.Trace})
		}
		c.SetExecutionCount(i + 1)
		from.takeOrigins(step.origins)
		switch step.How {
		case "interpreted":
			interpreted = append(interpreted, i+1)
		case "compiled":
			compiled = append(compiled, i+1)
			if step.program {
				program = append(program, i+1)
			}
		}
		r.Steps = append(r.Steps, step.Step)
		if o.Step != nil {
			o.Step(step.Step)
		}
		if step.Fault != nil && !step.Allowed {
			r.Failed++
		}
		if step.restarted && r.Stopped == "" && i+1 < len(code) {
			r.Stopped = "the engine ended with the cell, and the values of earlier cells with it"
		}
		if r.Stopped != "" || r.Failed > 0 && !o.KeepGoing {
			r.NotRun = len(code) - i - 1
			break
		}
	}
	from.takeState(context.WithoutCancel(ctx), session)
	from.Interpreted, from.Compiled, from.Program = cellNumbers(interpreted), cellNumbers(compiled), cellNumbers(program)
	outputs := rec.finish()
	for _, c := range code {
		if err := c.SetOutputs(outputs[c.N]); err != nil {
			return nil, fmt.Errorf("cell %d: %w", c.N, err)
		}
	}
	if err := from.finish(d, o.Dir); err != nil {
		return nil, err
	}
	if err := from.store(d); err != nil {
		return nil, err
	}
	if r.Results, err = Results(d); err != nil {
		return nil, err
	}
	return r, nil
}

func stopReason(ctx context.Context, limit time.Duration) string {
	if errors.Is(ctx.Err(), context.DeadlineExceeded) {
		return fmt.Sprintf("the time limit of the run, %v, was reached", limit)
	}
	return "the run was interrupted"
}

// compileWhole has a session that can do it compile all cells as one program.
func compileWhole(ctx context.Context, s Session, rec *recorder, code []*notebook.Cell) *engine.Program {
	w, ok := s.(interface {
		Program(context.Context, []engine.Cell, engine.Output) (engine.Program, error)
	})
	if !ok {
		return nil
	}
	cells := make([]engine.Cell, len(code))
	for i, c := range code {
		cells[i] = engineCell(i+1, c)
	}
	p, err := w.Program(ctx, cells, rec.cell(0)) // what it hints at is shown, and nothing stored
	switch {
	case ctx.Err() != nil: // the run is over
		return nil
	case err != nil:
		p.Alone = err.Error()
	}
	return &p
}

// announce tells a session that cares of the cell that comes next.
func announce(s Session, n int, c *notebook.Cell) {
	if a, ok := s.(interface{ Announce(engine.Cell) }); ok {
		a.Announce(engineCell(n, c))
	}
}

func engineCell(n int, c *notebook.Cell) engine.Cell {
	return engine.Cell{N: n, Source: c.Source(), ID: c.ID()}
}

type cellStep struct {
	Step
	program   bool // compiled together with others
	restarted bool
	origins   any
}

func runCell(ctx context.Context, s Session, rec *recorder, n int, c *notebook.Cell) cellStep {
	step := cellStep{Step: Step{Cell: c.N, Count: n, First: firstLine(c.Source()), Allowed: c.HasTag("raises-exception")}}
	out := rec.cell(c.N)
	done := make(chan struct{})
	var wait sync.WaitGroup
	wait.Go(func() {
		select {
		case <-done:
			return
		case <-ctx.Done():
		}
		s.Interrupt()
		t := time.NewTimer(grace)
		defer t.Stop()
		select {
		case <-done:
		case <-t.C:
			s.Interrupt()
		}
	})
	start := time.Now()
	// The cell is ended by Interrupt, which leaves the session whole, not by
	// the context.
	o := s.Run(context.WithoutCancel(ctx), engineCell(n, c), out)
	step.Took = time.Since(start)
	rec.end(c.N)
	close(done)
	wait.Wait()
	step.Fault, step.restarted, step.origins = o.Fault, o.Restarted, o.How["origins"]
	if how, ok := o.How["tier"].(string); ok {
		step.How = how
	}
	step.Alone, _ = o.How["alone"].(string)
	step.program = o.How["program"] != nil
	if o.Value != nil {
		rec.add(c.N, notebook.Output{Kind: notebook.ExecuteResult, Count: n, Data: o.Value.Data, Metadata: unmarked(o.Value.Metadata)})
	}
	return step
}

// firstLine returns the first line of a cell that is no comment.
func firstLine(s string) string {
	for l := range strings.Lines(s) {
		if l = strings.TrimSpace(l); l != "" && !strings.HasPrefix(l, "//") {
			return l
		}
	}
	return ""
}
