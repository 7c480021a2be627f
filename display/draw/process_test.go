package draw

import (
	"crypto/sha256"
	"encoding/json"
	"fmt"
	"os"
	"os/exec"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"levelsum/display"
)

// printEnv makes the test binary print the hashes of all that display shows.
const printEnv = "LEVELSUM_TEST_PRINT_HASHES"

// hashes returns one line for each form of everything: figures, tables, a
// result, prose, a derivation, maps; and for files of one figure.
func hashes(dir string) (string, error) {
	all := map[string]any{
		"table": display.Table{Caption: "c", Columns: []display.Column{{Quantity: "K", Unit: "1", Values: []float64{1e-20, 3, 4e9}},
			{Quantity: "phase", Values: []string{"a", "b_c", "H_2O"}}}, Rules: []int{1}},
		"result":    display.Number{Name: "θ_D", Value: 343.21, U: 0.7, Unit: "K"},
		"paragraph": display.Paragraph{Text: "[[a]] and [[b]]", Values: display.Values{"b": 2, "a": display.Number{Name: "x", Value: 1.25, Unit: "K"}}},
		"derivation": display.Derivation{Steps: []display.Step{{Formula: "[[a]] = [[b]][[c]]", Result: "a", Symbols: []display.Symbol{
			{Name: "a", Meaning: "m", Value: 6}, {Name: "b", Meaning: "m", Value: 2}, {Name: "c", Meaning: "m", Value: 3}},
			Compute: func(x map[string]float64) float64 { return x["b"] * x["c"] }}}},
		"map":    map[string]any{"z": 1, "a": map[int]bool{3: true, 1: false}, "m": []string{"x"}},
		"struct": struct{ B, A map[string]int }{map[string]int{"q": 1, "b": 2}, nil},
	}
	for name, f := range gallery() {
		all["figure "+name] = f
	}
	var lines []string
	for name, v := range all {
		for media, d := range display.ViewOf(v).Data {
			b, err := json.Marshal(d)
			if err != nil {
				return "", err
			}
			lines = append(lines, fmt.Sprintf("%s, %s: %x", name, media, sha256.Sum256(b)))
		}
	}
	f := gallery()["series"]
	f.Width, f.Height = 40, 30
	for _, ext := range []string{".svg", ".png", ".pdf", ".csv"} {
		path := filepath.Join(dir, "f"+ext)
		if err := f.Save(path); err != nil {
			return "", err
		}
		b, err := os.ReadFile(path)
		if err != nil {
			return "", err
		}
		lines = append(lines, fmt.Sprintf("file %s: %x", ext, sha256.Sum256(b)))
	}
	slices.Sort(lines)
	return strings.Join(lines, "\n"), nil
}

// Another process, with other seeds of its maps, one processor, another time
// zone, language and width of the terminal, shows the same bytes.
func TestBytesOfAnotherProcess(t *testing.T) {
	here, err := hashes(t.TempDir())
	if err != nil {
		t.Fatal(err)
	}
	cmd := exec.Command(os.Args[0])
	cmd.Env = append(os.Environ(), printEnv+"="+t.TempDir(), "GOMAXPROCS=1", "TZ=Pacific/Apia", "LANG=de_DE.UTF-8", "LC_ALL=de_DE.UTF-8", "COLUMNS=40")
	out, err := cmd.Output()
	if err != nil {
		t.Fatal(err)
	}
	a, b := strings.Split(here, "\n"), strings.Split(strings.TrimSpace(string(out)), "\n")
	if len(a) < 50 || len(a) != len(b) {
		t.Fatalf("%d forms here, %d there", len(a), len(b))
	}
	for i := range a {
		if a[i] != b[i] {
			t.Errorf("here %s\nthere %s", a[i], b[i])
		}
	}
}
