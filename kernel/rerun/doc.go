// Package rerun runs a notebook without a front end, and says whether a
// notebook still gives the results that are stored in it.
//
// [Run] executes the code cells of a document in order in a fresh session and
// stores what they show in the document, in the form in which front ends store
// it. [Compare] holds one executed document against another: named results by
// their numbers and uncertainties, tables cell by cell, figures by the numbers
// they draw, text by the text, data files by their content.
//
// The package knows notebooks and the messages of the engine, not the
// language: what runs the cells is a [Session].
package rerun
