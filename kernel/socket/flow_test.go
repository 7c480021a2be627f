package socket

import (
	"fmt"
	"io"
	"math/rand/v2"
	"net"
	"slices"
	"strings"
	"testing"
	"time"

	"github.com/go-zeromq/zmq4"
)

// What a socket sends from within OnSubscribe reaches the new subscriber.
func TestWelcomeIsNeverLost(t *testing.T) {
	s := listen(t, XPub, Options{OnSubscribe: func(s *Socket, topic []byte, on bool) {
		if on {
			s.Send([][]byte{topic, []byte("welcome")})
		}
	}})
	for i := range 200 {
		topic := fmt.Sprintf("t%03d", i)
		if i%4 == 0 { // a client of zmq4 itself
			z := zmq4.NewSub(t.Context())
			zdial(t, s, z)
			if err := z.SetOption(zmq4.OptionSubscribe, topic); err != nil {
				t.Fatal(err)
			}
			m, err := z.Recv()
			if err != nil || !slices.Equal(texts(m.Frames), []string{topic, "welcome"}) {
				t.Fatalf("subscriber %d: %q, %v", i, m.Frames, err)
			}
			continue
		}
		c := connect(t, s, "SUB", "")
		c.send("\x01" + topic)
		c.want(topic, "welcome")
	}
}

// A subscription counts when it is reported, not only soon afterwards.
func TestSubscriptionsCountWhenReported(t *testing.T) {
	counts := make(chan bool, 1)
	s := listen(t, XPub, Options{OnSubscribe: func(s *Socket, topic []byte, on bool) {
		topics := s.z.(zmq4.Topics).Topics()
		counts <- slices.Contains(topics, string(topic)) == on
	}})
	c := connect(t, s, "SUB", "")
	for i := range 50 {
		for _, m := range []string{"\x01", "\x00"} {
			c.send(fmt.Sprint(m, "topic", i))
			if !<-counts {
				t.Fatalf("event %q came before zmq4 knew", m)
			}
		}
	}
}

func TestBigThenSmall(t *testing.T) {
	big := strings.Repeat("b", 20<<20)
	on, seen := events()
	p := listen(t, XPub, Options{OnSubscribe: on})
	sub := connect(t, p, "SUB", "")
	sub.send("\x01")
	wantEvent(t, seen, "+")
	r := listen(t, Router, Options{})
	deal := connect(t, r, "DEALER", "d")
	deal.send("hello")
	if _, err := r.Recv(); err != nil {
		t.Fatal(err)
	}
	go func() {
		for _, m := range []string{big, "small", "", "idle"} {
			if err := p.Send(frames(m, "tail")); err != nil {
				t.Error(err)
			}
			if err := r.Send(frames("d", m, "tail")); err != nil {
				t.Error(err)
			}
		}
	}()
	for _, m := range []string{big, "small", "", "idle"} {
		sub.want(m, "tail")
		deal.want(m, "tail")
	}
}

func TestBigInput(t *testing.T) {
	s := listen(t, Router, Options{})
	d := dealer(t, s, "d")
	big := strings.Repeat("i", 30<<20)
	go d.Send(zmq4.NewMsgFrom(frames("", big, "tail")...))
	m, err := s.Recv()
	if err != nil || len(m) != 4 || string(m[2]) != big || string(m[3]) != "tail" {
		t.Fatalf("%d frames, %v", len(m), err)
	}
}

