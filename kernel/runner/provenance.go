package runner

import (
	"encoding/json"
	"os"
	"path/filepath"
	"runtime"
	"runtime/debug"
	"slices"
	"strings"
	"sync"

	"levelsum/display"
)

// About is what the program knows of itself.
type About struct {
	Version     string
	Constants   string   // the adjustment of the physical constants
	Conventions []string // that hold where a call does not say otherwise
}

// OptionsEnv is the variable of the environment in which a run without a front
// end hands down its options, a list in JSON.
const OptionsEnv = "LEVELSUM_RUN_OPTIONS"

// provenance is what the session knows of where its numbers come from.
type provenance struct {
	about   About
	options []string
	folder  string // in which the session started

	mu      sync.Mutex // guards what follows
	origins []display.Origin
	seen    map[display.Origin]bool
	told    int // so many of them have been told to the parent
	how     []cellHow
	stale   []string // what the running cell reads and is older than it should be
}

type cellHow struct {
	cell int
	how  string
}

func (p *provenance) init(about About) {
	p.about = about
	p.folder, _ = os.Getwd()
	if s := os.Getenv(OptionsEnv); s != "" {
		_ = json.Unmarshal([]byte(s), &p.options) // ours
		os.Unsetenv(OptionsEnv)
	}
}

// ran notes how a cell was run.
func (p *provenance) ran(cell int, how string) {
	p.mu.Lock()
	defer p.mu.Unlock()
	p.how = slices.DeleteFunc(p.how, func(c cellHow) bool { return c.cell == cell })
	p.how = append(p.how, cellHow{cell, how})
}

// fresh returns the origins that were recorded since the last call.
func (p *provenance) fresh() []display.Origin {
	p.mu.Lock()
	defer p.mu.Unlock()
	out := slices.Clone(p.origins[p.told:])
	p.told = len(p.origins)
	return out
}

func (p *provenance) setStale(lines []string) {
	p.mu.Lock()
	defer p.mu.Unlock()
	p.stale = lines
}

// name returns the name of a file as it may be stored: relative to the
// session's folder if it is in there, else as it was spelled, without the
// folders of this machine.
func (p *provenance) name(file string) string {
	if filepath.IsAbs(file) {
		in, err := filepath.Rel(p.folder, file)
		if err != nil || !filepath.IsLocal(in) {
			return filepath.Base(file)
		}
		file = in
	}
	return filepath.ToSlash(filepath.Clean(file))
}

// Record notes an origin once.
func (s sink) Record(o display.Origin) {
	p := &s.r.origin
	if o.Use == "" {
		o.File = p.name(o.File)
	}
	p.mu.Lock()
	defer p.mu.Unlock()
	if !p.seen[o] {
		if p.seen == nil {
			p.seen = map[display.Origin]bool{}
		}
		p.seen[o] = true
		p.origins = append(p.origins, o)
	}
}

// facts are the names and values that do not depend on what cells did.
func (p *provenance) facts() [][2]string {
	out := [][2]string{
		{"Levelsum", p.about.Version},
		{"Go", runtime.Version()},
		{"interpreter", interpreterVersion()},
		{"platform", runtime.GOOS + "/" + runtime.GOARCH},
		{"constants", p.about.Constants},
	}
	for _, c := range p.about.Conventions {
		out = append(out, [2]string{"convention", c})
	}
	return out
}

// Provenance tells all for display.Provenance.
func (s sink) Provenance() display.Sources {
	p := &s.r.origin
	out := display.Sources{Facts: p.facts()}
	add := func(name, value string) {
		if value != "" {
			out.Facts = append(out.Facts, [2]string{name, value})
		}
	}
	for _, o := range p.options {
		add("option", o)
	}
	stale := s.r.stale()
	p.mu.Lock()
	defer p.mu.Unlock()
	for _, how := range []string{"interpreted", "compiled"} {
		var cells []uint64
		for _, c := range p.how {
			if c.how == how {
				cells = append(cells, uint64(max(0, c.cell)))
			}
		}
		add("cells "+how, cellNumbers(cells))
	}
	for _, l := range stale {
		add("older than it should be", cellText(l))
	}
	out.Origins = slices.Clone(p.origins)
	return out
}

// cellNumbers writes numbers of cells: "In[1-3], In[5]".
func cellNumbers(ns []uint64) string {
	if len(ns) == 0 {
		return ""
	}
	return "In[" + strings.ReplaceAll(display.Ranges(ns), ", ", "], In[") + "]"
}

// interpreterVersion names the interpreter that is linked in.
func interpreterVersion() string {
	const path = "github.com/traefik/yaegi"
	if info, ok := debug.ReadBuildInfo(); ok {
		for _, m := range info.Deps {
			if m.Path == path {
				return "yaegi " + m.Version
			}
		}
	}
	return "yaegi"
}

// marked adds to a view what the running cell reads and is older than what it
// was made of.
func (p *provenance) marked(v display.View) display.View {
	p.mu.Lock()
	stale := p.stale
	p.mu.Unlock()
	if len(stale) == 0 {
		return v
	}
	meta := map[string]any{}
	for k, x := range v.Metadata {
		meta[k] = x
	}
	own := map[string]any{"stale": stale}
	if old, ok := meta["levelsum"].(map[string]any); ok {
		for k, x := range old {
			own[k] = x
		}
	}
	meta["levelsum"] = own
	v.Metadata = meta
	return v
}
