package socket

import (
	"fmt"
	"testing"
	"time"
)

// forBench is connect without a deadline.
func forBench(b *testing.B, s *Socket, socketType, id string) *client {
	c := connect(b, s, socketType, id)
	c.SetDeadline(time.Time{})
	return c
}

// pingPong measures how long a message takes to a socket that echoes and back.
func pingPong(b *testing.B, kind Kind, frames ...string) {
	s := listen(b, kind, Options{})
	echo(s)
	c := forBench(b, s, "DEALER", "c")
	m := message(frames...)
	b.ReportAllocs()
	for b.Loop() {
		c.write(m)
		if _, err := c.next(); err != nil {
			b.Fatal(err)
		}
	}
}

func BenchmarkHeartbeat(b *testing.B) { pingPong(b, Rep, "", "ping") }

func BenchmarkShellEcho(b *testing.B) {
	signature := fmt.Sprintf("%064d", 0)
	body := string(make([]byte, 200))
	pingPong(b, Router, "<IDS|MSG>", signature, body, body, "{}", body)
}

// BenchmarkIOPub measures the time of one message to one subscriber, from
// Send until it has arrived, in a stream of them.
func BenchmarkIOPub(b *testing.B) {
	for _, test := range []struct {
		name   string
		frames [][]byte
	}{
		{"100B", frames("stream", "<IDS|MSG>", "signature", "header", "parent", "{}", string(make([]byte, 100)))},
		{"100kB", [][]byte{make([]byte, 100_000)}},
	} {
		b.Run(test.name, func(b *testing.B) {
			on, seen := events()
			s := listen(b, XPub, Options{OnSubscribe: on})
			c := forBench(b, s, "SUB", "")
			c.send("\x01")
			wantEvent(b, seen, "+")
			end := make(chan error)
			go func() {
				for {
					m, err := c.next()
					if err != nil || m[0] == "end" {
						end <- err
						return
					}
				}
			}()
			b.SetBytes(int64(wireSize(test.frames)))
			b.ReportAllocs()
			for b.Loop() {
				if err := s.Send(test.frames); err != nil {
					b.Fatal(err)
				}
			}
			s.Send(frames("end"))
			if err := <-end; err != nil {
				b.Fatal(err)
			}
		})
	}
}
