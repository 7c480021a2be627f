package main

import (
	"flag"
	"fmt"
	"io"
	"os"
	"path/filepath"
	"strings"

	"levelsum/kernel/engine"
	"levelsum/kernel/notebook"
	child "levelsum/kernel/runner"
)

const scriptUsage = `usage: levelsum script [-o FILE.go] NOTEBOOK

Writes the code of a notebook as one Go program: each cell is a function, what
cells share are variables of the package, the last value of a cell is shown as
text. Relative paths in it mean the notebook's folder, so it is run there. It
needs a module that requires levelsum; the README says how to make one.

  -o FILE.go
        Write to this file; without it, to standard output.

The exit status is 0 on success, 1 if a cell does not compile, 2 on misuse.
`

// script is "levelsum script".
func script(args []string, _ io.Reader, stdout, stderr io.Writer) int {
	fs := flag.NewFlagSet("script", flag.ContinueOnError)
	fs.SetOutput(stderr)
	fs.Usage = func() { fmt.Fprint(stderr, scriptUsage) }
	out := fs.String("o", "", "")
	if status, ok := parseFlags(fs, args, stdout, scriptUsage); !ok {
		return status
	}
	fail := func(status int, format string, a ...any) int {
		fmt.Fprintf(stderr, "levelsum: script: "+format+"\n", a...)
		return status
	}
	if fs.NArg() != 1 {
		return fail(2, "one notebook at a time")
	}
	file := fs.Arg(0)
	d, err := notebook.Read(file)
	if err != nil {
		return fail(statusOf(err), "%v", err)
	}
	var cells []engine.Cell
	n := 0
	for _, c := range d.Cells() {
		if c.Kind() == notebook.Code && strings.TrimSpace(c.Source()) != "" {
			n++
			cells = append(cells, engine.Cell{N: n, Source: c.Source(), ID: c.ID()})
		}
	}
	name := filepath.Base(file)
	about := fmt.Sprintf("Command %s is the code of the notebook %s,\nas levelsum script writes it. It is run in the notebook's folder.\n",
		strings.TrimSuffix(name, filepath.Ext(name)), name)
	text, err := child.Listing(about, cells)
	if err != nil {
		return fail(1, "%s: %v", file, err)
	}
	if *out == "" {
		_, err = stdout.Write(text)
	} else {
		err = os.WriteFile(*out, text, 0o666)
	}
	if err != nil {
		return fail(1, "%v", err)
	}
	return 0
}
