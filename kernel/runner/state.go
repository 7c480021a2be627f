package runner

import (
	"fmt"
	"time"

	"levelsum/display"
	"levelsum/kernel/cell"
	"levelsum/kernel/runner/guard"
)

// state lists facts about the session for the parent.
func (r *Runner) state() map[string]any {
	facts := map[string]any{"names": r.scope.Names(), "goroutines": goroutines(), "stale": r.stale(), "about": r.origin.facts()}
	if r.noKit != nil {
		facts["compiled"] = r.noKit.Error()
	}
	return facts
}

func goroutines() []string {
	var out []string
	for _, g := range guard.Goroutines() {
		line := fmt.Sprintf("one of In[%d]", g.Cell)
		if d := time.Since(g.Since); d >= time.Minute {
			line += fmt.Sprintf(", for %s", d.Round(time.Minute))
		}
		out = append(out, line)
	}
	return out
}

func (r *Runner) stale() []string { return staleLines(r.scope.Stale()) }

func staleLines(list []cell.Stale) []string {
	var out []string
	for _, s := range list {
		out = append(out, fmt.Sprintf("%s of In[%d]: %s", s.Name, s.Cell, s.Why))
	}
	return out
}

// Session shows the state of the session to the reader, for display.Session.
func (s sink) Session() display.View {
	text := "variables and declarations:"
	for _, n := range s.r.scope.Names() {
		text += " " + n
	}
	list := func(title string, lines []string) {
		if len(lines) == 0 {
			text += "\n" + title + ": none"
			return
		}
		text += "\n" + title + ":"
		for _, l := range lines {
			text += "\n    " + l
		}
	}
	list("values older than what they were made of", s.r.stale())
	list("goroutines that cells have started and that live", goroutines())
	return display.Text(cellText(text))
}
