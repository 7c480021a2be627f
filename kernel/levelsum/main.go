/*
Levelsum serves notebooks whose cells are Go to a front end, runs them without
one, compares what they give with what is stored in them, and writes them as a
page.

Usage:

	levelsum run NOTEBOOK...      run, store the outputs, print the named results
	levelsum check NOTEBOOK...    run, say which results are not the stored ones
	levelsum report NOTEBOOK      write one page of HTML for readers and for paper
	levelsum clear NOTEBOOK...    take the outputs out
	levelsum script NOTEBOOK      write the code as one Go program
	levelsum install              register the kernel, compile what cells may import
	levelsum remove               take away what install has made
	levelsum serve FILE           answer a front end; front ends call it
	levelsum version              say what this is made of

levelsum COMMAND -h says more of a command. Results go to standard output,
messages to standard error; the exit status is 0, 1 (a cell failed, a result
moved) or 2 (misuse).
*/
package main

import (
	"fmt"
	"io"
	"os"
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
	"script":  script,
	"serve":   serve,
	"version": showVersion,
}

func main() {
	if len(os.Args) > 1 {
		if c := commands[os.Args[1]]; c != nil {
			os.Exit(c(os.Args[2:], os.Stdin, os.Stdout, os.Stderr))
		}
	}
	os.Exit(help(os.Args[1:], os.Stdout, os.Stderr))
}

const usage = `usage: levelsum COMMAND ...

  run NOTEBOOK...      run, store the outputs, print the named results
  check NOTEBOOK...    run, say which results are not the stored ones
  report NOTEBOOK      write one page of HTML for readers and for paper
  clear NOTEBOOK...    take the outputs out
  script NOTEBOOK      write the code as one Go program
  install              register the kernel, compile what cells may import
  remove               take away what install has made
  serve FILE           answer a front end; front ends call it
  version              say what this is made of

levelsum COMMAND -h says more of a command.
`

// help answers a call without a command that there is: asked for, it is a
// result.
func help(args []string, stdout, stderr io.Writer) int {
	if len(args) > 0 {
		switch args[0] {
		case "help", "-h", "-help", "--help":
			fmt.Fprint(stdout, usage)
			return 0
		}
		fmt.Fprintf(stderr, "levelsum: there is no command %q\n", args[0])
	}
	fmt.Fprint(stderr, usage)
	return 2
}
