package session

import "levelsum/kernel/wire"

// inspect describes what stands at the cursor.
func (s *Session) inspect(r *request) {
	var q wire.InspectRequest
	if err := r.msg.Decode(&q); err != nil {
		r.fail("inspect_reply", err)
		return
	}
	var (
		data  map[string]any
		found bool
		err   = errLeaving
	)
	if e := s.awaitEngine(); e != nil {
		data, found, err = e.Inspect(s.ctx, q.Code, byteOffset(q.Code, q.CursorPos), q.DetailLevel)
	}
	if err != nil {
		s.log.Printf("inspect: %v", err)
		found = false
	}
	if !found || data == nil {
		data = map[string]any{}
	}
	r.reply("inspect_reply", wire.InspectReply{Status: wire.StatusOK, Found: found, Data: data, Metadata: map[string]any{}})
}
