package socket

import (
	"context"
	"errors"
	"fmt"
	"net"
	"os"
	"strconv"
	"strings"
	"sync"
	"sync/atomic"
	"syscall"
	"time"

	"github.com/go-zeromq/zmq4"
	"github.com/go-zeromq/zmq4/transport"
)

// limits are the numbers of the guard; tests set smaller ones.
type limits struct {
	handshake    time.Duration // for the whole handshake of a connection
	conns        int           // connections at a time, those in a handshake included
	message      int           // bytes of a message that a peer sends
	subscription int           // the same on a publishing socket
	topics       int           // subscriptions of one peer
	topicBytes   int           // bytes of these
	queue        int           // bytes that wait for a peer before Send waits
	stall        time.Duration // Send waits for a peer that takes nothing
	patience     time.Duration // Send waits for a peer that takes something
	step         time.Duration // the writer looks for progress at least this often
	fin          time.Duration // Close waits for peers to close as well
}

var usual = limits{
	handshake:    10 * time.Second,
	conns:        512,
	message:      1 << 30,
	subscription: 64 << 10,
	topics:       4096,
	topicBytes:   1 << 20,
	queue:        8 << 20,
	stall:        time.Second,
	patience:     30 * time.Second,
	step:         100 * time.Millisecond,
	fin:          100 * time.Millisecond,
}

const (
	frameCost = 64 // bytes that a frame costs beside its body, in limits.message
	// A queue of zmq4 has ten places, and its reader of a connection blocks on
	// it for good. So no more than this many messages of a socket are inside.
	maxInside = 8
)

// A listener is the network side of one socket: the net.Listener that zmq4
// accepts ready peers from, and the raw one below it.
type listener struct {
	kind      Kind
	lim       limits
	raw       net.Listener
	subscribe func(topic []byte, on bool) // called without a lock, never after stop

	ready    chan net.Conn // what Accept returns
	credit   chan struct{} // one for each message inside zmq4, if the socket receives
	slots    chan struct{} // one for each connection
	stopping chan struct{} // closed by stop
	gone     chan struct{} // closed by Close, hence by zmq4
	goneOnce sync.Once
	wg       sync.WaitGroup // our goroutines
	dropped  atomic.Uint64  // messages lost by slow peers

	mu      sync.Mutex            // guards the fields below
	young   map[net.Conn]struct{} // connections in their handshake
	byID    map[string]*peer      // ROUTER: the newest peer of each identity
	peers   []*peer               // never changed in place: peersNow gives it away
	stopped bool
}

// newListener returns a listener on raw that does not accept yet.
func newListener(kind Kind, raw net.Listener, lim limits) *listener {
	l := &listener{
		kind:      kind,
		lim:       lim,
		raw:       raw,
		subscribe: func([]byte, bool) {},
		ready:     make(chan net.Conn),
		slots:     make(chan struct{}, lim.conns),
		stopping:  make(chan struct{}),
		gone:      make(chan struct{}),
		young:     make(map[net.Conn]struct{}),
		byID:      make(map[string]*peer),
	}
	if !kind.publishes() {
		l.credit = make(chan struct{}, maxInside)
	}
	return l
}

// bind opens the raw listener of an endpoint, "tcp://HOST:PORT" or
// "ipc://PATH". HOST may be * for all interfaces, PORT 0 for a free one.
func bind(endpoint string) (net.Listener, error) {
	scheme, addr, _ := strings.Cut(endpoint, "://")
	switch {
	case scheme == "tcp" && addr != "":
		if rest, ok := strings.CutPrefix(addr, "*:"); ok {
			addr = ":" + rest
		}
		l, err := net.Listen("tcp", addr)
		if err != nil {
			return nil, fmt.Errorf("socket: Listen %s: %w", endpoint, err)
		}
		return l, nil
	case scheme == "ipc" && addr != "":
		l, err := bindUnix(addr)
		if err != nil {
			return nil, fmt.Errorf("socket: Listen %s: %w", endpoint, err)
		}
		return l, nil
	}
	return nil, fmt.Errorf("socket: Listen %q: want tcp://HOST:PORT or ipc://PATH", endpoint)
}

// bindUnix listens on a socket file that only its owner may use. A socket file
// on which nobody listens any more, left by a process that was killed, is
// replaced; anything else that is there stays.
func bindUnix(path string) (net.Listener, error) {
	// On Linux the file gets the mode that the descriptor has, so there is no
	// moment at which others could connect; elsewhere this fails or does
	// nothing, and Chmod below comes a moment late.
	own := net.ListenConfig{Control: func(_, _ string, c syscall.RawConn) error {
		return c.Control(func(fd uintptr) { _ = syscall.Fchmod(int(fd), 0o600) })
	}}
	l, err := own.Listen(context.Background(), "unix", path)
	if errors.Is(err, syscall.EADDRINUSE) && abandoned(path) {
		if err := os.Remove(path); err != nil && !errors.Is(err, os.ErrNotExist) {
			return nil, err
		}
		l, err = own.Listen(context.Background(), "unix", path)
	}
	if err != nil {
		return nil, err
	}
	if err := os.Chmod(path, 0o600); err != nil {
		l.Close()
		return nil, err
	}
	return l, nil
}

// abandoned reports whether path is a socket file without a listener.
func abandoned(path string) bool {
	info, err := os.Lstat(path)
	if err != nil || info.Mode()&os.ModeSocket == 0 {
		return false
	}
	c, err := net.Dial("unix", path)
	if err == nil {
		c.Close()
		return false
	}
	return errors.Is(err, syscall.ECONNREFUSED)
}

