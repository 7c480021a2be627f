package display

import (
	"fmt"
	"sync"
	"time"
)

// Progress is one line that says how far a long computation is, at most five
// times a second, with the time that is left. It takes the place of the line
// before and is gone when the work is done; work of less than a second shows
// nothing. Its methods may be called from several goroutines.
//
//	p := display.NewProgress("Monte Carlo", 100000)
//	defer p.Done()
//	for i := range 100000 {
//		...
//		p.Step(1)
//	}
//
// The views are marked "transient" in their metadata (see [Transient]): what
// stores outputs leaves them away.
type Progress struct {
	what  string
	total int
	id    string

	mu    sync.Mutex // guards what follows
	done  int
	begun time.Time
	last  time.Time
	shown bool
	ended bool
}

const (
	progressEvery = 200 * time.Millisecond
	progressFirst = time.Second
)

var progressCount struct {
	sync.Mutex
	n int
}

// NewProgress begins a line for total steps; 0 if their number is not known.
func NewProgress(what string, total int) *Progress {
	progressCount.Lock()
	progressCount.n++
	id := fmt.Sprintf("progress-%d", progressCount.n)
	progressCount.Unlock()
	now := time.Now()
	return &Progress{what: oneLineText(what), total: total, id: id, begun: now, last: now.Add(progressFirst - progressEvery)}
}

// Step says that n more steps are done.
func (p *Progress) Step(n int) {
	p.mu.Lock()
	defer p.mu.Unlock()
	if p.ended {
		return
	}
	p.done += n
	now := time.Now()
	if now.Sub(p.last) < progressEvery {
		return
	}
	p.last = now
	p.show(p.line(now.Sub(p.begun)))
}

// Done takes the line away. It may be called twice.
func (p *Progress) Done() {
	p.mu.Lock()
	defer p.mu.Unlock()
	if p.ended {
		return
	}
	p.ended = true
	if p.shown {
		p.show("")
	}
}

func (p *Progress) show(line string) {
	v := Text(line)
	v.Metadata = map[string]any{transientKey: map[string]any{"transient": true}}
	Current().Show(v, p.id, p.shown)
	p.shown = true
}

const transientKey = "levelsum"

// Transient reports whether a view is not to be stored: a progress line.
func Transient(v View) bool {
	m, _ := v.Metadata[transientKey].(map[string]any)
	t, _ := m["transient"].(bool)
	return t
}

func (p *Progress) line(elapsed time.Duration) string {
	if p.total <= 0 {
		return fmt.Sprintf("%s: %d done in %s", p.what, p.done, span(elapsed))
	}
	s := fmt.Sprintf("%s: %d of %d (%d %%)", p.what, p.done, p.total, int(100*float64(p.done)/float64(p.total)))
	if p.done > 0 && p.done < p.total {
		left := time.Duration(float64(elapsed) / float64(p.done) * float64(p.total-p.done))
		s += ", about " + span(left) + " left"
	}
	return s
}

// span writes a time as a reader wants it.
func span(d time.Duration) string {
	s := int(d.Seconds() + 0.5)
	switch {
	case s < 90:
		return fmt.Sprintf("%d s", s)
	case s < 90*60:
		return fmt.Sprintf("%d min", (s+30)/60)
	}
	return fmt.Sprintf("%d h %d min", s/3600, s%3600/60)
}
