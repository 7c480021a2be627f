package rerun

import (
	"context"
	"crypto/sha256"
	"encoding/hex"
	"encoding/json"
	"fmt"
	"io"
	"slices"
	"strings"

	"levelsum/display"
	"levelsum/kernel/notebook"
)

// A Provenance says how the stored outputs of a document came about. It is the
// object "levelsum" of the document's metadata, so that a diff shows one place.
type Provenance struct {
	Version     string   `json:"levelsum,omitempty"`
	Go          string   `json:"go,omitempty"`
	Interpreter string   `json:"interpreter,omitempty"`
	Platform    string   `json:"platform,omitempty"`
	Constants   string   `json:"constants,omitempty"`
	Conventions []string `json:"conventions,omitempty"`
	// Options are those of the run, as the command line spells them.
	Options []string `json:"options,omitempty"`
	// Interpreted and Compiled are the cells that were run so: "In[1-3], In[5]".
	Interpreted string `json:"interpreted,omitempty"`
	Compiled    string `json:"compiled,omitempty"`
	// Program are those of Compiled that were one program, see Options.Whole;
	// the others were compiled each by itself.
	Program string `json:"program,omitempty"`
	// Stale are values that are older at the end than what they were made of.
	Stale []string `json:"stale,omitempty"`
	// Code is the SHA-256 of the code cells that were run.
	Code  string     `json:"code,omitempty"`
	Seeds []Seed     `json:"seeds,omitempty"`
	Data  []DataFile `json:"data,omitempty"`
}

// A Seed tells the seeds that random numbers for one use were made from.
type Seed struct {
	Use   string `json:"use"`
	Seeds string `json:"seeds"` // "1-100, 205"

	list []uint64
}

// provenanceKey is where a document keeps its provenance.
const provenanceKey = "levelsum"

// provenanceFields are the keys in it that are ours.
var provenanceFields = []string{"levelsum", "go", "interpreter", "platform", "constants", "conventions", "options",
	"interpreted", "compiled", "program", "stale", "code", "seeds", "data"}

// ReadProvenance returns what is stored, and nil if the document has not been
// run by Levelsum.
func ReadProvenance(d *notebook.Document) (*Provenance, error) {
	x := d.Metadata(provenanceKey)
	if x == nil {
		return nil, nil
	}
	b, err := json.Marshal(x)
	if err != nil {
		return nil, err
	}
	var p Provenance
	if err := json.Unmarshal(b, &p); err != nil {
		return nil, fmt.Errorf("metadata.levelsum: %w", err)
	}
	return &p, nil
}

// store puts the provenance into the document and keeps fields of others.
func (p *Provenance) store(d *notebook.Document) error {
	removeProvenance(d)
	b, err := json.Marshal(p)
	if err != nil {
		return err
	}
	var fields map[string]json.RawMessage
	if err := json.Unmarshal(b, &fields); err != nil {
		return err
	}
	for _, k := range provenanceFields {
		if v, ok := fields[k]; ok {
			if err := d.SetMetadata(v, provenanceKey, k); err != nil {
				return err
			}
		}
	}
	return nil
}

func removeProvenance(d *notebook.Document) {
	for _, k := range provenanceFields {
		d.RemoveMetadata(provenanceKey, k)
	}
}

// CodeHash returns the SHA-256 of the code cells of a document.
func CodeHash(d *notebook.Document) string {
	h := sha256.New()
	for _, c := range d.Cells() {
		if c.Kind() == notebook.Code {
			io.WriteString(h, c.Source()+"\x00")
		}
	}
	return hex.EncodeToString(h.Sum(nil))
}

// takeState takes what the session says of itself at the end, if it can.
func (p *Provenance) takeState(ctx context.Context, s Session) {
	t, ok := s.(interface {
		State(context.Context) (map[string]any, error)
	})
	if !ok {
		return
	}
	facts, err := t.State(ctx)
	if err != nil {
		return // the engine is gone, and the run has said so
	}
	take := func(x any, to any) {
		if b, err := json.Marshal(x); err == nil {
			_ = json.Unmarshal(b, to) // of another shape: not told
		}
	}
	take(facts["stale"], &p.Stale)
	var about [][2]string
	take(facts["about"], &about)
	for _, f := range about {
		switch f[0] {
		case "Levelsum":
			p.Version = f[1]
		case "Go":
			p.Go = f[1]
		case "interpreter":
			p.Interpreter = f[1]
		case "platform":
			p.Platform = f[1]
		case "constants":
			p.Constants = f[1]
		case "convention":
			p.Conventions = append(p.Conventions, f[1])
		}
	}
}

