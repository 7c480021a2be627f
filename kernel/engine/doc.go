// Package engine is the parent's handle on the child process in which cells
// run. Nothing a cell does can end the process that holds an Engine: whatever
// happens in the child arrives as an [Outcome], and a child that died is
// started again.
//
//	e, err := engine.Start(ctx, engine.Options{Dir: folder})
//	out := e.Run(ctx, engine.Cell{N: 1, Source: src}, sink)
//	e.Interrupt()   // from another goroutine: ends the running cell
//	e.Restart(ctx)  // a fresh child, all values gone
//	e.Close()
//
// Run returns when the cell is over; one Run at a time. Complete and Inspect
// may be called while no cell runs. The child is this same executable, run as
// "levelsum engine"; the two talk in the messages of message.go over two
// pipes, and the child's standard output and error are pipes as well, so that
// nothing a cell prints escapes.
package engine
