package rerun

import (
	"context"
	"fmt"
	"strings"
	"testing"

	"levelsum/display"
	"levelsum/kernel/notebook"
)

// runBy runs a document in a session that says of itself what about says.
func runBy(t *testing.T, d *notebook.Document, about [][2]string, words ...string) {
	t.Helper()
	f := newFake()
	f.about = about
	f.stale = []string{"y of In[1]: x was changed by In[2]"}
	run(t, d, Options{Words: words, Start: func(context.Context) (Session, error) { return f, nil }})
}

var aboutOld = [][2]string{{"Levelsum", "1.2.3"}, {"Go", "go1.26.8"}, {"interpreter", "yaegi v0.16.1"}, {"platform", "linux/amd64"},
	{"constants", "CODATA 2022"}, {"convention", "p° = 1 bar"}, {"convention", "k = 1"}}

const hash = "72ae35ffe63aee5b116646419be0bba6a137717e2d7d39c213aaec6c2b1d760c"

func TestProvenanceIsStoredInOnePlace(t *testing.T) {
	source := []string{"read b.csv " + hash + " 7\nseed 4 uncertain.MonteCarlo\nseed 4 uncertain.MonteCarlo", "# prose", "seed 11 uncertain.MonteCarlo\nseed 6 uncertain.MonteCarlo\nseed 5 uncertain.MonteCarlo\nread a.csv " + hash + " 2"}
	d := doc(t, source...)
	if err := d.SetMetadata("kept", "levelsum", "foreign"); err != nil {
		t.Fatal(err)
	}
	runBy(t, d, aboutOld, "-native", "-limit 1m0s")
	p, err := ReadProvenance(d)
	want := fmt.Sprintf("%+v", &Provenance{
		Version: "1.2.3", Go: "go1.26.8", Interpreter: "yaegi v0.16.1", Platform: "linux/amd64", Constants: "CODATA 2022",
		Conventions: []string{"p° = 1 bar", "k = 1"}, Options: []string{"-native", "-limit 1m0s"}, Interpreted: "In[1-2]",
		Stale: []string{"y of In[1]: x was changed by In[2]"}, Code: CodeHash(d),
		Seeds: []Seed{{Use: "uncertain.MonteCarlo", Seeds: "4-6, 11"}},
		Data:  []DataFile{{File: "a.csv", SHA256: hash, Rows: 2}, {File: "b.csv", SHA256: hash, Rows: 7}},
	})
	if got := fmt.Sprintf("%+v", p); err != nil || got != want {
		t.Errorf("stored %s, %v\nwant %s", got, err, want)
	}
	first := string(d.Bytes())
	runBy(t, d, aboutOld, "-native", "-limit 1m0s")
	if string(d.Bytes()) != first {
		t.Errorf("run again:\n%s\nfirst:\n%s", d.Bytes(), first)
	}
	if err := Clear(d); err != nil {
		t.Fatal(err)
	}
	if got := fmt.Sprint(d.Metadata("levelsum")); got != "map[foreign:kept]" {
		t.Errorf("cleared: %s", got)
	}
}

// Numbers decide: versions are noted, data and seeds are differences.
func TestCompareProvenance(t *testing.T) {
	base := []string{"read a.csv " + hash + " 2\nseed 4 uncertain.MonteCarlo"}
	stored := doc(t, base...)
	runBy(t, stored, aboutOld)
	newer := [][2]string{{"Levelsum", "1.2.4"}, {"Go", "go1.26.9"}, {"interpreter", "yaegi v0.16.1"}, {"platform", "linux/arm64"},
		{"constants", "CODATA 2026"}, {"convention", "p° = 1 atm"}, {"convention", "k = 1"}}
	for _, test := range []struct {
		source string
		about  [][2]string
		want   string
	}{
		{base[0], aboutOld, ""},
		{base[0], newer, `provenance "constants" noted 0 0; provenance "conventions" noted 0 0; provenance "Levelsum" noted 0 0; provenance "Go" noted 0 0; provenance "platform" noted 0 0`},
		{strings.Replace(base[0], "seed 4", "seed 5", 1), aboutOld, `seed "uncertain.MonteCarlo" moved 0 0`},
		{strings.Replace(base[0], "72ae", "72af", 1), aboutOld, `data "a.csv" moved 0 0`},
		{strings.Replace(base[0], "a.csv", "b.csv", 1), aboutOld, `data "b.csv" new 0 0; data "a.csv" missing 0 0`},
	} {
		now := doc(t, test.source)
		runBy(t, now, test.about)
		fs, err := Compare(stored, now)
		if err != nil || findings(fs) != test.want {
			t.Errorf("%q: %s, %v\nwant %s", test.source, findings(fs), err, test.want)
		}
	}
	if Noted.Differs() {
		t.Error("what is noted counts as a difference")
	}
}

func remarks(rs []Remark) string {
	var s []string
	for _, r := range rs {
		s = append(s, fmt.Sprintf("%d: %s", r.Cell, r.Text))
	}
	return strings.Join(s, "\n")
}

func TestHistory(t *testing.T) {
	sources := []string{"x", "# prose", "y", "z", ""}
	for _, test := range []struct {
		counts []int
		want   string
	}{
		{[]int{0, 0, 0}, ""},
		{[]int{1, 2, 3}, ""},
		{[]int{4, 6, 9}, ""}, // each after the one above
		{[]int{4, 2, 3}, "0: cells 3-4 were run before cell 1 above them (In[4]), or in another session: what they show may be older than that cell"},
		{[]int{1, 0, 2}, "0: cell 3 not run"},
		{[]int{1, 0, 0}, "0: cells 3, 4 not run"},
		{[]int{1, 2, 1}, "4: was run before cell 3 above it (In[2]), or in another session: what it shows may be older than that cell"},
	} {
		d := doc(t, sources...)
		for i, c := range []int{0, 2, 3} {
			d.Cells()[c].SetExecutionCount(test.counts[i])
		}
		d.Cells()[4].SetExecutionCount(0)
		if got := remarks(History(d)); got != test.want {
			t.Errorf("%v:\n%s\nwant\n%s", test.counts, got, test.want)
		}
	}

	d := doc(t, "x", "y")
	run(t, d, Options{})
	if got := remarks(History(d)); got != "" {
		t.Errorf("after a run: %s", got)
	}
	d.Cells()[1].SetSource("z")
	if got := remarks(History(d)); got != "0: code was changed after the recorded run" {
		t.Errorf("after a change: %s", got)
	}
}

// A front end stores the mark that the engine puts beside an output; a run from
// top to bottom does not.
func TestStaleMarks(t *testing.T) {
	d := doc(t, "stale y of In[2]: x was changed by In[3]")
	run(t, d, Options{})
	if got := remarks(History(d)); got != "" || strings.Contains(string(d.Bytes()), `"stale"`) {
		t.Errorf("after a run: %s\n%s", got, d.Bytes())
	}
	v := display.Text("2")
	o := notebook.Output{Kind: notebook.DisplayData, Data: v.Data,
		Metadata: map[string]any{"levelsum": map[string]any{"stale": []string{"y of In[2]: x was changed by In[3]"}}}}
	if err := d.Cells()[0].SetOutputs([]notebook.Output{o, o}); err != nil {
		t.Fatal(err)
	}
	want := "1: shows what was made from a value older than it should be: y of In[2]: x was changed by In[3]"
	if got := remarks(History(d)); got != want {
		t.Errorf("marked: %s\nwant %s", got, want)
	}
}
