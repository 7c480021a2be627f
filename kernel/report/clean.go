package report

import (
	"regexp"
	"slices"
	"strings"

	"golang.org/x/net/html"
	"golang.org/x/net/html/atom"
)

// A cleaner rebuilds HTML from elements, attributes and styles that can
// neither run, load nor leave their place.
type cleaner struct {
	// prefix goes before every id, so that two outputs with the same ids do
	// not meet.
	prefix string
	// picture returns the data URI for the address of a picture, or why there
	// is none.
	picture func(src string) (uri, problem string)
	warn    func(string)
}

var (
	htmlTags = set(`a abbr address article aside b bdi bdo blockquote br caption cite code col colgroup dd del details dfn
		div dl dt em figcaption figure footer h1 h2 h3 h4 h5 h6 header hr i img ins kbd li main mark ol p pre q s samp
		section small span strong sub summary sup table tbody td tfoot th thead time tr tt u ul var wbr center font`)
	svgTags = set(`svg g path rect circle ellipse line polyline polygon text tspan textPath defs clipPath mask pattern
		linearGradient radialGradient stop marker symbol use title desc image`)
	mathTags = set(`math semantics annotation mrow mi mo mn mtext mspace ms mfrac msqrt mroot mstyle merror mpadded mphantom
		msub msup msubsup munder mover munderover mmultiscripts mprescripts none mtable mtr mtd mlabeledtr mfenced menclose`)
	// withContent goes whole; of other unknown elements the content is kept.
	withContent = set(`script style iframe object embed template noscript noframes applet frame frameset audio video canvas
		link meta base head title textarea select option datalist input animate animateMotion animateTransform set
		foreignObject annotation-xml xmp plaintext`)
	htmlAttributes = set(`title lang dir role colspan rowspan scope headers align valign start reversed value datetime open
		width height alt cite span type color`)
	ownClasses = set(`formula source missing`)

	attributeName = regexp.MustCompile(`^[A-Za-z][A-Za-z0-9-]*$`)
	localURL      = regexp.MustCompile(`url\(\s*['"]?#([^'")\s]+)['"]?\s*\)`)
	dataPicture   = regexp.MustCompile(`^data:image/(png|jpeg|gif|webp|svg\+xml);base64,[A-Za-z0-9+/=\s]+$`)
	scheme        = regexp.MustCompile(`^[A-Za-z][A-Za-z0-9+.-]*:`)
)

func set(words string) map[string]bool {
	m := map[string]bool{}
	for _, w := range strings.Fields(words) {
		m[w] = true
	}
	return m
}

// clean parses a fragment and returns it rebuilt.
func (c *cleaner) clean(fragment string) ([]*html.Node, error) {
	nodes, err := html.ParseFragment(strings.NewReader(fragment),
		&html.Node{Type: html.ElementNode, Data: "div", DataAtom: atom.Div})
	if err != nil {
		return nil, err
	}
	holder := &html.Node{Type: html.ElementNode, Data: "div", DataAtom: atom.Div}
	for _, n := range nodes {
		holder.AppendChild(n)
	}
	c.children(holder)
	var out []*html.Node
	for n := holder.FirstChild; n != nil; n = holder.FirstChild {
		holder.RemoveChild(n)
		out = append(out, n)
	}
	return out, nil
}

func (c *cleaner) children(parent *html.Node) {
	for n := parent.FirstChild; n != nil; {
		next := n.NextSibling
		switch n.Type {
		case html.TextNode:
		case html.ElementNode:
			next = c.element(parent, n)
		default:
			parent.RemoveChild(n)
		}
		n = next
	}
}

// element cleans an element in its place and returns what comes next.
func (c *cleaner) element(parent, n *html.Node) *html.Node {
	next := n.NextSibling
	known := htmlTags
	switch n.Namespace {
	case "svg":
		known = svgTags
	case "math":
		known = mathTags
	}
	switch {
	case known[n.Data]:
	case withContent[n.Data]:
		parent.RemoveChild(n)
		if n.Data == "script" || n.Data == "iframe" {
			c.warn("a " + n.Data + " element was left out")
		}
		return next
	default: // keep the content
		first := n.FirstChild
		for k := n.FirstChild; k != nil; k = n.FirstChild {
			n.RemoveChild(k)
			parent.InsertBefore(k, n)
		}
		parent.RemoveChild(n)
		if first != nil {
			return first
		}
		return next
	}
	if (n.Data == "img" && n.Namespace == "" || n.Data == "image") && !c.pictureOf(n) {
		note := missing(n)
		parent.InsertBefore(note, n)
		parent.RemoveChild(n)
		return next
	}
	n.Attr = c.attributes(n)
	c.children(n)
	return next
}

// missing is the note in the place of a picture that is not in the page.
func missing(n *html.Node) *html.Node {
	text := "picture left out"
	for _, a := range n.Attr {
		if a.Key == "alt" && a.Val != "" {
			text = "picture left out: " + a.Val
		}
	}
	tag := "span"
	if n.Namespace == "svg" {
		tag = "text"
	}
	note := &html.Node{Type: html.ElementNode, Data: tag, Namespace: n.Namespace}
	if n.Namespace == "" {
		note.Attr = []html.Attribute{{Key: "class", Val: "missing"}}
	}
	note.AppendChild(&html.Node{Type: html.TextNode, Data: text})
	return note
}

