package data

import (
	"io/fs"
	"os"
	"path/filepath"
	"strings"
	"testing"
)

// TestProvenance: every file of reference values of these packages says where
// its digits come from and how they were obtained.
func TestProvenance(t *testing.T) {
	n := 0
	for _, root := range []string{"../uncertain/testdata", "../fit/testdata", "../calorimetry/testdata", "../../testdata/white-collocott-1984"} {
		err := filepath.WalkDir(root, func(path string, d fs.DirEntry, err error) error {
			if err != nil || filepath.Ext(path) != ".csv" {
				return err
			}
			n++
			raw, err := os.ReadFile(path)
			if err != nil {
				return err
			}
			for _, key := range []string{"# source: ", "# how obtained: ", "# licence: "} {
				if !strings.Contains(string(raw), key) {
					t.Errorf("%s has no line %q", path, key)
				}
			}
			return nil
		})
		if err != nil {
			t.Error(err)
		}
	}
	if n < 10 {
		t.Errorf("%d files found", n)
	}
}
