package socket

import (
	"encoding/binary"
	"fmt"
	"io"
	"net"
	"runtime"
	"runtime/debug"
	"slices"
	"strings"
	"testing"
	"time"
)

// header returns a long frame header with any length.
func header(flags byte, size uint64) []byte {
	return binary.BigEndian.AppendUint64([]byte{flags | flagLong}, size)
}

// property returns one property of a READY with any length of its value.
func property(name string, size uint32, value string) string {
	b := append([]byte{byte(len(name))}, name...)
	return string(append(binary.BigEndian.AppendUint32(b, size), value...))
}

func greeted(change func(g []byte)) []byte {
	g := greeting
	change(g[:])
	return g[:]
}

// badHandshakes are first bytes after which a connection must be closed.
func badHandshakes() map[string][]byte {
	hello := func(b []byte) []byte { return append(greeting[:greetingSize:greetingSize], b...) }
	ready := func(data string) []byte { return hello(appendCommand(nil, "READY", []byte(data))) }
	full := func(socketType, id string) []byte { return hello(appendReady(nil, socketType, id)) }
	return map[string][]byte{
		"HTTP":                            []byte("GET / HTTP/1.1\r\nHost: 127.0.0.1\r\nAccept: */*\r\n\r\n"),
		"TLS":                             []byte("\x16\x03\x01\x02\x00\x01\x00\x01\xfc\x03\x03 and so on"),
		"zeros":                           make([]byte, 200),
		"signature without its end":       greeted(func(g []byte) { g[9] = 0x7e }),
		"version 2":                       greeted(func(g []byte) { g[10] = 2 }),
		"mechanism PLAIN":                 greeted(func(g []byte) { copy(g[12:], "PLAIN") }),
		"mechanism CURVE":                 greeted(func(g []byte) { copy(g[12:], "CURVE") }),
		"mechanism NULLX":                 greeted(func(g []byte) { g[16] = 'X' }),
		"READY without type":              ready(property("Identity", 1, "a")),
		"READY without properties":        ready(""),
		"READY cut in a name":             ready("\x0bSocket-"),
		"READY cut in a length":           ready("\x0bSocket-Type\x00\x00"),
		"READY cut in a value":            ready(property("Socket-Type", 6, "DEA")),
		"READY with a nameless property":  ready(property("", 1, "a")),
		"READY with a value of 4 GB":      ready(property("Socket-Type", 1<<32-1, "DEALER")),
		"READY cut after a good property": ready(property("Socket-Type", 6, "DEALER") + "\x08Ident"),
		"unknown type":                    full("WHATEVER", ""),
		"empty type":                      full("", ""),
		"type PULL":                       full("PULL", ""),
		"type of our own kind":            full("REP", ""),
		"identity of zeros":               full("DEALER", "\x00abc"),
		"identity of 256 bytes":           full("DEALER", strings.Repeat("i", 256)),
		"message instead of READY":        hello(message("hello")),
		"ERROR instead of READY":          hello(appendCommand(nil, "ERROR", []byte("\x03why"))),
		"PING instead of READY":           hello(appendCommand(nil, "PING", []byte("\x00\x00"))),
		"empty command":                   hello([]byte{flagCommand, 0}),
		"command without a name":          hello([]byte{flagCommand, 1, 0}),
		"command beyond its frame":        hello([]byte{flagCommand, 3, 200, 'R', 'E'}),
		"READY with MORE":                 hello([]byte{flagCommand | flagMore, 6, 5, 'R', 'E', 'A', 'D', 'Y'}),
		"unknown flags":                   hello([]byte{0x80 | flagCommand, 6, 5, 'R', 'E', 'A', 'D', 'Y'}),
		"READY of 2^62 bytes":             hello(header(flagCommand, 1<<62)),
		"READY of 2^64-1 bytes":           hello(header(flagCommand, 1<<64-1)),
		"READY of 2^40 bytes":             hello(header(flagCommand, 1<<40)),
		"READY of 64 KB and 1":            hello(header(flagCommand, 64<<10+1)),
	}
}

// noHurry keeps the deadline of the handshake out of a test.
var noHurry = small(func(l *limits) { l.handshake = time.Hour })

