package socket

import (
	"context"
	"fmt"
	"time"

	"github.com/go-zeromq/zmq4"
)

// flushTime is how long Close waits for zmq4 to hand over what it was given
// to publish. Nothing blocks it, so this is a matter of milliseconds.
const flushTime = 5 * time.Second

// Close ends the socket and all its goroutines. What has been sent gets the
// time of linger to leave; an error says how many bytes have not. A second call
// waits for the first and returns the same. From the first call on Send
// returns ErrClosed, and so does Recv by the time Close returns.
func (s *Socket) Close(linger time.Duration) error {
	s.once.Do(func() { s.err = s.end(linger) })
	return s.err
}

// end closes in this order: no new connections, no new messages, everything
// out of zmq4, everything out of the queues, zmq4, connections, goroutines.
func (s *Socket) end(linger time.Duration) error {
	s.l.stop()
	s.life.Lock() // the calls of Send that were under way have returned
	//lint:ignore SA2001 having had the lock is all that is wanted
	s.life.Unlock()

	if s.tap != nil {
		ctx, cancel := context.WithTimeout(context.Background(), flushTime)
		defer cancel()
		// No peer sees this message: the tap is first, and ends the goroutine
		// that would go on to the others.
		s.tap.endAt(s.sent + 1)
		_ = s.z.Send(zmq4.NewMsgString("end"))
		s.tap.wait(s.sent+1, ctx.Done())
	}
	left := s.drain(linger)
	// zmq4 cancels its context first, so its accept loop and its readers end
	// at the errors that the connections give from here on.
	err := s.z.Close()
	for _, p := range s.l.peersNow() {
		p.shut()
	}
	s.l.wg.Wait()
	switch {
	case left > 0 && linger > 0:
		return fmt.Errorf("socket: Close: %d bytes undelivered after %v", left, linger)
	case err != nil:
		return fmt.Errorf("socket: Close: %w", err)
	}
	return nil
}

// drain gives the queues the time of linger to leave, says goodbye, and waits
// a moment for the peers to do so as well: a connection that is closed with
// input unread takes what is under way with it. It returns how many bytes are left.
func (s *Socket) drain(linger time.Duration) int {
	ctx, cancel := context.WithTimeout(context.Background(), linger)
	defer cancel()
	peers := s.l.peersNow()
	left := 0
	waiting := peers[:0:0]
	for _, p := range peers {
		if n := p.waitEmpty(ctx.Done()); n > 0 {
			left += n
			continue
		}
		if c, ok := p.c.(interface{ CloseWrite() error }); ok && c.CloseWrite() == nil {
			waiting = append(waiting, p)
		}
	}
	if linger <= 0 {
		return left
	}
	fin := time.After(s.l.lim.fin)
	for _, p := range waiting {
		select {
		case <-p.done:
		case <-fin:
			return left
		}
	}
	return left
}
