package report

import (
	"encoding/json"
	"encoding/xml"
	"errors"
	"flag"
	"fmt"
	"io"
	"os"
	"path/filepath"
	"regexp"
	"strings"
	"testing"

	"levelsum/kernel/notebook"
)

var update = flag.Bool("update", false, "write the golden files")

// check says whether a page is well-formed and can load and run nothing.
func check(t *testing.T, page []byte) {
	t.Helper()
	d := xml.NewDecoder(strings.NewReader(string(page)))
	ids := map[string]bool{}
	var links []string
	for {
		tok, err := d.Token()
		if errors.Is(err, io.EOF) {
			break
		}
		if err != nil {
			t.Fatalf("not well-formed: %v", err)
		}
		e, ok := tok.(xml.StartElement)
		if !ok {
			continue
		}
		switch name := strings.ToLower(e.Name.Local); name {
		case "script", "iframe", "object", "embed", "link", "base", "form", "foreignobject", "animate", "set", "audio", "video", "use":
			t.Errorf("element %s", name)
		}
		for _, a := range e.Attr {
			key, value := strings.ToLower(a.Name.Local), strings.ToLower(a.Value)
			switch {
			case strings.HasPrefix(key, "on"):
				t.Errorf("attribute %s", key)
			case key == "id":
				if ids[a.Value] {
					t.Errorf("id %s twice", a.Value)
				}
				ids[a.Value] = true
			case key == "href" && strings.HasPrefix(value, "#"):
				links = append(links, a.Value[1:])
			case key == "href" && e.Name.Local != "a", key == "src" && !strings.HasPrefix(value, "data:image/"):
				t.Errorf("%s %s=%q", e.Name.Local, key, a.Value)
			case strings.Contains(value, "javascript:"), key == "style" && strings.Contains(value, "url("):
				t.Errorf("%s %s=%q", e.Name.Local, key, a.Value)
			case key == "srcset" || key == "action" || key == "formaction" || key == "background" || key == "poster":
				t.Errorf("attribute %s", key)
			}
		}
	}
	for _, l := range links {
		if !ids[l] {
			t.Errorf("no place #%s", l)
		}
	}
}

// document makes a notebook of cells that are given as JSON.
func document(t *testing.T, cells ...string) *notebook.Document {
	t.Helper()
	d, err := notebook.Parse("test.ipynb", []byte(`{"cells":[`+strings.Join(cells, ",")+`],"metadata":{},"nbformat":4,"nbformat_minor":4}`))
	if err != nil {
		t.Fatal(err)
	}
	return d
}

func quoted(s string) string {
	b, err := json.Marshal(s)
	if err != nil {
		panic(err)
	}
	return string(b)
}

func markdownCell(s string) string {
	return `{"cell_type":"markdown","metadata":{},"source":` + quoted(s) + `}`
}

func outputCell(output string) string {
	return `{"cell_type":"code","metadata":{},"execution_count":1,"source":"x","outputs":[` + output + `]}`
}

func shownCell(media, s string) string {
	data, err := json.Marshal(map[string]string{"text/plain": "the words", media: s})
	if err != nil {
		panic(err)
	}
	return outputCell(`{"output_type":"display_data","metadata":{},"data":` + string(data) + `}`)
}

func makePage(t *testing.T, o Options, cells ...string) (string, []string) {
	t.Helper()
	page, warnings, err := Page(document(t, cells...), o)
	if err != nil {
		t.Fatal(err)
	}
	check(t, page)
	return string(page), warnings
}

// outline returns the structure of a page: elements with ids, headings,
// captions and kinds of outputs.
func outline(page string) string {
	var b strings.Builder
	for _, l := range regexp.MustCompile(`<(h[1-6]|nav|section|details|pre|figure|caption|svg|table|footer|dt|li|math)\b[^>]*>([^<]*)`).FindAllStringSubmatch(page, -1) {
		name := l[1]
		for _, key := range []string{"id", "class", "display", "aria-label"} {
			if m := regexp.MustCompile(` ` + key + `="([^"]*)"`).FindStringSubmatch(l[0]); m != nil {
				name += " " + key + "=" + m[1]
			}
		}
		fmt.Fprintln(&b, strings.TrimSpace(name+" "+strings.TrimSpace(l[2])))
	}
	return b.String()
}