// 20,000 messages of 4 kB go past a subscriber that reads nothing.
func TestStalledSubscriberHarmsNobody(t *testing.T) {
	const n = 20000
	on, seen := events()
	s := listen(t, XPub, Options{OnSubscribe: on})
	stalled := connect(t, s, "SUB", "")
	stalled.send("\x01")
	wantEvent(t, seen, "+")
	good := subscriber(t, s, "", seen)
	got := make(chan error, 1)
	go func() {
		for i := range n {
			m, err := good.Recv()
			if err == nil && (len(m.Frames) != 2 || string(m.Frames[0]) != fmt.Sprint(i) || len(m.Frames[1]) != 4096) {
				err = fmt.Errorf("message %d is %.40q", i, m.Frames)
			}
			if err != nil {
				got <- err
				return
			}
		}
		got <- nil
	}()
	body := make([]byte, 4096)
	full := 0
	for i := range n {
		switch err := s.Send([][]byte{fmt.Append(nil, i), body}); err {
		case nil:
		case ErrFull:
			full++
		default:
			t.Fatal(err)
		}
	}
	select {
	case err := <-got:
		if err != nil {
			t.Error(err)
		}
	case <-time.After(patience):
		t.Fatal("the good subscriber waits for messages")
	}
	// 80 MB, less 8 MB of queue and what the system holds.
	if d := s.Dropped(); d < n/4 || d >= n || full == 0 {
		t.Errorf("the stalled one lost %d messages, Send said so %d times", d, full)
	}
	if err := s.Close(10 * time.Millisecond); err == nil {
		t.Error("Close said nothing about what the stalled one did not get")
	}
	// What it has got is whole: the first messages, then nothing.
	for i := 0; ; i++ {
		m, err := stalled.next()
		if err != nil {
			break
		}
		if m[0] != fmt.Sprint(i) || len(m[1]) != 4096 {
			t.Fatalf("message %d of the stalled one is %.40q", i, m)
		}
	}
}

func TestStalledDealerHarmsNobody(t *testing.T) {
	s := listen(t, Router, Options{limits: small(func(l *limits) { l.stall = 50 * time.Millisecond })})
	stalled := connect(t, s, "DEALER", "stalled").pause()
	stalled.send("hello")
	if _, err := s.Recv(); err != nil {
		t.Fatal(err)
	}
	body := make([]byte, 1<<20)
	sent := 0
	for s.Send([][]byte{[]byte("stalled"), body}) == nil {
		if sent++; sent > 100 {
			t.Fatal("100 MB fit into a stalled connection")
		}
	}
	echo(s)
	good := connect(t, s, "DEALER", "good")
	for i := range 100 {
		good.send("", fmt.Sprint(i))
		good.want("", fmt.Sprint(i))
	}
	if err := s.Close(10 * time.Millisecond); err == nil {
		t.Error("Close said nothing about what the stalled one did not get")
	}
}

// A peer that sends requests and takes no replies costs its own replies only.
func TestStalledRequesterHarmsNobody(t *testing.T) {
	s := listen(t, Rep, Options{limits: small(func(l *limits) { l.queue = 1 << 20 })})
	echo(s)
	stalled := connect(t, s, "DEALER", "").pause()
	flood := message("", strings.Repeat("?", 100<<10))
	for range 200 {
		stalled.write(flood)
	}
	roundTrip(t, req(t, s), "beside it")
	eventually(t, "its replies to be dropped", func() bool { return s.Dropped() > 0 })
}

// 100 MB go to a reader that does not hurry, and nothing is lost.
func TestSlowReaderGetsAll(t *testing.T) {
	on, seen := events()
	s := listen(t, XPub, Options{OnSubscribe: on})
	c := connect(t, s, "SUB", "")
	c.send("\x01")
	wantEvent(t, seen, "+")
	const n, size = 1000, 100 << 10
	go func() {
		body := make([]byte, size)
		for i := range n {
			if err := s.Send([][]byte{fmt.Append(nil, i), body}); err != nil {
				t.Errorf("Send %d: %v", i, err)
			}
		}
	}()
	tick := time.NewTicker(time.Millisecond)
	defer tick.Stop()
	for i := range n {
		if i%3 == 0 {
			<-tick.C
		}
		m, err := c.next()
		if err != nil || m[0] != fmt.Sprint(i) || len(m[1]) != size {
			t.Fatalf("message %d: %.40q, %v", i, m, err)
		}
	}
	if s.Dropped() != 0 {
		t.Errorf("Dropped() = %d", s.Dropped())
	}
}

