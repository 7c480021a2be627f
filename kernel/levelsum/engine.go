package main

import (
	"fmt"
	"io"

	child "levelsum/kernel/runner"
)

// runEngine is the process that runs cells. Levelsum starts it itself.
func runEngine(args []string, _ io.Reader, _, stderr io.Writer) int {
	compileAll := len(args) == 1 && args[0] == "-compiled"
	if len(args) > 0 && !compileAll {
		fmt.Fprintln(stderr, "levelsum engine: takes no arguments but -compiled; it is started by levelsum itself")
		return 2
	}
	return child.Main(compileAll)
}