// guarded is the transport by which zmq4 finds a listener that is bound
// already. The address is the listener's number in bound.
type guarded struct{}

var (
	bound      sync.Map // number, a string -> *listener
	boundCount atomic.Uint64
	registered = sync.OnceValue(func() error { return zmq4.RegisterTransport("guarded", guarded{}) })
)

// offer makes l known to zmq4 under the endpoint that it returns, for one use.
func (l *listener) offer() (string, error) {
	if err := registered(); err != nil {
		return "", fmt.Errorf("socket: %w", err)
	}
	n := strconv.FormatUint(boundCount.Add(1), 10)
	bound.Store(n, l)
	return "guarded://" + n, nil
}

func (guarded) Listen(_ context.Context, n string) (net.Listener, error) {
	l, ok := bound.LoadAndDelete(n)
	if !ok {
		return nil, fmt.Errorf("socket: nothing is bound as %q", n)
	}
	return l.(*listener), nil
}

func (guarded) Dial(context.Context, transport.Dialer, string) (net.Conn, error) {
	return nil, errors.New("socket: a guarded endpoint cannot be dialled")
}

func (guarded) Addr(n string) (string, error) { return n, nil }

// Accept returns the next connection that is ready for zmq4. It fails only
// after Close, since zmq4 tries again at once, however often it fails.
func (l *listener) Accept() (net.Conn, error) {
	select {
	case c := <-l.ready:
		return c, nil
	case <-l.gone:
		return nil, net.ErrClosed
	}
}

// Close is called by zmq4 when its socket is closed.
func (l *listener) Close() error {
	l.goneOnce.Do(func() { close(l.gone) })
	return nil
}

// Addr returns the address of the raw listener, with the real port.
func (l *listener) Addr() net.Addr { return l.raw.Addr() }

// start begins to accept connections.
func (l *listener) start() {
	l.wg.Add(1)
	go l.accept()
}

// accept takes connections until the raw listener is closed. Where it fails,
// usually because there are no descriptors left, it waits before it tries
// again: 1 ms at first, 1 s at last.
func (l *listener) accept() {
	defer l.wg.Done()
	var delay time.Duration
	for n := 0; ; n++ {
		select {
		case l.slots <- struct{}{}:
		case <-l.stopping:
			return
		}
		c, err := l.raw.Accept()
		if err == nil {
			delay = 0
			l.wg.Add(1)
			go l.serve(c, n)
			continue
		}
		<-l.slots
		if errors.Is(err, net.ErrClosed) {
			return
		}
		delay = min(max(2*delay, time.Millisecond), time.Second)
		select {
		case <-time.After(delay):
		case <-l.stopping:
			return
		}
	}
}

// serve is the life of one connection, the nth: handshake, registry, hand-over
// to zmq4, and then writing what zmq4 has for it.
func (l *listener) serve(c net.Conn, n int) {
	defer l.wg.Done()
	defer func() { <-l.slots }()
	p := l.admit(c, n)
	if p == nil {
		c.Close()
		return
	}
	defer p.shut()
	select {
	case l.ready <- p:
	case <-p.done:
		return
	case <-l.stopping:
		return
	}
	p.write()
}

// admit does the handshake and enters the peer into the registry. It returns
// nil if there is nothing to be served. Of two connections with one identity
// the newest wins, which is the one that was accepted last: its handshake may
// have ended first.
func (l *listener) admit(c net.Conn, n int) *peer {
	l.mu.Lock()
	if l.stopped {
		l.mu.Unlock()
		return nil
	}
	l.young[c] = struct{}{}
	l.mu.Unlock()

	p, err := l.shake(c)

	l.mu.Lock()
	delete(l.young, c)
	if err != nil || l.stopped {
		l.mu.Unlock()
		return nil
	}
	var old *peer
	if l.kind == Router {
		if old = l.byID[p.id]; old != nil && old.n > n {
			l.mu.Unlock()
			return nil
		}
		p.n = n
		l.byID[p.id] = p
	}
	l.peers = append(l.peers[:len(l.peers):len(l.peers)], p)
	l.mu.Unlock()
	if old != nil {
		old.shut()
	}
	return p
}

// forget takes a peer out of the registry.
func (l *listener) forget(p *peer) {
	l.mu.Lock()
	defer l.mu.Unlock()
	if l.byID[p.id] == p {
		delete(l.byID, p.id)
	}
	rest := make([]*peer, 0, len(l.peers))
	for _, q := range l.peers {
		if q != p {
			rest = append(rest, q)
		}
	}
	l.peers = rest
}

// peersNow returns the peers of this moment; the slice must not be changed.
func (l *listener) peersNow() []*peer {
	l.mu.Lock()
	defer l.mu.Unlock()
	return l.peers
}

// lookup returns the peer that zmq4 routes to by this identity, or nil.
func (l *listener) lookup(id []byte) *peer {
	l.mu.Lock()
	defer l.mu.Unlock()
	return l.byID[string(id)]
}

// stop ends accepting and the handshakes under way. Peers stay; what they
// send from now on is thrown away.
func (l *listener) stop() {
	l.mu.Lock()
	l.stopped = true
	young := l.young
	l.young = make(map[net.Conn]struct{})
	l.mu.Unlock()
	close(l.stopping)
	l.raw.Close()
	for c := range young {
		c.Close()
	}
}

// isStopping reports whether stop was called.
func (l *listener) isStopping() bool {
	select {
	case <-l.stopping:
		return true
	default:
		return false
	}
}
