package socket

import (
	"errors"
	"net"
	"os"
	"sync"
	"syscall"
	"time"
)

// A chunk holds bytes on their way out, at most chunkSize of them. Chunks are
// used again: with fresh memory for each, large messages cost three times as
// much.
type chunk []byte

const (
	chunkSize  = 64 << 10
	stepChunks = 16 // the writer takes on so many at a time
)

var chunks = sync.Pool{New: func() any { return new([chunkSize]byte) }}

func newChunk() chunk { return chunks.Get().(*[chunkSize]byte)[:0] }

func (c chunk) free() { chunks.Put((*[chunkSize]byte)(c[:chunkSize])) }

// An outbox holds the bytes that wait for one peer. Whole messages go in;
// neither side waits for the other while it holds the lock.
type outbox struct {
	wake chan struct{} // tells the writer that there is something, or nothing more
	room chan struct{} // tells the one who waits for room or emptiness to look again

	mu     sync.Mutex // guards the fields below
	chunks []chunk    // in order; the writer takes all of them
	queued int        // bytes in chunks and in the writer's hands
	moved  time.Time  // when the network last took some of them
	taken  bool       // somebody writes what was in chunks before
	slow   bool       // messages are dropped until the queue is below half
	killed bool
}

func (o *outbox) init() {
	o.wake = make(chan struct{}, 1)
	o.room = make(chan struct{}, 1)
}

// signal leaves a token in c, unless there is one.
func signal(c chan struct{}) {
	select {
	case c <- struct{}{}:
	default:
	}
}

// put queues one message, either in chunks, which the outbox keeps, or in a
// buffer, which it copies. There is no limit here, since whoever sends has
// waited for room, and what passes through zmq4 meanwhile is little.
func (o *outbox) put(parts []chunk, small []byte) {
	o.mu.Lock()
	defer o.mu.Unlock()
	o.append(parts, small)
	signal(o.wake)
}

// putAlone queues one small message and returns it, if it is the only one, for
// the caller to write; what it returns is given to written.
func (o *outbox) putAlone(small []byte) chunk {
	o.mu.Lock()
	defer o.mu.Unlock()
	o.append(nil, small)
	if o.taken || len(o.chunks) != 1 {
		signal(o.wake)
		return nil
	}
	c := o.chunks[0]
	o.chunks, o.taken = nil, true
	return c
}

// written takes back a chunk of which n bytes have left.
func (o *outbox) written(c chunk, n int) {
	o.sent(n)
	o.mu.Lock()
	defer o.mu.Unlock()
	o.taken = false
	switch {
	case n == len(c) || o.killed:
		c.free()
	default:
		o.chunks = append([]chunk{append(newChunk(), c[n:]...)}, o.chunks...)
		c.free()
	}
	if len(o.chunks) > 0 {
		signal(o.wake)
	}
}

// putIfBelow queues a message unless as many bytes are waiting.
func (o *outbox) putIfBelow(limit int, small []byte) {
	o.mu.Lock()
	defer o.mu.Unlock()
	if o.queued < limit {
		o.append(nil, small)
		signal(o.wake)
	}
}

// append is put with the lock held. Small messages share a chunk, so that a
// burst of them leaves with few system calls.
func (o *outbox) append(parts []chunk, small []byte) {
	if o.killed {
		return
	}
	o.chunks = append(o.chunks, parts...)
	for _, part := range parts {
		o.queued += len(part)
	}
	o.queued += len(small)
	last := len(o.chunks) - 1
	switch {
	case len(small) == 0:
	case last >= 0 && len(o.chunks[last])+len(small) <= chunkSize:
		o.chunks[last] = append(o.chunks[last], small...)
	default:
		o.chunks = append(o.chunks, append(newChunk(), small...))
	}
}

// refuses reports whether a message that begins now is to be dropped. With
// hard the limit itself decides, otherwise only Send makes a peer slow.
func (o *outbox) refuses(limit int, hard bool) bool {
	o.mu.Lock()
	defer o.mu.Unlock()
	if hard && o.queued > limit {
		o.slow = true
	}
	return o.killed || o.isSlow(limit)
}

// isSlow tells, with the lock held, whether the peer is slow still.
func (o *outbox) isSlow(limit int) bool {
	if o.slow && o.queued < limit/2 {
		o.slow = false
	}
	return o.slow
}