func TestNotebooks(t *testing.T) {
	files, err := filepath.Glob("../../notebooks/*.ipynb")
	if err != nil || len(files) == 0 {
		t.Fatal("no notebooks", err)
	}
	for _, file := range files {
		t.Run(filepath.Base(file), func(t *testing.T) {
			d, err := notebook.Read(file)
			if err != nil {
				t.Fatal(err)
			}
			for _, code := range []CodeView{Folded, Shown, Hidden} {
				page, warnings, err := Page(d, Options{Name: filepath.Base(file), Folder: "../../notebooks", Code: code})
				if err != nil {
					t.Fatal(err)
				}
				check(t, page)
				for _, w := range warnings { // a formula that is not known among them
					t.Error(w)
				}
				again, _, err := Page(d, Options{Name: filepath.Base(file), Folder: "../../notebooks", Code: code})
				if err != nil || string(again) != string(page) {
					t.Error("the second page differs from the first", err)
				}
			}
		})
	}
}

// TestCopperOutline compares the structure of the copper notebook's report.
func TestCopperOutline(t *testing.T) {
	d, err := notebook.Read("../../notebooks/copper-heat-capacity.ipynb")
	if err != nil {
		t.Fatal(err)
	}
	page, _, err := Page(d, Options{Name: "copper-heat-capacity.ipynb", File: d.Bytes()})
	if err != nil {
		t.Fatal(err)
	}
	got := outline(string(page))
	if *update {
		if err := os.WriteFile("testdata/copper.outline", []byte(got), 0o666); err != nil {
			t.Fatal(err)
		}
	}
	want, err := os.ReadFile("testdata/copper.outline")
	if err != nil {
		t.Fatal(err)
	}
	if got != string(want) {
		t.Errorf("the outline changed; look at it, then go test -update:\n%s", got)
	}
}

// TestHostile has what must not come through; check looks at each page.
func TestHostile(t *testing.T) {
	for _, s := range []string{
		`<script>alert(1)</script>`,
		`<img src=x onerror=alert(1)>`,
		`<img src="https://example.org/x.png">`,
		`<a href="javascript:alert(1)">x</a>`,
		`<a href=" jav&#x09;ascript:alert(1)">x</a>`,
		`<iframe src="https://example.org"></iframe>`,
		`<div style="background:url(https://example.org/x)">x</div>`,
		`<div style="background:u\72l(https://example.org/x)">x</div>`,
		`<div style="position:fixed;top:0">x</div>`,
		`<svg><script>alert(1)</script></svg>`,
		`<svg onload=alert(1)></svg>`,
		`<svg><a xlink:href="javascript:alert(1)"><text>x</text></a></svg>`,
		`<svg><image href="https://example.org/x.png"/></svg>`,
		`<svg><animate attributeName="href" values="javascript:alert(1)"/></svg>`,
		`<svg><foreignObject><iframe src="x"></iframe></foreignObject></svg>`,
		`<svg><rect fill="url(https://example.org/x#y)"/></svg>`,
		`<svg><style>@import url(https://example.org)</style></svg>`,
		`<math><mtext><img src=x onerror=alert(1)></mtext></math>`,
		`<math href="javascript:alert(1)"><mi>x</mi></math>`,
		`<math><annotation-xml encoding="text/html"><script>alert(1)</script></annotation-xml></math>`,
		`<form action="https://example.org"><input name=x><button>go</button></form>`,
		`<meta http-equiv="refresh" content="0;url=https://example.org">`,
		`<link rel="stylesheet" href="https://example.org/x.css">`,
		`<base href="https://example.org/">`,
		`<style>@import "https://example.org/x.css"</style>`,
		`<video src="https://example.org/x"></video>`,
		`<table background="https://example.org/x"><tr><td>x</table>`,
		`<img srcset="https://example.org/x 2x" src="data:text/html;base64,PHNjcmlwdD4=">`,
		`<noscript><p title="</noscript><img src=x onerror=alert(1)>"></noscript>`,
		`<svg></p><style><a id="</style><img src=1 onerror=alert(1)>">`,
		`</section></main></body></html><script>alert(1)</script>`,
		`<p id="provenance">x</p><p id="cell-1">y</p>`,
		"<p \x01 a\"b=c>\x0b\x1b[31m</p>",
		`<!--><script>alert(1)</script>-->`,
		strings.Repeat("<div>", 2000),
	} {
		for _, media := range []string{"text/html", "text/markdown", "image/svg+xml", "text/plain", "text/latex"} {
			page, _ := makePage(t, Options{}, shownCell(media, s))
			if strings.Contains(page, "position:fixed") && media != "text/plain" && media != "text/latex" {
				t.Errorf("%s: %s", media, s)
			}
		}
		makePage(t, Options{}, markdownCell(s))
		makePage(t, Options{}, markdownCell("# "+s))
		makePage(t, Options{Name: s}, outputCell(`{"output_type":"stream","name":"stdout","text":`+quoted(s)+`}`))
		makePage(t, Options{}, outputCell(`{"output_type":"error","ename":`+quoted(s)+`,"evalue":`+quoted(s)+`,"traceback":[`+quoted(s)+`]}`))
		makePage(t, Options{}, `{"cell_type":"raw","metadata":{},"source":`+quoted(s)+`}`,
			`{"cell_type":"code","metadata":{},"execution_count":null,"source":`+quoted(s)+`,"outputs":[]}`)
	}
}

