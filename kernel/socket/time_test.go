package socket

import (
	"errors"
	"io"
	"net"
	"strings"
	"testing"
	"testing/synctest"
	"time"
)

// The tests of this file run in a bubble with a clock of its own, over
// connections in memory, so that they can say exactly how long something waits.

// A switchboard is a raw listener for connections in memory.
type switchboard struct {
	failures int // so many calls of Accept fail first
	calls    int
	conns    chan net.Conn
	closed   chan struct{}
}

func newSwitchboard() *switchboard {
	return &switchboard{conns: make(chan net.Conn), closed: make(chan struct{})}
}

func (b *switchboard) Accept() (net.Conn, error) {
	b.calls++
	if b.calls <= b.failures {
		return nil, errors.New("accept: too many open files")
	}
	select {
	case c := <-b.conns:
		return c, nil
	case <-b.closed:
		return nil, net.ErrClosed
	}
}

func (b *switchboard) Close() error {
	close(b.closed)
	return nil
}

func (b *switchboard) Addr() net.Addr { return tapAddr{} }

// call connects, with the handshake of a socket of this type, from within a
// bubble.
func (b *switchboard) call(t *testing.T, socketType, id string) *client {
	t.Helper()
	ours, theirs := net.Pipe()
	b.conns <- theirs
	// Nothing is buffered: both sides write first.
	sent := make(chan error, 1)
	go func() {
		_, err := ours.Write(appendReady(greeting[:greetingSize:greetingSize], socketType, id))
		sent <- err
	}()
	c, err := handshake(&readOnly{ours}, socketType, id)
	if err == nil {
		err = <-sent
	}
	if err != nil {
		t.Fatal(err)
	}
	c.TB, c.Conn = t, ours
	synctest.Wait() // the other side has ended the handshake as well
	return c
}

// readOnly takes what is written and does nothing with it.
type readOnly struct{ net.Conn }

func (readOnly) Write(b []byte) (int, error) { return len(b), nil }

func bubble(t *testing.T, kind Kind, o Options, test func(t *testing.T, s *Socket, b *switchboard)) {
	synctest.Test(t, func(t *testing.T) {
		b := newSwitchboard()
		s, err := listenOn(kind, b, o)
		if err != nil {
			t.Fatal(err)
		}
		test(t, s, b)
		s.Close(0)
	})
}

func TestAcceptBacksOff(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		b := newSwitchboard()
		b.failures = 1 << 60
		s, err := listenOn(Rep, b, Options{})
		if err != nil {
			t.Fatal(err)
		}
		<-time.After(10 * time.Second)
		synctest.Wait()
		// 1, 2, 4 ... 512 ms are 1.023 s and ten calls; nine or ten more follow.
		if b.calls < 15 || b.calls > 25 {
			t.Errorf("%d calls of Accept in 10 s", b.calls)
		}
		s.Close(0)
	})
}

func TestAcceptRecovers(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		b := newSwitchboard()
		b.failures = 5
		s, err := listenOn(Rep, b, Options{})
		if err != nil {
			t.Fatal(err)
		}
		b.call(t, "REQ", "").Close()
		s.Close(0)
	})
}

func TestSilenceEndsAfterTenSeconds(t *testing.T) {
	bubble(t, Rep, Options{}, func(t *testing.T, s *Socket, b *switchboard) {
		ours, theirs := net.Pipe()
		b.conns <- theirs
		start := time.Now()
		io.Copy(io.Discard, ours)
		if d := time.Since(start); d != 10*time.Second {
			t.Errorf("a silent connection was closed after %v, want 10 s", d)
		}
	})
}

// Of two connections with one identity the one that came last stays, although
// its handshake ends first.
func TestNewestIdentityIsTheOneAcceptedLast(t *testing.T) {
	bubble(t, Router, Options{}, func(t *testing.T, s *Socket, b *switchboard) {
		old, theirs := net.Pipe()
		b.conns <- theirs
		young := b.call(t, "DEALER", "twin")
		synctest.Wait()
		go io.Copy(io.Discard, old)
		old.Write(appendReady(greeting[:greetingSize:greetingSize], "DEALER", "twin"))
		synctest.Wait()
		if _, err := old.Write(message("still here?")); err == nil {
			t.Error("the older connection is open")
		}
		if err := s.Send(frames("twin", "hello")); err != nil {
			t.Fatal(err)
		}
		young.want("hello")
		young.Close()
	})
}

