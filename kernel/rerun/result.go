package rerun

import (
	"encoding/json"
	"fmt"
	"math"

	"levelsum/kernel/notebook"
)

// resultType is the media type of a named result.
const resultType = "application/vnd.levelsum.result+json"

// provenanceType is the media type of the table of provenance.
const provenanceType = "application/vnd.levelsum.provenance+json"

// A Result is a named result as it is stored in an output.
type Result struct {
	Cell int
	Name string
	// Value and U are in Unit; U is the standard uncertainty, and HasU says
	// whether there is one.
	Value, U float64
	HasU     bool
	Unit     string
	// Withheld says why no uncertainty is given.
	Withheld string
	// Shown is the rounded form for the reader.
	Shown string
}

// Results returns the named results in the outputs of a document, in order.
func Results(d *notebook.Document) ([]Result, error) {
	var all []Result
	for _, c := range d.Cells() {
		for _, o := range c.Outputs() {
			x, ok := o.Data[resultType]
			if !ok {
				continue
			}
			r, err := parseResult(x)
			if err != nil {
				return nil, fmt.Errorf("cell %d: a stored result is broken: %w", c.N, err)
			}
			r.Cell = c.N
			r.Shown, _ = o.Data["text/plain"].(string)
			all = append(all, r)
		}
	}
	return all, nil
}

func parseResult(x any) (Result, error) {
	m, ok := x.(map[string]any)
	if !ok {
		return Result{}, fmt.Errorf("not an object")
	}
	var r Result
	if r.Name, ok = m["name"].(string); !ok || r.Name == "" {
		return Result{}, fmt.Errorf("no name")
	}
	r.Unit, _ = m["unit"].(string)
	r.Withheld, _ = m["withheld"].(string)
	if r.Value, ok = storedFloat(m["value"]); !ok {
		return Result{}, fmt.Errorf("%s: no value", r.Name)
	}
	r.U, r.HasU = storedFloat(m["u"])
	return r, nil
}

// storedFloat reads a number; one that JSON cannot hold is stored as text.
func storedFloat(x any) (float64, bool) {
	switch x := x.(type) {
	case json.Number:
		f, err := x.Float64()
		return f, err == nil
	case string:
		switch x {
		case "NaN":
			return math.NaN(), true
		case "+Inf", "Inf":
			return math.Inf(1), true
		case "-Inf":
			return math.Inf(-1), true
		}
	}
	return 0, false
}
