package socket

import (
	"fmt"
	"io"
	"net"
	"runtime"
	"slices"
	"strings"
	"sync"
	"testing"
	"time"

	"github.com/go-zeromq/zmq4"
)

func TestCloseDeliversWhatWasSent(t *testing.T) {
	// One message, then Close: bare zmq4 delivers it once in twenty times.
	for i := range 20 {
		on, seen := events()
		s := listen(t, XPub, Options{OnSubscribe: on})
		c := connect(t, s, "SUB", "")
		c.send("\x01")
		wantEvent(t, seen, "+")
		s.Send(frames("last words", fmt.Sprint(i)))
		closed := make(chan error, 1)
		go func() { closed <- s.Close(time.Minute) }()
		c.want("last words", fmt.Sprint(i))
		if _, err := c.next(); err != io.EOF {
			t.Errorf("after the last message: %v, want EOF", err)
		}
		c.Close()
		if err := <-closed; err != nil {
			t.Error(err)
		}
	}
}

func TestCloseLingersForASlowReader(t *testing.T) {
	s := listen(t, Router, Options{})
	c := connect(t, s, "DEALER", "c")
	c.send("hello")
	if _, err := s.Recv(); err != nil {
		t.Fatal(err)
	}
	big := strings.Repeat("x", 30<<20) // more than the system buffers
	if err := s.Send(frames("c", big)); err != nil {
		t.Fatal(err)
	}
	closed := make(chan error, 1)
	go func() { closed <- s.Close(time.Minute) }()
	<-s.l.stopping
	// Input that nobody reads must not destroy what is under way.
	c.send("one more request")
	c.want(big)
	if err := <-closed; err != nil {
		t.Error(err)
	}
}

// A connection that is closed with input unread is reset, and what is under
// way is lost with it. So input is read as long as something may be.
func TestCloseDeliversDespiteAFloodOfInput(t *testing.T) {
	for range 5 {
		s := listen(t, Router, Options{limits: small(func(l *limits) { l.fin = time.Hour })})
		c := connect(t, s, "DEALER", "c")
		c.send("hello")
		if _, err := s.Recv(); err != nil {
			t.Fatal(err)
		}
		flood := message("", strings.Repeat("more", 1000))
		flooded := make(chan struct{})
		go func() {
			defer close(flooded)
			for {
				if _, err := c.Write(flood); err != nil {
					return
				}
			}
		}()
		text := strings.Repeat("x", 3<<20)
		if err := s.Send(frames("c", text)); err != nil {
			t.Fatal(err)
		}
		closed := make(chan error, 1)
		go func() { closed <- s.Close(time.Hour) }()
		<-s.l.stopping
		c.want(text)
		if _, err := c.next(); err != io.EOF {
			t.Errorf("after the last message: %v, want EOF", err)
		}
		c.Close()
		<-flooded
		select {
		case err := <-closed:
			if err != nil {
				t.Error(err)
			}
		case <-time.After(patience):
			t.Fatal("Close has not heard that the client has gone")
		}
	}
}

func TestCloseTwiceAndAtOnce(t *testing.T) {
	for _, kind := range []Kind{Router, Rep, XPub, Pub} {
		s := listen(t, kind, Options{})
		received := make(chan error, 1)
		go func() {
			_, err := s.Recv()
			received <- err
		}()
		var wg sync.WaitGroup
		for range 4 {
			wg.Go(func() {
				if err := s.Close(time.Second); err != nil {
					t.Errorf("%v: Close: %v", kind, err)
				}
			})
		}
		wg.Wait()
		if err := s.Close(0); err != nil {
			t.Errorf("%v: Close again: %v", kind, err)
		}
		if err := <-received; err != ErrClosed {
			t.Errorf("%v: the waiting Recv: %v, want ErrClosed", kind, err)
		}
		if err := s.Send(frames("a", "b")); err != ErrClosed {
			t.Errorf("%v: Send: %v, want ErrClosed", kind, err)
		}
		if _, err := s.Recv(); err != ErrClosed {
			t.Errorf("%v: Recv: %v, want ErrClosed", kind, err)
		}
		if c, err := net.Dial("tcp", s.Addr().String()); err == nil {
			c.Close()
			t.Errorf("%v: the port is still open", kind)
		}
	}
}