func TestBadHandshakesEndTheirConnectionOnly(t *testing.T) {
	for _, kind := range []Kind{Router, Rep, XPub} {
		s := listen(t, kind, Options{limits: noHurry})
		for name, b := range badHandshakes() {
			if kind == Router && name == "type of our own kind" {
				b = append(greeting[:greetingSize:greetingSize], appendReady(nil, "SUB", "")...)
			}
			c := dial(t, s)
			if _, err := c.Write(b); err != nil {
				t.Fatal(err)
			}
			t.Run(kind.String()+"/"+name, func(t *testing.T) { wantGone(t, c) })
		}
		if kind != XPub {
			echo(s)
			roundTrip(t, req(t, s), "still here")
		}
	}
}

// badTraffic are bytes after a good handshake after which a connection must
// be closed.
func badTraffic(kind Kind) map[string][]byte {
	m := map[string][]byte{
		"frame of 2^62 bytes":      header(0, 1<<62),
		"frame of 2^63 bytes":      header(0, 1<<63),
		"frame of 2^64-1 bytes":    header(0, 1<<64-1),
		"frame of 2^40 bytes":      header(0, 1<<40),
		"frame of 1 GB and 1":      header(0, 1<<30+1),
		"second frame too long":    append(message("x", "y")[:3], append([]byte{flagMore}, header(0, 1<<40)[1:]...)...),
		"command of 2^40 bytes":    header(flagCommand, 1<<40),
		"command of 64 KB and 1":   header(flagCommand, 64<<10+1),
		"unknown flags":            {0x08, 1, 'x'},
		"command with MORE":        {flagCommand | flagMore, 5, 4, 'P', 'I', 'N', 'G'},
		"command without a name":   {flagCommand, 1, 0},
		"command beyond its frame": {flagCommand, 3, 200, 'P', 'I'},
		"PING without its time":    appendCommand(nil, "PING", []byte{0}),
	}
	m["second frame too long"] = append([]byte{flagMore, 1, 'x'}, header(0, 1<<40)...)
	if kind == XPub {
		m["subscription of 64 KB and more"] = header(0, 64<<10)
		m["SUBSCRIBE inside a message"] = append([]byte{flagMore, 1, 'x'}, appendCommand(nil, "SUBSCRIBE", nil)...)
		var topics []byte
		for i := range 4097 {
			topics = append(topics, message(fmt.Sprint("\x01", i))...)
		}
		m["4097 subscriptions"] = topics
		m["subscriptions of more than 1 MB"] = func() (b []byte) {
			for i := range 40 {
				b = append(b, message("\x01"+strings.Repeat("t", 30000)+fmt.Sprint(i))...)
			}
			return b
		}()
	}
	return m
}

func TestBadTrafficEndsItsConnectionOnly(t *testing.T) {
	for _, kind := range []Kind{Router, Rep, XPub} {
		s := listen(t, kind, Options{limits: noHurry})
		for name, b := range badTraffic(kind) {
			c := connect(t, s, kind.partners()[0], "")
			c.Conn.Write(b) // may be closed while it is being written
			t.Run(kind.String()+"/"+name, func(t *testing.T) { wantGone(t, c.r) })
		}
		if kind != XPub {
			echo(s)
			roundTrip(t, req(t, s), "still here")
		}
	}
}

func TestAnnouncedLengthsCostNoMemory(t *testing.T) {
	// 20 peers announce 1 GB each, less what the frame costs, and send 1 kB.
	s := listen(t, Router, Options{})
	var before, after runtime.MemStats
	runtime.ReadMemStats(&before)
	var all []*client
	for range 20 {
		c := connect(t, s, "DEALER", "")
		c.write(append(header(0, 1<<30-frameCost), make([]byte, 1000)...))
		all = append(all, c)
	}
	echo(s)
	roundTrip(t, dealer(t, s, "good"), "beside them")
	runtime.ReadMemStats(&after)
	if got := after.TotalAlloc - before.TotalAlloc; got > 60<<20 {
		t.Errorf("%d MB were allocated for 20 kB", got>>20)
	}
	for _, c := range all {
		c.Close()
	}
}

func TestManyEmptyFramesAreLimited(t *testing.T) {
	s := listen(t, Router, Options{limits: small(func(l *limits) { l.message = 1 << 20 })})
	c := connect(t, s, "DEALER", "")
	c.write(append([]byte{}, strings.Repeat("\x01\x00", 1<<20/frameCost+1)...))
	c.wantGone()
}

