package main

import (
	"flag"
	"fmt"
	"io"
	"os"
	"path/filepath"
	"strings"

	"levelsum/kernel/notebook"
	"levelsum/kernel/report"
	"levelsum/kernel/rerun"
)

const reportUsage = `usage: levelsum report [flags] NOTEBOOK -o FILE.html

Writes a notebook, as it is stored, as one page that needs no network, no
script and no other file. Nothing is run: run or check the notebook before.

  -o FILE.html
        The page.
  -code folded|shown|hidden
        How code is shown: folded (the default) opens by a click and is left
        out on paper.

What the page cannot show as the notebook has it is said on standard error. The
exit status is 0 on success, 2 on misuse or if the file cannot be read as a
notebook, 1 if the page cannot be written.
`

// makeReport is "levelsum report".
func makeReport(args []string, _ io.Reader, stdout, stderr io.Writer) int {
	fs := flag.NewFlagSet("report", flag.ContinueOnError)
	fs.SetOutput(stderr)
	fs.Usage = func() { fmt.Fprint(stderr, reportUsage) }
	out := fs.String("o", "", "")
	code := fs.String("code", string(report.Folded), "")
	if status, ok := parseFlags(fs, args, stdout, reportUsage); !ok {
		return status
	}
	fail := func(status int, format string, a ...any) int {
		fmt.Fprintf(stderr, "levelsum: report: "+format+"\n", a...)
		return status
	}
	switch {
	case fs.NArg() > 1:
		return fail(2, "one notebook at a time")
	case *out == "":
		return fail(2, "where to? -o FILE.html")
	case strings.HasSuffix(*out, ".ipynb"):
		return fail(2, "%s looks like a notebook; the page is not written there", *out)
	}
	switch report.CodeView(*code) {
	case report.Folded, report.Shown, report.Hidden:
	default:
		return fail(2, "-code %s: want folded, shown or hidden", *code)
	}
	file := fs.Arg(0)
	if err := writable(*out); err != nil {
		return fail(statusOf(err), "%v", err)
	}
	if _, err := readNotebook(file); err != nil {
		return fail(statusOf(err), "%v", err)
	}
	data, err := os.ReadFile(file)
	if err != nil {
		return fail(statusOf(err), "%v", err)
	}
	d, err := notebook.Parse(file, data)
	if err != nil {
		return fail(statusOf(err), "%v", err)
	}
	var state []string
	for _, r := range append(rerun.History(d), rerun.ChangedData(d, filepath.Dir(file))...) {
		state = append(state, r.String())
	}
	page, warnings, err := report.Page(d, report.Options{
		Name:    filepath.Base(file),
		File:    data,
		Folder:  filepath.Dir(file),
		State:   state,
		Version: version,
		Code:    report.CodeView(*code),
	})
	if err != nil {
		return fail(1, "%s: %v", file, err)
	}
	for _, m := range d.Mended {
		fmt.Fprintf(stderr, "%s: %s\n", file, m)
	}
	for _, w := range append(state, warnings...) {
		fmt.Fprintf(stderr, "%s: %s\n", file, w)
	}
	if err := writeWhole(*out, page); err != nil {
		return fail(1, "%v", err)
	}
	return 0
}

// writeWhole writes a file so that a crash leaves the old one or the new one.
func writeWhole(path string, data []byte) error {
	f, err := os.CreateTemp(filepath.Dir(path), ".levelsum-*")
	if err != nil {
		return err
	}
	defer os.Remove(f.Name()) // fails once the file has its name
	if _, err := f.Write(data); err != nil {
		f.Close()
		return err
	}
	if err := f.Chmod(0o644); err != nil {
		f.Close()
		return err
	}
	if err := f.Close(); err != nil {
		return err
	}
	return os.Rename(f.Name(), path)
}
