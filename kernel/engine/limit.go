package engine

import (
	"bytes"
	"fmt"
	"unicode/utf8"
)

// What a cell may print. Up to head it is shown as it comes; of the rest the
// last part is kept and shown when the cell ends, or before it shows something
// else: the first time tail bytes, then laterTail.
const (
	HeadBytes = 512 << 10
	TailBytes = 64 << 10
	laterTail = 4 << 10
)

// A Limit cuts the middle out of long output. It is deterministic: the same
// text in the same order is cut in the same place.
type Limit struct {
	head, tail int // bytes left for the head, bytes kept of the rest
	told       bool
	last       []Piece // the end of what is held back
	held       int     // bytes in last
	lines      int     // left out so far
	dropped    int     // bytes left out so far
}

// A Piece is text on one stream.
type Piece struct {
	Name string
	Text []byte
}

// NewLimit returns a Limit for one cell.
func NewLimit() Limit { return Limit{head: HeadBytes, tail: TailBytes} }

// More lets at least n bytes more be shown as they come.
func (l *Limit) More(n int) { l.head = max(l.head, n) }

// Add takes text and returns what of it is shown now, and a notice to follow it.
func (l *Limit) Add(name, text string) (now, notice string) {
	if n := len(text); n <= l.head {
		l.head -= n
		return text, ""
	}
	cut := l.head
	for cut > 0 && !utf8.RuneStart(text[cut]) {
		cut--
	}
	now = text[:cut]
	l.head = 0
	l.hold(name, text[cut:])
	if !l.told {
		l.told = true
		notice = "\nlevelsum: this cell prints much; what follows is held back, and its last part is shown when the cell ends\n"
	}
	return now, notice
}

// hold keeps text, and lets go of what is too old now and then.
func (l *Limit) hold(name, text string) {
	if n := len(l.last); n > 0 && l.last[n-1].Name == name {
		l.last[n-1].Text = append(l.last[n-1].Text, text...)
	} else {
		l.last = append(l.last, Piece{name, []byte(text)})
	}
	l.held += len(text)
	if l.held > 2*l.tail+64<<10 {
		l.trim()
	}
}

// trim lets go of all but the last tail bytes.
func (l *Limit) trim() {
	for l.held > l.tail {
		p := &l.last[0]
		n := min(l.held-l.tail, len(p.Text))
		l.lines += bytes.Count(p.Text[:n], []byte("\n"))
		l.dropped += n
		l.held -= n
		p.Text = p.Text[n:]
		if len(p.Text) == 0 {
			l.last = l.last[1:]
		}
	}
}

// Rest returns what is held back, with a notice before it if something before
// it is left out. It starts with a whole line if there is one.
func (l *Limit) Rest() (notice string, last []Piece) {
	l.trim()
	if l.dropped > 0 && len(l.last) > 0 {
		p := &l.last[0]
		n := bytes.IndexByte(p.Text, '\n') + 1
		if n > 0 {
			l.lines++
		} else {
			for n < len(p.Text) && !utf8.RuneStart(p.Text[n]) {
				n++
			}
		}
		l.dropped += n
		p.Text = p.Text[n:]
	}
	if l.dropped > 0 {
		notice = fmt.Sprintf("\nlevelsum: %d lines (%d bytes) are left out here; write them to a file to keep them all\n", l.lines, l.dropped)
	}
	if len(l.last) > 0 || l.dropped > 0 {
		l.tail = laterTail
	}
	last = l.last
	l.last, l.held, l.lines, l.dropped = nil, 0, 0, 0
	return notice, last
}
