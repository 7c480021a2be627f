package report

import (
	_ "embed"
	"fmt"
	"strings"
	"unicode/utf8"

	"golang.org/x/net/html"

	"levelsum/kernel/notebook"
)

// A CodeView says how the code of cells is shown.
type CodeView string

const (
	Folded CodeView = "folded" // opened by a click, left out on paper
	Shown  CodeView = "shown"
	Hidden CodeView = "hidden"
)

// Options say how a page is made.
type Options struct {
	// Name is the notebook's file name, for the provenance.
	Name string
	// File is what the notebook's file holds; its hash goes to the provenance.
	File []byte
	// Folder is where the notebook lies: pictures that its text refers to are
	// taken from there. Without it they are left out.
	Folder string
	// State is what speaks against the stored numbers being those of a run from
	// the first cell to the last one, one line each; empty if nothing does.
	State []string
	// Version is the version of the program that makes the page.
	Version string
	Code    CodeView
}

//go:embed style.css
var styleSheet string

type page struct {
	body     strings.Builder
	o        Options
	cell     int
	warnings []string
	used     map[string]bool // ids of the page
	contents []heading
	results  []result1
	title    string // of the document, as text
	top      string // the title's element, if it goes over the contents
	outputs  int
}

type heading struct {
	level int
	id    string
	html  string
}

// A result1 is a named result as it is shown, and the cell that shows it.
type result1 struct {
	html string
	cell int
}

func (p *page) line(parts ...string) {
	for _, s := range parts {
		p.body.WriteString(s)
	}
	p.body.WriteByte('\n')
}

func (p *page) warn(s string) {
	if p.cell > 0 {
		s = fmt.Sprintf("cell %d: %s", p.cell, s)
	}
	p.warnings = append(p.warnings, s)
}

// Page returns the notebook as a page, and a line for each thing that is not
// shown as the notebook has it.
func Page(d *notebook.Document, o Options) (result []byte, warnings []string, err error) {
	switch o.Code {
	case "":
		o.Code = Folded
	case Folded, Shown, Hidden:
	default:
		return nil, nil, fmt.Errorf("code %s: want folded, shown or hidden", o.Code)
	}
	p := &page{o: o, used: map[string]bool{}}
	for _, id := range []string{"contents", "results", "provenance"} {
		p.used[id] = true
	}
	for _, c := range d.Cells() {
		p.used[fmt.Sprintf("cell-%d", c.N)] = true
	}
	for _, c := range d.Cells() {
		p.cell = c.N
		p.add(c)
	}
	p.cell = 0
	p.resultList(d)
	p.provenance(d)
	return p.assemble(), p.warnings, nil
}

func (p *page) add(c *notebook.Cell) {
	switch c.Kind() {
	case notebook.Markdown:
		p.markdown(c)
	case notebook.Code:
		p.code(c)
	default:
		if s := strings.TrimRight(c.Source(), "\n"); s != "" {
			p.line(pre("raw", "", s), escape(s), "</pre>")
		}
	}
}

func (p *page) markdown(c *notebook.Cell) {
	s, err := (&prose{p.warn}).markdown(c.Source())
	if err != nil {
		p.warn("shown as source: " + err.Error())
		p.line(pre("", "", c.Source()), escape(c.Source()), "</pre>")
		return
	}
	nodes := p.cleaned(s, "", pictures(p.o.Folder, c.Attachments()))
	for _, n := range nodes {
		each(n, p.heading)
	}
	for _, n := range nodes {
		each(n, p.unique)
	}
	if p.title != "" && p.body.Len() == 0 && len(nodes) > 0 && nodes[0].Data == "h1" {
		// The title goes over the contents.
		p.top = render(nodes[:1])
		nodes = nodes[1:]
		p.contents = p.contents[1:]
	}
	if visible(nodes) {
		p.line(fmt.Sprintf(`<section class="prose" id="cell-%d">`, c.N))
		p.line(strings.TrimSpace(render(nodes)), "</section>")
	}
}

// heading notes a heading for the contents and gives it an id: its text with
// hyphens for blanks, as front ends do, so that links of the author's go on
// working.
func (p *page) heading(n *html.Node) {
	if n.Type != html.ElementNode || len(n.Data) != 2 || n.Data[0] != 'h' || n.Data[1] < '1' || n.Data[1] > '6' {
		return
	}
	id := strings.Join(strings.Fields(words(n)), "-")
	if id == "" {
		id = "section"
	}
	for base, i := id, 2; p.used[id]; i++ {
		id = fmt.Sprintf("%s-%d", base, i)
	}
	for i := 0; i < len(n.Attr); i++ {
		if n.Attr[i].Key == "id" {
			n.Attr = append(n.Attr[:i], n.Attr[i+1:]...)
			i--
		}
	}
	n.Attr = append(n.Attr, html.Attribute{Key: "id", Val: id})
	entry := copyWithoutIDs(n)
	var inside []*html.Node
	for k := entry.FirstChild; k != nil; k = k.NextSibling {
		inside = append(inside, unlinked(k)...)
	}
	if len(p.contents) == 0 && n.Data == "h1" {
		p.title = words(n)
	}
	p.contents = append(p.contents, heading{int(n.Data[1] - '0'), id, render(inside)})
}

