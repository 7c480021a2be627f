package session

import (
	"fmt"
	"strings"
	"sync"
	"time"
	"unicode/utf8"

	"levelsum/display"
	"levelsum/kernel/engine"
	"levelsum/kernel/wire"
)

// Text is gathered until gatherTime has passed since the first of it or
// gatherBytes have come.
const (
	gatherTime  = 30 * time.Millisecond
	gatherBytes = 64 << 10
)

// An output takes what one cell shows and publishes it with the header of the
// cell's request as parent, also after the cell is over. It is an
// engine.Output and an engine.Hinter.
type output struct {
	s      *Session
	r      *request
	silent bool

	mu      sync.Mutex // guards the fields below; held while publishing
	pending []event    // in the order in which they came
	bytes   int        // of text in pending
	timer   *time.Timer
	limit   engine.Limit
	shown   shownSoFar
	broken  map[string]string // by stream: the start of a rune
	stopped bool              // nothing is published any more
}

// An event is one thing to publish: text on a stream, a value, or the wish to
// clear what has been shown.
type event struct {
	kind    eventKind
	name    string // of the stream, or the id of the value
	text    []byte
	view    display.View
	replace bool // the value takes the place of the one with its id
	wait    bool // clear when the next thing is shown
}

type eventKind int

const (
	textEvent eventKind = iota
	viewEvent
	clearEvent
)

// newOutput returns the output of the cell of r. The output of the cell before
// publishes what it still has.
func (s *Session) newOutput(r *request) *output {
	if last := s.lastOutput.Load(); last != nil {
		last.flushNow()
	}
	o := &output{s: s, r: r, silent: r.execute.Silent, limit: engine.NewLimit(), broken: map[string]string{}}
	s.lastOutput.Store(o)
	return o
}

// Stream publishes text, soon.
func (o *output) Stream(name, text string) {
	if o.silent || text == "" {
		return
	}
	o.mu.Lock()
	defer o.mu.Unlock()
	text, o.broken[name] = escape(o.broken[name] + text)
	o.print(name, text)
	if o.bytes >= gatherBytes {
		o.flush()
	} else {
		o.soon()
	}
}

// print puts as much of text as the limit allows in line.
func (o *output) print(name, text string) {
	now, notice := o.limit.Add(name, text)
	o.add(name, []byte(now))
	o.add("stderr", []byte(notice))
}

// add puts text in line.
func (o *output) add(name string, text []byte) {
	if len(text) == 0 {
		return
	}
	o.bytes += len(text)
	if n := len(o.pending); n > 0 && o.pending[n-1].kind == textEvent && o.pending[n-1].name == name {
		o.pending[n-1].text = append(o.pending[n-1].text, text...)
		return
	}
	o.pending = append(o.pending, event{kind: textEvent, name: name, text: text})
}

// release puts in line what the limit has held back.
func (o *output) release() {
	notice, last := o.limit.Rest()
	o.add("stderr", []byte(notice))
	for _, p := range last {
		o.add(p.Name, p.Text)
	}
}

// escape returns text with each byte that is not UTF-8 written as \xNN, and
// the start of a rune at its end, if there is one, apart.
func escape(text string) (whole, rest string) {
	if utf8.ValidString(text) {
		return text, ""
	}
	var b strings.Builder
	for i := 0; i < len(text); {
		r, n := utf8.DecodeRuneInString(text[i:])
		if r == utf8.RuneError && n == 1 {
			if len(text)-i < utf8.UTFMax && !utf8.FullRuneInString(text[i:]) {
				return b.String(), text[i:]
			}
			fmt.Fprintf(&b, `\x%02x`, text[i])
		} else {
			b.WriteString(text[i : i+n])
		}
		i += n
	}
	return b.String(), ""
}

// escapeAll is escape for text that nothing follows.
func escapeAll(text string) string {
	var b strings.Builder
	for i := range len(text) {
		fmt.Fprintf(&b, `\x%02x`, text[i])
	}
	return b.String()
}

