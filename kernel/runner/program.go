package runner

import (
	"context"
	"fmt"
	"slices"
	"strings"
	"time"

	"levelsum/kernel/cell"
	"levelsum/kernel/compile"
	"levelsum/kernel/engine"
)

// A program is what the compiler makes of many cells at once: they are split
// and checked in order on a scope that looks ahead, without being run, and the
// units of all go into one plugin, so that there is one link instead of one
// for each cell. The plugin is opened at once; nothing in it runs before its
// cell's turn comes, when the cell is checked on the session's scope as ever.
// What it needs is found under its unit's path, a hash of what is compiled. So
// the program cannot make a difference to what a cell does: if an earlier cell
// failed and with it a type or a variable is another than was foreseen, the
// unit is another one too, is not found, and is built by itself.
//
// A plugin and not an executable: the archives of the kit are compiled for
// plugins, and an executable that is linked from them crashes at its start.

// program compiles what cells will need.
func (r *Runner) program(cells []engine.Cell) *engine.Program {
	start := time.Now()
	p := &engine.Program{}
	defer func() { p.Took = time.Since(start) }()
	if r.kit == nil {
		p.Alone = r.noKit.Error()
		return p
	}
	units := r.foresee(cells, p)
	p.Packages = len(units)
	if len(units) == 0 {
		return p
	}
	t := r.built.hint("the cells are being compiled, all at once ...\n")
	defer t.Stop()
	if err := r.loadAll(units, p); err != nil {
		p.Alone = oneLine(cell.Unmark(err.Error()))
		p.Cells, p.Packages = 0, 0
	}
	return p
}

// foresee checks cells in order, as if each succeeded, and returns the units
// that they will need and that are not loaded yet.
func (r *Runner) foresee(cells []engine.Cell, p *engine.Program) []*cell.Unit {
	scope := r.scope.Clone()
	all := func(string) bool { return true }
	var units []*cell.Unit
	seen := map[string]bool{}
	for _, c := range cells {
		left := func(why string) { p.Left = append(p.Left, engine.Left{N: c.N, Why: why}) }
		plan, err := scope.Check(&cell.Source{N: c.N, Text: c.Source, ID: c.ID})
		if err != nil {
			// It will be refused whole and change nothing, unless an earlier
			// cell fails.
			left("it does not compile: " + oneLine(err.Error()))
			continue
		}
		if !r.interprets(plan) {
			u, err := plan.Compile(true)
			if err != nil {
				left("it is refused: " + oneLine(err.Error()))
				continue
			}
			if u != nil {
				scope.Adopt(plan, u)
				p.Cells++
				if r.plugins[u.Path] == nil && !seen[u.Path] {
					seen[u.Path] = true
					units = append(units, u)
				}
			}
		}
		scope.Commit(plan, all)
	}
	return units
}

// interprets tells whether a plan will be interpreted, as far as that is known
// before.
func (r *Runner) interprets(plan *cell.Plan) bool {
	if plan.Force || r.compileAll {
		return false
	}
	script, _ := plan.Interpret(likely{})
	return script != nil
}

// loadAll builds units as one plugin and opens it.
func (r *Runner) loadAll(units []*cell.Unit, p *engine.Program) error {
	ctx, cancel := context.WithCancel(context.Background())
	defer cancel()
	stops := r.stops()
	go func() {
		select {
		case <-stops:
			cancel()
		case <-ctx.Done():
		}
	}()
	pkgs := make([]compile.Package, len(units))
	for i, u := range units {
		pkgs[i] = unitPackage(u)
	}
	built, err := r.kit.Build(ctx, pkgs, pluginMain(units...))
	if err != nil {
		return err
	}
	p.Compiled, p.Linked = built.Compiled, built.Linked
	if err := r.open(built, units...); err != nil {
		return err
	}
	for _, u := range units {
		r.plugins[u.Path].cells = len(units)
	}
	return nil
}

// noteFailed notes that a cell has failed, if that was not foreseen.
func (r *Runner) noteFailed(n int) {
	if r.whole == nil || slices.ContainsFunc(r.whole.Left, func(l engine.Left) bool { return l.N == n }) {
		return
	}
	r.failed = append(r.failed, fmt.Sprintf("In[%d]", n))
}

// alone says why a cell that a program was to hold is built by itself, for the
// reply's metadata; empty if there is no program.
func (r *Runner) alone(n int) string {
	if r.whole == nil {
		return ""
	}
	if r.whole.Alone != "" {
		return r.whole.Alone
	}
	for _, l := range r.whole.Left {
		if l.N == n {
			return l.Why
		}
	}
	if len(r.failed) > 0 {
		return fmt.Sprintf("what it is made of is not what was foreseen, since %s failed", strings.Join(r.failed, ", "))
	}
	return "what it is made of is not what was foreseen"
}
