package mathml

import (
	"encoding/json"
	"encoding/xml"
	"fmt"
	"io"
	"os"
	"slices"
	"strings"
	"testing"
	"unicode"
	"unicode/utf8"
)

// A shape is an element as far as the two converters must agree.
type shape struct {
	tag, text string
	attrs     map[string]string
	kids      []*shape
}

// parseShape reads one well-formed element.
func parseShape(s string) (*shape, error) {
	d := xml.NewDecoder(strings.NewReader(s))
	var stack []*shape
	var root *shape
	for {
		t, err := d.Token()
		if err == io.EOF && root != nil {
			return root, nil
		}
		if err != nil {
			return nil, err
		}
		switch t := t.(type) {
		case xml.StartElement:
			n := &shape{tag: t.Name.Local, attrs: map[string]string{}}
			for _, a := range t.Attr {
				n.attrs[a.Name.Local] = a.Value
			}
			if len(stack) > 0 {
				up := stack[len(stack)-1]
				up.kids = append(up.kids, n)
			} else if root != nil {
				return nil, fmt.Errorf("two roots")
			} else {
				root = n
			}
			stack = append(stack, n)
		case xml.EndElement:
			stack = stack[:len(stack)-1]
		case xml.CharData:
			if len(stack) > 0 {
				stack[len(stack)-1].text += string(t)
			}
		}
	}
}

// sameSign has signs that are drawn alike and that the converters choose
// differently.
var sameSign = strings.NewReplacer("∣", "|", "ˉ", "¯", "⃗", "→", "‾", "¯", "_", "¯", "ˊ", "´", "ˋ", "`",
	"~", "˜", "^", "ˆ", "*", "∗", "∥", "‖", "〈", "⟨", "⋯", "⋯", "\u2009", "")

// normal returns what counts of an element: rows without need are taken out,
// so are spaces, styles and the sign of function application; upright words
// are letters of which the last one carries the scripts.
func normal(n *shape) []*shape {
	for side, tag := range map[string]string{"border-top:0.05em": "mover", "border-bottom:0.05em": "munder"} {
		if n.tag == "mrow" && strings.HasPrefix(n.attrs["style"], side) { // a line is a border
			bar := &shape{tag: "row", kids: []*shape{{tag: "sign", text: "¯"}}}
			return []*shape{{tag: tag, kids: []*shape{{tag: "row", kids: row(n.kids)}, bar}}}
		}
	}
	switch n.tag {
	case "annotation", "mspace":
		return nil
	case "mi", "mo", "mn", "mtext":
		if len(n.kids) > 0 { // an operator around a construction
			return row(n.kids)
		}
		f := font(n.attrs["mathvariant"])
		s := sameSign.Replace(strings.ReplaceAll(restyle(n.text, f), "\u00a0", " "))
		if n.tag == "mtext" {
			if s = strings.TrimSpace(s); len([]rune(s)) > 1 || s != "" && unicode.IsLetter([]rune(s)[0]) {
				return []*shape{{tag: "mtext", text: s}}
			}
		}
		var out []*shape
		long := utf8.RuneCountInString(s) > 1
		for _, r := range s {
			switch {
			case r == '\u2061' || r == '\u2063' || r == ' ':
			case n.tag == "mn":
				out = append(out, &shape{tag: "mn", text: string(r)})
			case !unicode.IsLetter(r):
				out = append(out, &shape{tag: "sign", text: string(r)})
			case r > 'ω': // has no italic form to be told from
				out = append(out, &shape{tag: "letter", text: string(r)})
			case long || f == roman || n.tag == "mo":
				out = append(out, &shape{tag: "upright", text: string(r)})
			default:
				out = append(out, &shape{tag: "letter", text: string(r)})
			}
		}
		return out
	case "math", "semantics", "mrow", "mstyle", "mpadded", "menclose", "span":
		return row(n.kids)
	}
	out := &shape{tag: n.tag}
	if n.tag == "mfrac" && strings.HasPrefix(n.attrs["linethickness"], "0") {
		out.tag = "stack"
	}
	var before []*shape
	for i, k := range n.kids {
		in := normal(k)
		if i == 0 && len(in) > 1 && strings.HasPrefix(n.tag, "ms") && n.tag != "msqrt" && (k.tag != "mrow" || isName(k)) {
			before, in = slices.Clip(in[:len(in)-1]), in[len(in)-1:]
		}
		out.kids = append(out.kids, &shape{tag: "row", kids: in})
	}
	return append(before, out)
}

// isName says whether an mrow is a function's name and the sign of application.
func isName(n *shape) bool {
	return len(n.kids) == 2 && n.kids[0].tag == "mi" && n.kids[1].text == "\u2061"
}

func row(kids []*shape) []*shape {
	var out []*shape
	for _, k := range kids {
		out = append(out, normal(k)...)
	}
	return out
}

func (n *shape) String() string {
	if n.tag == "row" {
		var parts []string
		for _, k := range n.kids {
			parts = append(parts, k.String())
		}
		return strings.Join(parts, " ")
	}
	if n.kids == nil {
		if n.tag == "sign" || n.tag == "mn" {
			return n.text
		}
		return n.tag + ":" + n.text
	}
	s := n.tag
	for _, k := range n.kids {
		s += "{" + k.String() + "}"
	}
	return s
}

type reference struct {
	Source   string
	Formulas []struct{ Formula, Display, Inline string }
}

func readReference(t *testing.T) reference {
	data, err := os.ReadFile("testdata/katex/mathml.json")
	if err != nil {
		t.Fatal(err)
	}
	var r reference
	if err := json.Unmarshal(data, &r); err != nil {
		t.Fatal(err)
	}
	return r
}

// differs has formulas that the two converters build differently on purpose.
var differs = map[string]map[Style]string{
	`{u(S/k)} = \sqrt{\frac{{\sum_i p_i \ln^7 p_i} - {\left(\sum_i p_i \ln p_i\right)}^7}{{N}}}`: {
		Display: "a numerator is set in text style, where the limits of a sum stand beside it (same place); KaTeX leaves them to the browser to move"},
	`\int\limits_0^1 f(x)\,dx`: {Inline: "\\limits is for every style (D. E. Knuth, The TeXbook, chapter 17)"},
}

// TestStructureKaTeX compares the structure with that of KaTeX's MathML, made
// by testdata/katex/generate.mjs.
func TestStructureKaTeX(t *testing.T) {
	r := readReference(t)
	if len(r.Formulas) < 200 {
		t.Fatalf("only %d formulas", len(r.Formulas))
	}
	for _, f := range r.Formulas {
		for _, x := range []struct {
			style Style
			want  string
		}{{Display, f.Display}, {Inline, f.Inline}} {
			got, err := Convert(f.Formula, x.style)
			if err != nil {
				t.Errorf("%s: %v", f.Formula, err)
				continue
			}
			g, err := parseShape(got)
			if err != nil {
				t.Errorf("%s: not well-formed: %v\n%s", f.Formula, err, got)
				continue
			}
			w, err := parseShape(x.want)
			if err != nil {
				t.Fatalf("%s: reference: %v", f.Formula, err)
			}
			gs, ws := (&shape{tag: "row", kids: normal(g)}).String(), (&shape{tag: "row", kids: normal(w)}).String()
			ws = strings.ReplaceAll(ws, "= \u0338", "≠")
			if (gs != ws) != (differs[f.Formula][x.style] != "") {
				t.Errorf("%s (style %d)\n got %s\nwant %s", f.Formula, x.style, gs, ws)
			}
		}
	}
}
