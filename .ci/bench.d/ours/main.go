// Command ours runs the workloads of work.go: it reads the name of one a line
// and prints what it took, one line of JSON each.
package main

import (
	"bufio"
	"fmt"
	"os"
	"syscall"

	"levelsum/display/draw"
)

func main() {
	draw.Register()
	cpu = func() float64 {
		var r syscall.Rusage
		check(syscall.Getrusage(syscall.RUSAGE_SELF, &r))
		return float64(r.Utime.Nano()+r.Stime.Nano()) / 1e9
	}
	for in := bufio.NewScanner(os.Stdin); in.Scan(); {
		fmt.Println(timed(in.Text()))
	}
}
