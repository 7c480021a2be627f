package rerun

import (
	"fmt"
	"strings"
	"testing"

	"levelsum/display"
	"levelsum/kernel/engine"
)

// A cell that prints much is cut in the middle as in a front end, and it is
// said how much is left out; text and values keep their order.
func TestMuchOutputIsCut(t *testing.T) {
	r := &recorder{places: map[string][]place{}}
	c := r.cell(1)
	const lines = 100_000
	line := func(i int) string { return fmt.Sprintf("line %06d\n", i) }
	for i := range lines {
		c.Stream("stdout", line(i))
	}
	c.Show(display.Text("a value"), "", false)
	c.Stream("stdout", "after\n")
	r.end(1)
	out := r.finish()[1]
	var kinds []string
	size, shown := 0, 0
	for _, o := range out {
		kinds = append(kinds, o.Kind+o.Name)
		size += len(o.Text)
		if o.Name == "stdout" {
			shown += strings.Count(o.Text, "\n")
		}
	}
	if got, want := strings.Join(kinds, " "), "streamstdout streamstderr streamstdout display_data streamstdout"; got != want {
		t.Fatalf("outputs %s, want %s", got, want)
	}
	if max := engine.HeadBytes + engine.TailBytes + 1000; size > max {
		t.Errorf("%d bytes are stored, more than %d", size, max)
	}
	if !strings.HasPrefix(out[0].Text, line(0)+line(1)) || !strings.HasSuffix(out[2].Text, line(lines-1)) || out[4].Text != "after\n" {
		t.Error("the first or the last lines are missing")
	}
	var left, bytes int
	notice := out[1].Text
	if n, _ := fmt.Sscanf(notice[strings.LastIndex(notice, "levelsum:"):], "levelsum: %d lines (%d bytes) are left out here", &left, &bytes); n != 2 {
		t.Fatalf("notice %q", notice)
	}
	if left+shown-1 != lines {
		t.Errorf("%d lines are stored and %d said to be left out, of %d", shown-1, left, lines)
	}
}
