package socket

import (
	"fmt"
	"net"
	"strings"
	"syscall"
	"testing"
)

// A reply leaves without the writing goroutine as long as the network takes it;
// what it does not take follows, whole and in order.
func TestRepliesThroughAFullNetwork(t *testing.T) {
	s := listen(t, Router, Options{})
	c := connect(t, s, "DEALER", "slow")
	// Small buffers in the system, so that writes end in the middle of messages.
	p := eventuallyPeer(t, s, "slow")
	if raw, err := p.c.(*net.TCPConn).SyscallConn(); err == nil {
		_ = raw.Control(func(fd uintptr) {
			_ = syscall.SetsockoptInt(int(fd), syscall.SOL_SOCKET, syscall.SO_SNDBUF, 4096)
		})
	}
	const n = 3000
	body := strings.Repeat("x", 1500)
	sent := make(chan error, 1)
	go func() {
		for i := range n {
			if err := s.Send(frames("slow", fmt.Sprint(i), body[:i%1500])); err != nil {
				sent <- fmt.Errorf("message %d: %w", i, err)
				return
			}
		}
		sent <- nil
	}()
	if err := <-sent; err != nil { // less than the queue holds: Send waits for nobody
		t.Fatal(err)
	}
	for i := range n {
		c.want(fmt.Sprint(i), body[:i%1500])
	}
	// And again after the writing goroutine has had its turn.
	for i := range 200 {
		if err := s.Send(frames("slow", "again", fmt.Sprint(i))); err != nil {
			t.Fatal(err)
		}
		c.want("again", fmt.Sprint(i))
	}
	eventually(t, "nothing waits", func() bool {
		p.outbox.mu.Lock()
		defer p.outbox.mu.Unlock()
		return p.outbox.queued == 0 && len(p.outbox.chunks) == 0 && !p.outbox.taken
	})
}

// eventuallyPeer waits for the peer with an identity.
func eventuallyPeer(t *testing.T, s *Socket, id string) (p *peer) {
	t.Helper()
	eventually(t, "the peer is known", func() bool {
		p = s.l.lookup([]byte(id))
		return p != nil
	})
	return p
}
