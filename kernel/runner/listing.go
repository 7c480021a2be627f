package runner

import (
	"levelsum/kernel/cell"
	"levelsum/kernel/compile"
	"levelsum/kernel/engine"
	"levelsum/kernel/symbols/export"
)

// Listing returns cells as a Go program that does what they do; see
// [cell.Scope.Listing]. Nothing is run.
func Listing(about string, cells []engine.Cell) ([]byte, error) {
	var source export.Source
	if kit, err := compile.Here(); err == nil {
		source = kit
	} else if source, err = compile.TypesHere(); err != nil {
		return nil, err
	}
	sources := make([]*cell.Source, len(cells))
	for i, c := range cells {
		sources[i] = &cell.Source{N: c.N, Text: c.Source, ID: c.ID}
	}
	return cell.NewScope(export.New(source), usual).Listing(about, sources)
}
