package display

import (
	"fmt"
	"math"
	"strconv"
	"strings"

	"levelsum/display/internal/mark"
)

// ResultMediaType is the media type under which named results are stored in a
// notebook: {"name": ..., "value": ..., "u": ..., "unit": ...} with the numbers
// at full precision; u is absent where no standard uncertainty is known.
const ResultMediaType = "application/vnd.levelsum.result+json"

// A Number is a named number with its standard uncertainty and unit. [Result]
// shows one and stores it; prose and derivations take their numbers from it.
type Number struct {
	Name  string
	Value float64
	U     float64 // standard uncertainty, 0 if none is known
	Unit  string
	// Withheld says why no standard uncertainty is given; U is then 0.
	Withheld string
}

// NumberOf returns the number that the arguments tell, by name:
//
//	NumberOf("θ_D", res.Theta)            // a value with uncertainty, or a typed quantity
//	NumberOf("θ_D", 343.2, 0.7, "K")      // value, standard uncertainty, unit
//	NumberOf("θ_D", 343.2*unit.K, 0.7*unit.K)
//	NumberOf("κ", 1.4)                    // dimensionless
func NumberOf(name string, value ...any) (Number, error) {
	bad := func(format string, args ...any) (Number, error) {
		return Number{}, &Refusal{"Result", fmt.Sprintf("%q: ", name) + fmt.Sprintf(format, args...)}
	}
	if len(value) == 0 || len(value) > 3 {
		return bad("want a value, then perhaps its standard uncertainty and its unit; got %d arguments", len(value))
	}
	m, err := readNumber(value[0])
	if err != nil {
		return bad("%v", err)
	}
	rest := value[1:]
	unit := ""
	if n := len(rest); n > 0 {
		if s, ok := rest[n-1].(string); ok {
			unit = s
			rest = rest[:n-1]
		}
	}
	if len(rest) == 1 {
		u, err := readNumber(rest[0])
		if err != nil {
			return bad("the standard uncertainty: %v", err)
		}
		if m.typ != nil && u.typ != nil && u.typ != m.typ && !sameUnit(u.unit, m.unit) {
			return bad("the value is a %s, its standard uncertainty a %s", m.typ, u.typ)
		}
		if math.IsNaN(u.v) || math.IsInf(u.v, 0) || u.v < 0 {
			return bad("the standard uncertainty is %v, want a finite number that is not negative", u.v)
		}
		m.u, m.hasU = u.v, u.v > 0
	} else if len(rest) > 1 {
		return bad("the unit must be text, not a %T", rest[1])
	}
	switch {
	case unit != "" && m.unit != "" && !sameUnit(unit, m.unit):
		return bad("the unit given is %q, but the value is in %q; convert it first, with its In", unit, m.unit)
	case unit != "" && m.unit == "":
		m.unit = unit
	case m.typ != nil && m.unit == "":
		return bad("the value is of type %s, whose unit is not known: give it", m.typ)
	}
	if math.IsNaN(m.v) || math.IsInf(m.v, 0) {
		return bad("the value is %v", m.v)
	}
	if name == "" {
		name = m.name
	}
	if name == "" {
		return bad("a result needs a name")
	}
	n := Number{Name: name, Value: m.v, Unit: m.unit, Withheld: m.withheld}
	if m.hasU {
		n.U = m.u
	}
	return n, nil
}

func (n Number) measured() (measured, error) {
	if n.U < 0 || math.IsNaN(n.U) || math.IsInf(n.U, 0) {
		return measured{}, fmt.Errorf("%q: the standard uncertainty is %v", n.Name, n.U)
	}
	return measured{v: n.Value, u: n.U, hasU: n.U > 0, unit: n.Unit, name: n.Name, withheld: n.Withheld}, nil
}

func (m measured) rounded() rounded {
	if m.hasU && m.withheld == "" {
		return round(m.v, m.u)
	}
	if m.integer || math.Abs(m.v) < 1e9 && m.v == math.Trunc(m.v) {
		return plainNumber(m.v, 17) // a count has no digits to spare
	}
	// A number that was given with few digits is shown with all of them.
	m10, _, _ := strings.Cut(strconv.FormatFloat(math.Abs(m.v), 'e', -1, 64), "e")
	if len(m10) <= 11 {
		return plainNumber(m.v, 10)
	}
	return plainNumber(m.v, 7)
}

// Result shows a named result, rounded by its standard uncertainty, and stores
// it at full precision in the notebook, so that a later run can be compared
// with it. The arguments are those of [NumberOf]; a wrong one panics with a
// [*Refusal].
//
//	display.Result("S°(298.15 K)", s)
//	display.Result("γ", 0.692, 0.005, "mJ/(mol K2)")
func Result(name string, value ...any) {
	n, err := NumberOf(name, value...)
	if err != nil {
		panic(err)
	}
	Show(n)
}

// String returns the number as text: "θ_D = 343.21(70) K".
func (n Number) String() string {
	m, err := n.measured()
	if err != nil {
		return err.Error()
	}
	s := withUnitText(m.rounded(), n.Unit)
	if n.Name != "" {
		s = mark.Plain(mark.Label(oneLineText(n.Name))) + " = " + s
	}
	return s + n.remark()
}

func (n Number) remark() string {
	if n.Withheld == "" {
		return ""
	}
	return " (no standard uncertainty: " + oneLineText(n.Withheld) + ")"
}

// Check says why the number is no result.
func (n Number) Check() error {
	_, err := NumberOf(n.Name, n)
	return err
}

// View shows the number and stores it.
func (n Number) View() View {
	m, err := n.measured()
	if err == nil {
		err = n.Check()
	}
	if err != nil {
		return refused(err)
	}
	r := m.rounded()
	return View{Data: map[string]any{
		"text/plain": n.String(),
		"text/html": `<span style="font-variant-numeric:tabular-nums">` + mark.HTML(mark.Name(n.Name)) + " = " +
			withUnitHTML(r, n.Unit) + mark.Escape(n.remark()) + "</span>",
		"text/latex":    mark.LaTeX(mark.Name(n.Name)) + " = " + withUnitLaTeX(r, n.Unit) + mark.EscapeLaTeX(n.remark()),
		ResultMediaType: n.stored(),
	}}
}

func (n Number) stored() map[string]any {
	s := map[string]any{"name": n.Name, "value": n.Value, "unit": n.Unit}
	if n.U > 0 {
		s["u"] = n.U
	}
	if n.Withheld != "" {
		s["withheld"] = n.Withheld
	}
	return s
}

func withUnitText(r rounded, unit string) string {
	if mark.Dimensionless(unit) {
		return r.text()
	}
	return r.text() + " " + mark.Plain(mark.AsWritten(oneLineText(unit)))
}

func withUnitHTML(r rounded, unit string) string {
	if mark.Dimensionless(unit) {
		return r.html()
	}
	return r.html() + "&#160;" + mark.HTML(mark.AsWritten(unit))
}

func withUnitLaTeX(r rounded, unit string) string {
	s := "$" + r.math() + "$"
	if mark.Dimensionless(unit) {
		return s
	}
	return s + "~" + mark.LaTeX(mark.AsWritten(unit))
}
