package runner_test

import (
	"flag"
	"fmt"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"golang.org/x/tools/txtar"
)

var update = flag.Bool("update", false, "write what the scenarios give into their files")

// TestScenarios runs sequences of cells. A scenario is a text archive: files
// named 1, 2, ... are cells, each followed by a file "=" that holds what the
// cell gives.
func TestScenarios(t *testing.T) {
	files, err := filepath.Glob("testdata/scenarios/*.txtar")
	if err != nil || len(files) == 0 {
		t.Fatalf("no scenarios: %v", err)
	}
	for _, file := range files {
		t.Run(strings.TrimSuffix(filepath.Base(file), ".txtar"), func(t *testing.T) {
			t.Parallel()
			a, err := txtar.ParseFile(file)
			if err != nil {
				t.Fatal(err)
			}
			e := start(t)
			var out []txtar.File
			want := ""
			for i, f := range a.Files {
				if f.Name == "=" {
					continue
				}
				var n int
				if _, err := fmt.Sscan(f.Name, &n); err != nil {
					t.Fatalf("file %q is no cell number", f.Name)
				}
				o, cap := run(t, e, n, string(f.Data))
				var b strings.Builder
				b.WriteString(cap.out())
				s := strings.ReplaceAll(cap.err(), "the cell is being compiled ...\n", "") // how long it takes is not the matter
				if s != "" {
					b.WriteString(prefixed("! ", s))
				}
				for _, v := range cap.shown {
					b.WriteString(prefixed("shown: ", fmt.Sprint(v.Data["text/plain"])))
				}
				if o.Value != nil {
					b.WriteString(prefixed("-> ", fmt.Sprint(o.Value.Data["text/plain"])))
				}
				if o.Fault != nil {
					b.WriteString(prefixed("x "+o.Fault.Name+" | ", strings.Join(o.Fault.Trace, "\n")))
				}
				if o.Restarted {
					b.WriteString("(restarted)\n")
				}
				got := b.String()
				if got != "" && !strings.HasSuffix(got, "\n") {
					got += "\n" // as the archive has it
				}
				if i+1 < len(a.Files) && a.Files[i+1].Name == "=" {
					want = string(a.Files[i+1].Data)
				} else if !*update {
					t.Errorf("cell %d has no result", n)
				}
				if got != want && !*update {
					t.Errorf("cell %d\n%s\ngot:\n%s\nwant:\n%s", n, f.Data, got, want)
				}
				out = append(out, f, txtar.File{Name: "=", Data: []byte(got)})
			}
			if *update {
				a.Files = out
				if err := os.WriteFile(file, txtar.Format(a), 0o666); err != nil {
					t.Fatal(err)
				}
			}
		})
	}
}

func prefixed(p, s string) string {
	var b strings.Builder
	for line := range strings.Lines(strings.TrimRight(s, "\n") + "\n") {
		b.WriteString(p + line)
	}
	return b.String()
}
