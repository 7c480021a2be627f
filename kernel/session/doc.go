// Package session serves one kernel: it answers the requests of front ends and
// tells them what happens. It is the only package that knows both messages and
// cells.
//
// A [Session] owns five sockets and one [Engine]. Who does what:
//
//	shell reader    empties the shell socket into a queue, whatever runs
//	shell worker    takes requests from the queue, one at a time, and runs cells
//	announcer       tells the engine of cells that wait in the queue
//	control reader  answers interrupt, shutdown and kernel_info at once
//	stdin reader    hands what the reader typed to the cell that asked
//	heartbeat       echoes
//	boot            starts the engine; what needs none is answered meanwhile
//
// Each request type is answered in a file of its own; dispatch.go lists them.
// Around every request the status busy and idle is published, with the
// request's header as parent. What a cell shows goes through an output
// (output.go), which gathers text for a moment, keeps the order, holds back
// the middle of very long output (limit.go) and keeps below the rate that
// front ends allow (flow.go).
//
// Leaving: [Session.Stop], a shutdown request or the end of Serve's context
// ends the session. The running cell and a question to the reader are broken
// off, the engine is closed, the worker publishes its last messages, and the
// sockets are closed after what they hold has been sent. Every goroutine has
// then ended, all of it within a second.
package session
