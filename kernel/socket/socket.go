package socket

import (
	"context"
	"errors"
	"fmt"
	"io"
	"log"
	"net"
	"sync"
	"time"

	"github.com/go-zeromq/zmq4"
)

// Errors of Send and Recv.
var (
	ErrNoPeer = errors.New("socket: no such peer")              // the identity is not, or no longer, connected
	ErrFull   = errors.New("socket: a slow peer lost messages") // see Dropped
	ErrClosed = errors.New("socket: closed")
)

// Kind says which pattern a socket follows.
type Kind int

const (
	Router Kind = iota // the first frame of every message is the peer's identity
	Rep                // each message received is answered by one sent
	XPub               // a message goes to whoever subscribed to its first bytes
	Pub                // the same
)

// String returns the name in the protocol, such as ROUTER.
func (k Kind) String() string {
	switch k {
	case Router:
		return "ROUTER"
	case Rep:
		return "REP"
	case XPub:
		return "XPUB"
	case Pub:
		return "PUB"
	}
	return fmt.Sprintf("Kind(%d)", int(k))
}

// partners returns the types of socket that may connect.
func (k Kind) partners() []string {
	switch k {
	case Router:
		return []string{"REQ", "DEALER", "ROUTER"}
	case Rep:
		return []string{"REQ", "DEALER"}
	case XPub, Pub:
		return []string{"SUB", "XSUB"}
	}
	return nil
}

func (k Kind) publishes() bool { return k == XPub || k == Pub }

// Options are the choices that Listen leaves to its caller.
type Options struct {
	// OnSubscribe, if not nil, is called on XPub and Pub when a peer has
	// subscribed to a topic or, with on false, ended a subscription or gone
	// away. What is sent to a topic from within the call reaches the peer that
	// has subscribed to it. Calls for different peers may come at the same
	// time; Listen may not have returned yet, hence the socket as an argument.
	// There are no calls once Close has begun.
	OnSubscribe func(s *Socket, topic []byte, on bool)

	limits *limits // the usual ones if nil
}

// A Socket is a bound ZeroMQ socket. All methods may be called at any time by
// any goroutine.
type Socket struct {
	kind Kind
	l    *listener
	z    zmq4.Socket
	tap  *tap // of a publishing socket, otherwise nil

	// life is held for reading by Send and for writing by Close, once, to wait
	// for the calls of Send that have begun before.
	life sync.RWMutex

	sending  sync.Mutex // one Send at a time, except on Router; guards the fields below
	sent     int64      // publishing: bytes given to zmq4
	lost     uint64     // publishing: messages lost that Send has told of
	awaiting bool       // Rep: a message was received and not answered

	once sync.Once
	err  error // what Close returns
}

// aheadOfTap is how many bytes may be inside a publishing socket of zmq4.
const aheadOfTap = 1 << 20

// Listen binds a socket to an endpoint, "tcp://HOST:PORT" or "ipc://PATH".
// With port 0 the system chooses one; see Addr. An error of the system, such as
// syscall.EADDRINUSE, can be found in the one returned. A socket file that a
// killed process has left is replaced; a new one has the mode 0600.
func Listen(kind Kind, endpoint string, o Options) (*Socket, error) {
	if kind.partners() == nil {
		return nil, fmt.Errorf("socket: Listen: %v is no kind of socket", kind)
	}
	raw, err := bind(endpoint)
	if err != nil {
		return nil, err
	}
	return listenOn(kind, raw, o)
}

// listenOn is Listen on a listener of any origin, which it closes if it fails.
func listenOn(kind Kind, raw net.Listener, o Options) (*Socket, error) {
	lim := usual
	if o.limits != nil {
		lim = *o.limits
	}
	s := &Socket{kind: kind, l: newListener(kind, raw, lim)}
	if o.OnSubscribe != nil {
		s.l.subscribe = func(topic []byte, on bool) { o.OnSubscribe(s, topic, on) }
	}
	if err := s.attach(); err != nil {
		raw.Close()
		return nil, err
	}
	s.l.start()
	return s, nil
}

// attach makes the socket of zmq4 and gives it our listener, which does not
// accept yet. The tap, if there is one, is its first connection.
func (s *Socket) attach() error {
	ep, err := s.l.offer()
	if err != nil {
		return err
	}
	ctx := context.Background()
	opts := []zmq4.Option{
		zmq4.WithLogger(log.New(io.Discard, "", 0)),
		zmq4.WithTimeout(2 * time.Second), // of Send, which never waits that long
	}
	switch s.kind {
	case Router:
		s.z = zmq4.NewRouter(ctx, opts...)
	case Rep:
		s.z = zmq4.NewRep(ctx, opts...)
	case XPub:
		s.z = zmq4.NewXPub(ctx, opts...)
	case Pub:
		s.z = zmq4.NewPub(ctx, opts...)
	}
	if err := s.z.Listen(ep); err != nil {
		return fmt.Errorf("socket: %w", err) // cannot happen: the listener is there
	}
	if s.kind.publishes() {
		s.tap = newTap()
		s.l.ready <- s.tap
		<-s.tap.up
	}
	return nil
}

