package display

import (
	"strings"
	"testing"
)

// keeper is a sink that keeps origins.
type keeper struct {
	terminal
	got []Origin
}

func (k *keeper) Record(o Origin)     { k.got = append(k.got, o) }
func (k *keeper) Provenance() Sources { return Sources{[][2]string{{"Go", "go1.26.8"}}, k.got} }

func TestProvenance(t *testing.T) {
	FileRead("nobody.csv", "00", 1) // nobody listens
	if s := Provenance().View().Data["text/plain"]; s != "no notebook session" {
		t.Errorf("outside of a session: %q", s)
	}
	k := &keeper{}
	SetSink(k)
	defer SetSink(nil)
	FileRead("run <1>.csv", strings.Repeat("a1", 32), 35)
	SeedUsed("fit.Bootstrap, 100 refits", 7)
	for _, seed := range []uint64{3, 1, 9, 2, 3} {
		SeedUsed("many", seed)
	}
	v := Provenance().View()
	want := "Provenance\nwhat     value\n-------  " + strings.Repeat("-", 64) + "\nGo       go1.26.8\ndata     run <1>.csv, 35 rows\nSHA-256  " +
		strings.Repeat("a1", 32) + "\nseed     7 (fit.Bootstrap, 100 refits)\nseeds    1-3, 9 (many)"
	if got := v.Data["text/plain"]; got != want {
		t.Errorf("got\n%s\nwant\n%s", got, want)
	}
	if h, _ := v.Data["text/html"].(string); !strings.Contains(h, "run &lt;1&gt;.csv, 35 rows") {
		t.Errorf("HTML: %s", h)
	}
	if l, _ := v.Data["text/latex"].(string); !strings.Contains(l, "seed & 7 (fit.Bootstrap, 100 refits)") {
		t.Errorf("LaTeX: %s", l)
	}
}
