package display

import (
	"fmt"
	"math"
	"regexp"
	"strings"

	"levelsum/display/internal/mark"
)

// A Derivation shows how a number comes about: formulas with their symbols,
// the numbers put in, and the results, all from live values.
//
//	display.Derivation{
//		Title: "Entropy of equally probable states",
//		Steps: []display.Step{{
//			Formula: `[[S]] = [[k]] \ln [[W]]`,
//			Symbols: []display.Symbol{
//				{Name: "S", Meaning: "entropy", Value: s},
//				{Name: "k", Meaning: "Boltzmann constant", Value: k, Unit: "J/K"},
//				{Name: "W", Meaning: "number of states", Value: 16},
//			},
//			Result: "S",
//			Source: "...",
//		}},
//	}
type Derivation struct {
	Title string
	Steps []Step
	Notes []string
}

// A Step is one formula of a [Derivation]. The formula is LaTeX with a slot
// for each symbol: it is written once with the symbols and once with their
// numbers, so that the two cannot differ. Result names the symbol that stands
// on the left: it keeps its symbol where the numbers are put in, and its value
// ends the step.
type Step struct {
	Text    string // a sentence before the formula
	Formula string
	Symbols []Symbol
	Result  string // the name of one of Symbols
	Source  string // where the formula is from
	// Compute works the result out again from the numbers of the other symbols,
	// in the units that they are shown in. A result that differs by more than a
	// part in 1e9 is refused: a wrong unit, or a formula that is not the one
	// that gave the number. It is also evaluated in other base units, and
	// refused if its units do not fit.
	Compute func(number map[string]float64) float64
}

// A Symbol of a formula.
type Symbol struct {
	Name    string // in the slots: "R", "θ_D", "C_{p,m}"
	LaTeX   string // how it is written, made from Name if empty
	Meaning string
	Value   any    // a number, typed quantity, value with uncertainty; nil for a symbol without a number
	Unit    string // for plain numbers; "1" for none
}

type stepRead struct {
	Step
	pieces []piece
	vals   map[string]slotValue
	latex  map[string]string
}

// Check says why the derivation cannot be shown.
func (d Derivation) Check() error {
	_, err := d.read()
	return err
}

func (d Derivation) read() ([]stepRead, error) {
	if len(d.Steps) == 0 {
		return nil, &Refusal{"Derivation", "there are no steps"}
	}
	var out []stepRead
	for i, s := range d.Steps {
		r, err := s.read()
		if err != nil {
			return nil, &Refusal{"Derivation", fmt.Sprintf("step %d: %v", i+1, err)}
		}
		out = append(out, r)
	}
	return out, nil
}

func (s Step) read() (stepRead, error) {
	r := stepRead{Step: s, vals: map[string]slotValue{}, latex: map[string]string{}}
	var err error
	if r.pieces, err = splitSlots(s.Formula); err != nil {
		return r, err
	}
	for _, word := range []string{`\href`, `\url`, `\require`, `\class`, `\cssId`, `\style`, `\unicode`, `\data`} {
		if strings.Contains(s.Formula, word) {
			return r, fmt.Errorf("the formula holds %s, which is no mathematics", word)
		}
	}
	used := map[string]bool{}
	for _, p := range r.pieces {
		used[p.slot] = true
	}
	for _, y := range s.Symbols {
		if r.latex[y.Name] != "" {
			return r, fmt.Errorf("the symbol %s is declared twice", y.Name)
		}
		if y.Meaning == "" {
			return r, fmt.Errorf("the symbol %s has no meaning", y.Name)
		}
		if !used[y.Name] {
			return r, fmt.Errorf("the symbol %s has no slot [[%s]] in the formula", y.Name, y.Name)
		}
		r.latex[y.Name] = y.LaTeX
		if y.LaTeX == "" {
			r.latex[y.Name] = mark.Math(mark.Symbol(y.Name))
		}
		if y.Value == nil {
			continue
		}
		v, err := readSlot(y.Name, y.Value)
		if err != nil {
			return r, err
		}
		if v.number {
			switch {
			case y.Unit != "" && v.m.unit != "" && !sameUnit(y.Unit, v.m.unit):
				return r, fmt.Errorf("the symbol %s is said to be in %q, but its value is in %q", y.Name, y.Unit, v.m.unit)
			case v.m.unit == "" && y.Unit == "" && !v.m.integer:
				return r, fmt.Errorf("the symbol %s has a plain number for a value: give its Unit (\"1\" for none)", y.Name)
			case y.Unit != "":
				v.m.unit = y.Unit
			}
		}
		r.vals[y.Name] = v
	}
	for _, p := range r.pieces {
		if p.slot != "" && r.latex[p.slot] == "" {
			return r, fmt.Errorf("the slot [[%s]] names no symbol", p.slot)
		}
	}
	if s.Result != "" {
		if v, ok := r.vals[s.Result]; !ok || !v.number {
			return r, fmt.Errorf("the result %s is no symbol with a number", s.Result)
		}
	}
	return r, r.recompute()
}

