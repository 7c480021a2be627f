package main

import (
	"fmt"
	"io"

	child "levelsum/kernel/runner"
	"levelsum/statmech/unit"
)

// conventions hold in statmech where a call does not say otherwise.
var conventions = []string{
	"p° = 1 bar",
	"reference temperature 298.15 K",
	"temperatures on ITS-90 unless a file names another scale",
	"nuclear spin is not counted in the entropy of a gas",
	"uncertainties are standard uncertainties (k = 1)",
}

// runEngine is the process that runs cells. Levelsum starts it itself.
func runEngine(args []string, _ io.Reader, _, stderr io.Writer) int {
	compileAll := len(args) == 1 && args[0] == "-compiled"
	if len(args) > 0 && !compileAll {
		fmt.Fprintln(stderr, "levelsum engine: takes no arguments but -compiled; it is started by levelsum itself")
		return 2
	}
	return child.Main(child.About{Version: version, Constants: unit.ConstantsSource, Conventions: conventions}, compileAll)
}
