package socket

import (
	"bufio"
	"net"
	"sync"
	"syscall"
	"time"
)

// A peer is one connection after its handshake. To zmq4 it is a net.Conn whose
// Read gives whole, checked messages and whose Write never blocks or fails.
//
// Read is called by one goroutine of zmq4 and Write by one at a time; the
// goroutine of the listener that made the peer writes to the network.
type peer struct {
	noDeadlines
	l    *listener
	c    net.Conn
	id   string
	n    int             // of the listener's connections
	raw  syscall.RawConn // to write replies; nil on publishing sockets
	done chan struct{}   // closed by shut
	once sync.Once
	up   chan struct{} // closed when zmq4 knows the peer: what is sent to it arrives

	sending sync.Mutex // ROUTER: one Send to this peer at a time

	input
	output
	outbox
}

// newPeer returns the peer of a connection with its handshake behind it.
func newPeer(l *listener, c net.Conn, r *bufio.Reader, socketType, id string) *peer {
	p := &peer{l: l, c: c, id: id, done: make(chan struct{}), up: make(chan struct{})}
	p.input.r = r
	p.input.in = appendReady(greeting[:greetingSize:greetingSize], socketType, id)
	p.output.skip = greetingSize
	p.outbox.init()
	// What is published leaves in bursts, which one goroutine writes with few
	// system calls.
	if s, ok := c.(syscall.Conn); ok && !l.kind.publishes() {
		p.raw, _ = s.SyscallConn()
	}
	return p
}

// shut ends the connection and takes the peer out of the registry. What still
// waits for the peer is lost.
func (p *peer) shut() {
	p.once.Do(func() {
		p.outbox.kill()
		close(p.done)
		p.c.Close()
		p.l.forget(p)
	})
}

// dead reports whether shut was called.
func (p *peer) dead() bool {
	select {
	case <-p.done:
		return true
	default:
		return false
	}
}

// Close is called by zmq4 when it has done with the peer.
func (p *peer) Close() error {
	p.shut()
	return nil
}

func (p *peer) LocalAddr() net.Addr  { return p.c.LocalAddr() }
func (p *peer) RemoteAddr() net.Addr { return p.c.RemoteAddr() }

// noDeadlines is the part of net.Conn that zmq4 does not use.
type noDeadlines struct{}

func (noDeadlines) SetDeadline(time.Time) error      { return nil }
func (noDeadlines) SetReadDeadline(time.Time) error  { return nil }
func (noDeadlines) SetWriteDeadline(time.Time) error { return nil }
