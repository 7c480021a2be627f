package session

import (
	"context"
	"errors"
	"fmt"
	"io"
	"log"
	"net"
	"sync"
	"sync/atomic"
	"time"
	"unicode/utf8"

	"levelsum/kernel/engine"
	"levelsum/kernel/socket"
	"levelsum/kernel/wire"
)

// Options say what a session serves.
type Options struct {
	Connection socket.Connection
	// Start starts the engine. Serve calls it; what needs no engine is
	// answered meanwhile.
	Start func(context.Context) (Engine, error)
	// Version is the version of this program.
	Version string
	// Journal remembers the cells; nil keeps it in memory only.
	Journal *Journal
	// Log gets one line for each thing that an operator may want to know; nil
	// drops them.
	Log *log.Logger
}

// linger is how long the sockets may take to send what they hold when the
// session ends, and usualPatience how long the last request may take to end.
const (
	linger        = 300 * time.Millisecond
	usualPatience = 450 * time.Millisecond
)

// A Session is one served kernel.
type Session struct {
	start    func(context.Context) (Engine, error)
	version  string
	patience time.Duration
	journal  *Journal
	log      *log.Logger
	codec    *wire.Codec
	sender   *wire.Sender

	shell, control, stdin, iopub, heartbeat *socket.Socket

	ctx    context.Context // ends when the session is to end
	cancel context.CancelFunc

	queue   *queue
	hints   *hints
	flow    *flow
	history history

	up        chan struct{} // closed when the engine has started or cannot
	engine    Engine        // after up; nil if it cannot
	engineErr error         // after up

	mu        sync.Mutex // guards the fields below
	executing bool       // an execute request is being answered
	stopCell  bool       // it is to end
	question  *question  // the reader is being asked
	restart   bool       // the shutdown request wanted another kernel

	slow       sync.Once              // the log has been told of a slow front end
	lastOutput atomic.Pointer[output] // of the cell run last
}

// Open binds the sockets of a session. The caller calls [Session.Serve] next.
func Open(o Options) (*Session, error) {
	s := &Session{
		start:    o.Start,
		up:       make(chan struct{}),
		version:  o.Version,
		patience: usualPatience,
		journal:  o.Journal,
		log:      o.Log,
		codec:    wire.NewCodec([]byte(o.Connection.Key)),
		sender:   wire.NewSender("kernel"),
		queue:    newQueue(),
		hints:    newHints(),
		flow:     newFlow(),
	}
	if s.log == nil {
		s.log = log.New(io.Discard, "", 0)
	}
	if s.journal == nil {
		s.journal = NewJournal()
	}
	s.ctx, s.cancel = context.WithCancel(context.Background())
	c := o.Connection
	for _, b := range []struct {
		to      **socket.Socket
		kind    socket.Kind
		port    int
		options socket.Options
	}{
		{&s.heartbeat, socket.Rep, c.Heartbeat, socket.Options{}},
		{&s.control, socket.Router, c.Control, socket.Options{}},
		{&s.stdin, socket.Router, c.Stdin, socket.Options{}},
		{&s.iopub, socket.XPub, c.IOPub, socket.Options{OnSubscribe: s.subscribed}},
		{&s.shell, socket.Router, c.Shell, socket.Options{}},
	} {
		var err error
		*b.to, err = socket.Listen(b.kind, c.Endpoint(b.port), b.options)
		if err != nil {
			s.closeSockets(0)
			return nil, err
		}
	}
	return s, nil
}

// Addrs are the addresses of a session's sockets.
type Addrs struct {
	Shell, Control, Stdin, IOPub, Heartbeat net.Addr
}

// Addrs returns where the session listens.
func (s *Session) Addrs() Addrs {
	return Addrs{s.shell.Addr(), s.control.Addr(), s.stdin.Addr(), s.iopub.Addr(), s.heartbeat.Addr()}
}

