package session

import "levelsum/kernel/wire"

// interrupt answers a request to end the cell that runs; atOnce has done it.
func (s *Session) interrupt(r *request) {
	r.reply("interrupt_reply", wire.Status{Status: wire.StatusOK})
}
