package session

import (
	"errors"
	"sync/atomic"

	"levelsum/kernel/socket"
	"levelsum/kernel/wire"
)

// A request is a message that came over shell or control.
type request struct {
	session *Session
	msg     *wire.Message
	from    *socket.Socket
	last    bool // the session ends after its idle

	// For an execute request: its content, or the error of reading it; its
	// number; whether an earlier error ends it; and whether the worker has it.
	execute *wire.ExecuteRequest
	unread  error
	number  int
	abort   bool
	started atomic.Bool
}

// stored reports whether r is a cell that goes into the history and so gets a
// number of its own.
func (r *request) stored() bool {
	e := r.execute
	return e != nil && e.StoreHistory && !e.Silent && !r.abort && !blank(e.Code)
}

// reply answers r.
func (r *request) reply(kind string, content any) {
	r.send(wire.New(r.session.sender.Header(kind), r.msg.RawHeader, content))
}

func (r *request) send(m *wire.Message) {
	m.Identities = r.msg.Identities
	err := r.from.Send(r.session.codec.Format(m))
	// A client may be gone before its answer.
	if err != nil && !errors.Is(err, socket.ErrNoPeer) && r.session.ctx.Err() == nil {
		r.session.log.Printf("%s: %v", m.Header.Type, err)
	}
}

// publish tells all front ends something because of r.
func (r *request) publish(kind string, content any) {
	r.session.publish(r.msg.RawHeader, kind, content)
}

// fail answers r with an error.
func (r *request) fail(kind string, err error) {
	f := lost(err)
	r.reply(kind, wire.Failure{Status: wire.StatusError, Name: f.Name, Value: f.Message, Traceback: f.Trace})
}
