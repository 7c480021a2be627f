package report

import (
	"crypto/sha256"
	"encoding/json"
	"fmt"
	"maps"
	"slices"
	"strings"

	"levelsum/kernel/notebook"
)

// resultList repeats the named results at the end, each with the way to the
// cell that shows it.
func (p *page) resultList(d *notebook.Document) {
	if len(p.results) == 0 {
		return
	}
	p.line(`<section class="results"><h2 id="results">Results</h2>`)
	p.line("<ul>")
	for _, r := range p.results {
		where := fmt.Sprintf("cell %d", r.cell)
		if n := d.Cells()[r.cell-1].ExecutionCount(); n > 0 {
			where = fmt.Sprintf("code %d", n)
		}
		p.line("<li>", r.html, fmt.Sprintf(` <a class="from" href="#cell-%d">%s</a></li>`, r.cell, where))
	}
	p.line("</ul></section>")
	p.contents = append(p.contents, heading{2, "results", "Results"})
}

// provenance says where the page came from.
func (p *page) provenance(d *notebook.Document) {
	p.line(`<footer class="provenance"><h2 id="provenance">Provenance</h2>`)
	p.contents = append(p.contents, heading{2, "provenance", "Provenance"})
	p.line("<dl>")
	entry := func(name string, value any) {
		p.line("<dt>", escape(name), "</dt><dd>", nested(value), "</dd>")
	}
	if p.o.Name != "" {
		entry("notebook", p.o.Name)
	}
	if p.o.File != nil {
		entry("SHA-256 of the notebook", fmt.Sprintf("%x", sha256.Sum256(p.o.File)))
	}
	entry("order of the runs", order(d))
	if k, ok := d.Metadata("kernelspec", "display_name").(string); ok {
		entry("kernel", k)
	}
	if l, ok := d.Metadata("language_info", "name").(string); ok {
		if v, ok := d.Metadata("language_info", "version").(string); ok && v != "" {
			l += " " + v
		}
		entry("language", l)
	}
	if p.o.Version != "" {
		entry("report made by", "levelsum "+p.o.Version)
	}
	if len(p.o.State) > 0 {
		var list []any
		for _, s := range p.o.State {
			list = append(list, s)
		}
		p.line(`<dt>what a reader must know</dt><dd class="state">`, nested(list), "</dd>")
	}
	p.line("</dl>")
	own, _ := d.Metadata("levelsum").(map[string]any)
	if len(own) > 0 {
		p.line("<h3>Recorded by the last headless run</h3>\n<dl>")
		p.recorded(own, entry)
		p.line("</dl>")
	}
	if list, ok := own["data"].([]any); ok && len(list) > 0 {
		p.dataFiles(list)
	}
	p.line("</footer>")
}

// fields are what a run records, in the order in which a reader wants it.
var fields = []struct{ key, label string }{
	{"levelsum", "Levelsum"}, {"go", "Go"}, {"interpreter", "interpreter"}, {"platform", "platform"},
	{"constants", "physical constants"}, {"conventions", "default conventions"},
	{"options", "options of the run"}, {"interpreted", "cells interpreted"}, {"compiled", "cells compiled"}, {"program", "of them as one program"},
	{"stale", "stale values"}, {"seeds", "seeds of random numbers"},
	{"code", "SHA-256 of the code"},
}

// recorded writes what a run has recorded, and what others have put there.
func (p *page) recorded(own map[string]any, entry func(string, any)) {
	known := map[string]bool{"data": true}
	for _, f := range fields {
		known[f.key] = true
		x, ok := own[f.key]
		if !ok {
			continue
		}
		if list, ok := x.([]any); ok && f.key == "seeds" {
			var lines []any
			for _, y := range list {
				m, _ := y.(map[string]any)
				lines = append(lines, fmt.Sprintf("%v (%v)", m["seeds"], m["use"]))
			}
			x = lines
		}
		entry(f.label, x)
	}
	for _, k := range slices.Sorted(maps.Keys(own)) {
		if !known[k] {
			entry(k, own[k])
		}
	}
}

func (p *page) dataFiles(list []any) {
	p.line(`<table><caption>Data files that were read</caption>`)
	p.line(`<thead><tr><th scope="col">file</th><th scope="col">rows</th><th scope="col">SHA-256</th></tr></thead><tbody>`)
	for _, x := range list {
		m, _ := x.(map[string]any)
		p.line("<tr><td>", nested(m["file"]), `</td><td>`, nested(m["rows"]), `</td><td class="hash">`, nested(m["sha256"]), "</td></tr>")
	}
	p.line("</tbody></table>")
}

// nested returns a value of JSON as text and lists.
func nested(x any) string {
	switch x := x.(type) {
	case nil:
		return ""
	case string:
		return escape(x)
	case json.Number:
		return escape(x.String())
	case []any:
		var b strings.Builder
		for _, y := range x {
			b.WriteString("<li>" + nested(y) + "</li>")
		}
		return "<ul>" + b.String() + "</ul>"
	case map[string]any:
		var b strings.Builder
		for _, k := range slices.Sorted(maps.Keys(x)) {
			b.WriteString("<li>" + escape(k) + ": " + nested(x[k]) + "</li>")
		}
		return "<ul>" + b.String() + "</ul>"
	}
	return escape(fmt.Sprint(x))
}

// order says what the numbers of the runs tell: whether the cells were run
// once each, from the first to the last.
func order(d *notebook.Document) string {
	var counts []string
	next, inOrder, notRun := 1, true, 0
	for _, c := range d.Cells() {
		if c.Kind() != notebook.Code || strings.TrimSpace(c.Source()) == "" {
			continue
		}
		n := c.ExecutionCount()
		if n == 0 {
			notRun++
			counts = append(counts, "–")
			continue
		}
		inOrder = inOrder && n == next
		next = n + 1
		counts = append(counts, fmt.Sprint(n))
	}
	switch {
	case len(counts) == 0:
		return "the notebook has no code"
	case notRun == len(counts):
		return "no cell has been run"
	case inOrder && notRun == 0:
		return fmt.Sprintf("all %d code cells once each, in order, in a fresh session", len(counts))
	}
	return "NOT once each and in order, so that a value may be older than its cell: runs " + strings.Join(counts, ", ")
}
