package report

import (
	"encoding/base64"
	"encoding/json"
	"fmt"
	"maps"
	"regexp"
	"slices"
	"strings"

	"golang.org/x/net/html"

	"levelsum/kernel/notebook"
	"levelsum/kernel/report/mathml"
)

// resultType is the media type of a named result.
const resultType = "application/vnd.levelsum.result+json"

var escapes = regexp.MustCompile(`\x1b\[[0-9;?]*[ -/]*[@-~]|\x1b\][^\x07\x1b]*(\x07|\x1b\\)`)

// terminal returns text as a terminal would show it, without its colours.
func terminal(s string) string {
	s = escapes.ReplaceAllString(s, "")
	if !strings.Contains(s, "\r") {
		return s
	}
	lines := strings.Split(strings.ReplaceAll(s, "\r\n", "\n"), "\n")
	for i, l := range lines {
		// What stands before a carriage return has been written over.
		l = strings.TrimRight(l, "\r")
		lines[i] = l[strings.LastIndexByte(l, '\r')+1:]
	}
	return strings.Join(lines, "\n")
}

// output writes one output of a cell; n counts all outputs of the document.
func (p *page) output(o notebook.Output, n int) {
	switch o.Kind {
	case notebook.Stream:
		text := strings.TrimRight(terminal(o.Text), "\n")
		if text == "" {
			return
		}
		if o.Name == "stderr" {
			p.line(pre("stream stderr", "standard error", text), escape(text), "</pre>")
			return
		}
		p.line(pre("stream", "", text), escape(text), "</pre>")
	case notebook.ErrorOutput:
		p.line(`<div class="error"><p><strong>`, escape(o.ErrorName), "</strong>: ", escape(terminal(o.ErrorValue)), "</p>")
		var trace []string
		for _, l := range o.Traceback {
			if l != o.ErrorValue {
				trace = append(trace, l)
			}
		}
		if len(trace) > 0 {
			text := terminal(strings.Join(trace, "\n"))
			p.line(pre("", "", text), escape(text), "</pre>")
		}
		p.line("</div>")
	case notebook.DisplayData, notebook.ExecuteResult:
		p.shown(o, n)
	default:
		p.warn("an output of the kind " + o.Kind + " is not shown")
		p.line(`<p class="missing">an output of the kind `, escape(o.Kind), " is not shown</p>")
	}
}

// shown writes a value in the richest of its forms that the page can hold.
func (p *page) shown(o notebook.Output, n int) {
	plain, _ := o.Data["text/plain"].(string)
	text := func(media string) (string, bool) {
		s, ok := o.Data[media].(string)
		return s, ok
	}
	prefix := fmt.Sprintf("output-%d-", n)
	_, result := o.Data[resultType]
	if s, ok := text("text/html"); ok {
		if nodes := p.cleaned(s, prefix, nil); visible(nodes) {
			describe(nodes, plain)
			class := "output"
			if result {
				class = "output result"
				p.results = append(p.results, result1{render(withoutIDs(nodes)), p.cell})
			}
			p.line(`<div class="`, class, `"`, scrolled(nodes), `>`, render(nodes), "</div>")
			return
		}
	}
	if s, ok := text("text/markdown"); ok {
		md, err := (&prose{p.warn}).markdown(s)
		if err == nil {
			nodes := p.cleaned(md, prefix, nil)
			p.line(`<div class="output prose"`, scrolled(nodes), `>`, render(nodes), "</div>")
			return
		}
	}
	if s, ok := text("image/svg+xml"); ok {
		if strings.Contains(s, "<style") { // its rules must not leave it
			p.picture("image/svg+xml", base64.StdEncoding.EncodeToString([]byte(s)), plain, nil)
			return
		}
		if nodes := p.cleaned(s, prefix, nil); visible(nodes) {
			describe(nodes, plain)
			p.line(`<div class="output">`, render(nodes), "</div>")
			return
		}
	}
	for _, media := range pictureTypes[:4] {
		if s, ok := text(media); ok {
			size, _ := o.Metadata[media].(map[string]any)
			p.picture(media, s, plain, size)
			return
		}
	}
	if s, ok := text("text/latex"); ok {
		s = strings.TrimSpace(s)
		inside, display := strings.CutPrefix(s, "$$")
		if display {
			inside = strings.TrimSuffix(inside, "$$")
		} else {
			inside = strings.Trim(s, "$")
			inside = strings.TrimPrefix(inside, `\displaystyle`)
		}
		if m, err := mathml.Convert(inside, mathml.Display); err == nil && (display || inside != s) {
			p.line(`<div class="output formula">`, m, "</div>")
			return
		}
	}
	if _, ok := text("text/plain"); ok {
		if result {
			p.results = append(p.results, result1{escape(plain), p.cell})
		}
		p.line(pre("output", "", terminal(plain)), escape(terminal(plain)), "</pre>")
		return
	}
	for _, media := range slices.Sorted(maps.Keys(o.Data)) {
		if strings.HasSuffix(media, "json") {
			if b, err := json.MarshalIndent(o.Data[media], "", "  "); err == nil {
				p.line(pre("output", "", string(b)), escape(string(b)), "</pre>")
				return
			}
		}
	}
	kinds := strings.Join(slices.Sorted(maps.Keys(o.Data)), ", ")
	if kinds == "" {
		return
	}
	p.warn("an output is not shown: the report knows none of its forms " + kinds)
	p.line(`<p class="missing">an output of the form `, escape(kinds), " is not shown</p>")
}

