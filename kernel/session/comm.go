package session

import "levelsum/kernel/wire"

// commInfo lists the open comms: none, since this kernel has no target.
func (s *Session) commInfo(r *request) {
	r.reply("comm_info_reply", wire.CommInfoReply{Status: wire.StatusOK, Comms: map[string]any{}})
}

// commOpen refuses a comm: a target that is not known is answered by closing.
func (s *Session) commOpen(r *request) {
	var c wire.CommOpen
	if err := r.msg.Decode(&c); err != nil {
		s.log.Printf("comm_open: %v", err)
		return
	}
	s.log.Printf("comm_open: no target %.40q", c.TargetName)
	r.publish("comm_close", wire.CommClose{CommID: c.CommID, Data: map[string]any{}})
}
