// Command levelsum serves notebooks.
package main

import (
	"fmt"
	"io"
	"maps"
	"os"
	"slices"
	"strings"
)

// version is the version of this program.
const version = "0.1.0"

// A command does what one word after levelsum asks and returns the exit status:
// 0, 1 (a cell failed, a result moved) or 2 (misuse).
type command func(args []string, stdin io.Reader, stdout, stderr io.Writer) int

// commands has one entry for each file of this package that has a command.
var commands = map[string]command{
	"check":   check,
	"clear":   clearNotebooks,
	"engine":  runEngine,
	"install": install,
	"remove":  remove,
	"report":  makeReport,
	"run":     run,
	"serve":   serve,
	"version": showVersion,
}

func main() {
	if len(os.Args) > 1 {
		if c := commands[os.Args[1]]; c != nil {
			os.Exit(c(os.Args[2:], os.Stdin, os.Stdout, os.Stderr))
		}
	}
	fmt.Fprintf(os.Stderr, "usage: levelsum %s ...\n", strings.Join(slices.Sorted(maps.Keys(commands)), " | "))
	os.Exit(2)
}