// Close does not wait for a handshake.
func TestCloseEndsHandshakes(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		b := newSwitchboard()
		s, err := listenOn(Rep, b, Options{})
		if err != nil {
			t.Fatal(err)
		}
		ours, theirs := net.Pipe()
		b.conns <- theirs
		start := time.Now()
		s.Close(time.Minute)
		if d := time.Since(start); d != 0 {
			t.Errorf("Close has waited %v for a silent connection", d)
		}
		ours.Close()
	})
}

// Close ends a Send that waits for a slow peer.
func TestCloseEndsAWaitingSend(t *testing.T) {
	bubble(t, Router, Options{}, func(t *testing.T, s *Socket, b *switchboard) {
		c := b.call(t, "DEALER", "c")
		if err := s.Send([][]byte{[]byte("c"), make([]byte, 9<<20)}); err != nil {
			t.Fatal(err)
		}
		sent := make(chan error, 1)
		go func() { sent <- s.Send(frames("c", "x")) }()
		synctest.Wait()
		start := time.Now()
		s.Close(0)
		if err, d := <-sent, time.Since(start); err != ErrClosed || d != 0 {
			t.Errorf("the waiting Send: %v after %v, want ErrClosed at once", err, d)
		}
		c.Close()
	})
}

// What is sent to an identity between its handshake and the moment at which
// zmq4 knows it waits for the latter.
func TestSendAtOnceAfterTheHandshake(t *testing.T) {
	bubble(t, Router, Options{}, func(t *testing.T, s *Socket, b *switchboard) {
		first := b.call(t, "DEALER", "first") // or zmq4 itself would wait
		held := stuck{newTap()}
		s.l.ready <- held // zmq4 accepts nobody now
		c := b.call(t, "DEALER", "c")
		sent := make(chan error, 1)
		go func() { sent <- s.Send(frames("c", "hello")) }()
		synctest.Wait()
		if len(sent) > 0 {
			t.Errorf("Send returned %v", <-sent)
		}
		held.Close()
		if err := <-sent; err != nil {
			t.Fatal(err)
		}
		c.want("hello")
		first.Close()
		c.Close()
	})
}

// stuck is a connection that keeps zmq4 in its handshake until it is closed.
type stuck struct{ *tap }

func (s stuck) Read([]byte) (int, error) {
	<-s.closed
	return 0, net.ErrClosed
}

// A stalled peer costs one second, once; afterwards it loses messages at once,
// until it has taken half of its queue.
func TestStalledDealerCostsOneSecond(t *testing.T) {
	bubble(t, Router, Options{}, func(t *testing.T, s *Socket, b *switchboard) {
		c := b.call(t, "DEALER", "c")
		m := [][]byte{[]byte("c"), make([]byte, 1<<20)}
		sent := 0
		start := time.Now()
		var err error
		for err = s.Send(m); err == nil; err = s.Send(m) {
			sent++
		}
		if d := time.Since(start); err != ErrFull || d != time.Second || sent < 7 || sent > 8 {
			t.Errorf("%d messages of 1 MB, then %v after %v, want 7 or 8, ErrFull and 1 s", sent, err, d)
		}
		start = time.Now()
		for range 10 {
			if err := s.Send(m); err != ErrFull {
				t.Errorf("Send to a slow peer: %v, want ErrFull", err)
			}
		}
		if d := time.Since(start); d != 0 {
			t.Errorf("Send to a slow peer waits %v", d)
		}
		if s.Dropped() != 11 {
			t.Errorf("Dropped() = %d, want 11", s.Dropped())
		}
		for range sent {
			if _, err := c.next(); err != nil {
				t.Fatal(err)
			}
		}
		synctest.Wait()
		if err := s.Send(frames("c", "better now")); err != nil {
			t.Errorf("Send to a peer that has recovered: %v", err)
		}
		c.want("better now")
	})
}

