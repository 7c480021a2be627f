package runner

import (
	"context"
	"fmt"
	"plugin"
	"reflect"
	"strings"
	"sync"
	"time"

	"levelsum/kernel/cell"
	"levelsum/kernel/compile"
	"levelsum/kernel/engine"
	"levelsum/kernel/runner/guard"
)

// prepare makes what runs a checked cell, and says in which way it is run. A
// cell without anything to run has no job.
func (r *Runner) prepare(plan *cell.Plan, facts map[string]any) (job func(), how, why string, err error) {
	why = "a directive"
	if !plan.Force && !r.compileAll {
		var script *cell.Script
		if script, why = plan.Interpret(&r.interp); script != nil {
			if job, err = r.interp.prepare(plan.Source, script); err == nil {
				return job, "interpreted", "", nil
			}
			// What the interpreter does not take, the compiler does.
			why = err.Error()
		}
	}
	if r.kit == nil {
		return nil, "refused", why, fmt.Errorf("%s needs the compiled tier, which is not there: %v", why, r.noKit)
	}
	unit, err := plan.Compile(true)
	if err != nil {
		return nil, "refused", why, err
	}
	if unit == nil {
		return nil, "declared", why, nil
	}
	if _, loaded := r.plugins[unit.Path]; loaded {
		facts["again"] = true // compiled before, and as it was
	}
	offers, err := r.load(unit)
	if err != nil {
		return nil, "refused", why, err
	}
	if err := r.bind(unit, offers); err != nil {
		return nil, "refused", why, err
	}
	r.scope.Adopt(plan, unit)
	r.interp.add(unit, offers)
	run, _ := offers["run"].(func())
	return run, "compiled", why, nil
}

// manyPlugins is after how many compiled cells the reader is told what they
// take: 300 were measured at 820 MB resident, with 30 ms to open one more.
const manyPlugins = 300

// load builds and opens the plugin of a unit, once in a session.
func (r *Runner) load(u *cell.Unit) (map[string]any, error) {
	if o, ok := r.plugins[u.Path]; ok {
		return o, nil
	}
	built, err := r.built.get(u)
	if err != nil {
		return nil, err
	}
	p, err := plugin.Open(built.File)
	if err != nil {
		return nil, compile.Explain(err)
	}
	sym, err := p.Lookup("Offers")
	if err != nil {
		return nil, err
	}
	offers := *sym.(*map[string]any)
	r.plugins[u.Path] = offers
	if n := len(r.plugins); n%manyPlugins == 0 {
		r.send(engine.Event{Op: "warn", Text: fmt.Sprintf("note: this session has compiled %d cells, which cannot be unloaded and take about %d MB; restart the kernel and run kernel.Replay() to have your values in a fresh one\n", n, n*27/10)})
	}
	return offers, nil
}

// pluginMain is the main package of a unit's plugin: what it offers.
func pluginMain(u *cell.Unit) compile.Package {
	var b strings.Builder
	fmt.Fprintf(&b, "package main\n\nimport Ɒu %q\n\nvar Offers = map[string]any{\n", u.Path)
	if u.Run {
		b.WriteString("\t\"run\": Ɒu.Ɒrun,\n")
	}
	for _, l := range u.Slots {
		fmt.Fprintf(&b, "\t\"slot %s\": &Ɒu.%s,\n", l.ID, l.Var())
	}
	for _, s := range u.Symbols() {
		kind := "func"
		if s.Type {
			kind = "type"
		}
		fmt.Fprintf(&b, "\t\"%s %s\": %s,\n", kind, s.Name, s.Expr)
	}
	b.WriteString("}\n\nfunc main() {}\n")
	return compile.Package{Files: map[string][]byte{"main.go": []byte(b.String())}}
}

// builds keeps the builds that were started ahead.
type builds struct {
	r  *Runner
	mu sync.Mutex // guards m
	m  map[string]*build
}

type build struct {
	done   chan struct{}
	plugin *compile.Plugin
	err    error
}

func (b *builds) init(r *Runner) { b.r, b.m = r, map[string]*build{} }

// get builds a unit, or waits for the build that is under way.
func (b *builds) get(u *cell.Unit) (*compile.Plugin, error) {
	t := time.AfterFunc(2*time.Second, func() {
		_ = b.r.w.Send(engine.Event{Op: "hint", Name: "build", Text: "the cell is being compiled ...\n"})
	})
	defer t.Stop()
	bu := b.start(u)
	select {
	case <-bu.done:
		return bu.plugin, bu.err
	case <-b.r.stops():
		return nil, guard.Halted // the build goes on, for the next try
	}
}

func (b *builds) start(u *cell.Unit) *build {
	b.mu.Lock()
	defer b.mu.Unlock()
	if bu, ok := b.m[u.Path]; ok {
		return bu
	}
	bu := &build{done: make(chan struct{})}
	b.m[u.Path] = bu
	pkg := compile.Package{Path: u.Path, Files: map[string][]byte{"cell.go": []byte(u.Text)}}
	main := pluginMain(u)
	go func() {
		defer close(bu.done)
		bu.plugin, bu.err = b.r.kit.Build(context.Background(), []compile.Package{pkg}, main)
		if bu.err != nil {
			b.mu.Lock()
			delete(b.m, u.Path) // a full disk may have room later
			b.mu.Unlock()
		}
	}()
	return bu
}

// bind gives a unit the places of the session variables that it reaches.
func (r *Runner) bind(u *cell.Unit, offers map[string]any) error {
	for _, l := range u.Slots {
		p := reflect.ValueOf(offers["slot "+l.ID]) // **T
		if !p.IsValid() {
			return fmt.Errorf("the plugin lacks the variable %s", l.Name)
		}
		if err := r.slots.bind(l.ID, p); err != nil {
			return fmt.Errorf("%s: %w", l.Name, err)
		}
	}
	return nil
}
