package socket

import (
	"encoding/binary"
)

// output is the writing side of a peer as zmq4 sees it: a stream, in which it
// writes header and body of each frame by themselves. It is cut into messages
// here, so that a message is queued or dropped as a whole.
type output struct {
	skip    int     // bytes of zmq4's greeting to come; we have sent our own
	hdr     [9]byte // of the frame under way
	nh      int     // how many bytes of it are there
	left    int     // bytes of the body to come, once the header is complete
	body    bool    // the header is complete
	inside  bool    // at least one frame of the message has begun
	discard bool    // the message is dropped, or the frame is a command
	lose    bool    // the message is dropped
	small   []byte  // the message, up to half a chunk
	parts   []chunk // the message, once it is larger
}

// Write takes bytes that zmq4 has for the peer. It returns len(b), nil also
// when the peer has gone: zmq4 learns that from Read, and handles it well
// only there.
func (p *peer) Write(b []byte) (int, error) {
	n := len(b)
	o := &p.output
	if k := min(o.skip, len(b)); k > 0 {
		o.skip -= k
		b = b[k:]
	}
	for len(b) > 0 {
		if !o.body {
			o.hdr[o.nh] = b[0]
			o.nh++
			b = b[1:]
			if o.nh == 2 && o.hdr[0]&flagLong == 0 || o.nh == 9 {
				p.beginFrame()
				if o.left == 0 {
					p.endFrame()
				}
			}
			continue
		}
		k := min(o.left, len(b))
		o.add(b[:k])
		o.left -= k
		b = b[k:]
		if o.left == 0 {
			p.endFrame()
		}
	}
	return n, nil
}

// beginFrame is called when a header is complete. With the first frame of a
// message it is decided whether the peer gets the message.
func (p *peer) beginFrame() {
	o := &p.output
	o.body = true
	o.left = int(o.hdr[1])
	if o.hdr[0]&flagLong != 0 {
		o.left = int(binary.BigEndian.Uint64(o.hdr[1:]))
	}
	if o.hdr[0]&flagCommand != 0 { // zmq4's READY; we have sent our own
		o.discard = true
		return
	}
	if !o.inside {
		o.inside = true
		// A reply goes to whoever asked, so Send cannot wait for room: a peer
		// that asks and does not read loses its replies.
		o.lose = p.outbox.refuses(p.l.lim.queue, p.l.kind == Rep)
	}
	o.discard = o.lose
	o.add(o.hdr[:o.nh])
}

// add appends a piece to the message. The slice belongs to zmq4, hence a copy.
func (o *output) add(b []byte) {
	if o.discard {
		return
	}
	if o.parts == nil {
		if len(o.small)+len(b) <= chunkSize/2 {
			o.small = append(o.small, b...)
			return
		}
		o.parts = append(o.parts, append(newChunk(), o.small...))
		o.small = o.small[:0]
	}
	for len(b) > 0 {
		last := len(o.parts) - 1
		c := o.parts[last]
		if len(c) == chunkSize {
			o.parts = append(o.parts, newChunk())
			continue
		}
		k := min(len(b), chunkSize-len(c))
		o.parts[last] = append(c, b[:k]...)
		b = b[k:]
	}
}

// endFrame is called when a body is complete, and queues the message after its
// last frame.
func (p *peer) endFrame() {
	o := &p.output
	o.nh, o.body = 0, false
	if o.hdr[0]&(flagMore|flagCommand) != 0 {
		return
	}
	if o.lose {
		if !p.dead() {
			p.l.dropped.Add(1)
		}
	} else if o.parts == nil && p.raw != nil {
		p.writeNow(o.small)
	} else {
		p.outbox.put(o.parts, o.small)
	}
	o.inside = false
	o.parts = nil // they belong to the outbox now
	o.small = o.small[:0]
}
