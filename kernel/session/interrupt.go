package session

import "levelsum/kernel/wire"

// interrupt ends the cell that runs.
func (s *Session) interrupt(r *request) {
	s.Interrupt()
	r.reply("interrupt_reply", wire.Status{Status: wire.StatusOK})
}
