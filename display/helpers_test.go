package display

import (
	"encoding/xml"
	"flag"
	"io"
	"os"
	"path/filepath"
	"strings"
	"testing"
)

var update = flag.Bool("update", false, "write the golden files")

// Quantities as another package might declare them.
type (
	kelvin float64
	molar  float64
	joule  float64
	naked  float64 // a quantity that does not tell its unit
)

type kind int

func (kind) String() string { return "molar entropy or heat capacity" }

type unitStruct struct {
	Symbol string
	Kind   kind
}

func (kelvin) Unit() string    { return "K" }
func (molar) Unit() unitStruct { return unitStruct{Symbol: "J/(mol K)"} }
func (x joule) String() string { return full(float64(x)) + " J" }

// estimate is a value with uncertainty as another package might declare it.
type estimate struct {
	v, u     float64
	unit     string
	withheld string
}

func (e estimate) Value() float64   { return e.v }
func (e estimate) Unit() string     { return e.unit }
func (e estimate) Withheld() string { return e.withheld }
func (e estimate) StandardUncertainty() float64 {
	if e.withheld != "" {
		panic("withheld")
	}
	return e.u
}

func golden(t *testing.T, name, got string) {
	t.Helper()
	path := filepath.Join("testdata", name)
	if *update {
		if err := os.WriteFile(path, []byte(got), 0o666); err != nil {
			t.Fatal(err)
		}
	}
	want, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	if got != string(want) {
		t.Errorf("%s has changed; got\n%s", path, got)
	}
}

// wellFormed fails unless s is a well-formed fragment without scripts,
// handlers or images.
func wellFormed(t *testing.T, s string) {
	t.Helper()
	d := xml.NewDecoder(strings.NewReader("<div>" + s + "</div>"))
	for {
		tok, err := d.Token()
		if err == io.EOF {
			return
		}
		if err != nil {
			t.Fatalf("not well-formed: %v\n%s", err, s)
		}
		if e, ok := tok.(xml.StartElement); ok {
			if n := strings.ToLower(e.Name.Local); n == "script" || n == "img" || n == "iframe" {
				t.Errorf("element %s", n)
			}
			for _, a := range e.Attr {
				if strings.HasPrefix(strings.ToLower(a.Name.Local), "on") {
					t.Errorf("attribute %s", a.Name.Local)
				}
			}
		}
	}
}

// text returns the plain text of what is shown.
func text(v any) string { s, _ := ViewOf(v).Data["text/plain"].(string); return s }

// recorder is a sink that keeps what it is shown.
type recorder struct {
	shown []string
	ids   []string
	views []View
}

func (r *recorder) Show(v View, id string, replace bool) {
	s, _ := v.Data["text/plain"].(string)
	r.shown = append(r.shown, s)
	if replace {
		id += " again"
	}
	r.ids = append(r.ids, id)
	r.views = append(r.views, v)
}
func (r *recorder) Clear(bool)                       {}
func (r *recorder) Ask(string, bool) (string, error) { return "", io.EOF }

func record(t *testing.T) *recorder {
	r := &recorder{}
	SetSink(r)
	t.Cleanup(func() { SetSink(nil) })
	return r
}
