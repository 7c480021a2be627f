package session

import (
	"levelsum/kernel/assist"
	"levelsum/kernel/wire"
)

// isComplete says whether code can be run as it is.
func (s *Session) isComplete(r *request) {
	var q wire.IsCompleteRequest
	if err := r.msg.Decode(&q); err != nil {
		r.fail("is_complete_reply", err)
		return
	}
	status, indent := assist.IsComplete(q.Code)
	r.reply("is_complete_reply", wire.IsCompleteReply{Status: status, Indent: indent})
}
