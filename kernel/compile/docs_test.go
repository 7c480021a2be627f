package compile

import (
	"encoding/json"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"levelsum/kernel/symbols/export"
)

// What is stored is what is read back, and only of what cells may import.
func TestStoreDocs(t *testing.T) {
	dir := t.TempDir()
	unit, err := filepath.Abs("../../statmech/unit")
	if err != nil {
		t.Fatal(err)
	}
	pkgs := []listed{{ImportPath: "levelsum/statmech/unit", Dir: unit}, {ImportPath: "levelsum/kernel/cell", Dir: unit}, {ImportPath: "unsafe"}}
	if err := storeDocs(dir, pkgs, []string{"levelsum/statmech/unit", "unsafe"}); err != nil {
		t.Fatal(err)
	}
	data, err := os.ReadFile(filepath.Join(dir, "levelsum", "statmech", "unit.json"))
	if err != nil {
		t.Fatal(err)
	}
	var d export.Docs
	if err := json.Unmarshal(data, &d); err != nil || !strings.HasPrefix(d["Energy.PerMole"], "PerMole returns") {
		t.Errorf("%v, %q", err, d["Energy.PerMole"])
	}
	if entries, err := os.ReadDir(filepath.Join(dir, "levelsum")); err != nil || len(entries) != 1 {
		t.Errorf("stored %v, %v", entries, err)
	}
}
