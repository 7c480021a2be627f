package report

import (
	"fmt"
	"math"
	"strings"
	"unicode/utf8"

	"golang.org/x/net/html"
)

// A line of a page on paper (A4 less the margins of style.css) holds about so
// many characters of a table and of a formula at the usual size.
const (
	tableLine   = 86
	formulaLine = 58
)

// readable is the share of the usual size below which print is hard to read.
const readable = 0.5

// fitPaper lets tables and formulas that are wider than paper be printed
// smaller, so that none is cut off there. On the screen they are scrolled.
func (p *page) fitPaper(nodes []*html.Node) {
	for _, n := range nodes {
		each(n, func(n *html.Node) {
			what, width, line := "", 0.0, 0.0
			switch {
			case n.Data == "table" && n.Type == html.ElementNode:
				what, width, line = "a table", tableWidth(n), tableLine
			case n.Data == "math" && attribute(n, "display") == "block":
				what, width, line = "a formula", formulaWidth(n), formulaLine
			}
			if what == "a formula" && width > formulaScreen && n.Parent != nil {
				setAttribute(n.Parent, "tabindex", "0")
			}
			if what == "" || width <= line {
				return
			}
			fit := math.Floor(line/width*100) / 100
			style := strings.TrimRight(attribute(n, "style"), "; ")
			if style != "" {
				style += ";"
			}
			setAttribute(n, "style", style+fmt.Sprintf("--fit:%.2f", fit))
			if fit < readable {
				p.warn(fmt.Sprintf("%s is wider than paper and will be printed at %.0f %% of the usual size", what, fit*100))
			}
		})
	}
}

// On the screen wider things are scrolled. What a reader may have to scroll
// can be reached by the keyboard.
const (
	tableScreen   = 70
	formulaScreen = 44
	textScreen    = 76
	linesScreen   = 25
)

const focusable = ` tabindex="0"`

// scrolled returns the attribute for what holds a table that may be scrolled.
func scrolled(nodes []*html.Node) string {
	wide := false
	for _, n := range nodes {
		each(n, func(n *html.Node) { wide = wide || n.Data == "table" && tableWidth(n) > tableScreen })
	}
	if wide {
		return focusable
	}
	return ""
}

// pre returns the tag that begins preformatted text.
func pre(class, label, text string) string {
	tag := "<pre"
	if class != "" {
		tag += ` class="` + class + `"`
	}
	if label != "" {
		tag += ` aria-label="` + escape(label) + `"`
	}
	wide := strings.Count(text, "\n") > linesScreen
	for l := range strings.Lines(text) {
		wide = wide || utf8.RuneCountInString(strings.ReplaceAll(l, "\t", "    ")) > textScreen
	}
	if wide {
		tag += focusable
	}
	return tag + ">"
}

func setAttribute(n *html.Node, key, value string) {
	for i := range n.Attr {
		if n.Attr[i].Key == key {
			n.Attr[i].Val = value
			return
		}
	}
	n.Attr = append(n.Attr, html.Attribute{Key: key, Val: value})
}

// tableWidth estimates the width of a table in characters. Heads may be broken
// between words, cells are not.
func tableWidth(table *html.Node) float64 {
	var columns []float64
	each(table, func(row *html.Node) {
		if row.Data != "tr" {
			return
		}
		at := 0
		for c := row.FirstChild; c != nil; c = c.NextSibling {
			if c.Type != html.ElementNode || c.Data != "td" && c.Data != "th" {
				continue
			}
			if at == len(columns) {
				columns = append(columns, 0)
			}
			text := strings.Join(strings.Fields(words(c)), " ")
			w := 0
			if c.Data == "th" {
				for word := range strings.SplitSeq(breakable(words(c)), " ") { // not at a space that holds
					w = max(w, utf8.RuneCountInString(word))
				}
			} else if attribute(c, "colspan") == "" {
				w = utf8.RuneCountInString(text)
			}
			if !strings.Contains(attribute(c, "style"), "nowrap") {
				w = min(w, 30) // it is broken into lines
			}
			columns[at] = max(columns[at], float64(w))
			at++
		}
	})
	sum := 0.0
	for _, w := range columns {
		sum += w + 2.6 // the space beside a column
	}
	return sum
}

// breakable returns text with one plain space where a line may be broken.
func breakable(s string) string {
	return strings.Join(strings.FieldsFunc(s, func(r rune) bool { return r == ' ' || r == '\n' || r == '\t' }), " ")
}

// formulaWidth estimates the width of a formula in characters.
func formulaWidth(n *html.Node) float64 {
	var kids []float64
	sum, widest := 0.0, 0.0
	for k := n.FirstChild; k != nil; k = k.NextSibling {
		if k.Type == html.TextNode {
			sum += float64(utf8.RuneCountInString(strings.TrimSpace(k.Data)))
			continue
		}
		w := formulaWidth(k)
		kids = append(kids, w)
		sum, widest = sum+w, max(widest, w)
	}
	const script = 0.75
	switch n.Data {
	case "annotation":
		return 0
	case "mo":
		return sum + 0.6
	case "mfrac", "mtable", "munder", "mover", "munderover":
		return widest
	case "msub", "msup":
		if len(kids) == 2 {
			return kids[0] + script*kids[1]
		}
	case "msubsup":
		if len(kids) == 3 {
			return kids[0] + script*max(kids[1], kids[2])
		}
	}
	return sum
}
