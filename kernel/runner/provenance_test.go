package runner_test

import (
	"encoding/json"
	"fmt"
	"os"
	"path/filepath"
	"regexp"
	"strings"
	"testing"

	"levelsum/display"
	"levelsum/kernel/engine"
)

var spaces = regexp.MustCompile(` +`)

const origins = `{"file":"sub/run.csv","sha256":"%s","rows":2}`

// What cells read and which seeds they use is told by the library, whatever
// the cell calls the file, compiled or interpreted.
func TestOrigins(t *testing.T) {
	dir := t.TempDir()
	if err := os.Mkdir(filepath.Join(dir, "sub"), 0o777); err != nil {
		t.Fatal(err)
	}
	text := "T / K, Cp / (J K-1 mol-1)\n10, 1.5\n20, 2.5\n"
	if err := os.WriteFile(filepath.Join(dir, "sub", "run.csv"), []byte(text), 0o666); err != nil {
		t.Fatal(err)
	}
	e, err := engine.Start(t.Context(), engine.Options{Command: []string{host.Exe, "engine"}, Dir: dir,
		Env: []string{"LEVELSUM_CACHE=" + host.Cache, `LEVELSUM_RUN_OPTIONS=["-limit 1m0s"]`}})
	if err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() { e.Close() })
	run := func(n int, src string) engine.Outcome {
		t.Helper()
		o := e.Run(t.Context(), engine.Cell{N: n, Source: src}, &capture{})
		if o.Fault != nil {
			t.Fatalf("In[%d]: %v", n, o.Fault)
		}
		return o
	}
	// sha256sum of the file.
	const sum = "8516c6ec93f6693b9ded9b747e92d6823dff4bcd61e8b21b30467619b14d6f46"
	file := fmt.Sprintf(origins, sum)
	for n, test := range []struct{ source, want string }{
		{`stem := "run"`, "null"},
		{`run, err := data.Read("sub/" + stem + ".csv"); _ = err`, "[" + file + "]"},
		{`for range 2 { _, err = data.Read("./sub/" + stem + ".csv"); if err != nil { panic(err) } }`, "null"}, // known
		{"dir, err := os.Getwd(); _, err2 := data.Read(dir + \"/sub/run.csv\"); _, _ = err, err2", "null"},     // no folder of this machine
		{`m, err3 := uncertain.MonteCarlo(uncertain.Exp(uncertain.Measured(1, 0.1)), uncertain.Draws(10000), uncertain.Seed(3)); _, _ = m, err3`,
			`[{"use":"uncertain.MonteCarlo, 10000 draws","seed":3}]`},
	} {
		o := run(n+1, test.source)
		b, err := json.Marshal(o.How["origins"])
		var got, want any
		if err != nil || json.Unmarshal(b, &got) != nil || json.Unmarshal([]byte(test.want), &want) != nil || fmt.Sprint(got) != fmt.Sprint(want) {
			t.Errorf("%s\ntold %s, want %s", test.source, b, test.want)
		}
	}
	o := run(9, "display.Provenance()")
	text, _ = o.Value.Data["text/plain"].(string)
	words := spaces.ReplaceAllString(text, " ")
	for _, line := range []string{"Levelsum", "Go go1.", "interpreter yaegi v", "platform", "constants CODATA 2022",
		"convention p° = 1 bar", "option -limit 1m0s", "cells compiled", "data sub/run.csv, 2 rows",
		"SHA-256 " + sum, "seed 3 (uncertain.MonteCarlo, 10000 draws)"} {
		if !strings.Contains(words, "\n"+line) {
			t.Errorf("no line %q in\n%s", line, text)
		}
	}
	if latex, _ := o.Value.Data["text/latex"].(string); !strings.Contains(latex, `SHA-256 & `+sum) {
		t.Errorf("LaTeX: %s", latex)
	}
	if o.Value.Data[display.ProvenanceMediaType] == nil {
		t.Error("not stored as numbers")
	}
}

// A value shown that was made from one that is older than what it was made of
// carries a mark, by which a stored notebook can be judged.
func TestStaleOutputsAreMarked(t *testing.T) {
	e := start(t)
	marks := func(v display.View) string {
		own, _ := v.Metadata["levelsum"].(map[string]any)
		if own["stale"] == nil {
			return ""
		}
		return fmt.Sprint(own["stale"])
	}
	mark := "[y of In[2]: x was changed by In[3]]"
	for n, test := range []struct{ source, want string }{
		{"x := 1", ""},
		{"y := 10 * x", ""},
		{"x = 2", ""},
		{"y", mark},
		{"display.Show(display.Text(fmt.Sprint(y)))", mark},
		{"func double() int { return 2 * y }", ""},
		{"for range 1 { display.Show(display.Text(fmt.Sprint(double()))) }", mark},
		{"x", ""},
		{"y = 10 * x\ny", ""},
		{"x = 3", ""},
		{"y += x\ny", "[y of In[9]: x was changed by In[10]]"},
		{"double()", ""},
	} {
		c := &capture{}
		o := e.Run(t.Context(), engine.Cell{N: n + 1, Source: test.source, ID: fmt.Sprint("c", n)}, c)
		if o.Fault != nil {
			t.Fatalf("%s: %v", test.source, o.Fault)
		}
		views := c.shown
		if o.Value != nil {
			views = append(views, *o.Value)
		}
		got := ""
		for _, v := range views {
			got += marks(v)
		}
		if got != test.want {
			t.Errorf("In[%d] %s: marked %q, want %q", n+1, test.source, got, test.want)
		}
	}
}
