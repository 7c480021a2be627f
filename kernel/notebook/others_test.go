package notebook

import (
	"encoding/json"
	"os"
	"path/filepath"
	"reflect"
	"slices"
	"strings"
	"testing"
)

// TestTheFormatsOwnDocuments reads the test documents of nbformat 5.11.1
// (testdata/nbformat/SOURCE). What its validator finds valid is read and
// written without loss; what it refuses is refused with cell and field; a
// missing id and the second of two equal ones are mended, as it does, but with
// the same id each time, and it is said.
func TestTheFormatsOwnDocuments(t *testing.T) {
	const old = "nbformat: version 3; versions from 4.0 are read"
	want := map[string]string{
		"invalid.ipynb":                       "refused: cell 1 (markdown): source: missing",
		"invalid_cell_id.ipynb":               `refused: cell 1 (code): id: "$illegal_chars"`,
		"invalid_unique_cell_id.ipynb":        "mended: cell 2 had the id dup of an earlier cell and got 793bda64",
		"many_tracebacks.ipynb":               "",
		"no_min_version.ipynb":                "refused: nbformat, nbformat_minor: want two whole numbers",
		"test3.ipynb":                         "refused: " + old,
		"test3_no_metadata.ipynb":             "refused: " + old,
		"test3_no_min_version.ipynb":          "refused: " + old,
		"test3_no_worksheets.ipynb":           "refused: " + old,
		"test3_worksheet_with_no_cells.ipynb": "refused: " + old,
		"test4.5.ipynb":                       "",
		"test4.ipynb":                         "",
		"test4custom.ipynb":                   "",
		"test4docinfo.ipynb":                  "",
		"test4jupyter_metadata.ipynb":         "",
		"test4jupyter_metadata_timings.ipynb": "",
		"test4plus.ipynb":                     "", // of version 4.99, with kinds of cells and outputs that do not exist yet
		"v4_5_invalid_metadata.ipynb":         "refused: metadata.kernelspec: a string, want an object",
		"v4_5_no_cell_id.ipynb":               "mended: cell 1 had no id and got e6f15b50",
	}
	files, err := filepath.Glob("../../testdata/nbformat/tests/*.ipynb")
	if err != nil || len(files) != len(want) {
		t.Fatalf("%d documents, %v; want %d", len(files), err, len(want))
	}
	for _, file := range files {
		name := filepath.Base(file)
		data, err := os.ReadFile(file)
		if err != nil {
			t.Fatal(err)
		}
		d, err := Parse(name, data)
		if err != nil {
			if w, refused := strings.CutPrefix(want[name], "refused: "); !refused || !strings.HasPrefix(err.Error(), name+": "+w) {
				t.Errorf("%s: %v; want %q", name, err, want[name])
			}
			continue
		}
		if got := strings.Join(slices.Concat([]string{"mended: "}, d.Mended), ""); len(d.Mended) == 0 && want[name] != "" || len(d.Mended) > 0 && got != want[name] {
			t.Errorf("%s: mended %q, want %q", name, d.Mended, want[name])
		}
		for _, c := range d.Cells() {
			if c.Kind() == Code {
				if err := c.SetOutputs(c.Outputs()); err != nil {
					t.Errorf("%s: cell %d: %v", name, c.N, err)
				}
			}
		}
		var before, after map[string]any
		if err := json.Unmarshal(data, &before); err != nil {
			t.Fatal(err)
		}
		if err := json.Unmarshal(d.Bytes(), &after); err != nil {
			t.Errorf("%s: written: %v", name, err)
			continue
		}
		if strings.HasPrefix(want[name], "mended") {
			for _, doc := range []map[string]any{before, after} {
				for _, c := range doc["cells"].([]any) {
					delete(c.(map[string]any), "id")
				}
			}
		}
		if !reflect.DeepEqual(before, after) {
			t.Errorf("%s: something was lost:\n%s", name, d.Bytes())
		}
		if d.Minor() <= 5 {
			if err := obeys(t, published(t, d.Minor()), d.Bytes()); err != nil {
				t.Errorf("%s: %v", name, err)
			}
		}
	}
}
