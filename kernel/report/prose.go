package report

import (
	"bytes"
	"encoding/base64"
	"io"
	"net/http"
	"net/url"
	"os"
	"path/filepath"
	"strings"

	"github.com/gohugoio/hugo-goldmark-extensions/passthrough"
	"github.com/yuin/goldmark"
	"github.com/yuin/goldmark/ast"
	"github.com/yuin/goldmark/extension"
	"github.com/yuin/goldmark/renderer"
	markup "github.com/yuin/goldmark/renderer/html"
	"github.com/yuin/goldmark/util"

	"levelsum/kernel/report/mathml"
)

// prose converts Markdown with formulas. It is used for one cell.
type prose struct {
	warn func(string)
}

var blocks = []passthrough.Delimiters{
	{Open: "$$", Close: "$$"},
	{Open: `\begin{equation}`, Close: `\end{equation}`}, {Open: `\begin{equation*}`, Close: `\end{equation*}`},
	{Open: `\begin{align}`, Close: `\end{align}`}, {Open: `\begin{align*}`, Close: `\end{align*}`},
	{Open: `\begin{gather}`, Close: `\end{gather}`}, {Open: `\begin{gather*}`, Close: `\end{gather*}`},
	{Open: `\begin{eqnarray}`, Close: `\end{eqnarray}`}, {Open: `\begin{eqnarray*}`, Close: `\end{eqnarray*}`},
}

// markdown returns the HTML of a text, not yet cleaned.
func (p *prose) markdown(text string) (string, error) {
	m := goldmark.New(
		goldmark.WithExtensions(
			extension.Table, extension.Strikethrough, extension.Linkify,
			passthrough.New(passthrough.Config{
				InlineDelimiters: []passthrough.Delimiters{{Open: "$", Close: "$"}},
				BlockDelimiters:  blocks,
			})),
		goldmark.WithRendererOptions(
			markup.WithUnsafe(), // it is cleaned afterwards
			renderer.WithNodeRenderers(util.Prioritized(p, 1))),
	)
	var b bytes.Buffer
	if err := m.Convert([]byte(text), &b); err != nil {
		return "", err
	}
	return b.String(), nil
}

// RegisterFuncs makes prose the renderer of formulas.
func (p *prose) RegisterFuncs(r renderer.NodeRendererFuncRegisterer) {
	r.Register(passthrough.KindPassthroughInline, func(w util.BufWriter, source []byte, n ast.Node, entering bool) (ast.WalkStatus, error) {
		if in, ok := n.(*passthrough.PassthroughInline); ok && entering {
			p.formula(w, string(in.Segment.Value(source)), mathml.Inline)
		}
		return ast.WalkSkipChildren, nil
	})
	r.Register(passthrough.KindPassthroughBlock, func(w util.BufWriter, source []byte, n ast.Node, entering bool) (ast.WalkStatus, error) {
		if entering {
			var text []byte
			for i := range n.Lines().Len() {
				l := n.Lines().At(i)
				text = append(text, l.Value(source)...)
			}
			p.formula(w, string(text), mathml.Display)
		}
		return ast.WalkSkipChildren, nil
	})
}

// formula writes a formula that still has its dollar signs.
func (p *prose) formula(w io.Writer, text string, style mathml.Style) {
	inside := text
	if strings.HasPrefix(text, "$$") {
		inside, style = strings.TrimSuffix(text[2:], "$$"), mathml.Display
	} else if strings.HasPrefix(text, "$") {
		inside = strings.TrimSuffix(text[1:], "$")
	}
	m, err := mathml.Convert(inside, style)
	if err != nil {
		p.warn("formula shown as source: " + err.Error())
		m = `<code class="source">` + escape(text) + "</code>"
	}
	if style == mathml.Display {
		m = `<div class="formula">` + m + "</div>\n"
	}
	io.WriteString(w, m) // the buffer of markdown
}

// maxPicture bounds the size of a picture file that goes into the page.
const maxPicture = 20 << 20

// pictures finds the pictures of a Markdown cell: its attachments and files in
// the notebook's folder.
func pictures(folder string, attachments map[string]map[string]string) func(string) (string, string) {
	return func(src string) (uri, problem string) {
		if name, ok := strings.CutPrefix(src, "attachment:"); ok {
			if s, err := url.PathUnescape(name); err == nil {
				name = s
			}
			for _, media := range pictureTypes {
				if data, ok := attachments[name][media]; ok {
					return dataURI(media, data)
				}
			}
			return "", "the cell has no such attachment"
		}
		if scheme.MatchString(src) || strings.HasPrefix(src, "//") {
			return "", "the report loads nothing"
		}
		if folder == "" {
			return "", "the notebook's folder is not known"
		}
		name, err := url.PathUnescape(src)
		if err != nil {
			name = src
		}
		root, err := os.OpenRoot(folder)
		if err != nil {
			return "", err.Error()
		}
		defer root.Close()
		f, err := root.Open(filepath.FromSlash(name))
		if err != nil {
			return "", "there is no such file in the notebook's folder"
		}
		defer f.Close()
		data, err := io.ReadAll(io.LimitReader(f, maxPicture+1))
		switch {
		case err != nil:
			return "", "it cannot be read"
		case len(data) > maxPicture:
			return "", "it is too large"
		}
		media := http.DetectContentType(data)
		if strings.HasSuffix(strings.ToLower(name), ".svg") {
			media = "image/svg+xml"
		}
		return dataURI(media, base64.StdEncoding.EncodeToString(data))
	}
}

var pictureTypes = []string{"image/png", "image/jpeg", "image/gif", "image/webp", "image/svg+xml"}

// dataURI returns the data URI of a picture whose content is given in base64,
// or as text if it is SVG.
func dataURI(media, data string) (uri, problem string) {
	known := false
	for _, m := range pictureTypes {
		known = known || m == media
	}
	if !known {
		return "", "it is no picture that browsers show"
	}
	data = strings.Join(strings.Fields(data), "")
	if _, err := base64.StdEncoding.DecodeString(data); err != nil {
		return "", "its base64 is broken"
	}
	return "data:" + media + ";base64," + data, ""
}
