package display

import (
	"fmt"
	"slices"
	"strings"
)

// ProvenanceMediaType is the media type under which [Provenance] stores what it
// tells.
const ProvenanceMediaType = "application/vnd.levelsum.provenance+json"

// An Origin is something from outside a program that its numbers depend on: a
// file that was read, or the seed of random numbers.
type Origin struct {
	// File is the name of a file as it was opened, SHA256 is of its bytes as
	// they are stored, Rows the number of rows of numbers in it.
	File   string `json:"file,omitempty"`
	SHA256 string `json:"sha256,omitempty"`
	Rows   int    `json:"rows,omitempty"`
	// Seed is a seed and Use what it was for; Use is empty for a file.
	Use  string `json:"use,omitempty"`
	Seed uint64 `json:"seed,omitempty"`
}

// FileRead tells the notebook session that a file was read. Elsewhere it does
// nothing.
func FileRead(name, sha256 string, rows int) {
	tell(Origin{File: name, SHA256: sha256, Rows: rows})
}

// SeedUsed tells the notebook session that random numbers were made from a
// seed, and what for: "uncertain.MonteCarlo, 100000 draws". Elsewhere it does
// nothing.
func SeedUsed(use string, seed uint64) { tell(Origin{Use: use, Seed: seed}) }

func tell(o Origin) {
	if s, ok := Current().(interface{ Record(Origin) }); ok {
		s.Record(o)
	}
}

// Sources are what [Provenance] shows.
type Sources struct {
	// Facts are names with their values, in order: versions, platform,
	// constants, conventions.
	Facts [][2]string
	// Origins are the files and seeds in the order of their first use.
	Origins []Origin
}

// Provenance returns where the numbers of the session come from, as a small
// table for supporting information: versions, platform, constants, conventions,
// the options of the run, which cells were compiled, what is older than what it
// was made of, each data file that was read with its rows and SHA-256, each
// seed that was used. What later cells do is not in it: make it the last cell.
//
// The seeds are those of this module's calculations; random numbers that a
// cell makes by itself are recorded with [SeedUsed].
func Provenance() Viewer {
	if s, ok := Current().(interface{ Provenance() Sources }); ok {
		return s.Provenance()
	}
	return sessionView{Text("no notebook session")}
}

// View shows the table.
func (s Sources) View() View {
	var names, values []string
	for _, f := range s.Facts {
		names, values = append(names, f[0]), append(values, f[1])
	}
	for _, o := range s.Origins {
		if o.Use != "" {
			continue
		}
		names, values = append(names, "data", "SHA-256"), append(values, fmt.Sprintf("%s, %d rows", o.File, o.Rows), o.SHA256)
	}
	for i, o := range s.Origins {
		if o.Use == "" || slices.ContainsFunc(s.Origins[:i], func(p Origin) bool { return p.Use == o.Use }) {
			continue
		}
		var seeds []uint64
		for _, p := range s.Origins {
			if p.Use == o.Use {
				seeds = append(seeds, p.Seed)
			}
		}
		word := "seed"
		if len(seeds) > 1 {
			word = "seeds"
		}
		names, values = append(names, word), append(values, fmt.Sprintf("%s (%s)", Ranges(seeds), o.Use))
	}
	v := Table{Caption: "Provenance", Limit: max(len(names), 1),
		Columns: []Column{{Quantity: "what", Values: names}, {Quantity: "value", Values: values}}}.View()
	facts := [][2]string{}
	v.Data[ProvenanceMediaType] = map[string]any{
		"facts": append(facts, s.Facts...), "origins": append([]Origin{}, s.Origins...)}
	return v
}

// Ranges writes whole numbers in ascending order, each once: "1-100, 205".
func Ranges(ns []uint64) string {
	ns = slices.Clone(ns)
	slices.Sort(ns)
	ns = slices.Compact(ns)
	var parts []string
	for i := 0; i < len(ns); {
		j := i
		for j+1 < len(ns) && ns[j+1] == ns[j]+1 {
			j++
		}
		part := fmt.Sprint(ns[i])
		if j > i {
			part += fmt.Sprintf("-%d", ns[j])
		}
		parts = append(parts, part)
		i = j + 1
	}
	return strings.Join(parts, ", ")
}
