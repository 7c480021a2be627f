package socket

import (
	"bytes"
	"fmt"
	"math/rand/v2"
	"net"
	"path/filepath"
	"sync"
	"testing"
	"time"
)

// A target is one socket of each kind that takes what a fuzz test sends, and a
// healthy client of those that answer.
type target struct {
	sockets []*Socket
	clients []*client
	n       int
}

// newTarget listens on ipc, where a connection costs no port.
func newTarget(tb testing.TB) *target {
	tg := &target{}
	for _, kind := range []Kind{Router, Rep, XPub} {
		s, err := Listen(kind, "ipc://"+filepath.Join(tb.TempDir(), "s"), Options{
			OnSubscribe: func(s *Socket, topic []byte, on bool) { s.Send([][]byte{topic, []byte("welcome")}) },
		})
		if err != nil {
			tb.Fatal(err)
		}
		tb.Cleanup(func() { s.Close(0) })
		tg.sockets = append(tg.sockets, s)
		if kind != XPub {
			echo(s)
			c := connect(tb, s, "DEALER", "healthy")
			c.SetDeadline(time.Time{})
			tg.clients = append(tg.clients, c)
		}
	}
	return tg
}

// attack sends bytes to each socket, ends the connection for writing, and
// waits until the other side has ended it as well. Then the healthy clients
// must still be served.
func (tg *target) attack(t testing.TB, b []byte) {
	var wg sync.WaitGroup
	for _, s := range tg.sockets {
		wg.Go(func() {
			c, err := net.Dial("unix", s.Addr().String())
			if err != nil {
				t.Error(err)
				return
			}
			defer c.Close()
			c.SetDeadline(time.Now().Add(patience))
			wg.Go(func() {
				c.Write(b)
				c.(*net.UnixConn).CloseWrite()
			})
			wantGone(t, c)
		})
	}
	wg.Wait()
	tg.n++
	for _, c := range tg.clients {
		c.TB = t
		c.SetDeadline(time.Now().Add(patience))
		c.send("", fmt.Sprint(tg.n))
		c.want("", fmt.Sprint(tg.n))
	}
}

// goodStart is a handshake followed by some traffic.
func goodStart(socketType string) []byte {
	b := appendReady(greeting[:greetingSize:greetingSize], socketType, "fuzz")
	b = append(b, message("", "request", "with", "frames")...)
	b = append(b, message("\x01topic")...)
	b = appendCommand(b, "PING", []byte("\x00\x0acontext"))
	b = appendCommand(b, "SUBSCRIBE", []byte("other"))
	b = append(b, message("\x00topic")...)
	return append(b, message("", string(make([]byte, 300)))...)
}

func FuzzHandshake(f *testing.F) {
	for _, socketType := range []string{"DEALER", "REQ", "SUB", "ROUTER", "PULL", ""} {
		f.Add(goodStart(socketType))
	}
	for _, b := range badHandshakes() {
		f.Add(b)
	}
	for _, b := range badTraffic(XPub) {
		if len(b) < 1000 {
			f.Add(append(appendReady(greeting[:greetingSize:greetingSize], "SUB", ""), b...))
			f.Add(append(appendReady(greeting[:greetingSize:greetingSize], "DEALER", ""), b...))
		}
	}
	tg := newTarget(f)
	f.Fuzz(func(t *testing.T, b []byte) { tg.attack(t, b) })
}

// mutate changes good bytes at random: a few of them, their end, or their order.
func mutate(r *rand.Rand, b []byte) []byte {
	b = bytes.Clone(b)
	for range r.IntN(4) {
		i := r.IntN(len(b))
		switch r.IntN(5) {
		case 0:
			b[i] ^= 1 << r.IntN(8)
		case 1:
			b[i] = byte(r.Uint32())
		case 2:
			b = b[:i+1]
		case 3:
			b = append(b[:i:i], append([]byte{byte(r.Uint32())}, b[i:]...)...)
		case 4:
			b = append(b[:i:i], b[min(len(b), i+1+r.IntN(9)):]...)
		}
		if len(b) == 0 {
			return b
		}
	}
	return b
}

// The short form of the fuzz test: it needs no guidance by coverage to find
// every way in which a handshake can be cut or bent.
func TestRandomHandshakes(t *testing.T) {
	r := rand.New(rand.NewPCG(7, 8))
	tg := newTarget(t)
	types := []string{"DEALER", "REQ", "SUB", "ROUTER", "XSUB"}
	for range 1000 {
		tg.attack(t, mutate(r, goodStart(types[r.IntN(len(types))])))
		if t.Failed() {
			return
		}
	}
	for _, s := range tg.sockets {
		want := 0
		if s.kind != XPub {
			want = 1 // the healthy one
		}
		eventually(t, "only healthy peers are left", func() bool { return len(s.l.peersNow()) == want })
	}
}

func FuzzReady(f *testing.F) {
	f.Add([]byte(property("Socket-Type", 6, "DEALER") + property("identity", 1, "x")))
	f.Fuzz(func(t *testing.T, b []byte) {
		socketType, id, err := splitReady(b)
		if err != nil {
			return
		}
		// What was read is written and read again.
		name, data, err := splitCommand(appendReady(nil, socketType, id)[headerSize(6+27+len(socketType)+len(id)):])
		if err != nil || name != "READY" {
			t.Fatalf("%q, %v", name, err)
		}
		if s, i, err := splitReady(data); err != nil || s != socketType || i != id {
			t.Errorf("%q %q, %v, want %q %q", s, i, err, socketType, id)
		}
	})
}
