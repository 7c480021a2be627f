package session

import (
	"bytes"
	"errors"
	"time"

	"levelsum/kernel/socket"
	"levelsum/kernel/wire"
)

// A question to the reader waits for a reply. Session.mu guards a question's
// use; the channel holds one reply.
type question struct {
	id       string // of the input_request
	identity []byte
	replies  chan reply
}

type reply struct {
	text string
	err  error
}

// answer gives q a reply if it has none yet. A nil q takes nothing.
func (q *question) answer(r reply) {
	if q == nil {
		return
	}
	select {
	case q.replies <- r:
	default:
	}
}

var (
	errNoInput  = errors.New("this front end takes no input here")
	errNoCell   = errors.New("input can be asked for only while the cell runs")
	errLeaving  = errors.New("the kernel is being shut down")
	errTwoAsked = errors.New("the reader is being asked something already")
)

// The stdin socket of a client may be connected a little later than its shell.
const (
	stdinTries = 20
	stdinPause = 50 * time.Millisecond
)

// ask asks the reader who sent r for a line.
func (s *Session) ask(r *request, prompt string, secret bool) (string, error) {
	if !r.execute.AllowStdin || len(r.msg.Identities) == 0 {
		return "", errNoInput
	}
	m := wire.New(s.sender.Header("input_request"), r.msg.RawHeader, wire.InputRequest{Prompt: prompt, Password: secret})
	m.Identities = r.msg.Identities
	q := &question{id: m.Header.ID, identity: m.Identities[0], replies: make(chan reply, 1)}
	if err := s.pose(q); err != nil {
		return "", err
	}
	defer s.pose(nil)
	frames := s.codec.Format(m)
	for tries := 1; ; tries++ {
		err := s.stdin.Send(frames)
		if err == nil {
			break
		}
		if !errors.Is(err, socket.ErrNoPeer) || tries == stdinTries {
			return "", errNoInput
		}
		select {
		case a := <-q.replies:
			return a.text, a.err
		case <-time.After(stdinPause):
		}
	}
	select {
	case a := <-q.replies:
		return a.text, a.err
	case <-s.ctx.Done():
		return "", errLeaving
	}
}

// pose makes q the question that waits; nil is none.
func (s *Session) pose(q *question) error {
	s.mu.Lock()
	defer s.mu.Unlock()
	switch {
	case q == nil:
	case !s.executing:
		return errNoCell
	case s.stopCell:
		return errInterrupted
	case s.question != nil:
		return errTwoAsked
	}
	s.question = q
	return nil
}

// readStdin gives replies to the question that waits for one. A reply that is
// late, or another client's, is passed over.
func (s *Session) readStdin() {
	for {
		m := s.receive(s.stdin)
		if m == nil {
			return
		}
		var content wire.InputReply
		if m.Header.Type != "input_reply" || len(m.Identities) == 0 || m.Decode(&content) != nil {
			s.log.Printf("message of type %.40q on stdin ignored", m.Header.Type)
			continue
		}
		parent := m.ParentID() // some clients send none
		s.mu.Lock()
		if q := s.question; q != nil && bytes.Equal(q.identity, m.Identities[0]) && (parent == "" || parent == q.id) {
			q.answer(reply{text: content.Value})
		}
		s.mu.Unlock()
	}
}
