package display

import (
	"fmt"
	"strings"

	"levelsum/display/internal/mark"
)

// A Paragraph is prose whose numbers are live: slots like [[θ]] are filled with
// values, rounded by their uncertainties and with their units, each time the
// cell runs. [[θ|value]] leaves the unit away, [[θ|unit]] is the unit alone.
// The text is Markdown with LaTeX between dollar signs; what fills a slot is
// escaped. A slot that names nothing is an error.
//
//	display.Paragraph{
//		Text:   "The fit gives [[θ]], so half of $3R$ is reached at [[T]].",
//		Values: display.Values{"θ": res.Theta, "T": half},
//	}
type Paragraph struct {
	Text   string
	Values Values
}

// Check says why the paragraph cannot be shown.
func (p Paragraph) Check() error {
	_, _, _, err := p.read()
	return err
}

func (p Paragraph) read() (ps []piece, names []string, vals map[string]slotValue, err error) {
	if ps, err = splitSlots(p.Text); err != nil {
		return nil, nil, nil, refuse("Paragraph", err)
	}
	vals = map[string]slotValue{}
	for _, c := range ps {
		if c.slot == "" {
			continue
		}
		names = append(names, c.slot)
		v, ok := p.Values[c.slot]
		if !ok {
			return nil, nil, nil, &Refusal{"Paragraph", fmt.Sprintf("the slot [[%s]] names nothing; %s", c.slot, known(p.Values))}
		}
		s, err := readSlot(c.slot, v)
		if err != nil {
			return nil, nil, nil, refuse("Paragraph", err)
		}
		vals[c.slot] = s
	}
	return ps, names, vals, nil
}

// View shows the paragraph and stores its numbers.
func (p Paragraph) View() View {
	ps, names, vals, err := p.read()
	if err != nil {
		return refused(err)
	}
	var all []namedSlot
	for _, name := range names {
		all = append(all, namedSlot{name, vals[name]})
	}
	var text, md strings.Builder
	inMath, dollars := false, false
	for _, c := range ps {
		if c.slot == "" {
			text.WriteString(mark.Clean(c.text))
			md.WriteString(safeMarkdown(c.text, &inMath))
			continue
		}
		v := vals[c.slot]
		p := v.plain(c.form)
		text.WriteString(p)
		dollars = dollars || strings.Contains(p, "$")
		if inMath {
			md.WriteString(v.math(c.form))
		} else {
			md.WriteString(v.markdown(c.form))
		}
	}
	plain := text.String()
	if !dollars { // else what is data could be taken for a formula
		plain = plainProse(plain)
	}
	return View{Data: map[string]any{
		"text/plain":     plain,
		"text/markdown":  md.String(),
		NumbersMediaType: stored(all),
	}}
}

// safeMarkdown escapes what would begin HTML in the author's text, and leaves
// LaTeX between dollar signs alone.
func safeMarkdown(s string, inMath *bool) string {
	var b strings.Builder
	s = mark.Clean(s)
	for i := 0; i < len(s); i++ {
		switch c := s[i]; {
		case c == '\\' && i+1 < len(s) && s[i+1] == '$':
			b.WriteString(`\$`)
			i++
		case c == '$':
			if i+1 < len(s) && s[i+1] == '$' {
				b.WriteByte('$')
				i++
			}
			b.WriteByte('$')
			*inMath = !*inMath
		case c == '<' && *inMath: // no tag begins with a space
			b.WriteByte('<')
			if i+1 == len(s) || s[i+1] != ' ' {
				b.WriteByte(' ')
			}
		case c == '<':
			b.WriteString("&lt;")
		default:
			b.WriteByte(c)
		}
	}
	return b.String()
}

var markdownEscaper = strings.NewReplacer(`\`, `\\`, "`", "\\`", "*", `\*`, "_", `\_`, "{", `\{`, "}", `\}`, "[", `\[`, "]", `\]`,
	"#", `\#`, "!", `\!`, "|", `\|`, "$", `\$`, "~", `\~`, "&", "&amp;", "<", "&lt;", ">", "&gt;", "\n", " ")

// escapeMarkdown makes text from data plain in Markdown.
func escapeMarkdown(s string) string { return markdownEscaper.Replace(mark.Clean(s)) }

func (v slotValue) plain(form string) string {
	switch {
	case !v.number:
		return oneLineText(v.text)
	case form == "value":
		return v.m.rounded().text()
	case form == "unit":
		return mark.Plain(mark.AsWritten(oneLineText(v.m.unit)))
	}
	return withUnitText(v.m.rounded(), v.m.unit) + Number{Withheld: v.m.withheld}.remark()
}

// markdown writes the value with HTML for raised digits only.
func (v slotValue) markdown(form string) string {
	switch {
	case !v.number:
		return escapeMarkdown(v.text)
	case form == "value":
		return v.m.rounded().html()
	case form == "unit":
		return mark.HTML(mark.AsWritten(v.m.unit))
	}
	return withUnitHTML(v.m.rounded(), v.m.unit) + escapeMarkdown(Number{Withheld: v.m.withheld}.remark())
}

// math writes the value for LaTeX's math mode.
func (v slotValue) math(form string) string {
	if !v.number {
		return `\text{` + mathText.Replace(mark.EscapeLaTeX(v.text)) + `}`
	}
	unit := unitMath(v.m.unit)
	switch {
	case form == "value" || unit == "" && form == "":
		return v.m.rounded().math()
	case form == "unit":
		return unit
	}
	return v.m.rounded().math() + `\,` + unit
}

// mathText hides from Markdown what it could take for a link or for code.
var mathText = strings.NewReplacer("[", "{[}", "]", "{]}", "`", "{`}")

func unitMath(unit string) string {
	if mark.Dimensionless(unit) {
		return ""
	}
	rs, _ := mark.Unit(unit)
	return strings.NewReplacer("\u00a0", `\,`, " ", `\,`).Replace(mark.Math(rs))
}