// computeTolerance allows for another order of the same operations.
const computeTolerance = 1e-9

func (r *stepRead) recompute() (err error) {
	if r.Compute == nil {
		return nil
	}
	if r.Result == "" {
		return fmt.Errorf("Compute is given, but no Result")
	}
	numbers := map[string]float64{}
	for name, v := range r.vals {
		if name != r.Result && v.number {
			numbers[name] = v.m.v
		}
	}
	defer func() {
		if p := recover(); p != nil {
			err = fmt.Errorf("Compute panicked: %s", panicText(p))
		}
	}()
	m := r.vals[r.Result].m
	if got := r.Compute(numbers); !(math.Abs(got-m.v) <= computeTolerance*math.Abs(m.v)) {
		return fmt.Errorf("the formula gives %s = %s %s from the numbers put in, but the result is %s %s",
			r.Result, full(got), m.unit, full(m.v), m.unit)
	}
	units := map[string]string{}
	for name, v := range r.vals {
		units[name] = v.m.unit
	}
	return checkUnits(r.Compute, numbers, units, m.unit)
}

// symbols is the formula with its symbols, numbers the one with numbers.
func (r *stepRead) symbols() string {
	var b strings.Builder
	for _, p := range r.pieces {
		if p.slot == "" {
			b.WriteString(p.text)
		} else {
			b.WriteString("{" + r.latex[p.slot] + "}")
		}
	}
	return b.String()
}

// follows reports whether slot i multiplies what stands before it without a
// sign, so that its number would be read with the one before: 3 and 0.5 as 30.5.
func (r *stepRead) follows(i int) bool {
	for i--; i >= 0; i-- {
		p := r.pieces[i]
		if p.slot != "" {
			return true
		}
		t := p.text
		for cut := true; cut; {
			cut = false
			for _, space := range []string{" ", "~", `\,`, `\;`, `\:`, `\!`, `\ `} {
				if strings.HasSuffix(t, space) {
					t, cut = strings.TrimSuffix(t, space), true
				}
			}
		}
		if t != "" {
			return strings.ContainsAny(t[len(t)-1:], "0123456789.})")
		}
	}
	return false
}

// alone reports whether slot i is all that a group holds, such as a part of a
// fraction, so that its number needs no brackets.
func (r *stepRead) alone(i int) bool {
	if i == 0 || i == len(r.pieces)-1 || r.pieces[i-1].slot != "" || r.pieces[i+1].slot != "" {
		return false
	}
	before, after := strings.TrimRight(r.pieces[i-1].text, " "), strings.TrimLeft(r.pieces[i+1].text, " ")
	return strings.HasSuffix(before, "{") && strings.HasPrefix(after, "}") && !strings.HasPrefix(after, "}^")
}

func (r *stepRead) numbers() string {
	var b strings.Builder
	for i, p := range r.pieces {
		v, ok := r.vals[p.slot]
		switch {
		case p.slot == "":
			b.WriteString(p.text)
		case !ok || p.slot == r.Result:
			b.WriteString("{" + r.latex[p.slot] + "}")
		default:
			s := v.math("")
			if (strings.ContainsAny(s, `-\(`) || r.follows(i)) && !r.alone(i) {
				s = `\left(` + s + `\right)`
			}
			b.WriteString("{" + s + "}")
		}
	}
	return b.String()
}

func (r *stepRead) hasNumbers() bool {
	for name := range r.vals {
		if name != r.Result {
			return true
		}
	}
	return false
}

// result is "S = 154.8 J/(mol K)" in LaTeX.
func (r *stepRead) result() string {
	return r.latex[r.Result] + " = " + r.vals[r.Result].math("")
}

// View shows the derivation as Markdown, LaTeX and text.
func (d Derivation) View() View {
	steps, err := d.read()
	if err != nil {
		return refused(err)
	}
	var md, tex, text strings.Builder
	if d.Title != "" {
		md.WriteString("**" + escapeMarkdown(d.Title) + "**\n\n")
		tex.WriteString("\\paragraph{" + mark.EscapeLaTeX(d.Title) + "}\n")
		text.WriteString(oneLineText(d.Title) + "\n")
	}
	var all []namedSlot
	for i := range steps {
		r := &steps[i]
		r.markdown(&md)
		r.tex(&tex)
		r.text(&text)
		for _, y := range r.Symbols {
			if v, ok := r.vals[y.Name]; ok {
				all = append(all, namedSlot{y.Name, v})
			}
		}
	}
	for _, n := range Notes(d.Notes...) {
		md.WriteString(escapeMarkdown(n) + "\n\n")
		tex.WriteString(mark.EscapeLaTeX(n) + "\n\n")
		text.WriteString(oneLineText(n) + "\n")
	}
	return View{Data: map[string]any{
		"text/plain":     strings.TrimSuffix(text.String(), "\n"),
		"text/markdown":  strings.TrimSuffix(md.String(), "\n"),
		"text/latex":     tex.String(),
		NumbersMediaType: stored(all),
	}}
}

