package runner

import (
	"errors"
	"fmt"
	"strings"

	"levelsum/display"
	"levelsum/kernel/cell"
	"levelsum/kernel/compile"
	"levelsum/kernel/engine"
	"levelsum/kernel/runner/guard"
)

// run checks and runs one cell.
func (r *Runner) run(c engine.Cell) engine.Outcome {
	out := engine.Outcome{How: map[string]any{}}
	src := &cell.Source{N: c.N, Text: c.Source, ID: c.ID}
	plan, err := r.scope.Check(src)
	if err != nil {
		out.Fault = compileFault(err)
		return out
	}
	for _, w := range plan.Warnings {
		out.Notes = append(out.Notes, strings.Join(w.Lines(), "\n"))
	}
	out.Notes = append(out.Notes, plan.Dropped...)
	for _, n := range out.Notes {
		r.send(engine.Event{Op: "warn", Text: "warning: " + n + "\n"})
	}
	r.sayWithoutKit()
	r.origin.setStale(staleLines(r.scope.StaleIn(plan)))
	guard.Reset()
	guard.SetCell(c.N)
	r.typed.forget()
	standardFiles(false)
	nameTag(src)
	job, how, why, err := r.prepare(plan, out.How)
	out.How["tier"] = how
	r.origin.ran(c.N, how)
	if why != "" {
		out.How["why"] = why
	}
	if err != nil {
		out.Fault = prepareFault(err)
		return out
	}
	r.buildAhead(plan)
	reached, resultLine := -1, plan.ResultLine()
	if job != nil {
		reached, out.Fault = r.goroutine(job, src, plan)
	}
	if o := r.origin.fresh(); len(o) > 0 {
		out.How["origins"] = o
	}
	if lost := r.scope.Commit(plan, func(name string) bool { return out.Fault == nil || plan.Sets(name, reached) }); len(lost) > 0 {
		n := strings.Join(lost, ", ") + " cannot be used: what it needs was not set, since the cell failed"
		out.Notes = append(out.Notes, n)
		r.send(engine.Event{Op: "warn", Text: "warning: " + n + "\n"})
	}
	values, shown := guard.Shown()
	if out.Fault != nil {
		return out
	}
	if text, ok := plan.ConstantText(); ok {
		v := display.Text(text)
		out.Value = &v
	} else if shown {
		if err := trailingError(plan, values); err != nil {
			out.Fault = faultOf(guard.UnreadError{Err: err}, lineOf(src, resultLine), src)
			return out
		}
		if out.Fault = refusal(values); out.Fault != nil {
			return out
		}
		if v, ok := viewOf(plan.Types(), values); ok {
			w := r.origin.marked(wireView(v))
			out.Value = &w
		}
	}
	if len(c.Asks) > 0 {
		out.Answers = map[string]engine.Answer{}
		for name, expr := range c.Asks {
			a := r.run(engine.Cell{N: c.N, Source: expr})
			ans := engine.Answer{Fault: a.Fault, View: display.Text("")}
			if a.Value != nil {
				ans.View = *a.Value
			}
			out.Answers[name] = ans
		}
	}
	return out
}

// trailingError is a non-nil error that a call as the cell's last expression
// returns behind other results.
func trailingError(plan *cell.Plan, values []any) error {
	if len(values) < 2 {
		return nil
	}
	err, _ := values[len(values)-1].(error)
	return err
}

// goroutine runs a job to its end on a goroutine of its own.
func (r *Runner) goroutine(job func(), src *cell.Source, plan *cell.Plan) (reached int, fault *engine.Fault) {
	r.mu.Lock()
	if r.isStopped() {
		r.mu.Unlock()
		return -1, faultOf(guard.Halted, nil, src)
	}
	r.running, r.async = true, nil
	r.mu.Unlock()
	stop := r.watchWait()
	done := make(chan *engine.Fault, 1)
	guard.At = -1
	go func() {
		returned := false
		defer func() {
			v := recover()
			switch {
			case v != nil:
				frames := userFrames(1)
				if sp, ok := v.(stepPanic); ok {
					v, frames = sp.value, sp.frames
				}
				if u, ok := v.(guard.UnreadError); ok {
					// The place is where the error came up, not where it was found unread.
					frames = lineOf(src, plan.ErrorLine(u.Name, u.At))
				}
				done <- faultOf(v, frames, src)
			case !returned:
				done <- faultOf("the cell called runtime.Goexit", nil, src)
			default:
				done <- nil
			}
		}()
		job()
		returned = true
	}()
	fault = <-done
	close(stop)
	r.mu.Lock()
	r.running = false
	async, stopped := r.async, r.isStopped()
	r.mu.Unlock()
	if stopped {
		// A library that is told to end returns what it has, or an error.
		fault = faultOf(guard.Halted, nil, src)
	}
	if len(async) > 0 && (fault == nil || fault.Name == "interrupted") {
		msg := "in a goroutine of the cell: " + async[0]
		fault = &engine.Fault{Name: "panic", Message: msg, Trace: []string{"panic: " + msg}}
	}
	return guard.At, fault
}

func compileFault(err error) *engine.Fault {
	f := &engine.Fault{Name: "compile error", Message: oneLine(err.Error())}
	var ds cell.Diagnostics
	if errors.As(err, &ds) {
		for _, d := range ds {
			f.Trace = append(f.Trace, d.Lines()...)
		}
	} else {
		f.Trace = []string{f.Message}
	}
	return f
}

// prepareFault says why a checked cell cannot be run.
func prepareFault(err error) *engine.Fault {
	if errors.Is(err, guard.Halted) {
		return faultOf(guard.Halted, nil, nil)
	}
	var ds cell.Diagnostics
	if errors.As(err, &ds) {
		f := compileFault(err)
		f.Name = "refused"
		return f
	}
	f := &engine.Fault{Name: "refused", Message: oneLine(err.Error())}
	var se *compile.SourceError
	if errors.As(err, &se) {
		f.Name = "refused"
		f.Message = "the Go compiler refuses what the checker passed; this is a defect of levelsum, please report the cell: " + cell.Unmark(oneLine(se.Error()))
	}
	f.Trace = []string{f.Name + ": " + f.Message}
	return f
}

// viewOf makes the view of a cell's last value or values.
func viewOf(types []string, values []any) (display.View, bool) {
	if len(values) == 1 {
		return oneView(types, 0, values[0]), true
	}
	var parts []string
	for i, v := range values {
		view := oneView(types, i, v)
		parts = append(parts, fmt.Sprint(view.Data["text/plain"]))
	}
	return display.Text(strings.Join(parts, "\n")), len(parts) > 0
}

// oneView shows a value; its static type helps where the value alone says
// little.
func oneView(types []string, i int, v any) display.View {
	t := ""
	if i < len(types) {
		t = types[i]
	}
	switch {
	case v == nil && t != "" && t != "untyped nil":
		return display.Text("nil (" + t + ")")
	case v == nil:
		return display.Text("nil")
	case strings.HasPrefix(t, "func("):
		return display.Text(t)
	}
	return display.ViewOf(v)
}
