package socket

import (
	"bufio"
	"context"
	"errors"
	"fmt"
	"io"
	"net"
	"os"
	"runtime"
	"slices"
	"strings"
	"syscall"
	"testing"
	"time"

	"github.com/go-zeromq/zmq4"
)

// patience is how long a test waits for an event before it gives up. It is no
// measure of anything.
const patience = 60 * time.Second

// listen opens a socket that is closed with the test.
func listen(t testing.TB, kind Kind, o Options) *Socket {
	t.Helper()
	s, err := Listen(kind, "tcp://127.0.0.1:0", o)
	if err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() { s.Close(0) })
	return s
}

// small returns the usual limits with a change.
func small(change func(l *limits)) *limits {
	l := usual
	change(&l)
	return &l
}

// eventually waits until ok returns true.
func eventually(t testing.TB, what string, ok func() bool) {
	t.Helper()
	tick := time.NewTicker(time.Millisecond)
	defer tick.Stop()
	limit := time.After(patience)
	for !ok() {
		select {
		case <-tick.C:
		case <-limit:
			t.Fatalf("waited in vain: %s", what)
		}
	}
}

// echo answers every message of a Router or Rep until it is closed.
func echo(s *Socket) {
	go func() {
		for {
			m, err := s.Recv()
			if err != nil {
				return
			}
			s.Send(m)
		}
	}()
}

// dial opens a connection that is closed with the test.
func dial(t testing.TB, s *Socket) net.Conn {
	t.Helper()
	c, err := net.Dial(s.Addr().Network(), s.Addr().String())
	if err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() { c.Close() })
	c.SetDeadline(time.Now().Add(patience))
	return c
}

// A client is a peer that the test writes byte by byte.
type client struct {
	testing.TB
	net.Conn
	r *bufio.Reader
}

// connect does a handshake as a socket of this type.
func connect(t testing.TB, s *Socket, socketType, id string) *client {
	t.Helper()
	c, err := handshake(dial(t, s), socketType, id)
	if err != nil {
		t.Fatalf("handshake as %s: %v", socketType, err)
	}
	c.TB = t
	return c
}

func handshake(conn net.Conn, socketType, id string) (*client, error) {
	c := &client{Conn: conn, r: bufio.NewReader(conn)}
	if _, err := conn.Write(appendReady(greeting[:greetingSize:greetingSize], socketType, id)); err != nil {
		return nil, err
	}
	var b [greetingSize]byte
	if _, err := io.ReadFull(c.r, b[:]); err != nil {
		return nil, err
	}
	if _, _, err := readReady(c.r); err != nil {
		return nil, err
	}
	return c, nil
}

// message returns a message as it is on the network.
func message(frames ...string) []byte {
	var b []byte
	for i, f := range frames {
		flags := byte(flagMore)
		if i == len(frames)-1 {
			flags = 0
		}
		b = append(appendHeader(b, flags, len(f)), f...)
	}
	return b
}

// write sends bytes as they are.
func (c *client) write(b []byte) {
	c.Helper()
	if _, err := c.Conn.Write(b); err != nil {
		c.Fatal(err)
	}
}

func (c *client) send(frames ...string) {
	c.Helper()
	c.write(message(frames...))
}

// next reads one message, or the body of one command.
func (c *client) next() ([]string, error) {
	var frames []string
	for {
		flags, size, err := readHeader(c.r)
		if err != nil {
			return nil, err
		}
		b, err := readBody(c.r, nil, int(size))
		if err != nil {
			return nil, err
		}
		frames = append(frames, string(b))
		if flags&flagMore == 0 {
			return frames, nil
		}
	}
}

// want reads one message and compares it.
func (c *client) want(frames ...string) {
	c.Helper()
	got, err := c.next()
	if err != nil {
		c.Fatalf("want message %.60q, got error %v", frames, err)
	}
	if !slices.Equal(got, frames) {
		c.Fatalf("got message %.60q, want %.60q", got, frames)
	}
}

// wantGone reads until the other side ends the connection.
func (c *client) wantGone() {
	c.Helper()
	wantGone(c, c.r)
}

func wantGone(t testing.TB, r io.Reader) {
	t.Helper()
	if _, err := io.Copy(io.Discard, r); errors.Is(err, os.ErrDeadlineExceeded) {
		t.Error("the connection is still open")
	}
}

