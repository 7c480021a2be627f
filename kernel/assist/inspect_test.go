package assist

import (
	"go/build"
	"strings"
	"testing"
)

func (s session) ValueOf(name string) (string, int, bool) {
	if name == "θ" {
		return "343", 7, true
	}
	return "", 0, false
}

// In the sources | is the cursor. Want are texts that the description has, in
// order.
func TestInspect(t *testing.T) {
	s := newSession(t)
	docs := NewDocs(build.Default.GOROOT, "levelsum", "../..")
	for _, test := range []struct {
		name, source string
		detail       int
		want         []string
	}{
		{"function of a package", "math.Sq|rt(2)", 0, []string{"func math.Sqrt(x float64) float64", "Sqrt returns the square root of x.", "Sqrt(NaN) = NaN"}},
		{"at the end of a name", "math.Sqrt|", 0, []string{"func math.Sqrt"}},
		{"among the arguments", "math.Pow(2, |)", 0, []string{"func math.Pow(x float64, y float64) float64"}},
		{"in an open call", "math.Pow(2, |", 0, []string{"func math.Pow"}},
		{"inner of two calls", "math.Pow(math.Sqrt(|), 2)", 0, []string{"func math.Sqrt"}},
		{"method", "time.Now().Ad|d(3)", 0, []string{"func (time.Time) Add(d time.Duration) time.Time", "Add returns the time t+d."}},
		{"constant", "time.Sec|ond", 0, []string{"const time.Second time.Duration = 1000000000"}},
		{"type", "var d time.Dura|tion", 0, []string{"type time.Duration int64", "Hours() float64", "A Duration represents the elapsed time"}},
		{"type of the session", "Sam|ple{}", 0, []string{"type Sample struct", "\tMass float64", "\tlabel string", "\tSetMass(m float64)"}},
		{"session variable", "θ| * 2", 0, []string{"var θ float64", "// set by In[7]", "θ = 343"}},
		{"session function", "hea|t(0)", 0, []string{"func heat(d time.Duration, more ...Sample) float64"}},
		{"field", "run.Ma|ss", 0, []string{"field Mass float64"}},
		{"package", "mat|h.Sqrt(2)", 0, []string{"package math // \"math\"", "names", "Package math provides"}},
		{"package alone", "math|", 1, []string{"package math", "\tAbs(x float64) float64", "\tPi untyped float"}},
		{"builtin", "len|(list)", 0, []string{"func len"}},
		{"variable of the cell", "alpha := 3.5\nalp|ha", 0, []string{"var alpha float64"}},
		{"in a broken cell", "x := nosuch(\nmath.Sqr|t(2", 0, []string{"func math.Sqrt"}},
		{"in a function", "func f(width float64) float64 { return wid|th }", 0, []string{"var width float64"}},
	} {
		t.Run(test.name, func(t *testing.T) {
			cursor := strings.IndexByte(test.source, '|')
			got, ok := Inspect(s, docs, test.source[:cursor]+test.source[cursor+1:], cursor, test.detail)
			if !ok {
				t.Fatal("nothing is known")
			}
			for _, text := range []string{got.Text, got.Markdown} {
				rest := text
				for _, w := range test.want {
					_, after, found := strings.Cut(rest, w)
					if !found {
						t.Errorf("no %q in order in\n%s", w, text)
						break
					}
					rest = after
				}
			}
		})
	}
	for _, source := range []string{"|", "nosuch|", "1 + |2", "\"math|\"", "// ma|th", "x := 3 + |"} {
		cursor := strings.IndexByte(source, '|')
		if got, ok := Inspect(s, docs, source[:cursor]+source[cursor+1:], cursor, 0); ok {
			t.Errorf("%q: %s, want nothing", source, got.Text)
		}
	}
}

// A type with many members is listed whole only with detail.
func TestInspectDetail(t *testing.T) {
	s := newSession(t)
	const source = "time.Time{}"
	few, _ := Inspect(s, nil, source, 6, 0)
	all, _ := Inspect(s, nil, source, 6, 1)
	if !strings.Contains(few.Text, "// and ") || strings.Contains(all.Text, "// and ") || !strings.Contains(all.Text, "\tYearDay() int") {
		t.Errorf("without detail\n%s\nwith detail\n%s", few.Text, all.Text)
	}
	if strings.Contains(all.Text, "wall") {
		t.Error("a field that a cell cannot use is listed")
	}
}

func TestDocsOfOurOwn(t *testing.T) {
	d := NewDocs("", "levelsum", "../..")
	if got := d.load("levelsum/display")[""]; !strings.HasPrefix(got, "Package display holds values that a reader looks at") {
		t.Errorf("documentation of display: %q", got)
	}
	if got := d.load("levelsum/display")["Text"]; !strings.HasPrefix(got, "Text returns a View") {
		t.Errorf("documentation of display.Text: %q", got)
	}
	for _, path := range []string{"levelsum/nosuch", "gonum.org/v1/gonum/mat", "fmt", "levelsumother"} {
		if got := d.load(path); len(got) != 0 {
			t.Errorf("documentation of %s: %q", path, got)
		}
	}
}
