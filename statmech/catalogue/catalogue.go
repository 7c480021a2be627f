package catalogue

import (
	"html"
	"slices"
	"strconv"
	"strings"
	"unicode/utf8"

	"levelsum/display"
	"levelsum/statmech/gas"
	"levelsum/statmech/unit"
)

// An Entry is one thing that there is: its name as a cell writes it, and a line
// about it.
type Entry struct {
	Name, Line string
}

// A Part is a group of entries.
type Part struct {
	Title   string
	Entries []Entry
}

// Contents are all groups. A notebook shows them as tables.
type Contents []Part

// All lists models, calculations, units, the data and the worked notebooks that
// come with Levelsum, a line each. Names with a slash are files in the folder
// that Levelsum was installed from.
func All() Contents {
	return Contents{
		{"Models", slices.Clone(models)},
		{"Calculations", slices.Clone(calculations)},
		{"Units, by the quantity they measure", slices.Clone(units)},
		{"Data of the library", dataSets()},
		{"Files of data, in Levelsum's source", slices.Clone(sets)},
		{"Worked notebooks, in Levelsum's source", slices.Clone(notebooks)},
	}
}

// dataSets lists the data of the library: what ships decides, not this list.
func dataSets() []Entry {
	isotopes := 0
	for _, e := range unit.Elements() {
		isotopes += len(e.Isotopes)
	}
	all := []Entry{
		{"unit.Constants()", strconv.Itoa(len(unit.Constants())) + " constants, " + unit.ConstantsSource},
		{`unit.ElementOf("Cl")`, strconv.Itoa(len(unit.Elements())) + " elements with " + strconv.Itoa(isotopes) + " isotopes: masses and abundances"},
	}
	for _, name := range gas.Library() {
		line := "molecular constants"
		if d, err := gas.Find(name); err == nil {
			line = describe(d)
		}
		all = append(all, Entry{"gas.FromLibrary(" + strconv.Quote(name) + ")", line})
	}
	return all
}

// describe says what a molecule of the library is known by, and from where.
func describe(d gas.Description) string {
	var line string
	switch {
	case d.Diatomic != nil:
		line = d.Formula + ", diatomic, " + count(len(d.Diatomic.States), "electronic state")
	case len(d.Constants) == 0 && len(d.Moments) == 0 && len(d.Atoms) == 0:
		line = d.Formula + ", atom, " + count(max(1, len(d.Electronic)), "level")
	default:
		line = d.Formula + ", " + count(len(d.Vibrations), "wavenumber")
		if n := len(d.Torsions); n > 0 {
			line += ", " + count(n, "torsion")
		}
	}
	if len(d.Sources) > 0 {
		line += "; " + d.Sources[0]
	}
	return line
}

func count(n int, what string) string {
	if n != 1 {
		what += "s"
	}
	return strconv.Itoa(n) + " " + what
}

// String lists the contents, a line for each entry.
func (c Contents) String() string {
	var b strings.Builder
	for i, p := range c {
		if i > 0 {
			b.WriteString("\n")
		}
		b.WriteString(p.Title + "\n")
		width := 0
		for _, e := range p.Entries {
			width = max(width, utf8.RuneCountInString(e.Name))
		}
		for _, e := range p.Entries {
			b.WriteString("  " + e.Name + strings.Repeat(" ", width-utf8.RuneCountInString(e.Name)) + "  " + e.Line + "\n")
		}
	}
	return b.String()
}

// View shows the contents as plain text and as tables.
func (c Contents) View() display.View {
	var b strings.Builder
	for _, p := range c {
		b.WriteString("<h4>" + html.EscapeString(p.Title) + "</h4>\n<table>\n")
		for _, e := range p.Entries {
			b.WriteString(`<tr><td style="text-align:left"><code>` + html.EscapeString(e.Name) + `</code></td><td style="text-align:left">` + html.EscapeString(e.Line) + "</td></tr>\n")
		}
		b.WriteString("</table>\n")
	}
	return display.View{Data: map[string]any{"text/plain": strings.TrimSuffix(c.String(), "\n"), "text/html": b.String()}}
}