// Addr returns the address the socket is bound to, with the real port.
func (s *Socket) Addr() net.Addr { return s.l.Addr() }

// Endpoint returns the same in the form that Listen takes.
func (s *Socket) Endpoint() string {
	a := s.l.Addr()
	if a.Network() == "unix" {
		return "ipc://" + a.String()
	}
	return a.Network() + "://" + a.String()
}

// Dropped returns how many messages slow peers have lost so far.
func (s *Socket) Dropped() uint64 { return s.l.dropped.Load() }

// Send sends one message. It may keep the frames, so they must not be changed
// afterwards.
//
// Router: the first frame is the identity of the peer, as in the message
// received from it. ErrNoPeer means that no such peer is connected, ErrFull
// that the peer is slow and does not get the message.
//
// Rep: the message answers the last one received; ErrNoPeer means that there
// is none to be answered.
//
// XPub, Pub: the message goes to all subscribers of its first bytes. ErrFull
// means that slow peers have lost messages since the last call; the others
// have lost none.
//
// ErrClosed means that Close has been called.
func (s *Socket) Send(frames [][]byte) error {
	s.life.RLock()
	defer s.life.RUnlock()
	if s.l.isStopping() {
		return ErrClosed
	}
	switch {
	case s.kind == Router:
		return s.route(frames)
	case s.kind == Rep:
		return s.reply(frames)
	default:
		return s.publish(frames)
	}
}

// route is Send of a Router.
func (s *Socket) route(frames [][]byte) error {
	if len(frames) < 2 {
		return errors.New("socket: Send: want an identity and at least one more frame")
	}
	// zmq4 says nothing about unknown identities, and blocks until the first
	// peer has come.
	p := s.l.lookup(frames[0])
	if p == nil {
		return ErrNoPeer
	}
	select {
	case <-p.up: // zmq4 is told of the peer without a wait, so this is soon
	case <-p.done:
		return ErrNoPeer
	case <-s.l.stopping:
		return ErrClosed
	}
	p.sending.Lock()
	defer p.sending.Unlock()
	if !p.waitRoom(wireSize(frames[1:]), time.Now()) {
		switch {
		case p.dead():
			return ErrNoPeer
		case s.l.isStopping():
			return ErrClosed
		}
		s.l.dropped.Add(1)
		return ErrFull
	}
	err := s.z.Send(zmq4.NewMsgFrom(frames...))
	switch {
	case p.dead():
		return ErrNoPeer
	case err == nil, errors.Is(err, zmq4.ErrClosedConn):
		// The latter is about an older connection of the same identity.
		return nil
	}
	return fmt.Errorf("socket: Send: %w", err)
}

// reply is Send of a Rep.
func (s *Socket) reply(frames [][]byte) error {
	s.sending.Lock()
	defer s.sending.Unlock()
	if !s.awaiting {
		return ErrNoPeer
	}
	s.awaiting = false
	if len(frames) == 0 {
		frames = [][]byte{nil}
	}
	if err := s.z.Send(zmq4.NewMsgFrom(frames...)); err != nil {
		return fmt.Errorf("socket: Send: %w", err)
	}
	return nil
}

// publish is Send of an XPub or a Pub.
func (s *Socket) publish(frames [][]byte) error {
	if len(frames) == 0 {
		return errors.New("socket: Send: want at least one frame")
	}
	n := wireSize(frames)
	s.sending.Lock()
	defer s.sending.Unlock()
	start := time.Now() // one wait for all, however many are slow
	for _, p := range s.l.peersNow() {
		p.waitRoom(n, start)
	}
	if s.l.isStopping() {
		return ErrClosed
	}
	s.tap.wait(s.sent-aheadOfTap, nil)
	s.sent += int64(n)
	if err := s.z.Send(zmq4.NewMsgFrom(frames...)); err != nil {
		return fmt.Errorf("socket: Send: %w", err)
	}
	if d := s.l.dropped.Load(); d != s.lost {
		s.lost = d
		return ErrFull
	}
	return nil
}

// Recv waits for a message and returns it. On Router the first frame is the
// identity of the peer. On XPub and Pub there is nothing to receive, and Recv
// waits for Close. The error is ErrClosed.
func (s *Socket) Recv() ([][]byte, error) {
	if s.kind.publishes() {
		<-s.l.stopping
		return nil, ErrClosed
	}
	msg, err := s.z.Recv()
	if err != nil || s.l.isStopping() {
		return nil, ErrClosed
	}
	<-s.l.credit
	if s.kind == Rep {
		for i, f := range msg.Frames {
			msg.Frames[i] = f[1:] // see receive
		}
		s.sending.Lock()
		s.awaiting = true
		s.sending.Unlock()
	}
	return msg.Frames, nil
}