// Serve starts the engine, answers requests until the session is stopped,
// asked to shut down or ctx ends, and closes the engine and the sockets. It
// reports whether the request to shut down said that another kernel follows.
// The error is the engine's, if it does not start. It is called once.
func (s *Session) Serve(ctx context.Context) (restart bool, err error) {
	defer context.AfterFunc(ctx, s.Stop)()
	s.publish(nil, "status", wire.ExecutionState{State: "starting"})

	var readers, workers sync.WaitGroup
	readers.Go(s.readShell)
	readers.Go(s.readControl)
	readers.Go(s.readStdin)
	readers.Go(s.beat)
	workers.Go(s.boot)
	workers.Go(s.work)
	workers.Go(s.announce)

	<-s.ctx.Done()
	s.Interrupt()
	closed := make(chan struct{})
	go func() {
		defer close(closed)
		if <-s.up; s.engine != nil {
			if err := s.engine.Close(); err != nil {
				s.log.Printf("engine: %v", err)
			}
		}
		workers.Wait()
	}()
	select {
	case <-closed:
	case <-time.After(s.patience):
		s.log.Print("the running request did not end in time")
	}
	s.closeSockets(linger)
	readers.Wait()
	select {
	case <-closed:
		err = s.engineErr
	case <-time.After(s.patience / 8):
		// Nothing more can be done here; the process ends soon.
	}
	if o := s.lastOutput.Load(); o != nil {
		o.stop()
	}
	if text := s.codec.DroppedText(); text != "" {
		s.log.Print(text)
	}
	if n := s.iopub.Dropped(); n > 0 {
		s.log.Printf("%d messages lost by front ends that read too slowly", n)
	}
	s.mu.Lock()
	defer s.mu.Unlock()
	return s.restart, err
}

// boot starts the engine.
func (s *Session) boot() {
	defer close(s.up)
	e, err := s.start(s.ctx)
	switch {
	case err == nil:
		s.engine = e
	case s.ctx.Err() == nil:
		s.engineErr = fmt.Errorf("the engine does not start: %w", err)
		s.Stop()
	}
}

// awaitEngine returns the engine when it has started; nil if it cannot.
func (s *Session) awaitEngine() Engine {
	<-s.up
	return s.engine
}

// Stop ends the session. It returns at once.
func (s *Session) Stop() { s.cancel() }

// closeSockets closes the sockets that are open, all at once.
func (s *Session) closeSockets(linger time.Duration) {
	var all sync.WaitGroup
	for _, c := range []*socket.Socket{s.heartbeat, s.control, s.stdin, s.iopub, s.shell} {
		if c == nil {
			continue
		}
		all.Go(func() {
			if err := c.Close(linger); err != nil {
				s.log.Printf("close: %v", err)
			}
		})
	}
	all.Wait()
}

// Interrupt ends the cell that runs and the question that it has asked. With
// no cell running it does nothing.
func (s *Session) Interrupt() {
	s.mu.Lock()
	executing, asked := s.executing, s.question
	if executing {
		s.stopCell = true
	}
	s.mu.Unlock()
	if !executing {
		return
	}
	// The engine hears of it first: the cell is to end, not to get an error.
	defer asked.answer(reply{err: errInterrupted})
	select {
	case <-s.up:
		if s.engine != nil {
			s.engine.Interrupt()
		}
	default: // the cell waits for the engine, and will see stopCell
	}
}

// subscribed welcomes a subscriber: from now on it gets what it asked for.
func (s *Session) subscribed(iopub *socket.Socket, topic []byte, on bool) {
	if !on || !utf8.Valid(topic) {
		return
	}
	m := wire.New(s.sender.Header("iopub_welcome"), nil, wire.Welcome{Subscription: string(topic)})
	m.Identities = [][]byte{topic}
	if err := iopub.Send(s.codec.Format(m)); err != nil {
		s.log.Printf("iopub: %v", err)
	}
}

// publish tells all front ends something, because of the request whose header
// is parent.
func (s *Session) publish(parent []byte, kind string, content any) {
	s.publishMessage(wire.New(s.sender.Header(kind), parent, content))
}

func (s *Session) publishMessage(m *wire.Message) {
	m.Identities = [][]byte{[]byte(m.Header.Type)}
	err := s.iopub.Send(s.codec.Format(m))
	switch {
	case err == nil, s.ctx.Err() != nil:
	case errors.Is(err, socket.ErrFull):
		s.slow.Do(func() { s.log.Print("iopub: a front end reads too slowly and loses messages") })
	default:
		s.log.Printf("iopub: %v", err)
	}
}

// beat echoes on the heartbeat socket.
func (s *Session) beat() {
	for {
		frames, err := s.heartbeat.Recv()
		if err != nil {
			return
		}
		if err := s.heartbeat.Send(frames); err != nil && s.ctx.Err() == nil {
			s.log.Printf("heartbeat: %v", err)
		}
	}
}

// faultOf turns an error of ours into the fault of a cell.
func faultOf(name string, err error) *engine.Fault {
	return &engine.Fault{Name: name, Message: err.Error(), Trace: []string{name + ": " + err.Error()}}
}

var errInterrupted = errors.New("interrupted")

// lost is the fault of a request whose content cannot be read.
func lost(err error) *engine.Fault {
	return faultOf("bad request", fmt.Errorf("content not understood: %w", err))
}