// kill empties the outbox for good.
func (o *outbox) kill() {
	o.mu.Lock()
	defer o.mu.Unlock()
	o.killed = true
	o.chunks, o.queued = nil, 0
	signal(o.wake)
	signal(o.room)
}

// take returns all chunks, or nothing if there are none or somebody else
// writes. What was taken before has been written.
func (o *outbox) take(before bool) []chunk {
	o.mu.Lock()
	defer o.mu.Unlock()
	if before {
		o.taken = false
	}
	if o.taken || len(o.chunks) == 0 {
		return nil
	}
	chunks := o.chunks
	o.chunks, o.taken = nil, true
	return chunks
}

// sent counts n bytes off.
func (o *outbox) sent(n int) {
	if n == 0 {
		return
	}
	o.mu.Lock()
	defer o.mu.Unlock()
	if !o.killed {
		o.queued -= n
	}
	o.moved = time.Now()
	signal(o.room)
}

// write is the goroutine that writes to the peer's connection, until it fails
// or is closed.
func (p *peer) write() {
	var buffers [stepChunks][]byte
	before := false
	for {
		if before {
			// A deadline that has passed would hold writeNow up.
			p.c.SetWriteDeadline(time.Time{})
		}
		waiting := p.outbox.take(before)
		before = waiting != nil
		if waiting == nil {
			select {
			case <-p.wake:
				continue
			case <-p.done:
				return
			}
		}
		for len(waiting) > 0 {
			k := min(len(waiting), stepChunks)
			for i, c := range waiting[:k] {
				buffers[i] = c
			}
			if !p.writeAll(buffers[:k]) {
				return
			}
			for _, c := range waiting[:k] {
				c.free()
			}
			waiting = waiting[k:]
		}
	}
}

// writeNow writes one small message without a wait, if nothing waits before it:
// a reply is on its way without another goroutine having to be woken. What the
// network does not take at once is left to write.
func (p *peer) writeNow(small []byte) {
	c := p.outbox.putAlone(small)
	if c == nil {
		return
	}
	n := 0
	// An error is found again by write.
	_ = p.raw.Write(func(fd uintptr) bool {
		n, _ = syscall.Write(int(fd), c)
		return true
	})
	p.outbox.written(c, max(n, 0))
}

// writeAll writes the buffers, and reports whether the peer is still there.
func (p *peer) writeAll(b net.Buffers) bool {
	for len(b) > 0 {
		// A deadline shows the bytes that have left in time; the others stay.
		p.c.SetWriteDeadline(time.Now().Add(p.l.lim.step))
		n, err := b.WriteTo(p.c)
		p.outbox.sent(int(n))
		if err != nil && !errors.Is(err, os.ErrDeadlineExceeded) || p.dead() {
			return false
		}
	}
	return true
}

// waitRoom waits until n more bytes may be queued, and reports whether they
// may. An empty outbox takes everything. It waits for a peer that has taken
// nothing for the time of stall, counted from start, and for any peer at most
// for that of patience; then the peer is slow. It gives up when the socket closes.
func (p *peer) waitRoom(n int, start time.Time) bool {
	lim := &p.l.lim
	o := &p.outbox
	var timer *time.Timer
	for {
		o.mu.Lock()
		if o.killed || o.isSlow(lim.queue) {
			o.mu.Unlock()
			return false
		}
		if o.queued == 0 || o.queued+n <= lim.queue {
			o.mu.Unlock()
			return true
		}
		stalled := start
		if o.moved.After(start) {
			stalled = o.moved
		}
		now := time.Now()
		wait := min(stalled.Add(lim.stall).Sub(now), start.Add(lim.patience).Sub(now))
		if wait <= 0 {
			o.slow = true
			o.mu.Unlock()
			return false
		}
		o.mu.Unlock()
		if timer == nil {
			timer = time.NewTimer(wait)
			defer timer.Stop()
		} else {
			timer.Reset(wait)
		}
		select {
		case <-o.room:
		case <-timer.C:
		case <-p.l.stopping:
			return false
		}
	}
}

// waitEmpty waits until everything has left, and returns how many bytes have
// not when until fires.
func (p *peer) waitEmpty(until <-chan struct{}) int {
	o := &p.outbox
	for {
		o.mu.Lock()
		n := o.queued
		o.mu.Unlock()
		if n == 0 {
			return 0
		}
		select {
		case <-o.room:
		case <-until:
			return n
		}
	}
}