func TestProse(t *testing.T) {
	for _, test := range []struct{ text, want string }{
		{`a $x_1*y_2*z$ b`, `<annotation encoding="application/x-tex">x_1*y_2*z</annotation>`},
		{`costs \$5 and \$6`, `costs $5 and $6`},
		{"$$\n\\frac{a}{b}\n$$", `<div class="formula"><math display="block">`},
		{`\begin{align}a&=b\\c&=d\end{align}`, `<mtable displaystyle="true">`},
		{`$\unheard x$`, `<code class="source">$\unheard x$</code>`},
		{"`$x$`", `<code>$x$</code>`},
		{"| a | b |\n| --- | ---: |\n| 1 | 2 |", `<td style="text-align:right">2</td>`},
		{"[see](https://example.org/x)", `<a href="https://example.org/x" rel="noreferrer">see</a>`},
		{"# A\n\n## B c\n\n[to](#B-c)", `<a href="#B-c">to</a>`},
		{"x<sub>2</sub>", `x<sub>2</sub>`},
	} {
		page, _ := makePage(t, Options{}, markdownCell(test.text))
		if !strings.Contains(page, test.want) {
			_, body, _ := strings.Cut(page, "<main>")
			t.Errorf("%s: no %s in %s", test.text, test.want, body)
		}
	}
}

// TestWarnings makes sure that nothing is dropped without a word.
func TestWarnings(t *testing.T) {
	for _, test := range []struct{ cell, want string }{
		{markdownCell(`$\unheard x$`), `cell 1: formula shown as source: \unheard is not known`},
		{markdownCell(`![x](https://example.org/x.png)`), "cell 1: the picture https://example.org/x.png was left out: the report loads nothing"},
		{markdownCell(`![x](../../../x.png)`), "there is no such file"},
		{markdownCell(`![x](attachment:y.png)`), "the cell has no such attachment"},
		{shownCell("text/html", `a<script>b</script>`), "a script element was left out"},
		{outputCell(`{"output_type":"display_data","metadata":{},"data":{"image/png":"%%%"}}`), "its base64 is broken"},
		{outputCell(`{"output_type":"display_data","metadata":{},"data":{"audio/ogg":"QQ=="}}`), "none of its forms audio/ogg"},
	} {
		_, warnings := makePage(t, Options{Folder: t.TempDir()}, test.cell)
		if len(warnings) != 1 || !strings.Contains(warnings[0], test.want) {
			t.Errorf("got %q, want %q", warnings, test.want)
		}
	}
}