// randomMessage returns frames of all sizes that a header or a buffer makes a
// difference for.
func randomMessage(r *rand.Rand) []string {
	sizes := []int{0, 1, 2, 254, 255, 256, 257, 1000, 32<<10 - 1, 32 << 10, 70000}
	m := make([]string, 1+r.IntN(6))
	for i := range m {
		n := sizes[r.IntN(len(sizes))]
		m[i] = strings.Repeat(string(rune('a'+r.IntN(26))), n)
	}
	return m
}

// pieces cuts b at random.
func pieces(r *rand.Rand, b []byte, f func([]byte)) {
	for len(b) > 0 {
		n := 1 + r.IntN(min(len(b), 1<<r.IntN(16)))
		f(b[:n])
		b = b[n:]
	}
}

func TestBoundariesOfInputUnderRandomCuts(t *testing.T) {
	r := rand.New(rand.NewPCG(1, 2))
	s := listen(t, Router, Options{})
	c := connect(t, s, "DEALER", "c")
	var all [][]string
	var stream []byte
	for range 200 {
		m := randomMessage(r)
		all = append(all, m)
		stream = append(stream, message(m...)...)
		if r.IntN(4) == 0 {
			stream = appendCommand(stream, "UNHEARD", make([]byte, r.IntN(300)))
		}
	}
	go pieces(r, stream, func(b []byte) { c.Conn.Write(b) })
	for i, want := range all {
		m, err := s.Recv()
		if err != nil || !slices.Equal(texts(m[1:]), want) {
			t.Fatalf("message %d: %.60q, %v, want %.60q", i, m, err, want)
		}
	}
}

// zmq4 may cut its writes as it likes, and the slices are its own again when
// Write returns.
func TestBoundariesOfOutputUnderRandomCuts(t *testing.T) {
	r := rand.New(rand.NewPCG(3, 4))
	l := newListener(Router, newSwitchboard(), usual)
	ours, theirs := net.Pipe()
	p := newPeer(l, theirs, nil, "DEALER", "c")
	go p.write()
	stream := append(greeting[:greetingSize:greetingSize], appendReady(nil, "ROUTER", "")...)
	var want []byte
	for range 200 {
		m := message(randomMessage(r)...)
		stream = append(stream, m...)
		want = append(want, m...)
	}
	pieces(r, stream, func(b []byte) {
		own := slices.Clone(b)
		if n, err := p.Write(own); n != len(b) || err != nil {
			t.Fatalf("Write = %d, %v, want %d, nil", n, err, len(b))
		}
		clear(own)
	})
	got := make([]byte, len(want))
	if _, err := io.ReadFull(ours, got); err != nil {
		t.Fatal(err)
	}
	if !slices.Equal(got, want) {
		t.Error("the bytes on the network are others than those written")
	}
	p.shut()
	if n, err := p.Write(message("too late")); n != 10 || err != nil {
		t.Errorf("Write to a peer that has gone = %d, %v, want 10, nil", n, err)
	}
}

// A message that is dropped is dropped whole, wherever it is cut.
func TestDropsAreWhole(t *testing.T) {
	r := rand.New(rand.NewPCG(5, 6))
	l := newListener(Router, newSwitchboard(), usual)
	_, theirs := net.Pipe()
	p := newPeer(l, theirs, nil, "DEALER", "c")
	p.output.skip = 0
	var want []byte
	dropped := uint64(0)
	for range 300 {
		drop := r.IntN(2) == 0
		p.outbox.mu.Lock()
		p.outbox.slow = drop
		p.outbox.queued = usual.queue // so that slow lasts
		p.outbox.mu.Unlock()
		m := message(randomMessage(r)...)
		if drop {
			dropped++
		} else {
			want = append(want, m...)
		}
		pieces(r, m, func(b []byte) { p.Write(b) })
	}
	if got := slices.Concat(p.outbox.take(false)...); !slices.Equal(got, want) {
		t.Error("what is queued is not the messages that were not dropped")
	}
	if l.dropped.Load() != dropped {
		t.Errorf("%d were counted, %d dropped", l.dropped.Load(), dropped)
	}
	p.shut()
}