func TestMessageLimit(t *testing.T) {
	s := listen(t, Router, Options{limits: small(func(l *limits) { l.message = 1 << 20 })})
	c := connect(t, s, "DEALER", "c")
	text := strings.Repeat("x", 1<<20-2*frameCost)
	c.send("", text)
	m, err := s.Recv()
	if err != nil || len(m) != 3 || string(m[2]) != text {
		t.Fatalf("a message at the limit: %d frames, %v", len(m), err)
	}
	c.Conn.Write(message("", text+"x")) // may be closed while it is being written
	c.wantGone()
}

func TestSilentConnectionsHinderNobody(t *testing.T) {
	for _, kind := range []Kind{Router, Rep} {
		s := listen(t, kind, Options{})
		echo(s)
		starts := [][]byte{nil, greeting[:1], greeting[:10], greeting[:11], greeting[:63], greeting[:],
			appendReady(greeting[:greetingSize:greetingSize], "DEALER", "half")[:90]}
		for i := range 70 {
			dial(t, s).Write(starts[i%len(starts)])
		}
		connect(t, s, "DEALER", "half").write([]byte{flagMore, 100, 'x'}) // half a frame
		roundTrip(t, req(t, s), "beside them")
	}
}

func TestHandshakeHasADeadlineForAllOfIt(t *testing.T) {
	s := listen(t, Rep, Options{limits: small(func(l *limits) { l.handshake = 50 * time.Millisecond })})
	wantGone(t, dial(t, s))

	// One byte at a time makes no difference.
	c := dial(t, s)
	gone := make(chan struct{})
	go func() {
		defer close(gone)
		io.Copy(io.Discard, c)
	}()
	tick := time.NewTicker(5 * time.Millisecond)
	defer tick.Stop()
	for i := 0; ; i++ {
		select {
		case <-gone:
			return
		case <-tick.C:
			c.Write(greeting[i%10 : i%10+1])
			if i > 10000 {
				t.Fatal("the connection is still open")
			}
		}
	}
}

func TestAllPlacesTakenBySilence(t *testing.T) {
	s := listen(t, Rep, Options{limits: small(func(l *limits) {
		l.conns = 4
		l.handshake = 100 * time.Millisecond
	})})
	echo(s)
	for range 12 {
		dial(t, s)
	}
	roundTrip(t, req(t, s), "after them")
}

func TestPortScansLeaveNoDescriptors(t *testing.T) {
	defer debug.SetGCPercent(debug.SetGCPercent(-1)) // finalizers would close what we forget
	s := listen(t, Router, Options{})
	echo(s)
	roundTrip(t, dealer(t, s, "good"), "before")
	goroutines, files := runtime.NumGoroutine(), descriptors(t)
	for i := range 200 {
		c, err := net.Dial("tcp", s.Addr().String())
		if err != nil {
			t.Fatal(err)
		}
		if i%2 == 0 {
			c.(*net.TCPConn).SetLinger(0) // ends with a reset
		}
		c.Close()
	}
	settled(t, goroutines, files)
	roundTrip(t, dealer(t, s, "also good"), "after")
}

func TestPingIsAnsweredAndHidden(t *testing.T) {
	// ZMTP 3.1, https://rfc.zeromq.org/spec/37/: "PONG" carries the context of the PING.
	s := listen(t, Router, Options{})
	c := connect(t, s, "DEALER", "c")
	c.write(appendCommand(nil, "PING", []byte("\x00\x0acontext")))
	c.want("\x04PONGcontext")
	// libzmq may send one between the frames of a message.
	m := message("a", "b")
	c.write(m[:3])
	c.write(appendCommand(nil, "PING", []byte("\x00\x0a")))
	c.write(m[3:])
	c.want("\x04PONG")
	got, err := s.Recv()
	if err != nil || !slices.Equal([]string{"c", "a", "b"}, texts(got)) {
		t.Errorf("received %q, %v", got, err)
	}
	c.write(appendCommand(nil, "UNHEARD", []byte("of")))
	c.send("still here")
	if got, err = s.Recv(); err != nil || !slices.Equal([]string{"c", "still here"}, texts(got)) {
		t.Errorf("received %q, %v", got, err)
	}
}

func texts(m [][]byte) []string {
	s := make([]string, len(m))
	for i := range m {
		s[i] = string(m[i])
	}
	return s
}

