// Package assist answers what an editor asks about a cell while it is written:
// whether it is complete ([IsComplete]), how it can go on ([Complete]) and what
// stands at the cursor ([Inspect]). Its functions keep no state.
//
// Completion and inspection work on types, also in a cell that is broken. A
// name of our own is put at the cursor, brackets that are still open are
// closed, and go/types checks what the parser makes of it against what the
// session has declared; errors do not matter, since the checker tells the types
// of all that it understands.
package assist
