package rerun

import (
	"fmt"
	"slices"
	"sort"
	"strings"

	"levelsum/display"
	"levelsum/kernel/notebook"
)

// A Finding is one thing compared.
type Finding struct {
	// Kind is "result", "number" (of a paragraph or derivation), "table",
	// "figure", "value", "text", "fault", "data", "seed", "provenance".
	Kind string `json:"kind"`
	Cell int    `json:"cell,omitempty"`
	// Name is the name of a result or a data file; of an output its place in
	// the cell.
	Name    string  `json:"name"`
	Verdict Verdict `json:"verdict"`
	// Old and Now are the stored and the new value, as text.
	Old string `json:"old,omitempty"`
	Now string `json:"now,omitempty"`
	// Delta is new less stored, and DeltaU the same in stored standard
	// uncertainties; zero where they have no meaning.
	Delta  float64 `json:"delta,omitempty"`
	DeltaU float64 `json:"delta_over_u,omitempty"`
	// Note says more: where in a table, how many places differ.
	Note string `json:"note,omitempty"`
}

// Compare holds a document that has just been run against the stored one. The
// cells must be the same ones, in the same order. Named results are compared
// by name, other outputs by their place in the cell. Cells that the run did not
// reach are left out: nothing is known of them.
func Compare(stored, now *notebook.Document) ([]Finding, error) {
	a, b := stored.Cells(), now.Cells()
	if len(a) != len(b) {
		return nil, fmt.Errorf("the documents have %d and %d cells", len(a), len(b))
	}
	all, err := compareResults(stored, now)
	if err != nil {
		return nil, err
	}
	origins, err := compareProvenance(stored, now)
	if err != nil {
		return nil, err
	}
	for i := range a {
		if reached(b[i]) {
			all = append(all, compareCell(a[i], b[i])...)
		}
	}
	return append(all, origins...), nil
}

// reached says whether a cell was run, if it is one to be run.
func reached(c *notebook.Cell) bool {
	return c.Kind() != notebook.Code || c.ExecutionCount() > 0 || strings.TrimSpace(c.Source()) == ""
}

func compareResults(stored, now *notebook.Document) ([]Finding, error) {
	old, err := Results(stored)
	if err != nil {
		return nil, err
	}
	cur, err := Results(now)
	if err != nil {
		return nil, err
	}
	return slices.DeleteFunc(compareByName("result", 0, old, cur), func(f Finding) bool {
		return f.Verdict == Missing && !reached(now.Cells()[f.Cell-1])
	}), nil
}

// compareCell compares the outputs of a cell that are no named results.
func compareCell(a, b *notebook.Cell) []Finding {
	rest := func(c *notebook.Cell) (out []notebook.Output) {
		for _, o := range c.Outputs() {
			if _, ok := o.Data[resultType]; !ok && !display.Transient(display.View{Metadata: o.Metadata}) {
				out = append(out, o) // lines of progress are what a front end leaves of them
			}
		}
		return out
	}
	old, cur := rest(a), rest(b)
	var all []Finding
	for i := range max(len(old), len(cur)) {
		f := Finding{Cell: b.N, Name: fmt.Sprintf("output %d", i+1)}
		switch {
		case i >= len(cur):
			f.Kind, f.Verdict, f.Old = kindOf(old[i]), Missing, excerpt(old[i])
		case i >= len(old):
			f.Kind, f.Verdict, f.Now = kindOf(cur[i]), New, excerpt(cur[i])
		case kindOf(old[i]) != kindOf(cur[i]):
			f.Kind, f.Verdict, f.Old, f.Now = kindOf(cur[i]), Moved, excerpt(old[i]), excerpt(cur[i])
			f.Note = "was a " + kindOf(old[i])
		case isLive(old[i]) && isLive(cur[i]):
			all = append(all, compareLive(f, old[i], cur[i])...)
			continue
		default:
			f.Kind = kindOf(cur[i])
			compareOutput(&f, old[i], cur[i])
		}
		all = append(all, f)
	}
	return all
}

func isLive(o notebook.Output) bool { _, ok := liveNumbers(o); return ok }

// kindOf says what an output is to the reader.
func kindOf(o notebook.Output) string {
	switch o.Kind {
	case notebook.Stream:
		return "text"
	case notebook.ErrorOutput:
		return "fault"
	}
	if _, ok := o.Data[provenanceType]; ok {
		return "provenance"
	}
	if _, ok := o.Data["image/svg+xml"]; ok {
		return "figure"
	}
	if s, ok := o.Data["text/plain"].(string); ok {
		if _, ok := readTable(s); ok {
			return "table"
		}
	}
	return "value"
}

// excerpt returns the first line of an output's text.
func excerpt(o notebook.Output) string {
	s := o.Text
	switch o.Kind {
	case notebook.ErrorOutput:
		s = o.ErrorName + ": " + o.ErrorValue
	case notebook.DisplayData, notebook.ExecuteResult:
		s, _ = o.Data["text/plain"].(string)
	}
	s, _, _ = strings.Cut(strings.TrimSpace(s), "\n")
	return clip(s, 60)
}

func clip(s string, n int) string {
	if r := []rune(s); len(r) > n {
		return string(r[:n-1]) + "…"
	}
	return s
}

// compareOutput compares two outputs of one kind by the form that says most.
func compareOutput(f *Finding, old, cur notebook.Output) {
	switch old.Kind {
	case notebook.Stream:
		if old.Name != cur.Name {
			f.Verdict, f.Note = Moved, "was written to "+old.Name+", now to "+cur.Name
			return
		}
		f.take(compareText(old.Text, cur.Text))
		return
	case notebook.ErrorOutput:
		f.take(compareText(old.ErrorName+": "+old.ErrorValue, cur.ErrorName+": "+cur.ErrorValue))
		return
	}
	text := func(o notebook.Output, media string) string { s, _ := o.Data[media].(string); return s }
	switch f.Kind {
	case "provenance": // what it tells is compared with the document's own
	case "figure":
		if m := ownJSON(cur); m != "" && old.Data[m] != nil {
			f.take(compareJSON(old.Data[m], cur.Data[m]))
			return
		}
		f.take(compareText(text(old, "image/svg+xml"), text(cur, "image/svg+xml")))
		if f.Verdict.Differs() {
			f.Old, f.Now = "", "" // two coordinates of a drawing tell a reader nothing
		}
	case "table":
		f.take(compareTables(text(old, "text/plain"), text(cur, "text/plain")))
	default:
		if m := ownJSON(cur); m != "" && old.Data[m] != nil {
			f.take(compareJSON(old.Data[m], cur.Data[m]))
			return
		}
		for _, m := range []string{"text/plain", "text/html", "text/latex", "text/markdown"} {
			f.take(compareText(text(old, m), text(cur, m)))
			if f.Verdict.Differs() {
				return
			}
		}
	}
}

// ownJSON returns the media type under which an output carries its numbers.
func ownJSON(o notebook.Output) string {
	var all []string
	for m := range o.Data {
		if strings.HasPrefix(m, "application/vnd.levelsum.") && strings.HasSuffix(m, "+json") {
			all = append(all, m)
		}
	}
	sort.Strings(all)
	if len(all) == 0 {
		return ""
	}
	return all[0]
}

// take keeps the worse of two findings about the same output.
func (f *Finding) take(g Finding) {
	if g.Verdict > f.Verdict {
		f.Verdict, f.Old, f.Now, f.Delta, f.DeltaU, f.Note = g.Verdict, g.Old, g.Now, g.Delta, g.DeltaU, g.Note
	}
}