func TestPingFloodIsBounded(t *testing.T) {
	s := listen(t, Router, Options{})
	c := connect(t, s, "DEALER", "c").pause()
	ping := appendCommand(nil, "PING", append([]byte("\x00\x0a"), make([]byte, 60000)...))
	for range 400 { // 24 MB of answers that are not read
		c.write(ping)
	}
	c.send("done")
	if _, err := s.Recv(); err != nil {
		t.Fatal(err)
	}
	p := s.l.lookup([]byte("c"))
	p.outbox.mu.Lock()
	defer p.outbox.mu.Unlock()
	if p.queued > pongLimit+len(ping) {
		t.Errorf("%d bytes of PONG are queued", p.queued)
	}
}

func TestNewestIdentityWins(t *testing.T) {
	s := listen(t, Router, Options{})
	old := connect(t, s, "DEALER", "twin")
	old.send("from the old one")
	if _, err := s.Recv(); err != nil {
		t.Fatal(err)
	}
	young := connect(t, s, "DEALER", "twin")
	young.send("from the new one")
	m, err := s.Recv()
	if err != nil || string(m[1]) != "from the new one" {
		t.Fatalf("received %q, %v", m, err)
	}
	for i := range 20 { // zmq4 forgets the old one at some time meanwhile
		if err := s.Send(frames("twin", fmt.Sprint(i))); err != nil {
			t.Fatal(err)
		}
		young.want(fmt.Sprint(i))
	}
	if got, err := old.next(); err == nil {
		t.Errorf("the old connection got %q", got)
	}
	young.Close()
	eventually(t, "ErrNoPeer after both have gone", func() bool { return s.Send(frames("twin", "x")) == ErrNoPeer })
}

func TestOneIdentityOnRepIsNoConflict(t *testing.T) {
	s := listen(t, Rep, Options{})
	echo(s)
	a, b := connect(t, s, "DEALER", "twin"), connect(t, s, "DEALER", "twin")
	for i := range 3 {
		a.send("", fmt.Sprint("a", i))
		a.want("", fmt.Sprint("a", i))
		b.send("", fmt.Sprint("b", i))
		b.want("", fmt.Sprint("b", i))
	}
}

func TestRepKeepsEmptyFrames(t *testing.T) {
	s := listen(t, Rep, Options{})
	c := connect(t, s, "DEALER", "")
	for _, test := range []struct{ envelope, payload []string }{
		{nil, []string{"a", "", "b"}},
		{nil, []string{"", "", ""}},
		{nil, []string{""}},
		{nil, []string{"a", ""}},
		{[]string{"route", "more"}, []string{"", "a"}},
	} {
		whole := append(append(slices.Clone(test.envelope), ""), test.payload...)
		c.send(whole...)
		m, err := s.Recv()
		if err != nil || !slices.Equal(texts(m), test.payload) {
			t.Fatalf("received %q, %v, want %q", m, err, test.payload)
		}
		if err := s.Send(m); err != nil {
			t.Fatal(err)
		}
		c.want(whole...)
	}
	// Without an end of the envelope, or nothing after it, there is nothing to be answered.
	c.send("no", "delimiter")
	c.send("")
	c.send("address", "")
	c.send("", "next")
	if m, err := s.Recv(); err != nil || !slices.Equal(texts(m), []string{"next"}) {
		t.Errorf("received %q, %v", m, err)
	}
}

func TestSubscriberThatTalksIsServed(t *testing.T) {
	// zmq4's reader blocks after ten messages that are no subscription.
	on, seen := events()
	s := listen(t, XPub, Options{OnSubscribe: on})
	c := connect(t, s, "SUB", "")
	for i := range 100 {
		c.send("talk", fmt.Sprint(i))
		c.send("\x02")
		c.send("")
		c.send("\x01", "two frames")
	}
	c.send("\x01")
	wantEvent(t, seen, "+")
	s.Send(frames("news"))
	c.want("news")
}

func TestXPubRecvEndsWithClose(t *testing.T) {
	s := listen(t, XPub, Options{})
	got := make(chan error)
	go func() {
		_, err := s.Recv()
		got <- err
	}()
	s.Close(0)
	if err := <-got; err != ErrClosed {
		t.Errorf("the waiting Recv: %v, want ErrClosed", err)
	}
	if m, err := s.Recv(); m != nil || err != ErrClosed {
		t.Errorf("Recv after Close: %q, %v, want ErrClosed", m, err)
	}
}
