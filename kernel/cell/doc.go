// Package cell turns the source of a notebook cell into checked, versioned Go.
//
// A cell is Go as it would stand in a function body, with declarations of
// types, functions, methods and imports allowed in between. [Scope] is what a
// session has declared so far. [Scope.Check] splits a cell ([split]), checks it
// with go/types against the scope and plans how it is run, without changing
// anything; [Scope.Commit] makes the plan part of the scope. A cell with an
// error changes nothing.
//
// Terms: a decl is a declaration of types, constants, one function or one
// method; a variable declared at the outer level of a cell is a session
// variable and lives in a slot, a place of its own that interpreted and
// compiled code reach through a pointer; a unit is one Go package of compiled
// code that a cell makes necessary: its own decls, the older decls that depend
// on what it changed, and its statements.
//
// The package knows Go and go/types; it knows neither the interpreter nor
// processes. What is interpreted is decided by [proved], what is compiled is
// written by emit.go and its neighbours.
package cell
