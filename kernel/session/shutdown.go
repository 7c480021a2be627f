package session

import "levelsum/kernel/wire"

// shutdown ends the session. All front ends are told, so that the others know
// that the kernel did not die.
func (s *Session) shutdown(r *request) {
	var q wire.ShutdownRequest
	if err := r.msg.Decode(&q); err != nil {
		r.fail("shutdown_reply", err)
		return
	}
	s.mu.Lock()
	s.restart = q.Restart
	s.mu.Unlock()
	answer := wire.ShutdownReply{Status: wire.StatusOK, Restart: q.Restart}
	r.reply("shutdown_reply", answer)
	r.publish("shutdown_reply", answer)
	r.last = true
}