// A peer that takes something now and then is waited for, but not for ever.
func TestTricklingDealerCostsThirtySeconds(t *testing.T) {
	bubble(t, Router, Options{}, func(t *testing.T, s *Socket, b *switchboard) {
		c := b.call(t, "DEALER", "c")
		done := make(chan struct{})
		go func() {
			defer close(done)
			tick := time.NewTicker(700 * time.Millisecond)
			defer tick.Stop()
			for range tick.C {
				if _, err := c.r.Discard(c.r.Size()); err != nil {
					return
				}
			}
		}()
		if err := s.Send([][]byte{[]byte("c"), make([]byte, 20<<20)}); err != nil {
			t.Fatal(err)
		}
		start := time.Now()
		if err := s.Send(frames("c", "x")); err != ErrFull {
			t.Errorf("Send: %v, want ErrFull", err)
		}
		if d := time.Since(start); d != 30*time.Second {
			t.Errorf("Send has waited %v, want 30 s", d)
		}
		c.Close()
		<-done
	})
}

// Two stalled subscribers cost as much time as one.
func TestStalledSubscribersWaitTogether(t *testing.T) {
	on, seen := events()
	bubble(t, XPub, Options{OnSubscribe: on}, func(t *testing.T, s *Socket, b *switchboard) {
		var all []*client
		for range 3 {
			c := b.call(t, "SUB", "")
			c.send("\x01")
			wantEvent(t, seen, "+")
			all = append(all, c)
		}
		s.Send([][]byte{make([]byte, 9<<20)}) // an empty queue takes everything
		s.Send(frames("marker of the tap"))
		synctest.Wait()
		start := time.Now()
		err := s.Send(frames("more"))
		synctest.Wait()
		if d := time.Since(start); d > time.Second {
			t.Errorf("Send has waited %v, want 1 s at most", d)
		}
		start = time.Now()
		for range 5 {
			err = s.Send(frames("more"))
			synctest.Wait()
		}
		if d := time.Since(start); d != 0 || err != ErrFull {
			t.Errorf("Send with slow peers: %v after %v, want ErrFull at once", err, d)
		}
		for _, c := range all {
			c.Close()
		}
	})
}

// Nothing that is said to a client that goes on reading, however slowly, is lost.
func TestSlowButAliveLosesNothing(t *testing.T) {
	on, seen := events()
	bubble(t, XPub, Options{OnSubscribe: on}, func(t *testing.T, s *Socket, b *switchboard) {
		c := b.call(t, "SUB", "")
		c.send("\x01")
		wantEvent(t, seen, "+")
		big := strings.Repeat("o", 40<<20)
		go func() {
			for _, m := range []string{big, "reply", "idle"} {
				if err := s.Send(frames(m)); err != nil {
					t.Errorf("Send: %v", err)
				}
			}
		}()
		// 2 MB a second: the first message takes 20 s.
		pace := time.NewTicker(500 * time.Millisecond)
		defer pace.Stop()
		if _, _, err := readHeader(c.r); err != nil {
			t.Fatal(err)
		}
		for range 40 {
			<-pace.C
			if n, err := c.r.Discard(1 << 20); n != 1<<20 {
				t.Fatal(err)
			}
		}
		c.want("reply")
		c.want("idle")
		if s.Dropped() != 0 {
			t.Errorf("Dropped() = %d", s.Dropped())
		}
	})
}

// A gate is a connection of zmq4 that takes messages only once it is open.
type gate struct {
	*tap
	open chan struct{}
}

func (g gate) Write(b []byte) (int, error) {
	select {
	case <-g.up:
		<-g.open
	default: // zmq4's handshake
	}
	return len(b), nil
}

// What Send has given to zmq4 and zmq4 not yet to the peers is little, and
// Send waits where it would be more.
func TestSendDoesNotRunAhead(t *testing.T) {
	bubble(t, XPub, Options{}, func(t *testing.T, s *Socket, b *switchboard) {
		g := gate{newTap(), make(chan struct{})}
		s.l.ready <- g
		<-g.up
		sent := 0
		done := make(chan struct{})
		go func() {
			defer close(done)
			for range 100 {
				s.Send([][]byte{make([]byte, 100<<10)})
				sent++
			}
		}()
		synctest.Wait()
		if sent < 10 || sent > 12 {
			t.Errorf("%d messages of 100 kB were sent ahead, want 1 MB", sent)
		}
		close(g.open)
		<-done
	})
}