// onePixel is a PNG of one pixel.
const onePixel = "iVBORw0KGgoAAAANSUhEUgAAAAEAAAABCAYAAAAfFcSJAAAADUlEQVR42mNk+M9QDwADhgGAWjR9awAAAABJRU5ErkJggg=="

func TestPictures(t *testing.T) {
	dir := t.TempDir()
	if err := os.WriteFile(filepath.Join(dir, "a.svg"), []byte(`<svg xmlns="http://www.w3.org/2000/svg"/>`), 0o666); err != nil {
		t.Fatal(err)
	}
	attached := `{"cell_type":"markdown","metadata":{},"source":"![y](attachment:y.png)","attachments":{"y.png":{"image/png":"` + onePixel + `"}}}`
	for _, test := range []struct{ cell, want string }{
		{attached, `<img src="data:image/png;base64,` + onePixel + `" alt="y"/>`},
		{markdownCell(`![z](a.svg)`), `<img src="data:image/svg+xml;base64,`},
		{shownCell("image/png", onePixel), `alt="the words"`},
		{shownCell("image/svg+xml", `<svg><g id="a"/><path clip-path="url(#a)"/></svg>`), `<path clip-path="url(#output-1-a)">`},
		{shownCell("image/svg+xml", `<svg><g/></svg>`), `aria-label="the words" role="img"`},
		{shownCell("image/svg+xml", `<svg><style>p{color:red}</style></svg>`), `<img src="data:image/svg+xml;base64,`},
	} {
		page, warnings := makePage(t, Options{Folder: dir}, test.cell)
		if !strings.Contains(page, test.want) || len(warnings) > 0 {
			_, body, _ := strings.Cut(page, "<main>")
			t.Errorf("no %s in %s (%q)", test.want, body, warnings)
		}
	}
}

func TestOutputs(t *testing.T) {
	result := `{"output_type":"display_data","metadata":{},"data":{"text/html":"<i>S</i> = 1","text/plain":"S = 1",` +
		`"application/vnd.levelsum.result+json":{"name":"S","value":1,"unit":""}}}`
	for _, test := range []struct{ cell, want string }{
		{outputCell(`{"output_type":"stream","name":"stderr","text":"\u001b[31mred\u001b[0m\n"}`), `aria-label="standard error">red</pre>`},
		{outputCell(`{"output_type":"stream","name":"stdout","text":"1%\r2%\r\n3%"}`), `<pre class="stream">2%` + "\n3%</pre>"},
		{outputCell(`{"output_type":"error","ename":"domain","evalue":"T = -3 K","traceback":["T = -3 K","cell 1, line 2"]}`), `<strong>domain</strong>: T = -3 K</p>` + "\n<pre>cell 1, line 2</pre>"},
		{outputCell(result), `<li><i>S</i> = 1 <a class="from" href="#cell-1">code 1</a></li>`},
		{shownCell("text/latex", `$\frac{a}{b}$`), `<mfrac>`},
		{shownCell("text/latex", `\begin{table}x\end{table}`), `<pre class="output">the words</pre>`},
		{outputCell(`{"output_type":"display_data","metadata":{},"data":{"application/json":{"a":[1,2]}}}`), `&#34;a&#34;: [`},
	} {
		page, warnings := makePage(t, Options{}, test.cell)
		if !strings.Contains(page, test.want) || len(warnings) > 0 {
			_, body, _ := strings.Cut(page, "<main>")
			t.Errorf("no %s in %s (%q)", test.want, body, warnings)
		}
	}
}