// pause shrinks the buffers of the system, so that a client that does not read
// is soon noticed.
func (c *client) pause() *client {
	if tcp, ok := c.Conn.(*net.TCPConn); ok {
		tcp.SetReadBuffer(4 << 10)
	}
	return c
}

// zdial connects a socket of zmq4, as a client has it.
func zdial(t testing.TB, s *Socket, z zmq4.Socket) zmq4.Socket {
	t.Helper()
	if err := z.Dial(s.Endpoint()); err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() { z.Close() })
	return z
}

func req(t testing.TB, s *Socket) zmq4.Socket {
	return zdial(t, s, zmq4.NewReq(context.Background()))
}

func dealer(t testing.TB, s *Socket, id string) zmq4.Socket {
	return zdial(t, s, zmq4.NewDealer(context.Background(), zmq4.WithID(zmq4.SocketIdentity(id))))
}

// subscriber returns a zmq4 subscriber whose subscription counts: seen is
// signalled by the socket's OnSubscribe.
func subscriber(t testing.TB, s *Socket, topic string, seen <-chan string) zmq4.Socket {
	t.Helper()
	z := zdial(t, s, zmq4.NewSub(context.Background()))
	if err := z.SetOption(zmq4.OptionSubscribe, topic); err != nil {
		t.Fatal(err)
	}
	wantEvent(t, seen, "+"+topic)
	return z
}

// events returns an OnSubscribe that puts what it hears into a channel:
// "+topic" and "-topic".
func events() (func(*Socket, []byte, bool), chan string) {
	c := make(chan string, 10000)
	return func(_ *Socket, topic []byte, on bool) {
		if on {
			c <- "+" + string(topic)
		} else {
			c <- "-" + string(topic)
		}
	}, c
}

func wantEvent(t testing.TB, c <-chan string, want string) {
	t.Helper()
	select {
	case got := <-c:
		if got != want {
			t.Fatalf("subscription event %q, want %q", got, want)
		}
	case <-time.After(patience):
		t.Fatalf("no subscription event, want %q", want)
	}
}

// roundTrip asks a Rep that echoes, through a healthy client of zmq4.
func roundTrip(t testing.TB, z zmq4.Socket, text string) {
	t.Helper()
	if err := z.Send(zmq4.NewMsgString(text)); err != nil {
		t.Fatal(err)
	}
	m, err := z.Recv()
	if err != nil {
		t.Fatal(err)
	}
	if got := string(m.Bytes()); got != text {
		t.Fatalf("echo %.40q, want %.40q", got, text)
	}
}

func frames(s ...string) [][]byte {
	b := make([][]byte, len(s))
	for i := range s {
		b[i] = []byte(s[i])
	}
	return b
}

// descriptors counts this process's open files.
func descriptors(t testing.TB) int {
	t.Helper()
	var max syscall.Rlimit
	if err := syscall.Getrlimit(syscall.RLIMIT_NOFILE, &max); err != nil {
		t.Fatal(err)
	}
	n := 0
	var st syscall.Stat_t
	for fd := range int(min(max.Cur, 4096)) {
		if syscall.Fstat(fd, &st) == nil {
			n++
		}
	}
	return n
}

// stacks returns the goroutines that run code of this package or of zmq4,
// for the message of a test that found too many.
func stacks() string {
	b := make([]byte, 1<<20)
	b = b[:runtime.Stack(b, true)]
	var s strings.Builder
	for g := range strings.SplitSeq(string(b), "\n\n") {
		if strings.Contains(g, "zmq4") || strings.Contains(g, "kernel/socket") {
			fmt.Fprintf(&s, "%s\n\n", g)
		}
	}
	return s.String()
}

// settled waits until no more goroutines and descriptors are there than before.
func settled(t testing.TB, goroutines, files int) {
	t.Helper()
	limit := time.Now().Add(patience)
	for runtime.NumGoroutine() > goroutines || descriptors(t) > files {
		if time.Now().After(limit) {
			t.Fatalf("%d goroutines and %d descriptors, before there were %d and %d\n%s",
				runtime.NumGoroutine(), descriptors(t), goroutines, files, stacks())
		}
		<-time.After(time.Millisecond)
	}
}
