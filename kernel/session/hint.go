package session

import (
	"slices"

	"levelsum/display"
	"levelsum/kernel/wire"
)

// keptBytes is how much of what a cell has shown is kept, to show it again
// without the hints between.
const keptBytes = 256 << 10

// shownSoFar is what the running cell has shown, as long as it is little.
type shownSoFar struct {
	events []event
	bytes  int
	hinted bool // a hint stands among what is shown
	over   bool // too much has been shown, or the cell has ended
}

// keep notes an event that is published now.
func (k *shownSoFar) keep(e event) {
	switch {
	case e.kind == clearEvent:
		// A clear that waits is kept: it clears the hint as well, but only with
		// what comes next.
		k.events, k.bytes = nil, 0
		if e.wait {
			k.events = []event{e}
		}
	case k.over:
	case e.replace && e.passing() && k.put(e):
		return // takes the room of the one before
	default:
		k.events = append(k.events, e)
	}
	k.bytes += e.size()
	if k.bytes > keptBytes {
		k.events, k.over = nil, true
	}
}

// put shows e in the place of the view with its name, if that is kept.
func (k *shownSoFar) put(e event) bool {
	for i := range k.events {
		if was := &k.events[i]; was.kind == viewEvent && was.name == e.name {
			was.view = e.view
			return true
		}
	}
	return false
}

// passing says that e is seen only while its cell runs: a progress line.
func (e event) passing() bool { return e.kind == viewEvent && display.Transient(e.view) }

// size is about how many bytes e takes.
func (e event) size() int {
	n := len(e.text)
	for _, v := range e.view.Data {
		switch v := v.(type) {
		case string:
			n += len(v)
		case []byte:
			n += len(v)
		default:
			n += len(wire.Marshal(v))
		}
	}
	return n
}

// Hint shows something to the reader of the moment: when it comes depends on
// the load of the machine, so it must not stay in what is stored. The protocol
// has no such messages. It is therefore text that is cleared away, with what the
// cell had shown before shown again, as soon as the cell shows something or
// ends. After long output it stays.
func (o *output) Hint(text string) {
	if o.silent {
		return
	}
	o.mu.Lock()
	defer o.mu.Unlock()
	o.flush()
	if o.stopped {
		return
	}
	o.publish(event{kind: textEvent, name: "stderr", text: []byte(text)})
	o.shown.hinted = !o.shown.over
}

// unhint clears the hints away.
func (o *output) unhint() {
	if !o.shown.hinted || o.stopped {
		return
	}
	o.shown.hinted = false
	o.publish(event{kind: clearEvent})
	for _, e := range o.shown.events {
		o.publish(e)
	}
}

// settle clears away what is seen only while the cell runs, in the same
// manner: an empty line would stay where a progress line has been.
func (o *output) settle() {
	o.unhint()
	before := len(o.shown.events)
	o.shown.events = slices.DeleteFunc(o.shown.events, event.passing)
	if len(o.shown.events) == before || o.stopped {
		return
	}
	o.publish(event{kind: clearEvent, wait: len(o.shown.events) > 0})
	for _, e := range o.shown.events {
		o.publish(e)
	}
}
