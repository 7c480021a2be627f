package session

import (
	"context"
	"sync"
	"time"
)

// What cells show is kept below the rate at which the usual server of notebooks
// starts to throw output away, 1000 messages and 1 MB of text a second over three
// seconds: in any three seconds at most burst + 3 rate.
const (
	bytesPerSecond    = 650_000
	bytesBurst        = 1_000_000
	messagesPerSecond = 600
	messagesBurst     = 1000
)

// A flow holds back what is shown too fast. Each message takes tokens from two
// buckets that fill with time; a message larger than a bucket may empty it
// below zero.
type flow struct {
	mu       sync.Mutex // guards the fields below
	bytes    float64
	messages float64
	at       time.Time // when the buckets were last filled
}

func newFlow() *flow {
	return &flow{bytes: bytesBurst, messages: messagesBurst, at: time.Now()}
}

// take takes the tokens of one message of n bytes and returns how long to wait
// before it is sent.
func (f *flow) take(n int) time.Duration {
	f.mu.Lock()
	defer f.mu.Unlock()
	now := time.Now()
	passed := now.Sub(f.at).Seconds()
	f.at = now
	f.bytes = min(f.bytes+float64(passed*bytesPerSecond), bytesBurst)
	f.messages = min(f.messages+float64(passed*messagesPerSecond), messagesBurst)
	wait := max(-f.bytes/bytesPerSecond, (1-f.messages)/messagesPerSecond, 0)
	f.bytes -= float64(n)
	f.messages--
	return time.Duration(wait * float64(time.Second))
}

// pass waits until a message of n bytes may be sent or ctx ends.
func (f *flow) pass(ctx context.Context, n int) {
	wait := f.take(n)
	if wait == 0 {
		return
	}
	t := time.NewTimer(wait)
	defer t.Stop()
	select {
	case <-t.C:
	case <-ctx.Done():
	}
}