// picture writes a picture as part of the page.
func (p *page) picture(media, data, alt string, size map[string]any) {
	uri, problem := dataURI(media, data)
	if problem != "" {
		p.warn("a picture was left out: " + problem)
		p.line(`<p class="missing">picture left out: `, escape(alt), "</p>")
		return
	}
	var dims string
	for _, k := range []string{"width", "height"} {
		if n, ok := size[k].(json.Number); ok {
			if x, err := n.Int64(); err == nil && x > 0 {
				dims += fmt.Sprintf(` %s="%d"`, k, x)
			}
		}
	}
	p.line(`<div class="output"><img src="`, uri, `" alt="`, escape(strings.Join(strings.Fields(alt), " ")), `"`, dims, "/></div>")
}

// cleaned cleans a fragment; one that cannot be parsed is shown as its source.
func (p *page) cleaned(s, prefix string, picture func(string) (string, string)) []*html.Node {
	nodes, err := (&cleaner{prefix: prefix, picture: picture, warn: p.warn}).clean(s)
	if err != nil {
		p.warn("shown as source: " + err.Error())
		code := &html.Node{Type: html.ElementNode, Data: "pre"}
		code.AppendChild(&html.Node{Type: html.TextNode, Data: s})
		return []*html.Node{code}
	}
	p.fitPaper(nodes)
	return nodes
}

// visible says whether something is left to see.
func visible(nodes []*html.Node) bool {
	return slices.ContainsFunc(nodes, func(n *html.Node) bool {
		return n.Type == html.ElementNode || strings.TrimSpace(n.Data) != ""
	})
}

// describe gives pictures without a description the words of the plain text.
func describe(nodes []*html.Node, plain string) {
	plain = strings.Join(strings.Fields(plain), " ")
	for _, n := range nodes {
		each(n, func(n *html.Node) {
			key := ""
			switch {
			case n.Namespace == "svg" && n.Data == "svg":
				key = "aria-label"
			case n.Data == "img":
				key = "alt"
			}
			if key == "" || attribute(n, key) != "" || plain == "" || attribute(n, "aria-labelledby") != "" {
				return
			}
			n.Attr = slices.DeleteFunc(n.Attr, func(a html.Attribute) bool { return a.Key == key || a.Key == "role" })
			n.Attr = append(n.Attr, html.Attribute{Key: key, Val: plain})
			if key == "aria-label" {
				n.Attr = append(n.Attr, html.Attribute{Key: "role", Val: "img"})
			}
		})
	}
}

func attribute(n *html.Node, key string) string {
	for _, a := range n.Attr {
		if a.Key == key {
			return a.Val
		}
	}
	return ""
}

// each calls f for n and everything in it.
func each(n *html.Node, f func(*html.Node)) {
	f(n)
	for k := n.FirstChild; k != nil; k = k.NextSibling {
		each(k, f)
	}
}

// withoutIDs returns a copy that may stand in the page a second time.
func withoutIDs(nodes []*html.Node) []*html.Node {
	var out []*html.Node
	for _, n := range nodes {
		out = append(out, copyWithoutIDs(n))
	}
	return out
}

func copyWithoutIDs(n *html.Node) *html.Node {
	c := &html.Node{Type: n.Type, Data: n.Data, DataAtom: n.DataAtom, Namespace: n.Namespace}
	for _, a := range n.Attr {
		if a.Key != "id" {
			c.Attr = append(c.Attr, a)
		}
	}
	for k := n.FirstChild; k != nil; k = k.NextSibling {
		c.AppendChild(copyWithoutIDs(k))
	}
	return c
}

func escape(s string) string { return html.EscapeString(s) }