// takeOrigins takes the files and seeds that a cell has told of.
func (p *Provenance) takeOrigins(x any) {
	b, err := json.Marshal(x)
	if err != nil {
		return
	}
	var list []struct {
		File   string
		SHA256 string
		Rows   int
		Use    string
		Seed   uint64
	}
	if json.Unmarshal(b, &list) != nil {
		return
	}
	for _, o := range list {
		if o.Use != "" {
			i := slices.IndexFunc(p.Seeds, func(s Seed) bool { return s.Use == o.Use })
			if i < 0 {
				i = len(p.Seeds)
				p.Seeds = append(p.Seeds, Seed{Use: o.Use})
			}
			p.Seeds[i].list = append(p.Seeds[i].list, o.Seed)
		} else {
			p.Data = append(p.Data, DataFile{File: o.File, SHA256: o.SHA256, Rows: o.Rows})
		}
	}
}

// finish adds the files that string literals name and puts all in order.
func (p *Provenance) finish(d *notebook.Document, dir string) error {
	named, err := findData(d, dir)
	if err != nil {
		return err
	}
	for _, f := range named {
		if !slices.ContainsFunc(p.Data, func(g DataFile) bool { return g.File == f.File }) {
			p.Data = append(p.Data, f)
		}
	}
	slices.SortStableFunc(p.Data, func(a, b DataFile) int { return strings.Compare(a.File, b.File) })
	slices.SortStableFunc(p.Seeds, func(a, b Seed) int { return strings.Compare(a.Use, b.Use) })
	for i := range p.Seeds {
		p.Seeds[i].Seeds = display.Ranges(p.Seeds[i].list)
	}
	p.Code = CodeHash(d)
	return nil
}

// cellNumbers writes numbers of runs: "In[1-3], In[5]".
func cellNumbers(ns []int) string {
	if len(ns) == 0 {
		return ""
	}
	return "In[" + strings.ReplaceAll(listed(ns), ", ", "], In[") + "]"
}

// listed writes numbers: "1-3, 5".
func listed(ns []int) string {
	var us []uint64
	for _, n := range ns {
		us = append(us, uint64(n))
	}
	return display.Ranges(us)
}

// compareProvenance says what was different when the stored outputs were made.
// Data files and seeds decide about the numbers, so a difference of theirs is
// one of the notebook; versions, platform, constants and how cells were run
// are noted: whether they matter is seen in the results.
func compareProvenance(stored, now *notebook.Document) ([]Finding, error) {
	old, err := ReadProvenance(stored)
	if err != nil {
		return nil, err
	}
	cur, err := ReadProvenance(now)
	if err != nil {
		return nil, err
	}
	if old == nil {
		old = &Provenance{}
	}
	if cur == nil {
		cur = &Provenance{}
	}
	var all []Finding
	note := func(name, a, b string) {
		if a != b && a != "" && b != "" { // one side may not know
			all = append(all, Finding{Kind: "provenance", Name: name, Verdict: Noted, Old: a, Now: b})
		}
	}
	note("constants", old.Constants, cur.Constants)
	note("conventions", strings.Join(old.Conventions, "; "), strings.Join(cur.Conventions, "; "))
	note("Levelsum", old.Version, cur.Version)
	note("Go", old.Go, cur.Go)
	note("interpreter", old.Interpreter, cur.Interpreter)
	note("platform", old.Platform, cur.Platform)
	if old.Version != "" {
		note("cells compiled", orNone(old.Compiled), orNone(cur.Compiled))
	}
	for _, l := range History(stored) {
		all = append(all, Finding{Kind: "provenance", Cell: l.Cell, Name: "state", Verdict: Noted, Note: l.Text})
	}
	all = append(all, compareSeeds(old.Seeds, cur.Seeds)...)
	return append(all, compareData(old.Data, cur.Data)...), nil
}

func orNone(s string) string {
	if s == "" {
		return "none"
	}
	return s
}

func compareSeeds(old, cur []Seed) []Finding {
	list := func(seeds []Seed, use string) string {
		for _, s := range seeds {
			if s.Use == use {
				return s.Seeds
			}
		}
		return ""
	}
	var uses []string
	for _, s := range slices.Concat(cur, old) {
		if !slices.Contains(uses, s.Use) {
			uses = append(uses, s.Use)
		}
	}
	var all []Finding
	for _, use := range uses {
		f := Finding{Kind: "seed", Name: use, Old: list(old, use), Now: list(cur, use)}
		switch {
		case f.Old == f.Now:
			f.Verdict = Identical
		case f.Old == "":
			f.Verdict = New
		case f.Now == "":
			f.Verdict = Missing
		default:
			f.Verdict = Moved
		}
		all = append(all, f)
	}
	return all
}
