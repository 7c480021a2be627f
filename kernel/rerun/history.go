package rerun

import (
	"fmt"
	"slices"
	"strings"

	"levelsum/kernel/notebook"
)

// A Remark is something that the stored document says of its own past and that
// a reader of its numbers has to know.
type Remark struct {
	Cell int // from 1, all kinds counted; 0 for the whole document
	Text string
}

func (r Remark) String() string {
	if r.Cell > 0 {
		return fmt.Sprintf("cell %d %s", r.Cell, r.Text)
	}
	return r.Text
}

// ChangedData compares the data files that a document's recorded run used with
// the files in its folder, without running anything. Files that are not there
// are left out.
func ChangedData(d *notebook.Document, dir string) []Remark {
	p, err := ReadProvenance(d)
	if err != nil || p == nil {
		return nil
	}
	var all []Remark
	for i, f := range p.Data {
		now, ok, err := describe(dir, f.File)
		same := func(g DataFile) bool { return g.File == f.File && g.SHA256 == now.SHA256 }
		if err != nil || !ok || slices.ContainsFunc(p.Data, same) || slices.ContainsFunc(p.Data[:i], func(g DataFile) bool { return g.File == f.File }) {
			continue
		}
		all = append(all, Remark{0, fmt.Sprintf("the data file %s was changed after the recorded run: SHA-256 %.12s then, %.12s now", f.File, f.SHA256, now.SHA256)})
	}
	return all
}

// History returns what speaks against a document being what a run from its
// first cell to its last one gives: cells that were run out of order or not at
// all, outputs made from values that were older than what those were made of,
// code that was changed after the recorded run. Nothing is said of a document
// that has never been run. That the text of a cell was changed after it was
// last run in a front end cannot be seen; a fresh run tells.
func History(d *notebook.Document) []Remark {
	var all []Remark
	last, lastCell, ran := 0, 0, 0
	var notRun []string
	var early []int // cells that were run before the last one above them
	tell := func() {
		switch n := len(early); {
		case n == 1:
			all = append(all, Remark{early[0], fmt.Sprintf("was run before cell %d above it (In[%d]), or in another session: what it shows may be older than that cell", lastCell, last)})
		case n > 1:
			all = append(all, Remark{0, fmt.Sprintf("cells %s were run before cell %d above them (In[%d]), or in another session: what they show may be older than that cell", listed(early), lastCell, last)})
		}
		early = nil
	}
	for _, c := range d.Cells() {
		if c.Kind() != notebook.Code {
			continue
		}
		n := c.ExecutionCount()
		if n == 0 {
			if strings.TrimSpace(c.Source()) != "" {
				notRun = append(notRun, fmt.Sprint(c.N))
			}
			continue
		}
		ran++
		if n <= last {
			early = append(early, c.N)
		} else {
			tell()
			last, lastCell = n, c.N
		}
		for _, s := range staleMarks(c) {
			all = append(all, Remark{c.N, "shows what was made from a value older than it should be: " + s})
		}
	}
	tell()
	if ran == 0 {
		return nil
	}
	if len(notRun) > 0 {
		word := "cell"
		if len(notRun) > 1 {
			word = "cells"
		}
		all = append(all, Remark{0, fmt.Sprintf("%s %s not run", word, strings.Join(notRun, ", "))})
	}
	if p, err := ReadProvenance(d); err == nil && p != nil && p.Code != "" && p.Code != CodeHash(d) {
		all = append(all, Remark{0, "code was changed after the recorded run"})
	}
	return all
}

// staleMarks returns what the engine has written beside the outputs of a cell.
func staleMarks(c *notebook.Cell) []string {
	var out []string
	seen := map[string]bool{}
	for _, o := range c.Outputs() {
		own, _ := o.Metadata["levelsum"].(map[string]any)
		list, _ := own["stale"].([]any)
		for _, x := range list {
			if s, ok := x.(string); ok && !seen[s] {
				seen[s] = true
				out = append(out, s)
			}
		}
	}
	return out
}

// unmarked takes the mark away: a run without a front end goes from top to
// bottom, and a value that is changed on the way is meant so.
func unmarked(meta map[string]any) map[string]any {
	own, ok := meta["levelsum"].(map[string]any)
	if !ok || own["stale"] == nil {
		return meta
	}
	out := map[string]any{}
	for k, x := range meta {
		if k != "levelsum" {
			out[k] = x
		}
	}
	rest := map[string]any{}
	for k, x := range own {
		if k != "stale" {
			rest[k] = x
		}
	}
	if len(rest) > 0 {
		out["levelsum"] = rest
	}
	if len(out) == 0 {
		return nil
	}
	return out
}