// unlinked returns what is in a link: links cannot stand in each other.
func unlinked(n *html.Node) []*html.Node {
	if n.Type == html.ElementNode && n.Data == "a" {
		var out []*html.Node
		for k := n.FirstChild; k != nil; k = k.NextSibling {
			out = append(out, k)
		}
		return out
	}
	return []*html.Node{n}
}

// words returns the text of an element; of formulas what is drawn.
func words(n *html.Node) string {
	if n.Type == html.TextNode {
		return n.Data
	}
	if n.Data == "annotation" {
		return ""
	}
	var b strings.Builder
	for k := n.FirstChild; k != nil; k = k.NextSibling {
		b.WriteString(words(k))
	}
	return b.String()
}

// unique takes away an id that the page has already.
func (p *page) unique(n *html.Node) {
	for i, a := range n.Attr {
		if a.Key != "id" {
			continue
		}
		if p.used[a.Val] {
			n.Attr = append(n.Attr[:i:i], n.Attr[i+1:]...)
			return
		}
		p.used[a.Val] = true
	}
}

func (p *page) code(c *notebook.Cell) {
	source := strings.TrimRight(c.Source(), "\n")
	outputs := c.Outputs()
	if strings.TrimSpace(source) == "" && len(outputs) == 0 {
		return
	}
	p.line(fmt.Sprintf(`<section class="cell" id="cell-%d">`, c.N))
	if source != "" && p.o.Code != Hidden {
		run := "Code"
		if n := c.ExecutionCount(); n > 0 {
			run = fmt.Sprintf("Code %d", n)
		}
		if p.o.Code == Folded {
			first, _, _ := strings.Cut(strings.TrimSpace(source), "\n")
			p.line(`<details class="code"><summary>`, run, ` <code>`, escape(shortened(first, 100)), "</code></summary>")
			p.line(pre("", "", source), "<code>", colored(source), "</code></pre></details>")
		} else {
			p.line(pre("code", run, source), "<code>", colored(source), "</code></pre>")
		}
	}
	for _, o := range outputs {
		p.outputs++
		p.output(o, p.outputs)
	}
	p.line("</section>")
}

func (p *page) assemble() []byte {
	var b strings.Builder
	w := func(parts ...string) {
		for _, s := range parts {
			b.WriteString(s)
		}
		b.WriteByte('\n')
	}
	title := strings.Join(strings.Fields(p.title), " ")
	top := p.top
	if title == "" {
		title = strings.TrimSuffix(p.o.Name, ".ipynb")
		top = "<h1>" + escape(title) + "</h1>"
	}
	w("<!DOCTYPE html>")
	w(`<html lang="en">`)
	w("<head>")
	w(`<meta charset="utf-8"/>`)
	w(`<meta http-equiv="Content-Security-Policy" content="default-src 'none'; style-src 'unsafe-inline'; img-src data:"/>`)
	w(`<meta name="viewport" content="width=device-width, initial-scale=1"/>`)
	w(`<meta name="color-scheme" content="light dark"/>`)
	w("<title>", escape(title), "</title>")
	w("<style>\n", strings.TrimSpace(styleSheet), "\n</style>")
	w("</head>")
	w("<body>")
	w("<header>")
	if top != "" {
		w(top)
	}
	p.writeContents(w)
	w("</header>")
	w("<main>")
	b.WriteString(p.body.String())
	w("</main>")
	w("</body>")
	w("</html>")
	return []byte(printable(b.String()))
}

// writeContents writes the table of contents as lists in each other.
func (p *page) writeContents(w func(...string)) {
	if len(p.contents) < 2 {
		return
	}
	w(`<nav id="contents" aria-label="Contents">`)
	var open []int
	for _, h := range p.contents {
		for len(open) > 0 && open[len(open)-1] > h.level {
			w("</li></ul>")
			open = open[:len(open)-1]
		}
		if len(open) == 0 || open[len(open)-1] < h.level {
			w("<ul>")
			open = append(open, h.level)
		} else {
			w("</li>")
		}
		w(`<li><a href="#`, escape(h.id), `">`, h.html, "</a>")
	}
	for range open {
		w("</li></ul>")
	}
	w("</nav>")
}

// printable takes out what no document may hold.
func printable(s string) string {
	return strings.Map(func(r rune) rune {
		switch {
		case r == '\n' || r == '\t':
			return r
		case r < ' ' || r >= 0x7f && r < 0xa0 || r == 0xfffe || r == 0xffff:
			return -1
		case r == utf8.RuneError:
			return '\uFFFD'
		}
		return r
	}, s)
}
