package session

import (
	"time"

	"levelsum/kernel/socket"
	"levelsum/kernel/wire"
)

// A handler answers one type of request.
type handler func(s *Session, r *request)

// onShell returns what answers a request of type kind that came over shell.
func onShell(kind string) handler {
	switch kind {
	case "execute_request":
		return (*Session).execute
	case "complete_request":
		return (*Session).complete
	case "inspect_request":
		return (*Session).inspect
	case "is_complete_request":
		return (*Session).isComplete
	case "history_request":
		return (*Session).answerHistory
	case "kernel_info_request":
		return (*Session).kernelInfo
	case "comm_info_request":
		return (*Session).commInfo
	case "comm_open":
		return (*Session).commOpen
	case "comm_msg", "comm_close":
		// There is no open comm, so nothing to tell.
		return func(*Session, *request) {}
	}
	return nil
}

// onControl is onShell for control.
func onControl(kind string) handler {
	switch kind {
	case "kernel_info_request":
		return (*Session).kernelInfo
	case "interrupt_request":
		return (*Session).interrupt
	case "shutdown_request":
		return (*Session).shutdown
	}
	return nil
}

// handle answers r between busy and idle. A nil h is a request that is not
// known: it gets no answer.
func (s *Session) handle(r *request, h handler) {
	r.publish("status", wire.ExecutionState{State: "busy"})
	if h != nil {
		h(s, r)
	} else {
		s.log.Printf("request of unknown type %.40q ignored", r.msg.Header.Type)
	}
	r.publish("status", wire.ExecutionState{State: "idle"})
	if r.last {
		s.Stop()
	}
}

// receive waits for the next good message on from; nil if from is closed.
func (s *Session) receive(from *socket.Socket) *wire.Message {
	for {
		frames, err := from.Recv()
		if err != nil {
			return nil
		}
		if m, err := s.codec.Parse(frames); err == nil {
			return m
		}
	}
}

// readShell empties the shell socket into the queue.
func (s *Session) readShell() {
	for {
		m := s.receive(s.shell)
		if m == nil {
			return
		}
		r := &request{session: s, msg: m, from: s.shell}
		switch m.Header.Type {
		case "shutdown_request":
			// Older clients ask here, and do not want to wait for a cell.
			s.atOnce(r)
			s.handle(r, (*Session).shutdown)
			continue
		case "execute_request":
			e := wire.NewExecuteRequest()
			r.unread = m.Decode(&e)
			r.execute = &e
		}
		if number, waits := s.queue.push(r); waits && r.unread == nil && ownCell(r.execute.Code) == nil {
			s.hints.push(r, number)
		}
	}
}

// atOnce does what must not wait until the front ends have taken the busy of r:
// one that reads slowly can hold it up for long.
func (s *Session) atOnce(r *request) {
	switch r.msg.Header.Type {
	case "interrupt_request":
		s.Interrupt()
	case "shutdown_request":
		var q wire.ShutdownRequest
		if r.msg.Decode(&q) == nil {
			time.AfterFunc(s.patience, s.Stop)
		}
	}
}

// readControl answers what comes over control.
func (s *Session) readControl() {
	for {
		m := s.receive(s.control)
		if m == nil {
			return
		}
		r := &request{session: s, msg: m, from: s.control}
		s.atOnce(r)
		s.handle(r, onControl(m.Header.Type))
	}
}

// work answers the requests in the queue, one after the other.
func (s *Session) work() {
	for {
		r := s.queue.pop(s.ctx)
		if r == nil {
			return
		}
		if r.execute != nil {
			s.begin()
		}
		s.handle(r, onShell(r.msg.Header.Type))
		if r.execute != nil {
			s.end()
		}
	}
}
