package main

import (
	"flag"
	"fmt"
	"io"

	"levelsum/kernel/rerun"
)

const clearUsage = `usage: levelsum clear NOTEBOOK...

Takes out of each notebook what running it has put there: outputs, numbers of
runs, the provenance. Everything else stays.

The exit status is 0 on success, 2 if a file cannot be read as a notebook, 1 if
it cannot be written.
`

// clearNotebooks is "levelsum clear".
func clearNotebooks(args []string, _ io.Reader, stdout, stderr io.Writer) int {
	fs := flag.NewFlagSet("clear", flag.ContinueOnError)
	fs.SetOutput(stderr)
	fs.Usage = func() { fmt.Fprint(stderr, clearUsage) }
	if status, ok := parseFlags(fs, args, stdout, clearUsage); !ok {
		return status
	}
	status := 0
	for _, file := range fs.Args() {
		d, err := readNotebook(file)
		if err == nil {
			for _, m := range d.Mended {
				fmt.Fprintf(stderr, "%s: %s\n", file, m)
			}
			var to target
			if to, err = openTarget(file, true); err != nil {
				fmt.Fprintf(stderr, "levelsum: clear: %v\n", err)
				status = max(status, statusOf(err))
				continue
			}
			if err = rerun.Clear(d); err == nil {
				err = to.save(d)
			}
		}
		if err != nil {
			fmt.Fprintf(stderr, "levelsum: clear: %v\n", err)
			status = max(status, statusOf(err))
		}
	}
	return status
}