func TestOrder(t *testing.T) {
	cell := func(n string) string {
		return `{"cell_type":"code","metadata":{},"execution_count":` + n + `,"source":"x","outputs":[]}`
	}
	for _, test := range []struct {
		counts []string
		want   string
	}{
		{[]string{"1", "2", "3"}, "all 3 code cells once each, in order, in a fresh session"},
		{[]string{"2", "3"}, "NOT once each"},
		{[]string{"1", "3"}, "runs 1, 3"},
		{[]string{"1", "null"}, "runs 1, –"},
		{[]string{"null"}, "no cell has been run"},
	} {
		var cells []string
		for _, n := range test.counts {
			cells = append(cells, cell(n))
		}
		if page, _ := makePage(t, Options{}, cells...); !strings.Contains(page, test.want) {
			t.Errorf("%v: no %q", test.counts, test.want)
		}
	}
}

func TestCodeView(t *testing.T) {
	cell := outputCell("")
	folded, _ := makePage(t, Options{Code: Folded}, cell)
	shown, _ := makePage(t, Options{Code: Shown}, cell)
	hidden, _ := makePage(t, Options{Code: Hidden}, cell)
	if !strings.Contains(folded, "<details") || strings.Contains(shown, "<details") || !strings.Contains(shown, "<code>x</code>") ||
		strings.Contains(hidden, "<code>x</code>") {
		t.Error(folded, shown, hidden)
	}
	if _, _, err := Page(document(t, cell), Options{Code: "x"}); err == nil {
		t.Error("no error")
	}
}

// BenchmarkPage has 5 MB of tables.
func BenchmarkPage(b *testing.B) {
	table := "<table>" + strings.Repeat(`<tr><td style="text-align:left">1.2345</td><td>a</td></tr>`, 1000) + "</table>"
	var cells []string
	for range 90 {
		cells = append(cells, shownCell("text/html", table))
	}
	d, err := notebook.Parse("test.ipynb", []byte(`{"cells":[`+strings.Join(cells, ",")+`],"metadata":{},"nbformat":4,"nbformat_minor":4}`))
	if err != nil {
		b.Fatal(err)
	}
	for b.Loop() {
		if _, _, err := Page(d, Options{}); err != nil {
			b.Fatal(err)
		}
	}
}

// What is wider than paper is printed smaller, and said if that is much.
func TestWideThingsFitPaper(t *testing.T) {
	table := func(columns int) string {
		var b strings.Builder
		for _, row := range []string{"S / (J K−1 mol−1)", "1234.5678"} {
			cell := "td"
			if row != "1234.5678" {
				cell = "th"
			}
			b.WriteString("<tr>" + strings.Repeat(`<`+cell+` style="white-space:nowrap">`+row+`</`+cell+`>`, columns) + "</tr>")
		}
		return "<table style=\"border:0\">" + b.String() + "</table>"
	}
	for _, test := range []struct {
		text, want, warning string
	}{
		{table(4), "", ""},
		{table(10), `style="border:0;--fit:0.74"`, ""}, // 10 (9 + 2.6) = 116 of 86
		{table(30), `style="border:0;--fit:0.24"`, "cell 1: a table is wider than paper and will be printed at 24 % of the usual size"},
		{"$$" + strings.Repeat("a + ", 10) + "b$$", "", ""},
		{"$$" + strings.Repeat("a + ", 30) + "b$$", `<math display="block" style="--fit:0.73"`, ""}, // 30 (1 + 1.6) + 1 = 79 of 58
		{"$" + strings.Repeat("a + ", 30) + "b$", "", ""},                                           // is broken into lines
	} {
		d := document(t, markdownCell(test.text))
		page, warnings, err := Page(d, Options{})
		if err != nil {
			t.Fatal(err)
		}
		body := string(page)[strings.Index(string(page), "<main>"):]
		if test.want == "" && strings.Contains(body, "--fit") || !strings.Contains(body, test.want) {
			t.Errorf("%.40s: no %s in\n%s", test.text, test.want, body)
		}
		if strings.Join(warnings, "; ") != test.warning {
			t.Errorf("%.40s: warnings %q, want %q", test.text, warnings, test.warning)
		}
	}
}