// pictureOf makes the address of a picture a data URI.
func (c *cleaner) pictureOf(n *html.Node) bool {
	for i, a := range n.Attr {
		if a.Key != "src" && a.Key != "href" {
			continue
		}
		if dataPicture.MatchString(a.Val) {
			n.Attr[i].Val = strings.Join(strings.Fields(a.Val), "")
			return true
		}
		problem := "it is not part of the notebook"
		if c.picture != nil && n.Namespace == "" {
			var uri string
			if uri, problem = c.picture(a.Val); problem == "" {
				n.Attr[i].Val = uri
				return true
			}
		}
		c.warn("the picture " + shortened(a.Val, 80) + " was left out: " + problem)
		return false
	}
	c.warn("a picture without address was left out")
	return false
}

func (c *cleaner) attributes(n *html.Node) []html.Attribute {
	var out []html.Attribute
	for _, a := range n.Attr {
		key := a.Key
		if a.Namespace == "xlink" && key == "href" {
			a.Namespace = ""
		}
		if a.Namespace != "" || !attributeName.MatchString(key) || strings.HasPrefix(strings.ToLower(key), "on") {
			continue
		}
		a.Key = key
		keep := false
		switch {
		case key == "id":
			a.Val, keep = c.prefix+a.Val, a.Val != "" && !strings.ContainsAny(a.Val, " \t\n\r\f")
		case key == "style":
			a.Val = c.style(a.Val)
			keep = a.Val != ""
		case key == "class":
			keep = ownClasses[a.Val]
		case key == "aria-labelledby", key == "aria-describedby", key == "headers":
			ids := strings.Fields(a.Val)
			for i := range ids {
				ids[i] = c.prefix + ids[i]
			}
			a.Val, keep = strings.Join(ids, " "), true
		case key == "role" || strings.HasPrefix(key, "aria-"):
			keep = true
		case key == "href":
			a.Val, keep = c.href(n, a.Val)
		case key == "src":
			keep = n.Namespace == "" && n.Data == "img"
		case n.Namespace == "":
			keep = htmlAttributes[key] && a.Val == strings.TrimSpace(a.Val)
		case n.Namespace == "math":
			keep = key != "actiontype" && key != "altimg"
		case n.Namespace == "svg":
			a.Val, keep = c.urls(a.Val)
			keep = keep && key != "base"
		}
		if keep {
			out = append(out, a)
		}
	}
	if n.Data == "a" && n.Namespace == "" {
		for _, a := range out {
			if a.Key == "href" && scheme.MatchString(a.Val) {
				out = append(out, html.Attribute{Key: "rel", Val: "noreferrer"})
				break
			}
		}
	}
	return out
}

// href returns an address that a reader may follow, or a place of this page.
func (c *cleaner) href(n *html.Node, s string) (string, bool) {
	s = strings.TrimSpace(s)
	if strings.HasPrefix(s, "#") {
		return "#" + c.prefix + s[1:], true
	}
	if n.Namespace == "svg" {
		return s, n.Data == "image" && dataPicture.MatchString(s)
	}
	if n.Namespace != "" || n.Data != "a" || strings.HasPrefix(s, "//") || strings.ContainsAny(s, "\\\n\t\r") {
		return "", false
	}
	if m := strings.ToLower(scheme.FindString(s)); m != "" {
		return s, m == "https:" || m == "http:" || m == "mailto:"
	}
	return s, true
}

// urls lets through references to places of the same output only.
func (c *cleaner) urls(s string) (string, bool) {
	rest := localURL.ReplaceAllString(s, "")
	low := strings.ToLower(rest)
	if strings.Contains(low, "url") && strings.Contains(low, "(") || strings.Contains(rest, `\`) ||
		strings.Contains(low, "javascript:") || strings.Contains(low, "image-set") {
		return "", false
	}
	return localURL.ReplaceAllString(s, "url(#"+c.prefix+"$1)"), true
}

// styleProperties may be set by a style attribute; a name here also stands for
// those that begin with it and a hyphen.
var styleProperties = strings.Fields(`color background background-color border padding margin text font white-space
	width max-width min-width height max-height min-height display overflow overflow-x line-height letter-spacing
	vertical-align caption-side list-style-type list-style float clear opacity table-layout border-collapse border-spacing
	fill stroke stop-color stop-opacity marker clip-path clip-rule mask paint-order dominant-baseline transform
	flex grid gap align justify columns column word-break overflow-wrap hyphens mix-blend-mode isolation visibility shape-rendering`)

// style keeps the declarations that colour and space things.
func (c *cleaner) style(s string) string {
	var out []string
	for _, d := range strings.Split(s, ";") {
		name, value, ok := strings.Cut(d, ":")
		name, value = strings.ToLower(strings.TrimSpace(name)), strings.TrimSpace(value)
		if !ok || value == "" || strings.ContainsAny(value, "{}<@") {
			continue
		}
		known := slices.ContainsFunc(styleProperties, func(p string) bool {
			return name == p || strings.HasPrefix(name, p+"-")
		})
		value, fine := c.urls(value)
		if !known || !fine || strings.HasPrefix(name, "margin") && strings.Contains(value, "-") {
			continue
		}
		if name == "display" && value != "none" && value != "inline" && value != "block" && value != "inline-block" &&
			value != "flex" && value != "grid" && value != "table" && value != "table-cell" && value != "table-row" {
			continue
		}
		out = append(out, name+":"+value)
	}
	return strings.Join(out, ";")
}

// render writes nodes as HTML that is well-formed XML too.
func render(nodes []*html.Node) string {
	var b strings.Builder
	for _, n := range nodes {
		html.Render(&b, n) // a strings.Builder takes everything
	}
	return b.String()
}

func shortened(s string, n int) string {
	r := []rune(s)
	if len(r) > n {
		return string(r[:n]) + "..."
	}
	return s
}
