package display

import (
	"encoding/csv"
	"fmt"
	"os"
	"path/filepath"
	"slices"
	"strings"

	"levelsum/display/internal/mark"
)

// Check says why the figure cannot be shown.
func (f Figure) Check() error {
	_, _, err := f.read()
	return err
}

// View shows the figure: as SVG if a renderer has been registered, and always
// as text that says what is plotted.
func (f Figure) View() View {
	sc, all, err := f.read()
	if err != nil {
		return refused(err)
	}
	text := sc.Alt
	if f.Caption != "" {
		text = oneLineText(f.Caption) + "\n" + text
	}
	if renderer == nil {
		return Text(text + "\n" + f.numbers(sc.X.Quantity, all))
	}
	drawn, err := renderer(sc, "svg", "svg file")
	if err != nil {
		return refused(refuse("Figure", err))
	}
	html := string(drawn[0])
	if f.Caption != "" {
		html += `<p style="margin:0.2em 0;max-width:46em">` + mark.HTML(mark.Label(f.Caption)) + "</p>\n"
	}
	return View{Data: map[string]any{
		"text/plain":    oneLineText(strings.ReplaceAll(text, "\n", " ")),
		"text/html":     html,
		"image/svg+xml": string(drawn[1]),
	}}
}

// Save writes the figure to a file; the ending decides the form: .svg, .pdf
// and .png (300 dots per inch) need a renderer, .csv has the plotted numbers.
func (f Figure) Save(path string) error {
	sc, _, err := f.read()
	if err != nil {
		return err
	}
	format := ""
	switch ext := strings.ToLower(filepath.Ext(path)); ext {
	case ".csv":
		s, err := f.CSV()
		if err != nil {
			return err
		}
		return os.WriteFile(path, []byte(s), 0o666)
	case ".svg":
		format = "svg file"
	case ".pdf", ".png":
		format = ext[1:]
	default:
		return &Refusal{"Figure", fmt.Sprintf("cannot write %q: the ending is one of .svg, .pdf, .png, .csv", filepath.Base(path))}
	}
	if renderer == nil {
		return &Refusal{"Figure", "nothing is registered that draws: call draw.Register() of levelsum/display/draw first"}
	}
	b, err := renderer(sc, format)
	if err != nil {
		return refuse("Figure", err)
	}
	return os.WriteFile(path, b[0], 0o666)
}

// CSV returns the plotted numbers at full precision, one row a point. Columns
// that no data fill are left away.
func (f Figure) CSV() (string, error) {
	sc, all, err := f.read()
	if err != nil {
		return "", err
	}
	y := sc.Panels[0].Y
	type col struct {
		head string
		get  func(plotted) []float64
	}
	cols := []col{
		{csvHead(orElse(sc.X.Quantity, "x"), sc.X.Unit), func(p plotted) []float64 { return p.x }},
		{csvHead("u("+orElse(sc.X.Quantity, "x")+")", sc.X.Unit), func(p plotted) []float64 { return p.xerr }},
		{csvHead(orElse(y.Quantity, "y"), y.Unit), func(p plotted) []float64 { return p.y }},
		{csvHead("u("+orElse(y.Quantity, "y")+")", y.Unit), func(p plotted) []float64 { return p.yerr }},
		{"lower", func(p plotted) []float64 { return p.lo }},
		{"upper", func(p plotted) []float64 { return p.hi }},
	}
	cols = slices.DeleteFunc(cols, func(c col) bool {
		return !slices.ContainsFunc(all, func(p plotted) bool { return c.get(p) != nil })
	})
	var b strings.Builder
	w := csv.NewWriter(&b)
	rec := []string{"data", "name"}
	for _, c := range cols {
		rec = append(rec, c.head)
	}
	_ = w.Write(rec) // a strings.Builder takes all
	for _, p := range all {
		what := p.what
		if p.right {
			what += " (right axis)"
		}
		for i := range p.x {
			rec = append(rec[:0], what, p.name)
			for _, c := range cols {
				cell := ""
				if v := c.get(p); v != nil {
					cell = full(v[i])
				}
				rec = append(rec, cell)
			}
			_ = w.Write(rec)
		}
	}
	w.Flush()
	return b.String(), nil
}

func orElse(s, other string) string {
	if s == "" {
		return other
	}
	return s
}

// numbers is the figure where nothing can draw: a short table of each set.
func (f Figure) numbers(_ string, all []plotted) string {
	var b strings.Builder
	for _, p := range all {
		t := Table{Limit: 8}
		t.Columns = append(t.Columns, Column{Quantity: "x", Values: p.x})
		if p.y != nil {
			t.Columns = append(t.Columns, Column{Quantity: "y", Values: p.y, U: nilIfNone(p.yerr)})
		}
		if p.lo != nil {
			t.Columns = append(t.Columns, Column{Quantity: "lower", Values: p.lo}, Column{Quantity: "upper", Values: p.hi})
		}
		s, err := t.sheet()
		if err != nil {
			continue
		}
		s.notes = nil
		fmt.Fprintf(&b, "%s\n%s\n", strings.TrimSpace(p.what+" "+oneLineText(p.name)), s.text())
	}
	return strings.TrimSuffix(b.String(), "\n")
}

func nilIfNone(u []float64) any {
	if u == nil {
		return nil
	}
	return u
}

// describe makes the alternative text from the data.
func (r *figureReader) describe() string {
	label := func(q, u string) string { return mark.Plain(mark.Over(q, u)) }
	var b strings.Builder
	y := label(r.y.quantity, r.out.Panels[0].Y.Unit)
	switch {
	case len(r.f.Ladders) > 0:
		fmt.Fprintf(&b, "Level diagram, %s", y)
	case r.f.Map != nil:
		fmt.Fprintf(&b, "Map of %s over %s and %s", label(r.f.Map.Quantity, r.f.Map.Unit), label(r.x.quantity, r.x.unit), y)
	default:
		fmt.Fprintf(&b, "Figure of %s against %s", y, label(r.x.quantity, r.out.X.Unit))
	}
	const most = 12
	maps := 0
	for i, p := range r.all {
		if strings.HasPrefix(p.what, "map") {
			maps++
			continue
		}
		if i-maps == most {
			fmt.Fprintf(&b, "; and %d more", len(r.all)-i)
			break
		}
		name := ""
		if p.name != "" {
			name = fmt.Sprintf(" %q", oneLineText(p.name))
		}
		switch p.what {
		case "curve":
			fmt.Fprintf(&b, "; curve%s", name)
		case "histogram":
			fmt.Fprintf(&b, "; histogram%s of %d bins", name, len(p.y))
		case "levels":
			fmt.Fprintf(&b, "; %d levels%s", len(p.y), name)
		case "residuals":
			fmt.Fprintf(&b, "; residuals below")
		default:
			bars := ""
			if p.yerr != nil || p.xerr != nil {
				bars = " with error bars"
			}
			fmt.Fprintf(&b, "; %d %s%s%s", len(p.x), p.what, name, bars)
		}
	}
	if maps > 0 {
		fmt.Fprintf(&b, "; %d rows", maps)
	}
	fmt.Fprintf(&b, "; y from %s to %s", plainNumber(r.y.lo, 4).text(), plainNumber(r.y.hi, 4).text())
	if len(r.f.Ladders) == 0 {
		fmt.Fprintf(&b, ", x from %s to %s", plainNumber(r.x.lo, 4).text(), plainNumber(r.x.hi, 4).text())
	}
	b.WriteString(".")
	return oneLineText(b.String())
}
