// Package runner is the child process that runs cells: "levelsum engine". It
// owns the session's scope and values, checks each cell, has it compiled or
// interpreted, captures what it shows and turns every fault into words.
//
// One goroutine reads requests, so that a wish to stop arrives while a cell
// runs; another runs cells, one after the other, each on a goroutine of its
// own. A cell is over when that goroutine has returned, never earlier.
//
// A cell that is compiled is a plugin of its own, since only then is it known
// what it means. When all cells of a notebook are known before the first runs,
// program.go compiles them as one plugin.
package runner
