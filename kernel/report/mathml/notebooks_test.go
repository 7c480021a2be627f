package mathml

import (
	"os"
	"path/filepath"
	"regexp"
	"testing"

	"levelsum/kernel/notebook"
)

var (
	formulaPattern = regexp.MustCompile(`(?s)\$\$(.+?)\$\$|\$([^$]+?)\$`)
	digitsPattern  = regexp.MustCompile(`\d+`)
)

// TestEveryFormulaOfTheNotebooksIsCompared holds the list of formulas that are
// compared with KaTeX against the notebooks as they are now: their text and the
// text that their cells show (with each number written 7, as the generator
// does). If this fails, run testdata/katex/generate.mjs again.
func TestEveryFormulaOfTheNotebooksIsCompared(t *testing.T) {
	compared := map[string]bool{}
	for _, f := range readReference(t).Formulas {
		compared[f.Formula] = true
	}
	files, err := filepath.Glob("../../../notebooks/*.ipynb")
	if err != nil || len(files) == 0 {
		t.Fatalf("%d notebooks, %v", len(files), err)
	}
	n := 0
	look := func(file string, cell int, text string, live bool) {
		for _, m := range formulaPattern.FindAllStringSubmatch(text, -1) {
			f := m[1] + m[2]
			if _, err := Convert(f, Inline); err != nil {
				t.Errorf("%s, cell %d: %s: %v", filepath.Base(file), cell, f, err)
			}
			if live {
				f = digitsPattern.ReplaceAllString(f, "7")
			}
			n++
			if !compared[f] {
				t.Errorf("%s, cell %d: not compared with KaTeX: %s", filepath.Base(file), cell, f)
			}
		}
	}
	for _, file := range files {
		data, err := os.ReadFile(file)
		if err != nil {
			t.Fatal(err)
		}
		d, err := notebook.Parse(file, data)
		if err != nil {
			t.Fatal(err)
		}
		for _, c := range d.Cells() {
			if c.Kind() == notebook.Markdown {
				look(file, c.N, c.Source(), false)
			}
			for _, o := range c.Outputs() {
				text, _ := o.Data["text/markdown"].(string)
				look(file, c.N, text, true)
			}
		}
	}
	t.Logf("%d formulas in %d notebooks", n, len(files))
	if n < 100 {
		t.Errorf("only %d formulas found: is the pattern right?", n)
	}
}
