package gas

import (
	"io/fs"
	"os"
	"strings"
	"testing"
)

// Every file of reference data and of the library says where its numbers are
// from and how they were obtained.
func TestEveryFileHasSources(t *testing.T) {
	n := 0
	for _, dir := range []string{"testdata", "library"} {
		err := fs.WalkDir(os.DirFS(dir), ".", func(path string, d fs.DirEntry, err error) error {
			if err != nil || d.IsDir() || !strings.HasSuffix(path, ".csv") {
				return err
			}
			raw, err := os.ReadFile(dir + "/" + path)
			n++
			for _, key := range []string{"\n# source: ", "\n# how obtained: "} {
				if !strings.Contains("\n"+string(raw), key) {
					t.Errorf("%s/%s has no line %q", dir, path, strings.TrimSpace(key))
				}
			}
			return err
		})
		if err != nil {
			t.Fatal(err)
		}
	}
	if n < 50 {
		t.Errorf("only %d files", n)
	}
}

// Every molecule of the library can be made without warnings at 298.15 K, and
// its notes name a source.
func TestLibrary(t *testing.T) {
	for _, name := range Library() {
		m := library(t, name)
		// Na2, bound by 5942 cm⁻¹, is above D0/30k at room temperature.
		if w := m.Warnings(T0); w != nil && !(name == "Na2" && len(w) == 1 && contains(w[0], "dissociation")) {
			t.Errorf("%s: warnings %q", name, w)
		}
		if !contains(strings.Join(m.Notes(), "\n"), "source: ") {
			t.Errorf("%s: no source in %q", name, m.Notes())
		}
		if m.Table(nil).Check() != nil {
			t.Errorf("%s: %v", name, m.Table(nil).Check())
		}
	}
	if _, err := FromLibrary("nothing"); err == nil || !contains(err.Error(), "C2H6") {
		t.Errorf("an unknown name: %v", err)
	}
	// Iodine at 2000 K is far above D0/30k.
	if w := strings.Join(library(t, "I2").Warnings(2000), ";"); !contains(w, "dissociation") {
		t.Errorf("I2 at 2000 K: %q", w)
	}
}
