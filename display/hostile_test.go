package display

import (
	"errors"
	"fmt"
	"regexp"
	"strings"
	"testing"
)

// hostile are texts as a data file may hold them. The markers at their ends
// tell that they are shown and not dropped.
var hostile = []string{
	`<img src=x onerror=alert(1)>Q7`,
	`<script>alert(1)</script>Q7`,
	`"><svg onload=alert(1)>Q7`,
	`a & b < c > d " ' Q7`,
	`\input{/etc/passwd} \write18{ls} $x$ %Q7`,
	"]] [[x]] | `code` *b* _i_ [l](javascript:alert(1)) Q7",
	"two\nlines \x00\x1b[31m\u202e Q7",
	`</td></tr></table><a href="javascript:x">Q7`,
	"$$ \\href{javascript:x}{y} $$ Q7",
}

// inMarkdown finds what would be HTML or a link in Markdown.
var inMarkdown = regexp.MustCompile(`(?i)<(img|script|svg|a|/)[^>]|(^|[^\\])\]\(`)

// unsafeLaTeX finds commands that data could have brought in.
var unsafeLaTeX = regexp.MustCompile(`\\(input|write|href)\b`)

// What comes from data is text in every form of every kind.
func TestHostileText(t *testing.T) {
	kinds := map[string]func(s string) any{
		"table": func(s string) any {
			return Table{Caption: s, Notes: []string{s}, Columns: []Column{{Quantity: s, Unit: s, Values: []float64{1}}, {Quantity: "x", Values: []string{s}}}}
		},
		"result":            func(s string) any { return Number{Name: s, Value: 1, Unit: s} },
		"result withheld":   func(s string) any { return Number{Name: "x", Value: 1, Unit: "K", Withheld: s} },
		"paragraph":         func(s string) any { return Paragraph{Text: "See [[x]].", Values: Values{"x": s}} },
		"paragraph in math": func(s string) any { return Paragraph{Text: "See $[[x]]$.", Values: Values{"x": s}} },
		"derivation": func(s string) any {
			return Derivation{Title: s, Notes: []string{s}, Steps: []Step{{Formula: "[[x]]", Source: s, Symbols: []Symbol{{Name: "x", Meaning: s, Value: 2}}}}}
		},
		"figure": func(s string) any { return Figure{X: someT, Y: someC, Name: s, Caption: s, XAxis: tAxis, YAxis: cAxis} },
		"map":    func(s string) any { return map[string]string{s: s} },
		"struct": func(s string) any { return struct{ A, B any }{s, []string{s}} },
		"slice":  func(s string) any { return []any{s, 1} },
		"rows":   func(s string) any { return []struct{ Name string }{{s}, {s}} },
		"error":  func(s string) any { return errors.New(s) },
		"text":   func(s string) any { return s },
	}
	for kind, make := range kinds {
		for i, s := range hostile {
			t.Run(fmt.Sprintf("%s/%d", kind, i), func(t *testing.T) {
				v := ViewOf(make(s))
				for media, d := range v.Data {
					x, ok := d.(string)
					if !ok {
						continue // JSON is written by encoding/json
					}
					if !strings.Contains(x, "Q7") {
						t.Errorf("%s has lost the text: %q", media, x)
					}
					if strings.ContainsAny(x, "\x00\x1b") {
						t.Errorf("a control character in %s: %q", media, x)
					}
					switch media {
					case "text/html":
						wellFormed(t, x)
					case "text/markdown":
						if m := inMarkdown.FindString(strings.ReplaceAll(x, "<br>", "")); m != "" {
							t.Errorf("%q in Markdown %q", m, x)
						}
					case "text/latex":
						if m := unsafeLaTeX.FindString(x); m != "" {
							t.Errorf("%q in LaTeX %q", m, x)
						}
					}
				}
			})
		}
	}
}
