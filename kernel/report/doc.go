// Package report writes a notebook as one page that needs nothing else: no
// network, no script, no font, no file beside it.
//
//	page, warnings, err := report.Page(d, report.Options{Name: "copper.ipynb"})
//
// Prose is Markdown with formulas between dollar signs, which become MathML
// (package mathml); a formula that cannot be converted is shown as its source
// and warned of. Outputs are shown in the richest form that the page can hold.
// What comes from a notebook may come from anyone: all HTML and SVG in it is
// parsed and rebuilt from lists of what is harmless (clean.go), and the page
// forbids browsers to load anything.
//
// A table of contents stands at the top; at the end the named results and where
// everything came from: versions, data files with their hashes, and whether
// the cells were run once each and in order.
package report
