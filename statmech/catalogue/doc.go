// Package catalogue lists what there is: models, calculations, units, data,
// worked notebooks, a line each.
//
//	catalogue.All()
//
// is shown by a notebook as tables and prints as plain text. The lines are the
// first sentences of the documentation, so that the list agrees with it; go
// generate writes them down.
package catalogue

//go:generate go run generate.go