// display math must be one paragraph and must not hold what begins HTML.
func mathBlock(s string) string {
	return strings.NewReplacer("\n", " ", "< ", "< ", "<", "< ").Replace(mark.Clean(s))
}

// htmlRelations are the names by which MathJax knows < and >; LaTeX has none.
var htmlRelations = regexp.MustCompile(`\\[lg]t\b ?`)

// latexMath writes a formula for LaTeX itself.
func latexMath(s string) string {
	return htmlRelations.ReplaceAllStringFunc(s, func(m string) string {
		if m[1] == 'l' {
			return "<"
		}
		return ">"
	})
}

// latexProse writes a sentence with formulas between dollar signs for LaTeX.
func latexProse(s string) string {
	var b strings.Builder
	for i, part := range strings.Split(strings.ReplaceAll(s, `\$`, "\x00"), "$") {
		if i%2 == 1 {
			b.WriteString("$" + latexMath(part) + "$")
			continue
		}
		b.WriteString(mark.EscapeLaTeX(strings.ReplaceAll(part, "\x00", "$")))
	}
	return b.String()
}

func (r *stepRead) markdown(b *strings.Builder) {
	if r.Text != "" {
		in := false
		b.WriteString(safeMarkdown(r.Text, &in) + "\n\n")
	}
	b.WriteString("$$" + mathBlock(breakFormula(r.symbols())) + "$$\n\n")
	if len(r.Symbols) > 0 {
		b.WriteString("| symbol | meaning | value |\n|:--|:--|:--|\n")
		for _, y := range r.Symbols {
			val := ""
			if v, ok := r.vals[y.Name]; ok {
				val = v.markdown("")
			}
			b.WriteString("| $" + strings.ReplaceAll(mathBlock(r.latex[y.Name]), "|", `\vert `) + "$ | " + escapeMarkdown(y.Meaning) + " | " + val + " |\n")
		}
		b.WriteString("\n")
	}
	if r.hasNumbers() {
		b.WriteString("$$" + mathBlock(breakFormula(r.numbers())) + "$$\n\n")
	}
	if r.Result != "" {
		b.WriteString("$$" + mathBlock(breakFormula(r.result())) + "$$\n\n")
	}
	if r.Source != "" {
		b.WriteString("Source: " + escapeMarkdown(r.Source) + "\n\n")
	}
}

func (r *stepRead) tex(b *strings.Builder) {
	if r.Text != "" {
		b.WriteString(latexProse(r.Text) + "\n")
	}
	b.WriteString("\\[" + latexMath(breakFormula(r.symbols())) + "\\]\n")
	if len(r.Symbols) > 0 {
		b.WriteString("\\begin{tabular}{lll}\n")
		for _, y := range r.Symbols {
			val := ""
			if v, ok := r.vals[y.Name]; ok {
				val = "$" + v.math("") + "$"
			}
			b.WriteString("$" + r.latex[y.Name] + "$ & " + mark.EscapeLaTeX(y.Meaning) + " & " + val + " \\\\\n")
		}
		b.WriteString("\\end{tabular}\n")
	}
	if r.hasNumbers() {
		b.WriteString("\\[" + latexMath(breakFormula(r.numbers())) + "\\]\n")
	}
	if r.Result != "" {
		b.WriteString("\\[" + r.result() + "\\]\n")
	}
	if r.Source != "" {
		b.WriteString("Source: " + mark.EscapeLaTeX(r.Source) + "\n\n")
	}
}

func (r *stepRead) text(b *strings.Builder) {
	if r.Text != "" {
		b.WriteString(oneLineText(plainProse(r.Text)) + "\n")
	}
	var formula strings.Builder
	for _, p := range r.pieces {
		if p.slot == "" {
			formula.WriteString(p.text)
		} else {
			formula.WriteString(mark.Plain(mark.Symbol(p.slot)))
		}
	}
	b.WriteString("  " + plainFormula(formula.String()) + "\n")
	for _, y := range r.Symbols {
		b.WriteString("    " + mark.Plain(mark.Symbol(oneLineText(y.Name))) + ": " + oneLineText(y.Meaning))
		if v, ok := r.vals[y.Name]; ok && y.Name != r.Result {
			b.WriteString(" = " + v.plain(""))
		}
		b.WriteString("\n")
	}
	if r.Result != "" {
		b.WriteString("  " + mark.Plain(mark.Symbol(oneLineText(r.Result))) + " = " + r.vals[r.Result].plain("") + "\n")
	}
	if r.Source != "" {
		b.WriteString("  Source: " + oneLineText(r.Source) + "\n")
	}
}