// Show publishes a value, soon.
func (o *output) Show(v display.View, id string, replace bool) {
	if o.silent {
		return
	}
	o.mu.Lock()
	defer o.mu.Unlock()
	o.release()
	if replace && id != "" {
		// Of several views of one place that wait, only the last is seen.
		for i := range o.pending {
			if e := &o.pending[i]; e.kind == viewEvent && e.name == id {
				e.view = v
				o.soon()
				return
			}
		}
	}
	o.pending = append(o.pending, event{kind: viewEvent, name: id, view: v, replace: replace && id != ""})
	o.soon()
}

// Clear takes back what the cell has shown.
func (o *output) Clear(wait bool) {
	if o.silent {
		return
	}
	o.mu.Lock()
	defer o.mu.Unlock()
	// What waits would be cleared at once; only a view that takes the place of
	// another, which may be another cell's, is still to be seen.
	kept := o.pending[:0]
	for _, e := range o.pending {
		switch {
		case e.kind == clearEvent:
			wait = wait && e.wait
		case e.kind == viewEvent && e.replace:
			kept = append(kept, e)
		}
	}
	o.pending = append(kept, event{kind: clearEvent, wait: wait})
	o.bytes = 0
	o.limit = engine.NewLimit()
	o.soon()
}

// Ask asks the reader for a line.
func (o *output) Ask(prompt string, secret bool) (string, error) {
	o.flushNow()
	return o.s.ask(o.r, prompt, secret)
}

// soon sees to it that what waits is published.
func (o *output) soon() {
	if o.timer == nil && len(o.pending) > 0 && !o.stopped {
		o.timer = time.AfterFunc(gatherTime, o.flushNow)
	}
}

func (o *output) flushNow() {
	o.mu.Lock()
	defer o.mu.Unlock()
	o.flush()
}

// flush publishes what waits.
func (o *output) flush() {
	if o.timer != nil {
		o.timer.Stop()
		o.timer = nil
	}
	events := o.pending
	o.pending, o.bytes = nil, 0
	if o.stopped {
		return
	}
	if len(events) > 0 {
		o.unhint()
	}
	for _, e := range events {
		o.shown.keep(e)
		o.publish(e)
	}
}

// publish tells the front ends of e now.
func (o *output) publish(e event) {
	kind, content := e.message()
	m := wire.New(o.s.sender.Header(kind), o.r.msg.RawHeader, content)
	bytes := 0
	if e.kind == textEvent { // of values the server counts the messages only
		bytes = len(m.Content)
	}
	o.s.flow.pass(o.s.ctx, bytes)
	o.s.publishMessage(m)
}

// message is what e is to the front ends.
func (e event) message() (kind string, content any) {
	switch e.kind {
	case textEvent:
		return "stream", wire.Stream{Name: e.name, Text: string(e.text)}
	case clearEvent:
		return "clear_output", wire.ClearOutput{Wait: e.wait}
	}
	data, metadata := bundle(e.view)
	transient := map[string]any{}
	if e.name != "" {
		transient["display_id"] = e.name
	}
	kind = "display_data"
	if e.replace {
		kind = "update_display_data"
	}
	return kind, wire.DisplayData{Data: data, Metadata: metadata, Transient: transient}
}

// finish publishes the rest: the cell is over. What goroutines of the cell
// print later is published too, up to a limit of its own.
func (o *output) finish() {
	o.mu.Lock()
	defer o.mu.Unlock()
	for _, name := range []string{"stdout", "stderr"} {
		if rest := o.broken[name]; rest != "" {
			o.print(name, escapeAll(rest))
			delete(o.broken, name)
		}
	}
	o.release()
	o.flush()
	o.settle()
	o.shown.over, o.shown.events = true, nil
	o.limit.More(engine.TailBytes)
}

// stop publishes what waits and nothing more.
func (o *output) stop() {
	o.mu.Lock()
	defer o.mu.Unlock()
	o.stopped = true
	o.flush()
}
