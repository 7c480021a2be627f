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
	if r.compileAll {
		why = "a run with every cell compiled"
	} else if !plan.Force {
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
	l, err := r.load(unit)
	if err != nil {
		return nil, "refused", why, err
	}
	if err := r.bind(unit, l.offers); err != nil {
		return nil, "refused", why, err
	}
	if l.cells > 0 {
		facts["program"] = l.cells
	}
	switch {
	case l.used:
		facts["again"] = true // compiled before, and as it was
	case l.cells == 0:
		if alone := r.alone(plan.Source.N); alone != "" {
			facts["alone"] = alone
		}
	}
	l.used = true
	r.scope.Adopt(plan, unit)
	r.interp.add(unit, l.offers)
	run, _ := l.offers["run"].(func())
	return run, "compiled", why, nil
}

// A loaded is a unit whose plugin has been opened.
type loaded struct {
	offers map[string]any // what the plugin offers of it, see pluginMain
	cells  int            // of a program, how many units it holds; else 0
	used   bool           // a cell has run it
}

// manyPlugins is after how many opened plugins the reader is told what they
// take, and perPlugin is that, in kB: TestManyDeclaringCells measures it.
const (
	manyPlugins = 300
	perPlugin   = 3500
)

// load builds and opens the plugin of a unit, once in a session.
func (r *Runner) load(u *cell.Unit) (*loaded, error) {
	if l, ok := r.plugins[u.Path]; ok {
		return l, nil
	}
	built, err := r.built.get(u)
	if err != nil {
		return nil, err
	}
	if err := r.open(built, u); err != nil {
		return nil, err
	}
	return r.plugins[u.Path], nil
}

// open opens a plugin that holds units.
func (r *Runner) open(built *compile.Plugin, units ...*cell.Unit) error {
	p, err := plugin.Open(built.File)
	if err != nil {
		return compile.Explain(err)
	}
	sym, err := p.Lookup("Offers")
	if err != nil {
		return err
	}
	offers := *sym.(*map[string]map[string]any)
	for _, u := range units {
		r.plugins[u.Path] = &loaded{offers: offers[u.Path]}
		r.built.loaded(u)
	}
	r.opened++
	if n := r.opened; n%manyPlugins == 0 {
		r.send(engine.Event{Op: "warn", Text: fmt.Sprintf("note: this session has compiled %d cells one by one, which cannot be unloaded and take about %d MB; "+
			"restart the kernel and run kernel.Replay(): it compiles them as one program, which takes little\n", n, n*perPlugin/1000)})
	}
	return nil
}

// sayWithoutKit says once, with the first cell, that cells are not compiled here
// and what is missing.
func (r *Runner) sayWithoutKit() {
	if r.noKit == nil || r.saidNoKit {
		return
	}
	r.saidNoKit = true
	r.send(engine.Event{Op: "warn", Text: fmt.Sprintf("note: only simple statements run here, no loops, functions or types: %v\n", r.noKit)})
}

// unitPackage is the package of a unit.
func unitPackage(u *cell.Unit) compile.Package {
	return compile.Package{Path: u.Path, Files: map[string][]byte{"cell.go": []byte(u.Text)}}
}

// pluginMain is the main package of a plugin: what it offers, by unit.
func pluginMain(units ...*cell.Unit) compile.Package {
	var b strings.Builder
	b.WriteString("package main\n\nimport (\n")
	for i, u := range units {
		fmt.Fprintf(&b, "\tⱰu%d %q\n", i, u.Path)
	}
	b.WriteString(")\n\nvar Offers = map[string]map[string]any{\n")
	for i, u := range units {
		name := fmt.Sprintf("Ɒu%d.", i)
		fmt.Fprintf(&b, "%q: {\n", u.Path)
		if u.Run {
			fmt.Fprintf(&b, "\t\"run\": %sⱰrun,\n", name)
		}
		for _, l := range u.Slots {
			fmt.Fprintf(&b, "\t\"slot %s\": &%s%s,\n", l.ID, name, l.Var())
		}
		for _, s := range u.Symbols() {
			kind, expr := "func", name+s.Emitted
			if s.Type {
				kind, expr = "type", "(*"+expr+")(nil)"
			}
			fmt.Fprintf(&b, "\t\"%s %s\": %s,\n", kind, s.Name, expr)
		}
		b.WriteString("},\n")
	}
	b.WriteString("}\n\nfunc main() {}\n")
	return compile.Package{Files: map[string][]byte{"main.go": []byte(b.String())}}
}

// builds keeps the builds that were started ahead.
type builds struct {
	r    *Runner
	mu   sync.Mutex // guards what follows
	m    map[string]*build
	here map[string]bool // units that have been loaded, by path
}

type build struct {
	done   chan struct{}
	plugin *compile.Plugin
	err    error
}

func (b *builds) init(r *Runner) {
	b.r, b.m, b.here = r, map[string]*build{}, map[string]bool{}
}

// ahead builds a unit unless it has been loaded.
func (b *builds) ahead(u *cell.Unit) {
	b.mu.Lock()
	here := b.here[u.Path]
	b.mu.Unlock()
	if !here {
		<-b.start(u).done
	}
}

// loaded says that a unit need not be built again.
func (b *builds) loaded(u *cell.Unit) {
	b.mu.Lock()
	defer b.mu.Unlock()
	b.here[u.Path] = true
}

// get builds a unit, or waits for the build that is under way.
func (b *builds) get(u *cell.Unit) (*compile.Plugin, error) {
	t := b.hint("the cell is being compiled ...\n")
	defer t.Stop()
	bu := b.start(u)
	select {
	case <-bu.done:
		return bu.plugin, bu.err
	case <-b.r.stops():
		return nil, guard.Halted // the build goes on, for the next try
	}
}

// hint tells the reader in two seconds that something is being compiled,
// unless the timer is stopped before.
func (b *builds) hint(text string) *time.Timer {
	return time.AfterFunc(2*time.Second, func() {
		_ = b.r.w.Send(engine.Event{Op: "hint", Name: "build", Text: text})
	})
}

func (b *builds) start(u *cell.Unit) *build {
	b.mu.Lock()
	defer b.mu.Unlock()
	if bu, ok := b.m[u.Path]; ok {
		return bu
	}
	bu := &build{done: make(chan struct{})}
	b.m[u.Path] = bu
	pkg, main := unitPackage(u), pluginMain(u)
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
