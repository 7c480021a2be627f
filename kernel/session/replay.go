package session

import (
	"context"
	"fmt"
	"go/ast"
	"go/parser"
	"strings"

	"levelsum/display"
	"levelsum/kernel/engine"
)

// The calls that a cell can make to the session itself. The cell has to be
// nothing but the call; the package kernel exists nowhere else.
const (
	replayCall  = "kernel.Replay()"
	journalCall = "kernel.Journal()"
)

// ownCell returns what answers source if it is a call to the session.
func ownCell(source string) func(*Session, *output) engine.Outcome {
	if len(source) > 200 || !strings.Contains(source, "kernel.") {
		return nil
	}
	e, err := parser.ParseExpr(strings.TrimRight(strings.TrimSpace(source), ";"))
	if err != nil {
		return nil
	}
	call, ok := e.(*ast.CallExpr)
	if !ok || len(call.Args) > 0 {
		return nil
	}
	name, ok := call.Fun.(*ast.SelectorExpr)
	if !ok {
		return nil
	}
	if x, ok := name.X.(*ast.Ident); !ok || x.Name != "kernel" {
		return nil
	}
	switch name.Sel.Name {
	case "Replay":
		return (*Session).replay
	case "Journal":
		return (*Session).listJournal
	}
	return nil
}

// completeOwn completes a call to the session; code ends at the cursor.
func completeOwn(code string) engine.Completion {
	typed := strings.TrimLeft(code, " \t\n")
	from := len(code) - len(typed)
	var c engine.Completion
	for _, call := range []string{journalCall, replayCall} {
		if strings.HasPrefix(typed, "kernel.") && strings.HasPrefix(call, typed) {
			c.Start, c.End = from, len(code)
			c.Matches = append(c.Matches, engine.Match{Text: call, Kind: "function"})
		}
	}
	return c
}

// replay runs the cells that had succeeded before the engine's values were
// lost, in their order and without showing what they show. It stops at the
// first that fails now. An engine that can do it compiles all of them as one
// program, so that they take less time and memory than they had.
func (s *Session) replay(out *output) engine.Outcome {
	lost := s.journal.Lost()
	if len(lost) == 0 {
		out.Stream("stdout", "No cell has lost its values.\n")
		return engine.Outcome{}
	}
	if e, ok := s.awaitEngine().(programmer); ok {
		cells := make([]engine.Cell, len(lost))
		for i, r := range lost {
			cells[i] = r.cell()
		}
		// Without a program each cell is compiled when its turn comes.
		_, _ = e.Program(s.ctx, cells, out)
	}
	for i, r := range lost {
		if s.stopped() {
			return engine.Outcome{Fault: faultOf("interrupted", errInterrupted)}
		}
		result := s.awaitEngine().Run(s.ctx, r.cell(), unseen{})
		if result.Restarted {
			s.journal.Lose()
		}
		if f := result.Fault; f != nil {
			out.Stream("stdout", fmt.Sprintf("Run again: %d of %d cells. Cell %d had succeeded and fails now.\n", i, len(lost), r.N))
			return engine.Outcome{Fault: f, Restarted: result.Restarted}
		}
		s.journal.Again(r)
	}
	out.Stream("stdout", fmt.Sprintf("Run again: %d of %d cells.\n", len(lost), len(lost)))
	return engine.Outcome{}
}

// A programmer is an engine that compiles many cells at once.
type programmer interface {
	Program(ctx context.Context, cells []engine.Cell, out engine.Output) (engine.Program, error)
}

var _ programmer = (*engine.Engine)(nil)

func (r Record) cell() engine.Cell { return engine.Cell{N: r.N, ID: r.ID, Source: r.Source} }

// listJournal shows the journal as a page.
func (s *Session) listJournal(*output) engine.Outcome {
	var b strings.Builder
	list := func(title string, all []Record) {
		if len(all) == 0 {
			return
		}
		fmt.Fprintf(&b, "%s\n\n", title)
		for _, r := range all {
			end := ""
			if !r.OK {
				end = " (failed)"
			}
			fmt.Fprintf(&b, "[%d]%s\n\t%s\n\n", r.N, end, strings.ReplaceAll(strings.TrimSpace(r.Source), "\n", "\n\t"))
		}
	}
	list("Cells whose values are gone ("+replayCall+" runs them again)", s.journal.Lost())
	list("Cells run since the engine was started", s.journal.Live())
	if b.Len() == 0 {
		b.WriteString("No cell has been run.\n")
	}
	page := map[string]any{"source": "page", "start": 0, "data": display.Text(b.String()).Data}
	return engine.Outcome{How: map[string]any{"payload": []any{page}}}
}

// unseen is the Output of a cell that is run again: it shows nothing and
// cannot ask.
type unseen struct{}

func (unseen) Stream(string, string)            {}
func (unseen) Show(display.View, string, bool)  {}
func (unseen) Clear(bool)                       {}
func (unseen) Ask(string, bool) (string, error) { return "", errNoInput }
