package cell_test

import (
	"errors"
	"strings"
	"testing"

	"levelsum/kernel/cell"
	"levelsum/kernel/compile"
	"levelsum/kernel/symbols/export"
)

// hinted is a scope in which a session has declared a few things.
func hinted(t *testing.T) *cell.Scope {
	t.Helper()
	s := cell.NewScope(export.New(compile.List("../..")), map[string]string{
		"fmt": "fmt", "math": "math", "strings": "strings", "rand": "math/rand",
		"unit": "levelsum/statmech/unit", "solid": "levelsum/statmech/solid",
	})
	p, err := s.Check(&cell.Source{N: 1, Text: `
type Sample struct{ Mass, Height float64; inner int }
func (s Sample) Density() float64 { return s.Mass }
func heat(T unit.Temperature) unit.MolarEntropy { return 0 }
sample := Sample{}
temperature, gap, molar := 3*unit.K, 2*unit.PerCm, 3*unit.JPerMol
number, numbers := 3.5, []float64{1}
temperatures := []unit.Temperature{1*unit.K}
`})
	if err != nil {
		t.Fatal(err)
	}
	u, err := p.Compile(true)
	if err != nil {
		t.Fatal(err)
	}
	s.Adopt(p, u)
	s.Commit(p, func(string) bool { return true })
	return s
}

func TestHints(t *testing.T) {
	s := hinted(t)
	for _, test := range []struct{ source, want string }{
		// Unknown names.
		{"temprature", "did you mean temperature?"},
		{"tempreatures", "did you mean temperatures?"},
		{"samlpe.Mass", "did you mean sample?"},
		{"Heat(3 * unit.K)", "did you mean heat?"},
		{"var x Sampel", "did you mean Sample?"},
		{"fmt.Println(lenn(numbers))", "did you mean len?"},
		{"width := 3\nwidht + 1", "did you mean width?"},
		{"func f(length float64) float64 { return lenght }", "did you mean length?"},
		{"maht.Sqrt(2)", "did you mean math?"},
		{"Sqrt(2)", "did you mean math.Sqrt?"},
		{"sqrt(2)", "did you mean math.Sqrt?"},
		{"Sqrtt(2)", "did you mean math.Sqrt?"},
		{"2 * Sqrtt", "did you mean math.Sqrt2 or math.SqrtE?"},
		{"Einstien{}", "did you mean solid.Einstein?"},
		{"Debye{}", "did you mean solid.Debye?"},
		{"3 * K", "did you mean unit.K?"},
		{"numberz", "did you mean number or numbers?"},
		{"zzzzzzzz", ""},
		{"q", ""},
		// Packages.
		{"bits.Len(8)", `write import "math/bits" to use the package bits`},
		{"template.HTMLEscapeString(\"\")", `write import "html/template" or import "text/template" to use the package template`},
		{"template.HTML(\"\")", `write import "html/template" to use the package template`},
		{"floats.Sum(numbers)", `write import "gonum.org/v1/gonum/floats" to use the package floats`},
		{"bits.NoSuch(8)", ""},
		// Members.
		{"math.Sqr(2)", "did you mean math.Sqrt?"},
		{"math.sqrt(2)", "did you mean math.Sqrt?"},
		{"import \"math/bits\"\nbits.OneCount(3)", "did you mean bits.OnesCount?"},
		{"sample.Hieght", "did you mean Height?"},
		{"sample.Densty()", "did you mean Density?"},
		{"sample.Zzzzzzz", ""},
		{"(&sample).Masss", "did you mean Mass?"},
		// Quantities.
		{"heat(gap)", "write gap.AsTemperature()"},
		{"heat(gap + gap)", "write (gap + gap).AsTemperature()"},
		{"heat(number)", "write unit.Temperature(number) * unit.K"},
		{"math.Sqrt(temperature)", "write temperature.In(unit.K)"},
		{"var m unit.MolarEnergy = gap", "write gap.PerMole()"},
		{"var ts []unit.Temperature = numbers", "write unit.Temperatures(numbers, unit.K)"},
		{"numbers = temperatures", "write unit.TemperaturesIn(temperatures, unit.K)"},
		{"gap + temperature", "write gap + temperature.AsEnergy(), or gap.AsTemperature() + temperature"},
		{"number * temperature", "write unit.Temperature(number) * temperature"},
		{"temperature / number", "write temperature / unit.Temperature(number)"},
		{"temperature < number", "write temperature < unit.Temperature(number) * unit.K"},
		{"var p unit.Pressure = gap", ""},
		{"var s string = gap", ""},
	} {
		_, err := s.Check(&cell.Source{N: 2, Text: test.source})
		var ds cell.Diagnostics
		if !errors.As(err, &ds) {
			t.Errorf("%q: no error", test.source)
			continue
		}
		if ds[0].Hint != test.want {
			t.Errorf("%q: hint %q, want %q, to %s", test.source, ds[0].Hint, test.want, ds[0].Msg)
		}
	}
}

// What a hint tells to write compiles.
func TestHintsCompile(t *testing.T) {
	s := hinted(t)
	for _, expr := range []string{"heat(gap.AsTemperature())", "heat(unit.Temperature(number) * unit.K)", "math.Sqrt(temperature.In(unit.K))",
		"gap + temperature.AsEnergy()", "temperature / unit.Temperature(number)", "unit.TemperaturesIn(temperatures, unit.K)"} {
		if _, err := s.Check(&cell.Source{N: 2, Text: expr}); err != nil {
			t.Errorf("%s: %v", expr, err)
		}
	}
}

func TestUselessCalls(t *testing.T) {
	s := hinted(t)
	for _, test := range []struct{ source, want string }{
		{"math.Sqrt(2)\nx := 1", "In[2]:1:1: the result of math.Sqrt is not used"},
		{"if true {\n\tstrings.ToUpper(\"a\")\n}", "In[2]:2:2: the result of strings.ToUpper is not used"},
		{"func f() {\n\tfmt.Sprintf(\"%d\", 1)\n}", "In[2]:2:2: the result of fmt.Sprintf is not used"},
		{"math.Sqrt(2)", ""}, // shown
		{"x := math.Sqrt(2)", ""},
		{"fmt.Println(1)\nx := 1", ""},
		{"strings.Map(func(r rune) rune { return r }, \"a\")\nx := 1", ""},
		{"strings.NewReader(\"a\").Len()\nx := 1", ""},
		{"heat(3 * unit.K)\nx := 1", ""},
	} {
		p, err := s.Check(&cell.Source{N: 2, Text: test.source})
		if err != nil {
			t.Errorf("%q: %v", test.source, err)
			continue
		}
		var got []string
		for _, w := range p.Warnings {
			if strings.HasPrefix(w.Msg, "the result of") {
				got = append(got, w.String())
			}
		}
		if strings.Join(got, "\n") != test.want {
			t.Errorf("%q: warnings %q, want %q", test.source, got, test.want)
		}
	}
}
