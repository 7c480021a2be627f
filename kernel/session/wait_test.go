package session

import (
	"runtime"
	"time"
)

// waitFor waits until ok: for what is seen in no message.
func (k *served) waitFor(ok func() bool) {
	k.t.Helper()
	for end := time.Now().Add(giveUp); !ok(); runtime.Gosched() {
		if time.Now().After(end) {
			k.t.Fatal("it did not happen")
		}
	}
}

// waitQueued waits until n requests wait behind the one that runs.
func (k *served) waitQueued(n int) {
	k.t.Helper()
	q := k.session.queue
	k.waitFor(func() bool {
		q.mu.Lock()
		defer q.mu.Unlock()
		return q.busy && len(q.waiting) == n
	})
}
