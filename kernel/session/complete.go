package session

import (
	"levelsum/kernel/engine"
	"levelsum/kernel/wire"
)

// complete says how the code can go on at the cursor.
func (s *Session) complete(r *request) {
	var q wire.CompleteRequest
	if err := r.msg.Decode(&q); err != nil {
		r.fail("complete_reply", err)
		return
	}
	at := byteOffset(q.Code, q.CursorPos)
	c, err := engine.Completion{}, errLeaving
	if e := s.awaitEngine(); e != nil {
		c, err = e.Complete(s.ctx, q.Code, at)
	}
	if err != nil {
		// The user is typing: nothing to offer is all there is to say.
		s.log.Printf("complete: %v", err)
		c = engine.Completion{Start: at, End: at}
	}
	if own := completeOwn(q.Code[:at]); own.Matches != nil && len(c.Matches) == 0 {
		c = own
	}
	answer := wire.CompleteReply{
		Status:      wire.StatusOK,
		Matches:     make([]string, len(c.Matches)),
		CursorStart: runeOffset(q.Code, c.Start),
		CursorEnd:   runeOffset(q.Code, c.End),
	}
	types := make([]map[string]any, len(c.Matches))
	for i, m := range c.Matches {
		answer.Matches[i] = m.Text
		types[i] = map[string]any{
			"text": m.Text, "type": m.Kind, "signature": m.Signature,
			"start": answer.CursorStart, "end": answer.CursorEnd,
		}
	}
	// The field in which front ends look for the kind of a match.
	answer.Metadata = map[string]any{"_jupyter_types_experimental": types}
	r.reply("complete_reply", answer)
}
