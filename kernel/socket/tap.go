package socket

import (
	"net"
	"runtime"
	"sync"
)

// A tap tells how far a publishing socket of zmq4 has come. Such a socket has
// an unbounded queue and a goroutine that serves its connections from it, so
// that neither Send nor Close of zmq4 say anything about what has been sent.
//
// The tap is a connection without a network. It is handed to zmq4 before all
// others and subscribes to everything. zmq4 serves its connections in the
// order in which they came, one message after the other. So when the first
// byte of a message is seen here, all messages before it are in the queues of
// all peers.
type tap struct {
	noDeadlines
	in     []byte        // what zmq4 has still to read: a handshake and a subscription
	up     chan struct{} // closed when zmq4 has read it
	closed chan struct{}
	once   sync.Once
	moved  chan struct{} // tells the one who waits to look again

	mu   sync.Mutex // guards the fields below
	seen int64      // bytes of messages
	end  int64      // at this byte the goroutine of zmq4 ends; none if 0
}

func newTap() *tap {
	t := &tap{
		up:     make(chan struct{}),
		closed: make(chan struct{}),
		moved:  make(chan struct{}, 1),
	}
	t.in = appendReady(greeting[:greetingSize:greetingSize], "SUB", "")
	t.in = append(t.in, 0, 1, 1) // a frame with the byte 1 and an empty topic
	return t
}

// Read gives zmq4 the handshake and the subscription, and then nothing more.
func (t *tap) Read(b []byte) (int, error) {
	if len(t.in) == 0 {
		t.mu.Lock()
		t.seen = 0 // so far it was zmq4's handshake
		t.mu.Unlock()
		close(t.up)
		<-t.closed
		return 0, net.ErrClosed
	}
	n := copy(b, t.in)
	t.in = t.in[n:]
	return n, nil
}

// Write counts.
func (t *tap) Write(b []byte) (int, error) {
	t.mu.Lock()
	t.seen += int64(len(b))
	end := t.end > 0 && t.seen >= t.end
	t.mu.Unlock()
	signal(t.moved)
	if end {
		// This is zmq4's publishing goroutine, which waits for its next message
		// for ever, also after Close. It holds a mutex here and releases it by
		// a deferred call.
		runtime.Goexit()
	}
	return len(b), nil
}

// wait waits until n bytes have been seen or until fires, and reports whether
// they have. Only one goroutine may wait.
func (t *tap) wait(n int64, until <-chan struct{}) bool {
	for {
		t.mu.Lock()
		seen := t.seen
		t.mu.Unlock()
		if seen >= n {
			return true
		}
		select {
		case <-t.moved:
		case <-until:
			return false
		}
	}
}

// endAt says at which byte the goroutine of zmq4 is to end.
func (t *tap) endAt(n int64) {
	t.mu.Lock()
	defer t.mu.Unlock()
	t.end = n
}

func (t *tap) Close() error {
	t.once.Do(func() { close(t.closed) })
	return nil
}

func (t *tap) LocalAddr() net.Addr  { return tapAddr{} }
func (t *tap) RemoteAddr() net.Addr { return tapAddr{} }

type tapAddr struct{}

func (tapAddr) Network() string { return "tap" }
func (tapAddr) String() string  { return "tap" }