// Sockets are closed with input unread, replies under way, subscriptions
// coming, connections in their handshake; nothing is left behind.
func TestOpenCloseLeavesNothing(t *testing.T) {
	goroutines, files := runtime.NumGoroutine(), descriptors(t)
	for i := range 60 {
		kind := []Kind{Router, Rep, XPub}[i%3]
		s, err := Listen(kind, "tcp://127.0.0.1:0", Options{OnSubscribe: func(s *Socket, topic []byte, on bool) {
			s.Send([][]byte{topic, []byte("welcome")})
		}})
		if err != nil {
			t.Fatal(err)
		}
		for j := range 4 {
			conn, err := net.Dial("tcp", s.Addr().String())
			if err != nil {
				t.Fatal(err)
			}
			defer conn.Close()
			if j == 3 {
				continue // silent
			}
			c, err := handshake(conn, kind.partners()[0], fmt.Sprint(j))
			if err != nil {
				t.Fatal(err)
			}
			for k := range 30 { // more than zmq4 and the guard hold
				if kind == XPub {
					conn.Write(message(fmt.Sprint("\x01", k)))
				} else {
					conn.Write(message("", "unread"))
				}
			}
			if j == 0 && kind != XPub {
				m, err := s.Recv()
				if err != nil {
					t.Fatal(err)
				}
				s.Send(m)
			}
			defer c.Close()
		}
		if kind == XPub {
			s.Send(frames("7", "news"))
		}
		if err := s.Close(0); err != nil {
			t.Fatal(err)
		}
	}
	// The clients' own ends are closed with the test, so count them.
	settled(t, goroutines, files+240)
}

// 1000 clients come and go, in every way, beside one that stays.
func TestChurnLeavesNothing(t *testing.T) {
	for _, kind := range []Kind{Router, Rep, XPub} {
		t.Run(kind.String(), func(t *testing.T) {
			on, seen := events()
			s := listen(t, kind, Options{OnSubscribe: on})
			good := connect(t, s, kind.partners()[0], "good")
			use := func(text string) {
				t.Helper()
				if kind == XPub {
					s.Send(frames("good", text))
					good.want("good", text)
					return
				}
				good.send("", text)
				good.want("", text)
			}
			if kind == XPub {
				good.send("\x01good")
				wantEvent(t, seen, "+good")
			} else {
				echo(s)
			}
			use("before")
			goroutines, files := runtime.NumGoroutine(), descriptors(t)
			for i := range 1000 {
				conn, err := net.Dial("tcp", s.Addr().String())
				if err != nil {
					t.Fatal(err)
				}
				c, err := handshake(conn, kind.partners()[0], fmt.Sprint("c", i%7))
				if err != nil {
					t.Fatal(err)
				}
				switch i % 5 {
				case 0: // goes at once
				case 1: // leaves something behind
					if kind == XPub {
						c.Write(message("\x01gone"))
					} else {
						c.Write(message("", "and gone"))
					}
				case 2: // leaves half of something behind
					c.Write([]byte{flagMore, 200, 'x'})
				case 3: // takes an answer and goes with a reset
					if kind == XPub {
						c.Write(message("\x01good"))
					} else {
						c.Write(message("", "hello"))
						if _, err := c.next(); err != nil {
							t.Fatal(err)
						}
					}
					conn.(*net.TCPConn).SetLinger(0)
				case 4: // is impolite
					c.Write([]byte{0xff, 0xff, 0xff})
				}
				c.Close()
				if i%100 == 0 {
					use(fmt.Sprint(i))
				}
			}
			settled(t, goroutines, files)
			if n := len(s.l.peersNow()); n != 1 {
				t.Errorf("%d peers are registered, want 1", n)
			}
			use("after")
			if z, ok := s.z.(zmq4.Topics); ok { // of its connections, the tap among them
				eventually(t, "zmq4 to forget who has gone", func() bool {
					return slices.Equal(z.Topics(), []string{"", "good"})
				})
			}
		})
	}
}
