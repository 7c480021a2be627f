package socket

import (
	"bufio"
	"bytes"
	"maps"
	"net"
	"slices"
)

// keepBuffer is the size up to which a peer keeps a buffer for the next message.
const keepBuffer = 64 << 10

// pongLimit is how much may wait for a peer that still gets answers to PING.
const pongLimit = 1 << 20

// input is the reading side of a peer. Only the goroutine of zmq4 that reads
// the peer uses it.
type input struct {
	r      *bufio.Reader
	in     []byte // what zmq4 reads next: at first a handshake, then one message at a time
	off    int    // how much of it zmq4 has read
	known  bool   // up is closed
	topics map[string]int
	bytes  int          // of the topics
	event  *topicChange // handed to zmq4, not yet reported
}

// A topicChange is a subscription or, if it is not on, the end of one.
type topicChange struct {
	topic []byte
	on    bool
}

// Read gives zmq4 the next bytes of a message. The only error is
// net.ErrClosed: zmq4 keeps a dead connection after any error that is no
// net.Error and after io.ErrUnexpectedEOF.
func (p *peer) Read(b []byte) (int, error) {
	if p.off == len(p.in) {
		if err := p.fill(); err != nil {
			p.shut()
			p.unsubscribed()
			return 0, net.ErrClosed
		}
	}
	n := copy(b, p.in[p.off:])
	p.off += n
	return n, nil
}

// fill puts the next message for zmq4 into p.in.
//
// That zmq4 asks for more is a proof that it has finished with what it got
// before. So after the handshake its tables know the peer, since zmq4 enters a
// connection there before it starts the reader; and a subscription counts.
func (p *peer) fill() error {
	if !p.known {
		p.known = true
		close(p.up)
	}
	if e := p.event; e != nil {
		p.event = nil
		p.report(*e)
	}
	for {
		if cap(p.in) > keepBuffer {
			p.in = nil
		}
		p.in, p.off = p.in[:0], 0
		ok, err := p.receive()
		if err != nil {
			return err
		}
		if !ok || p.l.isStopping() {
			continue
		}
		if p.l.credit == nil {
			return nil
		}
		select {
		case p.l.credit <- struct{}{}:
			return nil
		case <-p.done:
			return net.ErrClosed
		case <-p.l.stopping:
		}
	}
}

// receive reads one message from the network into p.in, in the form in which
// zmq4 is to read it, and answers the commands before it. It returns false
// where zmq4 is to hear of nothing.
func (p *peer) receive() (ok bool, err error) {
	left := p.l.lim.message
	if p.l.kind.publishes() {
		left = p.l.lim.subscription
	}
	var (
		rep       = p.l.kind == Rep
		delimited bool // REP: the empty frame has come that ends the envelope
		payload   bool // REP: at least one frame has come after it
	)
	for frames := 0; ; frames++ {
		flags, size, err := readHeader(p.r)
		if err != nil {
			return false, err
		}
		if flags&flagCommand != 0 {
			change, err := p.command(size)
			if err != nil || change != nil && frames > 0 {
				return false, errCommand
			}
			if change != nil {
				return p.change(*change)
			}
			frames--
			continue
		}
		if left -= frameCost; left < 0 || size > uint64(left) {
			return false, errTooLong
		}
		n := int(size)
		left -= n
		if rep && delimited {
			// zmq4 looks for the last empty frame where the first is meant. A
			// byte before each frame of the payload hides those from it;
			// Recv takes the byte away.
			payload = true
			p.in = append(appendHeader(p.in, flags, n+1), 0)
		} else {
			p.in = appendHeader(p.in, flags, n)
			delimited = n == 0
		}
		p.in, err = readBody(p.r, p.in, n)
		if err != nil {
			return false, err
		}
		if flags&flagMore != 0 {
			continue
		}
		switch {
		case rep:
			return payload, nil
		case p.l.kind.publishes():
			// zmq4 blocks for ever after ten messages that are no subscription.
			topic := p.in[headerSize(n):]
			if frames > 0 || n == 0 || topic[0] > 1 {
				return false, nil
			}
			return p.change(topicChange{bytes.Clone(topic[1:]), topic[0] == 1})
		}
		return true, nil
	}
}

// command reads and answers a command of this size. The result is not nil if
// it is about a subscription. Unknown commands are left alone.
func (p *peer) command(size uint64) (*topicChange, error) {
	if size > maxCommand {
		return nil, errTooLong
	}
	body, err := readBody(p.r, nil, int(size))
	if err != nil {
		return nil, err
	}
	name, data, err := splitCommand(body)
	if err != nil {
		return nil, err
	}
	switch name {
	case "PING": // two bytes, how long the peer lives without traffic, and a context
		if len(data) < 2 {
			return nil, errCommand
		}
		p.outbox.putIfBelow(pongLimit, appendCommand(nil, "PONG", data[2:]))
	case "SUBSCRIBE", "CANCEL":
		if p.l.kind.publishes() {
			return &topicChange{data, name == "SUBSCRIBE"}, nil
		}
	}
	return nil, nil
}

// change enters a subscription into the peer's own list and puts it into p.in.
// Of several subscriptions to one topic zmq4 hears the first, since it does
// not count them.
func (p *peer) change(c topicChange) (ok bool, err error) {
	topic := string(c.topic)
	n := p.topics[topic]
	switch {
	case c.on && n == 0:
		p.bytes += len(topic)
		if len(p.topics) >= p.l.lim.topics || p.bytes > p.l.lim.topicBytes {
			return false, errTooLong
		}
		if p.topics == nil {
			p.topics = make(map[string]int)
		}
		p.topics[topic] = 1
	case c.on:
		p.topics[topic]++
		return false, nil
	case n > 1:
		p.topics[topic]--
		return false, nil
	case n == 1:
		p.bytes -= len(topic)
		delete(p.topics, topic)
	default:
		return false, nil
	}
	first := byte(0)
	if c.on {
		first = 1
	}
	p.in = append(appendHeader(p.in[:0], 0, 1+len(topic)), first)
	p.in = append(p.in, topic...)
	p.event = &c
	return true, nil
}

// unsubscribed reports the end of a dead peer's subscriptions.
func (p *peer) unsubscribed() {
	for _, topic := range slices.Sorted(maps.Keys(p.topics)) {
		p.report(topicChange{[]byte(topic), false})
	}
	p.topics = nil
}

// report tells the owner of the socket, unless it is closing.
func (p *peer) report(c topicChange) {
	if !p.l.isStopping() {
		p.l.subscribe(c.topic, c.on)
	}
}
